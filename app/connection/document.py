"""The JSON document of a connection, read and written.

    {"format": "polewright-connection/1", "kind": "exact" | "numerical", "rank": n, "symbols": […], "accessory": […],
     "poles": [{"at": …, "coefficients": [matrix of z^(−1) dz, of z^(−2) dz, …]}],
     "verification": [{"check": …, "holds": true | false, "figure": …}]}

Optional: ``program`` (who wrote it), ``method`` (how it was found), ``values`` (what was put for symbols of the
problem), and at a pole ``gauge``, the coefficients of z^0, z^1, … of a normalising gauge.  Entries are strings:
quotients of polynomials, or ``re+im*i`` with floating decimals.  Reading notes every fault with its place and raises
them all together; a record that is read is not believed by anybody, ``verification.verify`` makes a new one.
"""

import json
import re
from collections.abc import Mapping, Sequence
from typing import Literal, NotRequired

from typing_extensions import TypedDict

from app import PROGRAM
from app.connection.connection import Check, Connection, ConnectionPole, Entry, Kind, Rows
from app.errors import NumberFault
from app.exact.limits import Budget
from app.exact.names import check_symbol, normalised
from app.exact.number import parse_number, write_number
from app.exact.quotient import Quotient
from app.exact.quotient_text import parse_quotient, write_quotient
from app.exact.value import Value
from app.local.blocks import check_keys, nonempty_list
from app.local.faults import Faults, child, quoted
from app.local.formal_type import Position
from app.local.json_reader import read_json
from app.local.limits import MAXIMUM_POLES, MAXIMUM_POWER, MAXIMUM_SYMBOLS, MAXIMUM_WORK

FORMAT: Literal["polewright-connection/1"] = "polewright-connection/1"
MAXIMUM_CONNECTION_RANK = 64
_REQUIRED = ("format", "kind", "rank", "symbols", "poles")
_KEYS = (*_REQUIRED, "program", "method", "accessory", "values", "verification")
_FLOAT = r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,4})?"
_COMPLEX = re.compile(rf"(?P<re>{_FLOAT})?(?:(?P<im>{_FLOAT})\*i)?")
_TOLERANCE = 1e-6


class CheckDocument(TypedDict):
    """One line of a verification record."""

    check: str
    holds: bool
    figure: str


class ConnectionPoleDocument(TypedDict):
    """A pole: its position and its coefficients, entry k the matrix of z^(−k−1) dz."""

    at: str
    coefficients: list[list[list[str]]]
    gauge: NotRequired[list[list[list[str]]]]


class ConnectionDocument(TypedDict):
    """A connection; ``values`` are what was put for symbols of the problem."""

    format: Literal["polewright-connection/1"]
    program: NotRequired[str]
    method: NotRequired[str]
    kind: Literal["exact", "numerical"]
    rank: int
    symbols: list[str]
    accessory: NotRequired[list[str]]
    values: NotRequired[dict[str, str]]
    poles: list[ConnectionPoleDocument]
    verification: NotRequired[list[CheckDocument]]


def connection_document(connection: Connection) -> ConnectionDocument:
    """The connection as a document of plain data, keys and numbers in canonical form."""
    symbols = connection.symbols
    written: ConnectionDocument = {
        "format": FORMAT,
        "program": PROGRAM,
        "kind": connection.kind,
        "rank": connection.rank,
        "symbols": list(symbols),
        "accessory": list(connection.accessory),
        "poles": [],
        "verification": [{"check": c.check, "holds": c.holds, "figure": c.figure} for c in connection.verification],
    }
    if connection.method:
        written["method"] = connection.method
    if connection.values:
        written["values"] = {name: write_number(value) for name, value in connection.values}
    for pole in connection.poles:
        entry: ConnectionPoleDocument = {
            "at": "infinity" if pole.at.value is None else write_number(pole.at.value, symbols),
            "coefficients": _written(pole.coefficients, symbols),
        }
        if pole.gauge:
            entry["gauge"] = _written(pole.gauge, symbols)
        written["poles"].append(entry)
    return written


def connection_text(connection: Connection) -> str:
    """The document as one line of JSON with a final newline."""
    return json.dumps(connection_document(connection), ensure_ascii=False) + "\n"


def _written(matrices: Sequence[Rows], symbols: Sequence[str]) -> list[list[list[str]]]:
    return [[[write_entry(entry, symbols) for entry in row] for row in matrix] for matrix in matrices]


def write_entry(entry: Entry, symbols: Sequence[str] = ()) -> str:
    """An entry in the grammar of its kind."""
    if isinstance(entry, Quotient):
        return write_quotient(entry, symbols)
    real, imaginary = entry.real + 0.0, entry.imag + 0.0
    if not imaginary:
        return repr(real)
    return f"{real!r}{'+' if imaginary > 0 else ''}{imaginary!r}*i"


