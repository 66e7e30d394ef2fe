"""Reduction: (α, λ) brought to the fundamental set by reflections, in bulk along legs.

Two kinds of moves are made while they lower α:

* a *core move*: the reflection at a core vertex or, when several poles have core vertices, at a sum
  ε = e_(0,j0) + e_(1,j1) + … of one core vertex of each such pole (q(ε) = 1, (x, ε) = Σ (x, e_v));
* a *reordering*: reflections at leg vertices one after another, which permute the eigenvalues of a leg.

A leg is kept as its slots (ξ_k, drop of rank).  In this form a core move changes the first slot of the adjacent legs
and nothing else, and sorting a leg is one insertion; so the work for a hypergeometric tuple of order n is n core moves
with n insertions, not n² reflections with n² changes of λ.

The reduction goes on when a reflection's parameter vanishes, since the class of the root does not depend on λ; the
first such reflection is kept as ``blocked``, for ``existence/`` to judge.

Sources: Kac, Infinite dimensional Lie algebras (1990), ch. 5; Crawley-Boevey, Compositio Math. 126 (2001), §§ 5–8;
for ε, Hiroe, Duke Math. J. 166 (2017).
"""

import itertools
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Literal

from app.exact.value import Value, modulo_one, total
from app.roots.form import core_groups, is_connected, pairing_with, support
from app.roots.quiver import Quiver, Vector

Outcome = Literal["real", "fundamental", "negative", "disconnected"]


@dataclass(frozen=True)
class CoreMove:
    """Reflection at ε: its core vertices, and (α, ε), λ(ε) and α before the move."""

    vertices: tuple[int, ...]
    pairing: int
    parameter: Value
    dimension: Vector


@dataclass(frozen=True)
class Reordering:
    """Reflections at leg vertices of one leg, one after another."""

    vertices: tuple[int, ...]


Move = CoreMove | Reordering


@dataclass(frozen=True)
class Blocked:
    """The first reflection whose parameter vanishes: moves made before it, its vertices, its pairing with α."""

    moves_before: int
    vertices: tuple[int, ...]
    pairing: int


@dataclass(frozen=True)
class Reduction:
    """Moves, how they ended, and α at the end.

    ``outcome``: "real" (α became ε), "fundamental", or why α is no root: "negative" entry, "disconnected" support.
    The parameters at the end are λ on the vectors that the moves bring to the end (see ``pull_back``).
    """

    moves: tuple[Move, ...]
    outcome: Outcome
    dimension: Vector
    blocked: Blocked | None


def reduce(quiver: Quiver, *, modulo_integers: bool = False) -> Reduction:
    """Reduce the quiver's (α, λ); with ``modulo_integers`` a parameter vanishes when it is an integer.

    Hypotheses: the quiver comes from local data (legs are chains on core vertices, α ≥ 0, α in L).
    Returns the reduction in the vertex order of the quiver.
    Cost: at most rank many core moves; each costs the number of core vertices plus one insertion for each leg.
    """
    return _Reducer(quiver, modulo_integers).run()


def pull_back(quiver: Quiver, moves: Sequence[Move], vector: Vector) -> Vector:
    """The vector that the moves bring to the given one: their reflections in reverse.

    Cost: the degree of the vertex, for every single reflection.
    """
    x = list(vector)
    for move in reversed(moves):
        if isinstance(move, CoreMove):
            height = sum(pairing_with(quiver, x, v) for v in move.vertices)
            for v in move.vertices:
                x[v] -= height
        else:
            for v in reversed(move.vertices):
                x[v] -= pairing_with(quiver, x, v)
    return tuple(x)


@dataclass
class _Leg:
    """A leg's vertices in order, its slots (values and drops), and the core vertices that it hangs on."""

    vertices: list[int]
    hangs_on: list[int]
    values: list[Value]
    drops: list[int]


