"""Long computations under /api.

POST   /api/construct     a problem document, or {"type": SHORTHAND} → a connection; 202 with the job's address when
                          it takes longer than two seconds
GET    /api/jobs/{id}     state, progress, result
DELETE /api/jobs/{id}     stop it
"""

import json
from typing import Any

from fastapi import APIRouter, Request
from starlette.responses import JSONResponse, Response

from app.errors import Failed, OutOfTime, PolewrightError, Refused
from app.jobs.pool import Job, Jobs
from app.local.writer import document
from app.web.api import problem_in

router = APIRouter(prefix="/api")
PATIENCE = 2.0


@router.post("/construct", response_class=Response)
async def construct(request: Request, numeric: bool = False, seed: int = 0) -> Response:
    """A connection with the problem's orbits and its verification record."""
    body = await request.body()
    jobs: Jobs = request.app.state.jobs

    def work() -> Response:
        given = {"problem": document(problem_in(body)), "numeric": numeric, "seed": seed}
        job = jobs.wait(jobs.submit("construct", json.dumps(given)).id, PATIENCE)
        if not job.ended:
            address = f"/api/jobs/{job.id}"
            return JSONResponse({"job": address, **_state(job)}, 202, {"Location": address})
        return JSONResponse(_result(job))

    response: Response = await request.app.state.work.run(work)
    return response


@router.get("/jobs/{job_id}", response_class=Response)
async def job(request: Request, job_id: str) -> Response:
    """State, progress and, when it is done, the result of a job."""
    jobs: Jobs = request.app.state.jobs
    found = jobs.job(job_id)
    answer = _state(found)
    if found.ended:
        answer["result"] = _result(found)
    return JSONResponse(answer)


@router.delete("/jobs/{job_id}", response_class=Response)
async def stop(request: Request, job_id: str) -> Response:
    """Stop a job."""
    jobs: Jobs = request.app.state.jobs
    found = await request.app.state.work.run(jobs.stop, job_id)
    return JSONResponse(_state(found))


def _state(found: Job) -> dict[str, Any]:
    return {"state": found.state, "progress": found.progress, "fraction": found.fraction, "message": found.message}


def _result(found: Job) -> dict[str, Any]:
    """The connection of a finished job; where there is none, what the construction said.  Raises what ended the job."""
    if found.state == "done":
        record: dict[str, Any] = json.loads(found.result or "{}")
        connection: dict[str, Any] | None = record["connection"]
        return connection if connection is not None else record
    raise _error(found)


def _error(found: Job) -> PolewrightError:
    if found.state == "out of time":
        return OutOfTime(found.message)
    if found.state in ("refused", "stopped"):
        return Refused(found.message)
    return Failed(found.message)
