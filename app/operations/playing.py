"""The descent played: the problem itself at every step, each one a reflection that lowers the rank most.

Unlike ``descent.py``, which phrases the reduction of the dimension vector, this carries the problem along, so that
any step can be taken as a problem of its own.
"""

from dataclasses import dataclass

from app.errors import Refused
from app.local.formal_type import Pole
from app.local.problem import Problem
from app.operations.reflection import Choice, reflect_at
from app.operations.result import refusal
from app.roots.build import slope_of_difference

MOST_STEPS = 60


@dataclass(frozen=True)
class Played:
    """The problem before the first step or after a step, with the step in words ("" before the first)."""

    problem: Problem
    words: str


@dataclass(frozen=True)
class Play:
    """The stages of a descent and why it ends."""

    stages: tuple[Played, ...]
    end: str


def play(problem: Problem) -> Play:
    """The descent as problems: rank 1, data that no reflection lowers, a condition that fails, or ``MOST_STEPS``.

    Raises ``Refused`` for ramified data.
    Cost: at most ``MOST_STEPS`` reflections of the whole problem.
    """
    if problem.ramified:
        raise refusal("The descent is played for unramified data.", "exponents with integer powers")
    stages = [Played(problem, "")]
    while len(stages) <= MOST_STEPS:
        current = stages[-1].problem
        if current.rank == 1:
            return Play(tuple(stages), "The rank is 1.")
        chosen = [_best(pole) for pole in current.poles]
        if 2 * current.rank <= sum(dimension for _, dimension in chosen):
            return Play(tuple(stages), "No reflection lowers the rank: the data are fundamental.")
        try:
            result = reflect_at(current, [choice for choice, _ in chosen])
        except Refused as fault:
            return Play(tuple(stages), fault.message)
        stages.append(Played(result.problem, result.words))
    return Play(tuple(stages), f"More than {MOST_STEPS} steps are not played.")


def _best(pole: Pole) -> tuple[Choice, int]:
    """The choice whose minimal realisation needs the smallest dimension, and that dimension; the first among equals."""
    found: tuple[Choice, int] | None = None
    for block in pole.blocks:
        others = sum(
            other.multiplicity * (slope_of_difference(other.exponent, block.exponent) + 1)
            for other in pole.blocks
            if other is not block
        )
        for eigenvalue in block.residue:
            dimension = others + block.multiplicity - eigenvalue.nullities[0]
            if found is None or dimension < found[1]:
                found = (Choice(block.exponent, eigenvalue.value), dimension)
    if found is None:
        raise ValueError("a pole has no blocks")
    return found
