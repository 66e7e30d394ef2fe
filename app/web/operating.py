"""Pages of operations on a problem: what is offered at a vertex, what an operation gives, the descent played.

    POST /operations   a problem document and a vertex: the operations there, each with its condition
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
from app.operations.offers import all_operations, carry_out
from app.operations.playing import play
from app.web.contexts import FindingsContext, findings_context
from app.web.forms import read_post
from app.web.rendering import page
from app.web.views import is_large

router = APIRouter()


@dataclass(frozen=True)
class ProblemContext:
    """A problem set out: its document, shorthand, picture and findings."""

    document: str
    shorthand: str
    rank: int
    picture: Markup
    findings: FindingsContext


@router.post("/operations")
async def offers(request: Request) -> Response:
    """The operations offered at a vertex."""
    post = await read_post(request)

    def work() -> Response:
        problem = read_document(post.fields.get("document", ""))
        vertex = post.fields.get("vertex", "")
        found = all_operations(problem, vertex)
        shown = _problem(problem, vertex)
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
        result = carry_out(problem, key, vertices.split())
        return page("operation.html", large=is_large(request), result=result, problem=_problem(result.problem))

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
            problem=_problem(stage.problem),
        )

    response: Response = await request.app.state.work.run(work)
    return response


def _number(fields: Mapping[str, str], name: str) -> int:
    text = fields.get(name, "0")
    if not (text.isascii() and text.isdigit() and len(text) < 6):
        raise Refused("The step is no number.")
    return int(text)


def _problem(problem: Problem, selected: str | None = None) -> ProblemContext:
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
    return Markup(svg(place(findings.quiver), title=title, description=description, selected=selected))
