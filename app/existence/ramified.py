"""Existence for ramified data.

A pole is called *maximally ramified* here if its formal type is one Galois orbit of ramification index n, the rank,
with multiplicity 1, and if after a twist by a scalar the largest power of 1/z is r/n with gcd(r, n) = 1.  Such a type
is irreducible over C((z)), so every system that has it is irreducible.  Principal parts at it are meant in the frame
of a complete chain of lattices that holds the trivial one.

**Theorem** [Kulkarni, Livesay, Matherne, Nguyen and Sage, Adv. Math. 408 (2022)]: there is a connection with a
maximally ramified pole of slope r/n and at most one further pole, a log pole with residue in the class L, if and only
if the Fuchs relation holds and every eigenvalue of L has at most r Jordan blocks.  (Without log pole L = 0, n blocks.)
The statement is given from memory; the tests hold it against known types, the dimension count, and numerical points.

Read it as a statement on residues: *those that occur at the maximally ramified pole are the matrices of the right
trace all of whose eigenspaces have dimension r or less*; the set is stable under conjugation, so single matrices may
be spoken of.  Hence, with any number of further poles of any types, a system exists if and only if residues of theirs
have a sum S all of whose eigenspaces have dimension r or less.  A pole with a scalar local type only shifts S by a
scalar.  That gives:

*   slope above 1: r > n, no condition on S is left; a system exists;
*   a second maximally ramified pole: its residues contain all regular matrices of a trace, an open dense set, as do
    those of the first; a system exists;
*   further poles unramified: take a block (q, L) at each and an eigenvalue ξ of L, and let d be the rank of L − ξ plus
    Σ m'·(slope(q' − q) + 1) over the other blocks there, m' their multiplicities.  Residues at that pole less ξ have
    rank d or less (after a twist that makes q = 0 and ξ = 0 the residue is a product of three matrices, of which the
    middle one is the block Hankel matrix of the normal form, of rank d).  If n − Σ d > r no system exists;
*   further poles unramified: principal parts on their orbits are drawn, and if the sum of their residues is seen to
    have small eigenspaces a system exists.  Finding none proves nothing.

All this speaks of generic values where there are symbols.  Other ramified data are refuted where the rigidity index
exceeds 2 (the expected dimension is negative), and open otherwise.
"""

from fractions import Fraction

from app.exact.number import write_number
from app.existence.ramified_certificates import (
    FreeResidue,
    JordanBlocks,
    LargeEigenspace,
    RigidityExcess,
)
from app.existence.residue_sum import find_residue_sum
from app.existence.verdict import FuchsDefect, Verdict
from app.local.formal_type import Pole
from app.local.orbit import rigidity_index
from app.local.problem import Problem
from app.roots.build import slope_of_difference

_SOURCE = "[Kulkarni, Livesay, Matherne, Nguyen and Sage, Adv. Math. 408 (2022)]"


def ramified_verdict(problem: Problem) -> Verdict:
    """The additive verdict on ramified data: proved, refuted, or open; never a guess.

    Hypothesis: some pole is ramified.  Cost: the rigidity index, and with several further poles a few eliminations
    of n × n matrices modulo a prime, n the rank, while n times the sum of the other poles' orders is small.
    """
    defect = problem.trace_sum
    if not defect.is_zero:
        reason = (
            f"The traces of the residues sum to {write_number(defect, problem.symbols)} instead of 0 (Fuchs relation), "
            "so no system exists."
        )
        return Verdict(False, "refuted", reason, FuchsDefect(defect), None)
    maximal = [(slope, -i) for i, pole in enumerate(problem.poles) if (slope := maximal_slope(pole)) is not None]
    if maximal:
        slope, negative = max(maximal)
        verdict = _maximal_verdict(problem, -negative, slope, sorted(-i for _, i in maximal))
        if verdict is not None:
            return verdict
    index = rigidity_index(problem)
    if index > 2:
        reason = (
            f"The rigidity index is {index}, larger than 2, so the expected dimension {2 - index} is negative and no "
            "irreducible system exists."
        )
        return Verdict(False, "refuted", reason, None, None, ramified=RigidityExcess(index))
    reason = "Existence is not decided for these ramified data by any theorem that the program knows."
    return Verdict(None, "open", reason, None, None)


def maximal_slope(pole: Pole) -> Fraction | None:
    """The slope r/n of a maximally ramified pole after a scalar twist, None for any other pole."""
    if len(pole.blocks) != 1 or not pole.ramified or pole.blocks[0].multiplicity != 1:
        return None
    # integer powers belong to the twist: they are the same in all conjugates
    largest = max(power for power, _ in pole.blocks[0].exponent.terms if power.denominator > 1)
    return largest if largest.denominator == pole.rank else None


