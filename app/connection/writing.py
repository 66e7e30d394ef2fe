"""A connection as LaTeX and as Python source for numpy and for sympy.

The source is self-contained and holds the matrices as they stand, with the verification record as a comment; names of
symbols that mean something else in Python get a trailing underscore.
"""

import keyword
from collections.abc import Sequence
from fractions import Fraction

from app.connection.connection import Connection, Entry, Rows
from app.connection.document import write_entry
from app.exact.factored import common_factor, latex_factored
from app.exact.latex import latex
from app.exact.quotient import Quotient
from app.exact.value import Value
from app.exact.writing import ordered_terms

_TAKEN = {"np", "I", "sqrt", "Matrix", "Rational", "symbols", "principal_parts", "poles", "connection"}


def connection_latex(connection: Connection) -> str:
    r"""One displayed line for each coefficient matrix, entries in factors; for use inside ``align*``."""
    lines = []
    for number, pole in enumerate(connection.poles, start=1):
        where = r"\infty" if pole.at.value is None else latex(pole.at.value, connection.symbols)
        for k, matrix in enumerate(pole.coefficients):
            name = rf"A^{{({number})}}_{{{k}}}"
            lines.append(rf"{name} &= {matrix_latex(matrix, connection.symbols)} && (x = {where})")
    return " \\\\\n".join(lines) + "\n"


def matrix_latex(matrix: Rows, symbols: Sequence[str] = ()) -> str:
    """The LaTeX of one matrix; a factor that all its exact entries share stands before it."""
    exact = [entry for row in matrix for entry in row if isinstance(entry, Quotient)]
    before = ""
    if exact and (shared := common_factor(exact)) != Quotient.of(1):
        before = latex_factored(shared, symbols)
        if len(shared.numerator.terms) > 1 and shared.is_polynomial and not before.startswith(r"\left("):
            before = rf"\left({before}\right)"
        matrix = tuple(
            tuple(entry / shared if isinstance(entry, Quotient) else entry for entry in row) for row in matrix
        )
    rows = [" & ".join(entry_latex(entry, symbols) for entry in row) for row in matrix]
    return before + r"\begin{pmatrix} " + r" \\ ".join(rows) + r" \end{pmatrix}"


def entry_latex(entry: Entry, symbols: Sequence[str] = ()) -> str:
    """The LaTeX of one entry: in factors where exact, six digits where floating."""
    if isinstance(entry, Quotient):
        return latex_factored(entry, symbols)
    return "0" if not entry else _decimal(entry)


def _decimal(number: complex) -> str:
    """Six significant digits, a part that is nothing beside the other left out."""
    parts = []
    if abs(number.real) > 1e-12 * abs(number):
        parts.append(f"{number.real:.6g}")
    if abs(number.imag) > 1e-12 * abs(number):
        parts.append(f"{number.imag:+.6g}\\,\\mathrm{{i}}" if parts else f"{number.imag:.6g}\\,\\mathrm{{i}}")
    return "".join(parts)


def numpy_source(connection: Connection) -> str:
    """Python source of a function of the symbols that returns the principal parts as numpy arrays."""
    names = _python_names(connection.symbols)
    arguments = ", ".join(names[name] for name in connection.symbols)
    lines = ["import numpy as np", "", *_heading(connection), "", "", f"def principal_parts({arguments}):"]
    lines.append('    """Pairs (position, [A_0, A_1, ...]); A_k belongs to z**(-k-1) dz, z = x - t or 1/x."""')
    lines.append("    return [")
    for pole in connection.poles:
        where = "np.inf" if pole.at.value is None else _python(Quotient.of(pole.at.value), names, exact=False)
        lines.append(f"        ({where}, [")
        for matrix in pole.coefficients:
            rows = [", ".join(_python(entry, names, exact=False) for entry in row) for row in matrix]
            inner = (",\n" + " " * 22).join(f"[{row}]" for row in rows)
            lines.append(f"            np.array([{inner}], dtype=complex),")
        lines.append("        ]),")
    lines.append("    ]")
    return "\n".join(lines) + "\n"


def sympy_source(connection: Connection) -> str:
    """Python source that makes the principal parts as sympy matrices, in ``principal_parts``."""
    names = _python_names(connection.symbols)
    lines = ["from sympy import I, Matrix, Rational, oo, sqrt, symbols", "", *_heading(connection), ""]
    for name in connection.symbols:
        lines.append(f'{names[name]} = symbols("{name}")')
    lines += ["", "# Pairs (position, [A_0, A_1, ...]); A_k belongs to z**(-k-1) dz, z = x - t or 1/x."]
    lines.append("principal_parts = [")
    for pole in connection.poles:
        where = "oo" if pole.at.value is None else _python(Quotient.of(pole.at.value), names, exact=True)
        lines.append(f"    ({where}, [")
        for matrix in pole.coefficients:
            rows = [", ".join(_python(entry, names, exact=True) for entry in row) for row in matrix]
            inner = (",\n" + " " * 16).join(f"[{row}]" for row in rows)
            lines.append(f"        Matrix([{inner}]),")
        lines.append("    ]),")
    lines.append("]")
    return "\n".join(lines) + "\n"


def _heading(connection: Connection) -> list[str]:
    lines = [f"# Connection of rank {connection.rank} with {len(connection.poles)} poles, {connection.kind} entries."]
    if connection.accessory:
        lines.append(f"# Accessory parameters: {', '.join(connection.accessory)}.")
    if connection.values:
        chosen = ", ".join(f"{name} = {write_entry(Quotient.of(value))}" for name, value in connection.values)
        lines.append(f"# Values: {chosen}.")
    lines += [f"# {'holds' if c.holds else 'FAILS'}: {c.check} ({c.figure})" for c in connection.verification]
    return lines


def _python_names(symbols: Sequence[str]) -> dict[str, str]:
    """A Python name for every symbol, distinct."""
    found: dict[str, str] = {}
    for name in symbols:
        chosen = name
        while keyword.iskeyword(chosen) or chosen in _TAKEN or (chosen != name and chosen in symbols):
            chosen += "_"
        found[name] = chosen
    return found


def _python(entry: Entry, names: dict[str, str], *, exact: bool) -> str:
    """An entry as a Python expression."""
    if isinstance(entry, complex):
        return repr(entry.real) if not entry.imag else f"({entry.real!r} + {entry.imag!r}{'*I' if exact else 'j'})"
    above = _sum(entry.numerator, names, exact)
    if entry.is_polynomial:
        return above
    return f"({above})/({_sum(entry.denominator, names, exact)})"


def _sum(value: Value, names: dict[str, str], exact: bool) -> str:
    pieces: list[str] = []
    for (monomial, radical), coefficient in ordered_terms(value):
        factors = []
        size = abs(Fraction(coefficient))
        if size.denominator != 1:
            factors.append(f"Rational({size.numerator}, {size.denominator})" if exact else f"({size})")
        elif size != 1:
            factors.append(str(size))
        if radical < 0:
            factors.append("I" if exact else "1j")
        if abs(radical) != 1:
            factors.append(f"sqrt({abs(radical)})" if exact else f"np.sqrt({abs(radical)})")
        factors += [names[name] + (f"**{power}" if power != 1 else "") for name, power in monomial]
        sign = "-" if coefficient < 0 else "+" if pieces else ""
        pieces.append(sign + ("*".join(factors) or "1"))
    return "".join(pieces) or "0"
