"""Jobs: a queue before a few worker processes, each job with a time limit, a stop, progress and a result.

Computations run in processes, because only a process can be stopped in the middle of a library's loop.  The workers are
forked from a clean server process, not from the threads of the application.  A job that is killed, by its time limit,
by its user or by the machine, ends with a clear state; the next one runs.  What it reported until then is kept.
"""

import multiprocessing
import secrets
import signal
import threading
import time
from collections import OrderedDict
from collections.abc import Mapping
from concurrent.futures import CancelledError, Future, TimeoutError
from dataclasses import dataclass, replace
from multiprocessing.queues import SimpleQueue
from typing import Literal

from pebble import ProcessExpired, ProcessPool

from app.errors import Busy, NotFound, PolewrightError, Refused
from app.jobs.tasks import TASKS

State = Literal["waiting", "running", "done", "refused", "stopped", "out of time", "failed"]
ENDED: frozenset[State] = frozenset({"done", "refused", "stopped", "out of time", "failed"})

WORKERS = 2
LONGEST_QUEUE = 20
KEPT = 100
DEFAULT_LIMIT = 60.0
_TASKS_OF_A_WORKER = 50
_LINES_KEPT = 40

Report = tuple[str, str, float | None]


@dataclass(frozen=True)
class Job:
    """One job: what, with which input, state, progress in words and as a part of 1, result or why there is none.

    ``given`` and ``result`` are JSON texts; ``lines`` are the last reports, with seconds since the beginning, and stay
    when a job is stopped or killed.
    """

    id: str
    task: str
    given: str
    state: State
    begun: float
    limit: float
    progress: str = ""
    lines: tuple[str, ...] = ()
    fraction: float | None = None
    result: str | None = None
    message: str = ""
    refusal: Mapping[str, object] | None = None

    @property
    def ended(self) -> bool:
        """Whether nothing more will happen."""
        return self.state in ENDED


class Jobs:
    """The jobs of one application.  All methods may be called from any thread; workers start with the first job."""

    def __init__(self, workers: int = WORKERS) -> None:
        self._workers = workers
        self._lock = threading.Lock()
        self._jobs: OrderedDict[str, Job] = OrderedDict()
        self._futures: dict[str, Future[str]] = {}
        self._pool: ProcessPool | None = None
        self._reports: SimpleQueue[Report | None] | None = None

    def submit(self, task: str, text: str, limit: float = DEFAULT_LIMIT) -> Job:
        """Queue a task.  Raises Busy when the queue is full, NotFound for an unknown task."""
        if task not in TASKS:
            raise NotFound(f"There is no task {task!r}.")
        with self._lock:
            if sum(not job.ended for job in self._jobs.values()) >= LONGEST_QUEUE:
                raise Busy("Many computations are waiting already; try again when some have ended.")
            pool = self._started()
            job = Job(secrets.token_hex(8), task, text, "waiting", time.time(), limit)
            self._jobs[job.id] = job
            while len(self._jobs) > KEPT:
                oldest = next(iter(self._jobs))
                if not self._jobs[oldest].ended:
                    break
                del self._jobs[oldest]
            future = pool.schedule(_run, args=[job.id, task, text], timeout=limit)
            self._futures[job.id] = future
        future.add_done_callback(lambda done: self._end(job.id, done))
        return job

    def job(self, job_id: str) -> Job:
        """The job as it is now.  Raises NotFound."""
        with self._lock:
            job = self._jobs.get(job_id)
        if job is None:
            raise NotFound("There is no such job; results are kept for a while only.")
        return job

    def stop(self, job_id: str) -> Job:
        """Stop a job, waiting or running; an ended one stays as it is."""
        job = self.job(job_id)
        if not job.ended:
            self._change(job_id, state="stopped", message="Stopped.")
            self._futures[job_id].cancel()
        return self.job(job_id)

    def wait(self, job_id: str, seconds: float) -> Job:
        """The job when it has ended, or as it is after some seconds."""
        end = time.monotonic() + seconds
        while not (job := self.job(job_id)).ended and time.monotonic() < end:
            time.sleep(0.02)
        return job

    def close(self) -> None:
        """Stop everything; the processes end."""
        with self._lock:
            pool, self._pool = self._pool, None
            reports = self._reports
        if pool is not None:
            pool.stop()  # type: ignore[no-untyped-call]
            pool.join()
        if reports is not None:
            reports.put(None)

    # --- inside

    def _started(self) -> ProcessPool:
        if self._pool is None:
            context = multiprocessing.get_context("forkserver")
            self._reports = context.SimpleQueue()
            self._pool = ProcessPool(
                max_workers=self._workers,
                max_tasks=_TASKS_OF_A_WORKER,
                initializer=_begin_worker,
                initargs=[self._reports],
                context=context,
            )
            threading.Thread(target=self._listen, args=(self._reports,), daemon=True, name="job reports").start()
        return self._pool

    def _listen(self, reports: "SimpleQueue[Report | None]") -> None:
        while (report := reports.get()) is not None:
            job_id, text, fraction = report
            with self._lock:
                job = self._jobs.get(job_id)
            if job is not None:
                line = f"{time.time() - job.begun:.1f} s: {text}"
                lines = (*job.lines, line)[-_LINES_KEPT:]
                self._change(job_id, state="running", progress=text, fraction=fraction, lines=lines)

    def _change(self, job_id: str, **changes: object) -> None:
        """Change a job that has not ended."""
        with self._lock:
            job = self._jobs.get(job_id)
            if job is not None and not job.ended:
                self._jobs[job_id] = replace(job, **changes)  # type: ignore[arg-type]

    def _end(self, job_id: str, future: Future[str]) -> None:
        with self._lock:
            self._futures.pop(job_id, None)
        try:
            self._change(job_id, state="done", result=future.result(), fraction=1.0)
        except CancelledError:
            self._change(job_id, state="stopped", message="Stopped.")
        except TimeoutError:
            limit = self.job(job_id).limit
            self._change(job_id, state="out of time", message=f"The time limit of {limit:g} s ran out.")
        except PolewrightError as refusal:
            kind: State = "refused" if isinstance(refusal, Refused) else "failed"
            self._change(job_id, state=kind, message=refusal.message, refusal=refusal.as_json())
        except ProcessExpired:
            self._change(job_id, state="failed", message="The computing process ended before it was done.")
        except Exception as fault:
            self._change(job_id, state="failed", message=f"The computation failed ({type(fault).__name__}).")


# --- in the worker

_reports: "SimpleQueue[Report | None] | None" = None


class _Reporting:
    """Progress of a job in its process.  The limit is kept outside, by ending the process."""

    def __init__(self, job_id: str) -> None:
        self._job_id = job_id

    def report(self, text: str, fraction: float | None = None) -> None:
        if _reports is not None:
            _reports.put((self._job_id, text, fraction))

    def check(self) -> None:
        """A job is stopped from outside."""


def _begin_worker(reports: "SimpleQueue[Report | None]") -> None:
    global _reports  # noqa: PLW0603 - one process, one queue
    _reports = reports
    # so that a loop in a C library ends at once with its process
    signal.signal(signal.SIGTERM, signal.SIG_DFL)
    signal.signal(signal.SIGINT, signal.SIG_IGN)


def _run(job_id: str, task: str, text: str) -> str:
    progress = _Reporting(job_id)
    progress.report("begun")
    return TASKS[task](text, progress)
