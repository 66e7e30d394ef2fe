"""Drafts: what stands on the desk, as it was typed.

A draft is the whole input of a problem as raw texts.  Nothing in it need parse; ``reading`` says what it means.
Every pole, block and eigenvalue has an id that is permanent at its desk: a letter (p, b or e) and a number that
is never given twice.  All values are frozen, so a draft may be a key of a cache and a step of a history.

    Draft → DraftPole → DraftBlock → DraftEigenvalue
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, fields
from functools import cached_property

READINGS = ("residue", "local_monodromy")


@dataclass(frozen=True)
class DraftEigenvalue:
    """One eigenvalue: the text of its value ("*" for the forced one) and of its Jordan block sizes ("2+1")."""

    id: str
    value: str
    jordan: str


@dataclass(frozen=True)
class DraftBlock:
    """One block: its exponent as a polynomial in 1/z, and its eigenvalues."""

    id: str
    exponent: str
    residue: tuple[DraftEigenvalue, ...]


@dataclass(frozen=True)
class DraftPole:
    """One pole: its position and its blocks."""

    id: str
    at: str
    blocks: tuple[DraftBlock, ...]


@dataclass(frozen=True)
class Draft:
    """The whole input.  ``next_id`` is the number the next new entry will bear."""

    name: str = ""
    notes: str = ""
    base: str = ""
    reading: str = READINGS[0]
    shorthand: str = ""
    poles: tuple[DraftPole, ...] = ()
    next_id: int = 1

    def to_json(self) -> dict[str, object]:
        """The draft as plain JSON data; ``from_json`` reads it back to an equal draft.  Cost: linear."""
        return {
            "name": self.name,
            "notes": self.notes,
            "base": self.base,
            "reading": self.reading,
            "shorthand": self.shorthand,
            "poles": [_pole_to_json(pole) for pole in self.poles],
            "next_id": self.next_id,
        }

    @staticmethod
    def from_json(data: object) -> "Draft":
        """The draft that ``to_json`` wrote.

        Raises ValueError when the data have another shape.  Cost: linear.
        """
        entries = _mapping(data)
        poles = tuple(_pole_from_json(pole) for pole in _sequence(entries, "poles"))
        next_id = entries.get("next_id")
        if not isinstance(next_id, int) or isinstance(next_id, bool) or next_id < 1:
            raise ValueError("a draft has a positive integer next_id")
        texts = {name: _text(entries, name) for name in ("name", "notes", "base", "reading", "shorthand")}
        return Draft(poles=poles, next_id=next_id, **texts)

    @cached_property
    def places(self) -> Mapping[str, "Indices"]:
        """Where each entry stands, by id.  Built once, linear."""
        return dict(_places(self))


@dataclass(frozen=True)
class Indices:
    """Indices of an entry in its draft; ``block`` and ``eigenvalue`` are −1 where the entry lies higher up."""

    pole: int
    block: int = -1
    eigenvalue: int = -1


def _places(draft: Draft) -> Iterator[tuple[str, Indices]]:
    for i, pole in enumerate(draft.poles):
        yield pole.id, Indices(i)
        for j, block in enumerate(pole.blocks):
            yield block.id, Indices(i, j)
            for k, eigenvalue in enumerate(block.residue):
                yield eigenvalue.id, Indices(i, j, k)


def same_content(first: Draft, second: Draft) -> bool:
    """Whether two drafts say the same with the same ids; only the number for the next entry may differ."""
    return all(getattr(first, f.name) == getattr(second, f.name) for f in fields(Draft) if f.name != "next_id")


def _pole_to_json(pole: DraftPole) -> dict[str, object]:
    return {"id": pole.id, "at": pole.at, "blocks": [_block_to_json(block) for block in pole.blocks]}


def _block_to_json(block: DraftBlock) -> dict[str, object]:
    residue = [{"id": e.id, "value": e.value, "jordan": e.jordan} for e in block.residue]
    return {"id": block.id, "exponent": block.exponent, "residue": residue}


def _pole_from_json(data: object) -> DraftPole:
    entries = _mapping(data)
    blocks = tuple(_block_from_json(block) for block in _sequence(entries, "blocks"))
    return DraftPole(_text(entries, "id"), _text(entries, "at"), blocks)


def _block_from_json(data: object) -> DraftBlock:
    entries = _mapping(data)
    residue = tuple(_eigenvalue_from_json(eigenvalue) for eigenvalue in _sequence(entries, "residue"))
    return DraftBlock(_text(entries, "id"), _text(entries, "exponent"), residue)


def _eigenvalue_from_json(data: object) -> DraftEigenvalue:
    entries = _mapping(data)
    return DraftEigenvalue(_text(entries, "id"), _text(entries, "value"), _text(entries, "jordan"))


def _mapping(data: object) -> Mapping[str, object]:
    if not isinstance(data, dict):
        raise ValueError("an entry of a draft is an object")
    return data


def _sequence(entries: Mapping[str, object], key: str) -> Sequence[object]:
    value = entries.get(key)
    if not isinstance(value, list):
        raise ValueError(f"{key} of a draft is a list")
    return value


def _text(entries: Mapping[str, object], key: str) -> str:
    value = entries.get(key)
    if not isinstance(value, str):
        raise ValueError(f"{key} of a draft is a text")
    return value
