"""Every refusal of a problem document: where, what, and what would be right; all faults together."""

from typing import Any

import pytest

from app.errors import Place, Refused
from app.local.document import problem_from_json, read_json
from tests.local.document_parts import block, log_pole, make, pole

Data = dict[str, Any]


def places_of(data: object) -> tuple[Place, ...]:
    with pytest.raises(Refused) as caught:
        problem_from_json(data)
    for place in caught.value.places:
        assert place.message and place.expected, place
        assert not place.message.endswith(".")
    assert caught.value.message.endswith(".")
    return caught.value.places


def one_place(data: object) -> Place:
    places = places_of(data)
    assert len(places) == 1, places
    return places[0]


def good(**changes: object) -> Data:
    data = make(log_pole("0", ("a", [1]), ("b", [1])), log_pole("1", (0, [1, 1])), symbols=["a", "b"])
    data.update(changes)
    return data


def without(data: Data, key: str) -> Data:
    return {name: value for name, value in data.items() if name != key}


TOP_LEVEL: list[tuple[object, str, str]] = [
    (None, "", "null"),
    ([], "", "a list"),
    ("text", "", 'the text "text"'),
    (1.5, "", "a number"),
    ({**good(), "colour": 1}, "/colour", '"colour" is unknown'),
    ({**good(), "a/b~c": 1}, "/a~1b~0c", '"a/b~c" is unknown'),
    (without(good(), "format"), "", "format is missing"),
    (without(good(), "name"), "", "name is missing"),
    (without(good(), "symbols") | {"poles": [log_pole("0", (1, [1]))]}, "", "symbols is missing"),
    (without(good(), "poles"), "", "poles is missing"),
    (good(format="polewright-problem/2"), "/format", '"polewright-problem/2" is unknown'),
    (good(format=1), "/format", "a number"),
    (good(name=None), "/name", "null"),
    (good(name="a\ud800"), "/name", "lone surrogate"),
    (good(notes=["x"]), "/notes", "a list"),
    (good(notes="x" * 10_001), "/notes", "10001 characters, over the limit of 10000"),
    (good(base=2), "/base", "no pole"),
    (good(base=-1), "/base", "no pole"),
    (good(base=True), "/base", "true"),
    (good(base="0"), "/base", 'the text "0"'),
    (good(base=0.0), "/base", "a number"),
    (good(poles={}), "/poles", "an object"),
    (good(poles=[]), "/poles", "empty"),
    (make(*[log_pole(k, (0, [1])) for k in range(65)]), "/poles", "65 poles are given, over the limit of 64"),
    (good(symbols=["a", "b", "a"]), "/symbols/2", "listed twice, first at /symbols/0"),
    (good(symbols=["a", "b", "é", "e\u0301"]), "/symbols/3", "listed twice, first at /symbols/2"),
    (good(symbols=["a", "b", "i"]), "/symbols/2", "reserved"),
    (good(symbols=["a", "b", "sqrt"]), "/symbols/2", "reserved"),
    (good(symbols=["a", "b", "infinity"]), "/symbols/2", "reserved"),
    (good(symbols=["a", "b", "2c"]), "/symbols/2", "not with a digit"),
    (good(symbols=["a", "b", ""]), "/symbols/2", "empty"),
    (good(symbols=["a", "b", "c d"]), "/symbols/2", "letters, digits and _"),
    (good(symbols=["a", "b", "c\ud800"]), "/symbols/2", "letters, digits and _"),
    (good(symbols=["a", "b", 1]), "/symbols/2", "a number"),
    (make(log_pole("0", (1, [1])), symbols=None) | {"symbols": "ab"}, "/symbols", 'the text "ab"'),
    (good(symbols=["a", "b", *[f"s{k}" for k in range(1999)]]), "/symbols", "2001 symbols are listed"),
]


@pytest.mark.parametrize(("data", "at", "message"), TOP_LEVEL)
def test_top_level(data: object, at: str, message: str) -> None:
    place = one_place(data)
    assert place.at == at
    assert message in place.message


def value(written: object) -> Data:
    return make(log_pole("0", (written, [1])), symbols=["a", "t"])


