"""Factors of exact values, for reading: rational content and irreducible polynomials over Q.

Nothing is decided by them.  A value with square roots is left whole.
"""

from collections.abc import Sequence
from fractions import Fraction

from app.exact.latex import latex
from app.exact.polynomial_kernel import common_denominator, variables_of
from app.exact.quotient import Quotient
from app.exact.value import Value
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
