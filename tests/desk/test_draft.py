"""Drafts, their texts by address, and their structure line."""

import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.desk.draft import Draft, DraftBlock, DraftEigenvalue, DraftPole, Indices, same_content
from app.desk.fields import changed_texts, from_structure, structure_of, texts_of, with_texts

TEXT = st.text(max_size=8)


@st.composite
def drafts(draw):
    """Drafts of any texts, with distinct ids."""
    number = 0

    def new(letter):
        nonlocal number
        number += draw(st.integers(1, 3))
        return f"{letter}{number}"

    poles = []
    for _ in range(draw(st.integers(0, 3))):
        pole_id = new("p")
        blocks = []
        for _ in range(draw(st.integers(1, 3))):
            block_id = new("b")
            residue = [DraftEigenvalue(new("e"), draw(TEXT), draw(TEXT)) for _ in range(draw(st.integers(1, 3)))]
            blocks.append(DraftBlock(block_id, draw(TEXT), tuple(residue)))
        poles.append(DraftPole(pole_id, draw(TEXT), tuple(blocks)))
    plain = [draw(TEXT) for _ in range(5)]
    return Draft(*plain, poles=tuple(poles), next_id=number + 1)


@given(drafts())
def test_json_and_back(draft):
    assert Draft.from_json(json.loads(json.dumps(draft.to_json()))) == draft


@given(drafts())
def test_structure_and_texts_make_the_draft_again(draft):
    assert from_structure(structure_of(draft), texts_of(draft), 1) == draft


@given(drafts(), drafts())
def test_changing_texts(draft, other):
    """Texts set are texts read, and what differs is exactly what was set differently."""
    typed = dict(zip(texts_of(draft), texts_of(other).values(), strict=False))
    changes = changed_texts(draft, typed)
    changed = with_texts(draft, changes)
    assert texts_of(changed) == {**texts_of(draft), **typed}
    assert structure_of(changed) == structure_of(draft)
    assert changed_texts(changed, typed) == {}
    assert (changed == draft) == (not changes)


def test_unchanged_poles_are_shared():
    draft = small_draft()
    changed = with_texts(draft, {"eigenvalue.e3.value": "7"})
    assert changed.poles[1] is draft.poles[1]
    assert changed.poles[0].blocks[0].residue[0].value == "7"


def test_unknown_addresses_are_left_out():
    draft = small_draft()
    assert changed_texts(draft, {"eigenvalue.e99.value": "7", "nonsense": "x", "pole.p1.at": "2"}) == {
        "pole.p1.at": "2"
    }
    assert with_texts(draft, {"eigenvalue.e99.value": "7"}) == draft


def test_places():
    places = small_draft().places
    assert places["p1"] == Indices(0)
    assert places["b6"] == Indices(1, 0)
    assert places["e7"] == Indices(1, 0, 0)
    assert "e99" not in places


def test_same_content_ignores_only_the_next_number():
    draft = small_draft()
    assert same_content(draft, Draft(**{**vars(draft), "next_id": 50}))
    assert not same_content(draft, with_texts(draft, {"notes": "x"}))


@pytest.mark.parametrize(
    "structure",
    [
        "p1",
        "p1:",
        "p1:b2",
        "p1:b2.e3;",
        ";p1:b2.e3",
        "p1:b2.e3,,b4.e5",
        "p1:b2.e3.e3",
        "p1:b2.e3;p1:b4.e5",
        "p0:b2.e3",
        "p01:b2.e3",
        "p1:e2.b3",
        "p1:b2.e3 ",
        "p١:b2.e3",
        "p1:b2.e9999999999",
        "p1:b2.e3\n",
    ],
)
def test_no_structure(structure):
    assert from_structure(structure, {}, 1) is None


def test_numbers_after_a_structure_are_new():
    draft = from_structure("p1:b20.e3", {"eigenvalue.e3.value": "a"}, 5)
    assert draft is not None
    assert draft.next_id == 21
    assert draft.poles[0].blocks[0].residue == (DraftEigenvalue("e3", "a", ""),)


@pytest.mark.parametrize(
    "change",
    [
        {"name": 1},
        {"poles": {}},
        {"next_id": 0},
        {"next_id": True},
        {"poles": [{"id": "p1", "at": "0"}]},
        {"poles": [1]},
        {"poles": [{"id": "p1", "at": "0", "blocks": [{"id": "b1", "exponent": "", "residue": [{"id": "e1"}]}]}]},
    ],
)
def test_damaged_json(change):
    with pytest.raises(ValueError, match="draft"):
        Draft.from_json({**small_draft().to_json(), **change})


def small_draft():
    first = DraftBlock("b2", "", (DraftEigenvalue("e3", "a", "1"), DraftEigenvalue("e4", "b", "1")))
    second = DraftBlock("b6", "", (DraftEigenvalue("e7", "*", "1^2"),))
    poles = (DraftPole("p1", "0", (first,)), DraftPole("p5", "infinity", (second,)))
    return Draft(name="small", poles=poles, next_id=8)
