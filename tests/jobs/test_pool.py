"""Jobs: results, refusals, progress, stop, time limit, killed workers, full queue."""

import json
import os
import signal
import time
from collections.abc import Iterator

import pytest

from app.errors import Busy, NotFound
from app.jobs import pool as pool_module
from app.jobs.pool import Jobs
from app.local.shorthand import problem_from_shorthand
from app.local.writer import document


def construction(shorthand: str, *, numeric: bool = False) -> str:
    problem = document(problem_from_shorthand(shorthand))
    return json.dumps({"problem": problem, "numeric": numeric, "seed": 0})


@pytest.fixture(scope="module")
def jobs() -> Iterator[Jobs]:
    opened = Jobs(workers=1)
    yield opened
    opened.close()


HEAVY = "1^8,1^8,71"


def test_a_result_comes_back(jobs: Jobs) -> None:
    job = jobs.wait(jobs.submit("construct", construction("11,11,11")).id, 30)
    assert job.state == "done" and job.result is not None
    found = json.loads(job.result)
    assert found["verified"] is True and found["connection"]["rank"] == 2
    assert job.progress != ""


def test_a_refusal_travels_with_its_words(jobs: Jobs) -> None:
    job = jobs.wait(jobs.submit("construct", json.dumps({"problem": {}, "numeric": False, "seed": 0})).id, 30)
    assert job.state == "refused" and job.refusal is not None
    assert job.refusal["kind"] == "refused" and job.refusal["places"]


def test_the_time_limit_ends_a_job_and_the_next_one_runs(jobs: Jobs) -> None:
    slow = jobs.submit("construct", construction(HEAVY), limit=0.3)
    after = jobs.submit("construct", construction("11,11,11"))
    assert jobs.wait(slow.id, 30).state == "out of time"
    assert jobs.wait(after.id, 30).state == "done"


def test_a_job_is_stopped_waiting_or_running(jobs: Jobs) -> None:
    running = jobs.submit("construct", construction(HEAVY))
    waiting = jobs.submit("construct", construction("11,11,11"))
    assert jobs.stop(waiting.id).state == "stopped"
    while jobs.job(running.id).state == "waiting":
        time.sleep(0.02)
    assert jobs.stop(running.id).state == "stopped"
    assert jobs.job(running.id).progress != ""
    assert jobs.wait(jobs.submit("construct", construction("11,11,11")).id, 30).state == "done"


def test_a_killed_worker_gives_a_clear_failure(jobs: Jobs) -> None:
    job = jobs.submit("construct", construction(HEAVY))
    while jobs.job(job.id).state == "waiting":
        time.sleep(0.02)
    assert jobs._pool is not None
    for worker in jobs._pool._pool_manager.worker_manager.workers.values():
        os.kill(worker.pid, signal.SIGKILL)
    ended = jobs.wait(job.id, 30)
    assert ended.state == "failed" and "ended before" in ended.message
    assert jobs.wait(jobs.submit("construct", construction("11,11,11")).id, 30).state == "done"


def test_what_is_not_there() -> None:
    empty = Jobs()
    with pytest.raises(NotFound):
        empty.job("0123")
    with pytest.raises(NotFound):
        empty.submit("paint", "{}")
    empty.close()


def test_a_full_queue_says_so(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(pool_module, "LONGEST_QUEUE", 1)
    full = Jobs(workers=1)
    first = full.submit("construct", construction(HEAVY))
    with pytest.raises(Busy):
        full.submit("construct", construction("11,11"))
    full.stop(first.id)
    full.close()
