"""Forms: fields → draft → store, and that nothing entered is lost."""

import json
import time
from contextlib import closing
from urllib.parse import urlencode

import pytest
from fastapi import Request
from starlette.testclient import TestClient

from app.desk.draft import Draft
from app.desk.fields import structure_of, texts_of, with_texts
from app.desk.reading import draft_of, read_draft
from app.desk.store import Store
from app.errors import Malformed, NotFound, Refused, TooLarge
from app.local.shorthand import problem_from_shorthand
from app.local.writer import canonical_text
from app.web import forms
from app.web.demos import Demos
from app.web.forms import Post, accept, parse_form, read_post

BASE = "http://127.0.0.1:8400"


def draft_from(line):
    return draft_of(problem_from_shorthand(line))


@pytest.fixture
def demos(tmp_path):
    folder = tmp_path / "demos"
    folder.mkdir()
    for name, line in (("20-second", "21,111,111"), ("10-first", "11,11,11,11")):
        document = json.loads(canonical_text(problem_from_shorthand(line)))
        document["name"] = f"the {name}"
        (folder / f"{name}.json").write_text(json.dumps(document))
    return Demos(folder)


@pytest.fixture
def store(tmp_path):
    with closing(Store(tmp_path / "desk.sqlite", lambda: draft_from("11,11,11"))) as opened:
        yield opened


def form(revision, **changes):
    """The fields of the whole form that shows a revision, with changes (_ for the points of an address)."""
    typed = {name.replace("_", "."): text for name, text in changes.items()}
    return {**texts_of(revision.draft), "structure": structure_of(revision.draft), **typed}


def post(store, demos, revision=None, action="", **changes):
    shown = revision or store.current()
    return accept(store, Post(form(shown, **changes), action, shown.number), demos)


def every_text_ever(store):
    rows = store._connection.execute("SELECT draft FROM revisions").fetchall()
    return {text for (data,) in rows for text in texts_of(Draft.from_json(json.loads(data))).values()}


# --- bodies


def test_fields_and_their_characters():
    body = urlencode({"name": "Größe & α = 1+1", "eigenvalue.e3.value": "a+b", "notes": "one\r\ntwo", "base": ""})
    assert parse_form(body.encode()) == {
        "name": "Größe & α = 1+1",
        "eigenvalue.e3.value": "a+b",
        "notes": "one\ntwo",
        "base": "",
    }


def test_an_empty_body_is_an_empty_form():
    assert parse_form(b"") == {}


def test_the_last_of_two_values_counts():
    assert parse_form(b"a=1&a=2") == {"a": "2"}


@pytest.mark.parametrize("body", [b"a", b"a=1&b", b"a=%ff", "a=é".encode(), b"a=1&&b=2", b"\x00\xff"])
def test_bodies_that_are_no_forms(body):
    with pytest.raises(Malformed):
        parse_form(body)


def test_the_number_of_fields_is_limited():
    body = "&".join(f"f{k}=1" for k in range(6000)).encode()
    assert len(parse_form(body)) == 6000
    with pytest.raises(TooLarge, match="6,000"):
        parse_form(body + b"&one=more")


@pytest.fixture
def reading(application):
    """A client of an address that answers with the post it read."""

    @application.post("/echo")
    async def echo(request: Request) -> dict[str, object]:
        read = await read_post(request)
        return {"fields": dict(read.fields), "action": read.action, "revision": read.revision}

    with TestClient(application, base_url=BASE) as opened:
        yield opened


def test_a_post_is_read(reading):
    data = {"revision": "17", "action": "copy:p3", "name": "x"}
    assert reading.post("/echo", data=data).json() == {"fields": {"name": "x"}, "action": "copy:p3", "revision": 17}


@pytest.mark.parametrize("revision", ["", "-1", "1.0", "٣", "x", "9" * 40])
def test_a_revision_that_is_no_number_is_none(reading, revision):
    assert reading.post("/echo", data={"revision": revision}).json()["revision"] is None


