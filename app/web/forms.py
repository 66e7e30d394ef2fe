"""Posted forms: fields → draft → store.

    read_post(request)           the fields of a form, within limits
    accept(store, post, demos)   what the post asks for, done: texts first, then the shorthand, then the action

The form names its fields by the addresses of ``desk/fields``; ``revision`` says which state it shows and
``structure`` how the entries hang together.  A field that is absent is unchanged.  A post based on an older state is
applied field by field to the newest one.

Nothing entered is ever lost: texts are stored before anything else is tried, parsing or not; a text whose entry was
removed meanwhile is stored in a revision of its own; a text that overwrites another window's leaves that one in the
history.
"""

import logging
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from urllib.parse import parse_qsl

from starlette.requests import Request

from app.desk import edits
from app.desk.draft import Draft
from app.desk.fields import changed_texts, from_structure, structure_of, texts_of, with_texts
from app.desk.reading import draft_of, read_draft, read_shorthand, refreshed
from app.desk.store import Revision, Store
from app.desk.words import name_of_entry, shortened, words_for_texts
from app.errors import Malformed, NotFound, Refused, TooLarge
from app.web.demos import Demos, new_draft

FIELD_LIMIT = 6_000
CONTENT_TYPE = "application/x-www-form-urlencoded"
_log = logging.getLogger("polewright.web")

__all__ = ["Outcome", "Post", "accept", "parse_form", "read_post", "structure_of"]


@dataclass(frozen=True)
class Post:
    """A posted form: its fields, the button pressed ("" for none), and the revision it was based on."""

    fields: Mapping[str, str]
    action: str = ""
    revision: int | None = None


@dataclass(frozen=True)
class Outcome:
    """The state after a post; ``message`` says what could not be done or needs attention, "" if nothing."""

    revision: Revision
    message: str
    changed: bool


async def read_post(request: Request) -> Post:
    """The form in a request's body.

    Raises Malformed (no form, not UTF-8), TooLarge.  Cost: linear; 2,400 fields take a few milliseconds.
    """
    content_type = request.headers.get("content-type", "").partition(";")[0].strip().lower()
    if content_type != CONTENT_TYPE:
        raise Malformed(f"A form is sent as {CONTENT_TYPE}.")
    fields = parse_form(await request.body())
    action = fields.pop("action", "")
    revision = fields.pop("revision", "")
    number = int(revision) if revision.isascii() and revision.isdigit() and len(revision) < 16 else None
    return Post(fields, action, number)


def parse_form(body: bytes) -> dict[str, str]:
    """The fields of an urlencoded body; of a name that comes twice the last value counts.

    Line ends become "\\n".  Raises Malformed and TooLarge.
    """
    if body.count(b"&") >= FIELD_LIMIT:
        raise TooLarge(f"The form has more than {FIELD_LIMIT:,} fields.")
    try:
        text = body.decode("ascii")
        pairs = parse_qsl(text, keep_blank_values=True, strict_parsing=True, errors="strict") if text else []
    except ValueError:  # UnicodeDecodeError is one
        raise Malformed(f"The body is no form of the kind {CONTENT_TYPE} in UTF-8.") from None
    return {name: value.replace("\r\n", "\n") if "\r" in value else value for name, value in pairs}


def accept(store: Store, post: Post, demos: Demos) -> Outcome:
    """Do what a post asks for and return the state after it.

    Raises Refused when the post is based on a state the desk does not know and cannot stand alone.  Everything is
    done in one turn of the store.  Cost: one look at every field, one reading of the draft, one flush to the disk.
    """
    with store.turn():
        messages: list[str] = []
        typed = _typed_texts(store, post, messages)
        shorthand = typed.pop("shorthand", None)
        _keep(store, with_texts(store.current().draft, typed), lambda draft: words_for_texts(draft, typed))
        if shorthand is not None or post.action == "read-shorthand":
            _use_shorthand(store, shorthand, demos)
        try:
            _act(store, post.action, demos)
        except (NotFound, Refused) as refusal:
            messages.append(refusal.message)
        revision = store.current()
        return Outcome(revision, " ".join(messages), revision.number != post.revision)


# --- texts


