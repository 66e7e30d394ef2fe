"""Strict JSON text → data: every fault that a lenient reader would hide is found here, with its place.

The standard library does the scanning; hooks mark what it would let pass (duplicate keys, NaN, integers of
thousands of digits), and only a marked text is walked a second time to find the JSON pointers.
"""

import json
from json import JSONDecodeError

from app.errors import Malformed, Refused, TooLarge
from app.local.faults import FAULTY, Faults, child, has_lone_surrogate, quoted
from app.local.limits import MAXIMUM_BYTES, MAXIMUM_DIGITS


class WrittenFloat(float):
    """A JSON number with a point or an exponent; ``literal`` is how it was written."""

    literal: str

    def __new__(cls, literal: str) -> "WrittenFloat":
        """A literal too long to be worth converting becomes NaN; no float of a document is ever used."""
        number = super().__new__(cls, literal if len(literal) <= MAXIMUM_DIGITS else "nan")
        number.literal = literal
        return number


class _Repeated(dict[str, object]):
    """An object in which some key stood twice; the last value of each key is kept."""

    keys_twice: tuple[str, ...] = ()


class _Constant:
    """NaN or an infinity, which JSON does not have."""

    def __init__(self, literal: str) -> None:
        self.literal = literal


class _LongInteger:
    """An integer of more digits than the limit, not converted."""


class _Hooks:
    """What the scanner calls; ``marked`` says whether a second walk is needed."""

    def __init__(self) -> None:
        self.marked = False

    def pairs(self, pairs: list[tuple[str, object]]) -> dict[str, object]:
        found = dict(pairs)
        if len(found) == len(pairs):
            return found
        self.marked = True
        repeated = _Repeated(found)
        seen: set[str] = set()
        twice: dict[str, None] = {}
        for key, _ in pairs:
            if key in seen:
                twice[key] = None
            seen.add(key)
        repeated.keys_twice = tuple(twice)
        return repeated

    def constant(self, literal: str) -> object:
        self.marked = True
        return _Constant(literal)

    def integer(self, literal: str) -> object:
        if len(literal) <= MAXIMUM_DIGITS:
            return int(literal)
        if len(literal.lstrip("-")) <= MAXIMUM_DIGITS:
            return int(literal)
        self.marked = True
        return _LongInteger()


def parse_json(text: str | bytes) -> object:
    """Read JSON strictly.

    Objects become dictionaries, arrays lists, integers ``int``, other numbers ``WrittenFloat`` (a ``float`` that
    remembers its literal).

    Raises:
        TooLarge: more than ``MAXIMUM_BYTES`` bytes.
        Malformed: not UTF-8, or not JSON (with line and column).
        Refused: duplicate keys, NaN and infinities, lone surrogates, integers of more than ``MAXIMUM_DIGITS``
            digits, nesting too deep; all faults together, each with its JSON pointer.

    Cost: linear in the length of the text.
    """
    data, faults = read_json(text)
    faults.raise_if_any()
    return data


def read_json(text: str | bytes) -> tuple[object, Faults]:
    """Read JSON strictly, but return the faults with the data; faulty values are replaced by ``FAULTY``.

    Raises Malformed and TooLarge as ``parse_json`` does.
    """
    decoded = _decoded(text)
    hooks = _Hooks()
    faults = Faults()
    try:
        data: object = json.loads(
            decoded,
            object_pairs_hook=hooks.pairs,
            parse_constant=hooks.constant,
            parse_int=hooks.integer,
            parse_float=WrittenFloat,
        )
    except JSONDecodeError as error:
        reason = error.msg[:1].lower() + error.msg[1:]
        raise Malformed(f"The text is not JSON at line {error.lineno}, column {error.colno}: {reason}.") from None
    except RecursionError:
        faults.add("", "Lists and objects are nested too deeply", "at most a few levels, as a document needs")
        raise Refused(faults.refusal().message, faults.refusal().places) from None
    if hooks.marked or "\\u" in decoded or has_lone_surrogate(decoded):
        data = _walk(data, faults)
    return data, faults


def _decoded(text: str | bytes) -> str:
    """The text without byte order mark, after the check of its size."""
    size = len(text)
    if isinstance(text, str) and size <= MAXIMUM_BYTES < 4 * size:
        size = len(text.encode("utf-8", "surrogatepass"))
    if size > MAXIMUM_BYTES:
        raise TooLarge(f"The text is longer than {MAXIMUM_BYTES} bytes.")
    if isinstance(text, bytes):
        try:
            text = text.decode("utf-8")
        except UnicodeDecodeError as error:
            raise Malformed(f"The text is not UTF-8: byte {error.start + 1} cannot be read.") from None
    return text.removeprefix("\ufeff")


def _walk(data: object, faults: Faults) -> object:
    """Report everything marked, in document order, and put ``FAULTY`` in its place; no recursion."""
    root: list[object] = [data]
    waiting: list[tuple[list[object] | dict[str, object], str | int, str]] = [(root, 0, "")]
    while waiting:
        parent, key, pointer = waiting.pop()
        value = parent[key]  # type: ignore[index]
        if _is_faulty(value, pointer, faults):
            parent[key] = FAULTY  # type: ignore[index]
        elif isinstance(value, dict):
            _check_keys(value, pointer, faults)
            waiting.extend((value, name, child(pointer, name)) for name in reversed(value))
        elif isinstance(value, list):
            waiting.extend((value, index, f"{pointer}/{index}") for index in reversed(range(len(value))))
    return root[0]


def _is_faulty(value: object, pointer: str, faults: Faults) -> bool:
    if isinstance(value, str):
        if has_lone_surrogate(value):
            faults.add(pointer, "The text holds a lone surrogate, which is no character", "a text of whole characters")
            return True
    elif isinstance(value, _Constant):
        faults.add(pointer, f"{value.literal} is no number of JSON", "an exact number, written as a string")
        return True
    elif isinstance(value, _LongInteger):
        faults.add(
            pointer,
            f"The integer has more than {MAXIMUM_DIGITS} digits",
            f"an integer of at most {MAXIMUM_DIGITS} digits",
        )
        return True
    return False


def _check_keys(value: dict[str, object], pointer: str, faults: Faults) -> None:
    if isinstance(value, _Repeated):
        for key in value.keys_twice:
            faults.add(child(pointer, key), f"The key {quoted(key)} stands more than once", "each key once")
    broken = [key for key in value if has_lone_surrogate(key)]
    for key in broken:
        faults.add(pointer, f"The key {quoted(key)} holds a lone surrogate", "keys of whole characters")
        del value[key]
