"""Formulas for the page: LaTeX → MathML, rendered by the browser itself."""

import re
from collections.abc import Sequence
from functools import lru_cache

from markupsafe import Markup
from math_core import LatexToMathML

from app.exact.latex import latex, latex_laurent
from app.exact.value import Value
from app.exact.writing import ordered_terms
from app.local.formal_type import Exponent

_CONVERTER = LatexToMathML()
_TERMS_TOGETHER = 5
_MOST_TERMS = 40
_LONGEST = 4_000
"""Beyond these a formula is named, or cut, not set: no reader and no layout profits from more."""


@lru_cache(maxsize=16_384)
def mathml(text: str) -> Markup:
    """The MathML of a formula given as LaTeX (made by ``exact/latex.py``, which escapes what users typed).

    Cost: some microseconds for a short formula, a look-up when it was shown before.
    """
    return Markup(_CONVERTER.convert_with_local_state(text, displaystyle=False))


def value_mathml(value: Value, symbols: Sequence[str]) -> Markup:
    """A value as a formula, or the number of its terms when it is a long sum."""
    if len(value.terms) > _MOST_TERMS:
        return Markup("<em>a sum of {} terms</em>").format(len(value.terms))
    if len(value.terms) <= _TERMS_TOGETHER:
        return _formula(latex(value, symbols))
    # in several formulas, because browsers break lines between formulas and not inside one
    terms = ordered_terms(value, symbols)
    pieces = [
        latex(Value.from_terms(terms[k : k + _TERMS_TOGETHER]), symbols) for k in range(0, len(terms), _TERMS_TOGETHER)
    ]
    signed = [pieces[0], *(piece if piece.startswith("-") else "+" + piece for piece in pieces[1:])]
    return Markup(" ").join(map(_formula, signed))


def _formula(text: str) -> Markup:
    return mathml(text) if len(text) <= _LONGEST else Markup("<code>{}…</code>").format(text[:200])


def exponent_mathml(exponent: Exponent, symbols: Sequence[str]) -> Markup:
    """An exponent as a polynomial in 1/z."""
    return mathml(latex_laurent(dict(exponent.terms), symbols))


def type_mathml(name: str) -> Markup:
    """The name of a Dynkin type, its rank lowered and the mark of an affine type raised; words stay words."""
    parts = [re.fullmatch(r"([A-Z])(\d+)(?:\^(\(1\)))?", part) for part in name.split(" + ")]
    if not all(parts):
        return Markup("{}").format(name)
    raised = (f"{m[1]}_{{{m[2]}}}" + (f"^{{{m[3]}}}" if m[3] else "") for m in parts if m)
    return mathml("+".join(raised))
