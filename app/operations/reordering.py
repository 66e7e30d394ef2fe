"""Reordering the eigenvalues of a class, and the exchange of two neighbours at a leg vertex.

The connection stays as it is; only the order in which its eigenvalues are listed changes, and with it the quiver's
vector and parameters.  Exchanging two neighbouring places of a leg is the reflection at the leg vertex between them.
"""

from collections.abc import Sequence
from dataclasses import replace

from app.exact.number import write_number
from app.local.formal_type import Block
from app.local.problem import ForcedValue, Problem
from app.operations.result import Result, pole_at, refusal


def reorder(problem: Problem, pole: int, block: int, order: Sequence[int]) -> Result:
    """The same connections with the eigenvalues of one block listed in another order.

    ``order[k]`` is the present index of the eigenvalue that comes to place k.  Verdicts and dimension stay.  Raises
    ``Refused`` unless ``order`` lists every index of the block's eigenvalues once.  Cost: the length of the class.
    """
    old = _block_at(problem, pole, block)
    if sorted(order) != list(range(len(old.residue))):
        raise refusal(
            f"The new order does not list each of the {len(old.residue)} eigenvalues once.",
            f"the numbers 0 to {len(old.residue) - 1} in some order",
            f"/poles/{pole}/blocks/{block}/residue",
        )
    new = replace(old, residue=tuple(old.residue[k] for k in order))
    words = (
        f"The connection stays; the eigenvalues of block {block + 1} at pole {pole + 1} are listed in the order "
        + ", ".join(write_number(e.value, problem.symbols) for e in new.residue)
        + "."
    )
    return Result(_with_block(problem, pole, block, new, order), words)


def exchange(problem: Problem, pole: int, block: int, leg: int) -> Result:
    """The reflection at leg vertex ``leg`` (1, 2, …): the places ``leg`` and ``leg`` + 1 of the leg change places.

    Raises ``Refused`` when there is no such vertex, when both places belong to one eigenvalue (the parameter is 0 and
    there is nothing to exchange), and when one of the two eigenvalues has more places: then a single exchange would
    tear it apart, which no listing of eigenvalues does; reordering whole eigenvalues is offered instead.
    Cost: the length of the class.
    """
    residue = _block_at(problem, pole, block).residue
    owners = [number for number, e in enumerate(residue) for _ in e.nullities]
    at = f"/poles/{pole}/blocks/{block}/residue"
    if not 1 <= leg < len(owners):
        raise refusal(f"The leg of block {block + 1} at pole {pole + 1} has no vertex {leg}.", at=at)
    first, second = owners[leg - 1], owners[leg]
    if first == second:
        raise refusal(
            f"Both places belong to the eigenvalue {write_number(residue[first].value, problem.symbols)}, which has a "
            "larger Jordan block: the parameter is 0, and there is nothing to exchange.",
            "a vertex between two different eigenvalues",
            at,
        )
    torn = [k for k in (first, second) if len(residue[k].nullities) > 1]
    if torn:
        raise refusal(
            f"The eigenvalue {write_number(residue[torn[0]].value, problem.symbols)} has several places along the leg, "
            "and a single exchange would tear them apart, which is no admissible order.",
            "a reordering of whole eigenvalues",
            at,
        )
    order = list(range(len(residue)))
    order[first], order[second] = order[second], order[first]
    result = reorder(problem, pole, block, order)
    words = (
        f"The connection stays; its eigenvalues {write_number(residue[first].value, problem.symbols)} and "
        f"{write_number(residue[second].value, problem.symbols)} at pole {pole + 1} change places."
    )
    return Result(result.problem, words, "The two places belong to different eigenvalues with one place each.")


def _block_at(problem: Problem, pole: int, block: int) -> Block:
    blocks = pole_at(problem, pole).blocks
    if not 0 <= block < len(blocks):
        raise refusal(f"Pole {pole + 1} has no block {block + 1}.", f"a block from 1 to {len(blocks)}")
    return blocks[block]


def _with_block(problem: Problem, pole: int, block: int, new: Block, order: Sequence[int]) -> Problem:
    old = problem.poles[pole]
    blocks = (*old.blocks[:block], new, *old.blocks[block + 1 :])
    poles = (*problem.poles[:pole], replace(old, blocks=blocks), *problem.poles[pole + 1 :])
    forced = problem.forced
    if forced is not None and (forced.pole, forced.block) == (pole, block):
        forced = ForcedValue(pole, block, list(order).index(forced.eigenvalue))
    return replace(problem, poles=poles, forced=forced)
