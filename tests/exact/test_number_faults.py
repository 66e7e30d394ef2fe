"""Refused texts: the character that the fault points at, and what it says; arbitrary text never does worse."""

import string

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.errors import NumberFault
from app.exact.number import names_in, parse_laurent, parse_number
from app.exact.value import Value

SYMBOLS = ("a", "b", "e5")

# text, position counted from 0, a piece of the message, a piece of what would be right
FAULTS = [
    ("", 0, "no number", "2/3"),
    ("   ", 0, "no number", "2/3"),
    ("2a", 1, "written with *", "2*a"),
    ("2 a", 2, "written with *", "2*a"),
    ("a b", 2, "written with *", "a*b"),
    ("2(a+b)", 1, "written with *", "2*("),
    ("(a)(b)", 3, "written with *", ")*("),
    ("2i", 1, "written with *", "2*i"),
    ("3 4", 2, "written with *", "3*4"),
    ("2sqrt(2)", 1, "written with *", "2*sqrt"),
    ("1+2a", 3, "written with *", "2*a"),
    ("1e5", 0, "floating notation", "1*10^5"),
    ("a+1.5E-3", 2, "floating notation", "1.5*10^-3"),
    ("1.e5", 0, "floating notation", "1*10^5"),
    ("2^3^2", 3, "ambiguous", "(2^3)^2"),
    ("2^-3^2", 4, "ambiguous", "(2^3)^2"),
    ("a^2^2", 3, "ambiguous", "(2^3)^2"),
    ("2**3", 1, "one ^", "^"),
    ("c", 0, '"c" is not a declared symbol', "one of a, b, e5"),
    ("a+b*zeta", 4, '"zeta" is not a declared symbol', "one of"),
    ("I", 0, "not a declared symbol", "one of"),
    ("Sqrt(2)", 0, "not a declared symbol", "one of"),
    ("infinity", 0, "no number", "exact number"),
    ("1/0", 2, "Division by zero", "not zero"),
    ("1/(a-a)", 2, "Division by zero", "not zero"),
    ("0^-1", 0, "Division by zero", "not zero"),
    ("1/a", 2, "by constants only", "without symbols"),
    ("1/(1+a)", 2, "by constants only", "without symbols"),
    ("a/b", 2, "by constants only", "without symbols"),
    ("a^-1", 0, "negative power", "without symbols"),
    ("2*(a+b)^-2", 2, "negative power", "without symbols"),
    ("2^(1/2)", 2, "fractional power", "an integer"),
    ("2^0.5", 2, "fractional power", "an integer"),
    ("2^a", 2, "exponent is an integer", "an integer"),
    ("2^i", 2, "exponent is an integer", "an integer"),
    ("2^", 2, "ends too early", "exact number"),
    ("2+", 2, "ends too early", "exact number"),
    ("-", 1, "ends too early", "exact number"),
    ("2*", 2, "ends too early", "exact number"),
    ("(", 1, "ends too early", "exact number"),
    ("(2", 2, "closing parenthesis is missing", ")"),
    ("sqrt(2", 6, "closing parenthesis is missing", ")"),
    ("2)", 1, "closes nothing", "no parenthesis"),
    ("()", 1, 'missing before ")"', "exact number"),
    ("*2", 0, 'missing before "*"', "exact number"),
    ("2*/3", 2, 'missing before "/"', "exact number"),
    ("2+*3", 2, 'missing before "*"', "exact number"),
    ("^2", 0, 'missing before "^"', "exact number"),
    ("sqrt", 4, "followed by a parenthesis", "sqrt(2)"),
    ("sqrt 2", 5, "followed by a parenthesis", "sqrt(2)"),
    ("1+sqrt(a)", 7, "rational numbers only", "rational number"),
    ("sqrt(1+sqrt(2))", 5, "rational numbers only", "rational number"),
    ("sqrt(i)", 5, "rational numbers only", "rational number"),
    ("sqrt()", 5, 'missing before ")"', "exact number"),
    ("1.", 1, "no meaning", "0.5"),
    (".5", 0, "no meaning", "0.5"),
    ("1.2.3", 3, "no meaning", "0.5"),
    ("1,5", 1, "no meaning", "with a point"),
    ("a²", 1, "Raised digits", "^2"),
    ("a₁", 1, "Lowered digits", "_1"),
    ("2·a", 1, "no meaning", "2*a"),
    ("2×3", 1, "no meaning", "2*a"),
    ("√2", 0, "no meaning", "sqrt(2)"),
    ("1+∞", 2, "no meaning", "exact number"),
    ("a=1", 1, "no meaning", "not an equation"),
    ("[1]", 0, "no meaning", "round parentheses"),
    ("1\x00", 1, "U+0000", "parentheses"),
    ("1+\ud800", 2, "U+D800", "parentheses"),
    ("1\u200b", 1, "U+200B", "parentheses"),
    ("٣", 0, "no meaning", "parentheses"),
    ("1+x\N{COMBINING DIAERESIS}\N{COMBINING CIRCUMFLEX ACCENT}", 4, "letters, digits and _", "t_1"),
    ("e\N{COMBINING ACUTE ACCENT}", 0, "not a declared symbol", "one of"),
    ("2a+$", 1, "written with *", "2*a"),  # the first fault, not the worst
    ("$+2a", 0, "no meaning", "parentheses"),
    ('__import__("os")', 0, "not a declared symbol", "one of"),
    ("a.b", 1, "no meaning", "0.5"),
    ("0x10", 1, "written with *", "0*x10"),
    ("1_000", 1, "written with *", "1*_000"),
    ("None", 0, "not a declared symbol", "one of"),
    ("nan", 0, "not a declared symbol", "one of"),
]


