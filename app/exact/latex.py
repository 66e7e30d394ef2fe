"""Values as LaTeX, in the order of the canonical text."""

import re
from collections.abc import Mapping, Sequence
from fractions import Fraction
from itertools import pairwise

from app.exact.value import Monomial, Rational, Value
from app.exact.writing import ordered_terms

_LOWER = [
    "alpha", "beta", "gamma", "delta", "epsilon", "zeta", "eta", "theta", "iota", "kappa", "lambda", "mu", "nu", "xi",
    "omicron", "pi", "rho", "varsigma", "sigma", "tau", "upsilon", "phi", "chi", "psi", "omega",
]  # fmt: skip
_UPPER_COMMANDS = {"Gamma", "Delta", "Theta", "Lambda", "Xi", "Pi", "Sigma", "Upsilon", "Phi", "Psi", "Omega"}
# Capitals that look like Latin ones have no command of their own.
_UPPER_LATIN = {
    "Alpha": "A", "Beta": "B", "Epsilon": "E", "Zeta": "Z", "Eta": "H", "Iota": "I", "Kappa": "K", "Mu": "M",
    "Nu": "N", "Omicron": "O", "Rho": "P", "Tau": "T", "Chi": "X",
}  # fmt: skip


def _greek_letters() -> dict[str, str]:
    """LaTeX of Greek letters, by letter and by English name."""
    found = {"ϑ": r"\vartheta", "ϕ": r"\phi", "ϖ": r"\varpi", "ϱ": r"\varrho", "ϵ": r"\epsilon"}
    for place, name in enumerate(_LOWER):
        latex_text = "o" if name == "omicron" else rf"\{name}"
        found[chr(ord("α") + place)] = found[name] = latex_text
    found["ε"], found["φ"] = r"\varepsilon", r"\varphi"
    for place, name in enumerate(_LOWER):
        capital = name.capitalize()
        if capital in _UPPER_COMMANDS:
            latex_text = rf"\{capital}"
        elif capital in _UPPER_LATIN:
            latex_text = rf"\mathrm{{{_UPPER_LATIN[capital]}}}"
        else:
            continue  # final sigma has no capital of its own
        found[chr(ord("Α") + place)] = found[capital] = latex_text
    return found


_GREEK = _greek_letters()
_TRAILING_DIGITS = re.compile(r"(.*?[^0-9_])([0-9]+)")


def latex(value: Value, symbols: Sequence[str] = ()) -> str:
    r"""The LaTeX of a value, without surrounding dollars; ``symbols`` gives the order of the symbols.

    Hypothesis: the names passed ``check_symbol``, so they hold letters, digits and underscores only.

    >>> latex(Value.symbol("alpha") * Fraction(-1, 2) + 1)
    '-\\frac{1}{2} \\alpha+1'
    """
    pieces: list[str] = []
    for (monomial, radical), coefficient in ordered_terms(value, symbols):
        pieces.append("-" if coefficient < 0 else "+" if pieces else "")
        pieces.append(_term(monomial, radical, -coefficient if coefficient < 0 else coefficient))
    return "".join(pieces) or "0"


def latex_laurent(coefficients: Mapping[Fraction, Value], symbols: Sequence[str] = (), coordinate: str = "z") -> str:
    r"""The LaTeX of a polynomial in 1/z, given as power of 1/z → coefficient, by descending power.

    >>> latex_laurent({Fraction(5, 2): Value.symbol("a")})
    'a z^{-5/2}'
    """
    pieces: list[str] = []
    for power, coefficient in sorted(coefficients.items(), reverse=True):
        if not coefficient:
            continue
        text = latex(coefficient, symbols)
        if len(coefficient.terms) > 1:
            text = rf"\left({text}\right)"
        text = {"1": "", "-1": "-"}.get(text, text + " ")
        if pieces and not text.startswith("-"):
            text = "+" + text
        pieces.append(f"{text}{latex_name(coordinate)}^{{-{power}}}")
    return "".join(pieces) or "0"


def latex_name(name: str) -> str:
    r"""The LaTeX of a symbol: Greek letters by letter or English name, trailing digits and parts after ``_`` lowered.

    >>> latex_name("theta0"), latex_name("t_1"), latex_name("rate")
    ('\\theta_{0}', 't_{1}', '\\mathrm{rate}')
    """
    stem, *lowered = name.split("_")
    if not stem or not all(lowered):
        return r"\mathrm{" + name.replace("_", r"\_") + "}"
    digits = _TRAILING_DIGITS.fullmatch(stem)
    if digits:
        stem = digits[1]
        lowered = [digits[2], *lowered]
    text = _letters(stem)
    return f"{text}_{{{','.join(map(_letters, lowered))}}}" if lowered else text


def _letters(text: str) -> str:
    """A part of a name: a Greek letter, a single letter, a number, or a word set upright."""
    if text in _GREEK:
        return _GREEK[text]
    return text if len(text) == 1 or text.isdecimal() else rf"\mathrm{{{text}}}"


def _term(monomial: Monomial, radical: int, size: Rational) -> str:
    """One term without its sign."""
    factors: list[str] = []
    if size != 1:
        whole = size.denominator == 1
        factors.append(str(size) if whole else rf"\frac{{{size.numerator}}}{{{size.denominator}}}")
    if radical < 0:
        factors.append(r"\mathrm{i}")
    if abs(radical) != 1:
        factors.append(rf"\sqrt{{{abs(radical)}}}")
    factors.extend(latex_name(name) + (f"^{{{power}}}" if power != 1 else "") for name, power in monomial)
    # Words need a thin space, or two of them would read as one.
    joined = factors[0] if factors else "1"
    for before, after in pairwise(factors):
        words = _is_word(before) or _is_word(after)
        joined += (r"\, " if words else " ") + after
    return joined


def _is_word(factor: str) -> bool:
    """Whether a factor begins with an upright word of several letters."""
    return factor.startswith(r"\mathrm{") and factor[9:10] != "}"
