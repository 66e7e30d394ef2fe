"""The quiver of unramified local data.

One pole is the base.  Core vertices are the blocks of the base and of every further pole with two blocks or more;
each block's class adds a leg.  A pole other than the base with one block has no core vertex: its leg hangs on every
core vertex of the base.  The dimension vector then satisfies 2p(α) = Σ dim O − 2(n² − 1).

Source: Crawley-Boevey, Duke Math. J. 118 (2003) for log poles; Boalch, Publ. IHES 116 (2012) and Hiroe,
Duke Math. J. 166 (2017) for unramified irregular poles.
"""

from dataclasses import dataclass
from itertools import combinations

from app.exact.value import Value, total
from app.local.formal_type import Block, Exponent, Pole
from app.local.orbit import irregularity_of_endomorphisms
from app.local.problem import Problem
from app.roots.quiver import Quiver, Vertex


@dataclass(frozen=True)
class Slot:
    """One place along a leg: an eigenvalue and the drop of rank there."""

    value: Value
    drop: int


def slots(block: Block) -> tuple[Slot, ...]:
    """Eigenvalues in document order, each repeated as often as its largest Jordan block is long.

    The k-th drop is rank Π_{l<k}(L − ξ_l) − rank Π_{l≤k}(L − ξ_l).
    """
    return tuple(Slot(e.value, drop) for e in block.residue for drop in e.nullities)


def slope_of_difference(first: Exponent, second: Exponent) -> int:
    """Slope of q − q' for unramified exponents: the largest power where the coefficients differ, 0 if none does."""
    ours, theirs = dict(first.terms), dict(second.terms)
    differing = [power for power in {**ours, **theirs} if ours.get(power) != theirs.get(power)]
    return int(max(differing, default=0))


def base_pole(problem: Problem) -> int:
    """Index of the base pole: the chosen one, else the largest Irr(End), the lowest index among equals."""
    if problem.base is not None:
        return problem.base
    irregularities = [irregularity_of_endomorphisms(pole) for pole in problem.poles]
    return irregularities.index(max(irregularities))


def quiver_of(problem: Problem) -> Quiver:
    """The quiver, dimension vector and parameters of a problem.

    Hypothesis: every block is unramified (``ValueError`` otherwise).
    Cost: the square of the number of blocks at a pole, plus the number of leg vertices.
    """
    if problem.ramified:
        raise ValueError("the quiver is defined for unramified data only")
    base = base_pole(problem)
    core = _core_vertices(problem, base)
    legs = [
        vertex
        for i, pole in enumerate(problem.poles)
        for j, block in enumerate(pole.blocks)
        for vertex in _leg_vertices(i, j, block)
    ]
    vertices = (*core, *legs)
    return Quiver(base, vertices, _edges(problem, base, vertices))


def _core_vertices(problem: Problem, base: int) -> list[Vertex]:
    poles = problem.poles
    shared = total(pole.blocks[0].residue[0].value for i, pole in enumerate(poles) if i != base and _hangs(pole))
    others = [i for i, pole in enumerate(poles) if i != base and not _hangs(pole)]
    found = []
    for i in (base, *others):
        for j, block in enumerate(poles[i].blocks):
            parameter = -block.residue[0].value
            if i == base:
                parameter = parameter - shared
            found.append(Vertex(f"{i}.{j}", "core", i, j, 0, block.multiplicity, parameter))
    return found


def _hangs(pole: Pole) -> bool:
    """Whether a pole other than the base has no core vertex of its own."""
    return len(pole.blocks) == 1


def _leg_vertices(pole: int, index: int, block: Block) -> list[Vertex]:
    places = slots(block)
    dimension = block.multiplicity
    found = []
    for k in range(1, len(places)):
        dimension -= places[k - 1].drop
        parameter = places[k - 1].value - places[k].value
        found.append(Vertex(f"{pole}.{index}.{k}", "leg", pole, index, k, dimension, parameter))
    return found


def _edges(problem: Problem, base: int, vertices: tuple[Vertex, ...]) -> tuple[tuple[int, int, int], ...]:
    """All edges (i, j, multiplicity), i < j, in the order of their later vertex."""
    core = [k for k, vertex in enumerate(vertices) if vertex.role == "core"]
    base_core = [k for k in core if vertices[k].pole == base]
    index_of = {(vertices[k].pole, vertices[k].block): k for k in core}
    found: list[tuple[int, int, int]] = []
    for a, b in combinations(core, 2):
        first, second = vertices[a], vertices[b]
        if first.pole == second.pole:
            blocks = problem.poles[first.pole].blocks
            count = slope_of_difference(blocks[first.block].exponent, blocks[second.block].exponent) - 1
        else:
            count = int(first.pole == base)
        if count:
            found.append((a, b, count))
    for k, vertex in enumerate(vertices):
        if vertex.role == "core":
            continue
        if vertex.leg > 1:
            found.append((k - 1, k, 1))
        elif (vertex.pole, vertex.block) in index_of:
            found.append((index_of[vertex.pole, vertex.block], k, 1))
        else:
            found.extend((c, k, 1) for c in base_core)
    return tuple(sorted(found, key=lambda edge: (edge[1], edge[0])))
