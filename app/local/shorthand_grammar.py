"""Reading the shorthand: text → one tree of multiplicities for each pole.

The grammar is described in ``shorthand``.  Nothing is repeated or nested before its size is checked against the
limits on rank and on the order of poles.
"""

import re
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from math import lcm
from typing import NoReturn

from app.errors import TooLarge
from app.local.faults import Faults, quoted
from app.local.limits import MAXIMUM_BYTES, MAXIMUM_POLES, MAXIMUM_POWER, MAXIMUM_RAMIFICATION, MAXIMUM_RANK

_BLANKS = " \t\r\n"
_ENTRY = re.compile(r"\[[ \t]*([0-9]+)[ \t]*\]|([0-9]+)")
_COUNT = re.compile(r"\^(?:\[([0-9]+)\]|([0-9]+))")
_POWER = re.compile(r"_([0-9]+)(?:/([0-9]+))?")
_EXAMPLE = "a type such as 21,111,111 or (1)(1),11,11"
_ENTRIES = "multiplicities such as 21, 1^4 or 12 1"
_WITH_POWERS = "a power after every parenthesis of the pole, as in (1)_1/2(1)_0, or after none"


@dataclass(frozen=True)
class Group:
    """A class (depth 0: multiplicities of eigenvalues) or a group of groups of one depth less."""

    depth: int
    parts: "tuple[int, ...] | tuple[Group, ...]"

    @cached_property
    def rank(self) -> int:
        """Sum of all multiplicities."""
        return sum(part if isinstance(part, int) else part.rank for part in self.parts)


@dataclass(frozen=True)
class Branch:
    """A group with its power of 1/z: a class, or groups of smaller powers; power 0 adds no term to the exponent."""

    power: Fraction
    parts: "tuple[int, ...] | tuple[Branch, ...]"

    @cached_property
    def multiplicity(self) -> int:
        """Sum of all multiplicities, without ramification indices."""
        return sum(part if isinstance(part, int) else part.multiplicity for part in self.parts)

    def sizes(self, index: int = 1) -> tuple[int, int]:
        """Rank, and largest ramification index, inside groups whose powers have the common denominator ``index``."""
        index = lcm(index, self.power.denominator)
        inner = [part.sizes(index) for part in self.parts if isinstance(part, Branch)]
        if not inner:
            return index * self.multiplicity, index
        return sum(rank for rank, _ in inner), max(largest for _, largest in inner)


@dataclass(frozen=True)
class Tree:
    """A pole written with powers: its outermost groups."""

    branches: tuple[Branch, ...]

    @property
    def depth(self) -> Fraction:
        """The largest power."""
        return max(branch.power for branch in self.branches)

    @cached_property
    def rank(self) -> int:
        """Sum over all groups of multiplicity times ramification index."""
        return sum(branch.sizes()[0] for branch in self.branches)


def parse_shorthand(text: str) -> list[Group | Tree]:
    """The poles, each as a tree; raises Refused (the fault at /type, the character in its message) or TooLarge.

    Cost: linear in the length of the text plus the size of the trees, which the limits bound.
    """
    if len(text) > MAXIMUM_BYTES:
        raise TooLarge(f"The type is longer than {MAXIMUM_BYTES} characters.")
    poles = _Parser(text).poles()
    ranks = [pole.rank for pole in poles]
    faults = Faults("type")
    for number, rank in enumerate(ranks):
        if rank != ranks[0]:
            faults.add("/type", f"Pole {number + 1} has rank {rank}, the first pole has rank {ranks[0]}", "equal sums")
    faults.raise_if_any()
    return poles


