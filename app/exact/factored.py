"""Factors of exact values, for reading: rational content and irreducible polynomials over Q.

Nothing is decided by them.  A value with square roots is left whole.
"""

from collections.abc import Sequence
from fractions import Fraction
from math import gcd, lcm

from app.exact.latex import latex
from app.exact.polynomial_kernel import common_denominator, variables_of
from app.exact.quotient import Quotient
from app.exact.value import ONE, Value
from app.exact.writing import ordered_terms


def factored(value: Value) -> tuple[Fraction, tuple[tuple[Value, int], ...]]:
    """(content, ((factor, multiplicity), …)) with value = content · Π factor^multiplicity; 0 has content 0.

    Factors have positive leading coefficients, fewest terms first.  With square roots the value itself is the factor.

    >>> a = Value.symbol("a")
    >>> factored(a * a * 2 - 2)[0]
    Fraction(2, 1)
    """
    rational = value.as_rational()
    if rational is not None:
        return rational, ()
    if value.radicals():
        return Fraction(1), ((value, 1),)
    variables = variables_of(value)
    content, factors = variables.polynomial(
        ((monomial, coefficient) for (monomial, _), coefficient in value.terms.items()),
        scale := common_denominator(value),
    ).factor()
    whole = Fraction(int(content), scale)
    found = []
    for polynomial, multiplicity in factors:
        factor = variables.value({1: polynomial})
        if ordered_terms(factor)[0][1] < 0:
            factor = -factor
            whole = -whole if multiplicity % 2 else whole
        found.append((factor, int(multiplicity)))
    found.sort(key=lambda pair: (len(pair[0].terms), repr(pair[0])))
    return whole, tuple(found)


def common_factor(numbers: Sequence[Quotient]) -> Quotient:
    """The factor that all non-zero numbers share: rational content, numerators' and denominators' common factors.

    Its sign is positive; 1 where nothing is shared or there are fewer than two non-zero numbers.  Cost: a factorisation
    of every numerator and denominator.

    >>> a = Value.symbol("a")
    >>> common_factor([Quotient(a * 2, a + 1), Quotient(a * a * 4, a + 1)]) == Quotient(a * 2, a + 1)
    True
    """
    present = [number for number in numbers if number]
    if len(present) < 2:
        return Quotient(ONE)
    above = [factored(number.numerator) for number in present]
    below = [factored(number.denominator) for number in present]
    contents = [top / bottom for (top, _), (bottom, _) in zip(above, below, strict=True)]
    content = Fraction(gcd(*(c.numerator for c in contents)), lcm(*(c.denominator for c in contents)))
    return Quotient(_shared([f for _, f in above]) * content, _shared([f for _, f in below]))


def _shared(lists: Sequence[tuple[tuple[Value, int], ...]]) -> Value:
    """The product of the factors that stand in every list, with the least multiplicity."""
    shared = dict(lists[0])
    for factors in lists[1:]:
        known = dict(factors)
        shared = {factor: min(power, known[factor]) for factor, power in shared.items() if factor in known}
    product = ONE
    for factor, power in shared.items():
        product = product * factor**power
    return product


def latex_factored(number: Quotient, symbols: Sequence[str] = ()) -> str:
    r"""The LaTeX of a quotient with numerator and denominator in factors.

    >>> a, b = Value.symbol("a"), Value.symbol("b")
    >>> latex_factored(Quotient(a * a - b * b, a + 1))
    '\\frac{\\left(a+b\\right) \\left(a-b\\right)}{a+1}'
    """
    content, above = factored(number.numerator)
    below_content, below = factored(number.denominator)
    content /= below_content
    if not content:
        return "0"
    sign = "-" if content < 0 else ""
    size = abs(content)
    top = _product(size.numerator, above, symbols)
    bottom = _product(size.denominator, below, symbols)
    if bottom != "1":
        return rf"{sign}\frac{{{top}}}{{{bottom}}}"
    if sign and size == 1 and len(above) == 1 and above[0][1] == 1 and len(above[0][0].terms) > 1:
        return latex(-above[0][0], symbols)
    return sign + top


def _product(number: int, factors: Sequence[tuple[Value, int]], symbols: Sequence[str]) -> str:
    """A product of an integer and factors; a single factor needs no parentheses."""
    alone = number == 1 and len(factors) == 1 and factors[0][1] == 1
    pieces = [] if number == 1 else [str(number)]
    for factor, multiplicity in factors:
        text = latex(factor, symbols)
        if len(factor.terms) > 1 and not alone:
            text = rf"\left({text}\right)"
        pieces.append(text if multiplicity == 1 else f"{text}^{{{multiplicity}}}")
    return " ".join(pieces) or "1"
