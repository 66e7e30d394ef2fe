"""The number grammar: text → exact value, and text → polynomial in 1/z.

    sum       = product { ("+" | "-") product }
    product   = signed { ("*" | "/") signed }
    signed    = { "+" | "-" } power
    power     = atom [ "^" { "+" | "-" } atom ]
    atom      = number | "i" | "sqrt" "(" sum ")" | symbol | "(" sum ")"

So −2^2 is −4, and 2*−3 is read.  A second ``^`` without parentheses, as in 2^3^2, is refused as ambiguous: tables and
programs disagree on what it means.  An exponent is any expression that is an integer; 0^0 is 1.  The minus sign of
typesetting is read as ``-``.

Evaluation goes along with parsing, every operation within the limits of ``limits``.  The depth of recursion is
bounded by the limit on nesting.
"""

from collections.abc import Collection
from fractions import Fraction

from app.errors import NumberFault
from app.exact import bounded
from app.exact.independence import independent_root_count
from app.exact.limits import (
    MAX_CHARACTERS,
    MAX_DIGITS,
    MAX_NESTING,
    MAX_POWER,
    MAX_RADICAND,
    MAX_RAMIFICATION,
    MAX_ROOTS,
    Budget,
    OverLimit,
    check_coefficient,
    check_term_count,
)
from app.exact.square_root import square_root
from app.exact.tokens import Token, tokens_of
from app.exact.value import IMAGINARY_UNIT, Key, Rational, Value, add_term
from app.exact.writing import readable_text

_ADDITIVE = frozenset("+-")
_MULTIPLICATIVE = frozenset("*/")
_EXAMPLE = "an exact number, for example 2/3 or sqrt(2)"


def parse_number(text: str, symbols: Collection[str] = (), budget: Budget | None = None) -> Value:
    """The exact value of a text.

    ``symbols`` are the names that may occur, in normal form C (a set is fastest).  ``budget`` may be shared by many
    numbers to bound their work together; by default each has its own.  Raises NumberFault with the character.

    >>> parse_number("sqrt(8) - 2*sqrt(2)", ()).is_zero
    True
    """
    parser = _Parser(text, symbols, None, budget)
    value = parser.whole()
    parser.check_roots(value)
    parser.check_written_length(value)
    return value


def parse_laurent(
    text: str, symbols: Collection[str] = (), coordinate: str = "z", budget: Budget | None = None
) -> dict[Fraction, Value]:
    """A polynomial in 1/z without constant term, as power of 1/z → non-zero coefficient, by descending power.

    Powers of the coordinate may be fractions; division by its monomials is allowed.  "" and "0" give {}.  Raises
    NumberFault, also for a constant term, a positive power of the coordinate, and a coordinate that is declared
    as a symbol.

    >>> parse_laurent("1/2/z^2 - 3*z^(-1)") == {2: Value.rational(Fraction(1, 2)), 1: Value.rational(-3)}
    True
    """
    if not text.strip():
        return {}
    parser = _Parser(text, symbols, coordinate, budget)
    whole = parser.whole()
    parser.check_roots(whole)
    collected: dict[Fraction, dict[Key, Rational]] = {}
    for (monomial, radical), coefficient in whole.terms.items():
        power = Fraction(-dict(monomial).get(coordinate, 0))
        rest = tuple(pair for pair in monomial if pair[0] != coordinate)
        if power <= 0:
            raise _not_principal(parser.place_of((monomial, radical)), power, coordinate)
        collected.setdefault(power, {})[rest, radical] = coefficient
    result = {power: Value(collected[power]) for power in sorted(collected, reverse=True)}
    for value in result.values():
        parser.check_written_length(value)
    return result


def _not_principal(position: int, power: Fraction, coordinate: str) -> NumberFault:
    """The fault of a term that an exponent may not have."""
    kind = "a constant term" if power == 0 else f"a positive power of {coordinate}"
    expected = f"negative powers of {coordinate} only, for example a/{coordinate}^2"
    return NumberFault(
        f"An exponent has no constant term and no positive powers of {coordinate}; this is {kind}", position, expected
    )


