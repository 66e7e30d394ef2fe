"""Pages of explicit connections: a problem's matrices, exact or numerical, with their verification record.

    POST /connection              a problem document: values for symbols, generic values, or a construction begun
    GET  /connection/{job}        its progress, then its matrices and checks
    POST /connection/{job}/stop   stop it
    POST /connection/{job}/convolve   mc_μ of a finished construction

A construction is a job; its page refreshes itself until the job has ended, without any script.
"""

import json
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from fastapi import APIRouter, Request
from markupsafe import Markup
from starlette.responses import HTMLResponse, RedirectResponse, Response

from app.errors import NumberFault, Place, Refused
from app.exact.number import parse_number, write_number
from app.exact.value import Value
from app.jobs.pool import Job, Jobs
from app.local.document import read_document
from app.local.problem import Problem
from app.local.writer import canonical_text, document
from app.web.forms import read_post
from app.web.mathematics import mathml
from app.web.rendering import page, render
from app.web.views import is_large

if TYPE_CHECKING:
    from app.connection.connection import Connection

router = APIRouter()
_LONGEST_FORMULA = 60_000


@dataclass(frozen=True)
class SymbolField:
    """A symbol with the value typed for it, and what is wrong with that."""

    name: str
    typed: str
    fault: str


@dataclass(frozen=True)
class RequestContext:
    """The form of a construction: the document, its name, symbols with values, and choices."""

    document: str
    name: str
    symbols: tuple[SymbolField, ...]
    numeric: bool
    seed: int


@dataclass(frozen=True)
class CoefficientContext:
    """One coefficient matrix: at which pole, of which power, and the formula (None when too large to set)."""

    pole: str
    power: int
    formula: Markup | None


@dataclass(frozen=True)
class ConnectionContext:
    """A finished construction: method, matrices, record, and the texts to copy."""

    method: str
    note: str
    kind: str
    verified: bool
    accessory: tuple[str, ...]
    values: tuple[tuple[str, str], ...]
    coefficients: tuple[CoefficientContext, ...]
    checks: tuple[tuple[str, bool, str], ...]
    copies: tuple[tuple[str, str], ...]


@router.post("/connection")
async def begin(request: Request) -> Response:
    """Show the form again (generic values, faults), or begin a construction and lead to its page."""
    post = await read_post(request)
    state = request.app.state

    def work() -> Response:
        problem = read_document(post.fields.get("document", ""))
        form, values = _form(problem, post.fields, post.action)
        if post.action in ("form", "generic") or any(symbol.fault for symbol in form.symbols):
            return page("connection_form.html", form=form, large=is_large(request), message="")
        try:
            chosen = _at(problem, values)
            given = {"problem": document(chosen), "numeric": form.numeric, "seed": form.seed}
            job = _jobs(request).submit("construct", json.dumps(given))
        except Refused as refusal:
            return page("connection_form.html", 422, form=form, large=is_large(request), message=refusal.message)
        return RedirectResponse(f"/connection/{job.id}", status_code=303)

    response: Response = await state.work.run(work)
    return response


@router.get("/connection/{job_id}")
async def show(request: Request, job_id: str) -> Response:
    """The state of a construction, or its result."""

    def work() -> str:
        job = _jobs(request).wait(job_id, 0.5)
        given = json.loads(job.given)
        found = _result(job) if job.state == "done" else None
        text = json.dumps(given["problem"], ensure_ascii=False)
        names = {"job": job, "found": found, "document": text, "numeric": given["numeric"], "seed": given["seed"]}
        return render("connection.html", large=is_large(request), **names)

    return HTMLResponse(await request.app.state.work.run(work))


@router.post("/connection/{job_id}/stop")
async def stop(request: Request, job_id: str) -> Response:
    """Stop a construction."""
    await request.app.state.work.run(_jobs(request).stop, job_id)
    return RedirectResponse(f"/connection/{job_id}", status_code=303)


