"""Kac's root test for one vector of a quiver, by simple reflections alone."""

from typing import Literal

from app.roots.form import is_connected, p_of, pairing_with, support
from app.roots.quiver import Quiver, Vector

RootClass = Literal["real", "isotropic", "anisotropic", "none"]


def root_class(quiver: Quiver, vector: Vector) -> RootClass:
    """Class of a non-negative vector among the positive roots of the quiver's Kac–Moody algebra.

    Simple reflections are applied while they lower the vector.  It ends at a coordinate vector (real root), in the
    fundamental set (imaginary root, isotropic when q = 0), or with a negative entry or a disconnected support (none).

    Hypothesis: the quiver has no loops.
    Cost: the sum of the entries, at most, in reflections; each costs the degree of its vertex.
    Source: Kac, Infinite dimensional Lie algebras (1990), Theorem 5.4.
    """
    if any(n < 0 for n in vector) or not is_connected(quiver, support(vector)):
        return "none"
    x = list(vector)
    pairings = [pairing_with(quiver, x, v) for v in range(len(x))]
    lowering = [v for v, height in enumerate(pairings) if height > 0]
    while lowering:
        v = lowering.pop()
        height = pairings[v]
        if height <= 0:
            continue
        if x[v] == sum(x):
            return "real" if x[v] == 1 else "none"
        if x[v] < height:
            return "none"
        x[v] -= height
        pairings[v] -= 2 * height
        for u, count in quiver.neighbours[v]:
            pairings[u] += count * height
            if pairings[u] > 0:
                lowering.append(u)
    reduced = tuple(x)
    if not is_connected(quiver, support(reduced)):
        return "none"
    return "isotropic" if p_of(quiver, reduced) == 1 else "anisotropic"
