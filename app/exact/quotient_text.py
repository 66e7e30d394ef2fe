"""Quotients as text: "numerator/denominator" in the grammar of numbers, where symbols may stand in divisors.

    sum       = product { ("+" | "-") product }
    product   = signed { ("*" | "/") signed }
    signed    = { "+" | "-" } power
    power     = atom [ "^" { "+" | "-" } integer ]
    atom      = number | "i" | "sqrt" "(" rational ")" | symbol | "(" sum ")"

A text without symbols in divisors is left to the reader of numbers, with its faults and limits.  Otherwise numerator
and denominator are expanded side by side within the same limits, and brought to lowest terms once, at the end.
"""

import re
from collections.abc import Callable, Collection, Sequence
from fractions import Fraction

from app.errors import NumberFault
from app.exact import bounded
from app.exact.latex import latex
from app.exact.limits import MAX_CHARACTERS, MAX_NESTING, MAX_POWER, Budget, OverLimit, check_term_count
from app.exact.number import parse_number, write_number
from app.exact.quotient import Quotient
from app.exact.square_root import square_root
from app.exact.tokens import Token, tokens_of
from app.exact.value import IMAGINARY_UNIT, ONE, Value

_Pair = tuple[Value, Value]
_DIVISOR = re.compile(r"/[\s+(−-]*(?:[^\W\d]|\()|/\s*\(|\^[\s+(]*[−-]")
"""A divisor that is more than a number, or a negative power: then numerator and denominator are kept apart."""


def write_quotient(number: Quotient, symbols: Sequence[str] = ()) -> str:
    """The canonical text; it reads back to the same quotient."""
    above = write_number(number.numerator, symbols)
    if number.is_polynomial:
        return above
    below = write_number(number.denominator, symbols)
    if len(number.numerator.terms) > 1:
        above = f"({above})"
    simple = below.isidentifier() or below.isdigit()
    return f"{above}/{below}" if simple else f"{above}/({below})"


def latex_quotient(number: Quotient, symbols: Sequence[str] = ()) -> str:
    r"""The LaTeX: a polynomial, or \frac{…}{…}."""
    above = latex(number.numerator, symbols)
    return above if number.is_polynomial else rf"\frac{{{above}}}{{{latex(number.denominator, symbols)}}}"


def parse_quotient(text: str, symbols: Collection[str] = (), budget: Budget | None = None) -> Quotient:
    """The quotient that a text stands for; raises NumberFault with the character."""
    shared = budget if budget is not None else Budget()
    if not _DIVISOR.search(text):
        return Quotient.of(parse_number(text, symbols, shared))
    reader = _Reader(text, symbols, shared)
    try:
        return Quotient(*reader.whole())
    except ZeroDivisionError:
        raise NumberFault("Division by zero", 0, "a divisor that is not zero") from None
    except OverLimit as fault:
        raise NumberFault(fault.message, 0, "a shorter entry") from None


