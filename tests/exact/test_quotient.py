"""Quotients: one form for each element, field axioms, text that reads back."""

import pickle
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.errors import NumberFault
from app.exact.factored import factored, latex_factored
from app.exact.number import parse_number
from app.exact.quotient import Quotient
from app.exact.quotient_text import parse_quotient, write_quotient
from app.exact.value import Value

SYMBOLS = ("a", "b")
A, B = Value.symbol("a"), Value.symbol("b")
_coefficients = st.integers(-3, 3)


@st.composite
def values(draw) -> Value:
    basis = ["1", "a", "b", "a*b", "i", "sqrt(2)*a"]
    parts = [parse_number(text, SYMBOLS) * draw(_coefficients) for text in basis]
    return sum(parts, Value.rational(0))


@st.composite
def quotients(draw) -> Quotient:
    below = Value.rational(draw(_coefficients)) + A * draw(_coefficients) + B * draw(_coefficients)
    return Quotient(draw(values()), below if below else Value.rational(1))


@settings(max_examples=40, deadline=None)
@given(quotients(), quotients(), quotients())
def test_field_axioms(x, y, z):
    assert x + y == y + x
    assert (x + y) + z == x + (y + z)
    assert x * (y + z) == x * y + x * z
    assert not (x - x)
    if y:
        assert (x / y) * y == x
        assert hash((x / y) * y) == hash(x)


@given(quotients())
def test_text_reads_back_and_is_canonical(x):
    text = write_quotient(x, SYMBOLS)
    again = parse_quotient(text, SYMBOLS)
    assert again == x
    assert write_quotient(again, SYMBOLS) == text
    assert pickle.loads(pickle.dumps(x)) == x


@given(values(), values(), values())
def test_common_factors_do_not_matter(x, y, z):
    if y and z:
        assert Quotient(x * z, y * z) == Quotient(x, y)


def test_denominators_are_primitive_with_positive_lead_and_without_roots():
    found = Quotient(A, A * -4 + 6)
    assert found.denominator == A * 2 - 3
    assert found.numerator == A * Fraction(-1, 2)
    root = Quotient(Value.rational(1), A + parse_number("sqrt(2)"))
    assert not root.denominator.radicals()
    assert root * (A + parse_number("sqrt(2)")) == 1


@pytest.mark.parametrize(
    ("text", "above", "below"),
    [
        ("a/b", "a", "b"),
        ("a/b/a", "1", "b"),
        ("1/(a+1)-1/(a-1)", "-2", "a^2-1"),
        ("(a^2-b^2)/(a-b)", "a+b", "1"),
        ("b^-2", "1", "b^2"),
        ("-a^(-1)", "-1", "a"),
        ("sqrt(1/2)/a", "1/2*sqrt(2)", "a"),
        ("2/3", "2/3", "1"),
        ("(1+i)/(1-i)", "i", "1"),
    ],
)
def test_reading(text, above, below):
    found = parse_quotient(text, SYMBOLS)
    assert found.numerator == parse_number(above, SYMBOLS)
    assert found.denominator == parse_number(below, SYMBOLS)


@pytest.mark.parametrize(
    "text",
    [
        "a/0",
        "a/(b-b)",
        "1/(a",
        "a/c",
        "a//b",
        "b^-a",
        "1/(a+b)^65",
        "1/0*a/b",
        "(a-a)^-1",
        "1/(a+b)^60/(a-b)^60*(a+1)^60",
    ],
)
def test_refused(text):
    with pytest.raises(NumberFault):
        parse_quotient(text, SYMBOLS)


def test_substitution_at_a_pole_is_refused():
    with pytest.raises(ZeroDivisionError):
        Quotient(A, B).substitute({"b": Value.rational(0)})


@given(values())
def test_factors_multiply_to_the_value(x):
    content, factors = factored(x)
    product = Value.rational(content)
    for factor, multiplicity in factors:
        product = product * factor**multiplicity
    assert product == x


def test_latex_in_factors():
    assert latex_factored(Quotient(A * A - B * B, A * -2)) == r"-\frac{\left(a+b\right) \left(a-b\right)}{2 a}"
    assert latex_factored(Quotient(-A - B)) == "-a-b"
    assert latex_factored(Quotient.of(0)) == "0"
