"""Text → tokens of the number grammar, each with the character where it begins.

What is no token becomes a token of kind "bad", which carries the fault; so the parser reports whichever fault
comes first in the text.
"""

import re
import unicodedata
from typing import Literal, NamedTuple

from app.exact.names import check_symbol, end_of_name, normalised, shown

Kind = Literal["number", "name", "sign", "bad", "end"]


class Token(NamedTuple):
    """A piece of a number: kind, text (of a bad token: what is wrong), place, and what would be right."""

    kind: Kind
    text: str
    position: int
    expected: str = ""


_NUMBER = re.compile(r"[0-9]+(?:\.[0-9]+)?")
_FLOATING = re.compile(r"[0-9]+(?:\.[0-9]*)?[eE][+-]?[0-9]+")
_SIGNS = frozenset("+-*/^()")
_MINUS = "\N{MINUS SIGN}"
_BLANKS = frozenset(" \t\r\n\N{NO-BREAK SPACE}\N{NARROW NO-BREAK SPACE}\N{THIN SPACE}")
_HINTS = {
    "·": "a product is written 2*a",
    "⋅": "a product is written 2*a",
    "×": "a product is written 2*a",
    "÷": "a quotient is written 2/3",
    "⁄": "a quotient is written 2/3",
    "√": "a square root is written sqrt(2)",
    "∞": "an exact number",
    ",": "decimals are written with a point, 1.5",
    ".": "decimals have digits on both sides of one point, 0.5",
    "[": "round parentheses",
    "{": "round parentheses",
    "=": "a number, not an equation",
}
_RAISED = {character: digit for digit, character in enumerate("⁰¹²³⁴⁵⁶⁷⁸⁹")}
_LOWERED = {character: digit for digit, character in enumerate("₀₁₂₃₄₅₆₇₈₉")}
_ANY = "numbers, symbols, + - * / ^ and parentheses"


def tokens_of(text: str) -> list[Token]:
    """All tokens of a text, up to the first bad one, and one of kind "end" at the end."""
    found: list[Token] = []
    place = 0
    while place < len(text):
        character = text[place]
        if character in _BLANKS:
            place += 1
            continue
        if character in _SIGNS or character == _MINUS:
            token, end = Token("sign", "-" if character == _MINUS else character, place), place + 1
        elif match := _NUMBER.match(text, place):
            token, end = _number(text, match.group(), place)
        else:
            end = end_of_name(text, place)
            token = _name(text[place:end], place) if end > place else _stray(character, place)
        found.append(token)
        if token.kind == "bad":
            return found
        place = end
    found.append(Token("end", "", len(text)))
    return found


def _number(text: str, digits: str, place: int) -> tuple[Token, int]:
    """The number that begins here, and where it ends; refused if it goes on like a floating number."""
    floating = _FLOATING.match(text, place)
    if floating:
        mantissa, _, power = floating.group().lower().partition("e")
        right = f"{mantissa.rstrip('.')}*10^{power.lstrip('+')}"
        message = f"{_shortened(floating.group())} is in floating notation; numbers here are exact"
        return Token("bad", message, place, _shortened(right)), floating.end()
    return Token("number", digits, place), place + len(digits)


def _name(raw: str, place: int) -> Token:
    """The name, in normal form C, or what is wrong with it."""
    name = normalised(raw)
    fault = None if name.isascii() else check_symbol(name)
    if fault is None:
        return Token("name", name, place)
    return Token("bad", fault, place + _first_loose_mark(raw), "a name of letters, digits and _, for example t_1")


def _first_loose_mark(raw: str) -> int:
    """Where the first combining mark stands that normal form C does not make part of a letter; 0 if nowhere."""
    start = 0  # of the letter that marks may join
    for offset, character in enumerate(raw):
        if unicodedata.category(character)[0] != "M":
            start = offset
        elif check_symbol(raw[start : offset + 1]) is not None:
            return offset
    return 0


def _stray(character: str, place: int) -> Token:
    """A character that begins nothing."""
    if character in _RAISED:
        return Token("bad", f"Raised digits such as {character} are not read", place, f"^{_RAISED[character]}")
    if character in _LOWERED:
        return Token("bad", f"Lowered digits such as {character} are not read", place, f"_{_LOWERED[character]}")
    message = f"The character {shown(character)} has no meaning in a number"
    return Token("bad", message, place, _HINTS.get(character, _ANY))


def _shortened(text: str) -> str:
    """A text short enough for a message."""
    return text if len(text) <= 24 else text[:20] + "…"
