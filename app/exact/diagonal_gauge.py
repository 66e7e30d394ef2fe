"""Shorter matrices by a common diagonal gauge: A → D A D^(−1) for several matrices at once.

Entries of matrices with symbols are often long products whose factors belong elsewhere: only the product of the entries
along a cycle is fixed, how it is shared among them is a choice.  A factor that all entries of a row have in common
may move to the column of the same number, and the other way round.  Such moves are made while the matrices get shorter.
"""

from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

from app.exact.function_matrix import FunctionMatrix, Row, reduced_product

if TYPE_CHECKING:
    from flint import fmpz_mpoly

_PASSES = 20


def diagonally_shortened(matrices: Sequence[FunctionMatrix]) -> list[FunctionMatrix]:
    """The matrices after the same diagonal gauge, none longer together than before.

    Hypothesis: all are square, of one size and over one field; over a field with square roots nothing is done.
    Cost: for each row and column a few greatest common divisors and one factorisation, repeated while it helps.
    """
    if not matrices or matrices[0].field.degree > 1:
        return list(matrices)
    tables = [matrix.copied_rows() for matrix in matrices]
    size = matrices[0].height
    for _ in range(_PASSES):
        moved = [_moved(tables, i, by_row) for i in range(size) for by_row in (True, False)]
        if not any(moved):
            break
    return [FunctionMatrix(m.field, size, size, table) for m, table in zip(matrices, tables, strict=True)]


def _moved(tables: list[list[Row]], i: int, by_row: bool) -> bool:
    """Move factors out of row i (or column i) into the other; whether anything was gained."""
    gained = False
    for factor in _common_factors(tables, i, by_row):
        while _try(tables, i, by_row, factor):
            gained = True
    return gained


def _places(tables: list[list[Row]], i: int, row: bool) -> Iterator[tuple[Row, int]]:
    """The entries off the diagonal in row or column i that are not 0, as (line, index)."""
    for table in tables:
        for j in range(len(table)):
            line, k = (table[i], j) if row else (table[j], i)
            if j != i and line[k][0]:
                yield line, k


def _common_factors(tables: list[list[Row]], i: int, by_row: bool) -> list["fmpz_mpoly"]:
    """The irreducible factors that all entries there have in common, numbers left out."""
    common: fmpz_mpoly | None = None
    for line, k in _places(tables, i, by_row):
        common = line[k][0] if common is None else common.gcd(line[k][0])
        if common.is_constant():
            return []
    if common is None:
        return []
    return [factor for factor, _ in common.factor()[1]]


def _try(tables: list[list[Row]], i: int, by_row: bool, factor: "fmpz_mpoly") -> bool:
    """Divide the line by the factor and multiply the other by it, if everything gets shorter by that."""
    one = factor * 0 + 1
    changes = []
    gain = 0
    for row, by in ((by_row, (one, factor)), (not by_row, (factor, one))):
        for line, k in _places(tables, i, row):
            new = reduced_product(line[k], by)
            gain += len(line[k][0]) + len(line[k][1]) - len(new[0]) - len(new[1])
            changes.append((line, k, new))
    if gain <= 0:
        return False
    for line, k, new in changes:
        line[k] = new
    return True
