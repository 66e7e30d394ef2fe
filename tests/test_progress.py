"""The progress protocol: reports reach the listener, a deadline raises the caller's refusal."""

import pytest

from app.progress import Deadline, Unlimited


def test_deadline():
    heard = []
    watch = Deadline(60.0, ValueError, lambda text, fraction: heard.append((text, fraction)))
    watch.report("step", 0.5)
    watch.check()
    assert heard == [("step", 0.5)]
    late = Deadline(-1.0, ValueError)
    late.report("long step")
    with pytest.raises(ValueError, match=r"-1 s ran out \(long step\)"):
        late.check()


def test_unlimited():
    Unlimited().report("anything")
    Unlimited().check()