def _maximal_verdict(problem: Problem, pole: int, slope: Fraction, maximal: list[int]) -> Verdict | None:
    """What follows from the theorem; None where it leaves the question open.  Hypothesis: the Fuchs relation."""
    others = [i for i, other in enumerate(problem.poles) if i != pole and not _is_scalar(other)]
    if not others or (len(others) == 1 and _is_log_after_twist(problem.poles[others[0]])):
        return _one_log_pole(problem, pole, slope, others[0] if others else None)
    name = f"Pole {pole + 1} is maximally ramified"
    if len(maximal) > 1:
        second = next(i for i in maximal if i != pole)
        reason = (
            f"Poles {pole + 1} and {second + 1} are maximally ramified, so all regular matrices of a trace are "
            f"residues at both of them, and a system exists whatever stands at the other poles {_SOURCE}."
        )
        return Verdict(True, "proved", reason, None, None, ramified=FreeResidue(pole, slope, second))
    if slope > 1:
        reason = (
            f"{name} with slope {slope}, larger than 1, so all matrices of a trace are residues there, and a system "
            f"exists whatever stands at the other poles {_SOURCE}."
        )
        return Verdict(True, "proved", reason, None, None, ramified=FreeResidue(pole, slope, None))
    if any(problem.poles[i].ramified for i in others):
        return None
    choices, dimension = _large_eigenspace(problem, others)
    if dimension > slope.numerator:
        reason = (
            f"{name} with slope {slope}, so eigenspaces of its residue have dimension {slope.numerator} or less, "
            f"but the sum of the other residues has one of dimension {dimension} or more; no system exists {_SOURCE}."
        )
        return Verdict(False, "refuted", reason, None, None, ramified=LargeEigenspace(pole, slope, choices, dimension))
    found = find_residue_sum(problem, pole, slope, others)
    if found is None:
        return None
    reason = (
        f"{name} with slope {slope}, and the other orbits hold residues with a sum whose eigenspaces have dimension "
        f"{slope.numerator} or less, so a system exists {_SOURCE}."
    )
    return Verdict(True, "proved", reason, None, None, ramified=found)


def _one_log_pole(problem: Problem, pole: int, slope: Fraction, other: int | None) -> Verdict:
    """The theorem itself."""
    rank, bound = problem.rank, slope.numerator
    counts: tuple[int, ...] = (rank,)
    if other is not None:
        counts = tuple(len(eigenvalue.jordan) for eigenvalue in problem.poles[other].blocks[0].residue)
    certificate = JordanBlocks(pole, slope, other, counts)
    most = max(counts)
    if other is None:
        where = f"the only residue has to be scalar, with {rank} Jordan blocks"
    else:
        where = f"the residue at pole {other + 1} has {_blocks(most)} for one eigenvalue"
    have = f"Pole {pole + 1} is maximally ramified with slope {slope}, which allows {_blocks(bound)} for an eigenvalue"
    if most <= bound:
        reason = f"{have}, and {where}, so a system exists {_SOURCE}."
        return Verdict(True, "proved", reason, None, None, ramified=certificate)
    reason = f"{have}, but {where}, so no system exists {_SOURCE}."
    return Verdict(False, "refuted", reason, None, None, ramified=certificate)


def _blocks(count: int) -> str:
    return "1 Jordan block" if count == 1 else f"{count} Jordan blocks"


def _is_scalar(pole: Pole) -> bool:
    """Whether the local type is a multiple of the identity, which a twist takes away."""
    return _is_log_after_twist(pole) and len(pole.blocks[0].residue) == 1 and pole.blocks[0].residue[0].jordan[0] == 1


def _is_log_after_twist(pole: Pole) -> bool:
    """Whether one unramified block stands there: a log pole up to a scalar twist."""
    return len(pole.blocks) == 1 and not pole.ramified


def _large_eigenspace(problem: Problem, others: list[int]) -> tuple[tuple[tuple[int, int, int], ...], int]:
    """A choice of blocks and eigenvalues with the largest n − Σ d, and that number."""
    choices, dimension = [], problem.rank
    for i in others:
        rank, block, eigenvalue = _least_rank(problem.poles[i])
        choices.append((i, block, eigenvalue))
        dimension -= rank
    return tuple(choices), dimension


def _least_rank(pole: Pole) -> tuple[int, int, int]:
    """The least d at an unramified pole, with its block and eigenvalue."""
    found = []
    for j, block in enumerate(pole.blocks):
        rest = sum(
            other.multiplicity * (slope_of_difference(other.exponent, block.exponent) + 1)
            for other in pole.blocks
            if other is not block
        )
        for k, eigenvalue in enumerate(block.residue):
            found.append((rest + block.multiplicity - len(eigenvalue.jordan), j, k))
    return min(found)
