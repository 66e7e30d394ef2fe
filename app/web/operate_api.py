"""Operations, walls and closures under /api.

POST /api/operate   {"problem": …, "operation": KIND, "arguments": {name: text}} → problem, words, condition
POST /api/walls     a problem document, or {"type": SHORTHAND} → walls of its generic verdict
POST /api/closures  the same → smaller classes in the closures, with their verdicts
"""

from typing import Any

from fastapi import APIRouter, Request
from starlette.responses import JSONResponse, Response

from app.errors import Place, Refused
from app.findings.walls_json import closures_json, walls_json
from app.local.document import parse_json, problem_from_json
from app.local.writer import document
from app.web.api import problem_in
from app.web.whole_operations import operated

router = APIRouter(prefix="/api")


@router.post("/operate", response_class=Response)
async def operate(request: Request) -> Response:
    """Carry out one operation: moebius, twist, add, drop, or one that is offered at a vertex."""
    body = await request.body()
    answer: dict[str, Any] = await request.app.state.work.run(_operated, body)
    return JSONResponse(answer)


@router.post("/walls", response_class=Response)
async def walls_of(request: Request) -> Response:
    """The walls of a problem: equations between eigenvalues on which the generic verdict changes."""
    body = await request.body()
    answer: dict[str, Any] = await request.app.state.work.run(_walls, body)
    return JSONResponse(answer)


@router.post("/closures", response_class=Response)
async def closures_of(request: Request) -> Response:
    """The smaller classes in the closures of a problem's classes, with the verdict for each."""
    body = await request.body()
    answer: dict[str, Any] = await request.app.state.work.run(_closures, body)
    return JSONResponse(answer)


def _operated(body: bytes) -> dict[str, Any]:
    data = parse_json(body)
    if not isinstance(data, dict) or not data.keys() <= {"problem", "operation", "arguments"} or "problem" not in data:
        place = Place("", "this is no request for an operation", '{"problem": …, "operation": …, "arguments": {…}}')
        raise Refused("The operation cannot be read.", (place,))
    kind, arguments = data.get("operation"), data.get("arguments", {})
    if not isinstance(kind, str) or not isinstance(arguments, dict):
        raise Refused("The operation cannot be read.", (Place("/operation", "a text and an object are expected"),))
    wrong = [name for name, text in arguments.items() if not isinstance(text, str)]
    if wrong:
        raise Refused("An argument is no text.", (Place(f"/arguments/{wrong[0]}", "this is no text", "a string"),))
    result = operated(problem_from_json(data["problem"]), kind, arguments)
    return {"problem": document(result.problem), "words": result.words, "condition": result.condition}


def _walls(body: bytes) -> dict[str, Any]:
    return walls_json(problem_in(body))


def _closures(body: bytes) -> dict[str, Any]:
    return closures_json(problem_in(body))
