"""The guard: what every request meets first and every response passes last.

Requests.  A page on any site can make this browser send requests to a local address, and a hostile name server can
point its own name at 127.0.0.1.  Therefore: Host must be a loopback name with the served port; an Origin must be the
very address served; a request that the browser marks as coming from another site, or from another port of this
machine, is refused, except for somebody following a link to a page.  Sizes are limited before anything is read: by
Content-Length where it is given, and by counting.

Responses.  Security headers on every one: nothing inline, nothing foreign, no framing, no sniffing, nothing kept.
What fails unexpectedly inside becomes the one error shape, with a reference to the log.

Pure ASGI: it adds no task and no buffer to a response.
"""

import re
from collections.abc import Sequence

from starlette.requests import ClientDisconnect
from starlette.types import ASGIApp, Message, Receive, Scope, Send

from app.errors import Forbidden, Malformed, TooLarge
from app.web.refusals import is_api, log_fault, response_for

BODY_LIMIT = 2_000_000
HEADER_COUNT_LIMIT = 100
HEADER_SIZE_LIMIT = 32_768
ADDRESS_LIMIT = 8_192
POLICY = "; ".join(
    (
        "default-src 'none'",
        "script-src 'self'",
        "style-src 'self'",
        "img-src 'self'",
        "font-src 'self'",
        "connect-src 'self'",
        "form-action 'self'",
        "base-uri 'none'",
        "frame-ancestors 'none'",
    )
)
# Referrer-Policy is same-origin and not no-referrer: with the latter browsers send "Origin: null" with our own forms.
HEADERS: Sequence[tuple[bytes, bytes]] = (
    (b"content-security-policy", POLICY.encode()),
    (b"x-content-type-options", b"nosniff"),
    (b"x-frame-options", b"DENY"),
    (b"referrer-policy", b"same-origin"),
    (b"cross-origin-opener-policy", b"same-origin"),
    (b"cross-origin-resource-policy", b"same-origin"),
)
_HOST = re.compile(r"(?:127\.0\.0\.1|localhost|\[::1\])(?::([0-9]{1,5}))?", re.IGNORECASE | re.ASCII)
_SINGLE = (b"host", b"origin", b"content-length", b"content-type", b"sec-fetch-site", b"sec-fetch-mode")
_HTTP_PORT = 80


class Guard:
    """ASGI middleware.  ``port``: the served port, or None to accept every port in Host (tests)."""

    def __init__(self, app: ASGIApp, port: int | None = None) -> None:
        self.app = app
        self.port = port

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Check the request, pass it on, and see to the response."""
        if scope["type"] == "lifespan":
            await self.app(scope, receive, send)
        elif scope["type"] == "http":
            await self._http(scope, receive, send)
        elif scope["type"] == "websocket":
            await send({"type": "websocket.close", "code": 1008})

    async def _http(self, scope: Scope, receive: Receive, send: Send) -> None:
        started = False

        async def send_with_headers(message: Message) -> None:
            nonlocal started
            if message["type"] == "http.response.start":
                started = True
                message = {**message, "headers": _completed(message.get("headers", ()), scope["path"])}
            await send(message)

        try:
            self._check(scope)
            await self.app(scope, _counted(receive), send_with_headers)
        except ClientDisconnect:
            return
        except Exception as fault:
            if started:
                log_fault(fault)
                raise
            await response_for(fault, scope["path"])(scope, receive, send_with_headers)

    def _check(self, scope: Scope) -> None:
        headers: list[tuple[bytes, bytes]] = scope["headers"]
        _check_sizes(scope, headers)
        single = _single_headers(headers)
        host = single.get(b"host", "")
        match = _HOST.fullmatch(host)
        if match is None or self.port not in (None, int(match[1] or _HTTP_PORT)):
            raise Forbidden("This program answers only to its own local address.")
        origin = single.get(b"origin")
        if origin is not None and origin.lower() != f"{scope.get('scheme', 'http')}://{host}".lower():
            raise Forbidden("This request comes from another site.")
        if single.get(b"sec-fetch-site", "none") not in ("none", "same-origin") and not _follows_link(scope, single):
            raise Forbidden("This request comes from another site.")
        length = single.get(b"content-length")
        if length is not None:
            if not (length.isascii() and length.isdigit()):
                raise Malformed("Content-Length is no number.")
            if len(length) > 15 or int(length) > BODY_LIMIT:
                raise TooLarge(f"The body of the request has more than {BODY_LIMIT:,} bytes.")


def _check_sizes(scope: Scope, headers: Sequence[tuple[bytes, bytes]]) -> None:
    if len(headers) > HEADER_COUNT_LIMIT:
        raise TooLarge(f"The request has more than {HEADER_COUNT_LIMIT} headers.")
    if sum(len(name) + len(value) for name, value in headers) > HEADER_SIZE_LIMIT:
        raise TooLarge(f"The headers of the request have more than {HEADER_SIZE_LIMIT:,} bytes.")
    if len(scope.get("raw_path") or b"") + len(scope.get("query_string", b"")) > ADDRESS_LIMIT:
        raise TooLarge(f"The address has more than {ADDRESS_LIMIT:,} bytes.")


def _single_headers(headers: Sequence[tuple[bytes, bytes]]) -> dict[bytes, str]:
    """The headers that decide something here.  One that is given twice could be read in two ways: refused."""
    found: dict[bytes, str] = {}
    for name, value in headers:
        if name in _SINGLE:
            if name in found:
                raise Malformed(f"The header {name.decode('ascii')} is given twice.")
            found[name] = value.decode("latin-1").strip()
        elif name == b"content-encoding" and value.strip().lower() not in (b"", b"identity"):
            raise Malformed("The body of the request is compressed; send it as it is.")
    return found


def _follows_link(scope: Scope, single: dict[bytes, str]) -> bool:
    """Whether somebody opens one of our pages from elsewhere: that reads nothing for the other site."""
    navigates = single.get(b"sec-fetch-mode") == "navigate" and _destination(scope) == "document"
    return scope["method"] in ("GET", "HEAD") and navigates and not is_api(scope["path"])


def _destination(scope: Scope) -> str:
    values = [value for name, value in scope["headers"] if name == b"sec-fetch-dest"]
    return values[0].decode("latin-1") if len(values) == 1 else ""


def _counted(receive: Receive) -> Receive:
    """``receive`` that counts the body and refuses to go on beyond the limit."""
    size = 0

    async def counted() -> Message:
        nonlocal size
        message = await receive()
        if message["type"] == "http.request":
            size += len(message.get("body", b""))
            if size > BODY_LIMIT:
                raise TooLarge(f"The body of the request has more than {BODY_LIMIT:,} bytes.")
        return message

    return counted


def _completed(headers: Sequence[tuple[bytes, bytes]], path: str) -> list[tuple[bytes, bytes]]:
    """The response's headers with ours.  Ours win, except that a response may say how long it may be kept."""
    ours = {name for name, _ in HEADERS}
    kept = [(name, value) for name, value in headers if name.lower() not in ours]
    if not any(name.lower() == b"cache-control" for name, _ in kept):
        kept.append((b"cache-control", b"no-cache" if path.startswith("/static/") else b"no-store"))
    return [*kept, *HEADERS]
