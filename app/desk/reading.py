"""From a draft to its problem, and back.

    read_draft(draft)       the problem if the texts make one, and every fault at its field (cached)
    document_of(draft)      the problem document the texts stand for
    draft_of(problem)       a draft that reads back to the problem
    refreshed(draft)        the draft with its shorthand line rewritten to fit its poles

Symbols are not declared at the desk: they are the names used in the fields, in order of first appearance.  In an
exponent the letter z is the local coordinate.  The document reader of ``local/`` is the only judge of what is
acceptable; here only the texts that a document has no words for are read: Jordan sizes as a sum, an exponent as one
expression, the index of the base pole.
"""

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from functools import lru_cache

from app.desk.draft import READINGS, Draft, DraftBlock, DraftEigenvalue, DraftPole
from app.desk.fields import texts_of
from app.desk.jordan import parse_jordan, write_jordan
from app.errors import NumberFault, Place, PolewrightError, Refused
from app.exact.limits import Budget
from app.exact.number import names_in, parse_laurent, write_laurent, write_number
from app.exact.value import Value
from app.local.document import problem_from_json
from app.local.document_types import FORMAT
from app.local.faults import FAULTY
from app.local.formal_type import Block, Pole
from app.local.limits import MAXIMUM_WORK
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand, to_shorthand

COORDINATE = "z"
FORCED = "*"
_KEPT_READINGS = 64


@dataclass(frozen=True)
class FieldFault:
    """One fault at the desk: the address of a text (of an entry, or "" for the whole), what, what would be right.

    Addresses are those of ``fields``; "pole.ID", "block.ID" and "eigenvalue.ID" mean the entry as a whole.
    """

    field: str
    message: str
    expected: str = ""


@dataclass(frozen=True)
class Reading:
    """What a draft says: its problem, or None if the data of the poles are faulty; and all faults.

    A shorthand line that cannot be read is a fault too, but leaves the problem of the poles in force.
    """

    problem: Problem | None
    faults: tuple[FieldFault, ...]


def read_draft(draft: Draft) -> Reading:
    """Read a draft; never raises on what was typed.

    Cost: that of reading the document, or a look-up for one of the last 64 drafts.
    """
    problem, faults = _read_data(replace(draft, shorthand="", next_id=1))
    shorthand_fault = _read_shorthand(draft.shorthand)[1] if draft.shorthand.strip() else None
    return Reading(problem, faults if shorthand_fault is None else (shorthand_fault, *faults))


@lru_cache(maxsize=_KEPT_READINGS)
def _read_data(draft: Draft) -> tuple[Problem | None, tuple[FieldFault, ...]]:
    document, places = document_of(draft)
    if document is None:
        return None, tuple(_at_field(draft, place) for place in places)
    try:
        return problem_from_json(document), ()
    except PolewrightError as refusal:
        if refusal.places:
            return None, tuple(_at_field(draft, place) for place in refusal.places)
        return None, (FieldFault("", refusal.message),)


def _at_field(draft: Draft, place: Place) -> FieldFault:
    return FieldFault(pointer_to_field(draft, place.at), place.message, place.expected)


@lru_cache(maxsize=4 * _KEPT_READINGS)
def _read_shorthand(text: str) -> tuple[Problem | None, FieldFault | None]:
    try:
        return problem_from_shorthand(text), None
    except PolewrightError as refusal:
        place = refusal.places[0] if refusal.places else Place("/type", refusal.message)
        return None, FieldFault("shorthand", place.message, place.expected)


def read_shorthand(text: str) -> Problem | None:
    """The problem of a shorthand line, or None if it cannot be read."""
    return _read_shorthand(text)[0]


def refreshed(draft: Draft) -> Draft:
    """The draft with its shorthand line rewritten to fit the poles ("" where they have none).

    Left as it is while the line cannot be read (it is somebody's unfinished text) or the poles are faulty.
    """
    if draft.shorthand.strip() and read_shorthand(draft.shorthand) is None:
        return draft
    problem = read_draft(draft).problem
    if problem is None:
        return draft
    line = to_shorthand(problem) or ""
    # A line that was typed in another spelling of the same tuple stays as typed.
    if draft.shorthand.strip() and _same_tuple(draft.shorthand, line):
        return draft
    return draft if line == draft.shorthand else replace(draft, shorthand=line)


