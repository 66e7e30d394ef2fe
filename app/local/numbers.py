"""The numbers of one document: read once each, under the limits that hold for the document as a whole.

Most numbers are sums such as ``-a-1/2*b+3``, so these take a short way that skips the grammar of ``exact/`` (and
leaves to it whatever it does not know); equal texts are read once and share one value.  A reader lives as long as
the reading of its document.
"""

import re
from collections.abc import Sequence
from fractions import Fraction
from math import lcm

from app.errors import NumberFault
from app.exact.independence import independent_root_count
from app.exact.limits import WORK_UNITS, Budget, OverLimit
from app.exact.number import parse_number
from app.exact.value import Key, Value
from app.local.faults import Faults
from app.local.json_reader import WrittenFloat
from app.local.limits import MAXIMUM_DIGITS, MAXIMUM_ROOTS, MAXIMUM_TERMS, MAXIMUM_WORK

_PLAIN_INTEGER = re.compile(r"-?[0-9]{1,18}")
_POWER = re.compile(r"([0-9]{1,18})(?:/([0-9]{1,18}))?")
_NAME = "[A-Za-z_][A-Za-z_0-9]*"
_TERM = re.compile(rf"([+-]?)(?:([0-9]{{1,18}})(?:/([0-9]{{1,18}}))?(?:\*({_NAME}))?|({_NAME}))")
_MOST_TERMS_AT_SIGHT = 20
_TOO_LARGE = 10**MAXIMUM_DIGITS
_A_NUMBER = 'an exact number, written as a string such as "1/3"'


class _RestOfWork(Budget):
    """What is left of the work for one document, when that is less than a number may take."""

    __slots__ = ("used_up",)

    def __init__(self, units: int) -> None:
        super().__init__(units)
        self.used_up = False

    def foresee(self, units: int) -> None:
        """Raise OverLimit when fewer than ``units`` are left."""
        if units > self.left:
            self.used_up = True
            work = "elementary products for all numbers of the document together"
            raise OverLimit(f"With this, expanding takes more than {MAXIMUM_WORK:,} {work}")


