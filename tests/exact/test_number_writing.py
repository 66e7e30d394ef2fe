"""The canonical text of values: order of terms, forms of coefficients, reading back."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.exact.limits import OverLimit
from app.exact.number import parse_laurent, parse_number, write_laurent, write_number
from app.exact.value import Value
from tests.exact.number_strategies import values

CASES = [
    # text, listed symbols, canonical
    ("-1/6-a-b/2", "ab", "-a-1/2*b-1/6"),
    ("-1/6-a-b/2", "ba", "-1/2*b-a-1/6"),
    ("4/2", "", "2"),
    ("-0", "", "0"),
    ("0.25", "", "1/4"),
    ("1*a", "ab", "a"),
    ("-1*a", "ab", "-a"),
    ("1+b+a+a*b+b^2+a^2", "ab", "a^2+a*b+b^2+a+b+1"),
    ("1+b+a+a*b+b^2+a^2", "ba", "b^2+b*a+a^2+b+a+1"),
    ("a*c+b^2+a^3", "abc", "a^3+a*c+b^2"),
    ("c+b+a", "", "a+b+c"),  # none listed: by name
    ("c+b+a", "c", "c+a+b"),  # listed ones first
    ("sqrt(3)+i*sqrt(2)+i+sqrt(2)+1+i*sqrt(3)", "", "1+sqrt(2)+sqrt(3)+i+i*sqrt(2)+i*sqrt(3)"),
    ("a*sqrt(2)+a*i+a", "a", "a+sqrt(2)*a+i*a"),
    ("-3/4*i*sqrt(2)*a^2*b", "ab", "-3/4*i*sqrt(2)*a^2*b"),
    ("sqrt(1/2)", "", "1/2*sqrt(2)"),
    ("-sqrt(-8)", "", "-2*i*sqrt(2)"),
    ("1-i", "", "1-i"),
]


@pytest.mark.parametrize(("text", "symbols", "canonical"), CASES)
def test_canonical_form(text, symbols, canonical):
    assert write_number(parse_number(text, "abc"), tuple(symbols)) == canonical


@given(values, st.permutations(["a", "b", "t_1", "λ"]))
def test_order_of_symbols_changes_the_text_and_not_the_value(value, symbols):
    assert parse_number(write_number(value, symbols), symbols) == value


@given(values)
def test_degrees_descend(value):
    symbols = ("a", "b", "t_1", "λ")
    text = write_number(value, symbols)
    pieces = text.replace("-", "+").lstrip("+").split("+")
    maps = [parse_number(piece, symbols).terms for piece in pieces]
    degrees = [max((sum(power for _, power in monomial) for monomial, _ in terms), default=0) for terms in maps]
    assert degrees == sorted(degrees, reverse=True)


def test_products_of_large_roots_are_split_into_readable_ones():
    value = parse_number("sqrt(999999999999999989/999999999999999967)")
    assert write_number(value) == "1/999999999999999967*sqrt(999999999999999967)*sqrt(999999999999999989)"
    square = parse_number("*".join(["sqrt(2*10^17+6)", "sqrt(3*10^17+1)"]))
    assert parse_number(write_number(square)) == square
    too_large = Value.from_terms([(((), 10**37 + 1), 1)])
    with pytest.raises(OverLimit):
        write_number(too_large)


@pytest.mark.parametrize(
    ("text", "written"),
    [("1/2/z^2 - a/z", "1/2/z^2-a/z"), ("z^(-5/2)", "1/z^(5/2)"), ("(a+b)/z^2+1/z", "(a+b)/z^2+1/z"), ("0", "0"),
     ("-1/z", "-1/z"), ("-(a+b)/z^3-2*i/z", "(-a-b)/z^3-2*i/z")],
)  # fmt: skip
def test_polynomials_in_the_coordinate(text, written):
    coefficients = parse_laurent(text, "ab")
    assert write_laurent(coefficients, ("a", "b")) == written
    assert parse_laurent(written, "ab") == coefficients


@given(st.dictionaries(st.fractions(min_value="1/24", max_value=64, max_denominator=24), values, max_size=4))
def test_polynomials_in_the_coordinate_read_back(coefficients):
    symbols = ("a", "b", "t_1", "λ")
    kept = {power: value for power, value in coefficients.items() if value}
    assert parse_laurent(write_laurent(coefficients, symbols, "w"), symbols, "w") == kept
