"""Hostile bytes on the wire: no fault of the program, one error shape, and the server stays alive."""

import contextlib
import json
import random
import socket

import pytest

CRLF = b"\r\n"


def talk(port, data, *, pieces=None, half_close=False, timeout=10.0):
    """Send bytes as they are and return everything that comes back.

    ``half_close`` tells the server that no more will come; it hangs up then, perhaps before its answer is sent.
    """
    with socket.create_connection(("127.0.0.1", port), timeout=timeout) as connection:
        with contextlib.suppress(ConnectionError):
            connection.sendall(data)
            for piece in pieces or ():
                connection.sendall(piece)
            if half_close:
                connection.shutdown(socket.SHUT_WR)
        received = bytearray()
        with contextlib.suppress(ConnectionError):
            while chunk := connection.recv(65_536):
                received += chunk
        return bytes(received)


def split(answer):
    """Status, headers and body of the first response."""
    head, _, body = answer.partition(CRLF + CRLF)
    lines = head.split(CRLF)
    status = int(lines[0].split()[1])
    headers = {}
    for line in lines[1:]:
        name, _, value = line.partition(b":")
        headers[name.decode("latin-1").lower()] = value.decode("latin-1").strip()
    return status, headers, body


def check_error(answer, *statuses):
    """An error of the one shape with the security headers, none of them a fault of the program."""
    status, headers, body = split(answer)
    assert status in statuses, answer[:300]
    assert status < 500
    assert headers["x-content-type-options"] == "nosniff"
    assert "content-security-policy" in headers
    assert "server" not in headers
    if headers["content-type"] == "application/json":
        error = json.loads(body[: int(headers["content-length"])])["error"]
        assert set(error) == {"kind", "message", "places"}
    else:
        assert headers["content-type"].startswith("text/html")
        assert b'id="message"' in body


def head(port, line="POST /api/examine HTTP/1.1", host=None, **more):
    """A request's head; ``more`` are headers with _ for -."""
    lines = [line, f"Host: {host or f'127.0.0.1:{port}'}"]
    lines += [f"{name.replace('_', '-')}: {value}" for name, value in more.items()]
    return "\r\n".join([*lines, "Connection: close", "", ""]).encode("latin-1")


def alive(port):
    body = b'{"type": "11,11,11"}'
    status, _, text = split(talk(port, head(port, Content_Length=len(body)) + body))
    return status == 200 and json.loads(text)["rank"] == 2


def test_an_honest_request(server):
    assert alive(server.port)


@pytest.mark.parametrize(
    "host", ["evil.example", "127.0.0.1:1", "", "localhost@evil.example", "127.0.0.1.evil.example"]
)
@pytest.mark.parametrize("line", ["GET / HTTP/1.1", "POST /api/examine HTTP/1.1", "GET /api/openapi.json HTTP/1.1"])
def test_wrong_host(server, host, line):
    answer = talk(server.port, f"{line}\r\nHost: {host}\r\nContent-Length: 0\r\nConnection: close\r\n\r\n".encode())
    check_error(answer, 403)


def test_a_name_pointed_at_this_machine(server):
    """DNS rebinding, with the right port."""
    check_error(talk(server.port, head(server.port, host=f"rebound.example:{server.port}")), 403)


def test_no_host(server):
    check_error(talk(server.port, b"GET / HTTP/1.0\r\n\r\n"), 403)
    check_error(talk(server.port, b"GET / HTTP/1.1\r\n\r\n"), 400)


def test_two_hosts(server):
    check_error(talk(server.port, head(server.port, host=f"127.0.0.1:{server.port}\r\nHost: evil.example")), 400)


@pytest.mark.parametrize("origin", ["null", "http://evil.example", "http://localhost:3000", "file://"])
def test_foreign_origin(server, origin):
    check_error(talk(server.port, head(server.port, Origin=origin, Content_Length=0)), 403)


@pytest.mark.parametrize("site", ["cross-site", "same-site"])
def test_cross_site(server, site):
    check_error(talk(server.port, head(server.port, Sec_Fetch_Site=site, Content_Length=0)), 403)
    answer = talk(server.port, head(server.port, "POST /desk HTTP/1.1", Sec_Fetch_Site=site, Sec_Fetch_Mode="navigate"))
    check_error(answer, 403)


def test_a_huge_chunked_body(server):
    """Twenty megabytes without a length: refused by counting; the answer comes although the body goes on."""
    chunk = b"%x\r\n" % 65_536 + b" " * 65_536 + CRLF
    answer = talk(server.port, head(server.port, Transfer_Encoding="chunked"), pieces=[chunk] * 320)
    if answer:  # the connection may be cut while we still send; that is an answer too
        check_error(answer, 413)
    assert alive(server.port)


def test_a_huge_declared_body(server):
    check_error(talk(server.port, head(server.port, Content_Length=10**12)), 413)


def test_a_body_that_never_comes(server):
    talk(server.port, head(server.port, Content_Length=1000) + b"{", half_close=True)
    assert alive(server.port)


def test_length_and_chunks_together(server):
    """Request smuggling: two statements of the length.  h11 takes the chunks, as RFC 9112 says."""
    body = b'5\r\n{"typ\r\n0\r\n\r\n'
    answer = talk(server.port, head(server.port, Content_Length=3, Transfer_Encoding="chunked") + body)
    check_error(answer, 400)