V = "/poles/0/blocks/0/residue/0/value"
NUMBERS: list[tuple[object, str, str]] = [
    (True, "true", "written as a string"),
    (None, "null", "written as a string"),
    ([1], "a list", "written as a string"),
    (0.5, "not exact", '"0.5"'),
    (1e300, "not exact", "write it as a string"),
    (float("nan"), "not exact", "write it as a string"),
    (10**400, "more than 400 digits", "at most 400 digits"),
    ("", "no number here, at character 1", "exact number"),
    ("a+c", '"c" is not a declared symbol, at character 3', "one of a, t"),
    ("2a", "A product is written with *, at character 2", "2*a"),
    ("1/(2-2)", "Division by zero, at character 3", "not zero"),
    ("1/a", "here is a symbol in the divisor, at character 3", "without symbols"),
    ("a^65", "up to 64, at character 3", "at most 64"),
    ("infinity", "is a position and no number, at character 1", "exact number"),
    ("1+\ud800", "at character 3", "numbers, symbols"),
    ("2*", "The number ends too early, at character 3", "exact number"),
    ("**", "at character 1", "exact number"),
]


@pytest.mark.parametrize(("written", "message", "expected"), NUMBERS)
def test_numbers(written: object, message: str, expected: str) -> None:
    place = one_place(value(written))
    assert place.at == V
    assert message in place.message
    assert expected in place.expected


def test_integers_that_python_itself_would_not_write() -> None:
    assert "more than 400 digits" in one_place(value(10**5000)).message
    assert "very large" in one_place(jordan([10**5000])).message


def at_pole(**changes: object) -> Data:
    return make({**log_pole("0", (0, [1])), **changes}, symbols=["a", "t"])


def jordan(sizes: object) -> Data:
    return make(log_pole("0", (0, sizes)))  # type: ignore[arg-type]


def exponent(written: object, multiplicity: int = 1) -> Data:
    return make(pole("0", {**block({}, (0, [1] * multiplicity)), "exponent": written}), symbols=["a", "t"])


def residue(written: object) -> Data:
    return make(pole("0", {"exponent": {}, "residue": written}), symbols=["a"])


