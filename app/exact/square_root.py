"""Principal square roots of rational numbers, as exact values.

The squarefree part of an integer needs its factors.  Small integers are factored by trial division; larger ones, up
to the limit of the grammar, by flint, which is imported only then.
"""

from fractions import Fraction
from functools import lru_cache
from math import isqrt

from app.exact.limits import MAX_PRODUCT_OF_ROOTS, MAX_RADICAND, OverLimit
from app.exact.value import ZERO, Value

_TRIAL_BOUND = 10**6


def square_root(number: Fraction) -> Value:
    """The principal square root: not negative for number ≥ 0, and i times a positive number otherwise.

    sqrt(n/d) = sqrt(n·d)/d, with the square factors taken out of n and d first.
    Raises OverLimit when numerator or denominator exceeds MAX_RADICAND.

    >>> square_root(Fraction(8)) == square_root(Fraction(2)) * 2
    True
    """
    if not number:
        return ZERO
    if max(abs(number.numerator), number.denominator) > MAX_RADICAND:
        raise OverLimit("The number under this square root has a numerator or denominator over 10^18")
    outer, inner = square_and_rest(abs(number.numerator))
    outer_below, inner_below = square_and_rest(number.denominator)
    radical = inner * inner_below  # coprime, as the fraction is reduced
    factor = Fraction(outer, outer_below * inner_below)
    return Value.from_terms([(((), -radical if number < 0 else radical), factor)])


@lru_cache(maxsize=4096)
def square_and_rest(number: int) -> tuple[int, int]:
    """(s, d) with number = s²·d and d squarefree, for a positive integer.

    >>> square_and_rest(72)
    (6, 2)
    """
    root = isqrt(number)
    if root * root == number:
        return root, 1
    square, rest = 1, 1
    for prime, power in factors(number):
        square *= prime ** (power // 2)
        rest *= prime ** (power % 2)
    return square, rest


@lru_cache(maxsize=1024)
def factors(number: int) -> tuple[tuple[int, int], ...]:
    """Prime factors with powers, ascending, of a positive integer up to MAX_PRODUCT_OF_ROOTS."""
    if number > MAX_PRODUCT_OF_ROOTS:
        raise OverLimit("A product of square roots goes over 10^36 under the root")
    if number <= _TRIAL_BOUND:
        return tuple(_factors_by_trial(number))
    from flint import fmpz

    return tuple(sorted((int(prime), int(power)) for prime, power in fmpz(number).factor()))


def _factors_by_trial(number: int) -> list[tuple[int, int]]:
    """Prime factors with powers by trial division; at most a thousand divisions below _TRIAL_BOUND."""
    found = []
    divisor = 2
    while divisor * divisor <= number:
        power = 0
        while number % divisor == 0:
            number //= divisor
            power += 1
        if power:
            found.append((divisor, power))
        divisor += 1
    if number > 1:
        found.append((number, 1))
    return found