MALFORMED = {
    "nothing HTTP": b"\x16\x03\x01\x02\x00\x01\x00\x01\xfc\x03\x03",
    "no version": b"GET /\r\n\r\n",
    "wrong version": b"GET / HTTP/9.9\r\nHost: x\r\nConnection: close\r\n\r\n",
    "bare line feeds in a header": b"GET / HTTP/1.1\r\nHost: 127.0.0.1\nX: y\x00\r\n\r\n",
    "a null in a header": b"GET / HTTP/1.1\r\nHost: 127.0.0.1\r\nX: a\x00b\r\n\r\n",
    "a blank before the colon": b"GET / HTTP/1.1\r\nHost : 127.0.0.1\r\n\r\n",
    "high bytes in the address": b"GET /\xff\xfe HTTP/1.1\r\nHost: 127.0.0.1\r\n\r\n",
    "an endless header": b"GET / HTTP/1.1\r\nHost: 127.0.0.1\r\nX: " + b"x" * 200_000,
    "an endless address": b"GET /" + b"x" * 200_000,
    "a length in words": b"POST /api/examine HTTP/1.1\r\nHost: 127.0.0.1\r\nContent-Length: many\r\n\r\n",
    "a negative length": b"POST /api/examine HTTP/1.1\r\nHost: 127.0.0.1\r\nContent-Length: -1\r\n\r\n",
    "two lengths": b"POST / HTTP/1.1\r\nHost: 127.0.0.1\r\nContent-Length: 1\r\nContent-Length: 2\r\n\r\nab",
    "an unknown transfer coding": b"POST / HTTP/1.1\r\nHost: 127.0.0.1\r\nTransfer-Encoding: gzip\r\n\r\n",
}


@pytest.mark.parametrize("data", MALFORMED.values(), ids=MALFORMED.keys())
def test_malformed_requests(server, data):
    check_error(talk(server.port, data), 400, 403, 413)
    assert alive(server.port)


def test_a_broken_chunk(server):
    answer = talk(server.port, head(server.port, Transfer_Encoding="chunked") + b"zz\r\nabc\r\n")
    check_error(answer, 400)
    assert alive(server.port)


METHODS = ["PUT", "DELETE", "PATCH", "OPTIONS", "TRACE", "CONNECT", "PROPFIND", "HEAD", "post", "X" * 300]


@pytest.mark.parametrize("method", METHODS)
def test_other_methods(server, method):
    status, headers, _ = split(talk(server.port, head(server.port, f"{method} /api/examine HTTP/1.1")))
    assert status in (400, 405)
    assert headers["x-content-type-options"] == "nosniff"


ADDRESSES = [
    "/static/../pyproject.toml",
    "/static/%2e%2e/pyproject.toml",
    "/static/..%2fpyproject.toml",
    "/static/%2fetc%2fpasswd",
    "/static//etc/passwd",
    "/static/..\\pyproject.toml",
    "/static/%00",
    "/static/\x7f",
    "//evil.example/",
    "/%ff%fe",
    "/api/schema/..%2f..%2f",
    "/api/schema/%00",
    "/api//examine",
    "http://evil.example/api/x",
    "*",
    "/?" + "a" * 7000,
    "/api/schema/" + "a" * 7000,
]


@pytest.mark.parametrize("address", ADDRESSES)
def test_odd_addresses(server, address):
    status, headers, body = split(talk(server.port, head(server.port, f"GET {address} HTTP/1.1")))
    assert status < 500
    assert b"build-system" not in body
    assert b"root:" not in body
    assert headers["x-content-type-options"] == "nosniff"
    assert headers.get("location", "/").startswith(("/", f"http://127.0.0.1:{server.port}/"))


def test_two_requests_at_once(server):
    """Pipelined requests are answered in order."""
    request = f"GET /api/nothing HTTP/1.1\r\nHost: 127.0.0.1:{server.port}\r\n\r\n".encode()
    answer = talk(server.port, request + head(server.port, "GET /api/other HTTP/1.1"))
    assert answer.count(b"HTTP/1.1 404") == 2


def test_random_bytes(server):
    generator = random.Random(11)
    honest = head(server.port, Content_Length=20) + b'{"type": "11,11,11"}'
    for _ in range(60):
        data = bytearray(honest)
        for _ in range(generator.randint(1, 6)):
            place = generator.randrange(len(data))
            if generator.random() < 0.5:
                data[place] = generator.randrange(256)
            else:
                del data[place : place + generator.randint(1, 10)]
        answer = talk(server.port, bytes(data), half_close=True)
        if answer:
            status, headers, _ = split(answer)
            assert status < 500, bytes(data)
            assert headers["x-content-type-options"] == "nosniff"
    assert alive(server.port)


def test_only_loopback_listens(server):
    """The server does not answer on another address of this machine."""
    for family, _, _, _, address in socket.getaddrinfo(socket.gethostname(), server.port, type=socket.SOCK_STREAM):
        if address[0].startswith("127.") or address[0] == "::1":
            continue
        with socket.socket(family, socket.SOCK_STREAM) as connection:
            connection.settimeout(2)
            assert connection.connect_ex(address) != 0
