"""Möbius change of the variable, exact: x' = (ax + b)/(cx + d).

The local coordinates z and z' at a point and at its image are both Möbius coordinates that vanish there, so 1/z is an
affine function of 1/z': 1/z = A/z' + B with numbers A ≠ 0 and B.  Exponents are re-expanded in 1/z', and what is
regular is dropped; eigenvalues stay, because dz/z and dz'/z' differ by a regular form.  At finite points B = 0 for
affine maps; at infinity translations have B ≠ 0 too.
"""

from dataclasses import dataclass, replace
from fractions import Fraction
from math import ceil

from app.exact.limits import OverLimit
from app.exact.number import write_number
from app.exact.square_root import square_root
from app.exact.value import ONE, ZERO, Value
from app.local.formal_type import Exponent, Pole, Position
from app.local.problem import Problem
from app.operations.result import Result, checked, refusal
from app.operations.twist import exponent_of


@dataclass(frozen=True)
class Moebius:
    """x' = (ax + b)/(cx + d) with numbers a, b, c, d without symbols."""

    a: Value
    b: Value
    c: Value
    d: Value

    @property
    def determinant(self) -> Value:
        """ad − bc; not 0."""
        return self.a * self.d - self.b * self.c

    @property
    def inverse(self) -> "Moebius":
        """The inverse map."""
        return Moebius(self.d, -self.b, -self.c, self.a)


def change_variable(problem: Problem, map_: Moebius) -> Result:
    """The problem of the same connections in the variable x'.

    Open positions keep their symbols, which from then on stand for the images.  Ranks, eigenvalues, quiver and verdicts
    stay.  Raises ``Refused`` when the determinant is 0, when a coefficient of the map has symbols, when the exponent at
    an open position would need its position in a denominator, when a ramified exponent would need a root that the
    grammar of numbers does not have, and over the limits of numbers.
    Cost: for every exponent the product of its length and its highest power.
    """
    if any(value.symbols() for value in (map_.a, map_.b, map_.c, map_.d)):
        raise refusal("The coefficients of the map contain symbols.", "numbers without symbols")
    if not map_.determinant:
        raise refusal("The determinant ad − bc of the map is 0.", "a map with ad − bc ≠ 0")
    try:
        poles = tuple(_moved(map_, pole, number) for number, pole in enumerate(problem.poles))
    except OverLimit as fault:
        raise refusal(f"A number would become too large: {fault.message}.") from fault
    top = f"({write_number(map_.a)})x + ({write_number(map_.b)})"
    bottom = f"({write_number(map_.c)})x + ({write_number(map_.d)})"
    words = (
        f"Change of the variable to x' = ({top})/({bottom}); the exponents are expanded again in the new coordinates."
    )
    if any(pole.at.value is not None and pole.at.value.symbols() for pole in poles):
        words += " The symbols of open positions stand for the images from now on."
    return Result(checked(replace(problem, poles=poles)), words, "ad − bc ≠ 0.")


def _moved(map_: Moebius, pole: Pole, number: int) -> Pole:
    position = pole.at
    is_open = position.value is not None and bool(position.value.symbols())
    at = position if is_open else image(map_, position)
    if all(block.exponent.is_zero for block in pole.blocks):
        return replace(pole, at=at)
    if is_open and map_.c:
        raise refusal(
            f"Pole {number + 1} has exponents and an open position, on which their new coefficients would depend "
            "through a quotient.",
            "an affine map, or a position that is a number",
            f"/poles/{number}/at",
        )
    factor, shift = _coordinate(map_, position, is_open)
    blocks = tuple(replace(block, exponent=re_expanded(block.exponent, factor, shift, number)) for block in pole.blocks)
    return replace(pole, at=at, blocks=blocks)


def image(map_: Moebius, position: Position) -> Position:
    """The image of a position without symbols."""
    if position.value is None:
        return Position(map_.a / map_.c if map_.c else None)
    below = map_.c * position.value + map_.d
    return Position((map_.a * position.value + map_.b) / below if below else None)


def _coordinate(map_: Moebius, position: Position, is_open: bool) -> tuple[Value, Value]:
    """A and B with 1/z = A/z' + B at the position.

    An open position is only met with affine maps, where A does not depend on it.
    """
    determinant = map_.determinant
    if position.value is None:
        if not map_.c:
            return map_.d / map_.a, -map_.b / map_.a
        return -determinant / map_.c**2, -map_.d / map_.c
    below = map_.d if is_open else map_.c * position.value + map_.d
    if below:
        return determinant / below**2, -map_.c / below
    return -(map_.c**2) / determinant, map_.a * map_.c / determinant


def re_expanded(exponent: Exponent, factor: Value, shift: Value, pole: int = 0) -> Exponent:
    """q(A·y + B) in powers of y = 1/z', without the constant term and what is regular at the point.

    A fractional power is expanded by the binomial series at y = ∞, (A·y)^s (1 + B/(A·y))^s.
    """
    terms: dict[Fraction, Value] = {}
    relative = shift / factor
    for power, coefficient in exponent.terms:
        term = coefficient * _power(factor, power, pole)
        for k in range(ceil(power)):
            terms[power - k] = terms.get(power - k, ZERO) + term
            if not shift:
                break
            term = term * relative * ((power - k) / (k + 1))
    return exponent_of(terms)


def _power(factor: Value, power: Fraction, pole: int) -> Value:
    """A^s; for fractional s any of its values, since all give the same Galois orbit."""
    root = factor
    if power.denominator > 1:
        found = _root(factor, power.denominator)
        if found is None:
            raise refusal(
                f"The fractional powers at pole {pole + 1} need a root of degree {power.denominator} of "
                f"{write_number(factor)}, which the grammar of numbers does not have.",
                "a map that scales the local coordinate by a perfect power",
                f"/poles/{pole}",
            )
        root = found
    result = ONE
    for _ in range(power.numerator):
        result = result * root
    return result


def _root(value: Value, degree: int) -> Value | None:
    """A root of a number: square roots of rationals, and other roots where they are rational."""
    number = value.as_rational()
    if number is None:
        return None
    if degree == 2:
        return square_root(number)
    sign = -1 if number < 0 and degree % 2 else 1
    parts = [_integer_root(part, degree) for part in (sign * number.numerator, number.denominator)]
    if parts[0] is None or parts[1] is None:
        return None
    return Value.rational(Fraction(sign * parts[0], parts[1]))


def _integer_root(number: int, degree: int) -> int | None:
    """The integer root of an integer, if it is one; by bisection."""
    if number < 0:
        return None
    low, high = 0, 1 << (number.bit_length() // degree + 1)
    while low < high:
        middle = (low + high) // 2
        if middle**degree < number:
            low = middle + 1
        else:
            high = middle
    return low if low**degree == number else None
