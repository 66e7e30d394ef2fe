"""The order in which places stand on a ring, so that few chords cross.

Up to ``LARGEST_SEARCH`` places all orders are tried; beyond that the given order stays (core vertices by pole, then the
heads of shared legs), because parts that stand together are easier to read than a few crossings less.
"""

from collections.abc import Sequence
from functools import lru_cache
from itertools import combinations, permutations

LARGEST_SEARCH = 6


@lru_cache(maxsize=256)
def ring_order(size: int, chords: tuple[tuple[int, int], ...]) -> tuple[int, ...]:
    """An order of 0 … size − 1 on a circle with the fewest crossings; the first place stays first.

    Ties are broken by the longest runs along the circle and then by the given order, so the answer is unique.
    Cost: (size − 1)! orders with every pair of chords, for at most ``LARGEST_SEARCH`` places.
    """
    if size > LARGEST_SEARCH or len(chords) < 2:
        return tuple(range(size))
    return min(
        ((0, *rest) for rest in permutations(range(1, size))),
        key=lambda order: (crossings(order, chords), _stretch(order, chords), order),
    )


def crossings(order: Sequence[int], chords: Sequence[tuple[int, int]]) -> int:
    """Number of pairs of chords that cross when the places stand on a circle in this order."""
    place = {member: k for k, member in enumerate(order)}
    spans = [sorted((place[a], place[b])) for a, b in chords]
    return sum(a < c < b < d or c < a < d < b for (a, b), (c, d) in combinations(spans, 2))


def _stretch(order: Sequence[int], chords: Sequence[tuple[int, int]]) -> int:
    """Sum of the distances along the circle that the chords span."""
    place = {member: k for k, member in enumerate(order)}
    gaps = (abs(place[a] - place[b]) for a, b in chords)
    return sum(min(gap, len(order) - gap) for gap in gaps)