@router.post("/connection/{job_id}/convolve")
async def convolve(request: Request, job_id: str) -> Response:
    """The middle convolution of a finished construction's connection."""
    post = await read_post(request)

    def work() -> Response:
        job = _jobs(request).job(job_id)
        record = json.loads(job.result or "{}")
        if job.state != "done" or record.get("connection") is None:
            raise Refused("There is no connection to convolve.")
        found = _convolved(record["connection"], post.fields.get("mu", ""))
        return page("convolved.html", large=is_large(request), found=found, job_id=job_id)

    response: Response = await request.app.state.work.run(work)
    return response


def _convolved(written: Mapping[str, Any], typed: str) -> ConnectionContext:
    from app.connection.convolved import convolved
    from app.connection.document import connection_document, connection_from_json

    connection = connection_from_json(written)
    try:
        mu = parse_number(typed, set(connection.symbols))
    except NumberFault as fault:
        raise Refused(f"μ cannot be read: {fault.message}.", (Place("mu", fault.message, fault.expected),)) from fault
    moved = convolved(connection, mu)
    method = f"Middle convolution with μ = {write_number(mu)} of the connection shown before; rank {moved.rank}."
    note = "It has no record of checks of its own."
    return _context(moved, dict(connection_document(moved)), method, note, False)


def _jobs(request: Request) -> Jobs:
    jobs: Jobs = request.app.state.jobs
    return jobs


def _form(problem: Problem, fields: Mapping[str, str], action: str) -> tuple[RequestContext, dict[str, Value]]:
    """The form as typed, and the values that could be read.  Raises nothing for a faulty value."""
    symbols, values = [], {}
    generic: Mapping[str, Value] = {}
    if action == "generic":
        from app.connection.generic_values import generic_values

        generic = generic_values(problem.symbols)
    for name in problem.symbols:
        typed, fault = fields.get(f"value.{name}", "").strip(), ""
        if name in generic:
            typed = write_number(generic[name])
        if typed:
            try:
                values[name] = parse_number(typed)
            except NumberFault as found:
                fault = found.message
        symbols.append(SymbolField(name, typed, fault))
    seed = fields.get("seed", "0")
    number = int(seed) if seed.isascii() and seed.isdigit() and len(seed) < 9 else 0
    numeric = fields.get("kind") == "numerical"
    return RequestContext(canonical_text(problem), problem.name, tuple(symbols), numeric, number), values


def _at(problem: Problem, values: dict[str, Value]) -> Problem:
    """The problem with values in place of symbols.  Raises Refused where they make distinct data equal."""
    from app.connection.verification import problem_at

    return problem_at(problem, values) if values else problem


def _result(job: Job) -> ConnectionContext:
    """A finished job's connection set out for the page.  Cost: that of writing its matrices three times."""
    record = json.loads(job.result or "{}")
    if record["connection"] is None:
        return ConnectionContext(record["method"], record["note"], "", False, (), (), (), (), ())
    from app.connection.document import connection_from_json

    connection = connection_from_json(record["connection"])
    return _context(connection, record["connection"], record["method"], record["note"], record["verified"])


def _context(
    connection: "Connection", written: Mapping[str, Any], method: str, note: str, verified: bool
) -> ConnectionContext:
    from app.connection.writing import connection_latex, matrix_latex, numpy_source, sympy_source

    coefficients = []
    for pole in connection.poles:
        place = "∞" if pole.at.value is None else write_number(pole.at.value, connection.symbols)
        for power, matrix in enumerate(pole.coefficients, start=1):
            text = matrix_latex(matrix, connection.symbols)
            formula = mathml(text) if len(text) <= _LONGEST_FORMULA else None
            coefficients.append(CoefficientContext(place, power, formula))
    copies = [("LaTeX", connection_latex(connection)), ("Python source for numpy", numpy_source(connection))]
    if connection.kind == "exact":
        copies.append(("Python source for sympy", sympy_source(connection)))
    copies.append(("JSON", json.dumps(written, ensure_ascii=False)))
    return ConnectionContext(
        method=method,
        note=note,
        kind=connection.kind,
        verified=verified,
        accessory=connection.accessory,
        values=tuple((name, write_number(value)) for name, value in connection.values),
        coefficients=tuple(coefficients),
        checks=tuple((check["check"], check["holds"], check["figure"]) for check in written.get("verification", ())),
        copies=tuple(copies),
    )
