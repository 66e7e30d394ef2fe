"""Structural edits of a draft: add, remove, copy, move.

All are pure functions from draft to draft.  They raise NotFound when the entry is not (or no longer) on the desk, and
Refused at the limits of a problem.  New entries are as generic as possible: new symbols, a position of their own.

The index of the base pole follows its pole wherever that moves.
"""

from collections.abc import Iterable, Iterator
from dataclasses import replace
from itertools import count
from typing import TypeVar

from app.desk.draft import Draft, DraftBlock, DraftEigenvalue, DraftPole, Indices
from app.desk.jordan import parse_jordan, write_jordan
from app.desk.reading import COORDINATE, FORCED, read_draft, symbols_of
from app.errors import NotFound, NumberFault, Refused

T = TypeVar("T")

POLE_LIMIT = 64
RANK_LIMIT = 400
_LETTERS = "abcdfghjklmnopqrsuvwxy"  # without e (reads as a number), i (reserved), t (positions), z (coordinate)


def add_pole(draft: Draft) -> Draft:
    """A new last pole, logarithmic, with a generic class that has one eigenvalue apart from the others."""
    _room_for_pole(draft)
    rank = likely_rank(draft)
    symbols = _new_symbols(draft)
    number = draft.next_id
    sizes = [(1,)] if rank == 1 else [(1,) * (rank - 1), (1,)]
    residue = tuple(
        DraftEigenvalue(f"e{number + 2 + k}", next(symbols), write_jordan(part)) for k, part in enumerate(sizes)
    )
    block = DraftBlock(f"b{number + 1}", "", residue)
    pole = DraftPole(f"p{number}", new_position(draft), (block,))
    return replace(draft, poles=(*draft.poles, pole), next_id=number + 2 + len(residue))


def add_block(draft: Draft, pole_id: str) -> Draft:
    """A new last block of multiplicity 1 at a pole, with an exponent of order 1 in 1/z and generic data."""
    place = _place(draft, pole_id, "p")
    pole = draft.poles[place.pole]
    _room_in(pole)
    symbols = _new_symbols(draft)
    number = draft.next_id
    exponent = f"{next(symbols)}/{COORDINATE}"
    block = DraftBlock(f"b{number}", exponent, (DraftEigenvalue(f"e{number + 1}", next(symbols), "1"),))
    return _with_pole(draft, place.pole, replace(pole, blocks=(*pole.blocks, block)), number + 2)


def add_eigenvalue(draft: Draft, block_id: str) -> Draft:
    """A new last eigenvalue of a block, a new symbol of multiplicity 1."""
    place = _place(draft, block_id, "b")
    pole = draft.poles[place.pole]
    _room_in(pole)
    block = pole.blocks[place.block]
    eigenvalue = DraftEigenvalue(f"e{draft.next_id}", next(_new_symbols(draft)), "1")
    changed = replace(block, residue=(*block.residue, eigenvalue))
    return _with_block(draft, place, changed, draft.next_id + 1)


def remove(draft: Draft, entry_id: str) -> Draft:
    """The draft without an entry; the last eigenvalue takes its block with it, the last block its pole."""
    place = _place(draft, entry_id)
    pole = draft.poles[place.pole]
    if place.eigenvalue >= 0 and len(pole.blocks[place.block].residue) > 1:
        block = pole.blocks[place.block]
        return _with_block(draft, place, replace(block, residue=_without(block.residue, place.eigenvalue)))
    if place.block >= 0 and len(pole.blocks) > 1:
        return _with_pole(draft, place.pole, replace(pole, blocks=_without(pole.blocks, place.block)))
    return _base_followed(draft, replace(draft, poles=_without(draft.poles, place.pole)))


def copy(draft: Draft, entry_id: str) -> Draft:
    """The draft with a copy of an entry right behind it.

    A copied pole gets a position of its own, and a copied "*" becomes a new symbol, because both exist only once.
    """
    place = _place(draft, entry_id)
    pole = draft.poles[place.pole]
    numbers = count(draft.next_id)
    symbols = _new_symbols(draft)
    if place.block < 0:
        _room_for_pole(draft)
        twin = DraftPole(
            f"p{next(numbers)}", new_position(draft), tuple(_block_twin(b, numbers, symbols) for b in pole.blocks)
        )
        poles = _inserted(draft.poles, place.pole + 1, twin)
        return _base_followed(draft, replace(draft, poles=poles, next_id=next(numbers)))
    _room_in(pole)
    block = pole.blocks[place.block]
    if place.eigenvalue < 0:
        blocks = _inserted(pole.blocks, place.block + 1, _block_twin(block, numbers, symbols))
        return _with_pole(draft, place.pole, replace(pole, blocks=blocks), next(numbers))
    eigenvalue = _eigenvalue_twin(block.residue[place.eigenvalue], numbers, symbols)
    residue = _inserted(block.residue, place.eigenvalue + 1, eigenvalue)
    return _with_block(draft, place, replace(block, residue=residue), next(numbers))


