"""Formulas: what they look like, and that the page's policy lets them pass."""

import re
from fractions import Fraction

import pytest

from app.exact.number import parse_laurent, parse_number
from app.exact.value import Value
from app.local.formal_type import Exponent
from app.web.mathematics import exponent_mathml, mathml, type_mathml, value_mathml

TEXTS = ["0", "-1/2", "sqrt(2)*i", "a^2-1/3*b", "alpha+θ_1", "rate*x1", "(1+i)^3*sqrt(-3)", "x_long_name"]


def words(markup: str) -> str:
    return re.sub(r"<[^>]+>", "", markup)


@pytest.mark.parametrize("text", TEXTS)
def test_no_style_no_link_no_script(text):
    symbols = ["a", "b", "alpha", "θ_1", "rate", "x1", "x_long_name"]
    markup = value_mathml(parse_number(text, symbols), symbols)
    assert markup.startswith("<math") and markup.endswith("</math>")
    assert not re.search(r"\sstyle=|\shref=|<script|<style|\son\w+=|https?://", markup)


def test_formulas_say_what_they_mean():
    value = parse_number("1/2*a^2-3*b1", ["a", "b1"])
    markup = value_mathml(value, ["a", "b1"])
    assert "<mfrac><mn>1</mn><mn>2</mn></mfrac>" in markup
    assert "<msup>" in markup and "<msub>" in markup
    assert words(markup).replace("\u2062", "") == "12a2−3b1"


def test_an_exponent_is_a_polynomial_in_1_over_z():
    terms = parse_laurent("1/2/z^2-a/z", ["a"])
    exponent = Exponent(tuple(sorted(terms.items(), reverse=True)))
    assert words(exponent_mathml(exponent, ["a"])) == "12z−2−az−1"
    ramified = Exponent(((Fraction(3, 2), Value.rational(1)),))
    assert "3/2" in words(exponent_mathml(ramified, []))


@pytest.mark.parametrize(("name", "shown"), [("D4", "D4"), ("A3^(1)", "A3(1)"), ("A1 + D4^(1)", "A1+D4(1)")])
def test_types_are_formulas(name, shown):
    markup = type_mathml(name)
    assert markup.startswith("<math") and words(markup) == shown


def test_types_in_words_stay_words():
    assert type_mathml("hyperbolic") == "hyperbolic"
    assert type_mathml("<b>") == "&lt;b&gt;"


def test_long_sums_are_named():
    symbols = [f"s{k}" for k in range(60)]
    value = sum((Value.symbol(name) for name in symbols), Value.rational(0))
    assert words(value_mathml(value, symbols)) == "a sum of 60 terms"


def test_markup_in_a_formula_is_text():
    assert "<b>" not in mathml("a<b>c")


def test_a_formula_is_made_once():
    before = mathml.cache_info().hits
    assert mathml("x+1") is mathml("x+1")
    assert mathml.cache_info().hits > before