def test_other_kinds_of_bodies_are_refused(reading):
    for content_type in ("multipart/form-data; boundary=x", "application/json", "text/plain"):
        assert reading.post("/echo", content=b"a=1", headers={"Content-Type": content_type}).status_code == 400
    assert reading.post("/echo", files={"a": b"1"}).status_code == 400
    assert reading.post("/echo", content=b"a=" + b"x" * 2_000_000).status_code == 413


def test_a_form_of_2400_fields_is_read_quickly():
    draft = draft_from(",".join(["1^100"] * 12))
    body = urlencode({**texts_of(draft), "structure": structure_of(draft), "revision": "1"}).encode()
    assert body.count(b"&") > 2400
    times = []
    for _ in range(9):
        begun = time.process_time()
        parse_form(body)
        times.append(time.process_time() - begun)
    assert sorted(times)[4] < 0.03  # about 2 ms on a quiet machine


# --- texts


def test_a_text_is_changed(store, demos):
    before = store.current()
    outcome = post(store, demos, eigenvalue_e3_value="5")
    assert outcome.changed
    assert outcome.message == ""
    assert outcome.revision.parent == before.number
    assert outcome.revision.draft == with_texts(before.draft, {"eigenvalue.e3.value": "5"})
    assert outcome.revision.words == "eigenvalue at 0: a1 → 5"


def test_an_unchanged_form_makes_no_revision(store, demos):
    before = store.current()
    outcome = post(store, demos)
    assert outcome.revision == before
    assert not outcome.changed


def test_absent_fields_are_unchanged(store, demos):
    before = store.current()
    outcome = accept(store, Post({"eigenvalue.e3.value": "5"}, "", before.number), demos)
    assert outcome.revision.draft == with_texts(before.draft, {"eigenvalue.e3.value": "5"})


def test_texts_that_do_not_parse_are_kept(store, demos):
    outcome = post(store, demos, eigenvalue_e3_value="1//(", block_b2_exponent="?", name="half done")
    texts = texts_of(outcome.revision.draft)
    assert texts["eigenvalue.e3.value"] == "1//("
    assert texts["block.b2.exponent"] == "?"
    assert outcome.revision.words == "3 texts changed"
    assert read_draft(outcome.revision.draft).problem is None
    good = store.last_good()
    assert good is not None
    assert good.number == outcome.revision.parent


def test_texts_are_kept_even_if_reading_them_fails_unexpectedly(store, demos, monkeypatch, caplog):
    def fail(draft):
        raise ZeroDivisionError

    monkeypatch.setattr(forms, "refreshed", fail)
    outcome = post(store, demos, eigenvalue_e3_value="5")
    assert texts_of(store.current().draft)["eigenvalue.e3.value"] == "5"
    assert outcome.revision == store.current()
    assert caplog.records


# --- posts based on an older state


def test_two_windows_change_different_texts(store, demos):
    shown = store.current()
    post(store, demos, shown, eigenvalue_e3_value="5")
    outcome = post(store, demos, shown, eigenvalue_e4_value="6")
    texts = texts_of(outcome.revision.draft)
    assert (texts["eigenvalue.e3.value"], texts["eigenvalue.e4.value"]) == ("5", "6")
    assert outcome.message == ""


def test_two_windows_change_the_same_text(store, demos):
    shown = store.current()
    post(store, demos, shown, eigenvalue_e3_value="5")
    outcome = post(store, demos, shown, eigenvalue_e3_value="6")
    assert texts_of(outcome.revision.draft)["eigenvalue.e3.value"] == "6"
    assert "another window" in outcome.message
    assert {"5", "6"} <= every_text_ever(store)
    assert texts_of(store.undo().draft)["eigenvalue.e3.value"] == "5"


def test_a_stale_window_that_changed_nothing_changes_nothing(store, demos):
    shown = store.current()
    head = post(store, demos, shown, eigenvalue_e3_value="5").revision
    assert post(store, demos, shown).revision == head


def test_a_text_of_an_entry_that_was_removed_meanwhile(store, demos):
    shown = store.current()
    removed = post(store, demos, shown, action="remove:p1").revision
    outcome = post(store, demos, shown, eigenvalue_e3_value="precious", eigenvalue_e7_value="9")
    assert "removed" in outcome.message
    assert "precious" in every_text_ever(store)
    assert outcome.revision.draft.poles[0].id != "p1"
    assert texts_of(outcome.revision.draft) == {**texts_of(removed.draft), "eigenvalue.e7.value": "9"}