B = "/poles/0/blocks/0"
PARTS: list[tuple[Data, str, str]] = [
    (make("pole"), "/poles/0", 'the text "pole"'),  # type: ignore[arg-type]
    (make({"blocks": [block({}, (0, [1]))]}), "/poles/0", "at is missing"),
    (make({"at": "0"}), "/poles/0", "blocks is missing"),
    (at_pole(where=1), "/poles/0/where", "unknown"),
    (at_pole(at=None), "/poles/0/at", "null"),
    (at_pole(at=0.5), "/poles/0/at", "not exact"),
    (at_pole(at="2*t"), "/poles/0/at", "expression in symbols"),
    (at_pole(at="t-a"), "/poles/0/at", "expression in symbols"),
    (at_pole(at="-t"), "/poles/0/at", "expression in symbols"),
    (at_pole(at="s"), "/poles/0/at", "not a declared symbol"),
    (at_pole(at="oo"), "/poles/0/at", "not a declared symbol"),
    (at_pole(blocks=[]), "/poles/0/blocks", "empty"),
    (at_pole(blocks={}), "/poles/0/blocks", "an object"),
    (at_pole(blocks=[[]]), B, "a list"),
    (at_pole(blocks=[block({}, (0, [1]))] * 401), "/poles/0/blocks", "401 blocks"),
    (at_pole(blocks=[{"residue": [{"value": 0, "jordan": [1]}]}]), B, "exponent is missing"),
    (at_pole(blocks=[{"exponent": {}}]), B, "residue is missing"),
    (at_pole(blocks=[{**block({}, (0, [1])), "rank": 1}]), f"{B}/rank", "unknown"),
    (residue([]), f"{B}/residue", "empty"),
    (residue({"value": 0}), f"{B}/residue", "an object"),
    (residue(["a"]), f"{B}/residue/0", 'the text "a"'),
    (residue([{"value": "a"}]), f"{B}/residue/0", "jordan is missing"),
    (residue([{"jordan": [1]}]), f"{B}/residue/0", "value is missing"),
    (residue([{"value": "a", "jordan": [1], "x": 0}]), f"{B}/residue/0/x", "unknown"),
    (make(log_pole(0, *[(k, [1]) for k in range(401)])), f"{B}/residue", "401 eigenvalues"),
    (jordan([]), f"{B}/residue/0/jordan", "empty"),
    (jordan(2), f"{B}/residue/0/jordan", "a number"),
    (jordan("21"), f"{B}/residue/0/jordan", "the text"),
    (jordan([1, 0]), f"{B}/residue/0/jordan/1", "not positive"),
    (jordan([-1]), f"{B}/residue/0/jordan/0", "not positive"),
    (jordan([True]), f"{B}/residue/0/jordan/0", "true"),
    (jordan([1.0]), f"{B}/residue/0/jordan/0", "a number"),
    (jordan(["1"]), f"{B}/residue/0/jordan/0", 'the text "1"'),
    (jordan([1] * 401), f"{B}/residue/0/jordan", "401 Jordan blocks"),
    (jordan([401]), "/poles/0", "rank here is 401, over the limit of 400"),
    (jordan([10**30]), "/poles/0", "very large"),
    (exponent(None), f"{B}/exponent", "null"),
    (exponent("1/z"), f"{B}/exponent", "the text"),
    (exponent({"0": 1}), f"{B}/exponent/0", "no power of 1/z"),
    (exponent({"-1": 1}), f"{B}/exponent/-1", "no power of 1/z"),
    (exponent({"1/0": 1}), f"{B}/exponent/1~10", "no power of 1/z"),
    (exponent({"a": 1}), f"{B}/exponent/a", "no power of 1/z"),
    (exponent({"": 1}), f"{B}/exponent/", "no power of 1/z"),
    (exponent({"65": 1}), f"{B}/exponent/65", "over the limit of 64"),
    (exponent({"129/2": 1}), f"{B}/exponent/129~12", "over the limit of 64"),
    (exponent({"1/25": 1}), f"{B}/exponent/1~125", "larger than 24"),
    (exponent({"1/5": 1, "1/7": 1}), f"{B}/exponent", "ramification index is 35"),
    (exponent({"2": 1, "4/2": 1}), f"{B}/exponent/4~12", 'also as "2"'),
    (exponent({"1": "*"}), f"{B}/exponent/1", "at character 1"),
    (exponent({"1": 0.5}), f"{B}/exponent/1", "not exact"),
    (exponent({"1/2": 1}, 201), "/poles/0", "rank here is 402"),
]


@pytest.mark.parametrize(("data", "at", "message"), PARTS)
def test_parts(data: Data, at: str, message: str) -> None:
    place = one_place(data)
    assert place.at == at
    assert message in place.message


def pair(first: object, second: object, **more: object) -> Data:
    blocks = [{**block({}, (0, [1])), "exponent": written} for written in (first, second)]
    return make(pole("0", *blocks), symbols=["a", "t"], **more)


def monodromy(*blocks: Data) -> list[Data]:
    return [{"exponent": b["exponent"], "local_monodromy": b["residue"]} for b in blocks]


