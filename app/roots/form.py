"""The bilinear form of a quiver, connectivity of supports, bridges, and the lattice of several core poles.

(x, y) = xᵀCy with C = 2·1 − adjacency, q(x) = (x, x)/2, p(x) = 1 − q(x).  All vectors are tuples of integers in the
order of the quiver's vertices.
"""

from collections.abc import Iterable, Sequence
from math import gcd

from app.exact.value import Value, total
from app.roots.quiver import Quiver, Vector


def pairing_with(quiver: Quiver, x: Sequence[int], v: int) -> int:
    """(x, e_v).  Cost: the degree of v."""
    return 2 * x[v] - sum(count * x[u] for u, count in quiver.neighbours[v])


def pairing(quiver: Quiver, x: Sequence[int], y: Sequence[int]) -> int:
    """(x, y).  Cost: the number of edges."""
    diagonal = 2 * sum(a * b for a, b in zip(x, y, strict=True))
    return diagonal - sum(count * (x[i] * y[j] + x[j] * y[i]) for i, j, count in quiver.edges)


def p_of(quiver: Quiver, x: Sequence[int]) -> int:
    """p(x) = 1 − q(x).  Cost: the number of edges."""
    return 1 - pairing(quiver, x, x) // 2


def evaluate(parameters: Sequence[Value], x: Sequence[int]) -> Value:
    """λ·x, exactly."""
    return total(value * n for value, n in zip(parameters, x, strict=True) if n)


def support(x: Sequence[int]) -> frozenset[int]:
    """Vertices where x does not vanish."""
    return frozenset(v for v, n in enumerate(x) if n)


def component(quiver: Quiver, start: int, allowed: frozenset[int]) -> frozenset[int]:
    """Vertices of ``allowed`` that are connected with ``start`` inside ``allowed``."""
    seen, waiting = {start}, [start]
    while waiting:
        for u, _ in quiver.neighbours[waiting.pop()]:
            if u in allowed and u not in seen:
                seen.add(u)
                waiting.append(u)
    return frozenset(seen)


def is_connected(quiver: Quiver, allowed: frozenset[int]) -> bool:
    """Whether a non-empty set of vertices is connected."""
    return bool(allowed) and len(component(quiver, min(allowed), allowed)) == len(allowed)


def restrict(x: Sequence[int], allowed: Iterable[int]) -> Vector:
    """x on the given vertices, 0 elsewhere."""
    kept = [0] * len(x)
    for v in allowed:
        kept[v] = x[v]
    return tuple(kept)


def content(x: Sequence[int]) -> int:
    """The greatest common divisor of the entries."""
    return gcd(*x)


def bridges(quiver: Quiver, allowed: frozenset[int]) -> list[tuple[int, int]]:
    """Single edges inside ``allowed`` whose removal disconnects their component, each as a pair of vertices.

    Depth-first search with low points, without recursion (legs are long).  Cost: the number of edges.  Written out here
    because importing a graph library would cost more time than a whole run of the command line may take.
    Source: Tarjan, A note on finding the bridges of a graph, Inf. Process. Lett. 2 (1974).
    """
    entered: dict[int, int] = {}
    low: dict[int, int] = {}
    found: list[tuple[int, int]] = []
    for root in sorted(allowed):
        if root in entered:
            continue
        entered[root] = low[root] = len(entered)
        path = [(root, -1, 0)]
        while path:
            v, parent, position = path.pop()
            row = quiver.neighbours[v]
            if position < len(row):
                path.append((v, parent, position + 1))
                u, count = row[position]
                if u not in allowed or (u == parent and count == 1):
                    continue
                if u in entered:
                    low[v] = min(low[v], entered[u])
                else:
                    entered[u] = low[u] = len(entered)
                    path.append((u, v, 0))
            elif parent >= 0:
                low[parent] = min(low[parent], low[v])
                if low[v] > entered[parent]:
                    found.append((parent, v))
    return found


def core_groups(quiver: Quiver) -> tuple[tuple[int, ...], ...]:
    """Core vertices by pole, the base pole's first."""
    groups: dict[int, list[int]] = {}
    for v, vertex in enumerate(quiver.vertices):
        if vertex.role == "core":
            groups.setdefault(vertex.pole, []).append(v)
    return tuple(tuple(group) for group in groups.values())


def in_lattice(quiver: Quiver, x: Sequence[int]) -> bool:
    """Whether x lies in L: the same total on the core vertices of every pole that has some."""
    return len({sum(x[v] for v in group) for group in core_groups(quiver)}) == 1
