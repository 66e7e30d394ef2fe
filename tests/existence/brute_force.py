"""Existence decided straight from the definition, by enumeration, and a quiver built from plain data.

This is the independent route: nothing here is imported from the program.  Local data are plain lists; the quiver, the
root test and the table of decompositions are written anew from the published definitions:

    quiver and parameters   Hiroe, Duke Math. J. 166 (2017)
    roots                   Kac, Infinite dimensional Lie algebras (1990), ch. 5
    Σ                       Crawley-Boevey, Duke Math. J. 118 (2003); with θ·β ∈ Z, Crawley-Boevey and Shaw,
                            Adv. Math. 201 (2006)
"""

import itertools
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cache
from math import lcm

Exponent = dict[int, int]
Residue = list[tuple[Fraction, list[int]]]
Block = tuple[Exponent, Residue]
Pole = list[Block]


def multiplicity(block: Block) -> int:
    return sum(sum(sizes) for _, sizes in block[1])


def slope_of_difference(first: Exponent, second: Exponent) -> int:
    powers = [power for power in first.keys() | second.keys() if first.get(power, 0) != second.get(power, 0)]
    return max(powers, default=0)


def nullities(sizes: list[int]) -> list[int]:
    return [sum(1 for size in sizes if size > k) for k in range(max(sizes))]


@dataclass
class Case:
    """A quiver with dimension vector, parameters and the core vertices of each pole."""

    alpha: list[int] = field(default_factory=list)
    parameters: list[Fraction] = field(default_factory=list)
    edges: dict[tuple[int, int], int] = field(default_factory=dict)
    groups: list[list[int]] = field(default_factory=list)

    def join(self, a: int, b: int, count: int) -> None:
        if count:
            self.edges[a, b] = self.edges[b, a] = count

    def add(self, dimension: int, parameter: Fraction) -> int:
        self.alpha.append(dimension)
        self.parameters.append(parameter)
        return len(self.alpha) - 1


def case_of(poles: list[Pole], base: int) -> Case:
    """The quiver of unramified local data with the given base pole."""
    case, core = Case(), {}
    for i in [base] + [i for i, pole in enumerate(poles) if i != base and len(pole) > 1]:
        core[i] = [case.add(multiplicity(block), -block[1][0][0]) for block in poles[i]]
        case.groups.append(core[i])
    for i, pole in enumerate(poles):
        if i != base and len(pole) == 1:
            for v in core[base]:
                case.parameters[v] -= pole[0][1][0][0]
    for i, group in core.items():
        for x, y in itertools.combinations(range(len(group)), 2):
            case.join(group[x], group[y], slope_of_difference(poles[i][x][0], poles[i][y][0]) - 1)
        if i != base:
            for a, b in itertools.product(core[base], group):
                case.join(a, b, 1)
    for i, pole in enumerate(poles):
        for j, block in enumerate(pole):
            run = [(value, drop) for value, sizes in block[1] for drop in nullities(sizes)]
            dimension = multiplicity(block)
            before = [core[i][j]] if i in core else core[base]
            for (value, drop), (following, _) in itertools.pairwise(run):
                dimension -= drop
                v = case.add(dimension, value - following)
                for u in before:
                    case.join(u, v, 1)
                before = [v]
    return case


def number_of_vectors(case: Case) -> int:
    total = 1
    for n in case.alpha:
        total *= n + 1
    return total


def p(case: Case, x: Sequence[int]) -> int:
    pairs = sum(count * x[a] * x[b] for (a, b), count in case.edges.items())
    return 1 - sum(n * n for n in x) + pairs // 2


def is_root(case: Case, vector: Sequence[int]) -> bool:
    """Whether a non-negative vector is a positive root."""
    x, size = list(vector), len(vector)
    rows = [[(u, case.edges[v, u]) for u in range(size) if (v, u) in case.edges] for v in range(size)]
    while True:
        heights = [2 * x[v] - sum(count * x[u] for u, count in rows[v]) for v in range(size)]
        v = max(range(size), key=heights.__getitem__)
        if heights[v] <= 0:
            break
        if sum(x) == x[v]:
            return x[v] == 1
        x[v] -= heights[v]
        if x[v] < 0:
            return False
    inside = {v for v in range(size) if x[v]}
    if not inside:
        return False
    seen = set()
    waiting = [min(inside)]
    while waiting:
        v = waiting.pop()
        if v not in seen:
            seen.add(v)
            waiting += [u for u, _ in rows[v] if u in inside]
    return seen == inside


def vanishes(case: Case, x: Sequence[int], modulo_integers: bool) -> bool:
    value = sum((a * n for a, n in zip(case.parameters, x, strict=True)), Fraction(0))
    return value.denominator == 1 if modulo_integers else value == 0


def vanishing_on(case: Case, modulo_integers: bool) -> Callable[[Sequence[int]], bool]:
    """``vanishes`` with the parameters over one denominator: whole numbers, for many vectors."""
    scale = lcm(*(value.denominator for value in case.parameters))
    whole = [int(value * scale) for value in case.parameters]
    if modulo_integers:
        return lambda x: sum(map(int.__mul__, whole, x)) % scale == 0
    return lambda x: sum(map(int.__mul__, whole, x)) == 0


def in_lattice(case: Case, x: Sequence[int]) -> bool:
    return len({sum(x[v] for v in group) for group in case.groups}) == 1


def exists(case: Case, *, modulo_integers: bool = False) -> bool:
    """Whether α ∈ Σ: α is an admissible root and p(α) exceeds Σ p over every way to write it as a longer sum."""
    whole = tuple(case.alpha)
    admissible = vanishing_on(case, modulo_integers)
    roots = [
        x
        for x in itertools.product(*(range(n + 1) for n in whole))
        if admissible(x) and any(x) and in_lattice(case, x) and is_root(case, x)
    ]
    if whole not in roots:
        return False
    by_first: dict[int, list[tuple[tuple[int, ...], int]]] = {}
    for x in roots:
        if x != whole:
            by_first.setdefault(next(v for v, n in enumerate(x) if n), []).append((x, p(case, x)))

    @cache
    def best(rest: tuple[int, ...]) -> int | None:
        """The largest Σ p over the ways to write a vector as a sum of smaller admissible roots; None if none."""
        first = next((v for v, n in enumerate(rest) if n), None)
        if first is None:
            return 0
        found: int | None = None
        for x, height in by_first.get(first, ()):
            if all(a <= b for a, b in zip(x, rest, strict=True)):
                after = best(tuple(b - a for a, b in zip(x, rest, strict=True)))
                if after is not None and (found is None or height + after > found):
                    found = height + after
        return found

    longest = best(whole)
    return longest is None or p(case, whole) > longest
