"""The order in which places stand on a ring, so that few chords cross.

Up to ``LARGEST_SEARCH`` places all orders are tried.  Beyond that, places with the same neighbours form a part, and
every part is spread evenly over the ring: for a complete bipartite graph whose smaller part divides the larger this
order has the fewest crossings that a ring allows [Riskin, On the outerplanar crossing numbers of K_{m,n}, Bulletin of
the ICA 39 (2003)], and for a complete graph every order is as good.
"""

from collections.abc import Sequence
from functools import lru_cache
from itertools import combinations, permutations
from math import cos, pi

LARGEST_SEARCH = 6


@lru_cache(maxsize=256)
def ring_order(size: int, chords: tuple[tuple[int, int], ...]) -> tuple[int, ...]:
    """An order of 0 … size − 1 on a circle with few crossings: the fewest, up to ``LARGEST_SEARCH`` places.

    There ties are broken by the shortest chords along the circle and then by the given order, so the answer is unique,
    and the first place stays first.  Cost: (size − 1)! orders with every pair of chords for at most ``LARGEST_SEARCH``
    places, size · log(size) and the number of chords beyond.
    """
    if len(chords) < 2:
        return tuple(range(size))
    if size > LARGEST_SEARCH:
        return _spread(size, chords)
    return min(
        ((0, *rest) for rest in permutations(range(1, size))),
        key=lambda order: (crossings(order, chords), _stretch(order, chords), order),
    )


def crossings(order: Sequence[int], chords: Sequence[tuple[int, int]]) -> int:
    """Number of pairs of chords that cross when the places stand on a circle in this order."""
    place = {member: k for k, member in enumerate(order)}
    spans = [sorted((place[a], place[b])) for a, b in chords]
    return sum(a < c < b < d or c < a < d < b for (a, b), (c, d) in combinations(spans, 2))


def clearance(order: Sequence[int], chords: Sequence[tuple[int, int]]) -> float:
    """Smallest distance from a chord to a place between its ends, on a circle of radius 1; 1 without such a chord.

    A chord over ``s`` steps comes nearest to the places next to its ends.
    """
    place = {member: k for k, member in enumerate(order)}
    steps = {min(abs(place[a] - place[b]), len(order) - abs(place[a] - place[b])) for a, b in chords}
    gaps = [cos(pi * (s - 2) / len(order)) - cos(pi * s / len(order)) for s in steps if s >= 2]
    return min(gaps, default=1.0)


def _spread(size: int, chords: Sequence[tuple[int, int]]) -> tuple[int, ...]:
    """Members of a part, which have the same neighbours, at equal distances along the ring."""
    neighbours: list[set[int]] = [set() for _ in range(size)]
    for a, b in chords:
        neighbours[a].add(b)
        neighbours[b].add(a)
    parts: dict[frozenset[int], list[int]] = {}
    for member in range(size):
        parts.setdefault(frozenset(neighbours[member]), []).append(member)
    # a part of n members cuts the ring into n equal pieces and its members stand in their middles
    keyed = [
        ((2 * k + 1) / (2 * len(part)), first, member)
        for first, part in enumerate(parts.values())
        for k, member in enumerate(part)
    ]
    return tuple(member for _, _, member in sorted(keyed))


def _stretch(order: Sequence[int], chords: Sequence[tuple[int, int]]) -> int:
    """Sum of the distances along the circle that the chords span."""
    place = {member: k for k, member in enumerate(order)}
    gaps = (abs(place[a] - place[b]) for a, b in chords)
    return sum(min(gap, len(order) - gap) for gap in gaps)
