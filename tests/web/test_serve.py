"""The server: its port, its address, its end, and what a restart keeps."""

import http.client
import json
import signal
import socket
import subprocess
import sys
import threading
import time
from contextlib import closing
from pathlib import Path

import pytest

from app.desk.store import Store
from app.errors import Refused
from app.web import serve as serving
from app.web.application import DESK_FILE
from app.web.serve import HOST, listen, occupant

ROOT = Path(__file__).parents[2]


def ask(port, method="GET", path="/api/openapi.json", body=None):
    connection = http.client.HTTPConnection(HOST, port, timeout=10)
    try:
        connection.request(method, path, body)
        response = connection.getresponse()
        return response.status, response.read()
    finally:
        connection.close()


def taken_port():
    """A listening socket and its port; the port behind it is free as a rule."""
    blocker = socket.create_server((HOST, 0))
    return blocker, blocker.getsockname()[1]


def test_it_serves_and_ends_quickly_at_ctrl_c(start, tmp_path):
    running = start(tmp_path, "--port", "0")
    status, _ = ask(running.port, "POST", "/api/examine", b'{"type": "11,11,11"}')
    assert status == 200
    head = f"POST /api/examine HTTP/1.1\r\nHost: {HOST}:{running.port}\r\nContent-Length: 9\r\n\r\n"
    with socket.create_connection((HOST, running.port)) as connection:
        connection.sendall(head.encode())  # a request whose body never comes
        time.sleep(0.2)
        begun = time.perf_counter()
        said = running.stop()
        assert time.perf_counter() - begun < 3
    assert running.process.returncode == 0
    assert said == ""


def test_it_prints_its_address(start, tmp_path):
    running = start(tmp_path, "--port", "0")
    assert running.first_line == f"Polewright is at http://127.0.0.1:{running.port}/ (Ctrl-C ends it)\n"


def test_a_port_taken_by_another_polewright(start, tmp_path):
    first = start(tmp_path / "a", "--port", "0")
    second = start(tmp_path / "b", "--port", str(first.port))
    assert second.port > first.port
    said = second.stop()
    assert f"Port {first.port} is taken by another Polewright; port {second.port} is used instead." in said


def test_a_port_taken_by_another_program(start, tmp_path):
    blocker, port = taken_port()
    with blocker:
        running = start(tmp_path, "--port", str(port))
        assert running.port > port
        assert f"Port {port} is taken by another program" in running.stop()


def test_who_has_a_port():
    """Whatever answers, the question is answered in words and in time."""
    answers = [
        b"",
        b"nonsense\r\n\r\n",
        b"HTTP/1.1 200 OK\r\nContent-Length: 2\r\n\r\n[]",
        b'HTTP/1.1 200 OK\r\nContent-Length: 13\r\n\r\n{"info": 5.0}',
        b"HTTP/1.1 200 OK\r\nContent-Length: 4\r\n\r\n\xff\xfe\xfd\xfc",
        b"HTTP/1.1 500 Oh\r\nContent-Length: 0\r\n\r\n",
    ]
    blocker, port = taken_port()

    def answer_all():
        for answer in answers:
            connection, _ = blocker.accept()
            with connection:
                connection.recv(1000)
                connection.sendall(answer)

    with blocker:
        thread = threading.Thread(target=answer_all)
        thread.start()
        for _ in answers:
            assert occupant(port) == "another program"
        thread.join()
        begun = time.perf_counter()
        assert occupant(port) == "another program"  # accepts and says nothing
        assert time.perf_counter() - begun < 3


def test_listening_on_a_free_port():
    blocker, port = taken_port()
    blocker.close()
    listener, taken_by = listen(port)
    with listener:
        assert listener.getsockname() == (HOST, port)
        assert taken_by == ""


def test_no_port_is_left(monkeypatch):
    monkeypatch.setattr(serving, "_TRIES", 1)
    blocker, port = taken_port()
    with blocker, pytest.raises(Refused, match=f"from {port} on"):
        listen(port)


@pytest.mark.parametrize("port", [-1, 65_536])
def test_no_such_port(port):
    with pytest.raises(Refused, match="65535"):
        listen(port)


def test_the_last_port_of_all_has_no_next(monkeypatch):
    monkeypatch.setattr(serving, "occupant", lambda port: "another program")

    def refuse(port):
        raise OSError

    monkeypatch.setattr(serving, "_bound", refuse)
    with pytest.raises(Refused):
        listen(65_535)


def test_it_listens_on_loopback_only():
    listener, _ = listen(0)
    with listener:
        assert listener.getsockname()[0] == "127.0.0.1"


def test_a_data_folder_that_cannot_be_used_is_said_in_one_sentence(tmp_path):
    (tmp_path / "file").write_text("")
    command = [sys.executable, "-m", "app", "serve", "--port", "0", "--no-browser", "--data", str(tmp_path / "file")]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, timeout=30, check=False)
    assert done.returncode == 1
    assert "cannot be" in done.stderr
    assert "Traceback" not in done.stderr


def test_a_damaged_desk_is_said_and_set_aside(start, tmp_path):
    start(tmp_path, "--port", "0").stop()
    (tmp_path / DESK_FILE).write_bytes(b"x" * 10_000)
    running = start(tmp_path, "--port", "0")
    assert ask(running.port)[0] == 200
    said = running.stop()
    assert "damaged" in said
    (aside,) = tmp_path.glob("desk-set-aside-*.sqlite")
    assert str(aside) in said


def test_the_browser_is_opened_unless_told_otherwise(tmp_path, monkeypatch):
    opened = []
    ran = threading.Event()
    monkeypatch.setattr(serving.webbrowser, "open", lambda address: (opened.append(address), ran.set()))
    monkeypatch.setattr(serving, "_run", lambda application, _, announce: (application.state.store.close(), announce()))
    assert serving.serve(port=0, data=tmp_path, open_browser=False) == 0
    assert not ran.wait(0.1)
    assert serving.serve(port=0, data=tmp_path, open_browser=True) == 0
    assert ran.wait(5)
    assert opened[0].startswith("http://127.0.0.1:")


@pytest.mark.skipif(sys.platform == "win32", reason="SIGKILL is not there")
def test_the_desk_survives_a_killed_server(start, tmp_path):
    running = start(tmp_path, "--port", "0")
    running.process.send_signal(signal.SIGKILL)
    running.process.communicate()
    again = start(tmp_path, "--port", "0")
    assert ask(again.port)[0] == 200
    assert again.stop() == ""
    with closing(Store(tmp_path / DESK_FILE, lambda: pytest.fail("a new desk was begun"))) as store:
        assert store.current().draft.poles


def test_the_first_desk_shows_the_first_demo(start, tmp_path):
    start(tmp_path, "--port", "0").stop()
    with closing(Store(tmp_path / DESK_FILE, lambda: pytest.fail("no desk was kept"))) as store:
        names = [json.loads(path.read_text("utf-8"))["name"] for path in sorted((ROOT / "demo_data").glob("*.json"))]
        assert store.current().draft.name == (names[0] if names else "")
