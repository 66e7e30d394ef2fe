"""The descent of local data, kept in the form in which matrices climb back up.

All poles are on one footing here.  An irreducible tuple of principal parts has nothing to do with where its poles are
or which coordinates they carry: the only global condition is that the residues add up, here to a scalar ``excess``.
So no pole has to be moved away from infinity, and no exponent is re-expanded.

One step chooses at every pole a block and an eigenvalue of it.  The twist that makes that exponent and that eigenvalue
0 leaves residues with sum c·1; the middle convolution with μ = −c follows.  The chosen eigenvalue 0 loses ``fall`` of
its first drop, every other eigenvalue of a block whose exponent has slope s moves by (s + 1)μ, exponents stay, and the
sum of residues becomes −c·1.  The rank falls by 2n − Σ dim W, where W at a pole is what the minimal realisation of the
twisted principal part needs: Σ m_j (slope(q_j − q) + 1) over the other blocks, and the multiplicity less the first drop
of the chosen one.  These are the reflections of ``roots/reduction.py`` on the same data.

Sources: Dettweiler and Reiter, J. Algebra 318 (2007) for log poles; Hiroe, Duke Math. J. 166 (2017).
"""

from dataclasses import dataclass
from fractions import Fraction

from app.exact.value import ZERO, Value, total
from app.local.formal_type import Block
from app.local.problem import Problem
from app.roots.build import Slot, slots

Coefficients = tuple[tuple[int, Value], ...]
"""An unramified exponent: pairs (power of 1/z, non-zero coefficient) by descending power."""


@dataclass(frozen=True)
class StageBlock:
    """An exponent, and the class beside it as slots (eigenvalue, drop of rank), larger drops of equal values first."""

    exponent: Coefficients
    slots: tuple[Slot, ...]

    @property
    def multiplicity(self) -> int:
        """Dimension of the multiplicity space."""
        return sum(slot.drop for slot in self.slots)


@dataclass(frozen=True)
class Stage:
    """Local data whose residues add up to ``excess`` times the identity: the blocks of each pole."""

    poles: tuple[tuple[StageBlock, ...], ...]
    excess: Value = ZERO

    @property
    def rank(self) -> int:
        """The rank; 0 where a pole has lost all its blocks."""
        return sum(block.multiplicity for block in self.poles[0]) if self.poles else 0


@dataclass(frozen=True)
class Choice:
    """At one pole: the chosen block and slot, the scalar that the twist takes away, dim W, whether only one block."""

    block: int
    slot: int
    exponent: Coefficients
    value: Value
    dimension: int
    single: bool


@dataclass(frozen=True)
class Step:
    """One step down: the stage it starts from, the choices, c (so μ = −c), and the stage it reaches."""

    upper: Stage
    choices: tuple[Choice, ...]
    parameter: Value
    lower: Stage


@dataclass(frozen=True)
class Descent:
    """Steps from the problem down to ``last``; ``blocked`` where the next step's c is 0 or data go negative."""

    steps: tuple[Step, ...]
    last: Stage
    blocked: bool


def stage_of(problem: Problem) -> Stage:
    """The problem as a stage.  Hypothesis: no block is ramified (ValueError otherwise)."""
    if problem.ramified:
        raise ValueError("the descent is defined for unramified data only")
    return Stage(tuple(tuple(_stage_block(block) for block in pole.blocks) for pole in problem.poles))


def _stage_block(block: Block) -> StageBlock:
    return StageBlock(tuple((int(power), value) for power, value in block.exponent.terms), slots(block))


def descend(problem: Problem) -> Descent:
    """All steps that lower the rank, the greatest fall first at every stage.

    It ends at rank 1 or where no choice lowers the rank (a fundamental datum).
    Cost: at most rank many steps, each the square of the number of blocks at a pole.
    """
    stage = stage_of(problem)
    steps: list[Step] = []
    while stage.rank > 1:
        choices = tuple(_choice(pole) for pole in stage.poles)
        fall = 2 * stage.rank - sum(choice.dimension for choice in choices)
        if fall <= 0:
            break
        step = _step(stage, choices, fall)
        if step is None:
            return Descent(tuple(steps), stage, blocked=True)
        steps.append(step)
        stage = step.lower
    return Descent(tuple(steps), stage, blocked=stage.rank < 1)


def slope_between(first: Coefficients, second: Coefficients) -> int:
    """Slope of the difference of two exponents."""
    ours, theirs = dict(first), dict(second)
    return max((power for power in {**ours, **theirs} if ours.get(power) != theirs.get(power)), default=0)


def realisation_dimension(blocks: tuple[StageBlock, ...], chosen: int, drop: int) -> int:
    """dim W of the principal part, twisted so that an eigenvalue of drop ``drop`` in block ``chosen`` is 0."""
    own = blocks[chosen]
    others = sum(
        block.multiplicity * (slope_between(block.exponent, own.exponent) + 1)
        for place, block in enumerate(blocks)
        if place != chosen
    )
    return others + own.multiplicity - drop


def _choice(blocks: tuple[StageBlock, ...]) -> Choice:
    """The choice with the smallest dim W; the first among equals."""
    best: Choice | None = None
    for place, block in enumerate(blocks):
        slot = max(range(len(block.slots)), key=lambda k: (block.slots[k].drop, -k))
        dimension = realisation_dimension(blocks, place, block.slots[slot].drop)
        if best is None or dimension < best.dimension:
            best = Choice(place, slot, block.exponent, block.slots[slot].value, dimension, len(blocks) == 1)
    if best is None:
        raise ValueError("a pole has no blocks")
    return best


def _step(stage: Stage, choices: tuple[Choice, ...], fall: int) -> Step | None:
    """The step with these choices, None where c = 0 or a drop would become negative."""
    parameter = stage.excess - total(choice.value for choice in choices)
    if not parameter:
        return None
    poles = []
    for blocks, choice in zip(stage.poles, choices, strict=True):
        if blocks[choice.block].slots[choice.slot].drop < fall:
            return None
        poles.append(_moved(blocks, choice, fall, -parameter))
    return Step(stage, choices, parameter, Stage(tuple(poles), -parameter))


def _moved(blocks: tuple[StageBlock, ...], choice: Choice, fall: int, mu: Value) -> tuple[StageBlock, ...]:
    """The blocks of a pole after the twist and the middle convolution."""
    found = []
    for place, block in enumerate(blocks):
        exponent = difference(block.exponent, choice.exponent)
        shift = mu * ((exponent[0][0] if exponent else 0) + 1) - choice.value
        kept = []
        for number, slot in enumerate(block.slots):
            if (place, number) == (choice.block, choice.slot):
                if slot.drop > fall:
                    kept.append(Slot(ZERO, slot.drop - fall))
            else:
                kept.append(Slot(slot.value + shift, slot.drop))
        if kept:
            found.append(StageBlock(exponent, tuple(kept)))
    return tuple(found)


def difference(first: Coefficients, second: Coefficients) -> Coefficients:
    """q − q' of two exponents."""
    ours, theirs = dict(first), dict(second)
    powers = sorted({*ours, *theirs}, reverse=True)
    terms = ((power, ours.get(power, ZERO) - theirs.get(power, ZERO)) for power in powers)
    return tuple((power, value) for power, value in terms if value)


def principal_scalars(exponent: Coefficients, residue: Value) -> list[Value]:
    """The coefficients of dq + residue·dz/z: entry k belongs to z^(−k−1) dz."""
    order = exponent[0][0] if exponent else 0
    scalars = [residue] + [ZERO] * order
    for power, value in exponent:
        scalars[power] = value * Fraction(-power)
    return scalars
