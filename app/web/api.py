"""JSON under /api: the same functions as the command line and the page, and the same answers.

    POST /api/examine         a problem document, or {"type": SHORTHAND} → findings
    GET  /api/schema/{name}   JSON Schema of a document or result

The body is read as it is, whatever its declared type, by the strict reader of documents.
"""

import json
from typing import Any

from fastapi import APIRouter, Request
from starlette.responses import Response

from app.errors import Place, Refused
from app.findings.findings import examine_cached
from app.findings.schema import NAMES, schema
from app.local.document import problem_from_json
from app.local.json_reader import read_json
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand

router = APIRouter(prefix="/api")

_ERROR_CODES = {
    400: "not JSON",
    403: "wrong Host or foreign Origin",
    413: "over a size limit",
    422: "refused, with every fault at its place",
    503: "no capacity or out of time; Retry-After says when to come again",
}
_ERROR_SCHEMA = {"application/json": {"schema": {"$ref": "/api/schema/error"}}}
_ERRORS: dict[int | str, dict[str, Any]] = {
    code: {"description": text, "content": _ERROR_SCHEMA} for code, text in _ERROR_CODES.items()
}
_EXAMINE_BODY = {
    "requestBody": {
        "required": True,
        "content": {
            "application/json": {
                "schema": {
                    "anyOf": [
                        {"$ref": "/api/schema/problem"},
                        {
                            "type": "object",
                            "properties": {"type": {"type": "string", "description": "a shorthand: 21,111,111"}},
                            "required": ["type"],
                            "additionalProperties": False,
                        },
                    ]
                }
            }
        },
    }
}
_FINDINGS: dict[int | str, dict[str, Any]] = {
    200: {"description": "findings", "content": {"application/json": {"schema": {"$ref": "/api/schema/findings"}}}}
}


@router.post("/examine", responses={**_FINDINGS, **_ERRORS}, openapi_extra=_EXAMINE_BODY, response_class=Response)
async def examine(request: Request) -> Response:
    """Findings of a problem: verdicts with certificates, quiver, figures, descent."""
    body = await request.body()
    text: bytes = await request.app.state.work.run(examined, body)
    return Response(text, media_type="application/json")


def examined(body: bytes) -> bytes:
    """The findings of the problem in a body, as JSON text.

    Raises the refusals of reading.  Cost: that of the examination, unless its problem is in the cache.
    """
    findings = examine_cached(problem_in(body))
    return json.dumps(findings.as_json(), ensure_ascii=False).encode()


def problem_in(body: bytes) -> Problem:
    """The problem of a body: a document, or an object with the one key "type".

    Raises Malformed, Refused, TooLarge.
    """
    data, faults = read_json(body)
    if not (isinstance(data, dict) and data.keys() == {"type"}):
        return problem_from_json(data, faults)
    faults.raise_if_any()
    shorthand = data["type"]
    if not isinstance(shorthand, str):
        place = Place("/type", "A shorthand is a text", 'for example "21,111,111"')
        raise Refused("The type is no shorthand (at /type).", (place,))
    return problem_from_shorthand(shorthand)


@router.get("/schema/{name}", responses={404: {"description": "no such schema", "content": _ERROR_SCHEMA}})
async def schema_of(name: str) -> dict[str, Any]:
    """The JSON Schema (draft 2020-12) of a document or result: problem, findings, error."""
    return schema(name)


def all_schemas() -> dict[str, dict[str, Any]]:
    """Every schema by name."""
    return {name: schema(name) for name in NAMES}
