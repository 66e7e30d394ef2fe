"""Points on walls: symbols specialised so that data lie on a wall, and the verdicts on walls and where two meet."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import chain, combinations, islice

from app.errors import Place, Refused
from app.exact.bounded import check_size, power, product
from app.exact.limits import Budget, OverLimit
from app.exact.linear import nullspace
from app.exact.number import write_number
from app.exact.value import ZERO, Value, total
from app.existence.decide import decide
from app.existence.verdict import Decomposition, Verdict
from app.existence.walls import Wall, Walls, multiplicities, walls, with_eigenvalues
from app.local.formal_type import Block, Exponent, Pole
from app.local.problem import Problem
from app.roots.build import quiver_of
from app.roots.reduction import reduce

MOST_ROWS = 200
"""Largest number of rows of a stratification."""


@dataclass(frozen=True)
class Row:
    """One wall, or two walls that meet, by their numbers in ``Stratification.walls``.

    ``verdict`` is that of generic eigenvalues there.  ``splits``: for a "no" by a decomposition the parts as
    (multiplicity, rank); a part of rank 0 lies on a leg.  ``eigenvalues_meet``: two eigenvalues of one block become
    equal there; meant is then the class with larger Jordan blocks and the same dimension.  ``holds``: the present
    eigenvalues lie there.
    """

    walls: tuple[int, ...]
    verdict: Verdict
    splits: tuple[tuple[int, int], ...]
    eigenvalues_meet: bool
    holds: bool


@dataclass(frozen=True)
class Stratification:
    """Walls, those through the present values first; rows: each wall, then each pair; ``complete``: no row is cut."""

    generic: Verdict
    walls: tuple[Wall, ...]
    rows: tuple[Row, ...]
    complete: bool
    proved: bool


def stratification(problem: Problem, found: Walls | None = None) -> Stratification:
    """The verdicts on the walls and where two walls meet, at most ``MOST_ROWS`` rows.

    ``found`` are the problem's walls, if they are known already.  Every verdict is decided anew at a generic point, by
    the decision alone.  Raises ``Refused`` as ``walls`` does.  Cost: one decision a row.
    """
    if found is None:
        found = walls(problem)
    ordered = sorted(found.walls, key=lambda wall: not wall.holds)
    numbers = range(len(ordered))
    strata = chain(((k,) for k in numbers), combinations(numbers, 2))
    rows = tuple(_row(problem, ordered, stratum) for stratum in islice(strata, MOST_ROWS))
    complete = found.complete and len(rows) == len(ordered) * (len(ordered) + 1) // 2
    return Stratification(found.generic, tuple(ordered), rows, complete, found.proved)


def generic_point(problem: Problem, chosen: Sequence[Wall]) -> Problem:
    """The problem with eigenvalues that satisfy the equations of the walls and are generic otherwise.

    Only its quiver has a meaning, as for ``walls.generic_problem``.  Cost: a nullspace over Q.
    """
    fuchs = multiplicities(problem)
    basis = nullspace([fuchs, *(wall.form for wall in chosen)], len(fuchs))
    names = [Value.symbol(f".{number}") for number in range(len(basis))]
    values = [total(name * vector[k] for name, vector in zip(names, basis, strict=True)) for k in range(len(fuchs))]
    return with_eigenvalues(problem, values)


def symbols_to_solve(problem: Problem, wall: Wall) -> tuple[str, ...]:
    """The symbols for which the wall's equation can be solved: linear, with a number as coefficient, no position."""
    positions = [pole.at.value.symbols() for pole in problem.poles if pole.at.value is not None]
    taken = frozenset[str]().union(*positions)
    return tuple(
        name for name in problem.symbols if name not in taken and _linear_coefficient(wall.value, name) is not None
    )


