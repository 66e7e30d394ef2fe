"""Ring axioms, hashing and evaluation of values on random cases."""

import pickle
from fractions import Fraction

from hypothesis import assume, given, reject, settings
from hypothesis import strategies as st

from app.exact.limits import OverLimit
from app.exact.value import ONE, ZERO, Value, modulo_one, total
from tests.exact.number_strategies import (
    SYMBOLS,
    constants,
    evaluate_at,
    rationals,
    values,
    values_over,
)

gaussian = values_over(radicals=(1, -1))
points = st.fixed_dictionaries({name: st.fractions(-3, 3, max_denominator=4) for name in SYMBOLS})


@given(values, values, values)
def test_ring_axioms(x, y, z):
    assert x + y == y + x
    assert (x + y) + z == x + (y + z)
    assert x * y == y * x
    assert (x * y) * z == x * (y * z)
    assert x * (y + z) == x * y + x * z
    assert x + ZERO == x == x * ONE
    assert x - x == 0 and x + (-x) == ZERO
    assert x - y == -(y - x)


@given(values, values)
def test_no_zero_divisors(x, y):
    assert bool(x * y) == (bool(x) and bool(y))


@given(values, values)
def test_equal_means_equal_hash_whatever_the_route(x, y):
    routes = [x + y, y + x, total([y, x]), x - (-y), (x * 3 + y * 3) / 3, pickle.loads(pickle.dumps(x + y))]
    assert len({*routes}) == 1
    assert len({hash(route) for route in routes}) == 1


@given(values, rationals)
def test_scalars_are_values(x, number):
    scalar = Value.rational(number)
    assert x * number == x * scalar == number * x
    assert x + number == x + scalar
    assert (scalar == number) and hash(scalar) == hash(number)


@given(values, st.integers(0, 4))
def test_powers_are_repeated_products(x, exponent):
    product = ONE
    for _ in range(exponent):
        product = product * x
    assert x**exponent == product


@given(values, values)
def test_results_are_in_normal_form(x, y):
    for value in (x + y, x * y, x - y, -x, x * Fraction(2, 3)):
        for (monomial, radical), coefficient in value.terms.items():
            assert coefficient != 0
            assert type(coefficient) is int or coefficient.denominator > 1
            assert list(monomial) == sorted(monomial) and all(power > 0 for _, power in monomial)
            assert radical != 0 and all(radical % (k * k) for k in range(2, 40))


@settings(deadline=None)
@given(constants)
def test_inverse(x):
    assume(x)
    try:
        inverse = x.inverse()
    except OverLimit:
        reject()  # refused for the length of its integers, as documented
    assert x * inverse == 1


@given(gaussian, gaussian, points)
def test_evaluation_is_a_ring_homomorphism(x, y, point):
    (a, b), (c, d) = evaluate_at(x, point), evaluate_at(y, point)
    assert evaluate_at(x + y, point) == (a + c, b + d)
    assert evaluate_at(x * y, point) == (a * c - b * d, a * d + b * c)
    substituted = x.substitute({name: Value.rational(number) for name, number in point.items()})
    assert evaluate_at(substituted, {}) == (a, b)


@given(values, values, values)
def test_substitution_is_a_ring_homomorphism(x, y, image):
    mapping = {"a": image, "b": Value.symbol("a")}
    assert (x + y).substitute(mapping) == x.substitute(mapping) + y.substitute(mapping)
    assert (x * y).substitute(mapping) == x.substitute(mapping) * y.substitute(mapping)


@given(values, st.integers(-5, 5))
def test_modulo_one_forgets_integers_and_nothing_else(x, shift):
    assert modulo_one(x + shift) == modulo_one(x)
    assert (x - modulo_one(x)).is_integer
