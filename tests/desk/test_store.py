"""The store: revisions, undo and redo, damaged files."""

import sqlite3
import threading
import time
from contextlib import closing
from dataclasses import replace

import pytest

from app.desk.draft import Draft
from app.desk.fields import with_texts
from app.desk.reading import draft_of
from app.desk.store import APPLICATION_ID, SCHEMA_VERSION, Store
from app.errors import Failed, Refused
from app.local.shorthand import problem_from_shorthand


def first():
    return Draft(notes="first", next_id=4)


def named(name, next_id=4):
    return Draft(name=name, next_id=next_id)


@pytest.fixture
def path(tmp_path):
    return tmp_path / "folder" / "desk.sqlite"


@pytest.fixture
def store(path):
    with closing(Store(path, first)) as opened:
        yield opened


def test_a_new_desk_has_the_first_draft(store):
    revision = store.current()
    assert revision.draft == first()
    assert revision.parent is None
    assert not revision.can_undo
    assert not revision.can_redo
    assert store.notice == ""


def test_appended_revisions_are_there_after_opening_again(path, store):
    a = store.append(named("a"), "name: a")
    store.append(named("b"), "name: b")
    store.undo()
    store.close()
    with closing(Store(path, first)) as again:
        assert again.current() == replace(a, can_redo=True)
        assert again.redo().draft == named("b")
        assert again.notice == ""


def test_times_are_utc(store):
    assert store.append(named("a"), "x").time.endswith("Z")


def test_undo_and_redo_walk_the_way(store):
    names = ["a", "b", "c"]
    for name in names:
        store.append(named(name), name)
    assert [store.undo().draft.name for _ in range(4)] == ["b", "a", "", ""]
    assert store.current().draft == first()
    assert [store.redo().draft.name for _ in range(4)] == ["a", "b", "c", "c"]
    assert not store.current().can_redo


def test_an_edit_after_undo_closes_the_way_forward_and_keeps_the_branch(store):
    a = store.append(named("a"), "a")
    b = store.append(named("b"), "b")
    store.undo()
    c = store.append(named("c"), "c")
    assert c.parent == a.number
    assert not c.can_redo
    assert store.redo() == c
    kept = store.revision(b.number)
    assert kept is not None
    assert kept.draft == named("b")
    assert store.undo().draft == named("a")
    assert store.redo().number == c.number, "redo takes what was undone last, not the older branch"


def test_the_same_draft_again_makes_no_revision(store):
    a = store.append(named("a"), "a")
    assert store.append(named("a", next_id=9), "again") == a


def test_numbers_for_entries_are_never_given_twice(store):
    store.append(named("a", next_id=20), "entries added")
    assert store.undo().draft.next_id == 20
    assert store.append(named("b", next_id=5), "b").draft.next_id == 20


def test_history_is_the_way_back(store):
    store.append(named("a"), "a")
    store.append(named("b"), "b")
    store.undo()
    store.append(named("c"), "c")
    assert [entry.words for entry in store.history()] == ["c", "a", "the desk was begun"]
    assert [entry.words for entry in store.history(2)] == ["c", "a"]
    entries = store.history()
    assert [entry.parent for entry in entries] == [*(entry.number for entry in entries[1:]), None]


def test_last_good_is_the_newest_readable_one_on_the_way(store):
    good = store.append(named("good"), "good")
    store.append(named("bad"), "bad", readable=False)
    store.append(named("worse"), "worse", readable=False)
    found = store.last_good()
    assert found is not None
    assert found.number == good.number
    store.append(named("good again"), "good again")
    found = store.last_good()
    assert found is not None
    assert found.draft.name == "good again"


def test_last_good_may_be_missing(store):
    for number in range(205):
        store.append(named(f"bad {number}"), "bad", readable=False)
    assert store.last_good() is None


def test_unknown_revision(store):
    assert store.revision(999) is None


def test_a_turn_keeps_what_was_appended_when_its_body_fails(path, store):
    with pytest.raises(RuntimeError), store.turn():
        store.append(named("typed"), "typed")
        raise RuntimeError
    assert store.current().draft == named("typed")
    store.close()
    with closing(Store(path, first)) as again:
        assert again.current().draft == named("typed")


def test_a_turn_reaches_the_disk_as_one(path, store):
    with store.turn():
        store.append(named("a"), "a")
        with closing(sqlite3.connect(path)) as other:
            assert other.execute("SELECT count(*) FROM revisions").fetchone() == (1,)
        store.append(named("b"), "b")
    with closing(sqlite3.connect(path)) as other:
        assert other.execute("SELECT count(*) FROM revisions").fetchone() == (3,)


