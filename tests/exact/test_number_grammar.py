"""What the number grammar reads, and what it means."""

from fractions import Fraction

import pytest
from hypothesis import given

from app.exact.number import parse_number, write_number
from app.exact.value import Value
from tests.exact.number_strategies import values

SYMBOLS = {"a", "b", "t_1", "α", "Ж", "é", "_x"}


@pytest.mark.parametrize(
    "text",
    ["sqrt(8) - 2*sqrt(2)", "(1+i)^2 - 2*i", "sqrt(2)*sqrt(3) - sqrt(6)", "i^2 + 1", "sqrt(-2) - i*sqrt(2)",
     "sqrt(4/9) - 2/3", "sqrt(1/2) - sqrt(2)/2", "1/sqrt(2) - sqrt(2)/2", "(sqrt(2)+sqrt(3))*(sqrt(3)-sqrt(2)) - 1",
     "1/(1+sqrt(2)) + 1 - sqrt(2)", "sqrt(-1)*sqrt(-1) + 1", "(1/2+i*sqrt(3)/2)^6 - 1",
     "(1+sqrt(5))^2/4 - (3+sqrt(5))/2",
     "sqrt(2+2) - 2", "sqrt(sqrt(16)) - 2", "sqrt((1+i)*(1-i)) - sqrt(2)", "(a+b)^2 - a^2 - 2*a*b - b^2",
     "(a+i*b)*(a-i*b) - a^2 - b^2", "0*a", "a-a", "sqrt(2)*sqrt(3)*sqrt(6) - 6", "(a^2)^3-a^6", "0.1+0.2-0.3",
     "(1+i)^-2 + i/2", "sqrt(12)/sqrt(3)-2"],
)  # fmt: skip
def test_proved_zero(text):
    assert parse_number(text, SYMBOLS).is_zero


@pytest.mark.parametrize(
    "text",
    ["sqrt(2)", "sqrt(2)+sqrt(3)-sqrt(5)", "sqrt(2)-1.41421356237309504880168872420969807856967187537694", "a-b", "i",
     "1-i^2-i^4", "sqrt(2)*sqrt(3)+sqrt(6)", "1/3-0.333333333333333333333333"],
)  # fmt: skip
def test_proved_not_zero(text):
    assert not parse_number(text, SYMBOLS).is_zero


@pytest.mark.parametrize(
    ("text", "number"),
    [("0", 0), ("007", 7), ("-2^2", -4), ("(-2)^2", 4), ("2^-2", Fraction(1, 4)), ("-2^-2", Fraction(-1, 4)),
     ("2^+3", 8),
     ("2^(1+2)", 8), ("2^(3^2)", 512), ("(2^3)^2", 64), ("2^(-1)", Fraction(1, 2)), ("0^0", 1),
     ("1/2/3", Fraction(1, 6)),
     ("1/2*3", Fraction(3, 2)), ("2*3/4", Fraction(3, 2)), ("6/2^2", Fraction(3, 2)), ("2-3-4", -5), ("2--3", 5),
     ("-+-2", 2),
     ("2*-3", -6), ("2/-4", Fraction(-1, 2)), ("1.50", Fraction(3, 2)), ("0.000", 0), ("12.5*4", 50),
     (" 1 / 2 ", Fraction(1, 2)),
     ("\t1\n+\r2 ", 3), ("1\N{NO-BREAK SPACE}+1", 2), ("\N{MINUS SIGN}2^2", -4), ("+5", 5), ("((3))", 3), ("4/2", 2),
     ("2^64", 2**64), ("1^64", 1), ("(1/2)^64", Fraction(1, 2**64)), ("sqrt(9)^3", 27), ("2^sqrt(4)", 4),
     ("i^4", 1), ("-i^2", 1), ("(i*sqrt(2))^4", 4)],
)  # fmt: skip
def test_meaning(text, number):
    value = parse_number(text)
    assert value == number
    assert value.as_rational() == Fraction(number)


@pytest.mark.parametrize("name", ["a", "t_1", "α", "Ж", "é", "_x"])
def test_symbols(name):
    assert parse_number(f"2*{name}^2", SYMBOLS) == Value.symbol(name) ** 2 * 2


def test_names_are_compared_in_normal_form():
    assert parse_number("e\N{COMBINING ACUTE ACCENT}", {"é"}) == Value.symbol("é")
    assert parse_number("\N{OHM SIGN}", {"Ω"}) == Value.symbol("Ω")


@given(values)
def test_writing_then_reading_is_the_identity(value):
    symbols = ("λ", "b", "a", "t_1")
    text = write_number(value, symbols)
    assert " " not in text
    assert parse_number(text, symbols) == value
    assert write_number(parse_number(text, symbols), symbols) == text
    assert parse_number(write_number(value), symbols) == value
