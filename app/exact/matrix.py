"""What every kernel of matrices offers, and what follows from it for exact ones.

A matrix is immutable.  Sizes and indices count entries of the field, whatever the kernel keeps inside.  Algorithms that
are written against ``Matrix`` run unchanged in exact and in floating arithmetic; where a rank is decided they say
which rank they expect, which exact kernels check and floating kernels rely on.
"""

from abc import ABC, abstractmethod
from collections.abc import Sequence
from fractions import Fraction
from typing import TYPE_CHECKING, Self

from app.exact.quotient import Quotient
from app.exact.value import Value

if TYPE_CHECKING:
    from app.exact.field import Field

Scalar = Quotient | Value | Fraction | int


class NotTheRank(ArithmeticError):
    """A matrix has not the rank that it had to have."""


class Matrix(ABC):
    """A matrix of some kernel; operands of one operation come from one kernel."""

    height: int
    width: int

    @abstractmethod
    def __matmul__(self, other: Self) -> Self: ...

    @abstractmethod
    def __add__(self, other: Self) -> Self: ...

    @abstractmethod
    def __neg__(self) -> Self: ...

    def __sub__(self, other: Self) -> Self:
        return self + (-other)

    @abstractmethod
    def scalar(self, size: int, number: Scalar) -> Self:
        """``number`` times the identity matrix of this size, in the same kernel."""

    @abstractmethod
    def zeros(self, height: int, width: int) -> Self:
        """The zero matrix of this size, in the same kernel."""

    @abstractmethod
    def times(self, number: Scalar) -> Self:
        """Every entry multiplied."""

    @abstractmethod
    def take(self, rows: Sequence[int], columns: Sequence[int]) -> Self:
        """The matrix of these rows and columns, in this order."""

    @abstractmethod
    def beside(self, others: Sequence[Self]) -> Self:
        """This matrix and, to its right, the others."""

    @abstractmethod
    def above(self, others: Sequence[Self]) -> Self:
        """This matrix and, below it, the others."""

    @abstractmethod
    def factor(self, expected: int | None = None) -> tuple[Self, Self, Self]:
        """(C, R, S) with this matrix = C·R, R·S = 1 and C of full column rank, R of full row rank.

        ``expected`` is the rank; exact kernels raise NotTheRank where it is another, floating kernels take the best
        approximation of that rank.
        """

    @abstractmethod
    def kernel(self, expected: int | None = None) -> Self:
        """A matrix whose columns are a basis of the vectors that this matrix sends to 0; like ``factor``."""

    @abstractmethod
    def inverse(self) -> Self:
        """The inverse; raises NotTheRank where there is none."""

    def shifted(self, number: Scalar) -> Self:
        """``number`` times the identity added."""
        return self + self.scalar(self.height, number)

    def take_columns(self, columns: Sequence[int]) -> Self:
        """These columns, in this order."""
        return self.take(range(self.height), columns)

    def take_rows(self, rows: Sequence[int]) -> Self:
        """These rows, in this order."""
        return self.take(rows, range(self.width))


class ExactMatrix(Matrix):
    """A matrix over an exact field; see ``Field.matrix``."""

    field: "Field"

    @classmethod
    @abstractmethod
    def of_entries(cls, field: "Field", rows: Sequence[Sequence[Quotient]], width: int) -> Self:
        """The matrix with these entries."""

    @abstractmethod
    def entries(self) -> list[list[Quotient]]:
        """The entries, row by row."""

    @abstractmethod
    def echelon(self, leading: int | None = None) -> tuple[Self, tuple[int, ...]]:
        """The non-zero rows of an echelon form, with an identity matrix in the columns that come second.

        The pivots need not be the leftmost columns; with ``leading`` they lie among so many first columns, and
        elimination ends with them.
        """

    @abstractmethod
    def rank(self) -> int:
        """The rank, over the field."""

    @property
    @abstractmethod
    def is_zero(self) -> bool:
        """Whether every entry is 0."""

    def scalar(self, size: int, number: Scalar) -> Self:
        """``number`` times the identity matrix of this size."""
        entry, zero = Quotient.of(number), Quotient.of(0)
        rows = [[entry if i == j else zero for j in range(size)] for i in range(size)]
        return self.of_entries(self.field, rows, size)

    def zeros(self, height: int, width: int) -> Self:
        """The zero matrix of this size."""
        return self.of_entries(self.field, [[Quotient.of(0)] * width for _ in range(height)], width)

    def factor(self, expected: int | None = None) -> tuple[Self, Self, Self]:
        """(C, R, S) with this matrix = C·R and R·S = 1; C are columns of the matrix, S columns of the identity."""
        reduced, pivots = self.echelon()
        if expected is not None and len(pivots) != expected:
            raise NotTheRank(f"A matrix of rank {expected} was expected; its rank is {len(pivots)}.")
        return self.take_columns(pivots), reduced, self.scalar(self.width, 1).take_columns(pivots)

    def kernel(self, expected: int | None = None) -> Self:
        """A basis of the kernel, as columns; an identity matrix stands in the rows without a pivot."""
        reduced, pivots = self.echelon()
        free = [j for j in range(self.width) if j not in pivots]
        if expected is not None and len(free) != expected:
            raise NotTheRank(f"A kernel of dimension {expected} was expected; its dimension is {len(free)}.")
        stacked = (-reduced.take_columns(free)).above([self.scalar(len(free), 1)])
        order = {column: place for place, column in enumerate((*pivots, *free))}
        return stacked.take_rows([order[column] for column in range(self.width)])

    def inverse(self) -> Self:
        """The inverse; raises NotTheRank where there is none."""
        size = self.height
        reduced, pivots = self.beside([self.scalar(size, 1)]).echelon(leading=size)
        if len(pivots) != size or self.width != size:
            raise NotTheRank("A matrix that had to be invertible is not.")
        order = sorted(range(size), key=pivots.__getitem__)
        return reduced.take(order, range(size, 2 * size))
