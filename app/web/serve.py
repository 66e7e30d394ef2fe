"""Serving: a port on the loopback interface, the server, the browser.

    serve(port, data, open_browser)   what ``python -m app`` runs; returns at Ctrl-C

If the port is taken, it is said by whom, and the next free one is used.
"""

import contextlib
import http.client
import json
import socket
import sys
import threading
import webbrowser
from collections.abc import Callable
from pathlib import Path

import uvicorn
from fastapi import FastAPI

from app.desk.folder import data_folder
from app.errors import Refused
from app.web.application import TITLE, Settings, create_application
from app.web.protocol import LONGEST_HEAD, Protocol

HOST = "127.0.0.1"
DEFAULT_PORT = 8400
_TRIES = 100
_HIGHEST_PORT = 65_535


def serve(port: int | None = None, data: Path | None = None, open_browser: bool = True) -> int:
    """Serve until Ctrl-C; prints the address on standard output.  Returns the exit status.

    Raises Refused when there is no port or the data folder cannot be used.
    """
    wanted = DEFAULT_PORT if port is None else port
    listener, taken_by = listen(wanted)
    with listener:
        served = listener.getsockname()[1]
        if taken_by:
            _say(f"Port {wanted} is taken by {taken_by}; port {served} is used instead.")
        application = create_application(Settings(data=data or data_folder(), port=served))
        if application.state.store.notice:
            _say(application.state.store.notice)
        _run(application, listener, lambda: _announce(f"http://{HOST}:{served}/", open_browser))
    return 0


def _announce(address: str, open_browser: bool) -> None:
    print(f"Polewright is at {address} (Ctrl-C ends it)", flush=True)
    if open_browser:
        threading.Thread(target=webbrowser.open, args=(address,), daemon=True).start()


def listen(wanted: int) -> tuple[socket.socket, str]:
    """A listening socket on the wanted port, or on the next free one, and by whom the wanted one is taken ("" if free).

    Port 0 is any free one.  Raises Refused when no port can be had.
    """
    if not 0 <= wanted <= _HIGHEST_PORT:
        raise Refused(f"A port is a number from 0 to {_HIGHEST_PORT}, not {wanted}.")
    taken_by = ""
    for port in range(wanted, min(wanted + _TRIES, _HIGHEST_PORT + 1)):
        try:
            return _bound(port), taken_by
        except OSError:
            if port == wanted:
                taken_by = occupant(port)
    raise Refused(f"No port from {wanted} on is free; choose another with --port.")


def _bound(port: int) -> socket.socket:
    listener = socket.socket(socket.AF_INET, socket.SOCK_STREAM)
    try:
        if sys.platform == "win32":  # there SO_REUSEADDR would let two programs share a port
            listener.setsockopt(socket.SOL_SOCKET, socket.SO_EXCLUSIVEADDRUSE, 1)
        else:
            listener.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        listener.bind((HOST, port))
        listener.listen(128)
    except OSError:
        listener.close()
        raise
    return listener


def occupant(port: int) -> str:
    """Who answers on a local port, in words: another Polewright is told by its description of itself."""
    connection = http.client.HTTPConnection(HOST, port, timeout=1.0)
    try:
        connection.request("GET", "/api/openapi.json")
        answer = connection.getresponse()
        described = json.loads(answer.read(1_000_000))
        if described["info"]["title"] == TITLE:
            return "another Polewright"
    except (OSError, http.client.HTTPException, ValueError, TypeError, LookupError):
        pass
    finally:
        connection.close()
    return "another program"


class _Server(uvicorn.Server):
    """Says where it is once it answers, and once Ctrl-C is in its hands: before, Ctrl-C could get lost in an import."""

    def __init__(self, config: uvicorn.Config, announce: Callable[[], None]) -> None:
        super().__init__(config)
        self._announce = announce

    async def startup(self, sockets: list[socket.socket] | None = None) -> None:
        """Start, then announce."""
        await super().startup(sockets)
        if self.started:
            self._announce()


def _run(application: FastAPI, listener: socket.socket, announce: Callable[[], None]) -> None:
    config = uvicorn.Config(
        application,
        http=Protocol,
        ws="none",
        log_level="critical",  # faults are logged by the guard; the rest is about requests cut off at the end
        access_log=False,
        server_header=False,
        proxy_headers=False,
        timeout_graceful_shutdown=1,
        h11_max_incomplete_event_size=LONGEST_HEAD,
    )
    with contextlib.suppress(KeyboardInterrupt):  # the server has shut down by then and passes the signal on
        _Server(config, announce).run(sockets=[listener])


def _say(sentence: str) -> None:
    print(sentence, file=sys.stderr, flush=True)
