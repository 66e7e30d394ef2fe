"""What a step changed, in a few words for the history."""

from collections.abc import Mapping

from app.desk.draft import Draft
from app.desk.fields import texts_of

_LONGEST = 40
_NAMES = {
    "name": "name",
    "base": "base pole",
    "reading": "reading of the classes",
    "shorthand": "shorthand",
}


def words_for_texts(before: Draft, changes: Mapping[str, str]) -> str:
    """The change of one text, or how many changed."""
    if len(changes) != 1:
        return f"{len(changes)} texts changed"
    ((address, new),) = changes.items()
    if address == "notes":
        return "notes changed"
    return f"{_subject(before, address)}: {shortened(texts_of(before).get(address, ''))} → {shortened(new)}"


def name_of_entry(draft: Draft, entry_id: str) -> str:
    """An entry in words: "pole at 0", "block 1/z at 0", "eigenvalue a at 0"; the id when it is not there."""
    place = draft.places.get(entry_id)
    if place is None:
        return entry_id[:20]
    pole = draft.poles[place.pole]
    where = f"at {shortened(pole.at)}"
    if place.block < 0:
        return f"pole {where}"
    block = pole.blocks[place.block]
    if place.eigenvalue < 0:
        return f"block {shortened(block.exponent or '0')} {where}"
    return f"eigenvalue {shortened(block.residue[place.eigenvalue].value)} {where}"


def shortened(text: str) -> str:
    """The text on one line, at most 40 characters; a word for none."""
    line = " ".join(text.split())
    if not line:
        return "nothing"
    return line if len(line) <= _LONGEST else line[: _LONGEST - 1] + "…"


def _subject(draft: Draft, address: str) -> str:
    if address in _NAMES:
        return _NAMES[address]
    _, entry_id, text = address.split(".")
    place = draft.places.get(entry_id)
    where = "" if place is None else f" at {shortened(draft.poles[place.pole].at)}"
    if text == "at":
        return "position"
    if text == "exponent":
        return f"exponent{where}"
    if text == "value":
        return f"eigenvalue{where}"
    return f"block sizes of {name_of_entry(draft, entry_id)}"
