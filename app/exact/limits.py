"""The limits on one number, and the refusal for going over one.

Limits are checked before the work is done, so that a short text cannot ask for a long computation.  A ``Budget``
counts elementary products; a reader of many numbers may share one budget among them.
"""

from fractions import Fraction

MAX_CHARACTERS = 20_000
MAX_TERMS = 2_000
MAX_NESTING = 50
MAX_POWER = 64
MAX_RADICAND = 10**18
MAX_PRODUCT_OF_ROOTS = 10**36  # so that sqrt(p/q), which is sqrt(p*q)/q, is always within it
MAX_DIGITS = 400
MAX_ROOTS = 6
MAX_RAMIFICATION = 24

WORK_UNITS = 60_000
"""Elementary products in one number; one takes about two microseconds, so a tenth of a second in all."""

_TOO_LARGE = 10**MAX_DIGITS


class OverLimit(ArithmeticError):
    """The result, or the work for it, would be over a limit, which the message names."""

    def __init__(self, message: str) -> None:
        super().__init__(message)
        self.message = message


class Budget:
    """Elementary products that may still be spent.  Mutable; share one to bound a whole document."""

    __slots__ = ("left", "units")

    def __init__(self, units: int = WORK_UNITS) -> None:
        self.units = units
        self.left = units

    def foresee(self, units: int) -> None:
        """Raise OverLimit when fewer than ``units`` are left, and take nothing."""
        if units > self.left:
            raise OverLimit(f"Expanding this takes more than {self.units:,} elementary products")

    def spend(self, units: int) -> None:
        """Take ``units``; raises OverLimit, and takes nothing, when fewer are left."""
        self.foresee(units)
        self.left -= units


def check_coefficient(number: int | Fraction) -> None:
    """Raise OverLimit when numerator or denominator has more than MAX_DIGITS digits."""
    if not -_TOO_LARGE < number.numerator < _TOO_LARGE or number.denominator >= _TOO_LARGE:
        raise OverLimit(f"An integer here would have more than {MAX_DIGITS} digits")


def check_term_count(count: int) -> None:
    """Raise OverLimit when a value has more than MAX_TERMS terms."""
    if count > MAX_TERMS:
        raise OverLimit(f"Expanded, this would have more than {MAX_TERMS:,} terms")
