"""The guard: who may ask, how much, and what every response carries."""

import json

import pytest
from fastapi import FastAPI, Request
from starlette.testclient import TestClient
from starlette.websockets import WebSocketDisconnect

from app.errors import Busy, Failed, OutOfTime, Place, Refused, TooLarge
from app.web.guard import BODY_LIMIT, HEADERS, POLICY, Guard

BASE = "http://127.0.0.1:8400"
EXAMINE = "/api/examine"
DATA = {"type": "11,11,11"}
OWN_HOSTS = ["127.0.0.1:8400", "localhost:8400", "LOCALHOST:8400", "[::1]:8400"]
WRONG_HOSTS = [
    "evil.example",
    "evil.example:8400",
    "127.0.0.1.evil.example:8400",
    "localhost.evil.example:8400",
    "evil.example#127.0.0.1:8400",
    "127.0.0.1:8400@evil.example",
    "127.0.0.1:8401",
    "127.0.0.1",
    "localhost",
    "localhost.:8400",
    "127.0.0.2:8400",
    "0.0.0.0:8400",
    "[::]:8400",
    "[::1",
    "127.1:8400",
    "2130706433:8400",
    "127.0.0.1:8400:8400",
    "127.0.0.1:08400x",
    "127.0.0.1:",
    "",
    " ",
]
FOREIGN_ORIGINS = [
    "null",
    "http://evil.example",
    "http://evil.example:8400",
    "https://127.0.0.1:8400",
    "http://127.0.0.1:3000",
    "http://127.0.0.1",
    "http://localhost:8400",
    "http://127.0.0.1:8400.evil.example",
    "http://127.0.0.1:8400/",
    "",
]


def small_application():
    """Addresses that fail in every way, behind a guard for port 8400."""
    application = FastAPI(docs_url=None, redoc_url=None, openapi_url=None)

    @application.get("/page")
    async def page() -> str:
        return "page"

    @application.post("/page")
    async def posted() -> str:
        return "posted"

    @application.post("/api/length")
    async def length(request: Request) -> int:
        return len(await request.body())

    @application.get("/api/crash")
    async def crash() -> str:
        raise ZeroDivisionError("a secret detail")

    @application.get("/crash")
    async def crash_page() -> str:
        raise ZeroDivisionError("a secret detail <b>")

    application.add_middleware(Guard, port=8400)
    return application


@pytest.fixture
def guarded():
    with TestClient(small_application(), base_url=BASE) as client:
        yield client


def error_of(response):
    """The error of a response, after checking that it has the one shape."""
    assert response.headers["content-type"] == "application/json"
    data = response.json()
    assert set(data) == {"error"}
    error = data["error"]
    assert set(error) == {"kind", "message", "places"}
    assert isinstance(error["message"], str)
    assert error["message"]
    for place in error["places"]:
        assert set(place) == {"at", "message", "expected"}
    return error


# --- who


@pytest.mark.parametrize("host", OWN_HOSTS)
def test_own_hosts(guarded, host):
    assert guarded.get("/page", headers={"Host": host}).status_code == 200


@pytest.mark.parametrize("host", WRONG_HOSTS)
def test_other_hosts_are_refused(guarded, host):
    """DNS rebinding: the browser believes it talks to another site, and says so in Host."""
    for response in (guarded.get("/page", headers={"Host": host}), guarded.post("/page", headers={"Host": host})):
        assert response.status_code == 403
    assert error_of(guarded.get("/api/x", headers={"Host": host}))["kind"] == "forbidden"


def test_own_origin(guarded):
    assert guarded.post("/page", headers={"Origin": BASE}).status_code == 200
    headers = {"Host": "localhost:8400", "Origin": "http://localhost:8400"}
    assert guarded.post("/page", headers=headers).status_code == 200


def test_no_origin_is_accepted(guarded):
    assert guarded.post("/page").status_code == 200


@pytest.mark.parametrize("origin", FOREIGN_ORIGINS)
def test_foreign_origins_are_refused(guarded, origin):
    for method in ("GET", "POST", "OPTIONS"):
        assert guarded.request(method, "/page", headers={"Origin": origin}).status_code == 403
    assert error_of(guarded.post("/api/x", headers={"Origin": origin}))["kind"] == "forbidden"


