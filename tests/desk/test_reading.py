"""Draft → problem with faults at their fields, and problem → draft."""

import json
from dataclasses import replace

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.desk.draft import Draft
from app.desk.fields import texts_of, with_texts
from app.desk.reading import document_of, draft_of, pointer_to_field, read_draft, refreshed, symbols_of
from app.local.document import problem_from_json, read_document
from app.local.shorthand import problem_from_shorthand
from app.local.writer import canonical_text

DOCUMENT = {
    "format": "polewright-problem/1",
    "name": "an order-3 pole and two log poles, rank 3",
    "symbols": ["a", "b"],
    "poles": [
        {
            "at": "0",
            "blocks": [{"exponent": {}, "residue": [{"value": "a", "jordan": [1, 1]}, {"value": "b", "jordan": [1]}]}],
        },
        {"at": "1", "blocks": [{"exponent": {}, "residue": [{"value": "0", "jordan": [2, 1]}]}]},
        {
            "at": "infinity",
            "blocks": [
                {"exponent": {"2": "1/2", "1": "-a"}, "residue": [{"value": "1/3", "jordan": [1]}]},
                {"exponent": {}, "residue": [{"value": "*", "jordan": [1, 1]}]},
            ],
        },
    ],
}


def draft_with(**changes):
    """The draft of the document above with texts changed; keys with _ for the points of an address."""
    draft = draft_of(problem_from_json(DOCUMENT))
    typed = {address.replace("_", "."): text for address, text in changes.items()}
    assert typed.keys() <= texts_of(draft).keys()
    return with_texts(draft, typed)


def faults_of(draft):
    return {fault.field: fault for fault in read_draft(draft).faults}


def test_the_example_becomes_texts_and_reads_back():
    problem = problem_from_json(DOCUMENT)
    draft = draft_of(problem)
    texts = list(texts_of(draft).values())
    assert "1/2/z^2-a/z" in texts
    assert "2+1" in texts
    assert "*" in texts
    assert read_draft(draft).problem == problem
    assert read_draft(draft).faults == ()


SHORTHANDS = [
    "11,11,11,11",
    "21,111,111",
    "(1)(1),11,11",
    "((1))((1)),11",
    "(((1)))(((1)))",
    "(11)(1),111",
    "1^12,1^12,[11]1",
]


@pytest.mark.parametrize("line", SHORTHANDS)
def test_shorthands_read_back(line):
    problem = problem_from_shorthand(line)
    again = read_draft(draft_of(problem, 17)).problem
    assert again is not None
    assert set(again.symbols) == set(problem.symbols)
    assert replace(again, symbols=problem.symbols) == problem


OTHERS = {
    "ramified": {"1": "a", "1/2": "sqrt(2)*b"},
    "several terms in a coefficient": {"3": "a+b", "1": "-a-i"},
    "one minus": {"2": "-1", "1": "1"},
}


@pytest.mark.parametrize("exponent", OTHERS.values(), ids=OTHERS.keys())
def test_exponents_read_back(exponent):
    rank = 2 if any("/" in power for power in exponent) else 1
    poles = [
        {"at": "0", "blocks": [{"exponent": exponent, "residue": [{"value": "a", "jordan": [1]}]}]},
        {"at": "t", "blocks": [{"exponent": {}, "residue": [{"value": "*", "jordan": [1] * rank}]}]},
    ]
    data = {**DOCUMENT, "symbols": ["a", "b", "t"], "poles": poles, "base": 1, "notes": "words\nmore words"}
    problem = problem_from_json(data)
    again = read_draft(draft_of(problem)).problem
    assert again is not None
    assert (again.poles, again.base, again.notes, again.name, again.forced) == (
        problem.poles,
        problem.base,
        problem.notes,
        problem.name,
        problem.forced,
    )


