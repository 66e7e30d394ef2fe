"""Fundamental data of rank 2, exactly: all solutions in a chart, with accessory parameters as symbols.

At a pole whose orbit is not a point, with formal eigenvalues λ_1, λ_2 (principal parts) and Δ = λ_1 − λ_2, an element
of the orbit in general position is

    A = λ_1 + [ −by            y      ]      b a polynomial in z, y a principal part, products cut to principal parts,
              [ bΔ − b²y    by − Δ    ]

and (b, y) are canonical coordinates.  One pole, the first of the largest slope, fixes the gauge: its leading
coefficient is diagonal (lower triangular for a log pole with one Jordan block).  What is left of the gauge makes
one b equal to 1 (or 0).  For given b the three conditions on the sum of residues are linear in the y, so three y are
solved for, and the other b and y are coordinates on the moduli space.  For four log poles this is the classical family
of Painlevé VI, and every unramified confluence is treated by the same formulas.

Source: canonical coordinates as in Jimbo and Miwa, Physica D 2 (1981), here derived anew for every order of pole.
"""

from collections.abc import Collection, Iterator
from dataclasses import dataclass, field
from itertools import combinations

from app.connection.stages import Stage, StageBlock, principal_scalars
from app.exact.field import Field, field_of
from app.exact.matrix import ExactMatrix
from app.exact.quotient import Quotient
from app.exact.value import ZERO, Value

_ZERO = Quotient.of(0)
_ONE = Quotient.of(1)


@dataclass(frozen=True)
class Chart:
    """Principal parts of rank 2 for a stage, and the names of the accessory parameters in them."""

    tables: list[list[list[list[Quotient]]]]
    accessory: tuple[str, ...]

    def parts(self, entries_field: Field) -> list[list[ExactMatrix]]:
        """The parts as kernel matrices."""
        return [[entries_field.matrix(table) for table in tables] for tables in self.tables]


@dataclass
class _Pole:
    """One pole: its scalar λ_1, Δ, and the coordinates b_k, y_k (None: y still to be solved for)."""

    scalars: list[Value]
    delta: list[Value]
    b: list[Quotient] = field(default_factory=list)
    y: list[Quotient | None] = field(default_factory=list)
    trivial: bool = False
    lower: bool = False


def chart(stage: Stage, taken: Collection[str]) -> Chart:
    """The chart for a stage of rank 2; ``taken`` are names that accessory parameters may not have.

    Hypothesis: the data are fundamental (no choice lowers the rank), so at least 3 coordinates y can be solved for.
    Raises ValueError where they are not.
    """
    poles = [_pole(blocks) for blocks in stage.poles]
    names = _Names(taken)
    _fix_gauge(poles, names)
    _solve(poles, Quotient.of(stage.excess), names)
    return Chart([_tables(pole) for pole in poles], tuple(names.used))


class _Names:
    """Names q1, q2, … for coordinates b and p1, p2, … for coordinates y, none of them taken."""

    def __init__(self, taken: Collection[str]) -> None:
        self.used: list[str] = []
        self._taken = set(taken)

    def new(self, letter: str) -> Quotient:
        """The next symbol with this letter."""
        number = 1
        while (name := f"{letter}{number}") in self._taken:
            number += 1
        self._taken.add(name)
        self.used.append(name)
        return Quotient.of(Value.symbol(name))


def _pole(blocks: tuple[StageBlock, ...]) -> _Pole:
    eigenvalues = [(block.exponent, slot) for block in blocks for slot in block.slots]
    if len(eigenvalues) == 1:
        exponent, slot = eigenvalues[0]
        return _Pole(principal_scalars(exponent, slot.value), [], trivial=True)
    (first, first_slot), (second, second_slot) = eigenvalues
    one, two = principal_scalars(first, first_slot.value), principal_scalars(second, second_slot.value)
    length = max(len(one), len(two))
    one += [ZERO] * (length - len(one))
    two += [ZERO] * (length - len(two))
    delta = [a - b for a, b in zip(one, two, strict=True)]
    while len(delta) > 1 and not delta[-1]:
        delta.pop()
    return _Pole(one, delta)


