"""Canonical form: what the program writes is stable byte for byte and reads back to the same problem."""

import json

from hypothesis import given, settings
from hypothesis import strategies as st

from app.exact.number import parse_number
from app.local.document import read_document
from app.local.numbers import number_at_sight
from app.local.problem import Problem
from app.local.writer import canonical_text, document
from tests.local.random_documents import SYMBOLS, number_texts, problems


@settings(max_examples=1000, deadline=None)
@given(problems())
def test_canonical_text_reads_back_to_the_same_problem(problem: Problem) -> None:
    text = canonical_text(problem)
    again = read_document(text)
    assert again == problem
    assert hash(again) == hash(problem)
    assert canonical_text(again) == text
    assert canonical_text(read_document(text.encode("utf-8"))) == text
    assert text.endswith("}\n") and text.count("\n") == 1
    assert json.loads(text) == document(problem)


@settings(max_examples=100, deadline=None)
@given(problems(), st.sampled_from([None, 0, 2, "\t"]), st.booleans())
def test_layout_and_escapes_of_the_text_do_not_matter(problem: Problem, indent: int | str | None, ascii: bool) -> None:
    assert read_document(json.dumps(document(problem), indent=indent, ensure_ascii=ascii)) == problem


def test_everything_is_normalised() -> None:
    text = """{"poles": [{"blocks": [
        {"residue": [{"jordan": [1, 2], "value": "1*e\u0301 + 4/2"}, {"jordan": [1], "value": "*"}],
         "exponent": {"1": "0.50", "4/2": "sqrt(8)", "3": "b - b"}},
        {"exponent": {}, "residue": [{"value": -0, "jordan": [1]}]}], "at": "2/4"}],
        "notes": "", "base": 0, "symbols": ["b", "e\u0301"], "name": "\\u00e9", "format": "polewright-problem/1"}"""
    assert canonical_text(read_document(text)) == (
        '{"format": "polewright-problem/1", "name": "é", "symbols": ["b", "é"], "poles": [{"at": "1/2", "blocks": ['
        '{"exponent": {"2": "2*sqrt(2)", "1": "1/2"}, '
        '"residue": [{"value": "é+2", "jordan": [2, 1]}, {"value": "*", "jordan": [1]}]}, '
        '{"exponent": {}, "residue": [{"value": "0", "jordan": [1]}]}]}], "base": 0}\n'
    )


def test_local_monodromy_keeps_its_key() -> None:
    text = (
        '{"format": "polewright-problem/1", "name": "", "symbols": [], "poles": [{"at": "0", "blocks": '
        '[{"exponent": {}, "local_monodromy": [{"value": "5/2", "jordan": [1]}]}]}], "notes": "n"}\n'
    )
    problem = read_document(text)
    assert problem.reading == "local_monodromy"
    assert canonical_text(problem) == text


terms = st.tuples(
    st.sampled_from(["", "+", "-", "--", " "]),
    st.sampled_from(["", "2", "0", "3/4", "1/0", "0/5", "123456789012345678", "1234567890123456789", "1.5", "1e5"]),
    st.sampled_from(["", "*", "/"]),
    st.sampled_from(["", "a", "b", "x_1", "α", "q", "i", "sqrt(2)", "a^2"]),
)


@settings(max_examples=2000, deadline=None)
@given(st.one_of(st.lists(terms, min_size=1, max_size=4).map(lambda t: "".join("".join(p) for p in t)), number_texts()))
def test_numbers_read_at_sight_agree_with_the_grammar(text: str) -> None:
    value = number_at_sight(text, frozenset(SYMBOLS))
    if value is not None:
        assert value == parse_number(text, SYMBOLS)


def test_common_numbers_are_read_at_sight() -> None:
    for text in ("0", "-12", "3/4", "-a", "-a-1/2*b-1/6", "2*a+b-3"):
        assert number_at_sight(text, frozenset("ab")) == parse_number(text, "ab")
    for text in ("", "+", "a*b", "a b", "2a", "c", "1/0", "3*", "a+", "(a)"):
        assert number_at_sight(text, frozenset("ab")) is None
