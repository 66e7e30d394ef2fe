"""Principal square roots, with perfect squares, small and large factors and both signs."""

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.exact.limits import OverLimit
from app.exact.number import parse_number, write_number
from app.exact.square_root import factors, square_and_rest, square_root

PRIME_NEAR_LIMIT = 999_999_999_999_999_989
PRIMES_NEAR_BILLION = (999_999_929, 999_999_937)


@pytest.mark.parametrize(
    ("radicand", "written"),
    [("0", "0"), ("1", "1"), ("4/9", "2/3"), ("8", "2*sqrt(2)"), ("-2", "i*sqrt(2)"), ("-1", "i"), ("-4", "2*i"),
     ("1/2", "1/2*sqrt(2)"), ("3/4", "1/2*sqrt(3)"), ("2/3", "1/3*sqrt(6)"), ("-8/27", "2/9*i*sqrt(6)"),
     ("0.25", "1/2"),
     ("1000000000000000000", "1000000000"), ("999999999999999999", "9*sqrt(12345679012345679)"),
     (str(PRIME_NEAR_LIMIT), f"sqrt({PRIME_NEAR_LIMIT})"),
     (str(PRIMES_NEAR_BILLION[0] ** 2), str(PRIMES_NEAR_BILLION[0])),
     (str(4 * PRIMES_NEAR_BILLION[0] ** 2 // 4), str(PRIMES_NEAR_BILLION[0])),
     (str(PRIMES_NEAR_BILLION[0] * PRIMES_NEAR_BILLION[1]), f"sqrt({PRIMES_NEAR_BILLION[0] * PRIMES_NEAR_BILLION[1]})"),
     (str(999_983**2 * 999_979), "999983*sqrt(999979)")],
)  # fmt: skip
def test_named_roots(radicand, written):
    assert write_number(parse_number(f"sqrt({radicand})")) == written


@given(st.fractions(min_value=-(10**9), max_value=10**9, max_denominator=10**9))
def test_square_of_the_root_is_the_radicand(number):
    assert (square_root(number) ** 2).as_rational() == number


@given(st.fractions(min_value=0, max_value=10**9, max_denominator=10**6))
def test_root_is_the_principal_one(number):
    ((_, radical), coefficient) = next(iter(square_root(number).terms.items()), (((), 1), 0))
    assert radical > 0 and coefficient >= 0
    assert math.isclose(float(coefficient) * math.sqrt(radical), math.sqrt(number), rel_tol=1e-12, abs_tol=1e-12)
    if number:
        ((_, radical), coefficient) = next(iter(square_root(-number).terms.items()))
        assert radical < 0 < coefficient


@given(st.integers(1, 10**12))
def test_squarefree_rest(number):
    square, rest = square_and_rest(number)
    assert square * square * rest == number
    assert all(power == 1 for _, power in factors(rest))


@given(st.integers(1, 10**6))
def test_factors_multiply_back(number):
    assert math.prod(prime**power for prime, power in factors(number)) == number
    for prime, _ in factors(number):
        assert all(prime % k for k in range(2, math.isqrt(prime) + 1))


def test_trial_division_and_flint_agree():
    from flint import fmpz

    for number in [*range(1, 3000), 10**6, 10**6 - 1, 997 * 997, 999_983]:
        assert list(factors(number)) == sorted((int(p), int(e)) for p, e in fmpz(number).factor())


def test_over_the_limit():
    for number in (Fraction(10**18 + 1), Fraction(1, 10**18 + 1), Fraction(-(10**18) - 1)):
        with pytest.raises(OverLimit, match=r"10\^18"):
            square_root(number)
    with pytest.raises(OverLimit, match=r"10\^36"):
        factors(10**36 + 1)
    assert square_root(Fraction(10**18 - 1, 10**18)) * 10**9 == square_root(Fraction(10**18 - 1))