def _fix_gauge(poles: list[_Pole], names: _Names) -> None:
    """Give every b a value or a name, and leave every y that may vary open."""
    moving = [pole for pole in poles if not pole.trivial]
    if not moving:
        raise ValueError("all orbits are points")
    # a log pole with one Jordan block fixes less, so it is taken only where there is no other
    first = max(moving, key=lambda pole: (len(pole.delta), bool(pole.delta[0])))
    others = [pole for pole in moving if pole is not first]
    slope = len(first.delta) - 1
    if slope == 0 and not first.delta[0]:
        first.lower = True
        first.b, first.y = [_ZERO], [_ZERO]
    else:
        first.b = [_ZERO] * (slope + 1)
        first.y = [None] * slope + [_ZERO]
    normalised = False
    for pole in [*others, first]:
        if pole is not first:
            pole.y = [None] * len(pole.delta)
            pole.b = [_ZERO] * len(pole.delta)
        for k in range(1 if pole is first else 0, len(pole.delta)):
            if not normalised:
                pole.b[k] = _ZERO if first.lower else _ONE
                normalised = True
            else:
                pole.b[k] = names.new("q")


def _square(b: list[Quotient]) -> list[Quotient]:
    """The coefficients of b², cut to the length of b."""
    found = []
    for k in range(len(b)):
        term = _ZERO
        for m in range(k + 1):
            term = term + b[m] * b[k - m]
        found.append(term)
    return found


def _solve(poles: list[_Pole], excess: Quotient, names: _Names) -> None:
    """Solve the residue conditions for three y and name the others."""
    constants = [_ZERO, -excess, _ZERO]
    unknown: list[tuple[_Pole, int, list[Quotient]]] = []
    for pole in poles:
        constants[1] = constants[1] + pole.scalars[0]
        if pole.trivial:
            continue
        if pole.lower:
            constants[2] = constants[2] + _ONE
        for b, delta in zip(pole.b, pole.delta, strict=True):
            constants[2] = constants[2] + b * delta
        square = _square(pole.b)
        for k, y in enumerate(pole.y):
            if y is None:
                unknown.append((pole, k, [_ONE if k == 0 else _ZERO, -pole.b[k], -square[k]]))
    solved = _choose([column for _, _, column in unknown])
    for place, (pole, k, column) in enumerate(unknown):
        if place not in solved:
            name = names.new("p")
            pole.y[k] = name
            constants = [c + entry * name for c, entry in zip(constants, column, strict=True)]
    columns = [unknown[place][2] for place in solved]
    determinant = _determinant(columns)
    for number, place in enumerate(solved):
        replaced = [[-c for c in constants] if m == number else column for m, column in enumerate(columns)]
        pole, k, _ = unknown[place]
        pole.y[k] = _determinant(replaced) / determinant


def _choose(columns: list[list[Quotient]]) -> tuple[int, ...]:
    """Three columns with the determinant that has fewest terms, not 0; the last such, so that early y stay free."""
    best: tuple[int, tuple[int, ...]] | None = None
    for places in combinations(range(len(columns)), 3):
        determinant = _determinant([columns[place] for place in places])
        size = len(determinant.numerator.terms)
        if size and (best is None or size <= best[0]):
            best = (size, places)
    if best is None:
        raise ValueError("the residue conditions cannot be solved: the data are not fundamental")
    return best[1]


def _determinant(columns: list[list[Quotient]]) -> Quotient:
    (a, b, c), (d, e, f), (g, h, i) = columns
    return a * (e * i - f * h) - d * (b * i - c * h) + g * (b * f - c * e)


def _tables(pole: _Pole) -> list[list[list[Quotient]]]:
    """The coefficient matrices of a pole."""
    found = []
    for k, scalar in enumerate(pole.scalars):
        table = [[Quotient.of(scalar), _ZERO], [_ZERO, Quotient.of(scalar)]]
        if k < len(pole.delta):
            for (i, j), entry in _entries(pole, k):
                table[i][j] = table[i][j] + entry
        found.append(table)
    return found


def _entries(pole: _Pole, k: int) -> Iterator[tuple[tuple[int, int], Quotient]]:
    """Entries of A − λ_1 at z^(−k−1) dz."""
    y = [_ZERO if entry is None else entry for entry in pole.y]
    last = len(pole.delta)
    square = _square(pole.b)
    by = bby = bd = _ZERO
    for m in range(last - k):
        by = by + pole.b[m] * y[k + m]
        bby = bby + square[m] * y[k + m]
        bd = bd + pole.b[m] * pole.delta[k + m]
    yield (0, 0), -by
    yield (0, 1), y[k]
    yield (1, 0), bd - bby + (_ONE if pole.lower else _ZERO)
    yield (1, 1), by - pole.delta[k]


def chart_field(made: Chart) -> Field:
    """The smallest field that holds a chart."""
    return field_of(entry for tables in made.tables for table in tables for row in table for entry in row)