class _Reader:
    """One text being read into a numerator and a denominator."""

    def __init__(self, text: str, symbols: Collection[str], budget: Budget) -> None:
        if len(text) > MAX_CHARACTERS:
            message = f"A number has at most {MAX_CHARACTERS:,} characters; this has {len(text):,}"
            raise NumberFault(message, MAX_CHARACTERS, "a shorter text")
        self._tokens = tokens_of(text)
        self._place = 0
        self._symbols = symbols
        self._budget = budget
        self._nesting = 0

    def whole(self) -> _Pair:
        """Numerator and denominator of the whole text."""
        pair = self._sum()
        if self._token.kind != "end":
            raise NumberFault("This does not continue the number", self._token.position, "+ - * / ^ or the end")
        return pair

    @property
    def _token(self) -> Token:
        token = self._tokens[self._place]
        if token.kind == "bad":
            raise NumberFault(token.text, token.position, token.expected)
        return token

    def _take(self) -> Token:
        token = self._token
        self._place += 1
        return token

    def _sign(self, allowed: str) -> bool:
        return self._token.kind == "sign" and self._token.text in allowed

    def _bounded(self, work: Callable[[], _Pair], position: int) -> _Pair:
        try:
            return work()
        except OverLimit as fault:
            raise NumberFault(fault.message, position, "a shorter entry") from None

    def _sum(self) -> _Pair:
        left = self._product()
        while self._sign("+-"):
            operator = self._take()
            above, below = self._product()
            right = (-above, below) if operator.text == "-" else (above, below)
            left = self._bounded(lambda a=left, b=right: self._added(a, b), operator.position)  # type: ignore[misc]
        return left

    def _added(self, first: _Pair, second: _Pair) -> _Pair:
        if first[1] == second[1]:
            above, below = first[0] + second[0], first[1]
        else:
            above = self._times(first[0], second[1]) + self._times(second[0], first[1])
            below = self._times(first[1], second[1])
        check_term_count(len(above.terms))
        return above, below

    def _times(self, first: Value, second: Value) -> Value:
        return bounded.product(first, second, self._budget)

    def _product(self) -> _Pair:
        left = self._signed()
        while self._sign("*/"):
            operator = self._take()
            place = self._token.position
            above, below = self._signed()
            if operator.text == "/":
                if not above:
                    raise NumberFault("Division by zero", place, "a divisor that is not zero")
                above, below = below, above
            pairs = (left, (above, below))
            left = self._bounded(
                lambda p=pairs: (self._times(p[0][0], p[1][0]), self._times(p[0][1], p[1][1])),  # type: ignore[misc]
                operator.position,
            )
        return left

    def _signed(self) -> _Pair:
        negative = False
        while self._sign("+-"):
            negative ^= self._take().text == "-"
        above, below = self._power()
        return (-above, below) if negative else (above, below)

    def _power(self) -> _Pair:
        above, below = self._atom()
        if not self._sign("^"):
            return above, below
        operator = self._take()
        place = self._token.position
        negative = False
        while self._sign("+-"):
            negative ^= self._take().text == "-"
        exponent_above, exponent_below = self._atom()
        exponent = exponent_above.as_rational()
        if exponent is None or exponent_below != ONE or exponent.denominator != 1 or abs(exponent) > MAX_POWER:
            raise NumberFault(f"An exponent is an integer up to {MAX_POWER}", place, "for example ^2")
        if self._sign("^"):
            raise NumberFault("A power of a power is ambiguous without parentheses", self._token.position, "(a^2)^3")
        if (exponent < 0) != negative:
            if not above:
                raise NumberFault("Division by zero", operator.position, "a power of a number that is not zero")
            above, below = below, above
        size = abs(int(exponent))
        return self._bounded(
            lambda: (bounded.power(above, size, self._budget), bounded.power(below, size, self._budget)),
            operator.position,
        )

    def _atom(self) -> _Pair:
        token = self._take()
        if token.kind == "number":
            return parse_number(token.text, ()), ONE
        if token.kind == "name":
            return self._named(token), ONE
        if token.text == "(":
            return self._parenthesised(token)
        raise NumberFault("A number or a symbol is missing here", token.position, "for example 2/3 or a/(a+1)")

    def _named(self, token: Token) -> Value:
        if token.text == "i":
            return IMAGINARY_UNIT
        if token.text == "sqrt":
            return self._root(token)
        if token.text not in self._symbols:
            raise NumberFault(f'"{token.text}" is not a declared symbol', token.position, "a declared symbol")
        return Value.symbol(token.text)

    def _root(self, token: Token) -> Value:
        if not self._sign("("):
            raise NumberFault("sqrt is followed by a parenthesis", self._token.position, "sqrt(2)")
        above, below = self._parenthesised(self._take())
        radicand = Quotient(above, below).as_rational()
        if radicand is None:
            raise NumberFault("Square roots are of rational numbers only", token.position, "sqrt(2/3)")
        try:
            return square_root(Fraction(radicand))
        except OverLimit as fault:
            raise NumberFault(fault.message, token.position, "a smaller radicand") from None

    def _parenthesised(self, opening: Token) -> _Pair:
        self._nesting += 1
        if self._nesting > MAX_NESTING:
            raise NumberFault(f"Parentheses nest at most {MAX_NESTING} deep", opening.position, "fewer parentheses")
        pair = self._sum()
        if not self._sign(")"):
            raise NumberFault("A closing parenthesis is missing", self._token.position, ")")
        self._take()
        self._nesting -= 1
        return pair
