"""The store of the desk: one SQLite file with every revision that ever stood on it.

    Store(path, first)     open or begin; a damaged file is set aside under another name and said so in ``notice``
    turn()                 several steps as one, atomic for other threads and programs
    append, undo, redo     the steps; when they return (or the turn ends) the disk has them
    current, revision, history, last_good

Revisions are only ever added.  Each has a parent; the desk has a head.  Undo moves the head to its parent, redo to
its newest child.  An edit after an undo starts a branch: the undone revisions stay in the table, out of reach of redo.

Why it is safe: write-ahead log with synchronous=FULL, so that a step that returned survives the end of the process
and of the machine; one connection under a lock, one writing transaction at a time; two programs on one folder see
each other's steps, because the head is read anew in every step.  The tables are made for several desks; there is one.
"""

import json
import sqlite3
import threading
from collections import OrderedDict
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass, replace
from datetime import UTC, datetime
from pathlib import Path

from app.desk.draft import Draft, same_content
from app.errors import Busy, Failed, Refused

SCHEMA_VERSION = 1
APPLICATION_ID = 0x504F4C57  # "POLW", so that a file of another program is not taken for ours
BUSY_SECONDS = 5.0
_KEPT_DRAFTS = 16
_LOOK_BACK = 200
_SCHEMA = """
CREATE TABLE desks (
    id INTEGER PRIMARY KEY,
    name TEXT NOT NULL,
    begun TEXT NOT NULL,
    head INTEGER REFERENCES revisions (number),
    next_id INTEGER NOT NULL
);
CREATE TABLE revisions (
    number INTEGER PRIMARY KEY AUTOINCREMENT,
    desk INTEGER NOT NULL REFERENCES desks (id),
    parent INTEGER REFERENCES revisions (number),
    time TEXT NOT NULL,
    words TEXT NOT NULL,
    readable INTEGER NOT NULL,
    draft TEXT NOT NULL
);
CREATE INDEX revisions_by_parent ON revisions (parent);
"""
_WAY = """
WITH RECURSIVE way (number, parent, step) AS (
    SELECT number, parent, 0 FROM revisions WHERE number = :head
    UNION ALL
    SELECT r.number, r.parent, step + 1 FROM revisions AS r JOIN way ON r.number = way.parent WHERE step < :steps
)
"""


@dataclass(frozen=True)
class Revision:
    """One state of the desk.  ``time`` is UTC in ISO 8601; ``words`` say what changed."""

    number: int
    parent: int | None
    time: str
    words: str
    draft: Draft
    can_undo: bool
    can_redo: bool


@dataclass(frozen=True)
class Entry:
    """One line of the history."""

    number: int
    parent: int | None
    time: str
    words: str


