"""Matrices of floating complex numbers, with the interface of the exact ones.

Ranks are never found here: the caller says which rank it expects, and the best approximation of that rank is taken
(singular values).  How far a matrix is from that rank is for ``verification`` to say.
"""

from collections.abc import Sequence
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from app.exact.approximate import approximate
from app.exact.matrix import Matrix, NotTheRank, Scalar
from app.exact.quotient import Quotient
from app.exact.value import Value

Array = NDArray[np.complex128]


class FloatMatrix(Matrix):
    """A matrix of complex numbers in double precision."""

    def __init__(self, array: Array) -> None:
        self.array = array
        self.height, self.width = array.shape

    def __matmul__(self, other: "FloatMatrix") -> "FloatMatrix":
        return FloatMatrix(self.array @ other.array)

    def __add__(self, other: "FloatMatrix") -> "FloatMatrix":
        return FloatMatrix(self.array + other.array)

    def __neg__(self) -> "FloatMatrix":
        return FloatMatrix(-self.array)

    def scalar(self, size: int, number: Scalar) -> "FloatMatrix":
        """``number`` times the identity; it must not hold symbols (KeyError otherwise)."""
        return FloatMatrix(np.eye(size, dtype=complex) * floating(number))

    def zeros(self, height: int, width: int) -> "FloatMatrix":
        """The zero matrix of this size."""
        return FloatMatrix(np.zeros((height, width), dtype=complex))

    def times(self, number: Scalar) -> "FloatMatrix":
        """Every entry multiplied."""
        return FloatMatrix(self.array * floating(number))

    def take(self, rows: Sequence[int], columns: Sequence[int]) -> "FloatMatrix":
        """The matrix of these rows and columns, in this order."""
        return FloatMatrix(self.array[np.ix_(list(rows), list(columns))])

    def beside(self, others: Sequence["FloatMatrix"]) -> "FloatMatrix":
        """This matrix and, to its right, the others."""
        return FloatMatrix(np.hstack([self.array, *(other.array for other in others)]))

    def above(self, others: Sequence["FloatMatrix"]) -> "FloatMatrix":
        """This matrix and, below it, the others."""
        return FloatMatrix(np.vstack([self.array, *(other.array for other in others)]))

    def factor(self, expected: int | None = None) -> tuple["FloatMatrix", "FloatMatrix", "FloatMatrix"]:
        """(C, R, S) with C·R the best approximation of the expected rank, R·S = 1 and R with orthonormal rows."""
        rank = _known(expected)
        outer, sizes, inner = np.linalg.svd(self.array, full_matrices=False)
        right = FloatMatrix(inner[:rank])
        return FloatMatrix(outer[:, :rank] * sizes[:rank]), right, FloatMatrix(inner[:rank].conj().T)

    def kernel(self, expected: int | None = None) -> "FloatMatrix":
        """Orthonormal vectors on which the matrix is smallest, as many as expected."""
        dimension = _known(expected)
        inner = np.linalg.svd(self.array)[2]
        return FloatMatrix(inner[self.width - dimension :].conj().T)

    def inverse(self) -> "FloatMatrix":
        """The inverse; raises NotTheRank where the matrix is singular."""
        try:
            return FloatMatrix(np.asarray(np.linalg.inv(self.array), dtype=np.complex128))
        except np.linalg.LinAlgError as error:
            raise NotTheRank("A matrix that had to be invertible is singular.") from error


def floating(number: Scalar) -> complex:
    """A constant as a floating complex number (KeyError where symbols occur)."""
    if isinstance(number, Quotient):
        return approximate(number.numerator, {}) / approximate(number.denominator, {})
    if isinstance(number, Value):
        return approximate(number, {})
    return complex(float(Fraction(number)))


def _known(expected: int | None) -> int:
    if expected is None:
        raise ValueError("a floating matrix has no rank of its own; say which is expected")
    return expected


def numerical_rank(matrix: FloatMatrix, small: float = 1e-9) -> int:
    """How many singular values exceed ``small`` times the largest: a guess, for matrices of which nothing is known."""
    sizes = np.linalg.svd(matrix.array, compute_uv=False)
    return int((sizes > small * sizes.max(initial=0)).sum())
