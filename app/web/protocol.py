"""Requests that are not even HTTP get the one error shape too.

The server's protocol answers them before any application sees them; here only that answer is replaced.
"""

import h11
from uvicorn.protocols.http.h11_impl import H11Protocol

from app.errors import Malformed
from app.web.guard import HEADERS
from app.web.refusals import error_json

LONGEST_HEAD = 65_536


class Protocol(H11Protocol):
    """HTTP/1.1 whose answer to a malformed request is JSON like every other error under /api."""

    def send_400_response(self, msg: str) -> None:
        """Answer a request that cannot be understood, and hang up."""
        body = error_json(Malformed("This is no HTTP request."))
        headers = [
            (b"content-type", b"application/json"),
            (b"content-length", str(len(body)).encode()),
            (b"cache-control", b"no-store"),
            (b"connection", b"close"),
            *HEADERS,
        ]
        try:
            response = h11.Response(status_code=400, headers=headers, reason=b"Bad Request")
            for event in (response, h11.Data(data=body), h11.EndOfMessage()):
                self.transport.write(self.conn.send(event) or b"")
        except h11.LocalProtocolError:
            pass  # an answer has begun already; there is nothing more to say on this connection
        self.transport.close()
