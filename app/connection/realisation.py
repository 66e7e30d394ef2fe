"""Minimal realisation of a principal part: A_k = Q N^k P with N nilpotent.

W is the image of the block Hankel matrix H = (A_(a+b)), a, b = 0 … r, with A_m = 0 for m > r.  From a factorisation
H = O·R with R·S = 1 and O of full column rank, Q is the first block row of O, P the first block column of R, and
N = R' S, where R' is R with its block columns moved one to the left and 0 at the end (since H with its columns so moved
is O·N·R).  The size of N is the rank of H, the least possible.

Source: Kalman's realisation theory for rational functions, here at one pole.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Generic, TypeVar

from app.exact.matrix import Matrix

M = TypeVar("M", bound=Matrix)


@dataclass(frozen=True)
class Realisation(Generic[M]):
    """Q (n × w), N (w × w, nilpotent), P (w × n), and how many coefficients there are."""

    left: M
    nilpotent: M
    right: M
    order: int

    def coefficients(self) -> list[M]:
        """A_k = Q N^k P for k = 0 … order."""
        found = []
        moved = self.right
        for k in range(self.order + 1):
            if k:
                moved = self.nilpotent @ moved
            found.append(self.left @ moved)
        return found


def realise(coefficients: Sequence[M], expected: int | None = None) -> Realisation[M]:
    """The minimal realisation of A_0, …, A_r (n × n matrices, at least one).

    ``expected`` is dim W; exact matrices raise NotTheRank where it is another.
    Cost: one elimination of an n(r+1) × n(r+1) matrix.
    """
    order = len(coefficients) - 1
    size = coefficients[0].height
    if order == 0:
        left, right, _ = coefficients[0].factor(expected)
        return Realisation(left, right.zeros(right.height, right.height), right, 0)
    outer, inner, section = hankel(coefficients).factor(expected)
    moved = inner.take_columns(range(size, size * (order + 1))).beside([inner.zeros(inner.height, size)])
    return Realisation(outer.take_rows(range(size)), moved @ section, inner.take_columns(range(size)), order)


def hankel(coefficients: Sequence[M]) -> M:
    """The block Hankel matrix (A_(a+b)), a, b = 0 … r, with A_m = 0 for m > r."""
    order, size = len(coefficients) - 1, coefficients[0].height
    padded = [*coefficients, *[coefficients[0].zeros(size, size)] * order]
    block_rows = [padded[a].beside(padded[a + 1 : a + order + 1]) for a in range(order + 1)]
    return block_rows[0].above(block_rows[1:])
