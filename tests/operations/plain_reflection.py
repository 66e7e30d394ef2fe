"""Reflections of (α, λ) on a quiver, written out plainly, and what is left when vertices vanish.

Shares no code with the operations: a quiver is a table of edges, α and λ are dictionaries.
"""

from app.exact.value import Value
from app.roots.quiver import Quiver


class Plain:
    """A quiver with α and λ that can be reflected and stripped of vertices of dimension 0."""

    def __init__(self, quiver: Quiver) -> None:
        self.base = quiver.base
        ids = [vertex.id for vertex in quiver.vertices]
        self.alpha = {vertex.id: vertex.dimension for vertex in quiver.vertices}
        self.values = {vertex.id: vertex.parameter for vertex in quiver.vertices}
        self.edges: dict[frozenset[str], int] = {}
        for i, j, count in quiver.edges:
            self.edges[frozenset((ids[i], ids[j]))] = count

    def form(self, u: str, v: str) -> int:
        return 2 if u == v else -self.edges.get(frozenset((u, v)), 0)

    def pairing(self, epsilon: tuple[str, ...]) -> int:
        return sum(n * self.form(u, v) for u, n in self.alpha.items() for v in epsilon)

    def value(self, epsilon: tuple[str, ...]) -> Value:
        return sum((self.values[v] for v in epsilon), Value.rational(0))

    def reflect(self, *epsilon: str) -> None:
        height, value = self.pairing(epsilon), self.value(epsilon)
        for v in epsilon:
            self.alpha[v] -= height
        for u in self.values:
            self.values[u] = self.values[u] - value * sum(self.form(u, v) for v in epsilon)

    def leg(self, core: str) -> list[str]:
        """The leg vertices of a block in order."""
        found = []
        while f"{core}.{len(found) + 1}" in self.alpha:
            found.append(f"{core}.{len(found) + 1}")
        return found

    def push_vanished_slots(self, core: str, total: int) -> None:
        """Reflect along the leg of a block until the places with drop 0 stand at its end."""
        leg = self.leg(core)
        for _ in leg:
            heights = [total, *(self.alpha[v] for v in leg), 0]
            for k, v in enumerate(leg):
                if heights[k] == heights[k + 1] and heights[k + 1] > heights[k + 2]:
                    self.reflect(v)
                    heights = [total, *(self.alpha[u] for u in leg), 0]

    def strip(self) -> None:
        """Leave out vertices of dimension 0, and core vertices that are alone at a pole other than the base."""
        gone = {v for v, n in self.alpha.items() if n == 0}
        core = [v for v in self.alpha if v.count(".") == 1 and v not in gone]
        of_base = [v for v in core if int(v.split(".")[0]) == self.base]
        for v in core:
            pole = v.split(".")[0]
            if v not in of_base and [u for u in core if u.split(".")[0] == pole] == [v]:
                gone.add(v)
                for u in of_base:
                    self.values[u] = self.values[u] + self.values[v]
                    if f"{v}.1" in self.alpha:
                        self.edges[frozenset((u, f"{v}.1"))] = 1
        self.alpha = {v: n for v, n in self.alpha.items() if v not in gone}
        self.values = {v: x for v, x in self.values.items() if v not in gone}
        self.edges = {pair: n for pair, n in self.edges.items() if not pair & gone}

    def summary(self) -> tuple[list[tuple[int, Value]], set[tuple[int, int, int]]]:
        """Dimensions with parameters in the order of vertices, and edges by place in that order."""
        place = {v: k for k, v in enumerate(self.alpha)}
        edges = {(*sorted(place[v] for v in pair), n) for pair, n in self.edges.items()}
        return [(n, self.values[v]) for v, n in self.alpha.items()], edges
