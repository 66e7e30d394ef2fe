"""Descent: the core moves of a reduction as operations on connections.

A reflection at ε is: twist so that the chosen block at each core pole has exponent 0 and first eigenvalue 0, and so has
the first eigenvalue of every pole with one block; apply the middle convolution with μ = −λ(ε); twist back.  The rank
falls by (α, ε).  Before each step the eigenvalues of every leg are put in descending order of multiplicity.

Source: Dettweiler and Reiter, J. Algebra 318 (2007) for log poles; Hiroe, Duke Math. J. 166 (2017).
"""

from dataclasses import dataclass

from app.exact.number import write_number
from app.exact.value import Value
from app.roots.quiver import Quiver, Vector
from app.roots.reduction import CoreMove, Reduction


@dataclass(frozen=True)
class DescentStep:
    """One step: ids of the core vertices of ε, (α, ε), λ(ε), rank and dimension vector after it, and it in words."""

    vertices: tuple[str, ...]
    pairing: int
    parameter: Value
    rank: int
    dimension: Vector
    operation: str


def descent(quiver: Quiver, reduction: Reduction) -> tuple[DescentStep, ...]:
    """The steps down to rank 1 or a fundamental datum; it ends before a reflection whose parameter vanishes.

    ``reduction`` is that of the quiver.  Cost: one pass over the moves and the base core vertices.
    """
    last = len(reduction.moves) if reduction.blocked is None else reduction.blocked.moves_before
    made = [move for move in reduction.moves[:last] if isinstance(move, CoreMove)]
    later = [move.dimension for move in reduction.moves if isinstance(move, CoreMove)][1:]
    base_core = [v for v, vertex in enumerate(quiver.vertices) if vertex.role == "core" and vertex.pole == quiver.base]
    steps = []
    for k, move in enumerate(made):
        after = later[k] if k < len(later) else reduction.dimension
        before, rank = (sum(vector[v] for v in base_core) for vector in (move.dimension, after))
        ids = tuple(quiver.vertices[v].id for v in move.vertices)
        words = _words(quiver, move, before, rank)
        steps.append(DescentStep(ids, move.pairing, move.parameter, rank, after, words))
    return tuple(steps)


def _words(quiver: Quiver, move: CoreMove, before: int, after: int) -> str:
    core = [vertex for vertex in quiver.vertices if vertex.role == "core"]
    places = []
    for v in move.vertices:
        vertex = quiver.vertices[v]
        several = sum(other.pole == vertex.pole for other in core) > 1
        places.append(f"block {vertex.block + 1} of pole {vertex.pole + 1}" if several else "")
    blocks = " and ".join(place for place in places if place)
    what = f"the exponent and first eigenvalue of {blocks}, and the first eigenvalue of every one-block pole, become 0"
    if not blocks:
        what = "the first eigenvalue of every pole becomes 0"
    return (
        f"Twist so that {what}; middle convolution with μ = {write_number(-move.parameter)}; twist back. "
        f"Rank {before} → {after}."
    )
