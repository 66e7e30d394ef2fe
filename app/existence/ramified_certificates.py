"""Certificates of verdicts on ramified data: what a reader needs to check them without this program.

    JordanBlocks     Jordan blocks of every eigenvalue at the one other pole, against the numerator of the slope
    FreeResidue      slope above 1, or a second maximally ramified pole: the residues of the others do not matter
    ResidueSum       principal parts at the other poles whose residues have a sum with small enough eigenspaces
    LargeEigenspace  one eigenvalue at every other pole, so that any sum of the residues has too large an eigenspace
    RigidityExcess   a rigidity index above 2

``pole`` is the index of the maximally ramified pole and ``slope`` its slope r/n after a scalar twist, n the rank.
The theorems behind them are stated in ``ramified.py``.
"""

from dataclasses import dataclass
from fractions import Fraction

IntegerMatrix = tuple[tuple[int, ...], ...]


@dataclass(frozen=True)
class JordanBlocks:
    """``counts``: Jordan blocks of every eigenvalue at the pole ``other``; (n,), the zero class, where it is None."""

    pole: int
    slope: Fraction
    other: int | None
    counts: tuple[int, ...]


@dataclass(frozen=True)
class FreeResidue:
    """Every residue of the right trace occurs at ``pole``, or every regular one there and at ``second``."""

    pole: int
    slope: Fraction
    second: int | None


@dataclass(frozen=True)
class Gauge:
    """An element of an unramified orbit: the principal part of g·Λ·g⁻¹, g = Σ terms[k]·z^k with terms[0] invertible.

    Λ is the normal form ⊕(dq_j + L_j dz/z), blocks and eigenvalues in document order, Jordan blocks with ones above
    the diagonal.
    """

    pole: int
    terms: tuple[IntegerMatrix, ...]


@dataclass(frozen=True)
class ResidueSum:
    """Principal parts whose residues have the sum S, and r columns V such that V, SV, S²V, … span everything.

    So every eigenspace of S has dimension r or less.
    """

    pole: int
    slope: Fraction
    gauges: tuple[Gauge, ...]
    columns: IntegerMatrix


@dataclass(frozen=True)
class LargeEigenspace:
    """``choices``: (pole, block, eigenvalue) as indices; the sum of the residues less that of these eigenvalues has a
    kernel of dimension ``dimension`` or more, and that is more than the numerator of the slope.
    """

    pole: int
    slope: Fraction
    choices: tuple[tuple[int, int, int], ...]
    dimension: int


@dataclass(frozen=True)
class RigidityExcess:
    """The rigidity index, which is more than 2."""

    index: int


RamifiedCertificate = JordanBlocks | FreeResidue | ResidueSum | LargeEigenspace | RigidityExcess