NAVIGATION = {"Sec-Fetch-Mode": "navigate", "Sec-Fetch-Dest": "document"}


@pytest.mark.parametrize("site", ["cross-site", "same-site", "nonsense"])
def test_requests_from_other_sites_are_refused(guarded, site):
    headers = {"Sec-Fetch-Site": site}
    assert guarded.get("/page", headers=headers).status_code == 403
    assert guarded.post("/page", headers={**headers, **NAVIGATION}).status_code == 403
    assert guarded.get("/api/crash", headers={**headers, **NAVIGATION}).status_code == 403
    assert guarded.get("/page", headers={**headers, "Sec-Fetch-Mode": "no-cors"}).status_code == 403
    framed = {**headers, "Sec-Fetch-Mode": "navigate", "Sec-Fetch-Dest": "iframe"}
    assert guarded.get("/page", headers=framed).status_code == 403


def test_following_a_link_to_a_page_is_accepted(guarded):
    assert guarded.get("/page", headers={"Sec-Fetch-Site": "cross-site", **NAVIGATION}).status_code == 200


@pytest.mark.parametrize("site", ["same-origin", "none"])
def test_own_requests(guarded, site):
    assert guarded.post("/page", headers={"Sec-Fetch-Site": site, "Origin": BASE}).status_code == 200


@pytest.mark.parametrize("name", ["Host", "Origin", "Content-Length", "Sec-Fetch-Site"])
def test_a_deciding_header_given_twice_is_refused(guarded, name):
    value = {"Host": "127.0.0.1:8400", "Origin": BASE, "Content-Length": "0", "Sec-Fetch-Site": "none"}[name]
    response = guarded.get("/api/x", headers=[(name, value), (name, value)])
    assert response.status_code == 400
    assert error_of(response)["kind"] == "malformed"


def test_every_port_is_accepted_when_none_is_set():
    application = FastAPI()
    application.add_middleware(Guard)
    with TestClient(application, base_url="http://localhost:1234") as client:
        assert client.get("/").status_code == 404
        assert client.get("/", headers={"Host": "evil.example:1234"}).status_code == 403


def test_web_sockets_are_closed(client):
    with pytest.raises(WebSocketDisconnect) as caught, client.websocket_connect("/socket"):
        pass
    assert caught.value.code == 1008


# --- how much


def test_a_large_declared_body_is_refused_before_it_is_read(client):
    response = client.post(EXAMINE, content=b"", headers={"Content-Length": str(BODY_LIMIT + 1)})
    assert response.status_code == 413
    assert error_of(response)["kind"] == "too_large"
    assert client.post(EXAMINE, content=b"", headers={"Content-Length": "9" * 400}).status_code == 413


def test_a_large_undeclared_body_is_refused_by_counting(guarded):
    def pieces(size):
        yield b" " * (size - 60_000)
        yield b" " * 60_000

    assert guarded.post("/api/length", content=pieces(BODY_LIMIT)).json() == BODY_LIMIT
    response = guarded.post("/api/length", content=pieces(BODY_LIMIT + 1))
    assert response.status_code == 413
    assert error_of(response)["kind"] == "too_large"


def test_a_body_at_the_limit_is_read(client):
    body = json.dumps(DATA).encode()
    assert client.post(EXAMINE, content=body + b" " * (BODY_LIMIT - len(body))).status_code == 200
    assert client.post(EXAMINE, content=body + b" " * (BODY_LIMIT - len(body) + 1)).status_code == 413


@pytest.mark.parametrize("length", ["-1", "1e3", "+5", "0x10", "٣", "5 5"])
def test_a_length_that_is_no_number(guarded, length):
    response = guarded.get("/api/x", headers=[("Content-Length", length.encode())])
    assert response.status_code == 400
    assert error_of(response)["kind"] == "malformed"


def test_too_many_and_too_long_headers(guarded):
    many = [(f"X-{k}", "1") for k in range(101)]
    long = {"X-Long": "x" * 40_000}
    for headers in (many, long):
        response = guarded.get("/api/x", headers=headers)
        assert response.status_code == 413
        assert error_of(response)["kind"] == "too_large"
    assert guarded.get("/api/x?" + "q" * 9000).status_code == 413