def move(draft: Draft, entry_id: str, by: int) -> Draft:
    """The draft with an entry moved by so many places among its siblings, at most to the ends."""
    place = _place(draft, entry_id)
    pole = draft.poles[place.pole]
    if place.block < 0:
        return _base_followed(draft, replace(draft, poles=_moved(draft.poles, place.pole, by)))
    if place.eigenvalue < 0:
        return _with_pole(draft, place.pole, replace(pole, blocks=_moved(pole.blocks, place.block, by)))
    block = pole.blocks[place.block]
    return _with_block(draft, place, replace(block, residue=_moved(block.residue, place.eigenvalue, by)))


def likely_rank(draft: Draft) -> int:
    """The rank if the draft can be read, else that of the first pole whose sizes can be read, else 2."""
    problem = read_draft(draft).problem
    if problem is not None:
        return problem.rank
    for pole in draft.poles:
        try:
            return sum(sum(parse_jordan(e.jordan)) for block in pole.blocks for e in block.residue)
        except NumberFault:
            continue
    return 2


def new_position(draft: Draft) -> str:
    """The first of infinity, 0, 1, t1, t2, … that no pole has."""
    taken = {pole.at.strip() for pole in draft.poles} | set(symbols_of(draft))
    candidates = (name for names in (("infinity", "0", "1"), (f"t{k}" for k in count(1))) for name in names)
    return next(name for name in candidates if name not in taken)


def _new_symbols(draft: Draft) -> Iterator[str]:
    """Names no text of the draft uses, without end: single letters first, then a1, b1, …"""
    taken = set(symbols_of(draft))
    for round_number in count():
        for letter in _LETTERS:
            name = letter if round_number == 0 else f"{letter}{round_number}"
            if name not in taken:
                yield name


def _place(draft: Draft, entry_id: str, letter: str = "") -> Indices:
    place = draft.places.get(entry_id)
    if place is None or (letter and not entry_id.startswith(letter)):
        raise NotFound(f"{entry_id[:20]} is not on the desk any more.")
    return place


def _room_for_pole(draft: Draft) -> None:
    if len(draft.poles) >= POLE_LIMIT:
        raise Refused(f"A problem has at most {POLE_LIMIT} poles.")


def _room_in(pole: DraftPole) -> None:
    if sum(len(block.residue) for block in pole.blocks) >= RANK_LIMIT:
        raise Refused(f"A pole has at most {RANK_LIMIT} eigenvalues.")


def _block_twin(block: DraftBlock, numbers: Iterator[int], symbols: Iterator[str]) -> DraftBlock:
    block_id = f"b{next(numbers)}"
    return DraftBlock(block_id, block.exponent, tuple(_eigenvalue_twin(e, numbers, symbols) for e in block.residue))


def _eigenvalue_twin(eigenvalue: DraftEigenvalue, numbers: Iterator[int], symbols: Iterator[str]) -> DraftEigenvalue:
    value = next(symbols) if eigenvalue.value.strip() == FORCED else eigenvalue.value
    return DraftEigenvalue(f"e{next(numbers)}", value, eigenvalue.jordan)


def _with_pole(draft: Draft, index: int, pole: DraftPole, next_id: int | None = None) -> Draft:
    poles = (*draft.poles[:index], pole, *draft.poles[index + 1 :])
    return replace(draft, poles=poles, next_id=next_id or draft.next_id)


def _with_block(draft: Draft, place: Indices, block: DraftBlock, next_id: int | None = None) -> Draft:
    pole = draft.poles[place.pole]
    blocks = (*pole.blocks[: place.block], block, *pole.blocks[place.block + 1 :])
    return _with_pole(draft, place.pole, replace(pole, blocks=blocks), next_id)


def _base_followed(before: Draft, after: Draft) -> Draft:
    text = before.base.strip()
    if not (text.isascii() and text.isdigit() and int(text[:4]) < len(before.poles)):
        return after
    place = after.places.get(before.poles[int(text[:4])].id)
    return replace(after, base="" if place is None else str(place.pole))


def _without(items: tuple[T, ...], index: int) -> tuple[T, ...]:
    return items[:index] + items[index + 1 :]


def _inserted(items: tuple[T, ...], index: int, item: T) -> tuple[T, ...]:
    return (*items[:index], item, *items[index:])


def _moved(items: Iterable[T], index: int, by: int) -> tuple[T, ...]:
    order = list(items)
    item = order.pop(index)
    order.insert(min(max(index + by, 0), len(order)), item)
    return tuple(order)
