"""Products, powers and inverses with their size estimated before they are formed.

These are the operations that a text may ask for.  Degrees, terms and work are bounded in advance; lengths of
integers are looked at after each step, and one step can at most double them.
"""

from fractions import Fraction
from math import comb

from app.exact.limits import (
    MAX_POWER,
    MAX_PRODUCT_OF_ROOTS,
    MAX_ROOTS,
    Budget,
    OverLimit,
    check_coefficient,
    check_term_count,
)
from app.exact.value import ONE, Rational, Value


def product(first: Value, second: Value, budget: Budget) -> Value:
    """The product, or OverLimit; before multiplying, degrees are added and the work is taken from the budget."""
    if not (first.is_rational or second.is_rational):
        _check_degrees(first, second)
    budget.spend(_work(first, second))
    result = first * second
    check_size(result)
    return result


def power(base: Value, exponent: int, budget: Budget) -> Value:
    """The power by 0 ≤ exponent ≤ MAX_POWER, or OverLimit.

    Constants and single terms by repeated squaring.  Sums with symbols one factor after the other: with sparse
    sums that forms fewer elementary products than squaring (Σ t·|P^k| against |P^(n/2)|²).
    """
    result = ONE
    if base.is_constant or len(base.terms) <= 1:
        for bit in bin(exponent)[2:]:
            result = product(result, result, budget)
            if bit == "1":
                result = product(result, base, budget)
        return result
    if all(sum(degree for _, degree in monomial) <= 1 for monomial, _ in base.terms):
        # A power of a sum of degree 1 has a term for every way to share the exponent among the monomials.
        monomials = len({monomial for monomial, _ in base.terms})
        check_term_count(comb(exponent + monomials - 1, exponent))
        budget.foresee(monomials * comb(exponent + monomials - 1, monomials))  # Σ t·C(k+t−1, k) over k < exponent
    for _ in range(exponent):
        result = product(result, base, budget)
    return result


def inverse(constant: Value, budget: Budget) -> Value:
    """The inverse of a non-zero constant, or OverLimit."""
    if len(constant.terms) > 1:
        roots = min(len(constant.radicals()), MAX_ROOTS + 1)  # with more the inverse refuses by itself
        budget.spend(2 * 4**roots)
    result = constant.inverse()
    check_size(result)
    return result


def check_size(value: Value) -> None:
    """Raise OverLimit when a value has too many terms, too long integers or too large products of roots."""
    terms = value.terms
    check_term_count(len(terms))
    for (_, radical), coefficient in terms.items():
        check_coefficient(coefficient)
        if abs(radical) > MAX_PRODUCT_OF_ROOTS:
            raise OverLimit("A product of square roots goes over 10^36 under the root")


def _check_degrees(first: Value, second: Value) -> None:
    """Highest and lowest powers of a symbol add up in a product, because there are no zero divisors."""
    ranges = _degree_ranges(first)
    if not ranges:
        return
    for name, (low, high) in _degree_ranges(second).items():
        other_low, other_high = ranges.get(name, (0, 0))
        if high + other_high > MAX_POWER or low + other_low < -MAX_POWER:
            raise OverLimit(f"The power of {name} goes over {MAX_POWER}")


def _degree_ranges(value: Value) -> dict[str, tuple[Rational, Rational]]:
    """For each symbol its lowest and highest power, 0 included; only coordinates have negative ones."""
    found: dict[str, tuple[Rational, Rational]] = {}
    for monomial, _ in value.terms:
        for name, degree in monomial:
            low, high = found.get(name, (0, 0))
            found[name] = (min(low, degree), max(high, degree))
    return found


def _work(first: Value, second: Value) -> int:
    """Elementary products, weighted by the lengths of the integers."""
    count = len(first.terms) * len(second.terms)
    if count <= 1:
        return 1
    fractional, bits = False, 0
    for value in (first, second):
        for coefficient in value.terms.values():
            fractional = fractional or coefficient.__class__ is Fraction
            bits = max(bits, coefficient.numerator.bit_length(), coefficient.denominator.bit_length())
    return count * (4 + bits // 32 if fractional else 1 + bits // 256)
