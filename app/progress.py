"""Progress of long computations, and how they are stopped.

A computation that may take long receives a ``Progress``: it reports what it does in words, and calls ``check`` between
its steps.  ``check`` returns, or raises: the refusal for a time limit that ran out is handed to ``Deadline`` by whoever
sets the limit, because this module imports nothing of the package.
"""

import time
from collections.abc import Callable
from typing import Protocol


class Progress(Protocol):
    """What a long computation is given by its caller."""

    def report(self, text: str, fraction: float | None = None) -> None:
        """Say what is being done; ``fraction`` is the part that is done, between 0 and 1, None where unknown."""

    def check(self) -> None:
        """Return if the computation may go on; raise the caller's refusal (``OutOfTime``) if not."""


class Unlimited:
    """Progress that nobody looks at, without a limit."""

    def report(self, text: str, fraction: float | None = None) -> None:
        """Nothing is done with it."""

    def check(self) -> None:
        """Never stops."""


class Deadline:
    """Progress with a time limit in seconds, counted from now; reports go to ``listener``.

    ``refusal`` makes the error that ``check`` raises from a sentence.
    """

    def __init__(
        self,
        seconds: float,
        refusal: Callable[[str], Exception],
        listener: Callable[[str, float | None], None] | None = None,
    ) -> None:
        self._seconds = seconds
        self._end = time.monotonic() + seconds
        self._refusal = refusal
        self._listener = listener
        self._doing = ""

    def report(self, text: str, fraction: float | None = None) -> None:
        """Remember what is being done, and tell the listener."""
        self._doing = text
        if self._listener is not None:
            self._listener(text, fraction)

    def check(self) -> None:
        """Raise the refusal once the time is over."""
        if time.monotonic() > self._end:
            doing = f" ({self._doing})" if self._doing else ""
            raise self._refusal(f"The time limit of {self._seconds:g} s ran out{doing}.")
