"""Galois conjugates compared exactly, against floating evaluation of the coefficients."""

from cmath import exp, pi
from fractions import Fraction
from itertools import product
from math import sqrt
from random import Random

import pytest

from app.errors import Refused
from app.exact.number import parse_number
from app.exact.value import Value
from app.local.conjugates import Conjugate, conjugates, separations
from app.local.document import problem_from_json
from app.local.formal_type import Exponent
from tests.local.document_parts import block, make, pole


def exponent(coefficients: dict[str, str]) -> Exponent:
    """exponent({"1/2": "a"}) is a·z^(−1/2)."""
    terms = [(Fraction(power), parse_number(text, ["a", "b"])) for power, text in coefficients.items()]
    return Exponent(tuple(sorted(terms, reverse=True, key=lambda term: term[0])))


def floating(value: Value) -> complex:
    """Evaluation of a value at a = 0.6180339, b = −1.7320507."""
    point = {"a": 0.6180339, "b": -1.7320507}
    whole = 0j
    for (monomial, radical), coefficient in value.terms.items():
        term = complex(coefficient) * (sqrt(radical) if radical > 0 else 1j * sqrt(-radical))
        for name, power in monomial:
            term *= point[name] ** int(power)
        whole += term
    return whole


def evaluated(conjugate: Conjugate) -> dict[Fraction, complex]:
    return {power: floating(value) * exp(2j * pi * float(turn)) for power, (value, turn) in conjugate}


COEFFICIENTS = [
    "1",
    "-1",
    "2",
    "i",
    "-i",
    "sqrt(2)",
    "-sqrt(2)",
    "(1+i)/sqrt(2)",
    "(-1+i*sqrt(3))/2",
    "(-1-i*sqrt(3))/2",
    "(sqrt(3)+i)/2",
    "a",
    "-a",
    "i*a",
    "a+b",
    "-a-b",
    "(-1+i*sqrt(3))/2*a",
    "(sqrt(6)+sqrt(2)+i*(sqrt(6)-sqrt(2)))/4*b",
    "b",
]


def random_exponent(random: Random) -> Exponent:
    index = random.choice((1, 2, 2, 3, 4, 5, 6, 8, 12, 24))
    powers = random.sample(range(1, 2 * index + 2), random.randint(1, min(3, 2 * index)))
    terms = sorted(((Fraction(k, index), random.choice(COEFFICIENTS)) for k in powers), reverse=True)
    return Exponent(tuple((power, parse_number(text, ["a", "b"])) for power, text in terms))


def slope_between(first: dict[Fraction, complex], second: dict[Fraction, complex]) -> Fraction:
    different = [p for p in first.keys() | second.keys() if abs(first.get(p, 0) - second.get(p, 0)) > 1e-6]
    return max(different, default=Fraction(0))


def floating_orbit(q: Exponent) -> list[dict[Fraction, complex]]:
    """Conjugates by the definition: z^(1/e) → ζ z^(1/e)."""
    e = q.ramification
    return [{s: floating(c) * exp(-2j * pi * k * float(s)) for s, c in q.terms} for k in range(e)]


def test_the_orbit_is_what_the_definition_says() -> None:
    random = Random(7)
    for _ in range(300):
        q = random_exponent(random)
        orbit = conjugates(q)
        assert len(set(orbit)) == q.ramification == len(orbit)
        assert all(0 <= turn < Fraction(1, 24) for conjugate in orbit for _, (_, turn) in conjugate)
        expected = floating_orbit(q)
        for conjugate in orbit:
            assert sum(slope_between(evaluated(conjugate), other) == 0 for other in expected) == 1


def test_comparisons_agree_with_floating_evaluation() -> None:
    random = Random(8)
    equal = separated = 0
    for _ in range(400):
        q, p = random_exponent(random), random_exponent(random)
        if random.random() < 0.5:
            p = Exponent(tuple((s, random.choice((c, -c, c * parse_number("i")))) for s, c in q.terms))
        members = [(conjugate, random.randint(1, 3)) for r in (q, p) for conjugate in conjugates(r)]
        values = [evaluated(conjugate) for conjugate, _ in members]
        expected: dict[Fraction, int] = {}
        for (first, (one, weight)), (second, (other, factor)) in product(zip(values, members, strict=True), repeat=2):
            slope = slope_between(first, second)
            assert (slope == 0) == (one == other)
            if slope:
                expected[slope] = expected.get(slope, 0) + weight * factor
        assert separations(members) == expected
        equal += not set(conjugates(q)).isdisjoint(conjugates(p))
        separated += bool(expected)
    assert equal > 30 and separated > 200


SAME = [
    ({"1/2": "a"}, {"1/2": "-a"}),
    ({"1/3": "1"}, {"1/3": "(-1+i*sqrt(3))/2"}),
    ({"1/3": "a+b"}, {"1/3": "(-1-i*sqrt(3))/2*(a+b)"}),
    ({"1/4": "sqrt(2)"}, {"1/4": "i*sqrt(2)"}),
    ({"1/8": "1"}, {"1/8": "(1+i)/sqrt(2)"}),
    ({"5/24": "b"}, {"5/24": "(sqrt(6)+sqrt(2)+i*(sqrt(6)-sqrt(2)))/4*b"}),
    ({"3/4": "1", "1/2": "1"}, {"3/4": "i", "1/2": "-1"}),
    ({"2": "a", "1/2": "1"}, {"2": "a", "1/2": "-1"}),
    ({"1/10": "1"}, {"1/10": "-1"}),
]
DIFFERENT = [
    ({"1/2": "a"}, {"1/2": "i*a"}),
    ({"1/2": "1"}, {"1/2": "2"}),
    ({"1/2": "a"}, {"1/2": "b"}),
    ({"1/3": "1"}, {"1/3": "-1"}),
    ({"1/3": "1"}, {"2/3": "1"}),
    ({"1/5": "1"}, {"1/5": "-1"}),
    ({"1/5": "1"}, {"1/5": "i"}),
    ({"3/4": "1", "1/2": "1"}, {"3/4": "i", "1/2": "1"}),
    ({"3/4": "1", "1/2": "1"}, {"3/4": "-1", "1/2": "-1"}),
    ({"2": "a", "1/2": "1"}, {"2": "-a", "1/2": "-1"}),
    ({"1/2": "1"}, {"1/2": "1", "1/4": "1"}),
    ({"1/2": "1", "1/3": "1"}, {"1/2": "-1", "1/3": "-1"}),
]


@pytest.mark.parametrize(
    ("first", "second", "same"), [(*pair, True) for pair in SAME] + [(*pair, False) for pair in DIFFERENT]
)
def test_orbits_told_apart(first: dict[str, str], second: dict[str, str], same: bool) -> None:
    q, p = exponent(first), exponent(second)
    assert (not set(conjugates(q)).isdisjoint(conjugates(p))) == same
    data = make(pole(0, *[block(dict(part), (0, [1])) for part in (first, second)]), symbols=["a", "b"])
    if not same:
        problem_from_json(data)
        return
    with pytest.raises(Refused) as caught:
        problem_from_json(data)
    assert [place.at for place in caught.value.places] == ["/poles/0/blocks/1/exponent"]
