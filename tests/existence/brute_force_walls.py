"""Walls by enumeration, straight from the definition of Σ; shares nothing with the code under test but the quiver.

For every root β below α the eigenvalues are taken as generic on λ·β = λ·α = 0: λ then vanishes on a vector exactly when
it is a combination of α and β.  The hyperplane is a wall when roots of that plane add up to α with Σ p ≥ p(α).
"""

from fractions import Fraction
from functools import cache
from itertools import product

from app.roots.quiver import Quiver

Vector = tuple[int, ...]
Line = tuple[Fraction, ...]


class Enumeration:
    def __init__(self, quiver: Quiver) -> None:
        self.quiver = quiver
        self.alpha = quiver.dimension
        self.size = len(self.alpha)
        self.rows: list[dict[int, int]] = [{} for _ in self.alpha]
        for i, j, count in quiver.edges:
            self.rows[i][j] = self.rows[j][i] = count
        poles = sorted({v.pole for v in quiver.vertices if v.role == "core"})
        self.groups = [
            [k for k, v in enumerate(quiver.vertices) if v.role == "core" and v.pole == pole] for pole in poles
        ]

    def p(self, x: Vector) -> int:
        return 1 - sum(n * n for n in x) + sum(count * x[i] * x[j] for i, j, count in self.quiver.edges)

    def is_root(self, x: Vector) -> bool:
        y = list(x)
        while True:
            if min(y) < 0:
                return False
            if sum(y) == 1:
                return True
            heights = [2 * y[v] - sum(n * y[u] for u, n in self.rows[v].items()) for v in range(self.size)]
            v = max(range(self.size), key=heights.__getitem__)
            if heights[v] <= 0:
                return self.is_connected([v for v in range(self.size) if y[v]])
            y[v] -= heights[v]

    def is_connected(self, vertices: list[int]) -> bool:
        seen, waiting = {vertices[0]}, [vertices[0]]
        while waiting:
            for u in self.rows[waiting.pop()]:
                if u in vertices and u not in seen:
                    seen.add(u)
                    waiting.append(u)
        return len(seen) == len(vertices)

    def in_lattice(self, x: Vector) -> bool:
        return len({sum(x[v] for v in group) for group in self.groups}) == 1

    def line(self, x: Vector) -> Line:
        """x modulo α and up to a factor: what two vectors share exactly when they define one hyperplane."""
        pivot = next(v for v, n in enumerate(self.alpha) if n)
        ratio = Fraction(x[pivot], self.alpha[pivot])
        rest = [n - ratio * a for n, a in zip(x, self.alpha, strict=True)]
        first = next((n for n in rest if n), None)
        return tuple(n / first for n in rest) if first is not None else tuple(rest)

    def roots_by_line(self) -> dict[Line, list[Vector]]:
        found: dict[Line, list[Vector]] = {}
        for x in product(*(range(n + 1) for n in self.alpha)):
            if any(x) and x != self.alpha and self.in_lattice(x) and self.is_root(x):
                found.setdefault(self.line(x), []).append(x)
        return found

    def largest_sum(self, roots: list[Vector]) -> int | None:
        """The largest Σ p of a way to add roots up to α, None if there is none."""

        @cache
        def best(rest: Vector, start: int) -> int | None:
            if not any(rest):
                return 0
            found = None
            for k in range(start, len(roots)):
                if all(a <= b for a, b in zip(roots[k], rest, strict=True)):
                    after = best(tuple(b - a for a, b in zip(roots[k], rest, strict=True)), k)
                    if after is not None and (found is None or after + self.p(roots[k]) > found):
                        found = after + self.p(roots[k])
            return found

        return best(self.alpha, 0)

    def generic_answer(self) -> bool:
        """Whether α is in Σ when λ vanishes on the multiples of α alone."""
        if not self.is_root(self.alpha):
            return False
        own = self.roots_by_line().get(tuple([Fraction(0)] * self.size), [])
        largest = self.largest_sum(own)
        return largest is None or largest < self.p(self.alpha)

    def walls(self) -> set[Line]:
        if not self.generic_answer():
            return set()
        everywhere = self.roots_by_line()
        always = everywhere.pop(tuple([Fraction(0)] * self.size), [])
        leg_lines = {self.line(x) for x in self.leg_vectors()}
        found = set()
        for line, roots in everywhere.items():
            largest = self.largest_sum(roots + always)
            if line not in leg_lines and largest is not None and largest >= self.p(self.alpha):
                found.add(line)
        return found

    def leg_vectors(self) -> list[Vector]:
        """Sums of neighbouring leg vertices of one leg: differences of two eigenvalues of one block."""
        legs: dict[tuple[int, int], list[int]] = {}
        for k, v in enumerate(self.quiver.vertices):
            if v.role == "leg":
                legs.setdefault((v.pole, v.block), []).append(k)
        return [
            tuple(int(v in leg[a:b]) for v in range(self.size))
            for leg in legs.values()
            for a in range(len(leg))
            for b in range(a + 1, len(leg) + 1)
        ]
