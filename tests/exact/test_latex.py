"""LaTeX of values and names; everything is also given to the converter of the page."""

from fractions import Fraction

import math_core
import pytest
from hypothesis import given

from app.exact.latex import latex, latex_laurent, latex_name
from app.exact.number import parse_laurent, parse_number
from tests.exact.number_strategies import values

SYMBOLS = ("a", "b", "rate", "flow", "theta0", "β")


@pytest.mark.parametrize(
    ("text", "expected"),
    [("0", "0"), ("-3", "-3"), ("2/3", r"\frac{2}{3}"), ("-1/2", r"-\frac{1}{2}"), ("i", r"\mathrm{i}"), ("a", "a"),
     ("-a", "-a"),
     ("1", "1"), ("-1", "-1"), ("sqrt(2)", r"\sqrt{2}"),
     ("-3/2*i*sqrt(2)*a^2*b", r"-\frac{3}{2} \mathrm{i} \sqrt{2} a^{2} b"),
     ("1-i", r"1-\mathrm{i}"), ("a+b-1", "a+b-1"), ("theta0^2*β", r"\theta_{0}^{2} \beta"),
     ("2*rate*flow", r"2\, \mathrm{rate}\, \mathrm{flow}"),
     ("1+a^2+a", "a^{2}+a+1"), ("i*a", r"\mathrm{i} a")],
)  # fmt: skip
def test_values(text, expected):
    assert latex(parse_number(text, SYMBOLS), SYMBOLS) == expected


@pytest.mark.parametrize(
    ("name", "expected"),
    [("x", "x"), ("alpha", r"\alpha"), ("α", r"\alpha"), ("Omega", r"\Omega"), ("Ω", r"\Omega"),
     ("Alpha", r"\mathrm{A}"),
     ("Α", r"\mathrm{A}"), ("epsilon", r"\epsilon"), ("ε", r"\varepsilon"), ("ϕ", r"\phi"), ("φ", r"\varphi"),
     ("ς", r"\varsigma"),
     ("σ", r"\sigma"), ("ω", r"\omega"), ("omicron", "o"), ("t1", "t_{1}"), ("t_1", "t_{1}"), ("t12", "t_{12}"),
     ("λ_alpha", r"\lambda_{\alpha}"),
     ("x_1_2", "x_{1,2}"), ("sigma2_3", r"\sigma_{2,3}"), ("rate", r"\mathrm{rate}"), ("rate2", r"\mathrm{rate}_{2}"),
     ("k_in", r"k_{\mathrm{in}}"), ("_x", r"\mathrm{\_x}"), ("a__b", r"\mathrm{a\_\_b}"), ("_", r"\mathrm{\_}"),
     ("é", "é"), ("a1b2", r"\mathrm{a1b}_{2}")],
)  # fmt: skip
def test_names(name, expected):
    assert latex_name(name) == expected


@pytest.mark.parametrize(
    ("text", "expected"),
    [("", "0"), ("1/z", "z^{-1}"), ("-1/z", "-z^{-1}"), ("1/2/z^2-a/z", r"\frac{1}{2} z^{-2}-a z^{-1}"),
     ("(a+b)/z^(5/2)", r"\left(a+b\right) z^{-5/2}"), ("i/z+a/z^2", r"a z^{-2}+\mathrm{i} z^{-1}")],
)  # fmt: skip
def test_polynomials_in_the_coordinate(text, expected):
    assert latex_laurent(parse_laurent(text, SYMBOLS), SYMBOLS) == expected


def test_zero_coefficients_are_left_out():
    assert latex_laurent({Fraction(2): parse_number("0"), Fraction(1): parse_number("2")}) == "2 z^{-1}"


@given(values)
def test_the_page_can_show_it(value):
    converter = math_core.LatexToMathML()
    markup = converter.convert_with_local_state(latex(value), displaystyle=False)
    assert markup.startswith("<math") and "merror" not in markup


@pytest.mark.parametrize("name", ["_x", "a__b", "t_1", "alpha", "Alpha", "日本", "x_α", "Жа", "é1"])
def test_the_page_can_show_names(name):
    markup = math_core.LatexToMathML().convert_with_local_state(latex_name(name), displaystyle=False)
    assert markup.startswith("<math") and "merror" not in markup
