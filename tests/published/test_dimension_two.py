"""The fundamental unramified types of dimension 2 in ranks 2, 3 and 4, found by a search here.

A pole of order r + 1 is a tree of depth r: the exponents part at the coefficient of 1/z^r, then at that of 1/z^(r−1),
and so on; its leaves are partitions.  The numbers 5, 3, 9 are from memory (compare Hiroe and Oshima, A classification
of roots of symmetric Kac–Moody root systems and its application, 2013); the lists below were worked out by hand.
"""

from collections.abc import Iterator
from functools import cache
from math import gcd

import pytest

from app.findings.findings import examine
from app.local.shorthand import problem_from_shorthand

Partition = tuple[int, ...]
Tree = tuple[object, ...]

LISTS = {
    2: "11,11,11,11 · (1)(1),11,11 · ((1))((1)),11 · (((1)))(((1))) · (1)(1),(1)(1)",
    3: "111,111,111 · (1)(1)(1),111 · ((1))((1))((1))",
    4: "1111,1111,22 · (1)(1)(1)(1),22 · (11)(11),1111 · ((1)(1))((1)(1)) · 22,22,22,22 · (2)(2),22,22 · "
    "((2))((2)),22 · (((2)))(((2))) · (2)(2),(2)(2)",
}


def partitions(n: int, largest: int) -> Iterator[Partition]:
    if n == 0:
        yield ()
        return
    for first in range(min(n, largest), 0, -1):
        for rest in partitions(n - first, first):
            yield (first, *rest)


@cache
def trees(n: int, depth: int) -> tuple[Tree, ...]:
    """All trees of a depth and a rank; the children of a node in descending order."""
    if depth == 0:
        return tuple(partitions(n, n))
    return tuple(
        children
        for parts in partitions(n, n)
        for children in choices(parts, depth - 1)
        if list(children) == sorted(children, key=lambda tree: (rank(tree, depth - 1), str(tree)), reverse=True)
    )


def choices(parts: Partition, depth: int) -> Iterator[tuple[Tree, ...]]:
    if not parts:
        yield ()
        return
    for first in trees(parts[0], depth):
        for rest in choices(parts[1:], depth):
            yield (first, *rest)


def rank(tree: Tree, depth: int) -> int:
    return sum(entry if isinstance(entry, int) else rank(entry, depth - 1) for entry in tree)  # type: ignore[arg-type]


def orbit_dimension(tree: Tree, depth: int) -> int:
    """Σ m_i m_j (slope + 1) over ordered pairs of blocks, and the dimensions of the classes.

    At every node of depth d the children differ by slope d; a leaf is a class, where "slope 0" gives m² − Σ m_i².
    """
    sizes = [entry if isinstance(entry, int) else rank(entry, depth - 1) for entry in tree]  # type: ignore[arg-type]
    between = (sum(sizes) ** 2 - sum(m * m for m in sizes)) * (depth + 1)
    below = 0 if depth == 0 else sum(orbit_dimension(child, depth - 1) for child in tree)  # type: ignore[arg-type]
    return between + below


def written(tree: Tree, depth: int) -> str:
    if depth == 0:
        return "".join(f"{m}" for m in tree)
    return "".join(f"({written(child, depth - 1)})" for child in tree)  # type: ignore[arg-type]


def candidates(n: int) -> Iterator[list[str]]:
    """Types with Σ dim O = 2n², that is of dimension 2, of poles that no scalar twist lowers."""
    highest = n * n // (n - 1)
    poles = [
        (orbit_dimension(tree, depth), written(tree, depth))
        for depth in range(highest)
        for tree in trees(n, depth)
        if len(tree) > 1 and orbit_dimension(tree, depth) <= 2 * n * n
    ]

    def chosen(rest: int, start: int) -> Iterator[list[str]]:
        if rest == 0:
            yield []
        for k in range(start, len(poles)):
            if poles[k][0] <= rest:
                for others in chosen(rest - poles[k][0], k):
                    yield [poles[k][1], *others]

    yield from chosen(2 * n * n, 0)


@pytest.mark.parametrize("n", LISTS)
def test_fundamental_types_of_dimension_two(n: int) -> None:
    """Exactly the listed types need no reflection; a multiple of another one admits no irreducible system."""
    found = []
    searched = 0
    for poles in candidates(n):
        findings = examine(problem_from_shorthand(",".join(poles)))
        assert findings.dimension == 2
        searched += 1
        if findings.descent or findings.root_class == "none":
            continue
        found.append(sorted(poles))
        digits = [int(c) for c in "".join(poles) if c.isdigit()]
        assert findings.additive is not None and findings.root_class == "isotropic"
        assert findings.additive.exists is (gcd(*digits) == 1)
    assert searched > len(found) or n == 2
    assert len(found) == {2: 5, 3: 3, 4: 9}[n]
    assert sorted(found) == sorted(sorted(type_.split(",")) for type_ in LISTS[n].split(" · "))