class Store:
    """The desk in a file.  All methods may be called from any thread.

    Raises Refused when the file cannot be opened or written, or belongs to a newer version of the program.
    """

    def __init__(self, path: Path, first: Callable[[], Draft], *, desk: int = 1) -> None:
        self.path = path
        self.notice = ""
        self._desk = desk
        self._lock = threading.RLock()
        self._turns = 0
        self._drafts: OrderedDict[int, Draft] = OrderedDict()
        self._connection = self._open()
        try:
            self._begin_desk(first)
        except BaseException:
            self._connection.close()
            raise

    # --- opening

    def _open(self) -> sqlite3.Connection:
        try:
            self.path.parent.mkdir(parents=True, exist_ok=True, mode=0o700)
        except OSError as error:
            raise Refused(f"The data folder {self.path.parent} cannot be made: {error.strerror}.") from None
        fault = self._fault_of_file()
        if fault:
            self._set_aside(fault)
        try:
            connection = _connect(self.path)
            _prepare(connection)
        except sqlite3.Error as error:
            raise Refused(f"The desk {self.path} cannot be opened: {error}.") from None
        return connection

    def _fault_of_file(self) -> str:
        """What is wrong with an existing file, or ""; Refused when it is whole but not for this version."""
        if not self.path.exists():
            return ""
        try:  # a plain connection: nothing of a file that may not be ours is changed
            connection = sqlite3.connect(self.path, timeout=BUSY_SECONDS)
        except sqlite3.OperationalError as error:
            raise Refused(f"The desk {self.path} cannot be opened: {error}.") from None
        try:
            return _fault_of_database(connection)
        except sqlite3.OperationalError as error:
            raise Refused(f"The desk {self.path} cannot be read: {error}.") from None
        except sqlite3.DatabaseError as error:
            return str(error)
        finally:
            connection.close()

    def _set_aside(self, fault: str) -> None:
        stamp = datetime.now(UTC).strftime("%Y%m%d-%H%M%S-%f")
        aside = self.path.with_name(f"{self.path.stem}-set-aside-{stamp}{self.path.suffix}")
        try:
            for ending in ("", "-wal", "-shm"):
                part = self.path.with_name(self.path.name + ending)
                if part.exists():
                    part.rename(aside.with_name(aside.name + ending))
        except OSError as error:
            raise Refused(f"The damaged desk {self.path} cannot be set aside: {error.strerror}.") from None
        self.notice = f"The file of the desk was damaged ({fault}). It is kept as {aside}, and a new desk was begun."

    def _begin_desk(self, first: Callable[[], Draft]) -> None:
        with self.turn():
            row = self._connection.execute("SELECT head FROM desks WHERE id = ?", (self._desk,)).fetchone()
            if row is not None and row[0] is not None:
                return
            draft = first()
            self._connection.execute(
                "INSERT INTO desks (id, name, begun, head, next_id) VALUES (?, ?, ?, NULL, ?)",
                (self._desk, "", _now(), draft.next_id),
            )
            self._insert(draft, "the desk was begun", None, True)

    # --- steps

    @contextmanager
    def turn(self) -> Iterator[None]:
        """Several steps as one: nobody else's step comes between, and all reach the disk together at the end.

        What was appended stays even when the body fails: a fault in reading a text must not lose the text.
        """
        with self._lock:
            if self._turns == 0:
                self._begin()
            self._turns += 1
            try:
                yield
            finally:
                self._turns -= 1
                if self._turns == 0:
                    self._commit()

    def _begin(self) -> None:
        try:
            self._connection.execute("BEGIN IMMEDIATE")
        except sqlite3.OperationalError as error:
            raise Busy(f"The desk is being written by another program ({error}).") from None

    def _commit(self) -> None:
        try:
            self._connection.execute("COMMIT")
        except sqlite3.Error as error:  # a full disk, say; whatever was inserted is undone, and the caller is told
            if self._connection.in_transaction:
                self._connection.execute("ROLLBACK")
            self._drafts.clear()
            raise Failed(f"The desk could not be written: {error}.") from error

    def append(self, draft: Draft, words: str, *, readable: bool = True) -> Revision:
        """Add a revision after the head and make it the head; the head itself when the draft says the same.

        ``readable``: whether the draft's data make a problem (for ``last_good``).  Ids never come twice: the draft
        kept carries the highest ``next_id`` the desk ever had.  Cost: one insertion and one flush to the disk.
        """
        with self.turn():
            head = self._head()
            if same_content(self._draft(head), draft):
                return self.current()
            next_id = max(draft.next_id, self._next_id())
            self._insert(replace(draft, next_id=next_id), words, head, readable)
            return self.current()

    def _insert(self, draft: Draft, words: str, parent: int | None, readable: bool) -> None:
        text = json.dumps(draft.to_json(), ensure_ascii=False, separators=(",", ":"))
        cursor = self._connection.execute(
            "INSERT INTO revisions (desk, parent, time, words, readable, draft) VALUES (?, ?, ?, ?, ?, ?)",
            (self._desk, parent, _now(), words, int(readable), text),
        )
        number = cursor.lastrowid
        if number is None:
            raise Failed("The desk gave no number for a revision.")
        self._connection.execute(
            "UPDATE desks SET head = ?, next_id = ? WHERE id = ?", (number, draft.next_id, self._desk)
        )
        self._keep(number, draft)

    def undo(self) -> Revision:
        """Go back to the head's parent; the current revision if there is none."""
        with self.turn():
            self._move_head("SELECT parent FROM revisions WHERE number = ? AND parent IS NOT NULL")
            return self.current()

    def redo(self) -> Revision:
        """Go forward to the head's newest child, the one last undone; the current revision if there is none."""
        with self.turn():
            self._move_head("SELECT max(number) FROM revisions WHERE parent = ? HAVING max(number) IS NOT NULL")
            return self.current()

    def _move_head(self, query: str) -> None:
        row = self._connection.execute(query, (self._head(),)).fetchone()
        if row is not None:
            self._connection.execute("UPDATE desks SET head = ? WHERE id = ?", (row[0], self._desk))

    # --- looking

    def current(self) -> Revision:
        """The head."""
        with self._lock:
            revision = self.revision(self._head())
            if revision is None:
                raise Failed("The desk has no current revision.")
            return revision

    def revision(self, number: int) -> Revision | None:
        """A revision of this desk by its number."""
        with self._lock:
            row = self._connection.execute(
                "SELECT parent, time, words, EXISTS (SELECT 1 FROM revisions AS child WHERE child.parent = :number)"
                " FROM revisions WHERE number = :number AND desk = :desk",
                {"number": number, "desk": self._desk},
            ).fetchone()
            if row is None:
                return None
            parent, time, words, has_child = row
            draft = self._draft(number)
            next_id = self._next_id()
            if draft.next_id < next_id:
                draft = replace(draft, next_id=next_id)
            return Revision(number, parent, time, words, draft, parent is not None, bool(has_child))

    def history(self, limit: int = 100) -> tuple[Entry, ...]:
        """The way from the head back to the beginning, newest first, at most so many entries."""
        with self._lock:
            rows = self._connection.execute(
                _WAY + "SELECT r.number, r.parent, r.time, r.words FROM way JOIN revisions AS r USING (number)"
                " ORDER BY step",
                {"head": self._head(), "steps": max(limit, 1) - 1},
            ).fetchall()
            return tuple(Entry(*row) for row in rows)

    def last_good(self) -> Revision | None:
        """The newest revision on that way whose data made a problem, at most 200 steps back."""
        with self._lock:
            row = self._connection.execute(
                _WAY + "SELECT number FROM way JOIN revisions AS r USING (number)"
                " WHERE r.readable ORDER BY step LIMIT 1",
                {"head": self._head(), "steps": _LOOK_BACK},
            ).fetchone()
            return None if row is None else self.revision(row[0])

    def close(self) -> None:
        """Write everything into the main file and close."""
        with self._lock:
            self._connection.close()

    # --- small things

    def _head(self) -> int:
        return int(self._connection.execute("SELECT head FROM desks WHERE id = ?", (self._desk,)).fetchone()[0])

    def _next_id(self) -> int:
        return int(self._connection.execute("SELECT next_id FROM desks WHERE id = ?", (self._desk,)).fetchone()[0])

    def _draft(self, number: int) -> Draft:
        if number in self._drafts:
            self._drafts.move_to_end(number)
            return self._drafts[number]
        text = self._connection.execute("SELECT draft FROM revisions WHERE number = ?", (number,)).fetchone()[0]
        try:
            draft = Draft.from_json(json.loads(text))
        except ValueError as error:
            raise Failed(f"Revision {number} of the desk cannot be read: {error}.") from None
        self._keep(number, draft)
        return draft

    def _keep(self, number: int, draft: Draft) -> None:
        self._drafts[number] = draft
        while len(self._drafts) > _KEPT_DRAFTS:
            self._drafts.popitem(last=False)


