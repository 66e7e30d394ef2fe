"""One block of a pole: its exponent and the class on its multiplicity space, read from parsed JSON.

Reading goes on after a fault wherever what follows still has a meaning, so that all faults come together.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property

from app.exact.value import Value
from app.local.faults import FAULTY, Faults, child, described, quoted
from app.local.formal_type import Exponent
from app.local.limits import MAXIMUM_POWER, MAXIMUM_RAMIFICATION, MAXIMUM_RANK
from app.local.numbers import Numbers, read_power
from app.local.problem import Reading

FORCED_TEXT = "*"


class Forced:
    """Stands for the eigenvalue "*" until everything else is known."""


FORCED = Forced()


@dataclass(frozen=True)
class EigenvalueRead:
    """An eigenvalue as far as it could be read; None stands for a part with a fault."""

    value: Value | Forced | None
    jordan: tuple[int, ...] | None


@dataclass(frozen=True)
class BlockRead:
    """A block as far as it could be read; None stands for a part with a fault."""

    exponent: Exponent | None
    residue: tuple[EigenvalueRead, ...] | None

    @cached_property
    def multiplicity(self) -> int | None:
        """Sum of all Jordan block sizes, if all could be read."""
        if self.residue is None:
            return None
        sizes = [eigenvalue.jordan for eigenvalue in self.residue]
        return sum(sum(jordan) for jordan in sizes if jordan) if None not in sizes else None

    @cached_property
    def rank(self) -> int | None:
        """Ramification index times multiplicity, if both could be read."""
        if self.exponent is None or self.multiplicity is None:
            return None
        return self.exponent.ramification * self.multiplicity


def check_keys(data: Mapping[str, object], allowed: tuple[str, ...], at: str, faults: Faults) -> None:
    """Note every key that is not allowed."""
    for key in data:
        if not isinstance(key, str):
            faults.add(at, f"A key here is {described(key)}, not a text", f"the keys {', '.join(allowed)}")
        elif key not in allowed:
            faults.add(child(at, key), f"The key {quoted(key)} is unknown", f"one of the keys {', '.join(allowed)}")


def nonempty_list(data: object, at: str, faults: Faults, contents: str) -> list[object] | None:
    """The data if it is a list with at least one entry; otherwise None, after noting the fault."""
    if not isinstance(data, list):
        faults.wrong_type(at, data, f"a list of {contents}")
        return None
    if not data:
        faults.add(at, "The list is empty", f"a list of {contents}, at least one")
        return None
    return data


class BlockReader:
    """Reads the blocks of one document, all in the same reading (residues, or local monodromies)."""

    def __init__(self, numbers: Numbers, reading: Reading, faults: Faults) -> None:
        self._numbers = numbers
        self._reading = reading
        self._faults = faults
        self._forced_at: str | None = None

    def read(self, data: object, at: str) -> BlockRead:
        """One block, as far as it can be read."""
        if not isinstance(data, dict):
            self._faults.wrong_type(at, data, f"an object with the keys exponent and {self._reading}")
            return BlockRead(None, None)
        check_keys(data, ("exponent", "residue", "local_monodromy"), at, self._faults)
        exponent: Exponent | None = None
        if "exponent" in data:
            exponent = self._exponent(data["exponent"], f"{at}/exponent")
        else:
            self._faults.add(at, "The key exponent is missing", "an exponent; {} stands for q = 0")
        self._check_reading(data, at)
        residue = None
        if self._reading in data:
            residue = self._residue(data[self._reading], f"{at}/{self._reading}")
        if self._reading == "local_monodromy" and exponent is not None and not exponent.is_zero:
            self._faults.add(
                f"{at}/exponent",
                "A local monodromy is given, but the pole is irregular",
                "{} with local_monodromy, or a residue",
            )
        return BlockRead(exponent, residue)

    def _check_reading(self, data: Mapping[str, object], at: str) -> None:
        """Exactly the class key of the document's reading must be there."""
        other = "residue" if self._reading == "local_monodromy" else "local_monodromy"
        here, there = self._reading in data, other in data
        if here and there:
            self._faults.add(f"{at}/{other}", "Both residue and local_monodromy are given", "one of the two")
        elif there:
            self._faults.add(
                f"{at}/{other}",
                f"The key {other} stands here, but the document begins with {self._reading}",
                "the same key at all poles",
            )
        elif not here:
            self._faults.add(at, f"The key {self._reading} is missing", f"{self._reading}, a list of eigenvalues")

    def _exponent(self, data: object, at: str) -> Exponent | None:
        if not isinstance(data, dict):
            expected = 'an object from powers of 1/z to coefficients, such as {"2": "1/2"}; {} for q = 0'
            self._faults.wrong_type(at, data, expected)
            return None
        found: dict[Fraction, Value] = {}
        seen: dict[Fraction, str] = {}
        whole = True
        for key, coefficient in data.items():
            where = child(at, key) if isinstance(key, str) else at
            power = self._power(key, where)
            value = self._numbers.read(coefficient, where, power.denominator if power is not None else 1)
            if power is None or value is None:
                whole = False
                continue
            if power in seen:
                message = f"The power {power} of 1/z stands more than once, also as {quoted(seen[power])}"
                self._faults.add(where, message, "each power once")
                whole = False
                continue
            seen[power] = key
            if value:
                found[power] = value
        if not whole:
            return None
        exponent = Exponent(tuple(sorted(found.items(), key=lambda term: -term[0])))
        if exponent.ramification > MAXIMUM_RAMIFICATION:
            self._faults.add(
                at,
                f"The ramification index is {exponent.ramification}, over the limit of {MAXIMUM_RAMIFICATION}",
                f"powers with a common denominator of at most {MAXIMUM_RAMIFICATION}",
            )
            return None
        return exponent

    def _power(self, key: object, at: str) -> Fraction | None:
        expected = 'a positive rational such as "2" or "5/2"'
        if not isinstance(key, str):
            self._faults.add(at, "A power of 1/z is not a text", expected)
            return None
        power = read_power(key)
        if power is None:
            self._faults.add(at, f"{quoted(key)} is no power of 1/z", expected)
            return None
        if power > MAXIMUM_POWER:
            self._faults.add(at, f"The power {quoted(key)} of 1/z is over the limit of {MAXIMUM_POWER}", expected)
            return None
        if power.denominator > MAXIMUM_RAMIFICATION:
            self._faults.add(
                at,
                f"The power {quoted(key)} makes the ramification index larger than {MAXIMUM_RAMIFICATION}",
                f"powers with a common denominator of at most {MAXIMUM_RAMIFICATION}",
            )
            return None
        return power

    def _residue(self, data: object, at: str) -> tuple[EigenvalueRead, ...] | None:
        entries = nonempty_list(data, at, self._faults, "eigenvalues")
        if entries is None:
            return None
        if len(entries) > MAXIMUM_RANK:
            message = f"{len(entries)} eigenvalues make the rank larger than the limit of {MAXIMUM_RANK}"
            self._faults.add(at, message, f"a rank of at most {MAXIMUM_RANK}")
            return None
        residue = tuple(self._eigenvalue(entry, f"{at}/{number}") for number, entry in enumerate(entries))
        self._check_distinct(residue, at)
        return residue

    def _eigenvalue(self, data: object, at: str) -> EigenvalueRead:
        if not isinstance(data, dict):
            self._faults.wrong_type(at, data, 'an eigenvalue such as {"value": "a", "jordan": [2, 1]}')
            return EigenvalueRead(None, None)
        if len(data) != 2 or "value" not in data or "jordan" not in data:
            check_keys(data, ("value", "jordan"), at, self._faults)
            if "value" not in data:
                self._faults.add(at, "The key value is missing", 'an eigenvalue, or "*"')
            if "jordan" not in data:
                self._faults.add(at, "The key jordan is missing", "a list of Jordan block sizes")
        value = self._value(data.get("value", FAULTY), f"{at}/value") if "value" in data else None
        jordan = self._jordan(data["jordan"], f"{at}/jordan") if "jordan" in data else None
        return EigenvalueRead(value, jordan)

    def _value(self, data: object, at: str) -> Value | Forced | None:
        if not isinstance(data, str) or data.strip() != FORCED_TEXT:
            return self._numbers.read(data, at)
        if self._reading == "local_monodromy":
            message = "The Fuchs relation forces no value of θ, only its class modulo 1"
            self._faults.add(at, message, "an exact number for θ")
            return None
        if self._forced_at is not None:
            self._faults.add(at, f'The value "*" stands a second time, first at {self._forced_at}', '"*" at most once')
            return None
        self._forced_at = at
        return FORCED

    def _jordan(self, data: object, at: str) -> tuple[int, ...] | None:
        sizes = nonempty_list(data, at, self._faults, "Jordan block sizes")
        if sizes is None:
            return None
        if len(sizes) > MAXIMUM_RANK:
            message = f"{len(sizes)} Jordan blocks make the rank larger than the limit of {MAXIMUM_RANK}"
            self._faults.add(at, message, f"a rank of at most {MAXIMUM_RANK}")
            return None
        found: list[int] = []
        for number, size in enumerate(sizes):
            if type(size) is int and size > 0:
                found.append(size)
            elif type(size) is int:
                self._faults.add(f"{at}/{number}", "A Jordan block size is not positive", "a positive integer")
            else:
                self._faults.wrong_type(f"{at}/{number}", size, "a positive integer, not as a string")
        found.sort(reverse=True)
        return tuple(found) if len(found) == len(sizes) else None

    def _check_distinct(self, residue: tuple[EigenvalueRead, ...], at: str) -> None:
        """Eigenvalues of one block must be distinct; θ's also modulo 1."""
        seen: dict[Value, int] = {}
        for number, eigenvalue in enumerate(residue):
            value = eigenvalue.value
            if not isinstance(value, Value):
                continue
            key = _modulo_one(value) if self._reading == "local_monodromy" else value
            first = seen.setdefault(key, number)
            if first != number:
                same = "equal modulo 1 to" if value != residue[first].value else "equal to"
                self._faults.add(
                    f"{at}/{number}/value",
                    f"The eigenvalue is {same} the one at {at}/{first}/value",
                    "distinct eigenvalues; Jordan blocks of one eigenvalue stand in one list",
                )


def _modulo_one(value: Value) -> Value:
    """The value with its rational part reduced to 0 ≤ r < 1; equal exactly for values that differ by an integer."""
    rational = Fraction(value.terms.get(((), 1), 0))
    return value - (rational - rational % 1)
