"""Figures of formal types: irregularity, orbit dimensions, rigidity index, expected dimension of the moduli space.

Every formal type is meant, ramified ones too.  With Irr(End) the sum of slope(q − q') over all ordered pairs of
conjugates and Inv the sum of the centralizer dimensions of all classes, a pole of rank n has an orbit of dimension
Irr(End) + n² − dim Inv, and the rigidity index is 2n² minus the sum of these dimensions over the poles
[Katz, Rigid local systems (1996); Arinkin, Compositio Math. 146 (2010)].

Unramified types have a second, direct formula for the orbit, ``unramified_orbit_dimension``, which shares
no code with the first; tests compare the two.
"""

from fractions import Fraction

from app.local.conjugates import conjugates, separations
from app.local.formal_type import Block, Exponent, Pole
from app.local.problem import Problem


def _separations(pole: Pole) -> dict[Fraction, int]:
    """Ordered pairs of conjugates at the pole, by the slope of their difference; empty where all are equal."""
    if len(pole.blocks) == 1 and pole.blocks[0].exponent.ramification == 1:
        return {}
    return separations(
        [(conjugate, block.multiplicity) for block in pole.blocks for conjugate in conjugates(block.exponent)]
    )


def irregularity_of_endomorphisms(pole: Pole) -> int:
    """Irr(End): the sum of slope(q − q') over ordered pairs of conjugates, with multiplicities.

    It is an integer for every formal type (the irregularity of a connection over C((z))).
    Cost: number of conjugates × number of powers.
    """
    return int(sum(slope * pairs for slope, pairs in _separations(pole).items()))


def largest_slope(pole: Pole) -> Fraction:
    """The largest slope of q − q' over the conjugates at the pole; 0 where there is only one."""
    return max(_separations(pole), default=Fraction(0))


def invariant_dimension(pole: Pole) -> int:
    """dim Inv: the sum over blocks of the dimension of the centralizer of the block's class."""
    return sum(_centralizer_dimension(block) for block in pole.blocks)


def _centralizer_dimension(block: Block) -> int:
    return sum(nullity * nullity for eigenvalue in block.residue for nullity in eigenvalue.nullities)


def orbit_dimension(pole: Pole) -> int:
    """Dimension of the orbit of the formal type: Irr(End) + n² − dim Inv, n the rank of the pole."""
    return irregularity_of_endomorphisms(pole) + pole.rank**2 - invariant_dimension(pole)


def rigidity_index(problem: Problem) -> int:
    """rig = 2n² − Σ (Irr(End) + n² − dim Inv) over the poles [Katz 1996, Arinkin 2010]; 2 means rigid."""
    return 2 * problem.rank**2 - sum(orbit_dimension(pole) for pole in problem.poles)


def moduli_dimension(problem: Problem) -> int:
    """Expected dimension of the moduli space, 2 − rig; negative where no irreducible connection can exist."""
    return 2 - rigidity_index(problem)


def unramified_orbit_dimension(pole: Pole) -> int:
    """Σ_(i≠j) m_i·m_j·(slope(q_i − q_j) + 1) + Σ_j dim(class of L_j): the orbit by its own formula.

    Hypothesis: no block is ramified (ValueError otherwise).  Cost: the square of the number of blocks.
    Source: Hiroe, Duke Math. J. 166 (2017).
    """
    if pole.ramified:
        raise ValueError("the formula holds for unramified types only")
    pairs = sum(
        first.multiplicity * second.multiplicity * (_difference_slope(first.exponent, second.exponent) + 1)
        for first in pole.blocks
        for second in pole.blocks
        if first is not second
    )
    return int(pairs) + sum(block.multiplicity**2 - _centralizer_dimension(block) for block in pole.blocks)


def _difference_slope(first: Exponent, second: Exponent) -> Fraction:
    """Slope of q − q': the first power, from above, at which the coefficients differ."""
    for (power, value), (other_power, other_value) in zip(first.terms, second.terms, strict=False):
        if power != other_power:
            return max(power, other_power)
        if value != other_value:
            return power
    longer = max(first.terms, second.terms, key=len)
    shared = min(len(first.terms), len(second.terms))
    return longer[shared][0] if shared < len(longer) else Fraction(0)


def unramified_moduli_dimension(problem: Problem) -> int:
    """Σ dim O_i − 2(n² − 1) with the orbit dimensions of ``unramified_orbit_dimension``: the second way."""
    return sum(unramified_orbit_dimension(pole) for pole in problem.poles) - 2 * (problem.rank**2 - 1)
