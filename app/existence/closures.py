"""Smaller classes in the closure of classes that are not closed, and the verdicts for them.

The closure of a conjugacy class is the union of the classes with the same eigenvalues whose Jordan partitions lie below
in the dominance order, eigenvalue by eigenvalue [Gerstenhaber, Ann. of Math. 73 (1961)]; only semisimple classes are
closed.  A limit of systems may land in such a smaller class, so the verdicts there say what the limit can be.  At an
irregular pole the classes of the blocks are meant, with the exponents kept.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from heapq import heappop, heappush

from app.existence.problems import additive_verdict, multiplicative_verdict
from app.existence.verdict import Verdict
from app.local.formal_type import Block, Eigenvalue, Pole
from app.local.orbit import moduli_dimension
from app.local.partition import conjugate
from app.local.problem import Problem
from app.roots.build import quiver_of
from app.roots.reduction import reduce

MOST_ROWS = 200
"""Largest number of rows of a table of closures."""

Partition = tuple[int, ...]


@dataclass(frozen=True)
class Smaller:
    """An eigenvalue, by the indices of pole, block and eigenvalue, with its Jordan blocks in the smaller class."""

    pole: int
    block: int
    eigenvalue: int
    jordan: Partition


@dataclass(frozen=True)
class ClosureRow:
    """A choice of smaller classes: what changed, by how much the orbits' dimension falls, the data and their verdicts.

    ``dimension`` is the expected dimension of their moduli space.  A verdict is None where its problem does not apply,
    as in the findings.
    """

    changes: tuple[Smaller, ...]
    codimension: int
    dimension: int
    problem: Problem
    additive: Verdict | None
    multiplicative: Verdict | None


@dataclass(frozen=True)
class Closures:
    """Rows in ascending codimension; ``complete``: all smaller classes are listed.  No rows: all are closed."""

    rows: tuple[ClosureRow, ...]
    complete: bool


def closures(problem: Problem, most: int = MOST_ROWS) -> Closures:
    """The smaller classes in the closure of a problem's classes, nearest first, with their verdicts.

    For ramified data the classes of the blocks on their multiplicity spaces are meant.
    Cost: two decisions a row.
    """
    places = [
        (i, j, k)
        for i, pole in enumerate(problem.poles)
        for j, block in enumerate(pole.blocks)
        for k, eigenvalue in enumerate(block.residue)
        if max(eigenvalue.jordan) > 1
    ]
    start = tuple(problem.poles[i].blocks[j].residue[k].jordan for i, j, k in places)
    rows: list[ClosureRow] = []
    for codimension, choice in _below(start):
        if not codimension:
            continue
        if len(rows) == most:
            return Closures(tuple(rows), False)
        pairs = zip(places, choice, start, strict=True)
        changes = tuple(Smaller(*place, new) for place, new, old in pairs if new != old)
        rows.append(_row(problem, changes, codimension))
    return Closures(tuple(rows), True)


def covered(partition: Partition) -> tuple[Partition, ...]:
    """The partitions directly below in the dominance order, descending.

    One box moves to the next row, or to a later row in the next column [Brylawski, Discrete Math. 6 (1973)].

    >>> covered((3, 1))
    ((2, 2),)
    >>> covered((2, 2))
    ((2, 1, 1),)
    """
    found = []
    rows = (*partition, 0)
    for i, size in enumerate(partition):
        # the first row that can take a box from row i; the rows between have size − 1 (or size: then no box can leave)
        target = next((j for j in range(i + 1, len(rows)) if rows[j] <= size - 2), None)
        if target is None or rows[i + 1] == size:
            continue
        if target == i + 1 or rows[target] == size - 2:
            moved = list(rows)
            moved[i] -= 1
            moved[target] += 1
            found.append(tuple(n for n in moved if n))
    return tuple(sorted(found, reverse=True))


def _below(start: tuple[Partition, ...]) -> Iterator[tuple[int, tuple[Partition, ...]]]:
    """All choices of partitions below the given ones, itself included, by ascending codimension of the classes."""
    whole = sum(map(_centralizer, start))
    waiting = [(0, start)]
    seen = {start}
    while waiting:
        codimension, choice = heappop(waiting)
        yield codimension, choice
        for k, partition in enumerate(choice):
            for lower in covered(partition):
                next_choice = (*choice[:k], lower, *choice[k + 1 :])
                if next_choice not in seen:
                    seen.add(next_choice)
                    heappush(waiting, (sum(map(_centralizer, next_choice)) - whole, next_choice))


def _centralizer(partition: Partition) -> int:
    return sum(n * n for n in conjugate(partition))


def _row(problem: Problem, changes: Sequence[Smaller], codimension: int) -> ClosureRow:
    smaller = with_jordan_blocks(problem, changes)
    quiver = None if smaller.ramified else quiver_of(smaller)
    reduction = None if quiver is None else reduce(quiver)
    return ClosureRow(
        tuple(changes),
        codimension,
        moduli_dimension(smaller),
        smaller,
        additive_verdict(smaller, quiver, reduction),
        multiplicative_verdict(smaller, quiver),
    )


def with_jordan_blocks(problem: Problem, changes: Sequence[Smaller]) -> Problem:
    """The problem with these Jordan blocks; eigenvalues and multiplicities stay, so the Fuchs relation does."""
    new = {(change.pole, change.block, change.eigenvalue): change.jordan for change in changes}

    def residue(i: int, j: int, block: Block) -> tuple[Eigenvalue, ...]:
        return tuple(Eigenvalue(e.value, new.get((i, j, k), e.jordan)) for k, e in enumerate(block.residue))

    poles = tuple(
        Pole(pole.at, tuple(Block(block.exponent, residue(i, j, block)) for j, block in enumerate(pole.blocks)))
        for i, pole in enumerate(problem.poles)
    )
    return replace(problem, poles=poles)
