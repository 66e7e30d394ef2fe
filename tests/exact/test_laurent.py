"""Exponents written as polynomials in 1/z."""

from fractions import Fraction

import pytest

from app.errors import NumberFault
from app.exact.number import parse_laurent, parse_number
from app.exact.value import Value

SYMBOLS = ("a", "b")


@pytest.mark.parametrize(
    ("text", "coefficients"),
    [("", {}), ("  ", {}), ("0", {}), ("1/z-1/z", {}), ("z-z", {}), ("1-1+1/z", {"1": "1"}),
     ("1/2/z^2 - a/z", {"2": "1/2", "1": "-a"}), ("z^(-5/2)", {"5/2": "1"}), ("1/z^(5/2)", {"5/2": "1"}),
     ("a*z^-1", {"1": "a"}),
     ("(a+b)/z^2", {"2": "a+b"}), ("(a/z)^2", {"2": "a^2"}), ("(1/z+a)*(1/z-a)+a^2", {"2": "1"}),
     ("1/(2*z)", {"1": "1/2"}),
     ("1/(i*z^2)", {"2": "-i"}), ("a/((1+i)*z)", {"1": "a/2-i*a/2"}), ("(2*z)^-2", {"2": "1/4"}),
     ("z/z^3", {"2": "1"}),
     ("z^-1*z^(-1/2)", {"3/2": "1"}), ("z^(1/2)/z", {"1/2": "1"}), ("(1/z)^3", {"3": "1"}), ("z^0/z", {"1": "1"}),
     ("sqrt(2)/z^3+sqrt(2)*i/z^3", {"3": "sqrt(2)*(1+i)"}), ("1/z^0.5", {"1/2": "1"})],
)  # fmt: skip
def test_read(text, coefficients):
    result = parse_laurent(text, SYMBOLS)
    assert result == {Fraction(power): parse_number(value, SYMBOLS) for power, value in coefficients.items()}
    assert list(result) == sorted(result, reverse=True)
    assert all(isinstance(power, Fraction) and isinstance(value, Value) and value for power, value in result.items())


@pytest.mark.parametrize(
    ("text", "position", "message"),
    [("1", 0, "constant term"), ("1/z+a", 4, "constant term"), ("z", 0, "positive power"),
     ("1/z + 2*z^2 + 3", 6, "positive power"),
     ("a/z-z^(1/2)", 4, "positive power"), ("1/(z+1)", 2, "constants and powers of z"),
     ("1/(a*z)", 2, "constants and powers of z"),
     ("(1/z+1/z^2)^-1", 0, "constants and powers of z"), ("(2*z)^(1/2)", 6, "fractional power"),
     ("2^(1/2)/z", 2, "fractional power"),
     ("a^(1/2)/z", 2, "fractional power"), ("(1/z)^(1/2)", 6, "fractional power"),
     ("z^(1/25)", 2, "denominators up to 24"),
     ("1/z^i", 4, "exponent is an integer"), ("sqrt(z)", 5, "rational numbers only"),
     ("c/z", 0, "not a declared symbol"),
     ("2z", 1, "written with *"), ("1/w", 2, "not a declared symbol"), ("2^z", 2, "exponent is an integer")],
)  # fmt: skip
def test_refused(text, position, message):
    with pytest.raises(NumberFault) as caught:
        parse_laurent(text, SYMBOLS)
    assert message in caught.value.message
    assert caught.value.position == position
    assert caught.value.expected


def test_terms_that_cancel_are_not_blamed():
    with pytest.raises(NumberFault) as caught:
        parse_laurent("a+1/z-a+b", SYMBOLS)
    assert caught.value.position == 8


def test_the_first_term_that_is_wrong_is_blamed():
    with pytest.raises(NumberFault) as caught:
        parse_laurent("1/z+2+1/z^2+3", SYMBOLS)
    assert caught.value.position == 4


def test_another_coordinate():
    assert parse_laurent("z/w^2", ("z",), "w") == {2: Value.symbol("z")}


def test_the_coordinate_is_no_symbol():
    with pytest.raises(NumberFault, match="coordinate here and a symbol") as caught:
        parse_laurent("1+1/z", ("a", "z"))
    assert caught.value.position == 4
    assert parse_laurent("", ("z",)) == {}


def test_problem_numbers_know_no_coordinate():
    with pytest.raises(NumberFault):
        parse_number("1/z", ("a",))
    with pytest.raises(NumberFault):
        parse_number("1/z", ("z",))
