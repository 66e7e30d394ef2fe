"""Ascent: matrices for the last stage of a descent, carried up to the problem's own data.

Every step is undone by the middle convolution with the opposite parameter and the twist back; all ranks on the way are
known from the data, so that exact kernels check them and floating kernels need not guess.
"""

from collections.abc import Callable, Sequence

from app.connection.middle_convolution import middle_convolution, twisted
from app.connection.realisation import M
from app.connection.stages import Descent, Stage, Step, principal_scalars
from app.progress import Progress


def ascend(
    descent: Descent,
    bottom: Sequence[Sequence[M]],
    progress: Progress,
    shorten: Callable[[list[list[M]]], list[list[M]]] = lambda parts: parts,
) -> list[list[M]]:
    """Principal parts of the problem, from parts of the descent's last stage (residues adding up to its excess).

    ``shorten`` is a common gauge applied after every step, to keep entries short.

    Raises NotTheRank where the given parts are not what they should be.
    Cost: one middle convolution a step, of rank up to the problem's.
    """
    parts = [list(part) for part in bottom]
    for number, step in enumerate(reversed(descent.steps)):
        progress.check()
        progress.report(f"ascent: rank {step.lower.rank} to {step.upper.rank}", number / len(descent.steps))
        parts = shorten(_up(step, parts))
    return parts


def _up(step: Step, parts: list[list[M]]) -> list[list[M]]:
    """One step up: mc with c, then the twist back.

    The lower data are in the normalisation that the step down left, so the first part of a twist is already done.
    """
    infinity = _at_infinity(step)
    finite = [place for place in range(len(parts)) if place != infinity]
    raised = middle_convolution(
        [parts[place] for place in finite],
        step.parameter,
        dimensions=[step.choices[place].dimension for place in finite],
        rank=step.upper.rank,
    )
    found: list[list[M]] = [[] for _ in parts]
    for place, part in zip(finite, raised, strict=True):
        found[place] = part
    if infinity is not None:
        # the residues have to add up to c·1
        sum_of_others = raised[0][0]
        for part in raised[1:]:
            sum_of_others = sum_of_others + part[0]
        found[infinity] = [(-sum_of_others).shifted(step.parameter)]
    return [
        twisted(part, principal_scalars(choice.exponent, choice.value))
        for part, choice in zip(found, step.choices, strict=True)
    ]


def _at_infinity(step: Step) -> int | None:
    """The one-block pole with the largest realisation, which then need not be realised; None where there is none."""
    single = [place for place, choice in enumerate(step.choices) if choice.single]
    return max(single, key=lambda place: step.choices[place].dimension) if len(step.choices) > 1 and single else None


def parts_of_rank_one(stage: Stage, sample: M) -> list[list[M]]:
    """The 1 × 1 principal parts of a stage of rank 1, in the kernel of ``sample``."""
    found = []
    for blocks in stage.poles:
        (block,) = blocks
        scalars = principal_scalars(block.exponent, block.slots[0].value)
        found.append([sample.scalar(1, scalar) for scalar in scalars])
    return found
