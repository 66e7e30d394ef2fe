"""A construction as plain text, for terminals, and as JSON."""

from collections.abc import Sequence
from typing import Any

from app import PROGRAM
from app.connection.connection import Connection, Rows
from app.connection.construction import Construction
from app.connection.document import connection_document, write_entry
from app.exact.number import write_number


def construction_json(construction: Construction) -> dict[str, Any]:
    """The connection's document; where there is no connection, an object that says so and why."""
    if construction.connection is not None:
        return dict(connection_document(construction.connection))
    return {
        "program": PROGRAM,
        "connection": None,
        "exists": construction.exists,
        "method": construction.method,
        "note": construction.note,
    }


def construction_text(construction: Construction) -> str:
    """Method, note, matrices and record."""
    lines = [construction.method]
    if construction.note:
        lines.append(construction.note)
    if construction.connection is not None:
        lines += _connection_lines(construction.connection)
    return "\n".join(lines) + "\n"


def _connection_lines(connection: Connection) -> list[str]:
    lines = [f"Rank {connection.rank}, {connection.kind} entries."]
    if connection.accessory:
        lines.append(f"Accessory parameters: {', '.join(connection.accessory)}")
    lines += [f"  {name} = {write_number(value)}" for name, value in connection.values]
    for pole in connection.poles:
        where = "infinity" if pole.at.value is None else write_number(pole.at.value, connection.symbols)
        local = "1/x" if pole.at.value is None else "x" if pole.at.value == 0 else f"x - ({where})"
        lines += ["", f"Pole at {where}, z = {local}"]
        for k, matrix in enumerate(pole.coefficients):
            lines.append(f"  coefficient of z^(-{k + 1}) dz:")
            lines += [f"    {row}" for row in _table(matrix, connection.symbols)]
    lines += ["", "Verification:"]
    lines += [f"  {'holds' if c.holds else 'FAILS'}  {c.check}: {c.figure}" for c in connection.verification]
    return lines


def _table(matrix: Rows, symbols: Sequence[str]) -> list[str]:
    """The rows of a matrix, columns aligned where entries are short."""
    texts = [[write_entry(entry, symbols) for entry in row] for row in matrix]
    widths = [min(24, max(len(row[j]) for row in texts)) for j in range(len(matrix))]
    return [
        "[ " + "  ".join(text.rjust(width) for text, width in zip(row, widths, strict=True)) + " ]" for row in texts
    ]


def construction_record(construction: Construction) -> dict[str, Any]:
    """The whole construction for a page: how it came about, and the connection's document (None if there is none)."""
    connection = construction.connection
    return {
        "method": construction.method,
        "note": construction.note,
        "exists": construction.exists,
        "verified": construction.verified,
        "connection": None if connection is None else dict(connection_document(connection)),
    }