def _same_tuple(typed: str, line: str) -> bool:
    problem = read_shorthand(typed)
    return problem is not None and to_shorthand(problem) == line


# --- draft to document


def symbols_of(draft: Draft) -> tuple[str, ...]:
    """The names used in positions, exponents and values, in order of first appearance.  Cost: linear in the texts."""
    return tuple(dict.fromkeys(name for name, _ in _names(draft)))


def _names(draft: Draft) -> Iterator[tuple[str, str]]:
    """Every name with the address of the text it stands in."""
    for address, text in texts_of(draft).items():
        if address.endswith((".at", ".value")):
            for name in names_in(text):
                yield name, address
        elif address.endswith(".exponent"):
            for name in names_in(text):
                if name != COORDINATE:
                    yield name, address


def document_of(draft: Draft) -> tuple[dict[str, object] | None, tuple[Place, ...]]:
    """The problem document of a draft, as parsed JSON; or None and all faults, when a text has no document.

    The places are JSON pointers into the document.  Cost: linear in the texts; reading exponents is bounded as a whole.
    """
    faults: list[Place] = []
    writer = _DocumentWriter(draft, faults)
    document = writer.document()
    if not faults:
        return document, ()
    try:
        problem_from_json(document)  # for the faults of everything else; what is FAULTY is not reported again
    except Refused as refusal:
        faults.extend(refusal.places)
    except ValueError:
        pass  # no other fault, and a document with FAULTY parts cannot be finished
    return None, tuple(faults)


class _DocumentWriter:
    """Writes the document of one draft; what cannot be written is noted and stands as FAULTY."""

    def __init__(self, draft: Draft, faults: list[Place]) -> None:
        self._draft = draft
        self._faults = faults
        self._symbols = symbols_of(draft)
        self._exponent_symbols = frozenset(self._symbols) - {COORDINATE}
        self._key = draft.reading if draft.reading in READINGS else READINGS[0]
        self._budget = Budget(MAXIMUM_WORK)

    def document(self) -> dict[str, object]:
        draft = self._draft
        document: dict[str, object] = {"format": FORMAT, "name": draft.name, "symbols": list(self._symbols)}
        document["poles"] = [self._pole(pole, f"/poles/{i}") for i, pole in enumerate(draft.poles)]
        if draft.reading not in READINGS:
            self._faults.append(Place("/reading", "This is no reading of a class", " or ".join(READINGS)))
        if draft.base.strip():
            document["base"] = self._attempt(_index, draft.base, "/base")
        if draft.notes:
            document["notes"] = draft.notes
        return document

    def _pole(self, pole: DraftPole, at: str) -> dict[str, object]:
        blocks = [self._block(block, f"{at}/blocks/{j}") for j, block in enumerate(pole.blocks)]
        return {"at": pole.at.strip(), "blocks": blocks}

    def _block(self, block: DraftBlock, at: str) -> dict[str, object]:
        exponent = self._attempt(self._exponent, block.exponent, f"{at}/exponent")
        residue = [
            {
                "value": eigenvalue.value.strip(),
                "jordan": self._attempt(_sizes, eigenvalue.jordan, f"{at}/{self._key}/{k}/jordan"),
            }
            for k, eigenvalue in enumerate(block.residue)
        ]
        return {"exponent": exponent, self._key: residue}

    def _exponent(self, text: str) -> dict[str, str]:
        if not text.strip():
            return {}
        terms = parse_laurent(text, self._exponent_symbols, COORDINATE, self._budget)
        return {str(power): write_number(value, self._symbols) for power, value in terms.items()}

    def _attempt(self, read: Callable[[str], object], text: str, at: str) -> object:
        try:
            return read(text)
        except NumberFault as fault:
            message = f"{fault.message}, at character {fault.position + 1}" if text.strip() else fault.message
            self._faults.append(Place(at, message, fault.expected))
            return FAULTY


def _sizes(text: str) -> list[int]:
    return list(parse_jordan(text))


def _index(text: str) -> int:
    stripped = text.strip()
    if not (stripped.isascii() and stripped.isdigit() and len(stripped) < 4):
        raise NumberFault("This is no index of a pole", 0, "the index of a pole, counted from 0, or nothing")
    return int(stripped)


# --- places


