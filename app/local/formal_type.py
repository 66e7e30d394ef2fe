"""Formal types: eigenvalues with Jordan blocks, exponents, blocks and poles, as frozen values.

A pole's formal type is a direct sum of blocks (q, L): an exponent q without constant term in 1/z and a
conjugacy class L.  An unramified exponent has integer powers; a fractional power makes the block stand for its
whole Galois orbit.  Nothing here validates: ``local/document.py`` does that once, at the door.
"""

from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from math import lcm

from app.exact.value import Value
from app.local.partition import conjugate


@dataclass(frozen=True)
class Eigenvalue:
    """One eigenvalue of a class, with its Jordan block sizes in descending order."""

    value: Value
    jordan: tuple[int, ...]

    @cached_property
    def multiplicity(self) -> int:
        """Algebraic multiplicity: the sum of the Jordan block sizes."""
        return sum(self.jordan)

    @cached_property
    def nullities(self) -> tuple[int, ...]:
        """Conjugate partition: entry k is dim ker (L − ξ)^(k+1) − dim ker (L − ξ)^k."""
        return conjugate(self.jordan)


@dataclass(frozen=True)
class Exponent:
    """q = Σ c_s z^(−s), as pairs (s, c_s) by descending s, every c_s non-zero and every s a positive rational."""

    terms: tuple[tuple[Fraction, Value], ...] = ()

    @property
    def is_zero(self) -> bool:
        """Whether q = 0."""
        return not self.terms

    @property
    def slope(self) -> Fraction:
        """Largest power s with z^(−s) in q; 0 for q = 0."""
        return self.terms[0][0] if self.terms else Fraction(0)

    @cached_property
    def ramification(self) -> int:
        """Ramification index e: the least e with q in z^(−1/e) C[z^(−1/e)]."""
        return lcm(*(power.denominator for power, _ in self.terms)) if self.terms else 1


@dataclass(frozen=True)
class Block:
    """An exponent (or its Galois orbit) with a class on its multiplicity space."""

    exponent: Exponent
    residue: tuple[Eigenvalue, ...]

    @cached_property
    def multiplicity(self) -> int:
        """Dimension of the multiplicity space."""
        return sum(e.multiplicity for e in self.residue)

    @cached_property
    def rank(self) -> int:
        """What the block adds to the rank: ramification index times multiplicity."""
        return self.exponent.ramification * self.multiplicity


@dataclass(frozen=True)
class Position:
    """Where a pole is: an exact number, an open position (a symbol), or infinity (None)."""

    value: Value | None

    @property
    def at_infinity(self) -> bool:
        """Whether this is the point at infinity."""
        return self.value is None


@dataclass(frozen=True)
class Pole:
    """A position and the blocks of the formal type there."""

    at: Position
    blocks: tuple[Block, ...]

    @property
    def rank(self) -> int:
        """Rank of the formal type: the sum over its blocks."""
        return sum(block.rank for block in self.blocks)

    @property
    def is_log(self) -> bool:
        """Whether the pole is logarithmic: one block, exponent 0."""
        return len(self.blocks) == 1 and self.blocks[0].exponent.is_zero

    @property
    def ramified(self) -> bool:
        """Whether some block is ramified."""
        return any(block.exponent.ramification > 1 for block in self.blocks)