def test_local_monodromy_reads_back():
    blocks = [{"exponent": {}, "local_monodromy": [{"value": v, "jordan": [1]} for v in ("1/3", "2/3")]}]
    poles = [{"at": at, "blocks": blocks} for at in ("0", "1", "infinity")]
    problem = problem_from_json({**DOCUMENT, "symbols": [], "poles": poles})
    draft = draft_of(problem)
    assert draft.reading == "local_monodromy"
    assert read_draft(draft).problem == problem


def test_a_symbol_with_the_name_of_the_coordinate_is_renamed_where_it_must_be():
    poles = [
        {"at": "0", "blocks": [{"exponent": {"1": "z"}, "residue": [{"value": "z1", "jordan": [1]}]}]},
        {"at": "infinity", "blocks": [{"exponent": {}, "residue": [{"value": "*", "jordan": [1]}]}]},
    ]
    problem = problem_from_json({**DOCUMENT, "symbols": ["z", "z1"], "poles": poles})
    draft = draft_of(problem)
    assert draft.poles[0].blocks[0].exponent == "z2/z"
    assert draft.poles[0].blocks[0].residue[0].value == "z1"
    reading = read_draft(draft)
    assert reading.problem is not None
    assert reading.problem.symbols == ("z2", "z1")


def test_the_name_of_the_coordinate_may_be_a_symbol_elsewhere():
    draft = draft_with(eigenvalue_e3_value="z", block_b2_exponent="a/z^2")
    reading = read_draft(draft)
    assert reading.faults == ()
    assert reading.problem is not None
    assert reading.problem.symbols == ("a", "z", "b")


def test_symbols_in_order_of_first_appearance():
    draft = draft_with(eigenvalue_e3_value="c+a", pole_p1_at="t")
    assert symbols_of(draft) == ("t", "c", "a", "b")


# --- faults

CASES = {
    "value": ("eigenvalue_e3_value", "1//2", "eigenvalue.e3.value", "character"),
    "no value": ("eigenvalue_e3_value", "", "eigenvalue.e3.value", ""),
    "sizes": ("eigenvalue_e3_jordan", "2+x", "eigenvalue.e3.jordan", "character 3"),
    "no sizes": ("eigenvalue_e3_jordan", " ", "eigenvalue.e3.jordan", "No block sizes"),
    "exponent": ("block_b2_exponent", "a/z + +/z", "block.b2.exponent", "character"),
    "constant in exponent": ("block_b2_exponent", "1/z + 3", "block.b2.exponent", "constant"),
    "position": ("pole_p1_at", "2*", "pole.p1.at", "character"),
    "equal positions": ("pole_p1_at", "1", "pole.p5.at", "equal"),
    "equal eigenvalues": ("eigenvalue_e3_value", "b", "eigenvalue.e4.value", "equal"),
    "rank": ("eigenvalue_e3_jordan", "1", "pole.p1", "rank"),
    "base": ("base", "3", "base", "index"),
    "no base": ("base", "-1", "base", "index"),
    "reading": ("reading", "guess", "reading", "reading"),
    "exponent too steep": ("block_b2_exponent", "a/z^65", "block.b2.exponent", ""),
    "long notes": ("notes", "x" * 10_001, "notes", "10000"),
}


@pytest.mark.parametrize(("address", "text", "field", "words"), CASES.values(), ids=CASES.keys())
def test_each_fault_is_at_its_field(address, text, field, words):
    draft = draft_with(**{address: text})
    reading = read_draft(draft)
    assert reading.problem is None
    faults = faults_of(draft)
    assert field in faults, faults
    assert words in faults[field].message
    assert len(faults) == 1


def test_all_faults_come_together():
    """A fault that only the desk knows of does not hide the others, nor make new ones."""
    draft = draft_with(
        eigenvalue_e3_jordan="x",
        eigenvalue_e4_value="(",
        block_b9_exponent="?",
        pole_p5_at="1+",
        base="x",
    )
    fields = [fault.field for fault in read_draft(draft).faults]
    assert sorted(fields) == sorted(
        ["eigenvalue.e3.jordan", "eigenvalue.e4.value", "block.b9.exponent", "pole.p5.at", "base"]
    )