def test_compressed_bodies_are_refused(guarded):
    assert guarded.post("/api/x", content=b"x", headers={"Content-Encoding": "gzip"}).status_code == 400


# --- what every response carries


def check_headers(response):
    assert response.headers["content-security-policy"] == POLICY
    for name, value in HEADERS:
        assert response.headers.get_list(name.decode()) == [value.decode()]
    assert "cache-control" in response.headers
    assert "server" not in response.headers


def test_headers_on_every_response(client, guarded):
    for response in (
        client.get("/nothing"),
        client.get("/api/nothing"),
        client.get("/static/nothing.css"),
        client.post(EXAMINE, json=DATA),
        client.post(EXAMINE, content=b"{"),
        client.get("/api/openapi.json"),
        client.get("/", headers={"Host": "evil.example"}),
        client.delete(EXAMINE),
        guarded.get("/crash"),
        guarded.get("/api/crash"),
        guarded.get("/page"),
    ):
        check_headers(response)


def test_the_policy_allows_nothing_inline_and_nothing_foreign():
    parts = dict(part.split(" ", 1) for part in POLICY.split("; "))
    assert parts["default-src"] == "'none'"
    assert set(parts.values()) == {"'none'", "'self'"}
    assert parts["base-uri"] == parts["frame-ancestors"] == "'none'"


def test_nothing_is_kept_but_static_files(client):
    assert client.post(EXAMINE, json=DATA).headers["cache-control"] == "no-store"
    assert client.get("/static/nothing.css").headers["cache-control"] == "no-cache"


# --- faults


def test_a_fault_shows_a_reference_and_nothing_else(guarded, caplog):
    response = guarded.get("/api/crash")
    assert response.status_code == 500
    error = error_of(response)
    assert error["kind"] == "failed"
    assert "secret" not in response.text
    reference = error["message"].rstrip(".").split()[-1]
    assert any(reference in record.getMessage() and record.exc_info for record in caplog.records)


def test_a_fault_on_a_page_is_a_page(guarded, caplog):
    response = guarded.get("/crash")
    assert response.status_code == 500
    assert response.headers["content-type"].startswith("text/html")
    assert 'id="message"' in response.text
    assert "secret" not in response.text


CASES = [
    (Refused("No.", (Place("/x", "wrong", "right"),)), 422, "refused"),
    (TooLarge("Large."), 413, "too_large"),
    (Busy("Busy."), 503, "busy"),
    (OutOfTime("Late."), 503, "out_of_time"),
    (Failed("a secret detail"), 500, "failed"),
]


@pytest.mark.parametrize(("refusal", "status", "kind"), CASES, ids=[kind for _, _, kind in CASES])
def test_refusals_raised_in_a_route(application, refusal, status, kind):
    @application.get("/api/raised")
    async def raised() -> None:
        raise refusal

    @application.get("/raised")
    async def raised_page() -> None:
        raise refusal

    with TestClient(application, base_url=BASE) as client:
        response = client.get("/api/raised")
        assert response.status_code == status
        error = error_of(response)
        assert error["kind"] == kind
        assert ("retry-after" in response.headers) == (status == 503)
        assert len(error["places"]) == len(refusal.places)
        page = client.get("/raised")
        assert page.status_code == status
        assert page.headers["content-type"].startswith("text/html")
        assert "secret" not in response.text + page.text
        check_headers(page)


def test_an_error_page_escapes_what_it_quotes(application):
    @application.get("/raised")
    async def raised() -> None:
        raise Refused("<script>alert(1)</script>", (Place("/<i>", "<b>", "<u>"),))

    with TestClient(application, base_url=BASE) as client:
        text = client.get("/raised").text
        for tag in ("<script>alert", "<i>", "<b>", "<u>"):
            assert tag not in text
        assert "&lt;script&gt;" in text


@pytest.mark.parametrize("path", ["/nothing", "/api/nothing"])
def test_unknown_addresses(client, path):
    response = client.get(path)
    assert response.status_code == 404
    if path.startswith("/api/"):
        assert error_of(response)["kind"] == "not_found"
    else:
        assert "nothing at this address" in response.text


def test_a_wrong_method_says_which_is_right(client):
    response = client.get(EXAMINE)
    assert response.status_code == 405
    assert error_of(response)["kind"] == "not_allowed"
    assert response.headers["allow"] == "POST"
