"""The pages: the desk, its edits, documents in and out, the check of certificates, help.

An edit is one POST of the form.  A browser without scripts is sent back to the page; a script that asks for JSON gets
what changed: texts, faults, and those fragments whose content differs from what it shows.
"""

import json
from dataclasses import asdict
from hashlib import blake2b

from fastapi import APIRouter, Request
from markupsafe import Markup
from starlette.responses import HTMLResponse, JSONResponse, RedirectResponse, Response

from app.desk.fields import structure_of, texts_of
from app.desk.reading import draft_of, read_draft
from app.desk.store import Revision, Store
from app.errors import Place, PolewrightError, Refused
from app.existence.check import Check, check
from app.existence.check_ramified import check_ramified
from app.existence.verdict import FuchsDefect, Verdict
from app.findings.findings import Findings, examine_cached
from app.local.document import read_document
from app.local.writer import canonical_text
from app.web.contexts import (
    DeskContext,
    FormContext,
    Fragment,
    HistoryContext,
    StatusContext,
    brief_of,
    descent_context,
    findings_context,
    leads_context,
)
from app.web.demos import Demos
from app.web.diagram_contexts import diagram_context
from app.web.forms import Outcome, Post, accept, read_post
from app.web.rendering import page, render
from app.web.views import LARGE_COOKIE, is_large

router = APIRouter()
FRAGMENTS = ("history", "status", "leads", "data", "diagram", "findings", "descent")
_YEAR = 365 * 24 * 3600


@router.get("/")
async def desk(request: Request) -> Response:
    """The desk as a whole page."""
    state = request.app.state

    def work() -> Response:
        return _desk_page(request, _context(state.store, state.demos, state.store.current(), ""))

    response: Response = await state.work.run(work)
    return response


@router.post("/desk")
async def edit(request: Request) -> Response:
    """Take a posted form; answer with the page again, or with what changed when a script asks for JSON."""
    state = request.app.state
    post = await read_post(request)
    wants_json = "application/json" in request.headers.get("accept", "")

    def work() -> Response:
        outcome = accept(state.store, post, state.demos)
        if wants_json:
            return JSONResponse(_changes(state.store, state.demos, post, outcome))
        if not outcome.message:
            return RedirectResponse("/", status_code=303)
        return _desk_page(request, _context(state.store, state.demos, outcome.revision, outcome.message))

    response: Response = await state.work.run(work)
    return response


@router.get("/desk/document")
async def take_out(request: Request) -> Response:
    """The problem document of the desk in canonical form, as a file."""
    store: Store = request.app.state.store

    def work() -> Response:
        problem = read_draft(store.current().draft).problem
        if problem is None:
            raise Refused("The local data cannot be read as they stand; mend the marked fields first.")
        headers = {"Content-Disposition": 'attachment; filename="problem.json"'}
        return Response(canonical_text(problem), media_type="application/json", headers=headers)

    response: Response = await request.app.state.work.run(work)
    return response


@router.post("/desk/document")
async def bring_in(request: Request) -> Response:
    """Put a pasted document on the desk; a refused one stays in its field with what is wrong."""
    state = request.app.state
    text = (await read_post(request)).fields.get("document", "")

    def work() -> Response:
        store: Store = state.store
        try:
            problem = read_document(text)
        except PolewrightError as refusal:
            context = _context(store, state.demos, store.current(), refusal.message)
            return _desk_page(request, context, document=text, faults=refusal.places, status=422)
        with store.turn():
            store.append(draft_of(problem, store.current().draft.next_id), "a document was brought in")
        return RedirectResponse("/", status_code=303)

    response: Response = await state.work.run(work)
    return response


@router.post("/view")
async def view(request: Request) -> Response:
    """Switch large type on or off; the browser keeps the choice."""
    large = (await read_post(request)).fields.get("type", "") == "large"
    response = RedirectResponse("/", status_code=303)
    value = "large" if large else "normal"
    response.set_cookie(LARGE_COOKIE, value, max_age=_YEAR, samesite="strict", httponly=True)
    return response


@router.get("/certificate")
async def certificate(request: Request) -> Response:
    """The certificates of the desk's verdicts, every claim worked out again."""
    store: Store = request.app.state.store

    def work() -> str:
        findings, _ = _findings(store, store.current())
        checked: list[tuple[str, tuple[Check, ...]]] = []
        if findings is not None:
            pairs = (("Irreducible system", findings.additive), ("Irreducible monodromy", findings.multiplicative))
            checked = [(question, _claims(findings, verdict)) for question, verdict in pairs if verdict is not None]
        return render("certificate.html", checked=checked, large=is_large(request))

    return HTMLResponse(await request.app.state.work.run(work))


