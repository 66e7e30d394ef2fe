"""Orders on a ring against all orders and a published formula."""

from itertools import permutations, product

import pytest

from app.drawing.ring import clearance, crossings, ring_order

Chords = tuple[tuple[int, int], ...]


def bipartite(first: int, second: int) -> Chords:
    return tuple((a, first + b) for a, b in product(range(first), range(second)))


@pytest.mark.parametrize(("first", "second"), [(1, 4), (2, 2), (2, 3), (3, 3), (2, 4), (2, 5), (3, 4), (2, 6)])
def test_no_order_has_fewer_crossings(first: int, second: int) -> None:
    size, chords = first + second, bipartite(first, second)
    order = ring_order(size, chords)
    assert sorted(order) == list(range(size))
    fewest = min(crossings((0, *rest), chords) for rest in permutations(range(1, size)))
    assert crossings(order, chords) == fewest < crossings(range(size), chords) or fewest == 0


@pytest.mark.parametrize(("small", "large"), [(2, 6), (3, 6), (4, 4), (4, 8), (8, 8)])
def test_the_formula_of_riskin(small: int, large: int) -> None:
    """n (m − 1) (2mn − 3m − n) / 12 crossings where m divides n."""
    chords = bipartite(small, large)
    order = ring_order(small + large, chords)
    assert 12 * crossings(order, chords) == large * (small - 1) * (2 * small * large - 3 * small - large)


def test_a_complete_graph_keeps_its_order() -> None:
    chords = tuple((a, b) for b in range(8) for a in range(b))
    assert ring_order(8, chords) == tuple(range(8))


def test_clearance() -> None:
    assert clearance(range(4), ((0, 1), (2, 3))) == 1.0
    assert clearance(range(4), ((0, 2),)) == pytest.approx(1.0)
    assert clearance(range(6), ((0, 2), (0, 3))) == pytest.approx(0.5)
