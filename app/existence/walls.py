"""Walls: the equations between eigenvalues on which the additive verdict changes.

The exponents and the Jordan blocks of a problem stay, its eigenvalues are taken as free apart from the Fuchs relation.
For generic eigenvalues there is one verdict; where it is "yes", the eigenvalues for which no irreducible system exists
lie on finitely many hyperplanes λ·β = 0, the walls.  They are read off the generic reduction and not searched for:

* a reflection of the descent cannot be made where its parameter vanishes; pulled back to the given problem this is
  λ·β = 0 for the real root β that the moves so far bring to the reflected vertex (or to ε);
* at the reduced vector the shapes (II) and (III) of ``fundamental.py`` forbid existence where λ vanishes on a vector
  that they name, again pulled back.  (I), a multiple of an isotropic root, does not depend on the eigenvalues.

On every wall α is an explicit sum of roots on which λ vanishes, so "no" is proved there, and on all intersections.
That nothing else forbids existence is a theorem where one pole has core vertices [Crawley-Boevey, Compositio Math. 126
(2001) and Duke Math. J. 118 (2003); Hiroe, Duke Math. J. 166 (2017)]; for several it is the criterion of
``decide.py``.
For rigid data the walls are the inversions of the descent's word.

Vectors whose equations agree by the Fuchs relation, such as β and α − β, are one wall.  Equations that only say that
two eigenvalues of one block are equal are left out: there the orbit itself changes.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from math import gcd, lcm

from app.errors import Place, Refused
from app.exact.number import write_number
from app.exact.value import ONE, ZERO, Value, total
from app.existence.decide import decide
from app.existence.fundamental import obstruction
from app.existence.verdict import Criterion, Verdict
from app.local.formal_type import Block, Eigenvalue, Pole
from app.local.problem import Problem
from app.roots.build import quiver_of
from app.roots.form import core_groups
from app.roots.quiver import Quiver, Vector
from app.roots.reduction import CoreMove, Reduction, pull_back, reduce

MOST_WALLS = 1_000
"""Largest number of walls that are listed."""

Form = tuple[int, ...]
"""A linear form Σ f_k ξ_k in the eigenvalues of a problem, in the order of ``eigenvalue_places``."""


@dataclass(frozen=True)
class Term:
    """An eigenvalue of a wall's equation, by the indices of pole, block and eigenvalue, with its multiplicity there."""

    pole: int
    block: int
    eigenvalue: int
    multiplicity: int


@dataclass(frozen=True)
class Wall:
    """The wall λ·β = 0: the eigenvalues of ``terms`` with their multiplicities sum to 0.

    They are those of a subsystem with the rank and classes of β or of α − β, and the equation is its Fuchs relation.
    ``criterion`` says what happens there: a reflection's "vanishing parameter", or a shape of the fundamental set.
    ``value`` is the present value of the sum, ``holds`` whether the present eigenvalues lie on the wall, ``equation``
    the wall in words or as an equation between the problem's symbols, and ``form`` the terms as a linear form.
    """

    vector: Vector
    criterion: Criterion
    terms: tuple[Term, ...]
    value: Value
    equation: str
    form: Form

    @property
    def holds(self) -> bool:
        """Whether the present eigenvalues lie on the wall."""
        return self.value.is_zero


@dataclass(frozen=True)
class Walls:
    """The verdict for generic eigenvalues and the walls; none where it is not "yes", since "no" is everywhere then.

    ``complete``: all walls are listed (not more than ``MOST_WALLS``).  ``proved``: by a theorem there are no others;
    where it is False every listed wall is proved to be one, and that there are no others is the criterion for several
    poles.
    """

    generic: Verdict
    walls: tuple[Wall, ...]
    complete: bool
    proved: bool


def walls(problem: Problem) -> Walls:
    """The walls of a problem, those on which its present eigenvalues lie marked.

    Hypotheses: residues are given and no block is ramified (``Refused`` otherwise).
    Cost: for each single reflection of the descent the number of vertices times the degree of its vertex.
    """
    _refuse_other_data(problem)
    generic = generic_problem(problem)
    quiver = quiver_of(generic)
    reduction = reduce(quiver)
    verdict = decide(quiver, reduction)
    proved = len(core_groups(quiver)) == 1
    if verdict.exists is not True:
        return Walls(verdict, (), True, proved)
    collector = _Collector(problem, quiver)
    complete = True
    for vector, criterion in _vectors(quiver, reduction):
        if len(collector.walls) == MOST_WALLS:
            complete = False
            break
        collector.add(vector, criterion)
    return Walls(verdict, tuple(collector.walls.values()), complete, proved)


