"""The factor that several quotients share."""

import random

from app.exact.factored import common_factor
from app.exact.quotient import Quotient
from app.exact.value import ONE, Value

A, B = Value.symbol("a"), Value.symbol("b")


def test_content_and_polynomial_factors() -> None:
    shared = common_factor([Quotient((A - B) * 6, A + 1), Quotient((A - B) * (A + B) * 4, A + 1), Quotient.of(0)])
    assert shared in (Quotient((A - B) * 2, A + 1), Quotient((B - A) * 2, A + 1))


def test_nothing_is_shared() -> None:
    assert common_factor([]) == Quotient.of(1)
    assert common_factor([Quotient(A), Quotient(B)]) == Quotient.of(1)
    assert common_factor([Quotient(A), Quotient.of(0)]) == Quotient.of(1)


def test_a_random_factor_is_found_again() -> None:
    """What remains after division has no common factor left, and the factor multiplied in before divides it."""
    generator = random.Random(1)
    for _ in range(30):
        factor = A * generator.randint(1, 4) + B * generator.randint(-3, 3) + generator.randint(1, 5)
        rest = [A * generator.randint(1, 5) + generator.randint(-4, 4), B + generator.randint(-4, 4), ONE * 3]
        shared = common_factor([Quotient(factor * one) for one in rest])
        again = common_factor([Quotient(factor * one) / shared for one in rest])
        assert again == Quotient.of(1)
        assert (shared / Quotient(factor)).is_polynomial
