"""Matrices over a field with symbols: rational functions as pairs of flint polynomials.

An entry is (numerator, denominator), integer polynomials without common factor; square roots are blocks (see
``field``).  Products clear denominators by rows and columns first, so that there is one greatest common divisor for
each entry of the result; elimination is fraction-free (``elimination``).
"""

from collections.abc import Sequence
from fractions import Fraction
from functools import reduce
from operator import add
from typing import TYPE_CHECKING

from app.exact.elimination import gauss_jordan
from app.exact.field import Field
from app.exact.matrix import ExactMatrix, Scalar
from app.exact.quotient import Quotient

if TYPE_CHECKING:
    from flint import fmpz_mpoly

Fractional = tuple["fmpz_mpoly", "fmpz_mpoly"]
Row = list[Fractional]


class FunctionMatrix(ExactMatrix):
    """A matrix over a field of degree D over Q(symbols), as a matrix of D × D blocks of rational functions."""

    def __init__(self, field: Field, height: int, width: int, rows: list[Row]) -> None:
        self.field = field
        self.height = height
        self.width = width
        self._rows = rows

    @classmethod
    def of_entries(cls, field: Field, rows: Sequence[Sequence[Quotient]], width: int) -> "FunctionMatrix":
        """The matrix with these entries, which must lie in the field."""
        degree = field.degree
        zero = _constant(field, 0)
        grid = [[zero] * (width * degree) for _ in range(len(rows) * degree)]
        for i, row in enumerate(rows):
            for j, entry in enumerate(row):
                if entry:
                    _fill_block(field, grid, i * degree, j * degree, entry)
        return cls(field, len(rows), width, grid)

    def entries(self) -> list[list[Quotient]]:
        """The entries, row by row."""
        degree, radicals, variables = self.field.degree, self.field.radicals, self.field.variables
        found = []
        for i in range(self.height):
            row = []
            for j in range(self.width):
                value = Quotient.of(0)
                for k in range(degree):
                    entry = self._rows[i * degree + k][j * degree]
                    if entry[0]:
                        below = variables.value({1: entry[1]})
                        value = value + Quotient(variables.value({radicals[k]: entry[0]}), below)
                row.append(value)
            found.append(row)
        return found

    def __matmul__(self, other: "FunctionMatrix") -> "FunctionMatrix":
        left = [_cleared(row) for row in self._rows]
        columns = [_cleared([row[j] for row in other._rows]) for j in range(other.width * self.field.degree)]
        zero = _constant(self.field, 0)
        made = []
        for numbers, below in left:
            support = [k for k, number in enumerate(numbers) if number]
            line = []
            for others, other_below in columns:
                products = [numbers[k] * others[k] for k in support if others[k]]
                if not products:
                    line.append(zero)
                    continue
                line.append(_over(reduce(add, products), below, other_below))
            made.append(line)
        return FunctionMatrix(self.field, self.height, other.width, made)

    def __add__(self, other: "FunctionMatrix") -> "FunctionMatrix":
        rows = [
            [_sum(a, b) for a, b in zip(first, second, strict=True)]
            for first, second in zip(self._rows, other._rows, strict=True)
        ]
        return FunctionMatrix(self.field, self.height, self.width, rows)

    def __neg__(self) -> "FunctionMatrix":
        rows = [[(-number, below) for number, below in row] for row in self._rows]
        return FunctionMatrix(self.field, self.height, self.width, rows)

    def times(self, number: Scalar) -> "FunctionMatrix":
        """Every entry multiplied."""
        return self @ self.scalar(self.width, number)

    def take(self, rows: Sequence[int], columns: Sequence[int]) -> "FunctionMatrix":
        """The matrix of these rows and columns, in this order."""
        degree = self.field.degree
        inner = [j * degree + k for j in columns for k in range(degree)]
        made = [[self._rows[i * degree + k][j] for j in inner] for i in rows for k in range(degree)]
        return FunctionMatrix(self.field, len(rows), len(columns), made)

    def beside(self, others: Sequence["FunctionMatrix"]) -> "FunctionMatrix":
        """This matrix and, to its right, the others."""
        rows = [
            [entry for line in lines for entry in line]
            for lines in zip(*(matrix._rows for matrix in (self, *others)), strict=True)
        ]
        return FunctionMatrix(self.field, self.height, self.width + sum(m.width for m in others), rows)

    def above(self, others: Sequence["FunctionMatrix"]) -> "FunctionMatrix":
        """This matrix and, below it, the others."""
        rows = [row for matrix in (self, *others) for row in matrix._rows]
        return FunctionMatrix(self.field, self.height + sum(m.height for m in others), self.width, rows)

    def echelon(self, leading: int | None = None) -> tuple["FunctionMatrix", tuple[int, ...]]:
        """An echelon form; leftmost pivots only where square roots make blocks."""
        degree = self.field.degree
        columns = (self.width if leading is None else leading) * degree
        cleared = [_cleared(row)[0] for row in self._rows]
        reduced = gauss_jordan(cleared, columns, leftmost=degree > 1)
        common = reduced.common
        zero, one = _constant(self.field, 0), _constant(self.field, 1)
        made = []
        for place, row in enumerate(reduced.rows):
            line = [_over(entry, common, None) if entry else zero for entry in row]
            for other, pivot in enumerate(reduced.pivots):
                line[pivot] = one if other == place else zero
            made.append(line)
        pivots = tuple(pivot // degree for pivot in reduced.pivots[::degree])
        return FunctionMatrix(self.field, len(pivots), self.width, made), pivots

    def factor(self, expected: int | None = None) -> tuple["FunctionMatrix", "FunctionMatrix", "FunctionMatrix"]:
        """(C, R, S) as in ``Matrix.factor``, common factors of the columns of C moved over to the rows of R.

        With them in C the entries of R would have denominators for nothing: a matrix of rank 1 with polynomial entries
        becomes a column times a row of polynomials.  (Not done where square roots make blocks.)
        """
        left, right, section = super().factor(expected)
        if self.field.degree > 1:
            return left, right, section
        one = self.field.variables.context.constant(1)
        for j in range(left.width):
            content = _content([row[j] for row in left._rows])
            if content == (one, one):
                continue
            inverse = _lowest(content[1], content[0])
            for row in left._rows:
                row[j] = reduced_product(row[j], inverse)
            right._rows[j] = [reduced_product(entry, content) for entry in right._rows[j]]
            for row in section._rows:
                row[j] = reduced_product(row[j], inverse)
        return left, right, section

    def copied_rows(self) -> list[Row]:
        """The entries as pairs of polynomials in rows of their own, for other kernels of this room."""
        return [list(row) for row in self._rows]

    def rank(self) -> int:
        """The rank, over the field."""
        cleared = [_cleared(row)[0] for row in self._rows]
        width = self.width * self.field.degree
        return len(gauss_jordan(cleared, width, upwards=False).pivots) // self.field.degree

    @property
    def is_zero(self) -> bool:
        """Whether every entry is 0."""
        return not any(entry[0] for row in self._rows for entry in row)


def _constant(field: Field, number: int) -> Fractional:
    context = field.variables.context
    return context.constant(number), context.constant(1)


def _lowest(number: "fmpz_mpoly", below: "fmpz_mpoly") -> Fractional:
    """The quotient without common factor, the leading coefficient of the denominator positive; 0 is 0/1."""
    if not number:
        return number, number + 1
    if below.is_one():
        return number, below
    common = number.gcd(below)
    if not common.is_one():
        number, below = number / common, below / common
    return (-number, -below) if below.leading_coefficient() < 0 else (number, below)


def _over(number: "fmpz_mpoly", first: "fmpz_mpoly | None", second: "fmpz_mpoly | None") -> Fractional:
    """The quotient by the product of two denominators, where None stands for 1."""
    if first is not None and second is not None:
        return _lowest(number, first * second)
    below = second if first is None else first
    return _lowest(number, below) if below is not None else (number, number * 0 + 1)


def _sum(first: Fractional, second: Fractional) -> Fractional:
    if not first[0]:
        return second
    if not second[0]:
        return first
    if first[1] == second[1]:
        return _lowest(first[0] + second[0], first[1])
    return _lowest(first[0] * second[1] + second[0] * first[1], first[1] * second[1])


def reduced_product(first: Fractional, second: Fractional) -> Fractional:
    """The product of two entries, in lowest terms."""
    if not first[0]:
        return first
    return _lowest(first[0] * second[0], first[1] * second[1])


def _content(entries: Sequence[Fractional]) -> Fractional:
    """The greatest common divisor of the numerators over the least common multiple of the denominators."""
    numbers, common = _cleared(entries)
    divisor = numbers[0]
    for number in numbers[1:]:
        divisor = divisor.gcd(number)
    return _over(divisor, common, None) if divisor else (divisor + 1, divisor + 1)


def _cleared(entries: Sequence[Fractional]) -> tuple[list["fmpz_mpoly"], "fmpz_mpoly | None"]:
    """Numerators over a common denominator, and that denominator (None for 1)."""
    common: fmpz_mpoly | None = None
    for _, below in entries:
        if not below.is_one() and below != common:
            common = below if common is None else common * (below / common.gcd(below))
    if common is None:
        return [number for number, _ in entries], None
    return [number * common if below.is_one() else number * (common / below) for number, below in entries], common


def _fill_block(field: Field, grid: list[Row], top: int, left: int, entry: Quotient) -> None:
    """Write the block of the multiplication by the entry into the grid."""
    variables = field.variables
    places = {radical: place for place, radical in enumerate(field.radicals)}
    above, above_scale = variables.components(entry.numerator)
    below, below_scale = variables.components(entry.denominator)
    factor = Fraction(below_scale, above_scale)
    denominator = below[1] * factor.denominator
    for radical, polynomial in above.items():
        for column, (multiple, row) in enumerate(field.products[places[radical]]):
            grid[top + row][left + column] = _lowest(polynomial * (multiple * factor.numerator), denominator)
