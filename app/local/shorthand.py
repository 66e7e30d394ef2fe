"""The shorthand ``21,111,111`` for local data with semisimple classes and generic eigenvalues, and back.

    types    = pole { "," pole }
    pole     = entries | groups
    groups   = "(" (groups | entries) ")" [ "_" power ] [ "^" count ] { … }
    power    = number [ "/" number ]
    entries  = entry [ "^" count ] { … }

An entry is the multiplicity of an eigenvalue: one digit, or a number in brackets.  In a run of entries that
holds blanks every number between blanks is one entry, so ``12 1`` is twelve and one.  After ``^`` all digits belong
to the count.  Parentheses nest to one depth d in a pole, whose order then is d + 1: the outermost groups have equal
coefficients of z^(−d), the innermost are the classes of distinct exponents.

Ramified poles write the power of 1/z after every parenthesis: ``(1)_3/2`` is one Galois orbit of u1·z^(−3/2), of
ramification index 2, and ``(1)_1/2(1)_0`` adds a block of exponent 0.  Powers fall from the outside to the inside,
depths may differ, and an exponent has the written terms and no others: ``((1)_1(1)_1)_3/2`` is a pole of rank 4 with
the two orbits of u1·z^(−3/2) + u2·z^(−1) and of u1·z^(−3/2) + u3·z^(−1).  The ramification index of a block is the
common denominator of the powers round it, and every entry counts so many times in the rank.  With powers or without
is a matter of the whole pole; an unramified one may be written both ways, ``(1)_1(1)_0`` as well as ``(1)(1)``.

Generic symbols: eigenvalues a1, a2, … at the first pole, b1, b2, … at the second, and so on through an alphabet
without i, l, o and the letters used otherwise; coefficients of exponents u1, u2, … at the first irregular pole, v1,
v2, … at the next; open positions t1, t2, ….
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace
from fractions import Fraction
from itertools import groupby

from app.errors import Place, Refused
from app.exact.value import Value, total
from app.local.conjugates import Conjugate, conjugates
from app.local.formal_type import Block, Eigenvalue, Exponent, Pole, Position
from app.local.limits import MAXIMUM_POLES, MAXIMUM_SYMBOLS
from app.local.orbit import irregularity_of_endomorphisms
from app.local.problem import ForcedValue, Problem
from app.local.shorthand_grammar import Branch, Group, Tree, parse_shorthand

_EIGENVALUE_LETTERS = "abcdfghkmnprs"
_COEFFICIENT_LETTERS = "uvw"


def problem_from_shorthand(text: str) -> Problem:
    """The problem with these multiplicities and generic eigenvalues and exponents.

    Positions: the most irregular pole (largest Irr(End), then highest order, then the first) at infinity, the
    others 0, 1, t1, t2, …; when all poles are logarithmic, the last at infinity.  The last eigenvalue is the one
    that the Fuchs relation forces.

    Raises Refused: the fault stands at /type, its message names the character (counted from 1).
    """
    groups = parse_shorthand(text)
    poles = _generic_poles(groups)
    symbols = _symbols_in_order(poles)
    if len(symbols) > MAXIMUM_SYMBOLS:
        message = f"The type needs {len(symbols)} symbols, over the limit of {MAXIMUM_SYMBOLS}"
        expected = f"at most {MAXIMUM_SYMBOLS} eigenvalues, coefficients and open positions"
        raise Refused(f"{message} (at /type).", (Place("/type", message, expected),))
    place, solved = _with_forced_value(poles)
    return Problem(solved, symbols, name=" ".join(text.split()), forced=place)


def _generic_poles(groups: list[Group | Tree]) -> tuple[Pole, ...]:
    """Poles with generic eigenvalues (the last one too) and exponents, and their positions."""
    eigenvalue_names = _letters(_EIGENVALUE_LETTERS)
    coefficient_names = _letters(_COEFFICIENT_LETTERS)
    bare = []
    for group in groups:
        letters = next(eigenvalue_names), next(coefficient_names) if group.depth else ""
        bare.append(Pole(Position(None), tuple(_Blocks(*letters).of(group))))
    weights = [(irregularity_of_endomorphisms(pole), group.depth) for pole, group in zip(bare, groups, strict=True)]
    most = max(weights)
    infinity = weights.index(most) if most[1] > 0 else len(bare) - 1
    finite = _finite_positions()
    return tuple(
        replace(pole, at=Position(None) if number == infinity else next(finite)) for number, pole in enumerate(bare)
    )


def _letters(alphabet: str) -> Iterator[str]:
    """The letters, then all pairs of letters, and so on: enough for every pole."""
    words = list(alphabet)
    while True:
        yield from words
        words = [word + letter for word in words for letter in alphabet]


def _finite_positions() -> Iterator[Position]:
    yield Position(Value.rational(0))
    yield Position(Value.rational(1))
    for number in range(1, MAXIMUM_POLES + 1):
        yield Position(Value.symbol(f"t{number}"))


@dataclass
class _Blocks:
    """Makes the blocks of one pole; counts the symbols used so far."""

    eigenvalue_letter: str
    coefficient_letter: str
    eigenvalues: int = 0
    coefficients: int = 0
    found: list[Block] = field(default_factory=list)

    def of(self, group: Group | Tree) -> list[Block]:
        """The blocks of a pole in the order of the shorthand."""
        if isinstance(group, Tree):
            for branch in group.branches:
                self._branch(branch, ())
        elif group.depth == 0:
            self._block(group.parts, ())
        else:
            self._descend(group, ())
        return self.found

    def _descend(self, group: Group, above: tuple[tuple[Fraction, Value], ...]) -> None:
        for part in group.parts:
            if isinstance(part, int):
                raise ValueError("a group above depth 0 has groups as its parts")
            terms = (*above, (Fraction(group.depth), self._coefficient()))
            if part.depth == 0:
                self._block(part.parts, terms)
            else:
                self._descend(part, terms)

    def _branch(self, branch: Branch, above: tuple[tuple[Fraction, Value], ...]) -> None:
        terms = (*above, (branch.power, self._coefficient())) if branch.power else above
        inner = [part for part in branch.parts if isinstance(part, Branch)]
        for part in inner:
            self._branch(part, terms)
        if not inner:
            self._block(branch.parts, terms)

    def _coefficient(self) -> Value:
        self.coefficients += 1
        return Value.symbol(f"{self.coefficient_letter}{self.coefficients}")

    def _block(self, parts: Sequence[object], terms: tuple[tuple[Fraction, Value], ...]) -> None:
        residue = []
        for part in parts:
            if not isinstance(part, int):
                raise ValueError("a group of depth 0 has multiplicities as its parts")
            self.eigenvalues += 1
            value = Value.symbol(f"{self.eigenvalue_letter}{self.eigenvalues}")
            residue.append(Eigenvalue(value, (1,) * part))
        self.found.append(Block(Exponent(terms), tuple(residue)))


def _symbols_in_order(poles: tuple[Pole, ...]) -> tuple[str, ...]:
    """All symbols by pole (position, exponents, eigenvalues), without the last eigenvalue, which is forced."""
    found: dict[str, None] = {}
    for pole in poles:
        values = [] if pole.at.value is None else [pole.at.value]
        values += [value for block in pole.blocks for _, value in block.exponent.terms]
        values += [eigenvalue.value for block in pole.blocks for eigenvalue in block.residue]
        found.update((name, None) for value in values for name in value.symbols())
    last = poles[-1].blocks[-1].residue[-1].value
    return tuple(name for name in found if name not in last.symbols())


def _with_forced_value(poles: tuple[Pole, ...]) -> tuple[ForcedValue, tuple[Pole, ...]]:
    """The poles with the last eigenvalue solved from the Fuchs relation, and its place."""
    block = poles[-1].blocks[-1]
    last = block.residue[-1]
    everything = total(e.value * e.multiplicity for pole in poles for b in pole.blocks for e in b.residue)
    forced = replace(last, value=(everything - last.value * last.multiplicity) / -last.multiplicity)
    solved_block = replace(block, residue=(*block.residue[:-1], forced))
    solved_pole = replace(poles[-1], blocks=(*poles[-1].blocks[:-1], solved_block))
    place = ForcedValue(len(poles) - 1, len(poles[-1].blocks) - 1, len(block.residue) - 1)
    return place, (*poles[:-1], solved_pole)


def to_shorthand(problem: Problem) -> str | None:
    """The shorthand of the problem's multiplicities, or None where it has none.

    It has none when some class is not semisimple.  Values, positions and the reading are not part of it; blocks with
    equal leading coefficients are put side by side, and at a ramified pole those with conjugate ones.
    """
    if any(e.jordan[0] > 1 for pole in problem.poles for block in pole.blocks for e in block.residue):
        return None
    return ",".join(_written_pole(pole) for pole in problem.poles)


def _written_pole(pole: Pole) -> str:
    if pole.ramified:
        return _written_branches([(block, conjugates(block.exponent)) for block in pole.blocks], 0)
    depth = max(int(block.exponent.slope) for block in pole.blocks)
    if depth == 0:
        return _written_entries(pole.blocks[0])
    return _written_groups([(block, dict(block.exponent.terms)) for block in pole.blocks], depth)


def _written_groups(blocks: list[tuple[Block, dict[Fraction, Value]]], depth: int) -> str:
    """The blocks, grouped by their coefficient of z^(−depth), one pair of parentheses for each group."""
    parts: dict[Value | None, list[tuple[Block, dict[Fraction, Value]]]] = {}
    for block, coefficients in blocks:
        parts.setdefault(coefficients.get(Fraction(depth)), []).append((block, coefficients))
    inner = [_written_groups(part, depth - 1) if depth > 1 else _written_entries(part[0][0]) for part in parts.values()]
    return "".join(_repeated(f"({text})", len(list(run)), longest=5) for text, run in groupby(inner))


def _written_branches(blocks: list[tuple[Block, tuple[Conjugate, ...]]], length: int) -> str:
    """Blocks whose exponents have conjugate first ``length`` terms, grouped by the next term up to conjugation.

    The orbits of two beginnings are equal or disjoint, so any member in common tells that they are equal.
    """
    parts: dict[Conjugate, list[tuple[Block, tuple[Conjugate, ...]]]] = {}
    for block, orbit in blocks:
        beginnings = {conjugate[: length + 1] for conjugate in orbit}
        known = next((beginning for beginning in beginnings if beginning in parts), orbit[0][: length + 1])
        parts.setdefault(known, []).append((block, orbit))
    written = []
    for beginning, part in parts.items():
        power = beginning[length][0] if len(beginning) > length else Fraction(0)
        ends = len(part) == 1 and len(part[0][0].exponent.terms) <= length + 1
        inner = _written_entries(part[0][0]) if ends else _written_branches(part, length + 1)
        written.append(f"({inner})_{power}")
    return "".join(_repeated(text, len(list(run)), longest=5) for text, run in groupby(written))


def _written_entries(block: Block) -> str:
    """Multiplicities: digits side by side, or numbers between blanks where digits would be misread."""
    runs = [(size, len(list(run))) for size, run in groupby(e.multiplicity for e in block.residue)]
    if all(size < 10 for size, _ in runs) and all(count <= 3 for _, count in runs[:-1]):
        return "".join(_repeated(str(size), count, longest=3) for size, count in runs)
    pieces = [piece for size, count in runs for piece in ([str(size)] * count if count <= 3 else [f"{size}^{count}"])]
    if len(pieces) > 1:
        return " ".join(pieces)
    number, mark, count_text = pieces[0].partition("^")
    return f"[{number}]{mark}{count_text}"


def _repeated(entry: str, count: int, longest: int) -> str:
    """The entry so many times: written out up to ``longest`` times, with ^ beyond."""
    return entry * count if count <= longest else f"{entry}^{count}"
