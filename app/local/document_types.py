"""Shape of the JSON problem document, as typed dictionaries; its JSON Schema is written from these."""

from typing import Literal, NotRequired

from typing_extensions import TypedDict

FORMAT = "polewright-problem/1"

NumberText = str | int
"""An exact number as a string of the number grammar; a JSON integer is accepted for its string."""


class EigenvalueDocument(TypedDict):
    """One eigenvalue of a class with its Jordan block sizes; "*" (once) is the value the Fuchs relation forces."""

    value: NumberText
    jordan: list[int]


class ResidueBlockDocument(TypedDict):
    """A block: its exponent (power of 1/z → coefficient) and the class of its residue."""

    exponent: dict[str, NumberText]
    residue: list[EigenvalueDocument]


class MonodromyBlockDocument(TypedDict):
    """The block of a log pole given by its local monodromy: each value is θ of the eigenvalue exp(2πi·θ)."""

    exponent: dict[str, NumberText]
    local_monodromy: list[EigenvalueDocument]


BlockDocument = ResidueBlockDocument | MonodromyBlockDocument


class PoleDocument(TypedDict):
    """A pole: its position (an exact number, "infinity", or a symbol of its own) and its blocks."""

    at: NumberText
    blocks: list[BlockDocument]


class ProblemDocument(TypedDict):
    """A problem: local data at every pole."""

    format: Literal["polewright-problem/1"]
    name: str
    symbols: list[str]
    poles: list[PoleDocument]
    base: NotRequired[int]
    notes: NotRequired[str]
