"""Readings: several connections that share one quiver variety.

Hypothesis: one core pole, no slope of a difference of exponents there above 2, every other pole with one block.
Twisted so that all first eigenvalues of one-block poles are 0, and moved so that the core pole lies at infinity, the
connection is d − (Ax + B + T + Q(x − S)^(−1)P)dx with A and T diagonal.  The core vertices with one entry a of A make
one *part* of the core, the first leg vertices of the logarithmic poles are one more part, and every two vertices of
different parts are joined by one edge.  The entry t of T (of S) is a further label of a vertex.

Symplectic changes of (d/dx, x) act on the label a of every part as Möbius maps and scale the label t.  Any part J may
so be sent to infinity, or none: that is one connection for each of the k parts, and one more.

    part J at infinity   rank Σ α over the other parts; a logarithmic pole with residue of rank α_i for each i in J
    none                 rank Σ α over all parts, one pole, of order 3

λ and the legs stay: a vertex i carries the class with eigenvalues −λ_i, −λ_i − λ_(i,1), …, as a block at the core pole
or as the non-zero part of a residue.  p(α) stays, and so does the verdict.

Sources: Harnad, Comm. Math. Phys. 166 (1994); Boalch, Publ. IHES 116 (2012).
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from fractions import Fraction

from app.errors import Refused
from app.exact.limits import OverLimit
from app.exact.value import ONE, ZERO, Value
from app.local.formal_type import Block, Pole, Position
from app.local.problem import Problem
from app.operations.classes import class_of_slots
from app.operations.result import Result, checked, refusal
from app.operations.twist import NO_EXPONENT, exponent_of
from app.roots.build import Slot, quiver_of, slope_of_difference, slots
from app.roots.form import core_groups


@dataclass(frozen=True)
class Reading(Result):
    """A ``Result`` with the vertices sent to infinity (none: ``()``), and whether it is the problem itself."""

    part: tuple[str, ...] = ()
    is_given: bool = False


@dataclass(frozen=True)
class Impossible:
    """A part that cannot be sent to infinity, with the reason."""

    part: tuple[str, ...]
    reason: str


@dataclass(frozen=True)
class _Vertex:
    """A vertex of the core in the wide sense: id, label t (None: not known as a number), α, and its class as slots."""

    id: str
    label: Value | None
    dimension: int
    slots: tuple[Slot, ...]


@dataclass(frozen=True)
class _Part:
    """The vertices with one label a; ``label`` is None for a = ∞."""

    label: Value | None
    vertices: tuple[_Vertex, ...]


def readings(problem: Problem) -> tuple[Reading | Impossible, ...]:
    """All k + 1 readings: every part sent to infinity, in order, and last none.  The problem itself is one of them.

    New coefficients that are no polynomials in the symbols, and new positions that are no numbers and no symbols of
    their own, become new symbols, on which quiver and verdict do not depend.
    Raises ``Refused`` when the hypothesis fails (see the head of the module).  Cost: one pass over the data a reading.
    """
    parts = _parts(problem)
    found: list[Reading | Impossible] = []
    for chosen in (*range(len(parts)), None):
        vertices = () if chosen is None else tuple(vertex.id for vertex in parts[chosen].vertices)
        given = parts[chosen].label is None if chosen is not None else all(part.label is not None for part in parts)
        if given:
            found.append(Reading(problem, "The problem as it is given.", "", vertices, True))
            continue
        try:
            found.append(_Reader(problem, parts, chosen).reading(vertices))
        except Refused as fault:
            found.append(Impossible(vertices, fault.message))
    return tuple(found)


def _parts(problem: Problem) -> list[_Part]:
    """The parts: by second-order coefficient at the core pole, then the first leg vertices of logarithmic poles."""
    if problem.ramified:
        raise refusal("Readings are defined for unramified data.", "exponents with integer powers")
    if problem.reading == "local_monodromy":
        raise refusal("Readings are those of residues, and local monodromies are given.", "residues")
    quiver = quiver_of(problem)
    if len(core_groups(quiver)) > 1:
        raise refusal("Several poles have core vertices.", "one pole with two blocks or more")
    blocks = problem.poles[quiver.base].blocks
    steep = max(slope_of_difference(first.exponent, second.exponent) for first in blocks for second in blocks)
    if steep > 2:
        raise refusal(f"Two exponents at the core pole differ with slope {steep}.", "slopes of at most 2")
    parameters = {vertex.id: vertex.parameter for vertex in quiver.vertices}
    core: dict[Value, list[_Vertex]] = {}
    for number, block in enumerate(blocks):
        vertex = f"{quiver.base}.{number}"
        coefficients = dict(block.exponent.terms)
        # q = a x²/2 + t x at infinity; only the differences of a and t matter
        second = coefficients.get(Fraction(2), ZERO) * 2
        first = coefficients.get(Fraction(1), ZERO)
        own = _Vertex(vertex, first, block.multiplicity, _class_at(parameters[vertex], slots(block)))
        core.setdefault(second, []).append(own)
    parts = [_Part(label, tuple(vertices)) for label, vertices in core.items()]
    log = []
    for number, pole in enumerate(problem.poles):
        places = slots(pole.blocks[0])
        if number != quiver.base and len(places) > 1:
            vertex = f"{number}.0.1"
            dimension = sum(slot.drop for slot in places[1:])
            label = _seen_from(problem, quiver.base, pole.at)
            log.append(_Vertex(vertex, label, dimension, _class_at(parameters[vertex], places[1:])))
    return [*parts, _Part(None, tuple(log))] if log else parts


def _class_at(parameter: Value, places: Sequence[Slot]) -> tuple[Slot, ...]:
    """The class with first eigenvalue −λ_i and the same differences along the leg."""
    shift = -parameter - places[0].value
    return tuple(Slot(place.value + shift, place.drop) for place in places)


def _seen_from(problem: Problem, base: int, at: Position) -> Value | None:
    """The position in a coordinate with the core pole at infinity, 1/(x − t); None where it is no known number."""
    center = problem.poles[base].at.value
    if center is None:
        return at.value
    if at.value is None:
        return ZERO
    return _quotient(ONE, at.value - center)


def _quotient(first: Value, second: Value | None) -> Value | None:
    """The quotient where the second is a number; None where it is not."""
    if second is None or not second.is_constant:
        return None
    try:
        return first / second
    except OverLimit:
        return None


class _Reader:
    """One reading: the part at infinity, and the labels of the others after the symplectic change."""

    def __init__(self, problem: Problem, parts: Sequence[_Part], chosen: int | None) -> None:
        self.problem = problem
        self.parts = parts
        self.chosen = chosen
        self.names = _fresh_names(problem)
        self.new_symbols: list[str] = []
        # the label that goes to infinity: that of the chosen part, or one that no part has
        known = {part.label for part in parts}
        free = next(Value.rational(n) for n in range(len(parts) + 1) if Value.rational(n) not in known)
        self.center = free if chosen is None else parts[chosen].label or ZERO

    def reading(self, vertices: tuple[str, ...]) -> Reading:
        """The connection with the chosen part at infinity.

        With a ↦ −1/(a − c) and t ↦ t/(a − c) for finite parts, a ↦ 0 and t ↦ −t for the part that was at infinity, and
        poles at t for the part that goes there.
        """
        finite = [part for number, part in enumerate(self.parts) if number != self.chosen]
        gone = self.parts[self.chosen].vertices if self.chosen is not None else ()
        rank = sum(vertex.dimension for part in finite for vertex in part.vertices)
        if rank == 0:
            raise refusal("No part is left, so the rank would be 0.")
        core = Pole(Position(None), tuple(block for part in finite for block in self._blocks(part, finite)))
        poles = [self._log_pole(vertex, rank) for vertex in gone]
        name = f"{self.problem.name}, {' + '.join(vertices) + ' at infinity' if vertices else 'no part at infinity'}"
        problem = Problem((core, *poles), self._symbols(core, poles), name.lstrip(", "), base=0)
        words = (
            f"{'The part ' + ' + '.join(vertices) if vertices else 'No part'} of the core is sent to infinity: rank "
            f"{rank}, {len(poles)} logarithmic pole{'' if len(poles) == 1 else 's'} besides the pole at infinity."
        )
        if self.new_symbols:
            words += f" New symbols stand for quotients of the old ones: {', '.join(self.new_symbols)}."
        return Reading(checked(problem), words, "One core pole with slopes of at most 2.", vertices)

    def _blocks(self, part: _Part, finite: Sequence[_Part]) -> Iterator[Block]:
        scale = None if part.label is None else part.label - self.center
        label: Value | None = ZERO if scale is None else _quotient(-ONE, scale)
        if label is None:
            label = self._new()
        for vertex in part.vertices:
            slope: Value | None = None
            if vertex.label is not None:
                slope = -vertex.label if scale is None else _quotient(vertex.label, scale)
            terms = {Fraction(2): label / 2, Fraction(1): self._new() if slope is None else slope}
            if len(finite) == 1:  # the common coefficient is a twist
                del terms[Fraction(2)]
            if len(finite) == 1 and len(part.vertices) == 1:
                del terms[Fraction(1)]
            yield Block(exponent_of(terms), class_of_slots(vertex.slots, "residue", f"Vertex {vertex.id}"))

    def _log_pole(self, vertex: _Vertex, rank: int) -> Pole:
        if vertex.dimension > rank:
            raise refusal(
                f"The residue for vertex {vertex.id} would have rank {vertex.dimension}, larger than the rank {rank} "
                "of the connection, so no irreducible system has the given data."
            )
        places = (Slot(ZERO, rank - vertex.dimension), *vertex.slots)
        residue = class_of_slots(places, "residue", f"Vertex {vertex.id}")
        return Pole(self._position(vertex.label), (Block(NO_EXPONENT, residue),))

    def _position(self, label: Value | None) -> Position:
        """The label if it may be a position: a number, or a symbol that occurs nowhere else."""
        if label is not None and label.is_constant:
            return Position(label)
        if label is not None:
            (name, *more) = label.symbols()
            if not more and label == Value.symbol(name) and self._occurrences(name) == 1:
                return Position(label)
        return Position(self._new())

    def _occurrences(self, name: str) -> int:
        labels = [part.label for part in self.parts] + [v.label for part in self.parts for v in part.vertices]
        values = [slot.value for part in self.parts for v in part.vertices for slot in v.slots]
        return sum(value is not None and name in value.symbols() for value in (*labels, *values))

    def _new(self) -> Value:
        name = next(self.names)
        self.new_symbols.append(name)
        return Value.symbol(name)

    def _symbols(self, core: Pole, poles: Sequence[Pole]) -> tuple[str, ...]:
        """The old symbols that still occur in their order, then the new ones."""
        used: set[str] = set(self.new_symbols)
        for pole in (core, *poles):
            used |= pole.at.value.symbols() if pole.at.value is not None else frozenset()
            for block in pole.blocks:
                used = used.union(
                    *(c.symbols() for _, c in block.exponent.terms), *(e.value.symbols() for e in block.residue)
                )
        return tuple(name for name in (*self.problem.symbols, *self.new_symbols) if name in used)


def _fresh_names(problem: Problem) -> Iterator[str]:
    """Names c1, c2, … without those that the problem uses."""
    number = 0
    while True:
        number += 1
        if f"c{number}" not in problem.symbols:
            yield f"c{number}"
