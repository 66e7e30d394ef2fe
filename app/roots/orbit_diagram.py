"""The diagram of any formal type, ramified ones too: core vertices are Galois orbits.

For ramified data the symmetric matrix C that plays the part of a Cartan matrix may have diagonal entries other than 2
(loops, even a negative number of them) and positive entries beside the diagonal (negative edges):

    C_ii = β_i² + 1 − Irr_ii,   C_ij = β_i β_j − Irr_ij   within a pole,

β the ramification indices and Irr_ij the sum of slope(q − q') over pairs of conjugates of the two orbits.  Between a
base core vertex and one of another pole stand β_i β_j edges; the first leg vertex of a pole with one unramified block
is joined to base core vertex i by β_i edges.  Then 2 − (α, α) is the expected dimension of the moduli space, and for
unramified data this is the quiver of ``build.py``.  The identity follows from the rigidity index
[Katz, Rigid local systems (1996); Arinkin, Compositio Math. 146 (2010)]; the tests hold it against random data.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import combinations
from typing import Literal

from app.local.conjugates import conjugates, separations
from app.local.formal_type import Exponent, Pole
from app.local.problem import Problem
from app.roots.build import base_pole, slots


@dataclass(frozen=True)
class OrbitVertex:
    """A vertex; ``weight`` is its orbit's ramification index (1 on legs), ``dimension`` its multiplicity."""

    id: str
    role: Literal["core", "leg"]
    pole: int
    block: int
    leg: int
    dimension: int
    weight: int


@dataclass(frozen=True)
class OrbitDiagram:
    """Vertices (base core, other core, then legs) and the non-zero entries (i, j, C_ij), i ≤ j, of the matrix C."""

    base: int
    vertices: tuple[OrbitVertex, ...]
    entries: tuple[tuple[int, int, int], ...]

    @cached_property
    def dimension(self) -> tuple[int, ...]:
        """The dimension vector α."""
        return tuple(vertex.dimension for vertex in self.vertices)

    def form(self, x: Sequence[int]) -> int:
        """(x, x) = xᵀCx.  Cost: the number of entries."""
        return sum(c * x[i] * x[j] * (1 if i == j else 2) for i, j, c in self.entries)

    @property
    def edges(self) -> tuple[tuple[int, int, int], ...]:
        """Numbers of edges (i, j, −C_ij), i < j; negative where C_ij is positive."""
        return tuple((i, j, -c) for i, j, c in self.entries if i < j)

    @property
    def loops(self) -> tuple[tuple[int, int], ...]:
        """Numbers of loops (i, (2 − C_ii)/2), where not zero; negative where C_ii > 2."""
        diagonal = {i: c for i, j, c in self.entries if i == j}
        counted = ((i, (2 - diagonal.get(i, 0)) // 2) for i in range(len(self.vertices)))
        return tuple((i, number) for i, number in counted if number)


def orbit_diagram(problem: Problem) -> OrbitDiagram:
    """The diagram of a problem of any formal type.

    Cost: the square of the number of blocks at a pole, times their conjugates, plus the number of leg vertices.
    """
    base = base_pole(problem)
    poles = problem.poles
    core_poles = [base, *(i for i, pole in enumerate(poles) if i != base and not _hangs(pole))]
    vertices = [
        OrbitVertex(f"{i}.{j}", "core", i, j, 0, block.multiplicity, block.exponent.ramification)
        for i in core_poles
        for j, block in enumerate(poles[i].blocks)
    ]
    entries = _core_entries(problem, base, vertices)
    base_core = [v for v, vertex in enumerate(vertices) if vertex.pole == base]
    index_of = {(vertex.pole, vertex.block): v for v, vertex in enumerate(vertices)}
    for i, pole in enumerate(poles):
        for j, block in enumerate(pole.blocks):
            dimension = block.multiplicity
            for k, slot in enumerate(slots(block)[:-1], start=1):
                dimension -= slot.drop
                v = len(vertices)
                vertices.append(OrbitVertex(f"{i}.{j}.{k}", "leg", i, j, k, dimension, 1))
                entries.append((v, v, 2))
                if k > 1:
                    entries.append((v - 1, v, -1))
                elif (i, j) in index_of:
                    entries.append((index_of[i, j], v, -1))
                else:
                    entries.extend((c, v, -vertices[c].weight) for c in base_core)
    return OrbitDiagram(base, tuple(vertices), tuple(sorted(entries, key=lambda e: (e[1], e[0]))))


def _hangs(pole: Pole) -> bool:
    """Whether a pole other than the base has no core vertex: one block, unramified."""
    return len(pole.blocks) == 1 and not pole.ramified


def _core_entries(problem: Problem, base: int, vertices: list[OrbitVertex]) -> list[tuple[int, int, int]]:
    def exponent(vertex: OrbitVertex) -> Exponent:
        return problem.poles[vertex.pole].blocks[vertex.block].exponent

    entries = []
    for v, vertex in enumerate(vertices):
        diagonal = vertex.weight**2 + 1 - _irregularity((exponent(vertex),))
        if diagonal:
            entries.append((v, v, diagonal))
    for (a, first), (b, second) in combinations(enumerate(vertices), 2):
        entry = 0
        if first.pole == second.pole:
            # ordered pairs of the union count each orbit's own pairs, and the mixed ones twice
            own = _irregularity((exponent(first),)) + _irregularity((exponent(second),))
            mixed = (_irregularity((exponent(first), exponent(second))) - own) // 2
            entry = first.weight * second.weight - mixed
        elif base in (first.pole, second.pole):
            entry = -first.weight * second.weight
        if entry:
            entries.append((a, b, entry))
    return entries


def _irregularity(orbits: tuple[Exponent, ...]) -> int:
    """The sum of slope(q − q') over ordered pairs of conjugates of the given orbits."""
    members = [(conjugate, 1) for exponent in orbits for conjugate in conjugates(exponent)]
    return int(sum(slope * pairs for slope, pairs in separations(members).items()))
