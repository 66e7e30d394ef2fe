"""The shorthand of ramified poles: powers after parentheses, what they mean, what is refused, the way back."""

from fractions import Fraction
from random import Random

import pytest

from app.errors import Refused
from app.exact.value import Value
from app.local.document import problem_from_json, read_document
from app.local.newton import newton_polygon
from app.local.orbit import irregularity_of_endomorphisms, moduli_dimension
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand, to_shorthand
from app.local.shorthand_grammar import parse_shorthand
from app.local.writer import canonical_text, document
from tests.local.document_parts import block, log_pole, make, pole
from tests.local.random_documents import random_problem


def test_a_ramified_type_as_a_document() -> None:
    assert document(problem_from_shorthand("(1)_3/2, (2)_0")) == {
        "format": "polewright-problem/1",
        "name": "(1)_3/2, (2)_0",
        "symbols": ["u1", "a1"],
        "poles": [
            pole("infinity", block({"3/2": "u1"}, ("a1", [1]))),
            log_pole("0", ("*", [1, 1])),
        ],
    }


@pytest.mark.parametrize(
    ("text", "rank", "exponents"),
    [
        ("(1)_1/2", 2, [{"1/2": "u1"}]),
        ("(1)_2/4", 2, [{"1/2": "u1"}]),
        ("(21)_5/3", 9, [{"5/3": "u1"}]),
        ("(1)_1/2(1)_0", 3, [{"1/2": "u1"}, {}]),
        ("(1)_1/2^2", 4, [{"1/2": "u1"}, {"1/2": "u2"}]),
        ("((1)_1(1)_1)_3/2", 4, [{"3/2": "u1", "1": "u2"}, {"3/2": "u1", "1": "u3"}]),
        ("((1)_1(2)_0)_3/2", 6, [{"3/2": "u1", "1": "u2"}, {"3/2": "u1"}]),
        ("((1)_5/4)_3/2", 4, [{"3/2": "u1", "5/4": "u2"}]),
        ("((1)_1/3)_1/2(1)_2", 7, [{"1/2": "u1", "1/3": "u2"}, {"2": "u3"}]),
        ("(1)_1(11)_0", 3, [{"1": "u1"}, {}]),
        ("((1)_1(1)_0)_64", 2, [{"64": "u1", "1": "u2"}, {"64": "u1"}]),
    ],
)
def test_exponents(text: str, rank: int, exponents: list[dict[str, str]]) -> None:
    problem = problem_from_shorthand(text)
    assert problem.rank == rank
    found = [dict(b.exponent.terms) for b in problem.poles[0].blocks]
    assert found == [{Fraction(k): Value.symbol(name) for k, name in e.items()} for e in exponents]


def test_positions_by_irregularity() -> None:
    problem = problem_from_shorthand("11,(1)_1/2,(1)(1),(1)_5/2")
    assert [p["at"] for p in document(problem)["poles"]] == ["0", "1", "t1", "infinity"]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("(1)_", "power must follow _, at character 4"),
        ("(1)_x", "power must follow _, at character 4"),
        ("(1)_1/0", "out of range, at character 4"),
        ("(1)_1/25", "out of range, at character 4"),
        ("(1)_65", "out of range, at character 4"),
        ("(1)_" + "9" * 5000, "out of range, at character 4"),
        ("(1)_1/" + "9" * 5000, "out of range, at character 4"),
        ("(1)_1/2(1)", "Some groups have a power and some have none, at character 8"),
        ("(1)(1)_1/2", "Some groups have a power and some have none, at character 4"),
        ("((1)_1/2)", "no power, those inside it have one, at character 1"),
        ("((1))_1/2", "power, those inside it have none, at character 1"),
        ("((1)_1/2)_1/2", "the power 1/2, not smaller than 1/2, at character 1"),
        ("((1)_3)_5/2", "the power 3, not smaller than 5/2, at character 1"),
        ("((1)_0)_0", "the power 0, not smaller than 0, at character 1"),
        ("(1)_0(1)_0", "exponents are equal, at character 6"),
        ("(1)_0^2", "exponents are equal, at character 1"),
        ("((((1)_1/7)_1/5)_1/3)_1/2", "denominator 210, over the limit of 24, at character 1"),
        ("(1)_1/2,111", "Pole 2 has rank 3, the first pole has rank 2"),
        ("1_1/2", '"_", which begins no multiplicity, at character 2'),
        ("(1)_1/2 1", "some outside, at character 9"),
        ("(1^201)_1/2", "limit of 400, at character 1"),
    ],
)
def test_refusals(text: str, message: str) -> None:
    with pytest.raises(Refused) as caught:
        problem_from_shorthand(text)
    (place,) = caught.value.places
    assert place.at == "/type" and place.expected
    assert message in place.message


@pytest.mark.parametrize(
    "text",
    [
        "(1)_3/2",
        "(1)_5/2",
        "(1)_1/2,(1)(1)",
        "(1)_1/2,11,11",
        "(1)_1/2(1)_0,111",
        "((1)_1(1)_1)_3/2",
        "(1)_1/2^6",
        "((1)_5/4)_3/2",
        "((1)_1(2)_0)_3/2",
        "(12 1)_1/2(1)_0,[27]",
    ],
)
def test_texts_that_come_back_as_they_are(text: str) -> None:
    assert to_shorthand(problem_from_shorthand(text)) == text


def test_an_unramified_pole_comes_back_without_powers() -> None:
    assert to_shorthand(problem_from_shorthand("(1)_1(1)_0,11")) == "(1)(1),11"
    assert to_shorthand(problem_from_shorthand("(21)_0")) == "21"


def test_conjugate_beginnings_stand_together() -> None:
    """−z^(−3/2) is a conjugate of z^(−3/2), i·z^(−3/2) is not."""
    blocks = [
        block({"3/2": 1, "1": 1}, (0, [1])),
        block({"3/2": "i", "1": 1}, (0, [1])),
        block({"3/2": -1, "1": 2}, (0, [1])),
    ]
    problem = problem_from_json(make(pole(0, *blocks)))
    assert to_shorthand(problem) == "((1)_1(1)_1)_3/2((1)_1)_3/2"


def _shape(problem: Problem) -> tuple[object, ...]:
    poles = [(irregularity_of_endomorphisms(p), newton_polygon(p)) for p in problem.poles]
    return problem.rank, moduli_dimension(problem), poles


def test_the_way_back_on_random_problems() -> None:
    """The generic problem of the shorthand has the figures of the problem it was written for."""
    random = Random(8)
    seen = ramified = 0
    while seen < 300:
        problem = random_problem(random)
        short = to_shorthand(problem)
        if short is None or len(problem.poles) > 12:
            continue
        generic = problem_from_shorthand(short)
        assert _shape(generic)[:2] == _shape(problem)[:2]
        if problem.ramified:
            ramified += 1
            for before, after in zip(problem.poles, generic.poles, strict=True):
                assert not before.ramified or newton_polygon(before) == newton_polygon(after)
        again = to_shorthand(generic)
        assert again is not None and parse_shorthand(again) == parse_shorthand(short)
        assert read_document(canonical_text(generic)) == generic
        assert generic.trace_sum.is_zero
        seen += 1
    assert ramified > 60