@router.get("/help")
async def help_page(request: Request) -> Response:
    """What every entry of the page means."""
    return page("help.html", large=is_large(request))


def _desk_page(
    request: Request, context: DeskContext, *, document: str = "", faults: tuple[Place, ...] = (), status: int = 200
) -> Response:
    """The whole page; ``document`` is one that could not be brought in, ``faults`` what is wrong with it."""
    return page(
        "desk.html",
        status=status,
        desk=context,
        fragments={name: _fragment(name, context) for name in FRAGMENTS},
        large=is_large(request),
        document_text=document,
        document_faults=faults,
    )


def _fragment(name: str, context: DeskContext) -> Fragment:
    html = render(f"desk_{name}.html", desk=context)
    return Fragment(Markup(html), blake2b(html.encode(), digest_size=8).hexdigest())


def _claims(findings: Findings, verdict: Verdict) -> tuple[Check, ...]:
    """The claims of a verdict's certificate, worked out again."""
    if not findings.problem.ramified:
        return check(verdict)
    if verdict.ramified is not None:
        return check_ramified(findings.problem, verdict.ramified, verdict.exists)
    if isinstance(verdict.certificate, FuchsDefect):
        return check_ramified(findings.problem, verdict.certificate, verdict.exists)
    return ()


def _findings(store: Store, revision: Revision) -> tuple[Findings | None, bool]:
    """Findings of the revision, or of the last state that could be read; and whether they are of an older state."""
    problem = read_draft(revision.draft).problem
    if problem is not None:
        return examine_cached(problem), False
    good = store.last_good()
    problem = None if good is None else read_draft(good.draft).problem
    return (None if problem is None else examine_cached(problem)), True


def _context(store: Store, demos: Demos, revision: Revision, message: str) -> DeskContext:
    draft = revision.draft
    faults = {fault.field: fault for fault in read_draft(draft).faults}
    findings, stale = _findings(store, revision)
    whole = faults.get("")
    return DeskContext(
        form=FormContext(draft, structure_of(draft), revision.number, faults),
        history=HistoryContext(revision.can_undo, revision.can_redo),
        status=StatusContext(
            brief=() if findings is None else brief_of(findings),
            message=message,
            notice=store.notice,
            fault_count=len(faults),
            whole="" if whole is None else f"{whole.message} {whole.expected}".strip(),
            stale=stale,
        ),
        findings=None if findings is None else findings_context(findings),
        diagram=None if findings is None else diagram_context(findings),
        descent=None if findings is None else descent_context(findings),
        leads=None if findings is None else leads_context(findings),
        demos=demos.entries,
    )


def _changes(store: Store, demos: Demos, post: Post, outcome: Outcome) -> dict[str, object]:
    """What a script needs to bring its page up to date: it says in ``shown`` which fragments it has."""
    revision = outcome.revision
    context = _context(store, demos, revision, outcome.message)
    before = store.revision(post.revision) if post.revision is not None else None
    same_entries = before is not None and structure_of(before.draft) == structure_of(revision.draft)
    texts: dict[str, str] = {}
    if before is not None and same_entries:
        then = texts_of(before.draft)
        texts = {address: text for address, text in texts_of(revision.draft).items() if then[address] != text}
    shown = _shown(post)
    fragments: dict[str, dict[str, str]] = {}
    for name in FRAGMENTS:
        if name == "data" and same_entries:
            continue  # the fields stand already; their texts and faults are sent by themselves
        fragment = _fragment(name, context)
        if shown.get(name) != fragment.mark:
            fragments[name] = {"html": fragment.html, "mark": fragment.mark}
    return {
        "revision": revision.number,
        "structure": context.form.structure,
        "texts": texts,
        "faults": [asdict(fault) for fault in context.form.faults.values()],
        "fragments": fragments,
    }


def _shown(post: Post) -> dict[str, object]:
    """The marks of the fragments that the script shows; none when they cannot be read."""
    try:
        shown = json.loads(post.fields.get("shown", "{}"))
    except (ValueError, RecursionError):
        return {}
    return shown if isinstance(shown, dict) else {}
