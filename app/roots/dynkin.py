"""Names of the type of a diagram: finite, affine, hyperbolic, indefinite.

The diagram is the support of α in a quiver without loops (a symmetric generalised Cartan matrix).
Source: Kac, Infinite dimensional Lie algebras (1990), ch. 4, tables Fin and Aff 1, and exercise 4.1 for hyperbolic.
"""

from app.roots.form import component
from app.roots.quiver import Quiver

# arms of the trees with one vertex of degree three, each counted without that vertex, ascending
_FINITE_FORKS: dict[tuple[int, ...], str] = {(1, 2, 2): "E6", (1, 2, 3): "E7", (1, 2, 4): "E8"}
_AFFINE_FORKS: dict[tuple[int, ...], str] = {(2, 2, 2): "E6^(1)", (1, 3, 3): "E7^(1)", (1, 2, 5): "E8^(1)"}
# a hyperbolic diagram with more than two vertices has at most ten (Kac, exercise 4.1)
_LARGEST_HYPERBOLIC = 10


def type_name(quiver: Quiver, allowed: frozenset[int]) -> str:
    """Name of the type of the diagram on ``allowed``: "D4", "A3^(1)", "hyperbolic", "indefinite".

    Several components of finite or affine type are joined by " + ", the larger first.
    Cost: the number of edges; for diagrams of up to ten vertices ten times that.
    """
    parts = _components(quiver, allowed)
    names = [_connected_name(quiver, part) for part in sorted(parts, key=lambda part: (-len(part), min(part)))]
    if len(names) == 1 and names[0] is None:
        return "hyperbolic" if _is_hyperbolic(quiver, allowed) else "indefinite"
    known = [name for name in names if name is not None]
    return " + ".join(known) if len(known) == len(names) else "indefinite"


def is_affine(name: str) -> bool:
    """Whether a name of ``type_name`` is that of a connected affine diagram."""
    return name.endswith("^(1)") and " + " not in name


def _components(quiver: Quiver, allowed: frozenset[int]) -> list[frozenset[int]]:
    found, rest = [], allowed
    while rest:
        part = component(quiver, min(rest), rest)
        found.append(part)
        rest = rest - part
    return found


def _connected_name(quiver: Quiver, part: frozenset[int]) -> str | None:
    """Name of a connected diagram of finite or affine type, None for any other."""
    size = len(part)
    degrees: dict[int, int] = {}
    edges = 0
    for v in part:
        row = [count for u, count in quiver.neighbours[v] if u in part]
        if any(count > 1 for count in row):
            return "A1^(1)" if size == 2 and row == [2] else None
        degrees[v] = len(row)
        edges += len(row)
    edges //= 2
    if edges > size:
        return None
    if edges == size:
        return f"A{size - 1}^(1)" if all(d == 2 for d in degrees.values()) else None
    return _tree_name(quiver, part, degrees)


def _tree_name(quiver: Quiver, part: frozenset[int], degrees: dict[int, int]) -> str | None:
    size = len(part)
    forks = [v for v, degree in degrees.items() if degree > 2]
    if not forks:
        return f"A{size}"
    if len(forks) == 1:
        fork = forks[0]
        arms = tuple(sorted(len(arm) for arm in _components(quiver, part - {fork})))
        if arms == (1, 1, 1, 1):
            return "D4^(1)"
        if len(arms) > 3:
            return None
        if arms[:2] == (1, 1):
            return f"D{size}"
        return _FINITE_FORKS.get(arms) or _AFFINE_FORKS.get(arms)
    if len(forks) == 2 and all(degrees[v] == 3 for v in forks):
        # two forks: affine D when every end hangs directly on a fork
        ends = [v for v, degree in degrees.items() if degree == 1]
        if all(any(u in forks for u, _ in quiver.neighbours[v] if u in part) for v in ends):
            return f"D{size - 1}^(1)"
    return None


def _is_hyperbolic(quiver: Quiver, part: frozenset[int]) -> bool:
    """Whether every proper connected subdiagram is of finite or affine type."""
    if len(part) == 2:
        return True
    if len(part) > _LARGEST_HYPERBOLIC:
        return False
    return all(
        _connected_name(quiver, smaller) is not None for v in part for smaller in _components(quiver, part - {v})
    )