def test_a_fault_of_the_desk_alone():
    draft = draft_with(eigenvalue_e3_jordan="x")
    document, places = document_of(draft)
    assert document is None
    assert [place.at for place in places] == ["/poles/0/blocks/0/residue/0/jordan"]


def test_no_poles():
    reading = read_draft(Draft())
    assert reading.problem is None
    assert [fault.field for fault in reading.faults] == [""]


def test_a_symbol_the_reader_refuses_is_shown_where_it_first_appears():
    assert pointer_to_field(draft_with(), "/symbols/1") == "eigenvalue.e4.value"


def test_pointers():
    draft = draft_with()
    expected = {
        "": "",
        "/poles": "",
        "/poles/0": "pole.p1",
        "/poles/0/at": "pole.p1.at",
        "/poles/0/blocks": "pole.p1",
        "/poles/2/blocks/1": "block.b11",
        "/poles/2/blocks/0/exponent/1": "block.b9.exponent",
        "/poles/2/blocks/0/residue": "block.b9",
        "/poles/2/blocks/0/residue/0": "eigenvalue.e10",
        "/poles/2/blocks/0/residue/0/value": "eigenvalue.e10.value",
        "/poles/2/blocks/0/residue/0/jordan/1": "eigenvalue.e10.jordan",
        "/name": "name",
        "/base": "base",
        "/type": "shorthand",
        "/poles/9/at": "",
        "/poles/x": "",
        "/symbols/99": "",
        "/nonsense": "",
    }
    assert {pointer: pointer_to_field(draft, pointer) for pointer in expected} == expected


@settings(max_examples=60, deadline=None)
@given(st.data())
def test_reading_never_raises(data):
    """Whatever is typed anywhere gives a reading, with a problem or with faults."""
    draft = draft_with()
    addresses = sorted(texts_of(draft))
    alphabet = "01a*z/^+-() sqrtinfy.,²é\u0301\x00\ud800"
    typed = data.draw(st.dictionaries(st.sampled_from(addresses), st.text(alphabet=alphabet, max_size=12), max_size=4))
    reading = read_draft(with_texts(draft, typed))
    assert (reading.problem is None) <= bool(reading.faults)
    known = {"", *texts_of(draft), *(f"{kind}.{i}" for i in draft.places for kind in ("pole", "block", "eigenvalue"))}
    assert {fault.field for fault in reading.faults} <= known


# --- shorthand


def test_a_shorthand_that_cannot_be_read_is_a_fault_beside_a_valid_problem():
    draft = with_texts(draft_of(problem_from_shorthand("11,11,11")), {"shorthand": "11,1x"})
    reading = read_draft(draft)
    assert reading.problem is not None
    assert [fault.field for fault in reading.faults] == ["shorthand"]
    assert refreshed(draft) is draft


def test_the_shorthand_line_follows_the_poles():
    draft = draft_of(problem_from_shorthand("11,11,11"))
    without = with_texts(draft, {"shorthand": ""})
    assert refreshed(without).shorthand == "11,11,11"
    other = draft_of(problem_from_shorthand("21,111,111"))
    assert refreshed(with_texts(other, {"shorthand": "11,11,11"})).shorthand == "21,111,111"
    assert refreshed(draft) is draft


def test_another_spelling_of_the_same_tuple_stays():
    draft = with_texts(draft_of(problem_from_shorthand("1111,1111,31")), {"shorthand": " 1^4, 1^4, 31 "})
    assert refreshed(draft).shorthand == " 1^4, 1^4, 31 "


def test_documents_written_and_read_again_are_stable():
    problem = read_document(json.dumps(DOCUMENT))
    again = read_draft(draft_of(problem)).problem
    assert again is not None
    assert canonical_text(again) == canonical_text(problem)
