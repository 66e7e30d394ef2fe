"""Newton polygons: published equations, and identities on random formal types."""

from fractions import Fraction
from itertools import pairwise
from random import Random
from typing import Any

import pytest

from app.local.conjugates import conjugates
from app.local.document import problem_from_json
from app.local.formal_type import Pole
from app.local.newton import irregularity, newton_polygon, slopes
from tests.local.document_parts import block, make, pole
from tests.local.random_documents import random_problem


def pole_of(*blocks: dict[str, Any]) -> Pole:
    return problem_from_json(make(pole("infinity", *blocks))).poles[0]


def one(multiplicity: int = 1) -> tuple[object, list[int]]:
    return (0, [1] * multiplicity)


CASES = [
    # Airy's equation at infinity: e^(±2/3·x^(3/2)), DLMF §9.7
    (pole_of(block({"3/2": "2/3"}, one())), [("3/2", 2)], [(0, 0), (2, 3)]),
    # Bessel's equation at infinity: e^(±ix), DLMF §10.2(ii)
    (pole_of(block({"1": "i"}, one()), block({"1": "-i"}, one())), [("1", 2)], [(0, 0), (2, 2)]),
    # Bessel's equation in t, x² = 4t: e^(±2i·t^(1/2))
    (pole_of(block({"1/2": "2*i"}, one())), [("1/2", 2)], [(0, 0), (2, 1)]),
    # Kummer's equation at infinity: solutions like x^(−a) and e^x·x^(a−b), DLMF §13.2(iv)
    (pole_of(block({}, one()), block({"1": "1"}, one())), [("0", 1), ("1", 1)], [(0, 0), (1, 0), (2, 1)]),
    # Frenkel and Gross, order 5, and the generalised Airy equation y^(4) = xy: one slope (n + 1)/n, common practice
    (pole_of(block({"1/5": "1"}, one())), [("1/5", 5)], [(0, 0), (5, 1)]),
    (pole_of(block({"5/4": "1"}, one())), [("5/4", 4)], [(0, 0), (4, 5)]),
    # multiplicities count with the ramification index; lower terms do not matter
    (
        pole_of(block({"3/2": "1", "1": "2"}, one(2)), block({"1/2": "1"}, one()), block({}, one(3))),
        [("0", 3), ("1/2", 2), ("3/2", 4)],
        [(0, 0), (3, 0), (5, 1), (9, 7)],
    ),
    # a log pole
    (pole_of(block({}, one(3))), [("0", 3)], [(0, 0), (3, 0)]),
]


@pytest.mark.parametrize(("at", "expected", "polygon"), CASES)
def test_published_polygons(at: Pole, expected: list[tuple[str, int]], polygon: list[tuple[int, int]]) -> None:
    assert slopes(at) == tuple((Fraction(slope), width) for slope, width in expected)
    assert newton_polygon(at) == tuple(polygon)
    assert irregularity(at) == polygon[-1][1]


def test_the_polygon_on_random_types() -> None:
    fractional = 0
    random = Random(31)
    for _ in range(150):
        for at in random_problem(random).poles:
            vertices = newton_polygon(at)
            assert vertices[0] == (0, 0) and vertices[-1][0] == at.rank
            rises = [Fraction(d - b, c - a) for (a, b), (c, d) in pairwise(vertices)]
            assert rises == sorted(set(rises)), "convex, with no vertex inside an edge"
            # the sum over conjugates one by one, without ranks or ramification indices
            by_hand = sum(
                max((power for power, _ in one_conjugate), default=Fraction(0)) * piece.multiplicity
                for piece in at.blocks
                for one_conjugate in conjugates(piece.exponent)
            )
            assert irregularity(at) == by_hand
            fractional += any(slope.denominator > 1 for slope in rises)
    assert fractional > 20
