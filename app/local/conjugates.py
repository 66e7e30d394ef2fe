"""Galois conjugates of exponents, compared exactly.

The conjugates of q = Σ c_s z^(−s), of ramification index e, arise from z^(1/e) → ζ z^(1/e), ζ^e = 1: the
coefficient c_s becomes c_s·exp(2πi·s·k), k = 0 … e−1 (the sign of k does not change the orbit).

Such a coefficient need not lie in the field of the coefficients, Q(i, square roots)(symbols).  But that field
holds no other roots of unity than those of order dividing 24: its constants are a multi-quadratic field, and
(Z/n)* has exponent 2 only for the divisors n of 24.  So c·exp(2πi·θ) = c'·exp(2πi·θ') with c, c' ≠ 0 in the field
forces θ − θ' ∈ (1/24)Z, and writing every coefficient as (c·w, θ) with w of order dividing 24 and 0 ≤ θ < 1/24
makes equality of complex numbers the same as equality of pairs: hashable, no division, no floating point.
"""

from collections.abc import Sequence
from fractions import Fraction
from functools import cache

from app.exact.number import parse_number
from app.exact.value import Value
from app.local.formal_type import Exponent

_ORDER = 24
_PRIMITIVE_ROOT = "(sqrt(6)+sqrt(2)+i*(sqrt(6)-sqrt(2)))/4"
_NO_TURN = Fraction(0)

Coefficient = tuple[Value, Fraction]
"""(c, θ) with 0 ≤ θ < 1/24 stands for c·exp(2πi·θ); equal pairs are equal numbers, and conversely."""

Conjugate = tuple[tuple[Fraction, Coefficient], ...]
"""An exponent as pairs (power of 1/z, coefficient) by descending power."""


@cache
def _roots_of_unity() -> tuple[Value, ...]:
    """exp(2πi·k/24) for k = 0 … 23, exactly."""
    primitive = parse_number(_PRIMITIVE_ROOT, ())
    powers = [Value.rational(1)]
    for _ in range(_ORDER - 1):
        powers.append(powers[-1] * primitive)
    return tuple(powers)


def conjugates(exponent: Exponent) -> tuple[Conjugate, ...]:
    """The Galois orbit of an exponent: as many distinct conjugates as its ramification index, the exponent first.

    Cost: ramification index × number of terms, multiplications by a root of unity included only where the power
    is fractional.
    """
    index = exponent.ramification
    if index == 1:
        return (tuple((power, (value, _NO_TURN)) for power, value in exponent.terms),)
    turned = [_turned(power, value) for power, value in exponent.terms]
    return tuple(
        tuple(
            (power, images[power.numerator * k % power.denominator])
            for (power, _), images in zip(exponent.terms, turned, strict=True)
        )
        for k in range(index)
    )


def _turned(power: Fraction, value: Value) -> tuple[Coefficient, ...]:
    """value·exp(2πi·j/d) for j = 0 … d − 1, d the denominator of the power, each in its unique form."""
    denominator = power.denominator
    if denominator == 1:
        return ((value, _NO_TURN),)
    roots = _roots_of_unity()
    images = []
    for j in range(denominator):
        whole, rest = divmod(_ORDER * j, denominator)
        images.append((value * roots[whole] if whole else value, Fraction(rest, _ORDER * denominator)))
    return tuple(images)


def separations(members: Sequence[tuple[Conjugate, int]]) -> dict[Fraction, int]:
    """How many ordered pairs of members differ first at which power: {slope of q − q': weighted number of pairs}.

    Args:
        members: conjugates, each with its weight (a multiplicity); a pair counts the product of its weights.

    Pairs of equal members (slope 0) are left out.  Cost: number of members × number of powers.
    """
    tables = [dict(conjugate) for conjugate, _ in members]
    weights = [weight for _, weight in members]
    powers = sorted({power for table in tables for power in table}, reverse=True)
    classes = [list(range(len(members)))]
    counts: dict[Fraction, int] = {}
    for power in powers:
        refined: list[list[int]] = []
        pairs = 0
        for together in classes:
            parts: dict[Coefficient | None, list[int]] = {}
            for member in together:
                parts.setdefault(tables[member].get(power), []).append(member)
            if len(parts) > 1:
                part_weights = [sum(weights[member] for member in part) for part in parts.values()]
                pairs += sum(part_weights) ** 2 - sum(weight * weight for weight in part_weights)
            refined.extend(part for part in parts.values() if len(part) > 1)
        if pairs:
            counts[power] = pairs
        classes = refined
    return counts
