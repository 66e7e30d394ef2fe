"""A connection d − A on the trivial bundle of the Riemann sphere, by its principal parts.

``coefficients[k]`` of a pole is the n × n matrix of z^(−k−1) dz in its local coordinate (x − t, or 1/x at infinity).  A
pole at infinity is listed unless its principal part is zero.
"""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING, Literal

from app.errors import Refused
from app.exact.field import Field, FieldTooLarge, field_of
from app.exact.matrix import ExactMatrix, Matrix
from app.exact.quotient import Quotient
from app.exact.value import Value
from app.local.formal_type import Position

if TYPE_CHECKING:
    from app.connection.float_matrix import FloatMatrix

Entry = Quotient | complex
Rows = tuple[tuple[Entry, ...], ...]
Kind = Literal["exact", "numerical"]


@dataclass(frozen=True)
class Check:
    """One line of a verification record: what is checked, whether it holds, and the figure found."""

    check: str
    holds: bool
    figure: str


@dataclass(frozen=True)
class ConnectionPole:
    """A pole: where it is, its coefficients, and a normalising gauge g_0 + g_1 z + … where one was computed."""

    at: Position
    coefficients: tuple[Rows, ...]
    gauge: tuple[Rows, ...] = ()


@dataclass(frozen=True)
class Connection:
    """Poles with coefficient matrices, all entries exact or all floating.

    ``accessory`` are the symbols that are free coordinates on the moduli space; ``values`` what was put for symbols of
    the problem, as pairs of name and exact value; ``method`` says in a sentence how the connection was found.
    """

    kind: Kind
    rank: int
    poles: tuple[ConnectionPole, ...]
    symbols: tuple[str, ...] = ()
    accessory: tuple[str, ...] = ()
    verification: tuple[Check, ...] = ()
    values: tuple[tuple[str, Value], ...] = ()
    method: str = ""

    @property
    def verified(self) -> bool:
        """Whether there is a record and everything in it holds."""
        return bool(self.verification) and all(check.holds for check in self.verification)

    def exact_entries(self) -> Iterable[Quotient]:
        """All entries of the coefficients of an exact connection."""
        for pole in self.poles:
            for matrix in pole.coefficients:
                for row in matrix:
                    for entry in row:
                        if not isinstance(entry, Quotient):
                            raise TypeError("this connection has floating entries")
                        yield entry

    def at_values(self, mapping: Mapping[str, Value]) -> "Connection":
        """Symbols replaced by constants; raises ZeroDivisionError where a denominator vanishes.

        The verification record and the gauges are dropped: they spoke of other matrices.
        """
        poles = []
        for pole in self.poles:
            at = Position(None if pole.at.value is None else pole.at.value.substitute(mapping))
            matrices = tuple(
                tuple(tuple(_substituted(entry, mapping) for entry in row) for row in matrix)
                for matrix in pole.coefficients
            )
            poles.append(ConnectionPole(at, matrices))
        kept = tuple(name for name in self.symbols if name not in mapping)
        accessory = tuple(name for name in self.accessory if name not in mapping)
        values = (*self.values, *sorted(mapping.items()))
        return replace(self, poles=tuple(poles), symbols=kept, accessory=accessory, verification=(), values=values)


def _substituted(entry: Entry, mapping: Mapping[str, Value]) -> Entry:
    return entry.substitute(mapping) if isinstance(entry, Quotient) else entry


def exact_field(entries: Iterable[Quotient | Value]) -> Field:
    """The field of the entries, refused in words where it is too large."""
    try:
        return field_of(entries)
    except FieldTooLarge as error:
        raise Refused(str(error)) from error


def exact_parts(connection: Connection, more: Iterable[Value] = ()) -> list[list[ExactMatrix]]:
    """The coefficients as kernel matrices, over a field that also holds the values in ``more``."""
    entries_field = exact_field([*connection.exact_entries(), *(Quotient.of(value) for value in more)])
    return [[entries_field.matrix(_exact(matrix)) for matrix in pole.coefficients] for pole in connection.poles]


def _exact(matrix: Rows) -> list[list[Quotient | Value | Fraction | int]]:
    return [[entry for entry in row if isinstance(entry, Quotient)] for row in matrix]


def floating_parts(connection: Connection) -> "list[list[FloatMatrix]]":
    """The coefficients as floating matrices; exact entries must be free of symbols (KeyError otherwise)."""
    import numpy as np

    from app.connection.float_matrix import FloatMatrix, floating

    def number(entry: Entry) -> complex:
        return entry if isinstance(entry, complex) else floating(entry)

    return [
        [
            FloatMatrix(np.array([[number(entry) for entry in row] for row in matrix], dtype=np.complex128))
            for matrix in pole.coefficients
        ]
        for pole in connection.poles
    ]


def rows_of(matrix: Matrix) -> Rows:
    """The entries of a kernel matrix as a frozen table."""
    if isinstance(matrix, ExactMatrix):
        return tuple(tuple(row) for row in matrix.entries())
    from app.connection.float_matrix import FloatMatrix

    if not isinstance(matrix, FloatMatrix):
        raise TypeError("a matrix of an unknown kernel")
    return tuple(tuple(complex(entry) for entry in row) for row in matrix.array.tolist())


def poles_of(positions: Sequence[Position], parts: Sequence[Sequence[Matrix]]) -> tuple[ConnectionPole, ...]:
    """Poles from kernel matrices; coefficients of high order that vanish are left out, one is always kept."""
    found = []
    for position, part in zip(positions, parts, strict=True):
        matrices = [rows_of(matrix) for matrix in part]
        while len(matrices) > 1 and not any(entry for row in matrices[-1] for entry in row):
            matrices.pop()
        found.append(ConnectionPole(position, tuple(matrices)))
    return tuple(found)
