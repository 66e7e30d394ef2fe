"""What a step changed, in words."""

import pytest

from app.desk.draft import Draft, DraftBlock, DraftEigenvalue, DraftPole
from app.desk.words import name_of_entry, shortened, words_for_texts

BLOCK = DraftBlock("b2", "1/z", (DraftEigenvalue("e3", "a", "1"), DraftEigenvalue("e4", "", "2")))
DRAFT = Draft(name="old", poles=(DraftPole("p1", "0", (BLOCK, DraftBlock("b5", "", ()))),), next_id=6)


@pytest.mark.parametrize(
    ("address", "new", "words"),
    [
        ("name", "new", "name: old → new"),
        ("name", " ", "name: old → nothing"),
        ("notes", "a long story", "notes changed"),
        ("base", "1", "base pole: nothing → 1"),
        ("shorthand", "11", "shorthand: nothing → 11"),
        ("pole.p1.at", "infinity", "position: 0 → infinity"),
        ("block.b2.exponent", "2/z", "exponent at 0: 1/z → 2/z"),
        ("eigenvalue.e3.value", "b", "eigenvalue at 0: a → b"),
        ("eigenvalue.e3.jordan", "2", "block sizes of eigenvalue a at 0: 1 → 2"),
    ],
)
def test_one_text(address, new, words):
    assert words_for_texts(DRAFT, {address: new}) == words


def test_several_texts():
    assert words_for_texts(DRAFT, {"name": "x", "base": "0"}) == "2 texts changed"


def test_entries_by_name():
    names = {entry: name_of_entry(DRAFT, entry) for entry in ("p1", "b2", "b5", "e3", "e4", "e99")}
    assert names == {
        "p1": "pole at 0",
        "b2": "block 1/z at 0",
        "b5": "block 0 at 0",
        "e3": "eigenvalue a at 0",
        "e4": "eigenvalue nothing at 0",
        "e99": "e99",
    }


def test_long_texts_are_shortened_to_one_line():
    assert shortened("a\n b") == "a b"
    assert len(shortened("x" * 1000)) == 40