def read_connection(text: str | bytes) -> Connection:
    """The connection that a JSON document describes; raises TooLarge, Malformed, Refused (all faults together)."""
    data, faults = read_json(text)
    return _Reader(faults).connection(data)


def connection_from_json(data: object) -> Connection:
    """The same from parsed JSON; raises Refused."""
    return _Reader(Faults("connection")).connection(data)


class _Reader:
    """Reads one document."""

    def __init__(self, faults: Faults) -> None:
        self._faults = faults
        self._budget = Budget(MAXIMUM_WORK)
        self._symbols: frozenset[str] = frozenset()
        self._rank: int | None = None
        self._kind: Kind = "exact"

    def connection(self, data: object) -> Connection:
        """The connection, or Refused with all faults."""
        if not isinstance(data, dict):
            self._faults.wrong_type("", data, f"an object with the keys {', '.join(_REQUIRED)}")
            raise self._faults.refusal()
        check_keys(data, _KEYS, "", self._faults)
        for key in _REQUIRED:
            if key not in data:
                self._faults.add("", f"The key {key} is missing", f"the keys {', '.join(_REQUIRED)}")
        if "format" in data and data["format"] != FORMAT:
            self._faults.wrong_type("/format", data["format"], f'"{FORMAT}"')
        if data.get("kind") in ("exact", "numerical"):
            self._kind = data["kind"]
        elif "kind" in data:
            self._faults.wrong_type("/kind", data["kind"], '"exact" or "numerical"')
        symbols = self._names(data.get("symbols", []), "/symbols")
        self._symbols = frozenset(symbols)
        accessory = self._names(data.get("accessory", []), "/accessory")
        for number, name in enumerate(accessory):
            if name not in self._symbols:
                message = f"The accessory parameter {quoted(name)} is not among the symbols"
                self._faults.add(f"/accessory/{number}", message, "a listed symbol")
        self._rank = self._size(data)
        poles = self._poles(data.get("poles"))
        values = self._values(data.get("values", {}))
        record = self._record(data.get("verification", []))
        method = data.get("method", "")
        if not isinstance(method, str):
            self._faults.wrong_type("/method", method, "a text")
        self._faults.raise_if_any()
        made = Connection(self._kind, self._rank or 0, tuple(poles), symbols, accessory, record, values, method)
        self._check_sum(made)
        self._faults.raise_if_any()
        return made

    def _size(self, data: Mapping[str, object]) -> int | None:
        rank = data.get("rank")
        if "rank" not in data:
            return None
        if type(rank) is not int:
            self._faults.wrong_type("/rank", rank, "a positive integer")
        elif not 1 <= rank <= MAXIMUM_CONNECTION_RANK:
            self._faults.add("/rank", f"The rank {rank} is outside the limits", f"1 to {MAXIMUM_CONNECTION_RANK}")
        else:
            return rank
        return None

    def _names(self, data: object, at: str) -> tuple[str, ...]:
        if not isinstance(data, list):
            self._faults.wrong_type(at, data, 'a list of names, such as ["a", "b"]; [] for none')
            return ()
        if len(data) > MAXIMUM_SYMBOLS:
            self._faults.add(at, f"{len(data)} names are listed", f"at most {MAXIMUM_SYMBOLS}")
            return ()
        seen: dict[str, None] = {}
        for number, name in enumerate(data):
            where = f"{at}/{number}"
            if not isinstance(name, str):
                self._faults.wrong_type(where, name, "a name")
            elif (fault := check_symbol(normalised(name))) is not None:
                self._faults.add(where, fault, "a letter, then letters, digits or _")
            elif normalised(name) in seen:
                self._faults.add(where, f"The name {quoted(name)} is listed twice", "each name once")
            else:
                seen[normalised(name)] = None
        return tuple(seen)

    def _poles(self, data: object) -> list[ConnectionPole]:
        if data is None:
            return []
        poles = nonempty_list(data, "/poles", self._faults, "poles") or []
        if len(poles) > MAXIMUM_POLES:
            self._faults.add("/poles", f"{len(poles)} poles are given", f"at most {MAXIMUM_POLES} poles")
            return []
        found: list[ConnectionPole] = []
        for number, pole in enumerate(poles):
            at = f"/poles/{number}"
            if not isinstance(pole, dict):
                self._faults.wrong_type(at, pole, "an object with the keys at and coefficients")
                continue
            check_keys(pole, ("at", "coefficients", "gauge"), at, self._faults)
            for key in ("at", "coefficients"):
                if key not in pole:
                    self._faults.add(at, f"The key {key} is missing", "the keys at and coefficients")
            position = self._position(pole["at"], f"{at}/at") if "at" in pole else None
            if position is not None and any(other.at == position for other in found):
                self._faults.add(f"{at}/at", "The position is equal to that of an earlier pole", "distinct positions")
            matrices = self._matrices(pole.get("coefficients"), f"{at}/coefficients")
            gauge = self._matrices(pole["gauge"], f"{at}/gauge") if "gauge" in pole else ()
            if position is not None:
                found.append(ConnectionPole(position, matrices, gauge))
        return found

    def _position(self, data: object, at: str) -> Position | None:
        if data == "infinity":
            return Position(None)
        if not isinstance(data, str):
            self._faults.wrong_type(at, data, 'a position: a number as a string, "infinity" or a symbol')
            return None
        try:
            value = parse_number(data, self._symbols)
        except NumberFault as fault:
            self._faults.add(at, f"{fault.message}, at character {fault.position + 1}", fault.expected)
            return None
        if not value.is_constant and value not in [Value.symbol(name) for name in value.symbols()]:
            self._faults.add(at, "The position is an expression in symbols", "a number, or one symbol alone")
            return None
        return Position(value)

    def _matrices(self, data: object, at: str) -> tuple[Rows, ...]:
        if data is None:
            return ()
        matrices = nonempty_list(data, at, self._faults, "matrices") or []
        if len(matrices) > MAXIMUM_POWER + 1:
            self._faults.add(at, f"{len(matrices)} coefficients are given", f"at most {MAXIMUM_POWER + 1}")
            return ()
        return tuple(self._matrix(matrix, f"{at}/{k}") for k, matrix in enumerate(matrices))

    def _matrix(self, data: object, at: str) -> Rows:
        if self._rank is None:
            return ()
        expected = f"{self._rank} rows of {self._rank} entries"
        if not isinstance(data, list) or len(data) != self._rank:
            self._faults.add(at, "This is no matrix of the rank of the connection", expected)
            return ()
        rows = []
        for number, row in enumerate(data):
            if not isinstance(row, list) or len(row) != self._rank:
                self._faults.add(f"{at}/{number}", "The row has not as many entries as the rank says", expected)
                continue
            rows.append(tuple(self._entry(entry, f"{at}/{number}/{k}") for k, entry in enumerate(row)))
        return tuple(rows)

    def _entry(self, data: object, at: str) -> Entry:
        if not isinstance(data, str):
            self._faults.wrong_type(at, data, "an entry as a string")
            return Quotient.of(0)
        if self._kind == "numerical":
            return self._floating(data, at)
        try:
            return parse_quotient(data, self._symbols, self._budget)
        except NumberFault as fault:
            self._faults.add(at, f"{fault.message}, at character {fault.position + 1}", fault.expected)
            return Quotient.of(0)

    def _floating(self, text: str, at: str) -> complex:
        match = _COMPLEX.fullmatch(text.replace(" ", "")) if len(text) <= 200 else None
        if match is None or not (match["re"] or match["im"]):
            self._faults.add(at, f"{quoted(text)} is no floating number", 'a number such as "0.5" or "1.5-2e-3*i"')
            return 0j
        return complex(float(match["re"] or 0), float(match["im"] or 0))

    def _values(self, data: object) -> tuple[tuple[str, Value], ...]:
        if not isinstance(data, dict):
            self._faults.wrong_type("/values", data, "an object from symbols to numbers")
            return ()
        found = []
        for name, text in data.items():
            at = child("/values", str(name))
            if not isinstance(text, str):
                self._faults.wrong_type(at, text, "a number as a string")
                continue
            try:
                found.append((normalised(name), parse_number(text, ())))
            except NumberFault as fault:
                self._faults.add(at, f"{fault.message}, at character {fault.position + 1}", fault.expected)
        return tuple(sorted(found))

    def _record(self, data: object) -> tuple[Check, ...]:
        if not isinstance(data, list):
            self._faults.wrong_type("/verification", data, "a list of checks")
            return ()
        found = []
        for number, entry in enumerate(data):
            fields = entry if isinstance(entry, dict) else {}
            check, holds, figure = fields.get("check"), fields.get("holds"), fields.get("figure")
            if isinstance(check, str) and isinstance(holds, bool) and isinstance(figure, str) and len(fields) == 3:
                found.append(Check(check, holds, figure))
            else:
                expected = "an object with the keys check (text), holds (true or false) and figure (text)"
                self._faults.wrong_type(f"/verification/{number}", entry, expected)
        return tuple(found)

    def _check_sum(self, connection: Connection) -> None:
        """The residues of all poles add up to 0: exactly, or to within rounding."""
        residues = [pole.coefficients[0] for pole in connection.poles]
        largest = max((abs(e) for r in residues for row in r for e in row if isinstance(e, complex)), default=0.0)
        for i in range(connection.rank):
            for j in range(connection.rank):
                whole: Entry = residues[0][i][j]
                for residue in residues[1:]:
                    whole = whole + residue[i][j]  # type: ignore[operator]  # entries are of one kind
                zero = abs(whole) <= _TOLERANCE * max(1.0, largest) if isinstance(whole, complex) else not whole
                if not zero:
                    message = f"The residues do not add up to 0: entry ({i + 1}, {j + 1}) of the sum is not 0"
                    self._faults.add("/poles", message, "all poles listed, infinity too, with residues of sum 0")
                    return