def test_a_page_based_on_an_undone_state(store, demos):
    undone = post(store, demos, eigenvalue_e3_value="5").revision
    store.undo()
    outcome = post(store, demos, undone, eigenvalue_e4_value="6")
    texts = texts_of(outcome.revision.draft)
    assert texts["eigenvalue.e4.value"] == "6"
    assert texts["eigenvalue.e3.value"] != "5", "only what this window changed"


def test_a_page_of_an_unknown_state_is_taken_as_it_stands(store, demos):
    other = with_texts(draft_from("21,111,111"), {"name": "from elsewhere"})
    fields = {**texts_of(other), "structure": structure_of(other)}
    outcome = accept(store, Post(fields, "", 999), demos)
    assert outcome.revision.draft.poles == other.poles
    assert outcome.revision.draft.name == "from elsewhere"
    assert "earlier desk" in outcome.message


def test_a_known_number_with_another_structure_is_another_desk(store, demos):
    other = draft_from("21,111,111")
    fields = {**texts_of(other), "structure": structure_of(other)}
    outcome = accept(store, Post(fields, "", store.current().number), demos)
    assert outcome.revision.draft.poles == other.poles


@pytest.mark.parametrize("fields", [{}, {"structure": "nonsense"}, {"structure": ""}])
def test_a_page_of_an_unknown_state_that_cannot_stand_alone_is_refused(store, demos, fields):
    before = store.current()
    with pytest.raises(Refused, match="does not know"):
        accept(store, Post({**fields, "eigenvalue.e3.value": "5"}, "", 999), demos)
    assert store.current() == before


# --- the shorthand


def test_a_changed_shorthand_is_read(store, demos):
    before = store.current()
    outcome = post(store, demos, shorthand="21,111,111")
    assert outcome.revision.parent == before.number
    assert [len(pole.blocks[0].residue) for pole in outcome.revision.draft.poles] == [2, 3, 3]
    assert outcome.revision.draft.shorthand == "21,111,111"
    assert read_draft(outcome.revision.draft).faults == ()
    assert outcome.revision.draft.poles[0].id not in form(store.undo()), "entries of the new problem have new ids"


def test_a_shorthand_and_a_text_in_one_post(store, demos):
    outcome = post(store, demos, shorthand="21,111,111", eigenvalue_e3_value="precious")
    assert outcome.revision.draft.shorthand == "21,111,111"
    assert texts_of(store.undo().draft)["eigenvalue.e3.value"] == "precious"


def test_a_faulty_shorthand_stays_as_typed(store, demos):
    before = store.current()
    outcome = post(store, demos, shorthand="21,11x")
    assert outcome.revision.draft.shorthand == "21,11x"
    assert outcome.revision.draft.poles == before.draft.poles
    reading = read_draft(outcome.revision.draft)
    assert reading.problem is not None
    assert [fault.field for fault in reading.faults] == ["shorthand"]
    again = post(store, demos, eigenvalue_e3_value="5")
    assert again.revision.draft.shorthand == "21,11x", "it is kept while other texts change"


def test_an_emptied_shorthand_is_written_anew(store, demos):
    post(store, demos, shorthand="21,11x")
    assert post(store, demos, shorthand="").revision.draft.shorthand == "11,11,11"


def test_the_shorthand_follows_the_poles(store, demos):
    assert post(store, demos, action="remove:p1").revision.draft.shorthand == "11,11"
    outcome = post(store, demos, action="add-pole")
    assert outcome.revision.draft.shorthand == "11,11,11"


def test_reading_the_shorthand_again_makes_everything_generic(store, demos):
    post(store, demos, eigenvalue_e3_value="5")
    outcome = post(store, demos, action="read-shorthand")
    assert "5" not in texts_of(outcome.revision.draft).values()
    assert outcome.revision.draft.shorthand == "11,11,11"


