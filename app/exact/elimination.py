"""Fraction-free elimination over integer polynomials in symbols.

Gauss–Jordan elimination in the form of Bareiss: every entry stays a polynomial (a minor of the given matrix), and each
division is exact.  This is many times faster than arithmetic with quotients, whose greatest common divisors dominate.

Pivots: the entry with fewest terms in the rows that are left, which keeps minors short; in the leftmost possible column
first where the caller needs the reduced echelon form itself.

Source: Bareiss, Sylvester's identity and multistep integer-preserving Gaussian elimination, Math. Comp. 22 (1968).
"""

from typing import TYPE_CHECKING, NamedTuple

if TYPE_CHECKING:
    from flint import fmpz_mpoly

Rows = list[list["fmpz_mpoly"]]


class Reduced(NamedTuple):
    """Rows that hold ``common`` times an identity matrix in the columns ``pivots``; ``common`` is None for rank 0."""

    rows: Rows
    pivots: tuple[int, ...]
    common: "fmpz_mpoly | None"


def gauss_jordan(matrix: Rows, columns: int, *, leftmost: bool = False, upwards: bool = True) -> Reduced:
    """Eliminate with pivots among the first ``columns`` columns.

    With ``upwards`` false only the rows below a pivot are eliminated, which is enough for the rank.
    The rows are changed in place.  Cost: rank × rows × columns products and exact divisions of polynomials.
    """
    rows = matrix
    pivots: list[int] = []
    previous: fmpz_mpoly | None = None
    while len(pivots) < len(rows):
        done = len(pivots)
        found = _pivot(rows, done, columns, pivots, leftmost)
        if found is None:
            break
        row, column = found
        rows[done], rows[row] = rows[row], rows[done]
        top = rows[done]
        pivot = top[column]
        for i in range(0 if upwards else done + 1, len(rows)):
            if i != done:
                rows[i] = _combined(rows[i], top, pivot, rows[i][column], previous)
        pivots.append(column)
        previous = pivot
    return Reduced(rows[: len(pivots)], tuple(pivots), previous)


def _combined(
    row: list["fmpz_mpoly"],
    top: list["fmpz_mpoly"],
    pivot: "fmpz_mpoly",
    factor: "fmpz_mpoly",
    previous: "fmpz_mpoly | None",
) -> list["fmpz_mpoly"]:
    """(pivot·row − factor·top) / previous, entry by entry; the division is exact."""
    if not factor:
        if previous is None:
            return [pivot * a if a else a for a in row]
        return [pivot * a / previous if a else a for a in row]
    made = []
    for a, b in zip(row, top, strict=True):
        entry = pivot * a - factor * b if b else pivot * a
        made.append(entry / previous if previous is not None and entry else entry)
    return made


def _pivot(rows: Rows, done: int, columns: int, used: list[int], leftmost: bool) -> tuple[int, int] | None:
    """Row and column of the next pivot, None when all that is left is 0."""
    best: tuple[int, int, int] | None = None
    for column in range(columns):
        if column in used:
            continue
        for i in range(done, len(rows)):
            entry = rows[i][column]
            if entry:
                size = len(entry)
                if best is None or size < best[0]:
                    best = (size, i, column)
        if best is not None and (leftmost or best[0] == 1):
            break
    return None if best is None else best[1:]