def specialise(problem: Problem, wall: Wall, symbol: str) -> Problem:
    """The problem with one symbol replaced by the value that puts the data on the wall.

    Raises ``Refused`` when the equation cannot be solved for the symbol (see ``symbols_to_solve``), when two
    eigenvalues of a block or two exponents of a pole become equal, and over the limits of numbers.
    """
    if symbol not in symbols_to_solve(problem, wall):
        raise _refusal(
            f"The equation of the wall cannot be solved for {symbol[:40]!r}.",
            f"one of {', '.join(symbols_to_solve(problem, wall)) or 'no symbols: all its eigenvalues are numbers'}",
        )
    coefficient = _linear_coefficient(wall.value, symbol)
    assert coefficient is not None
    try:
        value = wall.value.substitute({symbol: ZERO}) * -coefficient.inverse()
        budget = Budget()
        poles = tuple(_substituted(pole, symbol, value, budget) for pole in problem.poles)
    except OverLimit as fault:
        raise _refusal(f"A number would become too large: {fault.message}.") from fault
    _refuse_equal(poles, f"{symbol} = {write_number(value, problem.symbols)}")
    return replace(problem, poles=poles, symbols=tuple(name for name in problem.symbols if name != symbol))


def _row(problem: Problem, ordered: Sequence[Wall], stratum: tuple[int, ...]) -> Row:
    chosen = [ordered[k] for k in stratum]
    point = generic_point(problem, chosen)
    quiver = quiver_of(point)
    verdict = decide(quiver, reduce(quiver))
    splits: tuple[tuple[int, int], ...] = ()
    if isinstance(verdict.certificate, Decomposition):
        core = [v for v, vertex in enumerate(quiver.vertices) if vertex.role == "core" and vertex.pole == quiver.base]
        splits = tuple((part.multiplicity, sum(part.vector[v] for v in core)) for part in verdict.certificate.parts)
    met = len(multiplicities(point)) < len(multiplicities(problem))
    return Row(stratum, verdict, splits, met, all(wall.holds for wall in chosen))


def _linear_coefficient(value: Value, symbol: str) -> Value | None:
    """The coefficient c, a number, if the value is c·symbol plus terms without the symbol; None otherwise."""
    found = []
    for (monomial, radical), coefficient in value.terms.items():
        if any(name == symbol for name, _ in monomial):
            if monomial != ((symbol, 1),):
                return None
            found.append((((), radical), coefficient))
    return Value.from_terms(found) if found else None


def _substituted(pole: Pole, symbol: str, value: Value, budget: Budget) -> Pole:
    blocks = []
    for block in pole.blocks:
        terms = [(s, _replaced(coefficient, symbol, value, budget)) for s, coefficient in block.exponent.terms]
        exponent = Exponent(tuple((s, coefficient) for s, coefficient in terms if coefficient))
        residue = tuple(replace(e, value=_replaced(e.value, symbol, value, budget)) for e in block.residue)
        blocks.append(Block(exponent, residue))
    return replace(pole, blocks=tuple(blocks))


def _replaced(number: Value, symbol: str, value: Value, budget: Budget) -> Value:
    """The number with the symbol replaced; the work is bounded before it is done."""
    if symbol not in number.symbols():
        return number
    result = ZERO
    parts: dict[int, Value] = {}
    for (monomial, radical), coefficient in number.terms.items():
        degree = int(next((p for name, p in monomial if name == symbol), 0))
        rest = tuple(pair for pair in monomial if pair[0] != symbol)
        parts[degree] = parts.get(degree, ZERO) + Value.from_terms([((rest, radical), coefficient)])
    for degree, part in parts.items():
        result = result + (product(part, power(value, degree, budget), budget) if degree else part)
    check_size(result)
    return result


def _refuse_equal(poles: Sequence[Pole], setting: str) -> None:
    for i, pole in enumerate(poles):
        exponents = [block.exponent for block in pole.blocks]
        if len(set(exponents)) < len(exponents):
            raise _refusal(f"With {setting} two exponents at pole {i + 1} become equal.", "another symbol")
        for block in pole.blocks:
            values = [e.value for e in block.residue]
            if len(set(values)) < len(values):
                raise _refusal(
                    f"With {setting} two eigenvalues of a block at pole {i + 1} become equal.", "another symbol"
                )


def _refusal(message: str, expected: str = "") -> Refused:
    return Refused(message, (Place("", message, expected),))
