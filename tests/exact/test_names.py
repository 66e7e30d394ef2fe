"""Names of symbols: which are allowed, which occur in a text."""

import unicodedata

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.exact.names import RESERVED, check_symbol, names_in, normalised
from app.exact.number import parse_number
from app.exact.value import Value

ALLOWED = ["a", "t1", "t_1", "_", "_x", "alpha", "α", "Ж", "ß", "日本", "é", "e\u0301", "Å", "I", "Sqrt", "a" * 500]


@pytest.mark.parametrize("name", ALLOWED)
def test_allowed(name):
    assert check_symbol(name) is None


@pytest.mark.parametrize(
    ("name", "message"),
    [("", "empty"), ("i", "reserved"), ("sqrt", "reserved"), ("infinity", "reserved"), ("1a", "not with a digit"),
     ("a b", "U+0020"),
     ("a-b", '"-"'), ("a²", '"²"'), ("x\u0302", "letters, digits and _"), ("a.b", '"."'), ("٣a", '"٣"'),
     ("a٣", '"٣"'),
     ("a\ud800", "U+D800"), ("a\n", "U+000A"), ("<b>", '"<"'), ("*", '"*"'), ("½", '"½"'), ("Ⅷ", '"Ⅷ"')],
)  # fmt: skip
def test_not_allowed(name, message):
    fault = check_symbol(name)
    assert fault is not None and message in fault
    fault.encode()


@pytest.mark.parametrize(
    ("text", "names"),
    [("", ()), ("1/2", ()), ("1/2*b+sqrt(2)*a-b^2", ("b", "a")), ("i*infinity*sqrt(2)", ()),
     ("t_1+t1+_t", ("t_1", "t1", "_t")),
     ("2a", ("a",)), ("1e5", ()), ("1e5+e5", ("e5",)), ("1.5E-3x", ("x",)), ("a²+$b", ("a", "b")),
     ("e\u0301+é", ("é",)),
     ("x\u0302+y", ("y",)), ("α/z^2", ("α", "z")), ("((((a", ("a",)), ("a b", ("a", "b")), ("*", ())],
)  # fmt: skip
def test_names_in(text, names):
    assert names_in(text) == names


def test_very_long_text_is_cut():
    assert names_in("a+" * 10**6) == ("a",)


@given(st.text(max_size=30))
def test_every_name_found_is_allowed(text):
    for name in names_in(text):
        assert check_symbol(name) is None and name not in RESERVED
        assert unicodedata.is_normalized("NFC", name)


@given(st.text(max_size=6))
def test_allowed_names_are_read_as_symbols(name):
    if check_symbol(name) is None:
        assert parse_number(name, {normalised(name)}) == Value.symbol(normalised(name))
        assert names_in(name) == (normalised(name),)
