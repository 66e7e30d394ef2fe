"""An independent route: sympy reads and evaluates the same random texts."""

import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

from app.exact.number import parse_number, write_number
from app.exact.value import Value
from tests.exact.number_strategies import SYMBOLS, constants, texts, values

LOCALS = {name: sympy.Symbol(name) for name in SYMBOLS} | {"i": sympy.I, "sqrt": sympy.sqrt}


def by_sympy(text):
    """The text as a sympy expression, read by sympy's own rules."""
    exact = text.replace("0.5", "(1/2)").replace("2.25", "(9/4)").replace("^", "**")
    return sympy.sympify(exact, locals=LOCALS, rational=True)


def as_sympy(value):
    """A value as a sympy expression, term by term from its map."""
    result = sympy.Integer(0)
    for (monomial, radical), coefficient in value.terms.items():
        term = sympy.Rational(coefficient.numerator, coefficient.denominator) * sympy.sqrt(abs(radical))
        if radical < 0:
            term *= sympy.I
        for name, power in monomial:
            term *= sympy.Symbol(name) ** power
        result += term
    return result


def is_zero(expression):
    """Whether an expression expands to zero; sympy combines square roots of integers when it expands."""
    return sympy.expand(sympy.expand(expression)) == 0


@settings(max_examples=120)
@given(texts())
def test_texts_mean_the_same(text):
    value = parse_number(text, SYMBOLS)
    assert is_zero(by_sympy(text) - as_sympy(value)), text


@settings(max_examples=60)
@given(values)
def test_canonical_texts_mean_the_same(value):
    assert is_zero(by_sympy(write_number(value, SYMBOLS)) - as_sympy(value))


@settings(max_examples=60)
@given(texts(2), texts(2))
def test_zero_tests_agree(first, second):
    equal = parse_number(first, SYMBOLS) == parse_number(second, SYMBOLS)
    assert equal == is_zero(by_sympy(first) - by_sympy(second))


@settings(max_examples=40)
@given(constants, st.sampled_from(["1+i", "2-sqrt(2)", "sqrt(2)+sqrt(3)", "1+sqrt(6)-i*sqrt(10)", "sqrt(5)+i"]))
def test_quotients_agree_numerically(value, divisor_text):
    quotient = value / parse_number(divisor_text)
    difference = as_sympy(quotient) - as_sympy(value) / by_sympy(divisor_text)
    assert abs(sympy.N(difference, 60, maxn=400)) < sympy.Float("1e-40")


def test_the_comparison_can_fail():
    assert not is_zero(by_sympy("sqrt(2)*a+1") - as_sympy(Value.symbol("a")))
    assert is_zero(by_sympy("sqrt(2)*sqrt(3)") - as_sympy(parse_number("sqrt(6)")))