@dataclass
class _Reducer:
    quiver: Quiver
    modulo_integers: bool
    moves: list[Move] = field(default_factory=list)
    blocked: Blocked | None = None

    def __post_init__(self) -> None:
        quiver = self.quiver
        self.groups = core_groups(quiver)
        self.core = [v for group in self.groups for v in group]
        self.core_rows = {v: [(u, n) for u, n in quiver.neighbours[v] if u < len(self.core)] for v in self.core}
        self.alpha = {v: quiver.vertices[v].dimension for v in self.core}
        self.parameters = {v: quiver.vertices[v].parameter for v in self.core}
        self.pairings = {v: pairing_with(quiver, quiver.dimension, v) for v in self.core}
        self.legs = _legs(quiver)
        if self.modulo_integers:
            for leg in self.legs:
                leg.values = [modulo_one(value) for value in leg.values]

    def run(self) -> Reduction:
        for leg in self.legs:
            self._sort(leg)
        while True:
            if any(n < 0 for n in self.alpha.values()) or any(leg.drops[-1] < 0 for leg in self.legs):
                return self._finish("negative")
            epsilon = tuple(max(group, key=self.pairings.__getitem__) for group in self.groups)
            height = sum(self.pairings[v] for v in epsilon)
            if height <= 0:
                whole = is_connected(self.quiver, support(self._vector()))
                return self._finish("fundamental" if whole else "disconnected")
            if self._is_epsilon(epsilon):
                return self._finish("real")
            self._reflect(epsilon, height)

    def _is_epsilon(self, epsilon: tuple[int, ...]) -> bool:
        return all(n == (v in epsilon) for v, n in self.alpha.items()) and all(leg.drops[1] == 0 for leg in self.legs)

    def _reflect(self, epsilon: tuple[int, ...], height: int) -> None:
        """α ← α − (α, ε)ε and λ_v ← λ_v − (e_v, ε)λ(ε); on a leg both fall on its first slot."""
        parameter = total(self.parameters[v] for v in epsilon)
        if self._vanishes(parameter):
            self._block(epsilon, height)
        self.moves.append(CoreMove(epsilon, height, parameter, self._vector()))
        change: dict[int, int] = {}
        for v in epsilon:
            self.alpha[v] -= height
            change[v] = change.get(v, 0) + 2
            for u, count in self.core_rows[v]:
                change[u] = change.get(u, 0) - count
        for u, weight in change.items():
            if weight:
                self.pairings[u] -= weight * height
                self.parameters[u] = self.parameters[u] - parameter * weight
        moved = [leg for leg in self.legs if any(v in epsilon for v in leg.hangs_on)]
        for leg in moved:
            leg.drops[0] -= height
            leg.values[0] = self._reduced(leg.values[0] + parameter)
            self._insert(leg, 0)

    def _sort(self, leg: _Leg) -> None:
        """Bring the drops of a leg into descending order, by insertions from the left."""
        for k in range(1, len(leg.drops)):
            target = k
            while target > 0 and leg.drops[target - 1] < leg.drops[k]:
                target -= 1
            if target < k:
                crossed = [(i, leg.drops[k] - leg.drops[i]) for i in range(k - 1, target - 1, -1)]
                self._cross(leg, k, crossed, target)

    def _insert(self, leg: _Leg, k: int) -> None:
        """Move slot k to the right, behind all slots with larger drop."""
        target = k
        while target + 1 < len(leg.drops) and leg.drops[target + 1] > leg.drops[k]:
            target += 1
        if target > k:
            crossed = [(i, leg.drops[i] - leg.drops[k]) for i in range(k + 1, target + 1)]
            self._cross(leg, k, crossed, target)

    def _cross(self, leg: _Leg, k: int, crossed: list[tuple[int, int]], target: int) -> None:
        """Move slot k across the given slots, each with its difference of drops, to the place ``target``."""
        moving, first, drop = leg.values[k], leg.values[0], leg.drops[0]
        word: list[int] = []
        for i, height in crossed:
            vertex = leg.vertices[i] if i < k else leg.vertices[i - 1]
            if self.blocked is None and leg.values[i] == moving:
                self._flush(word)
                word = []
                self._block((vertex,), height)
            word.append(vertex)
        self._flush(word)
        leg.values.insert(target, leg.values.pop(k))
        leg.drops.insert(target, leg.drops.pop(k))
        if leg.drops[0] != drop:
            for v in leg.hangs_on:
                self.pairings[v] += leg.drops[0] - drop
        if leg.values[0] is not first:
            for v in leg.hangs_on:
                self.parameters[v] = self.parameters[v] + (first - leg.values[0])

    def _flush(self, word: list[int]) -> None:
        if word:
            self.moves.append(Reordering(tuple(word)))

    def _block(self, vertices: tuple[int, ...], height: int) -> None:
        if self.blocked is None:
            self.blocked = Blocked(len(self.moves), vertices, height)

    def _vanishes(self, value: Value) -> bool:
        return value.is_integer if self.modulo_integers else value.is_zero

    def _reduced(self, value: Value) -> Value:
        return modulo_one(value) if self.modulo_integers else value

    def _vector(self) -> Vector:
        """α in the order of the quiver's vertices: leg vertex k has the sum of the drops after the k-th slot."""
        vector = [0] * len(self.quiver.vertices)
        for v, n in self.alpha.items():
            vector[v] = n
        for leg in self.legs:
            rest = 0
            for vertex, drop in zip(reversed(leg.vertices), reversed(leg.drops), strict=False):
                rest += drop
                vector[vertex] = rest
        return tuple(vector)

    def _finish(self, outcome: Outcome) -> Reduction:
        return Reduction(tuple(self.moves), outcome, self._vector(), self.blocked)


def _legs(quiver: Quiver) -> list[_Leg]:
    """Legs with their slots; only differences of values along a leg matter, so the first value is taken as 0."""
    chains: dict[tuple[int, int], list[int]] = {}
    for v, vertex in enumerate(quiver.vertices):
        if vertex.role == "leg":
            chains.setdefault((vertex.pole, vertex.block), []).append(v)
    found = []
    for chain in chains.values():
        hangs_on = [u for u, _ in quiver.neighbours[chain[0]] if quiver.vertices[u].role == "core"]
        heights = [sum(quiver.vertices[u].dimension for u in hangs_on)]
        heights += [quiver.vertices[v].dimension for v in chain]
        heights.append(0)
        values = [Value.rational(0)]
        for v in chain:
            values.append(values[-1] - quiver.vertices[v].parameter)
        drops = [a - b for a, b in itertools.pairwise(heights)]
        found.append(_Leg(chain, hangs_on, values, drops))
    return found
