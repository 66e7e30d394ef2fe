"""How many square roots are independent.

Square roots of squarefree integers d_1, … are multiplicatively independent (no product of some of them is rational)
exactly when the d's are linearly independent in Q*/(Q*)², a vector space over the field of two elements.  Instead
of factoring, every d is written over a coprime base found by greatest common divisors.
"""

from collections.abc import Iterable
from math import gcd


def coprime_base(radicals: Iterable[int]) -> list[int]:
    """Pairwise coprime integers > 1 such that every |radical| is a product of some of them.

    Hypothesis: the radicals are squarefree.  Cost: number of radicals times size of the base.

    >>> sorted(coprime_base([6, 10]))
    [2, 3, 5]
    """
    base: list[int] = []
    for radical in radicals:
        rest = abs(radical)
        refined: list[int] = []
        for element in base:
            common = gcd(rest, element)
            if common == 1:
                refined.append(element)
                continue
            rest //= common
            refined.append(common)
            if element != common:
                refined.append(element // common)
        if rest > 1:
            refined.append(rest)
        base = refined
    return base


def independent_root_count(radicals: Iterable[int], stop_above: int | None = None) -> int:
    """Rank of the square roots of the radicals, i left out: the field they generate over Q has degree 2^rank.

    Hypothesis: the radicals are non-zero squarefree integers, as in ``Value``; signs do not matter.  With
    ``stop_above`` the count stops as soon as it exceeds that bound.
    Cost: number of radicals times size of their coprime base, in greatest common divisors.

    >>> independent_root_count([-1, 2, 3, -6])
    2
    """
    distinct = {abs(radical) for radical in radicals} - {1}
    if stop_above is not None and len(distinct) >= 2**stop_above:
        return stop_above + 1  # the products of r roots give only 2^r − 1 radicals
    base = coprime_base(distinct)
    pivots: dict[int, int] = {}  # highest bit → row
    for radical in distinct:
        row = sum(1 << place for place, element in enumerate(base) if radical % element == 0)
        while row:
            top = row.bit_length()
            if top not in pivots:
                pivots[top] = row
                break
            row ^= pivots[top]
        if stop_above is not None and len(pivots) > stop_above:
            break
    return len(pivots)