class _Parser:
    """One text being read: tokens, the place in them, nesting so far, work left."""

    def __init__(self, text: str, symbols: Collection[str], coordinate: str | None, budget: Budget | None) -> None:
        if len(text) > MAX_CHARACTERS:
            raise NumberFault(
                f"A number has at most {MAX_CHARACTERS:,} characters; this has {len(text):,}",
                MAX_CHARACTERS,
                "a shorter text",
            )
        self._text = text
        self._tokens = tokens_of(text)
        self._place = 0
        self._symbols = symbols
        self._coordinate = coordinate
        self._budget = budget if budget is not None else Budget()
        self._nesting = 0
        self._first_places: dict[Key, int] = {}
        self._roots: list[tuple[int, int]] = []  # radicals that came up, with their places
        self._look()

    def whole(self) -> Value:
        """The value of the whole text."""
        if self._at_end:
            raise NumberFault("There is no number here", 0, _EXAMPLE)
        value = self._sum()
        if not self._at_end:
            raise self._unexpected_after_value()
        return value

    def place_of(self, key: Key) -> int:
        """Where the first term of the outermost sum begins that contributes to a term of the result."""
        return self._first_places.get(key, 0)

    def check_roots(self, value: Value) -> None:
        """A document may have MAX_ROOTS independent square roots, so one number may not have more."""
        if len(self._roots) <= MAX_ROOTS or independent_root_count(value.radicals(), MAX_ROOTS) <= MAX_ROOTS:
            return
        seen: set[int] = set()
        for radical, position in self._roots:
            seen.add(radical)
            if independent_root_count(seen, MAX_ROOTS) > MAX_ROOTS:
                raise NumberFault(
                    f"There are more than {MAX_ROOTS} independent square roots; this is one too many",
                    position,
                    f"at most {MAX_ROOTS} independent square roots",
                )

    def check_written_length(self, value: Value) -> None:
        """What is read must be readable when written again in canonical form."""
        if len(value.terms) <= 5 and len(self._text) <= 1000:
            return  # at most 5 terms of under 3,500 characters
        # Large roots may be written as up to three; the length is bounded without factoring them.
        large_roots = sum(abs(radical) > MAX_RADICAND for _, radical in value.terms)
        if len(readable_text(value)) + 20 * large_roots > MAX_CHARACTERS:
            raise NumberFault(
                f"Expanded, this number would have more than {MAX_CHARACTERS:,} characters",
                0,
                "a number with fewer or shorter terms",
            )

    # --- tokens

    @property
    def _at_end(self) -> bool:
        return self._token.kind == "end"

    def _advance(self) -> Token:
        """Take the next token and look at the one after it."""
        token = self._token
        self._place += 1
        self._look()
        return token

    def _look(self) -> None:
        """Set the token ahead, and its sign ("" if it is none)."""
        self._token = token = self._tokens[self._place]
        if token.kind == "bad":
            raise NumberFault(token.text, token.position, token.expected)
        self._sign = token.text if token.kind == "sign" else ""

    def _unexpected_after_value(self) -> NumberFault:
        """The fault of a token that cannot follow a complete value."""
        token, before = self._token, self._tokens[self._place - 1]
        if token.kind == "end":
            return NumberFault("A closing parenthesis is missing at the end", token.position, ")")
        if token.text == ")":
            return NumberFault("This parenthesis closes nothing", token.position, "no parenthesis here")
        return NumberFault("A product is written with *", token.position, f"{_short(before.text)}*{_short(token.text)}")

    # --- grammar

    def _sum(self) -> Value:
        outermost = self._nesting == 0 and self._coordinate is not None
        place = self._token.position
        first = self._product()
        if outermost:
            self._note(first, place)
        if self._sign not in _ADDITIVE:
            return first
        collected = dict(first.terms)
        while self._sign in _ADDITIVE:
            sign = self._advance()
            place = self._token.position
            value = self._product()
            if outermost:
                self._note(value, place)
            with _At(sign.position):
                self._budget.spend(len(value.terms))
                for key, coefficient in value.terms.items():
                    add_term(collected, key, -coefficient if sign.text == "-" else coefficient)
                    check_coefficient(collected.get(key, 0))
                check_term_count(len(collected))
        return Value(collected)

    def _note(self, value: Value, place: int) -> None:
        for key in value.terms:
            self._first_places.setdefault(key, place)

    def _product(self) -> Value:
        left = self._signed()
        while self._sign in _MULTIPLICATIVE:
            operator = self._advance()
            if operator.text == "*" and self._sign == "*":
                raise NumberFault("A power is written with one ^", operator.position, "^")
            place = self._token.position
            right = self._signed()
            if operator.text == "/":
                right = self._inverse(right, place)
            with _At(operator.position):
                left = bounded.product(left, right, self._budget)
        return left

    def _signed(self) -> Value:
        negative = False
        while self._sign in _ADDITIVE:
            negative ^= self._advance().text == "-"
        value = self._power()
        return -value if negative else value

    def _power(self) -> Value:
        place = self._token.position
        base = self._atom()
        if self._sign != "^":
            return base
        sign = self._advance()
        exponent_place = self._token.position
        negative = False
        while self._sign in _ADDITIVE:
            negative ^= self._advance().text == "-"
        exponent = self._atom().as_rational()
        if exponent is None:
            raise NumberFault("An exponent is an integer", exponent_place, "an integer, for example ^2")
        if self._sign == "^":
            raise NumberFault(
                "A power of a power is ambiguous without parentheses", self._token.position, "(2^3)^2 or 2^(3^2)"
            )
        return self._raised(base, -exponent if negative else exponent, place, sign.position, exponent_place)

    def _raised(self, base: Value, exponent: Fraction, place: int, sign_place: int, exponent_place: int) -> Value:
        """The power of a value that begins at ``place``."""
        if abs(exponent) > MAX_POWER:
            raise NumberFault(f"Powers go up to {MAX_POWER}", exponent_place, f"an exponent of at most {MAX_POWER}")
        if exponent.denominator != 1:
            return self._fractional_power(base, exponent, exponent_place)
        if exponent < 0:
            base = self._inverse(base, place, "A negative power is a division, which")
        with _At(sign_place):
            return bounded.power(base, abs(exponent.numerator), self._budget)

    def _fractional_power(self, base: Value, exponent: Fraction, exponent_place: int) -> Value:
        """A fractional power, which only the coordinate has."""
        coordinate = self._coordinate
        if coordinate is None or base != Value.symbol(coordinate):
            expected = "an integer" if coordinate is None else f"an integer, or a power of {coordinate} alone"
            raise NumberFault(
                "A fractional power is not read here; square roots are written sqrt(…)", exponent_place, expected
            )
        if exponent.denominator > MAX_RAMIFICATION:
            raise NumberFault(
                f"Fractional powers of {coordinate} have denominators up to {MAX_RAMIFICATION}",
                exponent_place,
                f"a denominator of at most {MAX_RAMIFICATION}",
            )
        return Value({(((coordinate, exponent),), 1): 1})

    def _inverse(self, divisor: Value, place: int, subject: str = "Division") -> Value:
        """The inverse of a constant, or of a constant times a power of the coordinate."""
        if not divisor:
            raise NumberFault("Division by zero", place, "a divisor that is not zero")
        number = divisor.as_rational()
        if number is not None:
            return Value.rational(1 / number)
        monomials = {monomial for monomial, _ in divisor.terms}
        shift = 0 if len(monomials) > 1 else dict(next(iter(monomials))).get(self._coordinate or "", 0)
        if shift and self._coordinate is not None:
            back = Value({(((self._coordinate, -shift),), 1): 1})
            return self._inverse(divisor * back, place, subject) * back
        if not divisor.is_constant:
            powers = f" and powers of {self._coordinate}" if self._coordinate else ""
            raise NumberFault(
                f"{subject} is by constants{powers} only; here is a symbol in the divisor",
                place,
                "a divisor without symbols",
            )
        with _At(place):
            return bounded.inverse(divisor, self._budget)

    def _atom(self) -> Value:
        token = self._token
        if token.kind == "end":
            raise NumberFault("The number ends too early", token.position, _EXAMPLE)
        self._advance()
        if token.kind == "number":
            return self._literal(token)
        if token.kind == "name":
            return self._named(token)
        if token.text == "(":
            return self._parenthesised(token)
        raise NumberFault(f'A number or a symbol is missing before "{token.text}"', token.position, _EXAMPLE)

    def _literal(self, token: Token) -> Value:
        whole, _, decimals = token.text.partition(".")
        digits = (whole + decimals).lstrip("0")
        if max(len(digits), len(decimals) + 1 if decimals else 0) > MAX_DIGITS:
            raise NumberFault(
                f"An integer has at most {MAX_DIGITS} digits",
                token.position,
                f"an integer of at most {MAX_DIGITS} digits",
            )
        number = int(digits or "0")
        return Value.rational(Fraction(number, 10 ** len(decimals)) if decimals else number)

    def _named(self, token: Token) -> Value:
        name = token.text
        if name == "i":
            return IMAGINARY_UNIT
        if name == "sqrt":
            return self._root(token)
        if name == "infinity":
            raise NumberFault("infinity is a position and no number", token.position, "an exact number")
        if name == self._coordinate:
            if name in self._symbols:
                raise NumberFault(
                    f"{name} is the coordinate here and a symbol of the problem as well",
                    token.position,
                    "another name for the symbol",
                )
            return Value.symbol(name)
        if name not in self._symbols:
            raise NumberFault(f'"{_short(name)}" is not a declared symbol', token.position, self._known_symbols())
        return Value.symbol(name)

    def _known_symbols(self) -> str:
        names = sorted(self._symbols)
        if not names:
            return "a number without symbols"
        return "one of " + ", ".join(map(_short, names[:8])) + (", …" if len(names) > 8 else "")

    def _root(self, token: Token) -> Value:
        if self._sign != "(":
            raise NumberFault("sqrt is followed by a parenthesis", self._token.position, "sqrt(2)")
        opening = self._advance()
        place = self._token.position
        radicand = self._parenthesised(opening).as_rational()
        if radicand is None:
            raise NumberFault("Square roots are of rational numbers only", place, "a rational number, as in sqrt(2/3)")
        with _At(token.position):
            value = square_root(radicand)
        self._roots.extend((radical, token.position) for radical in value.radicals())
        return value

    def _parenthesised(self, opening: Token) -> Value:
        if self._nesting == MAX_NESTING:
            raise NumberFault(
                f"Parentheses are nested more than {MAX_NESTING} deep",
                opening.position,
                f"at most {MAX_NESTING} levels",
            )
        self._nesting += 1
        value = self._sum()
        if self._sign != ")":
            raise self._unexpected_after_value()
        self._advance()
        self._nesting -= 1
        return value


class _At:
    """Turns OverLimit inside a ``with`` into a fault at a character."""

    __slots__ = ("_position",)

    def __init__(self, position: int) -> None:
        self._position = position

    def __enter__(self) -> None:
        return None

    def __exit__(self, kind: object, fault: BaseException | None, trace: object) -> None:
        if isinstance(fault, OverLimit):
            raise NumberFault(fault.message, self._position, "a smaller number") from fault


def _short(text: str) -> str:
    """A text short enough for a message."""
    return text if len(text) <= 24 else text[:20] + "…"
