"""Floating approximation against exact evaluation."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.exact.approximate import approximate
from app.exact.number import parse_number
from tests.exact.number_strategies import SYMBOLS, evaluate_at, values_over


def test_named_values():
    assert approximate(parse_number("0"), {}) == 0
    assert approximate(parse_number("i*sqrt(2)"), {}) == pytest.approx(1j * math.sqrt(2))
    assert approximate(parse_number("a^2-1/3", ("a",)), {"a": 1j}) == pytest.approx(-4 / 3)
    assert isinstance(approximate(parse_number("3"), {}), complex)


points = st.fixed_dictionaries({name: st.fractions(-3, 3, max_denominator=4) for name in SYMBOLS})


@given(values_over(radicals=(1, -1)), points)
def test_against_exact_evaluation(value, point):
    real, imaginary = evaluate_at(value, point)
    result = approximate(value, {name: complex(number) for name, number in point.items()})
    assert abs(result - complex(real, imaginary)) < 1e-9


def test_refusals():
    with pytest.raises(KeyError):
        approximate(parse_number("a", ("a",)), {})
    with pytest.raises(OverflowError):
        approximate(parse_number("1" * 400), {})
