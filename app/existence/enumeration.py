"""All decompositions of a small vector, straight from the definition of Σ.

α ∈ Σ_λ when p(α) > Σ p(β_i) for every way to write α as a sum of two or more positive roots β_i of the lattice with
λ·β_i = 0.  The search is bounded before it begins.
"""

from collections.abc import Callable
from itertools import product
from math import prod

from app.exact.value import Value
from app.existence.fundamental import order_of
from app.roots.form import evaluate, in_lattice, p_of
from app.roots.positive import root_class
from app.roots.quiver import Quiver, Vector

LARGEST = 2_000
"""Largest number of vectors β ≤ α that is enumerated."""


def is_small(vector: Vector) -> bool:
    """Whether the number of vectors below is within the bound."""
    return prod(n + 1 for n in vector) <= LARGEST


def best_decomposition(
    quiver: Quiver, vector: Vector, value_on: Callable[[Vector], Value], *, modulo_integers: bool
) -> tuple[tuple[int, Vector], ...] | None:
    """A decomposition into two or more admissible roots with the largest Σ p, or None if there is no decomposition.

    ``value_on`` gives λ on a vector.  Hypothesis: ``is_small(vector)``.  Returns (multiplicity, root) pairs.
    Cost: the number of vectors below, squared, at most.
    """
    size = len(vector)
    parameters = [value_on(tuple(int(u == v) for u in range(size))) for v in range(size)]
    roots: dict[int, list[tuple[Vector, int]]] = {}
    for candidate in product(*(range(n + 1) for n in vector)):
        if candidate == vector or not any(candidate) or not in_lattice(quiver, candidate):
            continue
        vanishing = order_of(evaluate(parameters, candidate), modulo_integers=modulo_integers) == 1
        if vanishing and root_class(quiver, candidate) != "none":
            first = next(v for v, n in enumerate(candidate) if n)
            roots.setdefault(first, []).append((candidate, p_of(quiver, candidate)))

    known: dict[Vector, tuple[int, tuple[Vector, ...]] | None] = {tuple([0] * len(vector)): (0, ())}

    def best(rest: Vector) -> tuple[int, tuple[Vector, ...]] | None:
        if rest in known:
            return known[rest]
        first = next(v for v, n in enumerate(rest) if n)
        found: tuple[int, tuple[Vector, ...]] | None = None
        # some part contains the first vertex of the rest, so only those are tried
        for root, p in roots.get(first, ()):
            if all(a <= b for a, b in zip(root, rest, strict=True)):
                after = best(tuple(b - a for a, b in zip(root, rest, strict=True)))
                if after is not None and (found is None or p + after[0] > found[0]):
                    found = (p + after[0], (root, *after[1]))
        known[rest] = found
        return found

    answer = best(vector)
    if answer is None:
        return None
    parts = answer[1]
    return tuple((parts.count(part), part) for part in dict.fromkeys(parts))