TOGETHER: list[tuple[Data, str, str]] = [
    (make(log_pole("1/2", (0, [1])), log_pole("2/4", (0, [1]))), "/poles/1/at", "equal to the one at /poles/0/at"),
    (make(*[log_pole("infinity", (0, [1]))] * 2), "/poles/1/at", "equal to the one at /poles/0/at"),
    (make(*[log_pole("t", (0, [1]))] * 2, symbols=["t"]), "/poles/1/at", "equal to the one at /poles/0/at"),
    (make(log_pole("sqrt(8)", (0, [1])), log_pole("2*sqrt(2)", (0, [1]))), "/poles/1/at", "equal"),
    (make(log_pole("t", ("2*t", [1])), symbols=["t"]), "/poles/0/at", "also occurs in another number"),
    (make(pole("t", block({"1": "t"}, (0, [1]))), symbols=["t"]), "/poles/0/at", "also occurs in another number"),
    (make(log_pole(0, (0, [2])), log_pole(1, (0, [1, 1])), log_pole(2, (0, [3]))), "/poles/2", "3, but 2 at /poles/0"),
    (make(log_pole(0, ("1/2", [1]), ("0.5", [1]))), f"{B}/residue/1/value", f"equal to the one at {V}"),
    (make(log_pole(0, ("a", [1]), ("2*a-a", [1])), symbols=["a"]), f"{B}/residue/1/value", "equal"),
    (make(log_pole(0, ("sqrt(2)*sqrt(3)", [1]), ("sqrt(6)", [1]))), f"{B}/residue/1/value", "equal"),
    (pair({}, {}), "/poles/0/blocks/1/exponent", "equal to that of the block at /poles/0/blocks/0"),
    (pair({"2": "1"}, {"4/2": "2/2", "1": "0"}), "/poles/0/blocks/1/exponent", "equal to that of the block"),
    (pair({"1": "a"}, {"1": "a"}), "/poles/0/blocks/1/exponent", "equal to that of the block"),
    (pair({"1/2": "a"}, {"1/2": "-a"}), "/poles/0/blocks/1/exponent", "Galois conjugate of that of the block"),
    (pair({"3/4": "1", "1/2": "t"}, {"3/4": "i", "1/2": "-t"}), "/poles/0/blocks/1/exponent", "Galois conjugate"),
    (make(log_pole(0, ("*", [1])), log_pole(1, ("*", [1]))), "/poles/1/blocks/0/residue/0/value", f"first at {V}"),
    (make(log_pole(0, ("*", [1]), (0, [1]))), V, f"equal to the eigenvalue at {B}/residue/1/value"),
    (make(pole(0, *monodromy(block({"1": 1}, (0, [1]))))), f"{B}/exponent", "the pole is irregular"),
    (make(pole(0, *monodromy(block({}, ("*", [1]))))), f"{B}/local_monodromy/0/value", "forces no value"),
    (make(pole(0, *monodromy(block({}, ("1/3", [1]), ("-5/3", [1]))))), f"{B}/local_monodromy/1/value", "modulo 1"),
    (
        make(pole(0, *monodromy(block({}, ("a+1", [1]), ("a", [1])))), symbols=["a"]),
        f"{B}/local_monodromy/1/value",
        "equal modulo 1 to",
    ),
    (
        make(pole(0, *monodromy(block({}, (0, [1])))), log_pole(1, (0, [1]))),
        "/poles/1/blocks/0/residue",
        "the document begins with local_monodromy",
    ),
    (
        make(log_pole(1, (0, [1])), pole(0, *monodromy(block({}, (0, [1]))))),
        "/poles/1/blocks/0/local_monodromy",
        "the document begins with residue",
    ),
    (
        make(pole(0, {**block({}, (0, [1])), "local_monodromy": [{"value": 0, "jordan": [1]}]})),
        f"{B}/local_monodromy",
        "Both",
    ),
    (
        make(
            log_pole(0, ("+".join(f"sqrt({p})" for p in (2, 3, 5, 7)), [1]), ("sqrt(11)+sqrt(13)", [1])),
            log_pole("sqrt(17)", (0, [2])),
        ),
        "",
        "more than 6 independent square roots",
    ),
    (make(*[log_pole(k, (f"1/{10**200 + k}", [1])) for k in range(3)]), "", "common denominator"),
    (
        make(log_pole(0, (10**400 - 1, [1])), log_pole(1, (1, [1])), log_pole(2, ("*", [1]))),
        "/poles/2/blocks/0/residue/0/value",
        "too large",
    ),
]


@pytest.mark.parametrize(("data", "at", "message"), TOGETHER)
def test_parts_that_do_not_fit_together(data: Data, at: str, message: str) -> None:
    place = one_place(data)
    assert place.at == at
    assert message in place.message


