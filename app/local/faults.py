"""Faults of one document: collected with their JSON pointers, raised all together."""

from app.errors import Place, Refused
from app.local.limits import MAXIMUM_PLACES

LONGEST_QUOTATION = 60
LONGEST_POINTER_KEY = 200


def child(pointer: str, key: str | int) -> str:
    """Pointer to a member: RFC 6901 escaping; a key too long to be shown points at its object instead."""
    if isinstance(key, int):
        return f"{pointer}/{key}"
    if len(key) > LONGEST_POINTER_KEY:
        return pointer
    return f"{pointer}/{key.replace('~', '~0').replace('/', '~1')}"


def quoted(text: str) -> str:
    """The text in quotation marks, shortened to what fits in a sentence."""
    shown = text if len(text) <= LONGEST_QUOTATION else text[: LONGEST_QUOTATION - 1] + "…"
    return '"' + "".join(c if c.isprintable() else f"\\u{ord(c):04x}" for c in shown) + '"'


def described(data: object) -> str:
    """What a piece of parsed JSON is, in words: for the message that says it should be something else."""
    if data is None:
        return "null"
    if isinstance(data, bool):
        return "true" if data else "false"
    if isinstance(data, str):
        return f"the text {quoted(data)}"
    if isinstance(data, (int, float)):
        return "a number"
    if isinstance(data, (list, tuple)):
        return "a list"
    return "an object" if isinstance(data, dict) else "something that is not JSON"


def encodable(text: str) -> str:
    """The text with lone surrogates written as escapes, so that every message can be sent as UTF-8."""
    return text.encode("utf-8", "backslashreplace").decode("utf-8")


def has_lone_surrogate(text: str) -> bool:
    """Whether the text holds half of a surrogate pair, which no UTF-8 text can."""
    if text.isascii():
        return False
    try:
        text.encode("utf-8")
    except UnicodeEncodeError:
        return True
    return False


class Faulty:
    """Stands in the data for a value whose fault was reported when the text was read."""


FAULTY = Faulty()


class Faults:
    """The faults found so far; every check adds to it and reading goes on."""

    def __init__(self, subject: str = "document") -> None:
        self._subject = subject
        self._places: list[Place] = []
        self._count = 0

    def __bool__(self) -> bool:
        return self._count > 0

    def add(self, at: str, message: str, expected: str = "") -> None:
        """Note one fault: where (a JSON pointer), what is wrong, what would be right."""
        self._count += 1
        if len(self._places) < MAXIMUM_PLACES:
            self._places.append(Place(encodable(at), encodable(message), encodable(expected)))

    def wrong_type(self, at: str, data: object, expected: str) -> None:
        """Note that something of another type should stand here, unless its fault is already reported."""
        if data is not FAULTY:
            self.add(at, f"Here stands {described(data)}, which is of the wrong type", expected)

    def refusal(self) -> Refused:
        """All faults as one error; its message repeats the first."""
        first = self._places[0]
        where = f"at {first.at}" if first.at else f"in the {self._subject}"
        if self._count == 1:
            return Refused(f"{first.message} ({where}).", tuple(self._places))
        listed = "" if self._count <= MAXIMUM_PLACES else f", of which {MAXIMUM_PLACES} are listed"
        message = f"The {self._subject} has {self._count} faults{listed}; the first {where}: {first.message}."
        return Refused(message, tuple(self._places))

    def raise_if_any(self) -> None:
        """Raise the refusal if there is any fault."""
        if self._count:
            raise self.refusal()