def eigenvalue_places(problem: Problem) -> list[tuple[int, int, int]]:
    """Indices of pole, block and eigenvalue, in document order."""
    return [
        (i, j, k)
        for i, pole in enumerate(problem.poles)
        for j, block in enumerate(pole.blocks)
        for k in range(len(block.residue))
    ]


def with_eigenvalues(problem: Problem, values: Sequence[Value]) -> Problem:
    """The problem with these eigenvalues, in the order of ``eigenvalue_places``, and their symbols alone.

    Eigenvalues of a block that are equal become one, with the Jordan blocks of the limit of the classes with distinct
    ones, of the same dimension: the numbers dim ker (L − ξ)^(k+1) − dim ker (L − ξ)^k of both, in descending order.
    """
    rest = iter(values)
    poles = []
    for pole in problem.poles:
        blocks = []
        for block in pole.blocks:
            residue: dict[Value, Eigenvalue] = {}
            for eigenvalue in block.residue:
                value = next(rest)
                known = residue.get(value)
                # conjugate partitions are joined, so the partitions themselves are added
                jordan = eigenvalue.jordan if known is None else _sum_of_partitions(known.jordan, eigenvalue.jordan)
                residue[value] = Eigenvalue(value, jordan)
            blocks.append(Block(block.exponent, tuple(residue.values())))
        poles.append(Pole(pole.at, tuple(blocks)))
    names = sorted({name for value in values for name in value.symbols()})
    return replace(problem, poles=tuple(poles), symbols=tuple(names), forced=None)


def generic_problem(problem: Problem) -> Problem:
    """The problem with a symbol for every eigenvalue but the last, which the Fuchs relation forces.

    Exponents and positions stay; the new symbols are no names of the grammar, so they are not confused with others.
    """
    places = eigenvalue_places(problem)
    values = [Value.symbol(f"{i}.{j}.{k}") for i, j, k in places[:-1]]
    counts = multiplicities(problem)
    rest = total(value * count for value, count in zip(values, counts, strict=False))
    return with_eigenvalues(problem, [*values, rest / -counts[-1]])


def multiplicities(problem: Problem) -> Form:
    """The multiplicity of every eigenvalue: the Fuchs relation as a linear form."""
    return tuple(problem.poles[i].blocks[j].residue[k].multiplicity for i, j, k in eigenvalue_places(problem))


def _sum_of_partitions(first: tuple[int, ...], second: tuple[int, ...]) -> tuple[int, ...]:
    longer, shorter = (first, second) if len(first) >= len(second) else (second, first)
    return tuple(a + b for a, b in zip(longer, (*shorter, *[0] * len(longer)), strict=False))


def _vectors(quiver: Quiver, reduction: Reduction) -> Iterator[tuple[Vector, Criterion]]:
    """The vectors β of the walls, one after another; a vector may come with another that has the same equation."""
    for vector in inversions(quiver, reduction):
        yield vector, "vanishing parameter"
    if reduction.outcome != "fundamental":
        return
    # every shape that would forbid existence if λ vanished on its vector; known vectors are taken as non-zero
    found: set[Vector] = set()

    def value_on(vector: Vector) -> Value:
        return ONE if vector in found else ZERO

    while (shape := obstruction(quiver, reduction.dimension, value_on, modulo_integers=False)) is not None:
        vector = shape.parts[0][1]
        if vector in found:
            return
        found.add(vector)
        yield pull_back(quiver, reduction.moves, vector), shape.criterion


def inversions(quiver: Quiver, reduction: Reduction) -> Iterator[Vector]:
    """The roots that the moves of a reduction bring to the vertex (or ε) of each single reflection, in its order.

    The images w⁻¹(e_v) of all coordinate vectors are kept; the reflection at ε changes the image of e_v by
    (e_v, ε) times that of ε.  Cost: for each reflection the number of vertices times the degree of ε.
    """
    size = len(quiver.vertices)
    images = [tuple(int(u == v) for u in range(size)) for v in range(size)]
    for move in reduction.moves:
        for epsilon in [move.vertices] if isinstance(move, CoreMove) else [(v,) for v in move.vertices]:
            root = tuple(sum(column) for column in zip(*(images[v] for v in epsilon), strict=True))
            yield root
            weights: dict[int, int] = {}
            for v in epsilon:
                weights[v] = weights.get(v, 0) + 2
                for u, count in quiver.neighbours[v]:
                    weights[u] = weights.get(u, 0) - count
            for u, weight in weights.items():
                if weight:
                    images[u] = tuple(a - weight * b for a, b in zip(images[u], root, strict=True))


