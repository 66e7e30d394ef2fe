"""Matrices over a number field without symbols: blocks of rationals in flint's ``fmpq_mat``.

Source of the method: the regular representation of the field; see ``field``.
"""

from collections.abc import Sequence
from fractions import Fraction
from typing import TYPE_CHECKING

from app.exact.field import Field
from app.exact.matrix import ExactMatrix, Scalar
from app.exact.quotient import Quotient
from app.exact.value import Value, total

if TYPE_CHECKING:
    from flint import fmpq, fmpq_mat


class RationalMatrix(ExactMatrix):
    """A matrix over a field of degree D over Q, as a matrix of D × D blocks of rationals."""

    def __init__(self, field: Field, height: int, width: int, blocks: "fmpq_mat") -> None:
        self.field = field
        self.height = height
        self.width = width
        self._blocks = blocks

    @classmethod
    def of_entries(cls, field: Field, rows: Sequence[Sequence[Quotient]], width: int) -> "RationalMatrix":
        """The matrix with these entries, which must be constants of the field."""
        degree = field.degree
        if degree == 1:
            flat = [entry.as_rational() or Fraction(0) for row in rows for entry in row]
            return cls(field, len(rows), width, _rationals(len(rows), width, flat))
        grid = [[Fraction(0)] * (width * degree) for _ in range(len(rows) * degree)]
        for i, row in enumerate(rows):
            for j, entry in enumerate(row):
                if entry:
                    _fill_block(field, grid, i * degree, j * degree, entry.numerator)
        flat = [number for line in grid for number in line]
        return cls(field, len(rows), width, _rationals(len(rows) * degree, width * degree, flat))

    def entries(self) -> list[list[Quotient]]:
        """The entries, row by row."""
        degree = self.field.degree
        table = self._blocks.tolist() if self.height and self.width else []
        if not table:
            return [[] for _ in range(self.height)]
        radicals = self.field.radicals
        found = []
        for i in range(self.height):
            row = []
            for j in range(self.width):
                parts = [(((), radicals[k]), table[i * degree + k][j * degree]) for k in range(degree)]
                value = Value.from_terms((key, Fraction(int(c.p), int(c.q))) for key, c in parts if c)
                row.append(Quotient.of(value))
            found.append(row)
        return found

    def __matmul__(self, other: "RationalMatrix") -> "RationalMatrix":
        return RationalMatrix(self.field, self.height, other.width, self._blocks * other._blocks)

    def __add__(self, other: "RationalMatrix") -> "RationalMatrix":
        return RationalMatrix(self.field, self.height, self.width, self._blocks + other._blocks)

    def __neg__(self) -> "RationalMatrix":
        return RationalMatrix(self.field, self.height, self.width, -self._blocks)

    def times(self, number: Scalar) -> "RationalMatrix":
        """Every entry multiplied."""
        return self @ self.scalar(self.width, number)

    def take(self, rows: Sequence[int], columns: Sequence[int]) -> "RationalMatrix":
        """The matrix of these rows and columns, in this order."""
        degree = self.field.degree
        table = self._blocks.tolist() if self.height and self.width else []
        inner_rows = [i * degree + k for i in rows for k in range(degree)]
        inner_columns = [j * degree + k for j in columns for k in range(degree)]
        flat = [table[i][j] for i in inner_rows for j in inner_columns]
        return self._made(len(rows), len(columns), flat)

    def beside(self, others: Sequence["RationalMatrix"]) -> "RationalMatrix":
        """This matrix and, to its right, the others."""
        tables = [m._blocks.tolist() for m in (self, *others) if m.width and m.height]
        flat = [number for lines in zip(*tables, strict=True) for line in lines for number in line]
        return self._made(self.height, self.width + sum(m.width for m in others), flat)

    def above(self, others: Sequence["RationalMatrix"]) -> "RationalMatrix":
        """This matrix and, below it, the others."""
        flat = [number for m in (self, *others) if m.height and m.width for number in m._blocks.entries()]
        return self._made(self.height + sum(m.height for m in others), self.width, flat)

    def echelon(self, leading: int | None = None) -> tuple["RationalMatrix", tuple[int, ...]]:
        """The reduced echelon form (pivots leftmost)."""
        degree = self.field.degree
        if not self.height or not self.width:
            return self._made(0, self.width, []), ()
        reduced, rank = self._blocks.rref()
        table = reduced.tolist()
        pivots = []
        for i in range(0, rank, degree):
            pivot = next(j for j, number in enumerate(table[i]) if number) // degree
            if leading is not None and pivot >= leading:
                break
            pivots.append(pivot)
        flat = [number for line in table[: len(pivots) * degree] for number in line]
        return self._made(len(pivots), self.width, flat), tuple(pivots)

    def rank(self) -> int:
        """The rank, over the field."""
        return int(self._blocks.rank()) // self.field.degree if self.height and self.width else 0

    @property
    def is_zero(self) -> bool:
        """Whether every entry is 0."""
        return not any(self._blocks.entries()) if self.height and self.width else True

    def _made(self, height: int, width: int, flat: Sequence["fmpq"]) -> "RationalMatrix":
        from flint import fmpq_mat

        degree = self.field.degree
        return RationalMatrix(self.field, height, width, fmpq_mat(height * degree, width * degree, flat))


def _fill_block(field: Field, grid: list[list[Fraction]], top: int, left: int, value: Value) -> None:
    """Write the block of the multiplication by ``value`` into the grid."""
    for place, part in enumerate(field.components(value)):
        number = total([part]).as_rational() or Fraction(0)
        if number:
            for column, (factor, row) in enumerate(field.products[place]):
                grid[top + row][left + column] += factor * number


def _rationals(height: int, width: int, flat: Sequence[Fraction]) -> "fmpq_mat":
    from flint import fmpq, fmpq_mat

    return fmpq_mat(height, width, [fmpq(number.numerator, number.denominator) for number in flat])
