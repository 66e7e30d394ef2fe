"""The shorthand: what it means, what it refuses at which character, and the way back."""

from fractions import Fraction
from random import Random

import pytest

from app.errors import Refused, TooLarge
from app.exact.value import Value
from app.local.document import problem_from_json, read_document
from app.local.formal_type import Pole
from app.local.shorthand import problem_from_shorthand, to_shorthand
from app.local.shorthand_grammar import parse_shorthand
from app.local.writer import canonical_text, document
from tests.local.document_parts import EXAMPLE, block, log_pole, make, pole


def multiplicities(p: Pole) -> list[list[int]]:
    return [[e.multiplicity for e in b.residue] for b in p.blocks]


def test_a_tuple_of_log_poles_as_a_document() -> None:
    assert document(problem_from_shorthand("21,111,111")) == {
        "format": "polewright-problem/1",
        "name": "21,111,111",
        "symbols": ["a1", "a2", "b1", "b2", "b3", "c1", "c2"],
        "poles": [
            log_pole("0", ("a1", [1, 1]), ("a2", [1])),
            log_pole("1", ("b1", [1]), ("b2", [1]), ("b3", [1])),
            log_pole("infinity", ("c1", [1]), ("c2", [1]), ("*", [1])),
        ],
    }


def test_irregular_poles_as_a_document() -> None:
    written = document(problem_from_shorthand("22, ((1)(1))((11)), 1^4"))
    assert written["symbols"] == ["a1", "a2", "u1", "u2", "u3", "u4", "u5", "b1", "b2", "b3", "b4", "c1", "c2", "c3"]
    assert written["poles"] == [
        log_pole("0", ("a1", [1, 1]), ("a2", [1, 1])),
        pole(
            "infinity",
            block({"2": "u1", "1": "u2"}, ("b1", [1])),
            block({"2": "u1", "1": "u3"}, ("b2", [1])),
            block({"2": "u4", "1": "u5"}, ("b3", [1]), ("b4", [1])),
        ),
        log_pole("1", ("c1", [1]), ("c2", [1]), ("c3", [1]), ("*", [1])),
    ]


@pytest.mark.parametrize(
    ("text", "positions"),
    [
        ("11,11", ["0", "infinity"]),
        ("11,11,11", ["0", "1", "infinity"]),
        ("11,11,11,11,11", ["0", "1", "t1", "t2", "infinity"]),
        ("1", ["infinity"]),
        ("(1)(1),11,11", ["infinity", "0", "1"]),
        ("11,(1)(1),11,11", ["0", "infinity", "1", "t1"]),
        ("(1)(1),((1))((1)),(1)(1)", ["0", "infinity", "1"]),
        ("(1)(1),(1)(1)", ["infinity", "0"]),
        ("((11)),(1)(1),(2)", ["0", "infinity", "1"]),
        ("(2),((2)),(2)", ["0", "infinity", "1"]),
    ],
)
def test_positions(text: str, positions: list[str]) -> None:
    assert [p["at"] for p in document(problem_from_shorthand(text))["poles"]] == positions


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("1^4", [1, 1, 1, 1]),
        ("21^3", [2, 1, 1, 1]),
        ("1^12", [1] * 12),
        ("12 1", [12, 1]),
        ("[12]1", [12, 1]),
        ("[12]^2[3]1", [12, 12, 3, 1]),
        ("[ 12 ]", [12]),
        ("12", [1, 2]),
        (" 12\t", [1, 2]),
        ("12 3^2 1", [12, 3, 3, 1]),
        ("1^4 2", [1, 1, 1, 1, 2]),
        ("1^[4]2", [1, 1, 1, 1, 2]),
        ("[12]1 3", [12, 1, 3]),
        ("007", None),
        ("[007]", [7]),
    ],
)
def test_entries(text: str, expected: list[int] | None) -> None:
    if expected is None:
        with pytest.raises(Refused, match="multiplicity is 0, at character 1"):
            problem_from_shorthand(text)
        return
    assert multiplicities(problem_from_shorthand(text).poles[0]) == [expected]