class Numbers:
    """Reader of the numbers of one document; every fault goes to ``faults``."""

    def __init__(self, symbols: Sequence[str], faults: Faults) -> None:
        self._faults = faults
        self._symbols = frozenset(symbols)
        self._known: dict[str, Value] = {}
        self._terms_left = MAXIMUM_TERMS
        self._work_left = MAXIMUM_WORK
        self._exhausted = False  # once a limit on all numbers together is passed, no more are read
        self._radicals: set[int] = set()

    def read(self, data: object, at: str, copies: int = 1) -> Value | None:
        """The value of one number of the document, or None after noting what is wrong with it.

        ``copies`` is how often its terms count in the limit on all terms (conjugates of a ramified exponent).
        """
        text = self._text(data, at)
        if text is None or self._exhausted:
            return None
        value = self._known.get(text)
        if value is None:
            value = self._parsed(text, at)
            if value is None:
                return None
            self._known[text] = value
        return self._counted(value, at, copies)

    def read_position(self, data: object, at: str) -> Value | None:
        """The same for a position; its symbols do not count as used in a number."""
        text = self._text(data, at)
        value = None if text is None or self._exhausted else self._parsed(text, at)
        return None if value is None else self._counted(value, at)

    def symbols_used(self) -> frozenset[str]:
        """Symbols that occur in the numbers read so far, positions left out."""
        return frozenset().union(*(value.symbols() for value in self._known.values()))

    def check_whole(self) -> None:
        """Note faults of the numbers as a whole: too many independent square roots, too long a common denominator.

        The bound on the common denominator bounds the integers in every sum of eigenvalues.
        """
        if independent_root_count(self._radicals, stop_above=MAXIMUM_ROOTS) > MAXIMUM_ROOTS:
            self._faults.add(
                "",
                f"The numbers of the document hold more than {MAXIMUM_ROOTS} independent square roots",
                f"at most {MAXIMUM_ROOTS}, i not counted",
            )
        common = 1
        for value in self._known.values():
            for coefficient in value.terms.values():
                if coefficient.__class__ is Fraction:
                    common = lcm(common, coefficient.denominator)
            if common >= _TOO_LARGE:
                message = f"The common denominator of all numbers has more than {MAXIMUM_DIGITS} digits"
                self._faults.add("", message, f"at most {MAXIMUM_DIGITS} digits")
                return

    def _text(self, data: object, at: str) -> str | None:
        if isinstance(data, str):
            return data
        if isinstance(data, bool) or not isinstance(data, (int, float)):
            self._faults.wrong_type(at, data, _A_NUMBER)
        elif isinstance(data, float):
            literal = data.literal if isinstance(data, WrittenFloat) else repr(data)
            example = literal if len(literal) <= 30 and not set("eEfn") & set(literal) else "0.5"
            message = "A JSON number with a point or an exponent is not exact"
            self._faults.add(at, message, f'write it as a string, such as "{example}"')
        elif not -_TOO_LARGE < data < _TOO_LARGE:
            self._faults.add(
                at,
                f"The integer has more than {MAXIMUM_DIGITS} digits",
                f"an integer of at most {MAXIMUM_DIGITS} digits",
            )
        else:
            return str(data)
        return None

    def _parsed(self, text: str, at: str) -> Value | None:
        value = number_at_sight(text, self._symbols)
        if value is not None:
            return value
        budget = Budget() if self._work_left >= WORK_UNITS else _RestOfWork(self._work_left)
        granted = budget.left
        try:
            value = parse_number(text, self._symbols, budget)
        except NumberFault as fault:
            expected = fault.expected
            if isinstance(budget, _RestOfWork) and budget.used_up:
                expected += "; later numbers were not read"
                self._exhausted = True
            self._faults.add(at, f"{fault.message}, at character {fault.position + 1}", expected)
            return None
        finally:
            self._work_left -= granted - budget.left
        self._radicals.update(value.radicals())
        return value

    def _counted(self, value: Value, at: str, copies: int = 1) -> Value | None:
        """The value, unless the numbers of the document have too many terms together."""
        self._terms_left -= len(value.terms) * copies
        if self._terms_left >= 0:
            return value
        self._exhausted = True
        self._faults.add(
            at,
            f"Here the numbers of the document have more than {MAXIMUM_TERMS} terms together",
            f"at most {MAXIMUM_TERMS}, counting conjugates of fractional powers; later numbers were not read",
        )
        return None


def number_at_sight(text: str, symbols: frozenset[str]) -> Value | None:
    """The value of an integer, a symbol, or a short sum of rational multiples of symbols; None for other texts.

    None says nothing about the text: it may be a number of another form or no number.
    """
    if _PLAIN_INTEGER.fullmatch(text):
        return Value.rational(int(text))
    if text in symbols:
        return Value.symbol(text)
    terms: list[tuple[Key, int | Fraction]] = []
    place = 0
    while place < len(text):
        match = _TERM.match(text, place)
        if match is None or len(terms) == _MOST_TERMS_AT_SIGHT:
            return None
        sign, numerator, denominator, factor, alone = match.groups()
        name = factor or alone
        if (place and not sign) or (name and name not in symbols):
            return None
        above = -int(numerator or 1) if sign == "-" else int(numerator or 1)
        below = int(denominator or 1)
        if not below:
            return None
        terms.append(((((name, 1),) if name else (), 1), above if below == 1 else Fraction(above, below)))
        place = match.end()
    return Value.from_terms(terms) if terms else None


def read_power(text: str) -> Fraction | None:
    """A positive rational written as "2" or "5/2"; None for anything else."""
    match = _POWER.fullmatch(text.strip())
    if match is None:
        return None
    above, below = int(match.group(1)), int(match.group(2) or 1)
    return Fraction(above, below) if above and below else None
