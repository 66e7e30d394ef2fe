"""Exact linear algebra over the rationals: rank, nullspace and determinant of small dense matrices.

A matrix is a sequence of rows of ints and Fractions.  The work is done by flint, imported when a function is called.
"""

from collections.abc import Sequence
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from flint import fmpq, fmpq_mat

Matrix = Sequence[Sequence[int | Fraction]]


def rank(matrix: Matrix) -> int:
    """Rank; 0 for a matrix without rows or columns.  Cost: O(min(m, n)·m·n) operations on rationals."""
    if not matrix or not matrix[0]:
        return 0
    return int(_converted(matrix).rank())


def nullspace(matrix: Matrix, columns: int) -> tuple[tuple[Fraction, ...], ...]:
    """A basis of the vectors x with matrix·x = 0; each has a 1 where all the others have 0.

    ``columns`` is the length of the rows (needed when there are none: then the basis is the standard one).
    Raises ValueError when a row has another length.
    """
    if any(len(row) != columns for row in matrix):
        raise ValueError(f"every row must have {columns} entries")
    reduced: list[list[Fraction]] = []
    if matrix and columns:
        echelon, height = _converted(matrix).rref()
        reduced = [[_fraction(echelon[i, j]) for j in range(columns)] for i in range(height)]
    pivots = [next(j for j, entry in enumerate(row) if entry) for row in reduced]
    basis = []
    for free in sorted(set(range(columns)) - set(pivots)):
        vector = [Fraction(0)] * columns
        vector[free] = Fraction(1)
        for row, pivot in zip(reduced, pivots, strict=True):
            vector[pivot] = -row[free]
        basis.append(tuple(vector))
    return tuple(basis)


def determinant(matrix: Matrix) -> Fraction:
    """Determinant of a square matrix; 1 for the empty one.  Raises ValueError when it is not square."""
    if any(len(row) != len(matrix) for row in matrix):
        raise ValueError("a determinant needs a square matrix")
    return _fraction(_converted(matrix).det()) if matrix else Fraction(1)


def _converted(matrix: Matrix) -> "fmpq_mat":
    from flint import fmpq, fmpq_mat

    if len({len(row) for row in matrix}) > 1:
        raise ValueError("the rows of a matrix have one length")
    entries = [fmpq(entry.numerator, entry.denominator) for row in matrix for entry in row]
    return fmpq_mat(len(matrix), len(matrix[0]), entries)


def _fraction(number: "fmpq") -> Fraction:
    return Fraction(int(number.p), int(number.q))