def test_several_blocks_with_local_monodromy() -> None:
    places = places_of(make(pole(0, *monodromy(block({}, (0, [1])), block({"1": 1}, (0, [1]))))))
    assert [place.at for place in places] == ["/poles/0/blocks", "/poles/0/blocks/1/exponent"]


def test_all_faults_come_together() -> None:
    data = {
        "format": "x",
        "name": 1,
        "symbols": ["a", "a"],
        "extra": 0,
        "base": 9,
        "notes": "n" * 10_001,
        "poles": [
            {"at": "0", "blocks": [block({"1": "b"}, ("2a", [0])), block({"x": 0.5}, ("a", [1]), ("a", [1]))]},
            {"at": "0", "blocks": [block({}, ("*", [1])), block({"1": 1}, ("*", [1])), block({"1": 1}, (1, [2]))]},
            {"at": "1", "blocks": [block({}, (0, [3]))]},
        ],
    }
    places = [place.at for place in places_of(data)]
    assert sorted(places) == sorted(
        [
            "/format",
            "/name",
            "/symbols/1",
            "/extra",
            "/base",
            "/notes",
            "/poles/0/blocks/0/exponent/1",
            "/poles/0/blocks/0/residue/0/value",
            "/poles/0/blocks/0/residue/0/jordan/0",
            "/poles/0/blocks/1/exponent/x",
            "/poles/0/blocks/1/exponent/x",
            "/poles/0/blocks/1/residue/1/value",
            "/poles/1/at",
            "/poles/1/blocks/1/residue/0/value",
            "/poles/1/blocks/2/exponent",
            "/poles/2",
        ]
    )


def test_the_message_counts_the_faults() -> None:
    with pytest.raises(Refused) as caught:
        problem_from_json(good(name=1, base="x"))
    assert caught.value.message.startswith("The document has 2 faults; the first at /name: ")


def test_at_most_a_thousand_faults_are_listed() -> None:
    with pytest.raises(Refused) as caught:
        problem_from_json({str(k): k for k in range(5000)})
    assert len(caught.value.places) == 1000
    assert "5004 faults, of which 1000 are listed" in caught.value.message


def test_long_keys_point_at_their_object() -> None:
    place = one_place({**good(), "k" * 100_000: 1})
    assert place.at == ""
    assert len(place.message) < 200


def test_every_place_can_be_sent_as_utf8() -> None:
    for data in ({**good(), "\udc00": 1}, good(symbols=["a", "b", "\udc00"]), value("\udc00")):
        place = one_place(data)
        (place.at + place.message + place.expected).encode("utf-8")


def test_all_numbers_together_are_bounded() -> None:
    names = [f"s{k}" for k in range(20)]
    many_terms = [(f"({'+'.join(names)})^2+{k}", [1]) for k in range(400)]
    places = places_of(make(*[log_pole(j, *many_terms) for j in range(2)], symbols=names))
    assert len(places) == 1
    assert "more than 100000 terms together" in places[0].message
    assert places[0].at.startswith("/poles/1/blocks/0/residue/")


def test_conjugates_count_in_the_bound_on_all_terms() -> None:
    coefficients = {f"{k}/24": f"{k}+sqrt(2)" for k in range(1, 1536)}
    places = places_of(make(*[pole(j, block(dict(coefficients), (0, [1]))) for j in range(3)]))
    assert len(places) == 1
    assert "more than 100000 terms together" in places[0].message


def test_the_work_for_all_numbers_together_is_bounded() -> None:
    costly = [(f"(a+b+t)^30-(a+b+t)^30+{k}", [1]) for k in range(400)]
    places = places_of(make(log_pole(0, *costly), symbols=["a", "b", "t"]))
    assert len(places) == 1
    assert "for all numbers of the document together, at character" in places[0].message
    assert "later numbers were not read" in places[0].expected


def test_faults_of_the_text_are_reported_with_the_others() -> None:
    data, faults = read_json('{"format": "x", "format": "y"}')
    with pytest.raises(Refused) as caught:
        problem_from_json(data, faults)
    assert [place.message for place in caught.value.places][:2] == [
        'The key "format" stands more than once',
        "The key name is missing",
    ]
    assert len(caught.value.places) == 5
