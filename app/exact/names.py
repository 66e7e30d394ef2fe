"""Names of symbols: what is one, and which occur in a text.

A name is made of Unicode letters, the digits 0–9 after the first place, and ``_``; it is kept in normal form C.
"""

import re
import unicodedata

from app.exact.limits import MAX_CHARACTERS

RESERVED = frozenset({"i", "sqrt", "infinity"})

_ASCII_NAME = re.compile(r"[A-Za-z_][A-Za-z0-9_]*")
_ASCII_DIGITS = frozenset("0123456789")
_NUMBER = re.compile(r"[0-9]+(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?")


def normalised(name: str) -> str:
    """The name in normal form C, in which all names are compared."""
    return name if name.isascii() else unicodedata.normalize("NFC", name)


def shown(character: str) -> str:
    """A character as it may stand in a message: itself, or its code where it has no visible form."""
    return f'"{character}"' if character.isprintable() and not character.isspace() else f"U+{ord(character):04X}"


def check_symbol(name: str) -> str | None:
    """What is wrong with a name of a symbol, in words, or None; the name is brought into normal form C first."""
    name = normalised(name)
    if not name:
        return "The name of a symbol is empty"
    if name in RESERVED:
        return f'"{name}" is reserved and cannot be the name of a symbol'
    if name[0] in _ASCII_DIGITS:
        return "The name of a symbol begins with a letter, not with a digit"
    for character in name:
        if not (character.isalpha() or character == "_" or character in _ASCII_DIGITS):
            return f"The name of a symbol consists of letters, digits and _; {shown(character)} is none of these"
    return None


def end_of_name(text: str, start: int) -> int:
    """Where the name that begins at ``start`` ends (``start`` itself if none begins there).

    Combining marks are taken along: in normal form C most become part of a letter, and the rest are faults of
    the name, not the beginning of something else.
    """
    match = _ASCII_NAME.match(text, start)
    end = match.end() if match else start
    while end < len(text):
        character = text[end]
        letter = character.isalpha() or character == "_"
        inside = end > start and (character in _ASCII_DIGITS or unicodedata.category(character)[0] == "M")
        if not (letter or inside):
            break
        end += 1
    return end


def names_in(text: str) -> tuple[str, ...]:
    """Names of symbols in a text in order of first appearance, reserved words left out; never raises.

    Only the first MAX_CHARACTERS characters are looked at; a longer text is no number anyway.

    >>> names_in("1/2*b + sqrt(2)*a - b^2")
    ('b', 'a')
    """
    text = text[:MAX_CHARACTERS]
    found: dict[str, None] = {}
    place = 0
    while place < len(text):
        number = _NUMBER.match(text, place)
        if number:  # so that 1e5, which is refused later, does not introduce a symbol e5
            place = number.end()
            continue
        end = end_of_name(text, place)
        name = normalised(text[place:end])
        if end > place and check_symbol(name) is None:
            found[name] = None
        place = max(end, place + 1)
    return tuple(found)
