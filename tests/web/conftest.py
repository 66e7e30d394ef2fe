"""An application in this process, and the real server in another."""

import re
import signal
import subprocess
import sys
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path

import pytest
from fastapi import FastAPI
from starlette.testclient import TestClient

from app.web.application import Settings, create_application

ROOT = Path(__file__).parents[2]
BASE = "http://127.0.0.1:8400"


@pytest.fixture
def application(tmp_path: Path) -> FastAPI:
    """The application with an empty data folder and no demos."""
    return create_application(Settings(data=tmp_path / "data", demos=tmp_path))


@pytest.fixture
def client(application: FastAPI) -> Iterator[TestClient]:
    """A client that sees what a browser would see; nothing raised inside reaches the test."""
    with TestClient(application, base_url=BASE) as opened:
        yield opened


@dataclass(frozen=True)
class Running:
    """A server process and its port."""

    process: subprocess.Popen[str]
    port: int
    first_line: str

    def stop(self) -> str:
        """End it as Ctrl-C does, and return what it said on standard error."""
        if self.process.poll() is None:
            self.process.send_signal(signal.SIGINT)
        try:
            return self.process.communicate(timeout=20)[1]
        except subprocess.TimeoutExpired:
            self.process.kill()
            self.process.communicate()
            raise


def start_server(data: Path, *options: str) -> Running:
    """Start ``python -m app serve`` and wait for its address."""
    process = subprocess.Popen(
        [sys.executable, "-m", "app", "serve", "--no-browser", "--data", str(data), *options],
        cwd=ROOT,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    assert process.stdout is not None
    line = process.stdout.readline()
    match = re.search(r"http://127\.0\.0\.1:(\d+)/", line)
    if match is None:
        process.kill()
        raise AssertionError(f"no address: {line!r} {process.communicate()}")
    return Running(process, int(match[1]), line)


@pytest.fixture
def start() -> Iterator[Callable[..., Running]]:
    """Starts servers; those still running at the end of the test are stopped."""
    started: list[Running] = []

    def start_one(data: Path, *options: str) -> Running:
        started.append(start_server(data, *options))
        return started[-1]

    yield start_one
    for running in started:
        if running.process.returncode is None:
            running.stop()


@pytest.fixture(scope="session")
def server(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Running]:
    """One server for all tests that only send requests."""
    running = start_server(tmp_path_factory.mktemp("served"), "--port", "0")
    yield running
    running.stop()