def test_an_own_name_is_kept_and_that_of_a_demo_is_not(store, demos):
    post(store, demos, name="my own", notes="mine")
    kept = post(store, demos, shorthand="21,111,111").revision.draft
    assert (kept.name, kept.notes) == ("my own", "mine")
    post(store, demos, action="open:10-first")
    assert post(store, demos, shorthand="21,21,21,21").revision.draft.name == ""


# --- actions


def test_undo_and_redo(store, demos):
    before = store.current()
    changed = post(store, demos, eigenvalue_e3_value="5").revision
    undone = post(store, demos, action="undo").revision
    assert undone.number == before.number
    assert undone.can_redo
    assert post(store, demos, action="redo").revision.number == changed.number


def test_texts_typed_and_then_undo(store, demos):
    before = store.current()
    outcome = post(store, demos, action="undo", eigenvalue_e3_value="5")
    assert outcome.revision.number == before.number
    assert texts_of(store.redo().draft)["eigenvalue.e3.value"] == "5"


def test_texts_typed_and_then_an_entry_added(store, demos):
    outcome = post(store, demos, action="add-eigenvalue:b2", eigenvalue_e3_value="5")
    block = outcome.revision.draft.poles[0].blocks[0]
    assert block.residue[0].value == "5"
    assert len(block.residue) == 3
    assert outcome.revision.words == "an eigenvalue added to the block 0 at 0"


ACTIONS = {
    "add-pole": 1,
    "add-block:p1": 0,
    "add-eigenvalue:b2": 0,
    "remove:p1": -1,
    "copy:p1": 1,
    "copy:b2": 0,
    "copy:e3": 0,
    "later:p1": 0,
    "earlier:e4": 0,
    "new": 1,
    "open:20-second": 0,
}


@pytest.mark.parametrize(("action", "more_poles"), ACTIONS.items())
def test_every_action_makes_one_revision(store, demos, action, more_poles):
    before = store.current()
    outcome = post(store, demos, action=action)
    assert outcome.message == ""
    assert outcome.revision.parent == before.number
    assert len(outcome.revision.draft.poles) == len(before.draft.poles) + more_poles
    assert "{}" not in outcome.revision.words
    assert post(store, demos, action="undo").revision.draft.poles == before.draft.poles


@pytest.mark.parametrize(
    "action", ["explode", "remove:p99", "copy:", "open:nothing", "add-block:b2", "x" * 5000, "undo:"]
)
def test_actions_that_cannot_be_done_say_so_and_keep_the_texts(store, demos, action):
    outcome = post(store, demos, action=action, eigenvalue_e3_value="precious")
    assert outcome.message
    assert len(outcome.message) < 200
    assert texts_of(outcome.revision.draft)["eigenvalue.e3.value"] == "precious"


# --- demos


def test_demos_in_the_order_of_their_files(demos):
    assert [demo.key for demo in demos.entries] == ["10-first", "20-second"]
    assert demos.entries[0].name == "the 10-first"
    assert demos.first().name == "the 10-first"
    assert demos.draft("20-second", 40).poles[0].id == "p40"
    with pytest.raises(NotFound):
        demos.draft("../10-first")


def test_a_demo_that_is_refused_is_left_out(tmp_path, caplog):
    (tmp_path / "a.json").write_text("{")
    (tmp_path / "b.json").mkdir()
    demos = Demos(tmp_path)
    assert demos.entries == ()
    assert len(caplog.records) == 2
    assert read_draft(demos.first()).faults == ()
    assert demos.first().shorthand == "11,11,11,11"


# --- speed


def test_an_edit_at_rank_100_is_stored_in_time(tmp_path, demos):
    """Form to draft to store for 1,200 eigenvalues: about 20 ms; the bound leaves room for a busy machine."""
    with closing(Store(tmp_path / "large.sqlite", lambda: draft_from(",".join(["1^100"] * 12)))) as store:
        times = []
        for number in range(9):
            shown = store.current()
            body = urlencode({**form(shown, eigenvalue_e700_value=str(number)), "revision": shown.number}).encode()
            begun = time.process_time()
            fields = parse_form(body)
            outcome = accept(store, Post(fields, "", shown.number), demos)
            times.append(time.process_time() - begun)
            assert outcome.changed
        assert sorted(times)[4] < 0.1