class _Collector:
    """Walls by their equation modulo the Fuchs relation."""

    def __init__(self, problem: Problem, quiver: Quiver) -> None:
        self.problem = problem
        self.places = eigenvalue_places(problem)
        self.values = [problem.poles[i].blocks[j].residue[k].value for i, j, k in self.places]
        self.fuchs = multiplicities(problem)
        self.index = {vertex.id: v for v, vertex in enumerate(quiver.vertices)}
        self.base_core = core_groups(quiver)[0]
        self.walls: dict[Form, Wall] = {}

    def add(self, vector: Vector, criterion: Criterion) -> None:
        """Add the wall of a vector, unless its equation is known or only compares two eigenvalues of one block."""
        form = self.form_of(vector)
        key = reduced_form(form, self.fuchs)
        if key in self.walls or only_compares(form, self.fuchs, [(i, j) for i, j, _ in self.places]):
            return
        form = self._readable_side(form)
        terms = tuple(Term(*place, n) for place, n in zip(self.places, form, strict=True) if n)
        value = total(value * n for value, n in zip(self.values, form, strict=True) if n)
        self.walls[key] = Wall(vector, criterion, terms, value, self._equation(terms, value), form)

    def form_of(self, vector: Vector) -> Form:
        """−λ·β as a form: every eigenvalue with the drops of β at its places along the leg."""
        found = []
        for i, pole in enumerate(self.problem.poles):
            for j, block in enumerate(pole.blocks):
                own = self.index.get(f"{i}.{j}")
                above = vector[own] if own is not None else sum(vector[v] for v in self.base_core)
                place = 0
                for eigenvalue in block.residue:
                    start = above
                    for _ in eigenvalue.nullities:
                        place += 1
                        vertex = self.index.get(f"{i}.{j}.{place}")
                        above = vector[vertex] if vertex is not None else 0
                    found.append(start - above)
        return tuple(found)

    def _readable_side(self, form: Form) -> Form:
        """The form of β or of α − β: without the forced eigenvalue if possible, with fewer eigenvalues then."""
        other = tuple(n - m for n, m in zip(self.fuchs, form, strict=True))
        if min(other) < 0:
            return form
        forced = self.problem.forced
        place = None if forced is None else self.places.index((forced.pole, forced.block, forced.eigenvalue))
        return min(form, other, key=lambda side: (place is not None and side[place] != 0, sum(side)))

    def _equation(self, terms: tuple[Term, ...], value: Value) -> str:
        symbols = self.problem.symbols
        if value.symbols():
            value = value * lcm(*(coefficient.denominator for coefficient in value.terms.values()))
            text = write_number(value, symbols)
            return f"{write_number(-value, symbols) if text.startswith('-') else text} = 0"
        listed = []
        for term in terms:
            eigenvalue = self.problem.poles[term.pole].blocks[term.block].residue[term.eigenvalue]
            several = len(self.problem.poles[term.pole].blocks) > 1
            times = f"{term.multiplicity} times " if term.multiplicity > 1 else ""
            block = f"block {term.block + 1} of " if several else ""
            listed.append(f"{times}{write_number(eigenvalue.value, symbols)} of {block}pole {term.pole + 1}")
        return f"the eigenvalues {', '.join(listed)} sum to 0"


def reduced_form(form: Form, fuchs: Form) -> Form:
    """The form modulo the Fuchs relation and a factor: 0 at the first eigenvalue, primitive, first entry positive."""
    reduced = [fuchs[0] * n - form[0] * m for n, m in zip(form, fuchs, strict=True)]
    divisor = gcd(*reduced)
    if not divisor:
        return tuple(reduced)
    first = next(n for n in reduced if n)
    return tuple(n // (divisor if first > 0 else -divisor) for n in reduced)


def only_compares(form: Form, fuchs: Form, blocks: Sequence[tuple[int, int]]) -> bool:
    """Whether the equation says, given the Fuchs relation, only that two eigenvalues of one block are equal."""
    for ratio in {Fraction(n, m) for n, m in zip(form, fuchs, strict=True)}:
        rest = [(k, n - ratio * m) for k, (n, m) in enumerate(zip(form, fuchs, strict=True)) if n != ratio * m]
        if len(rest) == 2 and rest[0][1] == -rest[1][1] and blocks[rest[0][0]] == blocks[rest[1][0]]:
            return True
    return False


def _refuse_other_data(problem: Problem) -> None:
    if problem.reading == "local_monodromy":
        message = "Walls are those of the additive problem, and local monodromies are given."
        raise Refused(message, (Place("", message, "residues"),))
    if problem.ramified:
        message = "Walls are read off the quiver, which ramified data do not have."
        raise Refused(message, (Place("", message, "exponents with integer powers"),))
