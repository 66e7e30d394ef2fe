"""Every refusal and every fault as a response of one shape.

Under /api: ``{"error": {"kind": …, "message": …, "places": […]}}``; elsewhere a page with the same words.  The
framework's own errors (unknown address, wrong method, …) are translated here, so that there is no other shape.
A fault of the program shows a reference to the log and nothing else.
"""

import json
import logging
import secrets
from collections.abc import Mapping
from html import escape

from jinja2 import TemplateNotFound
from starlette.exceptions import HTTPException
from starlette.requests import Request
from starlette.responses import HTMLResponse, Response

from app.errors import (
    Busy,
    Failed,
    Forbidden,
    Malformed,
    NotAllowed,
    NotFound,
    OutOfTime,
    PolewrightError,
    Refused,
    TooLarge,
)
from app.web.rendering import render

STATUS: Mapping[type[PolewrightError], int] = {
    Malformed: 400,
    Forbidden: 403,
    NotFound: 404,
    NotAllowed: 405,
    TooLarge: 413,
    Refused: 422,
    Failed: 500,
    OutOfTime: 503,
    Busy: 503,
}
RETRY_AFTER = "2"
_log = logging.getLogger("polewright.web")


def status_of(refusal: PolewrightError) -> int:
    """The HTTP status of a refusal."""
    return STATUS.get(type(refusal), 500)


def response_for(error: Exception, path: str, headers: Mapping[str, str] | None = None) -> Response:
    """The response that says a refusal: JSON for an address under /api, else a page.

    Anything else than a refusal, and ``Failed``, is a fault of the program: it goes to the log, and only the
    reference leaves the program.
    """
    reference = ""
    if isinstance(error, PolewrightError) and not isinstance(error, Failed):
        refusal = error
    else:
        reference = log_fault(error)
        refusal = Failed(f"The program failed here; its log has the details under {reference}.")
    status = status_of(refusal)
    sent = dict(headers or {})
    if status == 503:
        sent["Retry-After"] = RETRY_AFTER
    if is_api(path):
        return Response(error_json(refusal), status, sent, media_type="application/json")
    return HTMLResponse(_page(refusal, status, reference), status, sent)


def is_api(path: str) -> bool:
    """Whether an address belongs to the JSON interface."""
    return path == "/api" or path.startswith("/api/")


def error_json(refusal: PolewrightError) -> bytes:
    """The one error shape."""
    return json.dumps({"error": refusal.as_json()}, ensure_ascii=False).encode("utf-8", "backslashreplace")


def log_fault(fault: BaseException) -> str:
    """Write a fault with its traceback to the log, under a new reference, which is returned."""
    reference = secrets.token_hex(4)
    _log.error("fault %s", reference, exc_info=fault)
    return reference


def _page(refusal: PolewrightError, status: int, reference: str) -> str:
    try:
        return render(
            "error.html",
            status=status,
            kind=refusal.kind,
            message=refusal.message,
            places=refusal.places,
            reference=reference,
        )
    except TemplateNotFound:
        return _plain_page(refusal)
    except Exception as fault:  # an error page that fails must not hide the error
        log_fault(fault)
        return _plain_page(refusal)


def _plain_page(refusal: PolewrightError) -> str:
    items = "".join(f"<li>{escape(p.at)}: {escape(p.message)} {escape(p.expected)}</li>" for p in refusal.places)
    return (
        '<!DOCTYPE html><html lang="en"><head><meta charset="utf-8"><title>Polewright</title></head><body><main>'
        f'<h1>Polewright</h1><p id="message">{escape(refusal.message)}</p><ul>{items}</ul>'
        '<p><a href="/">To the desk</a></p></main></body></html>'
    )


def translated(error: HTTPException) -> PolewrightError:
    """A framework error as a refusal of ours."""
    sentence = f"The request was not accepted ({error.status_code})."
    if error.status_code == 404:
        return NotFound("There is nothing at this address.")
    if error.status_code == 405:
        return NotAllowed("This address does not take this method.")
    if error.status_code == 413:
        return TooLarge("The body of the request is too large.")
    if error.status_code == 403:
        return Forbidden(sentence)
    if error.status_code == 503:
        return Busy(sentence)
    if error.status_code == 422:
        return Refused(sentence)
    if error.status_code < 500:
        return Malformed(sentence)
    return Failed(sentence)


async def on_refusal(request: Request, error: Exception) -> Response:
    """Handler for the refusals of the program."""
    return response_for(error, request.url.path)


async def on_framework_error(request: Request, error: Exception) -> Response:
    """Handler for the framework's errors."""
    if not isinstance(error, HTTPException):
        return response_for(error, request.url.path)
    allow = {k: v for k, v in (error.headers or {}).items() if k.lower() == "allow"}
    return response_for(translated(error), request.url.path, allow)


async def on_validation_error(request: Request, error: Exception) -> Response:
    """Handler for parameters the framework refused.  Its wording is not passed on: it quotes the input at length."""
    return response_for(Refused("A parameter of the request is missing or of the wrong type."), request.url.path)
