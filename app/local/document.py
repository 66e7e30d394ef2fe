"""The problem document: JSON text or parsed JSON → a valid ``Problem``, or all its faults together.

This is the only door for data from outside.  This module checks the top level; ``poles`` the poles and whatever
concerns several of them; ``blocks`` and ``numbers`` the parts; ``json_reader`` the text itself.
"""

from collections.abc import Mapping

from app.exact.names import check_symbol, normalised
from app.local.blocks import check_keys
from app.local.document_types import FORMAT
from app.local.faults import FAULTY, Faults, has_lone_surrogate, quoted
from app.local.json_reader import parse_json, read_json
from app.local.limits import MAXIMUM_NOTES, MAXIMUM_SYMBOLS
from app.local.numbers import Numbers
from app.local.poles import PolesReader
from app.local.problem import Problem, Reading

__all__ = ["parse_json", "problem_from_json", "read_document", "read_json"]

_REQUIRED = ("format", "name", "symbols", "poles")
_KEYS = (*_REQUIRED, "base", "notes")


def read_document(text: str | bytes) -> Problem:
    """The problem that a JSON document describes.

    Raises:
        TooLarge: the text is longer than 2 MB.
        Malformed: not UTF-8 or not JSON.
        Refused: anything else, every fault with its JSON pointer, all together.

    Cost: linear in the length of the text, apart from expanding its numbers (which is bounded).
    """
    data, faults = read_json(text)
    return _Reader(faults).problem(data)


def problem_from_json(data: object, faults: Faults | None = None) -> Problem:
    """The same from parsed JSON; raises Refused.

    Duplicate keys can only be found in the text: with ``data, faults = read_json(text)`` the faults found there are
    reported together with those found here.
    """
    return _Reader(faults if faults is not None else Faults()).problem(data)


class _Reader:
    """Reads one document."""

    def __init__(self, faults: Faults) -> None:
        self._faults = faults

    def problem(self, data: object) -> Problem:
        """The problem, or Refused with all faults."""
        if not isinstance(data, dict):
            self._faults.wrong_type("", data, f"an object with the keys {', '.join(_REQUIRED)}")
            raise self._faults.refusal()
        check_keys(data, _KEYS, "", self._faults)
        for key in _REQUIRED:
            if key not in data:
                self._faults.add("", f"The key {key} is missing", f"the keys {', '.join(_REQUIRED)}")
        written = data.get("format", FORMAT)
        if not isinstance(written, str):
            self._faults.wrong_type("/format", written, f'"{FORMAT}"')
        elif written != FORMAT:
            self._faults.add("/format", f"The format {quoted(written)} is unknown", f'"{FORMAT}"')
        name = self._text(data, "name")
        notes = self._text(data, "notes")
        if len(notes) > MAXIMUM_NOTES:
            message = f"The notes have {len(notes)} characters, over the limit of {MAXIMUM_NOTES}"
            self._faults.add("/notes", message, f"at most {MAXIMUM_NOTES} characters")
        symbols = self._symbols(data.get("symbols", []))
        base = self._base(data)
        reading = _reading(data.get("poles"))
        read = PolesReader(Numbers(symbols, self._faults), reading, self._faults)
        read.all(data.get("poles", FAULTY))
        self._faults.raise_if_any()
        poles, forced = read.finished()
        return Problem(poles, symbols, name, base, notes, reading, forced)

    def _text(self, data: Mapping[str, object], key: str) -> str:
        text = data.get(key, "")
        if not isinstance(text, str):
            self._faults.wrong_type(f"/{key}", text, "a text")
            return ""
        if has_lone_surrogate(text):
            self._faults.add(f"/{key}", "The text holds a lone surrogate", "a text of whole characters")
        return text

    def _symbols(self, data: object) -> tuple[str, ...]:
        if not isinstance(data, list):
            self._faults.wrong_type("/symbols", data, 'a list of names, such as ["a", "b"]; [] for none')
            return ()
        if len(data) > MAXIMUM_SYMBOLS:
            message = f"{len(data)} symbols are listed, over the limit of {MAXIMUM_SYMBOLS}"
            self._faults.add("/symbols", message, f"at most {MAXIMUM_SYMBOLS} symbols")
        seen: dict[str, int] = {}
        for number, name in enumerate(data):
            at = f"/symbols/{number}"
            if not isinstance(name, str):
                self._faults.wrong_type(at, name, "a name")
                continue
            name = normalised(name)
            fault = check_symbol(name)
            if fault is not None:
                self._faults.add(at, fault, "a letter, then letters, digits or _")
            elif name in seen:
                message = f"The symbol {quoted(name)} is listed twice, first at /symbols/{seen[name]}"
                self._faults.add(at, message, "each symbol once")
            else:
                seen[name] = number
        return tuple(seen)

    def _base(self, data: Mapping[str, object]) -> int | None:
        if "base" not in data:
            return None
        base, poles = data["base"], data.get("poles")
        if type(base) is not int:
            self._faults.wrong_type("/base", base, "the index of a pole, counted from 0")
        elif isinstance(poles, list) and not 0 <= base < len(poles):
            self._faults.add("/base", "There is no pole with this index", f"an index from 0 to {len(poles) - 1}")
        else:
            return base
        return None


def _reading(poles: object) -> Reading:
    """The reading of the first block that says which: residues, or local monodromies."""
    for pole in poles if isinstance(poles, list) else []:
        blocks = pole.get("blocks") if isinstance(pole, dict) else None
        for block in blocks if isinstance(blocks, list) else []:
            if isinstance(block, dict) and ("residue" in block) != ("local_monodromy" in block):
                return "residue" if "residue" in block else "local_monodromy"
    return "residue"
