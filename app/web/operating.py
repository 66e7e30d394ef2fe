"""Pages of operations on a problem: what is offered at a vertex, what an operation gives, the descent played.

    POST /operations   a problem document and a vertex: the operations there, each with its condition; without a vertex
                       the operations on the whole problem, and the readings of its quiver
    POST /operation    carry one out: the new problem, what it does to the connection, a button that takes it over
    POST /descent      the descent at one step: forward, back, the problem of the step

Every page carries its problem as a document, so nothing on the desk changes until somebody takes a problem over.
"""

from collections.abc import Mapping
from dataclasses import dataclass

from fastapi import APIRouter, Request
from markupsafe import Markup
from starlette.responses import Response

from app.drawing.layout import place
from app.drawing.svg import svg
from app.errors import Refused
from app.findings.findings import Findings, examine_cached
from app.local.document import read_document
from app.local.problem import Problem
from app.local.shorthand import to_shorthand
from app.local.writer import canonical_text
from app.operations.offers import all_operations
from app.operations.playing import play
from app.operations.poles import is_regular
from app.operations.readings import Impossible, Reading, readings
from app.web.contexts import FindingsContext, findings_context
from app.web.forms import read_post
from app.web.rendering import page
from app.web.views import is_large
from app.web.whole_operations import KINDS, operated

router = APIRouter()


@dataclass(frozen=True)
class ProblemContext:
    """A problem set out: its document, shorthand, picture and findings."""

    document: str
    shorthand: str
    rank: int
    picture: Markup
    findings: FindingsContext


@dataclass(frozen=True)
class ReadingContext:
    """One reading: the part at infinity, its document ("" when impossible), words, shorthand, rank."""

    part: str
    document: str
    words: str
    shorthand: str
    rank: int


@router.post("/operations")
async def offers(request: Request) -> Response:
    """The operations offered at a vertex."""
    post = await read_post(request)

    def work() -> Response:
        problem = read_document(post.fields.get("document", ""))
        vertex = post.fields.get("vertex", "")
        if not vertex:
            return _whole(request, problem, {}, "")
        found = all_operations(problem, vertex)
        shown = problem_context(problem, vertex)
        return page("operations.html", large=is_large(request), offers=found, vertex=vertex, problem=shown)

    response: Response = await request.app.state.work.run(work)
    return response


@router.post("/operation")
async def operate(request: Request) -> Response:
    """Carry out one operation and show the problem that it gives."""
    post = await read_post(request)

    def work() -> Response:
        problem = read_document(post.fields.get("document", ""))
        key, _, vertices = post.fields.get("operation", "").partition(" ")
        if key in KINDS:
            try:
                result = operated(problem, key, post.fields)
            except Refused as refusal:
                return _whole(request, problem, post.fields, refusal.message)
        else:
            result = operated(problem, key, {"vertices": vertices})
        return page("operation.html", large=is_large(request), result=result, problem=problem_context(result.problem))

    response: Response = await request.app.state.work.run(work)
    return response


@router.post("/descent")
async def descent(request: Request) -> Response:
    """One step of the descent."""
    post = await read_post(request)

    def work() -> Response:
        problem = read_document(post.fields.get("document", ""))
        played = play(problem)
        step = min(_number(post.fields, "step"), len(played.stages) - 1)
        stage = played.stages[step]
        return page(
            "descent.html",
            large=is_large(request),
            document=canonical_text(problem),
            step=step,
            ranks=tuple(one.problem.rank for one in played.stages),
            stage=stage,
            end=played.end,
            problem=problem_context(stage.problem),
        )

    response: Response = await request.app.state.work.run(work)
    return response


def _whole(request: Request, problem: Problem, typed: Mapping[str, str], message: str) -> Response:
    """The operations on the whole problem, with what was typed, and the readings of its quiver."""
    try:
        found = tuple(_reading(one) for one in readings(problem))
        why = ""
    except Refused as refusal:
        found, why = (), refusal.message
    return page(
        "whole_operations.html",
        422 if message else 200,
        large=is_large(request),
        typed=typed,
        message=message,
        readings=found,
        no_readings=why,
        drops=tuple(number for number in range(len(problem.poles)) if is_regular(problem, number)),
        poles=len(problem.poles),
        problem=problem_context(problem),
    )


def _reading(found: Reading | Impossible) -> ReadingContext:
    part = ", ".join(found.part) or "none"
    if isinstance(found, Impossible):
        return ReadingContext(part, "", found.reason, "", 0)
    shorthand = to_shorthand(found.problem) or ""
    return ReadingContext(part, canonical_text(found.problem), found.words, shorthand, found.problem.rank)


def _number(fields: Mapping[str, str], name: str) -> int:
    text = fields.get(name, "0")
    if not (text.isascii() and text.isdigit() and len(text) < 6):
        raise Refused("The step is no number.")
    return int(text)


def problem_context(problem: Problem, selected: str | None = None) -> ProblemContext:
    """A problem set out for a page.  Cost: that of its findings and its picture."""
    findings = examine_cached(problem)
    return ProblemContext(
        document=canonical_text(problem),
        shorthand=to_shorthand(problem) or "",
        rank=problem.rank,
        picture=_picture(findings, selected),
        findings=findings_context(findings),
    )


def _picture(findings: Findings, selected: str | None) -> Markup:
    if findings.quiver is None:
        return Markup("")
    description = f"{len(findings.quiver.vertices)} vertices; hexagons are core vertices, discs leg vertices."
    title = f"Quiver of type {findings.support_type}"
    return Markup(
        svg(
            place(findings.quiver, symbols=findings.problem.symbols),
            title=title,
            description=description,
            selected=selected,
        )
    )
