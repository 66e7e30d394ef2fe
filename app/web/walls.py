"""The page of walls and closures: where the verdict for generic values changes, and what a limit may land on.

POST /walls        a problem document: its walls, their strata, the smaller classes in the closures
POST /walls/onto   put one symbol on a wall: the problem there
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import TypeVar

from fastapi import APIRouter, Request
from markupsafe import Markup
from starlette.responses import Response

from app.errors import Refused
from app.existence.closures import Closures, closures
from app.existence.strata import Stratification, specialise, stratification, symbols_to_solve
from app.existence.verdict import Verdict
from app.existence.walls import walls
from app.local.document import read_document
from app.local.problem import Problem
from app.local.writer import canonical_text
from app.web.contexts import STATUS_WORDS
from app.web.forms import read_post
from app.web.mathematics import value_mathml
from app.web.operating import problem_context
from app.web.rendering import page
from app.web.views import is_large

router = APIRouter()
T = TypeVar("T")
WALLS_SHOWN = 200


@dataclass(frozen=True)
class WallContext:
    """One wall: number, equation, present value, whether the values lie on it, and symbols to solve for."""

    number: int
    equation: str
    value: Markup
    holds: bool
    criterion: str
    symbols: tuple[str, ...]


@dataclass(frozen=True)
class StratumContext:
    """One line of the table of strata."""

    walls: str
    verdict: str
    splits: str
    note: str
    holds: bool


@dataclass(frozen=True)
class ClosureContext:
    """One line of the table of closures."""

    changes: tuple[str, ...]
    codimension: int
    dimension: int
    system: str
    monodromy: str
    document: str


@router.post("/walls")
async def show(request: Request) -> Response:
    """Walls, strata and closures of a problem."""
    post = await read_post(request)

    def work() -> Response:
        problem = read_document(post.fields.get("document", ""))
        found, why = _tried(lambda: stratification(problem))
        smaller, why_not = _tried(lambda: closures(problem))
        return page(
            "walls.html",
            large=is_large(request),
            document=canonical_text(problem),
            generic="" if found is None else _words(found.generic),
            walls=() if found is None else _walls(problem, found),
            strata=() if found is None else _strata(found),
            complete=found is not None and found.complete and len(found.walls) <= WALLS_SHOWN,
            proved=found is not None and found.proved,
            why=why,
            closures=() if smaller is None else _closures(problem, smaller),
            closures_complete=smaller is None or smaller.complete,
            why_no_closures=why_not,
        )

    response: Response = await request.app.state.work.run(work)
    return response


@router.post("/walls/onto")
async def onto(request: Request) -> Response:
    """The problem with one symbol solved for so that the values lie on a wall."""
    post = await read_post(request)

    def work() -> Response:
        problem = read_document(post.fields.get("document", ""))
        number, _, symbol = post.fields.get("onto", "").partition(" ")
        listed = stratification(problem, walls(problem)).walls
        if not (number.isascii() and number.isdigit() and len(number) < 6 and int(number) < len(listed)):
            raise Refused("There is no such wall.")
        placed = specialise(problem, listed[int(number)], symbol)
        words = f"The symbol {symbol} was solved for, so that {listed[int(number)].equation}."
        return page("operation.html", large=is_large(request), result=_Placed(words), problem=problem_context(placed))

    response: Response = await request.app.state.work.run(work)
    return response


@dataclass(frozen=True)
class _Placed:
    """What the page of a carried out operation says."""

    words: str
    condition: str = ""


def _tried(work: Callable[[], T]) -> tuple[T | None, str]:
    """The result, or None and why it was refused."""
    try:
        return work(), ""
    except Refused as refusal:
        return None, refusal.message


def _walls(problem: Problem, found: Stratification) -> tuple[WallContext, ...]:
    return tuple(
        WallContext(
            number,
            wall.equation,
            value_mathml(wall.value, problem.symbols),
            wall.holds,
            wall.criterion,
            symbols_to_solve(problem, wall),
        )
        for number, wall in enumerate(found.walls[:WALLS_SHOWN])
    )


def _strata(found: Stratification) -> tuple[StratumContext, ...]:
    return tuple(
        StratumContext(
            " and ".join(str(number + 1) for number in row.walls),
            _words(row.verdict),
            " + ".join(f"{count} × rank {rank}" if count > 1 else f"rank {rank}" for count, rank in row.splits),
            "two eigenvalues of one block become equal" if row.eigenvalues_meet else "",
            row.holds,
        )
        for row in found.rows
    )


def _closures(problem: Problem, found: Closures) -> tuple[ClosureContext, ...]:
    rows = []
    for row in found.rows:
        changes = []
        for change in row.changes:
            old = problem.poles[change.pole].blocks[change.block].residue[change.eigenvalue].jordan
            sizes = ("+".join(map(str, sizes)) for sizes in (old, change.jordan))
            changes.append(f"pole {change.pole + 1}, eigenvalue {change.eigenvalue + 1}: {' → '.join(sizes)}")
        rows.append(
            ClosureContext(
                tuple(changes),
                row.codimension,
                row.dimension,
                _words(row.additive),
                _words(row.multiplicative),
                canonical_text(row.problem),
            )
        )
    return tuple(rows)


def _words(verdict: Verdict | None) -> str:
    if verdict is None:
        return "not asked"
    answer = {True: "exists", False: "does not exist", None: "undecided"}[verdict.exists]
    return f"{answer} ({STATUS_WORDS[verdict.status]})"