def test_many_threads(store):
    def work(k):
        for step in range(10):
            with store.turn():
                head = store.current().draft
                store.append(replace(head, notes=head.notes + f" {k}.{step}"), "more")

    threads = [threading.Thread(target=work, args=(k,)) for k in range(6)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert len(store.current().draft.notes.split()) == 61, "an edit was lost between two threads"


def test_two_programs_on_one_folder_see_each_other(path, store):
    with closing(Store(path, first)) as other:
        store.append(named("a"), "a")
        assert other.current().draft == named("a")
        other.append(named("b"), "b")
        assert store.current().draft == named("b")
        store.undo()
        assert other.current().draft == named("a")


def test_a_turn_keeps_another_program_waiting(path, store):
    """Two programs that both look and then add: the second adds to what the first has added."""
    with closing(Store(path, first)) as other:
        thread = threading.Thread(target=lambda: other.append(named("b"), "b"))
        with store.turn():
            head = store.current()
            thread.start()
            time.sleep(0.05)
            assert store.append(named("a"), "a").parent == head.number
        thread.join()
        assert [entry.words for entry in store.history()] == ["b", "a", "the desk was begun"]


def test_settings_of_the_file(path, store):
    with closing(sqlite3.connect(path)) as other:
        assert other.execute("PRAGMA journal_mode").fetchone() == ("wal",)
        assert other.execute("PRAGMA user_version").fetchone() == (SCHEMA_VERSION,)
        assert other.execute("PRAGMA application_id").fetchone() == (APPLICATION_ID,)
    assert store._connection.execute("PRAGMA synchronous").fetchone() == (2,)
    assert store._connection.execute("PRAGMA foreign_keys").fetchone() == (1,)


# --- files that are not as they should be


def damaged_in_the_middle(path):
    """Overwrite the middle of every page but the first, as a bad disk would."""
    data = bytearray(path.read_bytes())
    for page in range(4096, len(data), 4096):
        data[page : page + 64] = b"\xff" * 64
    path.write_bytes(data)


def damaged_in_the_index(path):
    """Only an integrity check sees this before it does harm."""
    with closing(sqlite3.connect(path)) as other:
        (page,) = other.execute("SELECT rootpage FROM sqlite_master WHERE name = 'revisions_by_parent'").fetchone()
    data = bytearray(path.read_bytes())
    data[page * 4096 - 8 : page * 4096] = b"\x07" * 8
    path.write_bytes(data)


def truncated(path):
    path.write_bytes(path.read_bytes()[:5000])


def not_sqlite(path):
    path.write_bytes(b"this is no database " * 500)


def foreign(path):
    path.unlink()
    with closing(sqlite3.connect(path)) as other:
        other.execute("CREATE TABLE recipes (name TEXT)")
        other.commit()


def without_revisions(path):
    with closing(sqlite3.connect(path)) as other:
        other.execute("DROP TABLE revisions")
        other.commit()


def with_unreadable_draft(path):
    with closing(sqlite3.connect(path)) as other:
        other.execute("UPDATE revisions SET draft = '{\"name\": 5}'")
        other.commit()


def with_loose_ends(path):
    with closing(sqlite3.connect(path)) as other:
        other.execute("UPDATE desks SET head = 77")
        other.commit()


DAMAGES = [
    damaged_in_the_middle,
    damaged_in_the_index,
    truncated,
    not_sqlite,
    foreign,
    without_revisions,
    with_unreadable_draft,
    with_loose_ends,
]


@pytest.mark.parametrize("damage", DAMAGES)
def test_a_damaged_file_is_set_aside_whole(path, damage):
    store = Store(path, first)
    store.append(named("a"), "a")
    store.close()
    damage(path)
    damaged = path.read_bytes()
    with closing(Store(path, first)) as again:
        assert again.current().draft == first()
        assert "damaged" in again.notice
        (aside,) = path.parent.glob("desk-set-aside-*.sqlite")
        assert str(aside) in again.notice
        assert aside.read_bytes() == damaged
        again.append(named("new"), "new")
    with closing(Store(path, first)) as third:
        assert third.notice == ""
        assert third.current().draft == named("new")


def test_an_empty_file_is_a_start_that_was_interrupted(path):
    path.parent.mkdir()
    path.touch()
    with closing(Store(path, first)) as store:
        assert store.notice == ""
        assert store.current().draft == first()


def test_tables_without_a_desk_are_a_start_that_was_interrupted(path):
    with pytest.raises(ZeroDivisionError):
        Store(path, lambda: Draft(next_id=1 // 0))
    with closing(Store(path, first)) as store:
        assert store.notice == ""
        assert store.current().draft == first()


def test_a_newer_file_is_refused_and_left_alone(path, store):
    store.close()
    with closing(sqlite3.connect(path)) as other:
        other.execute(f"PRAGMA user_version = {SCHEMA_VERSION + 1}")
    before = path.read_bytes()
    with pytest.raises(Refused, match="newer version"):
        Store(path, first)
    assert path.read_bytes() == before


def test_a_folder_that_cannot_be_made(tmp_path):
    (tmp_path / "file").write_text("")
    with pytest.raises(Refused, match="cannot be made"):
        Store(tmp_path / "file" / "desk.sqlite", first)


def test_a_folder_in_the_place_of_the_file(path):
    path.mkdir(parents=True)
    with pytest.raises(Refused, match="cannot be opened"):
        Store(path, first)


def test_a_disk_that_is_full(store):
    pages = store._connection.execute("PRAGMA page_count").fetchone()[0]
    store._connection.execute(f"PRAGMA max_page_count = {pages}")
    with pytest.raises(Failed, match="could not be written"):
        store.append(Draft(notes="x" * 200_000), "long")
    store._connection.execute("PRAGMA max_page_count = 100000")
    assert store.current().draft == first()
    assert store.append(named("after"), "after").draft == named("after")


def test_an_edit_is_on_the_disk_quickly(store):
    """The fastest of the edits at rank 100 with 12 poles: a busy machine slows some of them, not all."""
    draft = draft_of(problem_from_shorthand(",".join(["1^100"] * 12)))
    store.append(draft, "large")
    times = []
    for number in range(15):
        draft = with_texts(draft, {"eigenvalue.e700.value": str(number)})
        begun = time.perf_counter()
        store.append(draft, "edit")
        times.append(time.perf_counter() - begun)
    assert min(times) < 0.05