@pytest.mark.parametrize(
    ("text", "tops"),
    [
        ("(11)(1)", [{1: "u1"}, {1: "u2"}]),
        ("(11)^2", [{1: "u1"}, {1: "u2"}]),
        ("((1)^2)((3))", [{2: "u1", 1: "u2"}, {2: "u1", 1: "u3"}, {2: "u4", 1: "u5"}]),
        ("(((1)(2))((3)))", [{3: "u1", 2: "u2", 1: "u3"}, {3: "u1", 2: "u2", 1: "u4"}, {3: "u1", 2: "u5", 1: "u6"}]),
        ("( (1) (12 1) )", [{2: "u1", 1: "u2"}, {2: "u1", 1: "u3"}]),
    ],
)
def test_exponents(text: str, tops: list[dict[int, str]]) -> None:
    blocks = problem_from_shorthand(text).poles[0].blocks
    found = [dict(b.exponent.terms) for b in blocks]
    assert found == [{Fraction(k): Value.symbol(name) for k, name in top.items()} for top in tops]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "empty, at character 1"),
        ("  ", "empty, at character 1"),
        ("1,", "Multiplicities are missing, at character 3"),
        (",1", "Multiplicities are missing, at character 1"),
        ("11,,11", "Multiplicities are missing, at character 4"),
        ("()", "Multiplicities are missing, at character 2"),
        ("(())", "Multiplicities are missing, at character 3"),
        ("(1", "not closed, at character 1"),
        ("((1),1", "not closed, at character 1"),
        ("(1(1))", "at character 3"),
        ("((1)1)", "at character 5"),
        ("1)", "closes nothing, at character 2"),
        ("(1))", "closes nothing, at character 4"),
        ("(1)1", "some outside, at character 4"),
        ("1(1)", "some outside, at character 2"),
        ("(1)((1))", "another depth than those before it, at character 4"),
        ("((1)((1)))", "another depth than those before it, at character 5"),
        ("1^", "must follow ^, at character 2"),
        ("1^x", "must follow ^, at character 2"),
        ("1 ^2", '"^", which begins no multiplicity, at character 3'),
        ("^2", '"^", which begins no multiplicity, at character 1'),
        ("2a", '"a", which begins no multiplicity, at character 2'),
        ("1;1", '";", which begins no multiplicity, at character 2'),
        ("[12", '"[", which begins no multiplicity, at character 1'),
        ("[]", '"[", which begins no multiplicity, at character 1'),
        ("１", "begins no multiplicity, at character 1"),
        ("10", "multiplicity is 0, at character 2"),
        ("1^0", "count is 0, at character 3"),
        ("[401]", "larger than the limit of 400, at character 1"),
        ("1^401", "larger than the limit of 400, at character 3"),
        ("1^" + "9" * 5000, "larger than the limit of 400, at character 3"),
        ("1^300 2^51", "over the limit of 400, at character 7"),
        ("((1^20)^20)^2", "over the limit of 400, at character 1"),
        ("(1^400)(1)", "over the limit of 400, at character 8"),
        ("(" * 65 + "1" + ")" * 65, "nested more than 64 deep, at character 65"),
        ("(" * 100_000, "nested more than 64 deep, at character 65"),
        (",".join(["1"] * 65), "over the limit of 64, at character 129"),
        ("21,11,111", "Pole 2 has rank 2, the first pole has rank 3"),
        (",".join(["1^400"] * 6), "needs 2402 symbols, over the limit of 2000"),
        ("\ud800", "begins no multiplicity"),
    ],
)
def test_refusals(text: str, message: str) -> None:
    with pytest.raises(Refused) as caught:
        problem_from_shorthand(text)
    (place,) = caught.value.places
    assert place.at == "/type"
    assert message in place.message
    assert place.expected


def test_unequal_ranks_are_reported_together() -> None:
    with pytest.raises(Refused) as caught:
        problem_from_shorthand("1,2,1,3")
    assert len(caught.value.places) == 2


def test_a_text_over_the_size_limit() -> None:
    with pytest.raises(TooLarge):
        problem_from_shorthand(" " * 2_000_001)


def test_no_names_collide() -> None:
    # 64 poles need letters beyond the alphabet; all names must stay distinct and be no t1, t2, …, z or i.
    problem = problem_from_shorthand(",".join(["(1)(1)"] * 64))
    assert len(set(problem.symbols)) == len(problem.symbols) == 61 + 64 * 4 - 1
    assert {name for name in problem.symbols if name.startswith("t")} == {f"t{k}" for k in range(1, 62)}
    assert not {"i", "z"} & {name.rstrip("0123456789") for name in problem.symbols}


def _random_type(random: Random) -> str:
    rank = random.randint(1, 30)

    def entries(size: int) -> str:
        parts = []
        while size:
            parts.append(random.randint(1, size) if random.random() < 0.3 else 1)
            size -= parts[-1]
        return "".join(f"[{part}]" for part in parts)

    def nested(size: int, depth: int) -> str:
        if depth == 0:
            return entries(size)
        text = ""
        while size:
            part = random.randint(1, size)
            text += f"({nested(part, depth - 1)})"
            size -= part
        return text

    return ",".join(nested(rank, random.choice((0, 0, 1, 2, 3))) for _ in range(random.randint(1, 5)))


def test_the_way_back() -> None:
    random = Random(5)
    for _ in range(500):
        text = _random_type(random)
        problem = problem_from_shorthand(text)
        short = to_shorthand(problem)
        assert short is not None
        assert parse_shorthand(short) == parse_shorthand(text)
        assert read_document(canonical_text(problem)) == problem
        assert problem.trace_sum.is_zero


@pytest.mark.parametrize(
    "text",
    [
        "21,111,111",
        "1^4",
        "21^4",
        "12 1",
        "[12]",
        "[12]^4",
        "1^4 2",
        "12 12 1",
        "12^4 3",
        "(1)(1),11,11",
        "(11)(1)",
        "((1)(1))((1)(1))",
        "(12 1)(3),43^4",
        "(1)(1)(1)(1)(1)",
        "(1)^6",
        "1",
        "3",
    ],
)
def test_texts_that_come_back_as_they_are(text: str) -> None:
    assert to_shorthand(problem_from_shorthand(text)) == text


def test_what_has_no_shorthand() -> None:
    assert to_shorthand(read_document(EXAMPLE)) is None
    assert to_shorthand(problem_from_json(make(pole(0, block({"1/2": 1}, ("*", [2])))))) is None


def test_shorthand_of_special_exponents() -> None:
    data = make(pole(0, block({"2": 1, "1": 1}, (0, [1])), block({}, (0, [1])), block({"2": 1}, (0, [1, 1]), (1, [1]))))
    assert to_shorthand(problem_from_json(data)) == "((1)(21))((1))"
