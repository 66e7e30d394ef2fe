"""The strict JSON reader: what it refuses, where, and what it leaves to its callers."""

import json
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.errors import Malformed, PolewrightError, Refused, TooLarge
from app.local.document import parse_json, read_document
from app.local.json_reader import WrittenFloat
from tests.local.document_parts import EXAMPLE


def refused(text: str | bytes) -> list[tuple[str, str]]:
    with pytest.raises(Refused) as caught:
        parse_json(text)
    return [(place.at, place.message) for place in caught.value.places]


json_data = st.recursive(
    st.none() | st.booleans() | st.integers() | st.text(st.characters(exclude_categories=("Cs",))),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(max_size=3), inner, max_size=4),
    max_leaves=20,
)


@settings(max_examples=300, deadline=None)
@given(json_data, st.booleans())
def test_ordinary_json_reads_as_usual(data: Any, ascii: bool) -> None:
    assert parse_json(json.dumps(data, ensure_ascii=ascii)) == data


def test_duplicate_keys_at_every_depth() -> None:
    places = refused('{"a": 1, "b": [{"x/y": 1, "x/y": 2, "x/y": 3}, {"c": {"d": 1, "e": 2, "d": 1}}], "a": 2}')
    assert places == [
        ("/a", 'The key "a" stands more than once'),
        ("/b/0/x~1y", 'The key "x/y" stands more than once'),
        ("/b/1/c/d", 'The key "d" stands more than once'),
    ]


def test_an_escaped_key_is_the_same_key() -> None:
    assert [at for at, _ in refused('{"a": 1, "\\u0061": 2}')] == ["/a"]


@pytest.mark.parametrize("literal", ["NaN", "Infinity", "-Infinity"])
def test_constants_that_are_not_json(literal: str) -> None:
    assert refused(f'[1, {{"v": {literal}}}]') == [("/1/v", f"{literal} is no number of JSON")]


def test_integers_of_too_many_digits() -> None:
    assert parse_json("9" * 400) == 10**400 - 1
    assert parse_json("-" + "9" * 400) == 1 - 10**400
    for digits in (401, 5000, 1_000_000):
        assert refused(f'{{"n": [-{"9" * digits}]}}') == [("/n/0", "The integer has more than 400 digits")]


def test_floats_remember_how_they_were_written() -> None:
    data = parse_json("[0.10, 1e999, -2E-3, 0." + "1" * 1000 + "]")
    assert isinstance(data, list)
    assert [x.literal for x in data if isinstance(x, WrittenFloat)][:3] == ["0.10", "1e999", "-2E-3"]
    assert all(isinstance(x, float) for x in data)


@pytest.mark.parametrize("text", ['["\\ud800"]', '["\\udc00\\ud800"]', '["a\ud800"]'])
def test_lone_surrogates(text: str) -> None:
    assert [at for at, _ in refused(text)] == ["/0"]


def test_lone_surrogates_in_keys_point_at_the_object() -> None:
    places = refused('{"a": {"b\\ud800": 1}}')
    assert [at for at, _ in places] == ["/a"]
    assert "\\ud800" in places[0][1]


def test_surrogate_pairs_are_characters() -> None:
    assert parse_json('["\\ud83d\\ude00"]') == ["\U0001f600"]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "line 1, column 1"),
        ("{\n  'a': 1}", "line 2, column 3"),
        ('{"a": 1,}', "not JSON"),
        ("[1 2]", "line 1, column 4"),
        ('{"a": 01}', "not JSON"),
        ("[+1]", "not JSON"),
        ("[.5]", "not JSON"),
        ('"a\nb"', "control character"),
        ("{} {}", "extra data"),
        (b"\xff\xfe", "byte 1 cannot be read"),
        (b'{"a": "\xed\xa0\x80"}', "not UTF-8"),
        ('{"a": 1}'.encode("utf-16"), "not UTF-8"),
    ],
)
def test_malformed(text: str | bytes, message: str) -> None:
    with pytest.raises(Malformed) as caught:
        parse_json(text)
    assert message in caught.value.message


@pytest.mark.parametrize("text", ["[" * 100_000, '{"a":' * 100_000, "[" * 100_000 + "]" * 100_000])
def test_deep_nesting(text: str) -> None:
    assert "nested too deeply" in refused(text)[0][1]


def test_nesting_below_the_reader_s_limit_is_walked_without_recursion() -> None:
    depth = 300
    places = refused("[" * depth + "NaN" + "]" * depth)
    assert places == [("/0" * depth, "NaN is no number of JSON")]


def test_size_limit() -> None:
    fits = '"' + "x" * 1_999_998 + '"'
    assert parse_json(fits) == fits[1:-1]
    for text in (fits + " ", (fits + " ").encode(), '"' + "é" * 1_000_000 + '"', ("[" * 3_000_000)):
        with pytest.raises(TooLarge, match="2000000 bytes"):
            parse_json(text)


def test_faults_of_the_text_and_of_the_document_come_together() -> None:
    text = EXAMPLE.replace('"at": "1",', '"at": "1", "at": "1", "x": 0,').replace('"value": "a"', '"value": NaN')
    with pytest.raises(Refused) as caught:
        read_document(text.replace('"name": "an', '"name": "\\ud800'))
    assert [place.at for place in caught.value.places] == [
        "/name",
        "/poles/0/blocks/0/residue/0/value",
        "/poles/1/at",
        "/poles/1/x",
    ]


@settings(max_examples=500, deadline=None)
@given(st.text() | st.binary() | st.text(alphabet='{}[]",:\\u0d8 1e.-NaNinfty\ud800'))
def test_any_text_gives_data_or_a_refusal(text: str | bytes) -> None:
    for read in (parse_json, read_document):
        try:
            read(text)  # type: ignore[operator]
        except PolewrightError as error:
            error.message.encode("utf-8")
