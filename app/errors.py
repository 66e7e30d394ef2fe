"""The tree of refusals: everything the program says no with.

    PolewrightError
    ├── Malformed      the text is not JSON, or not UTF-8
    ├── Refused        understood, but not acceptable; carries one Place per fault
    ├── TooLarge       over a size limit, named in the message
    ├── NotFound       no such page, desk entry or file
    ├── NotAllowed     the address exists, the method does not
    ├── Forbidden      wrong Host, foreign Origin
    ├── OutOfTime      a time limit ran out
    ├── Busy           no capacity at the moment
    └── Failed         a fault of the program itself

Each class has a ``kind`` (the word used in every machine-readable error) and every instance a message of one
sentence.  Places are JSON pointers; ``local/`` adds them, ``web/`` turns them into form fields.
"""

from dataclasses import dataclass
from typing import ClassVar


@dataclass(frozen=True)
class Place:
    """One fault: where it is (a JSON pointer), what is wrong, and what would be right."""

    at: str
    message: str
    expected: str = ""


class PolewrightError(Exception):
    """Root of the tree; never raised itself."""

    kind: ClassVar[str] = "failed"

    def __init__(self, message: str, places: tuple[Place, ...] = ()) -> None:
        super().__init__(message)
        self.message = message
        self.places = places

    def as_json(self) -> dict[str, object]:
        """The one error shape of every door: kind, message, places."""
        places = [{"at": p.at, "message": p.message, "expected": p.expected} for p in self.places]
        return {"kind": self.kind, "message": self.message, "places": places}


class Malformed(PolewrightError):
    """The text is not JSON, or not UTF-8."""

    kind = "malformed"


class Refused(PolewrightError):
    """Understood, but not acceptable; every fault has its place."""

    kind = "refused"


class TooLarge(PolewrightError):
    """Over a size limit, which the message names."""

    kind = "too_large"


class NotFound(PolewrightError):
    """No such page, entry or file."""

    kind = "not_found"


class NotAllowed(PolewrightError):
    """The address exists, the method does not."""

    kind = "not_allowed"


class Forbidden(PolewrightError):
    """The request comes from where it may not come from."""

    kind = "forbidden"


class OutOfTime(PolewrightError):
    """A time limit ran out."""

    kind = "out_of_time"


class Busy(PolewrightError):
    """No capacity at the moment; the same request may succeed later."""

    kind = "busy"


class Failed(PolewrightError):
    """A fault of the program itself."""

    kind = "failed"


class NumberFault(Exception):
    """A text outside the number grammar: what is wrong, at which character (counted from 0), what would be right.

    It is no PolewrightError of its own: whoever parses knows the place and makes a ``Place`` of it.
    """

    def __init__(self, message: str, position: int, expected: str = "") -> None:
        super().__init__(message)
        self.message = message
        self.position = position
        self.expected = expected
