"""The thirteen fundamental tuples of rigidity index −2, found by a search here and examined one by one.

Their number is that of Crawley-Boevey (2003) and Kostov, J. Algebra 281 (2004); four of them are the indivisible
dimension 4 families of Kawakami, Nakamura and Sakai, arXiv:1209.3836 and Oshima's table (from memory).
"""

from collections.abc import Iterator
from itertools import combinations_with_replacement
from math import gcd

import pytest

from app.findings.findings import examine
from app.local.shorthand import problem_from_shorthand

Partition = tuple[int, ...]


def partitions(n: int, largest: int | None = None) -> Iterator[Partition]:
    if n == 0:
        yield ()
        return
    for first in range(min(n, largest or n), 0, -1):
        for rest in partitions(n - first, first):
            yield (first, *rest)


def index_of(tuple_: tuple[Partition, ...], order: int) -> int:
    return sum(m * m for parts in tuple_ for m in parts) - (len(tuple_) - 2) * order**2


def is_fundamental(tuple_: tuple[Partition, ...], order: int) -> bool:
    """Σ m_(j,1) ≤ (k − 2) n: the central reflection does not lower the order."""
    return sum(parts[0] for parts in tuple_) <= (len(tuple_) - 2) * order


def fundamental_tuples(index: int, highest_order: int) -> list[tuple[Partition, ...]]:
    """Fundamental tuples with a given negative index, up to order 6·|index| + … (enough for index −2: order 12)."""
    found = []
    for order in range(2, highest_order + 1):
        # the slack Σ_j m_j (m_1 − m_j) of every pole is at most −index, which leaves few partitions
        candidates = [
            parts for parts in partitions(order) if len(parts) > 1 and sum(m * (parts[0] - m) for m in parts) <= -index
        ]
        for count in (3, 4, 5, 6):
            for tuple_ in combinations_with_replacement(candidates, count):
                if index_of(tuple_, order) == index and is_fundamental(tuple_, order):
                    found.append(tuple_)
    return found


TUPLES = fundamental_tuples(-2, 12)


def shorthand_of(tuple_: tuple[Partition, ...]) -> str:
    return ",".join("".join(f"[{m}]" for m in parts) for parts in tuple_)


def test_there_are_thirteen() -> None:
    assert len(TUPLES) == 13
    assert all(gcd(*(m for parts in tuple_ for m in parts)) == 1 for tuple_ in TUPLES)


@pytest.mark.parametrize("tuple_", TUPLES, ids=shorthand_of)
def test_each_exists_with_four_parameters(tuple_: tuple[Partition, ...]) -> None:
    findings = examine(problem_from_shorthand(shorthand_of(tuple_)))
    assert (findings.rigidity_index, findings.dimension, findings.root_class) == (-2, 4, "anisotropic")
    assert findings.descent == ()
    assert findings.additive is not None and findings.additive.exists is True
    assert findings.multiplicative is not None and findings.multiplicative.exists is True


def test_the_four_of_kawakami_nakamura_sakai_are_among_them() -> None:
    """arXiv:1209.3836: the log types whose deformation has dimension 4 and more than three poles."""
    known = ["11,11,11,11,11", "21,21,111,111", "31,22,22,1111", "22,22,22,211"]
    normal = {tuple(sorted(tuple_)) for tuple_ in TUPLES}
    for shorthand in known:
        parts = tuple(sorted(tuple(int(digit) for digit in part) for part in shorthand.split(",")))
        assert parts in normal
