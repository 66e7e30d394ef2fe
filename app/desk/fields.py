"""The texts of a draft by address.

Addresses: "name", "notes", "base", "reading", "shorthand", "pole.ID.at", "block.ID.exponent",
"eigenvalue.ID.value", "eigenvalue.ID.jordan".  They stay valid as long as the entry exists, wherever it moves.

    texts_of(draft)                    every text by address
    with_texts(draft, changes)         the draft with some texts changed
    changed_texts(draft, typed)        which of the typed texts differ from the draft's
    structure_of / from_structure      order and membership of the entries as one line of text
"""

import re
from collections.abc import Mapping
from dataclasses import replace

from app.desk.draft import Draft, DraftBlock, DraftEigenvalue, DraftPole

PLAIN = ("name", "notes", "base", "reading", "shorthand")
_NUMBER = r"[1-9][0-9]{0,8}"
_BLOCK = rf"b{_NUMBER}(?:\.e{_NUMBER})+"
_POLE = rf"p{_NUMBER}:{_BLOCK}(?:,{_BLOCK})*"
_LINE = re.compile(rf"(?:{_POLE}(?:;{_POLE})*)?")
_ID = re.compile(r"[pbe][0-9]+")


def texts_of(draft: Draft) -> dict[str, str]:
    """Every text of the draft by its address, in the order of the page.  Cost: linear."""
    texts = {name: str(getattr(draft, name)) for name in PLAIN}
    for pole in draft.poles:
        texts[f"pole.{pole.id}.at"] = pole.at
        for block in pole.blocks:
            texts[f"block.{block.id}.exponent"] = block.exponent
            for eigenvalue in block.residue:
                texts[f"eigenvalue.{eigenvalue.id}.value"] = eigenvalue.value
                texts[f"eigenvalue.{eigenvalue.id}.jordan"] = eigenvalue.jordan
    return texts


def changed_texts(draft: Draft, typed: Mapping[str, str]) -> dict[str, str]:
    """Those of the typed texts that differ from the draft's.

    Addresses the draft does not have are left out.  Cost: linear in the draft.
    """
    return {address: typed[address] for address, text in texts_of(draft).items() if typed.get(address, text) != text}


def with_texts(draft: Draft, changes: Mapping[str, str]) -> Draft:
    """The draft with the texts at the given addresses; other addresses and unknown ones stay as they are.

    Cost: linear in the draft; poles without a change are shared with the old draft.
    """
    if not changes:
        return draft
    poles = tuple(_pole_with(pole, changes) for pole in draft.poles)
    return _with_plain(replace(draft, poles=poles), changes)


def _with_plain(draft: Draft, texts: Mapping[str, str]) -> Draft:
    return replace(
        draft,
        name=texts.get("name", draft.name),
        notes=texts.get("notes", draft.notes),
        base=texts.get("base", draft.base),
        reading=texts.get("reading", draft.reading),
        shorthand=texts.get("shorthand", draft.shorthand),
    )


def _pole_with(pole: DraftPole, changes: Mapping[str, str]) -> DraftPole:
    at = changes.get(f"pole.{pole.id}.at", pole.at)
    blocks = tuple(_block_with(block, changes) for block in pole.blocks)
    if at == pole.at and all(new is old for new, old in zip(blocks, pole.blocks, strict=True)):
        return pole
    return DraftPole(pole.id, at, blocks)


def _block_with(block: DraftBlock, changes: Mapping[str, str]) -> DraftBlock:
    exponent = changes.get(f"block.{block.id}.exponent", block.exponent)
    residue = tuple(_eigenvalue_with(eigenvalue, changes) for eigenvalue in block.residue)
    if exponent == block.exponent and all(new is old for new, old in zip(residue, block.residue, strict=True)):
        return block
    return DraftBlock(block.id, exponent, residue)


def _eigenvalue_with(eigenvalue: DraftEigenvalue, changes: Mapping[str, str]) -> DraftEigenvalue:
    value = changes.get(f"eigenvalue.{eigenvalue.id}.value", eigenvalue.value)
    jordan = changes.get(f"eigenvalue.{eigenvalue.id}.jordan", eigenvalue.jordan)
    if value == eigenvalue.value and jordan == eigenvalue.jordan:
        return eigenvalue
    return DraftEigenvalue(eigenvalue.id, value, jordan)


def structure_of(draft: Draft) -> str:
    """Order and membership of all entries in one line: ``p1:b2.e3.e4,b5.e6;p7:b8.e9``."""
    return ";".join(
        f"{pole.id}:" + ",".join(".".join((block.id, *(e.id for e in block.residue))) for block in pole.blocks)
        for pole in draft.poles
    )


def from_structure(structure: str, typed: Mapping[str, str], next_id: int) -> Draft | None:
    """The draft that a form alone describes: entries by its structure line, texts from its fields ("" if absent).

    None when the line is no structure or gives an id twice.  ``next_id`` of the result exceeds every id in it.
    Cost: linear.
    """
    if not _LINE.fullmatch(structure):
        return None
    ids = _ID.findall(structure)
    if len(set(ids)) != len(ids):
        return None
    poles = tuple(_pole_from(part, typed) for part in structure.split(";") if part)
    return _with_plain(Draft(poles=poles, next_id=max((next_id, *(int(i[1:]) + 1 for i in ids)))), typed)


def _pole_from(part: str, typed: Mapping[str, str]) -> DraftPole:
    pole_id, _, blocks = part.partition(":")
    return DraftPole(
        pole_id, typed.get(f"pole.{pole_id}.at", ""), tuple(_block_from(block, typed) for block in blocks.split(","))
    )


def _block_from(part: str, typed: Mapping[str, str]) -> DraftBlock:
    block_id, *ids = part.split(".")
    residue = tuple(
        DraftEigenvalue(i, typed.get(f"eigenvalue.{i}.value", ""), typed.get(f"eigenvalue.{i}.jordan", "")) for i in ids
    )
    return DraftBlock(block_id, typed.get(f"block.{block_id}.exponent", ""), residue)
