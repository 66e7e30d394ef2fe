"""What was acknowledged is there after the process was killed at any moment."""

import random
import signal
import subprocess
import sys
import time
from contextlib import closing
from pathlib import Path

import pytest

from app.desk.draft import Draft
from app.desk.store import Store

ROOT = Path(__file__).parents[2]

WRITER = """
import sys
from pathlib import Path
from app.desk.draft import Draft
from app.desk.store import Store

store = Store(Path(sys.argv[1]), lambda: Draft(notes="begun"))
count = int(sys.argv[2])
while True:
    count += 1
    # every seventh step is an undo followed by an edit, every fifth a turn of two revisions
    if count % 7 == 0:
        store.undo()
    with store.turn():
        if count % 5 == 0:
            store.append(Draft(notes=f"half {count}"), "half")
        revision = store.append(Draft(notes=f"step {count} " + "x" * (count % 3) * 5000), f"step {count}")
    sys.stdout.write(f"{count} {revision.number}\\n")
    sys.stdout.flush()
"""


def killed_run(path, begin, seconds):
    """Let the writer run for so long, kill it, and return what it acknowledged: (step, revision)."""
    process = subprocess.Popen(
        [sys.executable, "-c", WRITER, str(path), str(begin)], stdout=subprocess.PIPE, text=True, cwd=ROOT
    )
    assert process.stdout is not None
    try:
        lines = [process.stdout.readline()]
        time.sleep(seconds)
        process.send_signal(signal.SIGKILL)
        rest = process.stdout.read()
    finally:
        process.kill()
        process.stdout.close()
        process.wait()
    complete = (lines[0] + rest).rpartition("\n")[0]
    return [tuple(map(int, line.split())) for line in complete.splitlines()]


@pytest.mark.skipif(sys.platform == "win32", reason="SIGKILL is not there")
def test_killed_at_random_moments(tmp_path):
    path = tmp_path / "desk.sqlite"
    moments = random.Random(5)
    acknowledged = []
    begin = 0
    for _ in range(6):
        acknowledged += killed_run(path, begin, moments.uniform(0.0, 0.25))
        with closing(Store(path, lambda: Draft(notes="never"))) as store:
            assert store.notice == ""
            for step, number in acknowledged:
                revision = store.revision(number)
                assert revision is not None, f"step {step} was acknowledged and is gone"
                assert revision.draft.notes.startswith(f"step {step} ")
            last, number = acknowledged[-1]
            head = store.current()
            # the last acknowledged step, or the one after it, which was on the disk and not yet acknowledged;
            # never the first half of a turn, except where the next step had undone the last one only
            undone = (last + 1) % 7 == 0 and head.number == store.revision(number).parent
            assert undone or head.draft.notes.startswith((f"step {last} ", f"step {last + 1} "))
            begin = last + 1
    assert len(acknowledged) > 30