@pytest.mark.parametrize(("text", "position", "message", "expected"), FAULTS)
def test_fault(text, position, message, expected):
    with pytest.raises(NumberFault) as caught:
        parse_number(text, SYMBOLS)
    fault = caught.value
    assert message in fault.message
    assert expected in fault.expected
    assert fault.position == position
    fault.message.encode()  # fit for any page, whatever was typed


def test_without_symbols_the_fault_says_so():
    with pytest.raises(NumberFault) as caught:
        parse_number("a", ())
    assert caught.value.expected == "a number without symbols"


def test_long_names_are_shortened_in_messages():
    with pytest.raises(NumberFault) as caught:
        parse_number("x" * 15_000, {"y" * 15_000})
    assert len(caught.value.message) < 100 and len(caught.value.expected) < 100


PIECES = [*"0123456789.+-*/^()  ", "sqrt(", "i", "a", "b", "1/2", "é", "e\u0301", "−", "z", ")^", "^2", "√"]
near_numbers = st.lists(st.sampled_from(PIECES), max_size=25).map("".join)
any_text = st.text(st.characters(exclude_categories=()), max_size=40)


@settings(max_examples=1500)
@given(st.one_of(near_numbers, any_text, st.text(string.printable, max_size=30)))
def test_any_text_gives_a_value_or_a_fault_inside_it(text):
    for read in (parse_number, parse_laurent):
        try:
            result = read(text, ("a", "b"))
        except NumberFault as fault:
            assert 0 <= fault.position <= len(text)
            assert fault.message and fault.expected
            (fault.message + fault.expected).encode()
        else:
            assert isinstance(result, Value | dict)
    names = names_in(text)
    assert len(set(names)) == len(names)


@settings(max_examples=300)
@given(near_numbers)
def test_what_is_read_is_read_again_with_the_names_in_it(text):
    try:
        value = parse_number(text, ("a", "b", "z", "é"))
    except NumberFault:
        return
    assert value.symbols() <= set(names_in(text))
    assert parse_number(text, names_in(text)) == value