def _now() -> str:
    return datetime.now(UTC).isoformat(timespec="milliseconds").replace("+00:00", "Z")


def _connect(path: Path) -> sqlite3.Connection:
    connection = sqlite3.connect(path, timeout=BUSY_SECONDS, isolation_level=None, check_same_thread=False)
    try:
        connection.execute("PRAGMA foreign_keys = ON")
        connection.execute("PRAGMA journal_mode = WAL")
        connection.execute("PRAGMA synchronous = FULL")
    except sqlite3.Error:
        connection.close()
        raise
    return connection


def _prepare(connection: sqlite3.Connection) -> None:
    """Make the tables in an empty file, in one transaction."""
    connection.execute("BEGIN IMMEDIATE")
    try:
        if connection.execute("PRAGMA application_id").fetchone()[0] != APPLICATION_ID:
            for statement in _SCHEMA.split(";"):
                connection.execute(statement)
            connection.execute(f"PRAGMA user_version = {SCHEMA_VERSION}")
            connection.execute(f"PRAGMA application_id = {APPLICATION_ID}")
        connection.execute("COMMIT")
    except BaseException:
        if connection.in_transaction:
            connection.execute("ROLLBACK")
        connection.close()
        raise


def _fault_of_database(connection: sqlite3.Connection) -> str:
    answers = [row[0] for row in connection.execute("PRAGMA integrity_check(1)")]
    if answers != ["ok"]:
        return str(answers[0]) if answers else "the integrity check gave no answer"
    application, version = (connection.execute(f"PRAGMA {p}").fetchone()[0] for p in ("application_id", "user_version"))
    tables = {row[0] for row in connection.execute("SELECT name FROM sqlite_master WHERE type = 'table'")}
    if not tables and application == 0:
        return ""  # an empty file: a start that was interrupted before the tables were made
    if application != APPLICATION_ID:
        return "it is a file of another program"
    if version > SCHEMA_VERSION:
        schemas = f"its schema {version}, ours {SCHEMA_VERSION}"
        raise Refused(f"The desk was written by a newer version of the program ({schemas}).")
    if not {"desks", "revisions"} <= tables:
        return "its tables are missing"
    if connection.execute("PRAGMA foreign_key_check").fetchone() is not None:
        return "its revisions do not fit together"
    heads = connection.execute("SELECT draft FROM desks JOIN revisions ON revisions.number = desks.head")
    try:
        for (text,) in heads:
            Draft.from_json(json.loads(text))
    except ValueError as error:
        return f"its current revision cannot be read: {error}"
    return ""
