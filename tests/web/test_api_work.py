"""Computing off the event loop, a few at a time."""

import threading
import time

import anyio
import pytest
from starlette.testclient import TestClient

from app.errors import Busy, OutOfTime, Refused
from app.web.work import Work

BASE = "http://127.0.0.1:8400"


def test_the_result_and_the_refusal_come_back():
    async def main():
        work = Work()
        assert await work.run(pow, 2, 10) == 1024
        with pytest.raises(Refused, match="no"):
            await work.run(refuse)
        with pytest.raises(TimeoutError, match="its own"):
            await work.run(time_out)

    anyio.run(main)


def refuse():
    raise Refused("no")


def time_out():
    raise TimeoutError("its own")


def test_it_runs_in_another_thread():
    async def main():
        assert await Work().run(threading.get_ident) != threading.get_ident()

    anyio.run(main)


def test_the_event_loop_stays_free():
    async def main():
        ticks = 0
        work = Work()
        async with anyio.create_task_group() as group:
            group.start_soon(work.run, time.sleep, 0.2)
            begun = time.perf_counter()
            while time.perf_counter() - begun < 0.15:
                await anyio.sleep(0.005)
                ticks += 1
        assert ticks >= 10

    anyio.run(main)


def test_too_many_are_told_to_come_again():
    release = threading.Event()
    busy = 0

    async def one(work):
        nonlocal busy
        try:
            await work.run(release.wait, 5)
        except Busy:
            busy += 1

    async def main():
        work = Work(running=2, waiting=3)
        async with anyio.create_task_group() as group:
            for _ in range(9):
                group.start_soon(one, work)
            await anyio.sleep(0.1)
            release.set()
        assert busy == 4
        assert await work.run(pow, 2, 2) == 4, "the places are free again"

    anyio.run(main)


def test_no_more_run_at_once_than_are_allowed():
    running = 0
    highest = 0
    lock = threading.Lock()

    def step():
        nonlocal running, highest
        with lock:
            running += 1
            highest = max(highest, running)
        time.sleep(0.02)
        with lock:
            running -= 1

    async def main():
        work = Work(running=2, waiting=20)
        async with anyio.create_task_group() as group:
            for _ in range(10):
                group.start_soon(work.run, step)

    anyio.run(main)
    assert highest == 2


def test_abandoned_work_keeps_its_place_until_it_ends():
    release = threading.Event()

    async def main():
        work = Work(running=1, waiting=1, time_limit=0.05)
        with pytest.raises(OutOfTime, match=r"0\.05 seconds"):
            await work.run(release.wait, 5)
        with pytest.raises(OutOfTime):
            await work.run(release.wait, 5)
        with pytest.raises(Busy):
            await work.run(pow, 2, 2)
        release.set()
        for _ in range(200):
            await anyio.sleep(0.01)
            try:
                assert await work.run(pow, 2, 2) == 4
            except Busy:
                continue
            return
        raise AssertionError("the places never became free")

    anyio.run(main)


def test_giving_up_while_waiting_frees_the_place():
    release = threading.Event()

    async def main():
        work = Work(running=1, waiting=1)
        async with anyio.create_task_group() as group:
            group.start_soon(work.run, release.wait, 5)
            await anyio.sleep(0.05)
            with anyio.move_on_after(0.05):
                await work.run(pow, 2, 2)
            with anyio.move_on_after(0.05):  # would be Busy if the place had been lost
                await work.run(pow, 2, 2)
            release.set()

    anyio.run(main)


def test_a_full_program_says_when_to_come_again(application):
    application.state.work = Work(running=0, waiting=0)
    with TestClient(application, base_url=BASE) as client:
        response = client.post("/api/examine", json={"type": "11,11,11"})
    assert response.status_code == 503
    assert response.json()["error"]["kind"] == "busy"
    assert int(response.headers["retry-after"]) >= 1
