"""Reading valid documents: every feature of the format, and what it means."""

import json
from fractions import Fraction

import pytest

from app.exact.number import parse_number, write_number
from app.exact.value import Value
from app.local.document import parse_json, problem_from_json, read_document
from app.local.formal_type import Exponent, Position
from app.local.problem import ForcedValue
from tests.local.document_parts import EXAMPLE, block, log_pole, make, pole


def test_the_example() -> None:
    problem = read_document(EXAMPLE)
    assert problem.name == "an order-3 pole and two log poles, rank 3"
    assert problem.symbols == ("a", "b")
    assert problem.rank == 3
    assert problem.base is None and problem.notes == "" and problem.reading == "residue"
    assert [p.is_log for p in problem.poles] == [True, True, False]
    assert problem.poles[2].at == Position(None)
    assert problem.poles[2].blocks[0].exponent == Exponent(
        ((Fraction(2), Value.rational(Fraction(1, 2))), (Fraction(1), -Value.symbol("a")))
    )
    assert problem.poles[1].blocks[0].residue[0].jordan == (2, 1)


def test_the_forced_value_makes_the_fuchs_relation_hold() -> None:
    problem = read_document(EXAMPLE)
    assert problem.forced == ForcedValue(2, 1, 0)
    solved = problem.poles[2].blocks[1].residue[0].value
    assert write_number(solved, problem.symbols) == "-a-1/2*b-1/6"
    assert problem.trace_sum.is_zero


def test_the_forced_value_is_divided_by_its_multiplicity() -> None:
    problem = problem_from_json(make(log_pole("0", ("1/2", [1, 1, 1])), log_pole("1", ("*", [2, 1]))))
    assert problem.poles[1].blocks[0].residue[0].value == Fraction(-1, 2)


def test_a_failing_fuchs_relation_is_still_a_problem() -> None:
    problem = problem_from_json(make(log_pole("0", ("a", [1])), symbols=["a"]))
    assert problem.trace_sum == Value.symbol("a")


def test_a_ramified_block_counts_once_in_the_fuchs_relation() -> None:
    # Airy's equation at infinity: the value is the sum of the two exponents (1/4 and −1/4), which is 0.
    problem = problem_from_json(make(pole("infinity", block({"3/2": "2/3"}, ("*", [1])))))
    assert problem.rank == 2
    assert problem.poles[0].blocks[0].residue[0].value.is_zero
    two = problem_from_json(make(pole("infinity", block({"1/2": "1"}, ("a", [1, 1]), ("1", [1]))), symbols=["a"]))
    assert two.rank == 6
    assert two.trace_sum == 2 * Value.symbol("a") + 1


def test_integers_stand_for_their_strings() -> None:
    written = make(pole("0", block({"1": "-2"}, ("7", [1])), block({}, ("0", [1]))))
    integers = make(pole(0, block({"1": -2}, (7, [1])), block({}, (-0, [1]))))
    assert problem_from_json(integers) == problem_from_json(written)


@pytest.mark.parametrize("text", ["0", "-3/4", "1.25", "i", "sqrt(2)+i", "(1+i)^2", " infinity ", "t", "(t)"])
def test_positions(text: str) -> None:
    position = problem_from_json(make(log_pole(text, ("*", [1])), symbols=["t"])).poles[0].at
    expected = None if "infinity" in text else parse_number(text, ["t"])
    assert position == Position(expected)
    assert position.at_infinity == (expected is None)


def test_zero_coefficients_are_dropped() -> None:
    problem = problem_from_json(make(pole("0", block({"3": "a-a", "2": "1", "1": 0}, ("*", [1]))), symbols=["a"]))
    assert problem.poles[0].blocks[0].exponent == Exponent(((Fraction(2), Value.rational(1)),))


def test_unused_symbols_are_fine() -> None:
    assert problem_from_json(make(log_pole("0", (0, [1])), symbols=["a", "b"])).symbols == ("a", "b")


def test_symbols_and_numbers_meet_in_normal_form() -> None:
    composed, decomposed = "é", "e\u0301"
    problem = problem_from_json(make(log_pole("0", (composed, [1])), symbols=[decomposed]))
    assert problem.symbols == (composed,)
    assert problem.poles[0].blocks[0].residue[0].value == Value.symbol(composed)


def test_a_byte_order_mark_is_passed_over() -> None:
    assert read_document(b"\xef\xbb\xbf" + EXAMPLE.encode()) == read_document("\ufeff" + EXAMPLE)


def test_local_monodromy() -> None:
    data = make(log_pole("0", ("1/2", [1]), ("0", [1])), log_pole("1", ("a", [2])), symbols=["a"])
    for entry in data["poles"]:
        entry["blocks"][0]["local_monodromy"] = entry["blocks"][0].pop("residue")
    problem = problem_from_json(data)
    assert problem.reading == "local_monodromy"
    assert problem.poles[0].blocks[0].residue[0].value == Fraction(1, 2)


def test_the_limits_themselves_are_allowed() -> None:
    values = [(k, [1]) for k in range(400)]
    many = problem_from_json(make(log_pole("0", *values), symbols=[f"s{k}" for k in range(2000)]))
    assert many.rank == 400
    poles = [log_pole(k, (0, [1])) for k in range(64)]
    assert len(problem_from_json(make(*poles, notes="n" * 10_000)).poles) == 64
    high = problem_from_json(make(pole("0", block({"64": "1", "1/24": "1"}, ("0", [1])))))
    assert high.rank == 24
    roots = "+".join(f"sqrt({p})" for p in (2, 3, 5, 7, 11, 13))
    problem_from_json(make(log_pole("0", (f"{roots}+i+sqrt(-6)", [1]))))
    problem_from_json(make(log_pole("0", (10**400 - 1, [1]))))


def test_parsed_json_and_text_give_the_same() -> None:
    assert problem_from_json(parse_json(EXAMPLE)) == read_document(EXAMPLE) == problem_from_json(json.loads(EXAMPLE))
