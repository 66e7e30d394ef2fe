"""The operations offered at a vertex, by name, each with its condition and whether it holds.

    exchange     leg vertex    exchange the two eigenvalues that meet at the vertex
    first        leg vertex    list the eigenvalue behind the vertex first
    reflect      core vertex   twist, middle convolution, twist back; at several core poles one offer for each ε
    normalise    core vertex   twist so that the block's exponent and first eigenvalue are 0
    base         any           make the vertex's pole the base pole
    reading      any           send the vertex's part of the core to infinity

``all_operations`` lists them; ``carry_out`` does one.  Operations on the whole problem (general twists, Möbius maps,
regular points, the reading with no part at infinity) have modules of their own.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import islice, product
from typing import Literal, get_args

from app.errors import Refused
from app.local.problem import Problem
from app.operations.poles import change_base
from app.operations.readings import Reading, readings
from app.operations.reflection import reflect
from app.operations.reordering import reorder
from app.operations.result import Result, refusal
from app.operations.twist import ScalarPart, negative, twist
from app.roots.build import quiver_of
from app.roots.form import core_groups, pairing_with
from app.roots.quiver import Quiver, Vertex

OperationKey = Literal["exchange", "first", "reflect", "normalise", "base", "reading"]

MOST_EPSILONS = 24
"""Largest number of sums ε offered at one core vertex, those with the largest (α, ε) first."""


@dataclass(frozen=True)
class Offer:
    """An operation at a vertex.

    ``vertices`` are the arguments of ``carry_out``: the vertex, or the core vertices of ε.  ``words`` say what happens
    to the connection where the condition holds, and which condition fails where it does not.
    """

    key: OperationKey
    name: str
    vertices: tuple[str, ...]
    condition: str
    holds: bool
    words: str


_NAMES: dict[OperationKey, tuple[str, str]] = {
    "exchange": (
        "Exchange neighbouring eigenvalues",
        "The two places of the leg belong to different eigenvalues with one place each.",
    ),
    "first": ("List this eigenvalue first", "The eigenvalue is not the first one already."),
    "reflect": (
        "Middle convolution",
        "The parameter λ(ε) is not 0, the Fuchs relation holds, and no multiplicity becomes negative.",
    ),
    "normalise": (
        "Twist to exponent 0 and first eigenvalue 0",
        "Another pole takes the residue over.",
    ),
    "base": ("Make this the base pole", "The pole is not the base pole already."),
    "reading": (
        "Send this part of the core to infinity",
        "Only one pole has core vertices, slopes there are at most 2, and the part is not at infinity already.",
    ),
}


def all_operations(problem: Problem, vertex: str) -> tuple[Offer, ...]:
    """Every operation that is offered at a vertex of the problem's quiver.

    Raises ``Refused`` for ramified data and where there is no such vertex.
    Cost: every offered operation is carried out once to know whether it holds.
    """
    quiver, found = _vertex(problem, vertex)
    wanted: list[tuple[OperationKey, tuple[str, ...]]]
    if found.role == "leg":
        wanted = [("exchange", (vertex,)), ("first", (vertex,))]
    else:
        wanted = [("reflect", epsilon) for epsilon in _epsilons(quiver, vertex)]
        wanted.append(("normalise", (vertex,)))
    wanted.append(("base", (vertex,)))
    if found.leg <= 1:
        wanted.append(("reading", (vertex,)))
    return tuple(_offer(problem, key, vertices) for key, vertices in wanted)


def carry_out(problem: Problem, key: str, vertices: Sequence[str]) -> Result:
    """Carry out the operation with this key at these vertices; raises ``Refused`` naming the condition that fails."""
    if key not in get_args(OperationKey):
        raise refusal(f"There is no operation {key[:40]!r}.", f"one of {', '.join(get_args(OperationKey))}")
    if not vertices:
        raise refusal("No vertex is given.", "the vertices of an offer")
    if key == "reflect":
        return reflect(problem, vertices)
    single: dict[str, Callable[[Problem, Vertex], Result]] = {
        "exchange": lambda p, v: reflect(p, [v.id]),
        "first": _list_first,
        "normalise": _normalise,
        "base": _make_base,
        "reading": _read,
    }
    return single[key](problem, _vertex(problem, vertices[0])[1])


def _offer(problem: Problem, key: OperationKey, vertices: tuple[str, ...]) -> Offer:
    name, condition = _NAMES[key]
    if len(vertices) > 1:
        name = f"{name} at {' + '.join(vertices)}"
    try:
        result = carry_out(problem, key, vertices)
    except Refused as fault:
        return Offer(key, name, vertices, condition, False, fault.message)
    return Offer(key, name, vertices, condition, True, result.words)


def _vertex(problem: Problem, vertex: str) -> tuple[Quiver, Vertex]:
    if problem.ramified:
        raise refusal("Operations at vertices are defined for unramified data.", "exponents with integer powers")
    quiver = quiver_of(problem)
    found = next((v for v in quiver.vertices if v.id == vertex), None)
    if found is None:
        raise refusal(f"The quiver has no vertex {vertex[:40]!r}.", "the id of a vertex")
    return quiver, found


def _epsilons(quiver: Quiver, vertex: str) -> list[tuple[str, ...]]:
    """Sums of core vertices, one of each core pole, through the given one; those with the largest (α, ε) first."""
    groups = []
    for group in core_groups(quiver):
        own = [v for v in group if quiver.vertices[v].id == vertex]
        heights = {v: pairing_with(quiver, quiver.dimension, v) for v in own or group}
        groups.append(sorted(heights, key=heights.__getitem__, reverse=True))
    return [tuple(quiver.vertices[v].id for v in epsilon) for epsilon in islice(product(*groups), MOST_EPSILONS)]


def _list_first(problem: Problem, vertex: Vertex) -> Result:
    """The eigenvalue of the place behind the leg vertex comes to the first place."""
    residue = problem.poles[vertex.pole].blocks[vertex.block].residue
    owners = [number for number, e in enumerate(residue) for _ in e.nullities]
    owner = owners[vertex.leg]
    if owner == 0:
        raise refusal("The eigenvalue behind this vertex is the first one already.")
    order = [owner, *(k for k in range(len(residue)) if k != owner)]
    return reorder(problem, vertex.pole, vertex.block, order)


def _normalise(problem: Problem, vertex: Vertex) -> Result:
    """Twist exponent and first eigenvalue away; the base pole, or the first other one, takes the residue."""
    block = problem.poles[vertex.pole].blocks[vertex.block]
    base = quiver_of(problem).base
    other = base if base != vertex.pole else next((k for k in range(len(problem.poles)) if k != vertex.pole), None)
    value = block.residue[0].value
    if other is None:
        raise refusal("There is no other pole that could take the residue over.")
    parts = {vertex.pole: ScalarPart(negative(block.exponent), -value), other: ScalarPart(residue=value)}
    return twist(problem, parts)


def _make_base(problem: Problem, vertex: Vertex) -> Result:
    if quiver_of(problem).base == vertex.pole:
        raise refusal(f"Pole {vertex.pole + 1} is the base pole already.")
    return change_base(problem, vertex.pole)


def _read(problem: Problem, vertex: Vertex) -> Result:
    for reading in readings(problem):
        if vertex.id in reading.part:
            if not isinstance(reading, Reading):
                raise refusal(reading.reason)
            if reading.is_given:
                raise refusal("This part is at infinity already: it is the problem as it is given.")
            return reading
    raise refusal(
        "The vertex belongs to no part of the core.", "a core vertex, or the first vertex of a leg on all of it"
    )