def _typed_texts(store: Store, post: Post, messages: list[str]) -> dict[str, str]:
    """The texts that the post changes, to be applied to the head; what has no place there is stored already."""
    head = store.current()
    base = head if post.revision in (None, head.number) else store.revision(post.revision or 0)
    structure = post.fields.get("structure")
    if base is None or structure not in (None, structure_of(base.draft)):
        return _take_whole(store, head, post, messages)
    changes = changed_texts(base.draft, post.fields)
    if base.number == head.number or not changes:
        return changes
    now, then = texts_of(head.draft), texts_of(base.draft)
    if not changes.keys() <= now.keys():
        _keep(store, with_texts(base.draft, changes), lambda _: "texts of entries that were removed meanwhile")
        _keep(store, head.draft, lambda _: "back to the state of the other window")
        messages.append("Some texts belong to entries that were removed meanwhile; they are kept in the history.")
    both = [address for address, new in changes.items() if now.get(address, new) not in (new, then[address])]
    if both:
        what = "A text" if len(both) == 1 else f"{len(both)} texts"
        messages.append(f"{what} had been changed in another window as well; the history keeps both.")
    return {address: new for address, new in changes.items() if address in now}


def _take_whole(store: Store, head: Revision, post: Post, messages: list[str]) -> dict[str, str]:
    """Take over a form that shows a state this desk does not have, as it stands."""
    draft = from_structure(post.fields.get("structure", ""), post.fields, head.draft.next_id)
    if draft is None or not draft.poles:
        raise Refused(
            "This page shows a state that the desk does not know. Load it again; what you typed is still here."
        )
    _keep(store, draft, lambda _: "a page of an earlier desk was taken over")
    messages.append("This page showed a state of an earlier desk; it was taken over as it stands.")
    return {}


def _keep(store: Store, draft: Draft, words: Callable[[Draft], str]) -> None:
    """Store a draft if it says something new, with its shorthand line brought up to date.

    The texts are stored even if reading them fails in a way nobody foresaw.
    """
    before = store.current().draft
    if draft == before:
        return
    readable = False
    try:
        draft = refreshed(draft)
        readable = read_draft(draft).problem is not None
    except Exception:
        _log.exception("a draft could not be read")
    store.append(draft, words(before), readable=readable)


def _use_shorthand(store: Store, typed: str | None, demos: Demos) -> None:
    head = store.current().draft
    line = head.shorthand if typed is None else typed
    problem = read_shorthand(line) if line.strip() else None
    if problem is None:
        _keep(store, replace(head, shorthand=line), lambda _: f"shorthand: {shortened(line)}")
        return
    begun = draft_of(problem, head.next_id)
    own = not demos.is_name_of_demo(head.name)
    begun = replace(begun, name=head.name if own else "", notes=head.notes if own else "", shorthand=line)
    _keep(store, begun, lambda _: f"shorthand {shortened(line)} read")


# --- actions

_ON_ENTRY: Mapping[str, tuple[Callable[[Draft, str], Draft], str]] = {
    "add-block": (edits.add_block, "a block added to the {}"),
    "add-eigenvalue": (edits.add_eigenvalue, "an eigenvalue added to the {}"),
    "remove": (edits.remove, "{} removed"),
    "copy": (edits.copy, "{} copied"),
    "earlier": (lambda draft, entry_id: edits.move(draft, entry_id, -1), "{} moved up"),
    "later": (lambda draft, entry_id: edits.move(draft, entry_id, 1), "{} moved down"),
}


def _act(store: Store, action: str, demos: Demos) -> None:
    """Do the action of a button.

    Raises NotFound (an entry or a demo that is not there) and Refused (a limit, or no such action).
    """
    name, _, target = action.partition(":")
    draft = store.current().draft
    if action in ("", "save", "read-shorthand"):
        return
    if action == "undo":
        store.undo()
    elif action == "redo":
        store.redo()
    elif action == "add-pole":
        _keep(store, edits.add_pole(draft), lambda _: "a pole added")
    elif action == "new":
        _keep(store, new_draft(draft.next_id), lambda _: "a new problem begun")
    elif name == "open":
        opened = demos.draft(target, draft.next_id)
        _keep(store, opened, lambda _: f"demo opened: {shortened(opened.name)}")
    elif name in _ON_ENTRY:
        edit, words = _ON_ENTRY[name]
        _keep(store, edit(draft, target), lambda before: words.format(name_of_entry(before, target)))
    else:
        raise Refused(f"There is no action {action[:40]!r}.")
