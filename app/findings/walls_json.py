"""Walls and closures of a problem as JSON data and as text; made on request, since they take longer than findings."""

from collections.abc import Iterator
from typing import Any

from app.exact.number import write_number
from app.existence.closures import closures
from app.existence.verdict import Verdict
from app.existence.walls import walls
from app.findings.types import WallJson
from app.local.problem import Problem
from app.local.writer import document


def walls_json(problem: Problem) -> dict[str, Any]:
    """The walls of a problem, with the generic verdict and how sure it is that there are no others.

    Raises Refused for ramified data and local monodromies.  Cost: that of ``existence/walls.py``.
    """
    found = walls(problem)
    listed: list[WallJson] = [
        {
            "equation": wall.equation,
            "vector": list(wall.vector),
            "criterion": wall.criterion,
            "value": write_number(wall.value, problem.symbols),
            "holds": wall.holds,
        }
        for wall in found.walls
    ]
    return {"generic": found.generic.exists, "complete": found.complete, "proved": found.proved, "walls": listed}


def closures_json(problem: Problem) -> dict[str, Any]:
    """The smaller classes in the closures of a problem's classes, each with its verdicts and its problem."""
    found = closures(problem)
    rows = [
        {
            "changes": [
                {"at": f"/poles/{c.pole}/blocks/{c.block}/residue/{c.eigenvalue}/jordan", "jordan": list(c.jordan)}
                for c in row.changes
            ],
            "codimension": row.codimension,
            "dimension": row.dimension,
            "additive": _exists(row.additive),
            "multiplicative": _exists(row.multiplicative),
            "problem": document(row.problem),
        }
        for row in found.rows
    ]
    return {"complete": found.complete, "rows": rows}


def walls_text(problem: Problem) -> str:
    """Walls and closures as lines of text, ending with a newline."""
    return "\n".join(_lines(problem)) + "\n"


def _lines(problem: Problem) -> Iterator[str]:
    found = walls_json(problem)
    generic = {True: "exists", False: "does not exist", None: "is undecided"}[found["generic"]]
    yield f"Walls (for generic eigenvalues an irreducible system {generic})"
    for number, wall in enumerate(found["walls"], start=1):
        here = "   <- the present values lie on it" if wall["holds"] else ""
        yield f"  {number}. {wall['equation']}   [{wall['criterion']}]{here}"
    if found["walls"] and not found["proved"]:
        yield "  That there are no others is a criterion that is checked but not proved."
    smaller = closures_json(problem)["rows"]
    if smaller:
        yield "Smaller classes in the closures"
    for row in smaller:
        changes = "; ".join(f"{c['at']} = {'+'.join(map(str, c['jordan']))}" for c in row["changes"])
        answers = ", ".join(
            f"{kind} {'exists' if row[kind]['exists'] else 'does not exist'}"
            for kind in ("additive", "multiplicative")
            if row[kind] is not None and row[kind]["exists"] is not None
        )
        yield f"  {changes}: dimension {row['dimension']}, {answers or 'undecided'}"


def _exists(verdict: Verdict | None) -> dict[str, Any] | None:
    return None if verdict is None else {"exists": verdict.exists, "status": verdict.status, "reason": verdict.reason}