class _Parser:
    """One text being read."""

    def __init__(self, text: str) -> None:
        self._text = text
        self._at = 0

    def poles(self) -> list[Group | Tree]:
        """All poles; the whole text must be used up."""
        if not self._text.strip(_BLANKS):
            self._refuse("The type is empty", 0, _EXAMPLE)
        found = [self._pole()]
        while self._at < len(self._text):
            self._at += 1
            if len(found) == MAXIMUM_POLES:
                self._refuse(f"Here begins a pole over the limit of {MAXIMUM_POLES}", self._at, "fewer poles")
            found.append(self._pole())
        return found

    def _refuse(self, message: str, at: int, expected: str) -> NoReturn:
        faults = Faults("type")
        faults.add("/type", f"{message}, at character {at + 1}", expected)
        raise faults.refusal()

    def _skip_blanks(self) -> str:
        """Pass blanks; the next character, or "" at the end."""
        while self._at < len(self._text) and self._text[self._at] in _BLANKS:
            self._at += 1
        return self._text[self._at : self._at + 1]

    def _pole(self) -> Group | Tree:
        """One pole, up to the comma or the end."""
        start = self._at
        group = self._groups(0) if self._skip_blanks() == "(" else self._entries()
        if isinstance(group, Tree):
            index = max(branch.sizes()[1] for branch in group.branches)
            if index > MAXIMUM_RAMIFICATION:
                self._refuse(
                    f"Here powers have the common denominator {index}, over the limit of {MAXIMUM_RAMIFICATION}",
                    start,
                    "a smaller ramification index",
                )
        rest = self._skip_blanks()
        if rest == ")":
            self._refuse("This parenthesis closes nothing", self._at, "a comma, or no parenthesis")
        if rest and rest != ",":
            self._refuse(
                "Some entries of the pole stand inside parentheses and some outside",
                self._at,
                "all entries of a pole at one depth",
            )
        if group.rank > MAXIMUM_RANK:
            self._refuse(f"The rank here is over the limit of {MAXIMUM_RANK}", start, f"at most {MAXIMUM_RANK}")
        return group

    def _groups(self, outside: int) -> Group | Tree:
        """Groups in parentheses side by side, ``outside`` pairs of parentheses being open round them."""
        plain: list[Group] = []
        powered: list[Branch] = []
        rank = 0
        while self._skip_blanks() == "(":
            opening = self._at
            inner = self._inside(outside)
            power = self._power()
            if (plain and power is not None) or (powered and power is None):
                self._refuse("Some groups have a power and some have none", opening, _WITH_POWERS)
            group = self._plain(inner, plain, opening) if power is None else self._branch(inner, power, opening)
            count = self._count()
            rank += (group.rank if isinstance(group, Group) else group.multiplicity) * count
            if rank > MAXIMUM_RANK:
                self._refuse(f"The rank grows over the limit of {MAXIMUM_RANK}", opening, f"at most {MAXIMUM_RANK}")
            if isinstance(group, Group):
                plain.extend([group] * count)
            else:
                powered.extend([group] * count)
            if sum(branch.power == 0 for branch in powered) > 1:
                self._refuse(
                    "Two groups side by side have the power 0, so their exponents are equal",
                    opening,
                    "one group with both classes, as in (11)_0",
                )
        return Tree(tuple(powered)) if powered else Group(plain[0].depth + 1, tuple(plain))

    def _inside(self, outside: int) -> Group | Tree:
        """What one pair of parentheses holds, both parentheses passed."""
        opening = self._at
        if outside == MAXIMUM_POWER:
            message = f"Parentheses are nested more than {MAXIMUM_POWER} deep"
            self._refuse(message, opening, f"poles of order at most {MAXIMUM_POWER + 1}")
        self._at += 1
        inner = self._groups(outside + 1) if self._skip_blanks() == "(" else self._entries()
        closing = self._skip_blanks()
        if closing in ("", ","):
            self._refuse("This parenthesis is not closed", opening, ")")
        if closing != ")":
            self._refuse("Groups and multiplicities stand side by side", self._at, "all entries of a pole at one depth")
        self._at += 1
        return inner

    def _plain(self, inner: Group | Tree, before: list[Group], opening: int) -> Group:
        """A group without a power; it has none inside either, and the depth of those before it."""
        if isinstance(inner, Tree):
            self._refuse("This group has no power, those inside it have one", opening, _WITH_POWERS)
        if before and inner.depth != before[0].depth:
            self._refuse(
                "This group is nested to another depth than those before it",
                opening,
                "all entries of a pole at one depth",
            )
        return inner

    def _branch(self, inner: Group | Tree, power: Fraction, opening: int) -> Branch:
        """A group with its power; every group inside has a smaller one."""
        if isinstance(inner, Group) and inner.depth > 0:
            self._refuse("This group has a power, those inside it have none", opening, _WITH_POWERS)
        if isinstance(inner, Tree) and inner.depth >= power:
            self._refuse(
                f"A group inside has the power {inner.depth}, not smaller than {power}",
                opening,
                "powers that fall from the outermost group to the innermost",
            )
        parts = inner.branches if isinstance(inner, Tree) else tuple(p for p in inner.parts if isinstance(p, int))
        return Branch(power, parts)

    def _power(self) -> Fraction | None:
        """The power written after a parenthesis: _3/2, _2, _0; None where no _ follows."""
        start = self._at
        if self._text[start : start + 1] != "_":
            return None
        match = _POWER.match(self._text, start)
        if match is None:
            self._refuse("A power must follow _", start, "a power of 1/z, as in (1)_3/2")
        numerator, denominator = (digits.lstrip("0") if digits else digits for digits in match.groups())
        if denominator == "" or len(denominator or "") > 3 or len(numerator) > 6:
            self._refuse(
                "The power is out of range",
                start,
                f"a positive denominator of at most {MAXIMUM_RAMIFICATION}, a power of at most {MAXIMUM_POWER}",
            )
        power = Fraction(int(numerator or "0"), int(denominator or "1"))
        if power > MAXIMUM_POWER or power.denominator > MAXIMUM_RAMIFICATION:
            self._refuse(
                "The power is out of range",
                start,
                f"a denominator of at most {MAXIMUM_RAMIFICATION}, a power of at most {MAXIMUM_POWER}",
            )
        self._at = match.end()
        return power

    def _entries(self) -> Group:
        """Multiplicities side by side; in a run with blanks the numbers between blanks are one entry each."""
        end = next((k for k in range(self._at, len(self._text)) if self._text[k] in "(),"), len(self._text))
        run = self._text[self._at : end]
        spaced = any(blank in run.strip(_BLANKS) for blank in _BLANKS)
        found: list[int] = []
        total = 0
        while self._skip_blanks() and self._at < end:
            start = self._at
            size = self._entry(spaced)
            count = self._count()
            total += size * count
            if total > MAXIMUM_RANK:
                self._refuse(f"The rank grows over the limit of {MAXIMUM_RANK}", start, f"at most {MAXIMUM_RANK}")
            found.extend([size] * count)
        if not found:
            self._refuse("Multiplicities are missing", self._at, _ENTRIES)
        return Group(0, tuple(found))

    def _entry(self, spaced: bool) -> int:
        """One multiplicity."""
        start = self._at
        match = _ENTRY.match(self._text, start)
        if match is None:
            self._refuse(f"Here stands {quoted(self._text[start])}, which begins no multiplicity", start, _ENTRIES)
        bracketed, digits = match.groups()
        if bracketed is None and not spaced:
            digits = digits[0]
        self._at = match.end() if bracketed is not None else start + len(digits)
        return self._bounded(bracketed or digits, start, "multiplicity")

    def _count(self) -> int:
        """How often the entry just read is repeated: 1 unless ^ follows."""
        start = self._at
        if self._text[start : start + 1] != "^":
            return 1
        match = _COUNT.match(self._text, start)
        if match is None:
            self._refuse("A number must follow ^", start, "a count, as in 1^4")
        self._at = match.end()
        return self._bounded(match.group(1) or match.group(2), start + 1, "count")

    def _bounded(self, digits: str, at: int, what: str) -> int:
        """The number, between 1 and the limit on the rank."""
        significant = digits.lstrip("0")
        if not significant:
            self._refuse(f"The {what} is 0", at, "a positive integer")
        if len(significant) > len(str(MAXIMUM_RANK)) or int(significant) > MAXIMUM_RANK:
            self._refuse(
                f"The {what} makes the rank larger than the limit of {MAXIMUM_RANK}",
                at,
                f"a rank of at most {MAXIMUM_RANK}",
            )
        return int(significant)
