"""The quiver of unramified local data, with its dimension vector and parameters."""

from dataclasses import dataclass
from functools import cached_property
from typing import Literal

from app.exact.value import Value

Vector = tuple[int, ...]


@dataclass(frozen=True)
class Vertex:
    """A vertex: core vertices stand for blocks, leg vertices for ranks along a class.

    ``id`` is "pole.block" for a core vertex and "pole.block.k" (k = 1, 2, …) for the k-th leg vertex.
    """

    id: str
    role: Literal["core", "leg"]
    pole: int
    block: int
    leg: int
    dimension: int
    parameter: Value


@dataclass(frozen=True)
class Quiver:
    """Vertices (base core, other core, then legs) and edges (i, j, multiplicity) with i < j as vertex indices.

    ``base`` is the index of the base pole in the problem.
    """

    base: int
    vertices: tuple[Vertex, ...]
    edges: tuple[tuple[int, int, int], ...]

    @cached_property
    def dimension(self) -> Vector:
        """The dimension vector α."""
        return tuple(vertex.dimension for vertex in self.vertices)

    @cached_property
    def parameters(self) -> tuple[Value, ...]:
        """The parameters λ, one for each vertex."""
        return tuple(vertex.parameter for vertex in self.vertices)

    @cached_property
    def neighbours(self) -> tuple[tuple[tuple[int, int], ...], ...]:
        """For each vertex its neighbours as (index, number of edges)."""
        found: list[list[tuple[int, int]]] = [[] for _ in self.vertices]
        for i, j, count in self.edges:
            found[i].append((j, count))
            found[j].append((i, count))
        return tuple(tuple(sorted(row)) for row in found)
