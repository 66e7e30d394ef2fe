"""Values as text, in the one canonical form that reads back to the same value.

Terms stand by descending total degree, then by powers of the symbols in listed order (symbols that are not listed
come after, by name); terms with the same monomial by their root: rational first, then sqrt(2), sqrt(3), … by size,
then i, then i*sqrt(2), i*sqrt(3), ….  Within a term: coefficient, i, square root, symbols.  No blanks.
"""

from collections.abc import Mapping, Sequence
from fractions import Fraction
from functools import cached_property
from operator import itemgetter

from app.exact.limits import MAX_RADICAND
from app.exact.square_root import factors
from app.exact.value import Key, Monomial, Rational, Value

SymbolRank = tuple[int, str]


class SymbolOrder(tuple[str, ...]):
    """Symbols in listed order, with their places at hand; worth making where many numbers are written in one order."""

    @cached_property
    def places(self) -> dict[str, SymbolRank]:
        """Rank of every listed symbol."""
        return {name: (place, "") for place, name in enumerate(self)}


def write_number(value: Value, symbols: Sequence[str] = ()) -> str:
    """The canonical text of a value; ``symbols`` gives the order of the symbols.

    Raises OverLimit when the radicand of a product of square roots exceeds 10^36, which no parsed number has.
    """
    return _text(value, symbols, True)


def readable_text(value: Value) -> str:
    """Like ``write_number``, without any limit, so not always readable by the program."""
    return _text(value, (), False)


def ordered_terms(value: Value, symbols: Sequence[str] = ()) -> list[tuple[Key, Rational]]:
    """The terms in canonical order, every monomial with its symbols in listed order."""
    used = value.symbols()
    if len(used) > 1:
        places = (symbols if isinstance(symbols, SymbolOrder) else SymbolOrder(symbols)).places
        rank: dict[str, SymbolRank] = {name: places.get(name, (len(symbols), name)) for name in used}
    else:
        rank = dict.fromkeys(used, (0, ""))
    keyed: list[tuple[tuple[object, ...], tuple[Key, Rational]]] = []
    for (monomial, radical), coefficient in value.terms.items():
        ordered = tuple(sorted(monomial, key=lambda pair: rank[pair[0]]))
        degree = sum(power for _, power in ordered)
        powers = tuple((rank[name], -power) for name, power in ordered)
        keyed.append(((-degree, powers, radical < 0, abs(radical)), ((ordered, radical), coefficient)))
    keyed.sort(key=itemgetter(0))
    return [term for _, term in keyed]


def write_laurent(coefficients: Mapping[Fraction, Value], symbols: Sequence[str] = (), coordinate: str = "z") -> str:
    """A polynomial in 1/z, given as power of 1/z → coefficient, by descending power; "0" when there is none.

    >>> write_laurent({Fraction(2): Value.rational(Fraction(1, 2)), Fraction(1): Value.symbol("a")})
    '1/2/z^2+a/z'
    """
    pieces: list[str] = []
    for power, coefficient in sorted(coefficients.items(), reverse=True):
        if not coefficient:
            continue
        text = write_number(coefficient, symbols)
        if len(coefficient.terms) > 1:
            text = f"({text})"
        if pieces and not text.startswith("-"):
            text = "+" + text
        pieces.append(f"{text}/{coordinate}{_power(power)}")
    return "".join(pieces) or "0"


def _text(value: Value, symbols: Sequence[str], split_roots: bool) -> str:
    rational = value.as_rational()
    if rational is not None:
        return str(rational)
    pieces: list[str] = []
    for (monomial, radical), coefficient in ordered_terms(value, symbols):
        pieces.append("-" if coefficient < 0 else "+" if pieces else "")
        pieces.append(_term(monomial, radical, -coefficient if coefficient < 0 else coefficient, split_roots))
    return "".join(pieces)


def _term(monomial: Monomial, radical: int, size: Rational, split_roots: bool) -> str:
    """One term without its sign."""
    factors_of_term: list[str] = []
    if size != 1:
        factors_of_term.append(str(size))
    if radical < 0:
        factors_of_term.append("i")
    factors_of_term.extend(f"sqrt({part})" for part in _roots(abs(radical), split_roots))
    factors_of_term.extend(f"{name}{_power(power)}" for name, power in monomial)
    return "*".join(factors_of_term) or "1"


def _power(power: int | Fraction) -> str:
    if power == 1:
        return ""
    return f"^{power}" if power.denominator == 1 and power > 0 else f"^({power})"


def _roots(radicand: int, split: bool) -> list[int]:
    """Radicands, each readable, whose square roots multiply to the square root of ``radicand``."""
    if radicand == 1:
        return []
    if radicand <= MAX_RADICAND or not split:
        return [radicand]
    parts = [1]
    for prime, _ in factors(radicand):
        if parts[-1] * prime > MAX_RADICAND:
            parts.append(1)
        parts[-1] *= prime
    return parts