def pointer_to_field(draft: Draft, pointer: str) -> str:
    """The address at the desk of a place in its document.

    A place inside an exponent or a list of sizes is that text; a symbol is the text where it first appears; what has
    no field of its own is "" (the whole).  Never raises.
    """
    parts = pointer.split("/")[1:]
    if len(parts) == 1 and parts[0] in ("name", "notes", "base", "reading"):
        return parts[0]
    if parts == ["type"]:
        return "shorthand"
    try:
        if len(parts) == 2 and parts[0] == "symbols":
            return _field_of_symbol(draft, int(parts[1]))
        if len(parts) >= 2 and parts[0] == "poles":
            return _field_of_pole(draft.poles[int(parts[1])], parts[2:])
    except (ValueError, IndexError):
        return ""
    return ""


def _field_of_symbol(draft: Draft, index: int) -> str:
    name = symbols_of(draft)[index]
    return next(address for other, address in _names(draft) if other == name)


def _field_of_pole(pole: DraftPole, parts: list[str]) -> str:
    if parts[:1] == ["at"]:
        return f"pole.{pole.id}.at"
    if len(parts) < 2 or parts[0] != "blocks":
        return f"pole.{pole.id}"
    return _field_of_block(pole.blocks[int(parts[1])], parts[2:])


def _field_of_block(block: DraftBlock, parts: list[str]) -> str:
    if parts[:1] == ["exponent"]:
        return f"block.{block.id}.exponent"
    if len(parts) < 2 or parts[0] not in READINGS:
        return f"block.{block.id}"
    eigenvalue = block.residue[int(parts[1])]
    leaf = parts[2] if len(parts) > 2 and parts[2] in ("value", "jordan") else ""
    return f"eigenvalue.{eigenvalue.id}.{leaf}".rstrip(".")


# --- problem to draft


class _Ids:
    """Gives ids in order of the page."""

    def __init__(self, first: int) -> None:
        self.next = first

    def new(self, letter: str) -> str:
        self.next += 1
        return f"{letter}{self.next - 1}"


def draft_of(problem: Problem, first_id: int = 1) -> Draft:
    """A draft that reads back to the same problem, with new ids counted from ``first_id``.

    A symbol that bears the name of the coordinate is renamed if an exponent contains it.  Cost: linear, plus writing
    every number once.
    """
    ids = _Ids(first_id)
    rename = _renaming(problem)
    symbols = tuple(rename.get(name, name) for name in problem.symbols)

    def renamed(value: Value) -> Value:
        return value.substitute({old: Value.symbol(new) for old, new in rename.items()}) if rename else value

    def block_draft(block: Block, star: int | None) -> DraftBlock:
        block_id = ids.new("b")
        residue = tuple(
            DraftEigenvalue(
                ids.new("e"), FORCED if k == star else write_number(renamed(e.value), symbols), write_jordan(e.jordan)
            )
            for k, e in enumerate(block.residue)
        )
        terms = {power: renamed(coefficient) for power, coefficient in block.exponent.terms}
        return DraftBlock(block_id, write_laurent(terms, symbols, COORDINATE) if terms else "", residue)

    def pole_draft(index: int, pole: Pole) -> DraftPole:
        pole_id = ids.new("p")
        at = "infinity" if pole.at.value is None else write_number(renamed(pole.at.value), symbols)
        forced = problem.forced
        stars = {} if forced is None or forced.pole != index else {forced.block: forced.eigenvalue}
        return DraftPole(pole_id, at, tuple(block_draft(block, stars.get(j)) for j, block in enumerate(pole.blocks)))

    poles = tuple(pole_draft(i, pole) for i, pole in enumerate(problem.poles))
    base = "" if problem.base is None else str(problem.base)
    line = to_shorthand(problem) or ""
    return Draft(problem.name, problem.notes, base, problem.reading, line, poles, ids.next)


def _renaming(problem: Problem) -> dict[str, str]:
    used = COORDINATE in problem.symbols and any(
        COORDINATE in value.symbols()
        for pole in problem.poles
        for block in pole.blocks
        for _, value in block.exponent.terms
    )
    if not used:
        return {}
    return {COORDINATE: next(f"{COORDINATE}{k}" for k in range(1, 3000) if f"{COORDINATE}{k}" not in problem.symbols)}
