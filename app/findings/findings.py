"""The result of examining a problem, and the function that makes it."""

from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property, lru_cache
from itertools import combinations
from typing import Any

from app.exact.value import Value, modulo_one
from app.existence.problems import additive_verdict, multiplicative_verdict
from app.existence.verdict import Verdict
from app.findings.families import Family, families
from app.local.newton import irregularity, newton_polygon, slopes
from app.local.orbit import largest_slope, moduli_dimension, orbit_dimension, rigidity_index
from app.local.problem import Problem
from app.operations.descent import DescentStep, descent
from app.roots.build import quiver_of
from app.roots.dynkin import type_name
from app.roots.form import p_of, support
from app.roots.orbit_diagram import OrbitDiagram, orbit_diagram
from app.roots.positive import RootClass, root_class
from app.roots.quiver import Quiver
from app.roots.reduction import Reduction, reduce


@dataclass(frozen=True)
class Solved:
    """The value that the Fuchs relation forced for "*": JSON pointer and value."""

    at: str
    value: Value


@dataclass(frozen=True)
class OrbitFigure:
    """Dimension of the orbit at a pole, and the largest slope of a difference of exponents there."""

    pole: int
    dimension: int
    slope: Fraction


@dataclass(frozen=True)
class FormalFigure:
    """Irregularity, slopes with multiplicities and Newton polygon of the formal type at a pole."""

    pole: int
    irregularity: int
    slopes: tuple[tuple[Fraction, int], ...]
    newton_polygon: tuple[tuple[int, int], ...]


@dataclass(frozen=True)
class Resonance:
    """Two eigenvalues of one block that differ by a non-zero integer: second − first = difference > 0."""

    pole: int
    block: int
    first: Value
    second: Value
    difference: int


@dataclass(frozen=True)
class Findings:
    """Everything that the program says about a problem.

    ``quiver``, ``support_type``, ``root_class`` and ``p`` are None for ramified data, which have ``diagram``; it is
    None for all others.  ``additive`` is None where local
    monodromies are given, ``multiplicative`` where a pole is irregular.
    """

    problem: Problem
    rank: int
    dimension: int
    rigidity_index: int
    fuchs_defect: Value
    solved: Solved | None
    orbits: tuple[OrbitFigure, ...]
    formal: tuple[FormalFigure, ...]
    quiver: Quiver | None
    diagram: OrbitDiagram | None
    support_type: str | None
    root_class: RootClass | None
    p: int | None
    additive: Verdict | None
    multiplicative: Verdict | None
    resonances: tuple[Resonance, ...]
    descent: tuple[DescentStep, ...]
    families: tuple[Family, ...]

    @property
    def fuchs_holds(self) -> bool:
        """Whether the Fuchs relation holds: the defect is 0, or an integer where local monodromies are given."""
        if self.problem.reading == "local_monodromy":
            return self.fuchs_defect.is_integer
        return self.fuchs_defect.is_zero

    @cached_property
    def warnings(self) -> tuple[str, ...]:
        """Cautions in words, for readers of pages and terminals; each follows from other entries."""
        found = []
        if self.dimension < 0:
            found.append(
                f"The expected dimension {self.dimension} is negative: every system with these data is reducible."
            )
        if self.resonances:
            found.append(
                "There are resonances: exp(2πi·residue) then only lies in the closure of the class of the local "
                "monodromy, and the multiplicative verdict speaks of the classes of exp(2πi·residue)."
            )
        return tuple(found)

    def as_json(self) -> dict[str, Any]:
        """The result in the shape of every machine-readable door."""
        from app.findings.output import findings_json

        return dict(findings_json(self))


def examine(problem: Problem) -> Findings:
    """All findings of a valid problem.

    Cost: the reductions of the additive and the multiplicative problem dominate (see ``roots/reduction.py``).
    """
    quiver = None if problem.ramified else quiver_of(problem)
    modular = problem.reading == "local_monodromy"
    reduction = None if quiver is None else reduce(quiver, modulo_integers=modular)
    return Findings(
        problem=problem,
        rank=problem.rank,
        dimension=moduli_dimension(problem),
        rigidity_index=rigidity_index(problem),
        fuchs_defect=problem.trace_sum,
        solved=_solved(problem),
        orbits=tuple(
            OrbitFigure(i, orbit_dimension(pole), largest_slope(pole)) for i, pole in enumerate(problem.poles)
        ),
        formal=tuple(
            FormalFigure(i, irregularity(pole), slopes(pole), newton_polygon(pole))
            for i, pole in enumerate(problem.poles)
        ),
        quiver=quiver,
        diagram=orbit_diagram(problem) if problem.ramified else None,
        support_type=None if quiver is None else type_name(quiver, support(quiver.dimension)),
        root_class=None if quiver is None or reduction is None else _class_of(quiver, reduction),
        p=None if quiver is None else p_of(quiver, quiver.dimension),
        additive=additive_verdict(problem, quiver, reduction),
        multiplicative=multiplicative_verdict(problem, quiver),
        resonances=_resonances(problem),
        descent=() if quiver is None or reduction is None else descent(quiver, reduction),
        families=families(problem),
    )


@lru_cache(maxsize=64)
def examine_cached(problem: Problem) -> Findings:
    """``examine``, remembered for the last problems; equal problems are those with the same canonical form."""
    return examine(problem)


def _class_of(quiver: Quiver, reduction: Reduction) -> RootClass:
    """Root class read off the reduction; its end is looked at with single reflections where it may still fall."""
    if reduction.outcome in ("negative", "disconnected"):
        return "none"
    return "real" if reduction.outcome == "real" else root_class(quiver, reduction.dimension)


def _solved(problem: Problem) -> Solved | None:
    place = problem.forced
    if place is None:
        return None
    value = problem.poles[place.pole].blocks[place.block].residue[place.eigenvalue].value
    return Solved(f"/poles/{place.pole}/blocks/{place.block}/residue/{place.eigenvalue}/value", value)


def _resonances(problem: Problem) -> tuple[Resonance, ...]:
    """Pairs inside one block whose difference is a non-zero integer, found by classes modulo Z."""
    if problem.reading == "local_monodromy":
        return ()
    found = []
    for i, pole in enumerate(problem.poles):
        for j, block in enumerate(pole.blocks):
            for values in _classes_modulo_integers([e.value for e in block.residue]):
                for first, second in combinations(values, 2):
                    difference = (second - first).as_rational()
                    assert difference is not None and difference.denominator == 1
                    if difference < 0:
                        first, second = second, first
                    found.append(Resonance(i, j, first, second, abs(int(difference))))
    return tuple(found)


def _classes_modulo_integers(values: list[Value]) -> list[list[Value]]:
    classes: dict[Value, list[Value]] = {}
    for value in values:
        classes.setdefault(modulo_one(value), []).append(value)
    return list(classes.values())
