"""How many square roots are independent, against factoring."""

from math import gcd, prod

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.exact.independence import coprime_base, independent_root_count

PRIMES = (2, 3, 5, 7, 11, 13, 17, 19)
squarefree = st.sets(st.sampled_from(PRIMES)).map(prod)


@pytest.mark.parametrize(
    ("radicals", "count"),
    [([], 0), ([1], 0), ([-1, 1], 0), ([2], 1), ([2, -2], 1), ([2, 3], 2), ([2, 3, 6], 2), ([6, 10, 15], 2),
     ([-6, 10, -15, 2], 3),
     ([30, 42, 70, 105], 4), ([30, 42, 35], 2), ([2, 3, 5, 7, 11, 13, 17], 7)],
)  # fmt: skip
def test_named_cases(radicals, count):
    assert independent_root_count(radicals) == count


def rank_by_factoring(radicals):
    rows = [[int(abs(r) % p == 0) for p in PRIMES] for r in radicals]
    rank = 0
    for column in range(len(PRIMES)):
        pivot = next((k for k in range(rank, len(rows)) if rows[k][column]), None)
        if pivot is None:
            continue
        rows[rank], rows[pivot] = rows[pivot], rows[rank]
        for k, row in enumerate(rows):
            if k != rank and row[column]:
                rows[k] = [x ^ y for x, y in zip(row, rows[rank], strict=True)]
        rank += 1
    return rank


@given(st.lists(st.tuples(squarefree, st.sampled_from([1, -1])).map(prod), max_size=10), st.integers(0, 6))
def test_against_factoring(radicals, bound):
    rank = rank_by_factoring(radicals)
    assert independent_root_count(radicals) == rank
    assert min(independent_root_count(radicals, bound), bound + 1) == min(rank, bound + 1)


@given(st.lists(squarefree, max_size=10))
def test_coprime_base(radicals):
    base = coprime_base(radicals)
    assert all(element > 1 for element in base)
    assert all(gcd(x, y) == 1 for k, x in enumerate(base) for y in base[:k])
    for radical in radicals:
        assert prod(element for element in base if radical % element == 0) == radical


def test_stops_early_on_many_radicals():
    assert independent_root_count(range(10**6, 10**6 + 5000), stop_above=6) == 7  # by their number alone
