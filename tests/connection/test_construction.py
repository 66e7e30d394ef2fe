"""Constructions: every one verified, and the record able to fail."""

from dataclasses import replace

import pytest

from app.connection.connection import Check, exact_parts
from app.connection.construction import Construction, construct
from app.connection.verification import verify
from app.errors import OutOfTime, Refused, TooLarge
from app.exact.quotient import Quotient
from app.exact.value import Value
from app.local.orbit import moduli_dimension
from app.local.shorthand import problem_from_shorthand
from app.progress import Deadline, Unlimited
from tests.connection.problems import general_problem, log_problem

RIGID = [
    "11,11,11", "21,111,111", "31,1111,1111", "21,21,21,21", "22,211,1111", "31,31,31,31,31", "211,211,211",
    "(1)(1),11", "((1))((1))", "(1)(1)(1),21", "(11)(1),111", "(2)(1),21,21",
]  # fmt: skip
RANK_TWO = [
    "11,11,11,11", "(1)(1),11,11", "((1))((1)),11", "(1)(1),(1)(1)", "(((1)))(((1)))",
    "11,11,11,11,11", "((1))((1)),11,11", "((1))((1)),(1)(1)", "((((1))))((((1))))", "(1)(1),(1)(1),(1)(1)",
]  # fmt: skip
NUMERICAL = ["111,111,111", "((1))((1))((1))", "(1)(1)(1),(11)(1)", "22,22,22,211", "21,21,111,111"]


def check(record: tuple[Check, ...], name: str) -> Check:
    return next(line for line in record if line.check == name)


def assert_verified(built: Construction) -> None:
    assert built.connection is not None
    failing = [line for line in built.connection.verification if not line.holds]
    assert not failing, failing
    assert built.verified


@pytest.mark.parametrize("shorthand", RIGID)
def test_rigid_types_are_exact_with_free_symbols(shorthand):
    problem = problem_from_shorthand(shorthand)
    built = construct(problem)
    assert_verified(built)
    assert built.connection.kind == "exact"
    assert built.connection.accessory == ()
    assert built.connection.symbols == problem.symbols


@pytest.mark.parametrize("shorthand", RANK_TWO)
def test_rank_two_has_as_many_accessory_parameters_as_dimensions(shorthand):
    problem = problem_from_shorthand(shorthand)
    built = construct(problem)
    assert_verified(built)
    assert built.connection.kind == "exact"
    assert len(built.connection.accessory) == moduli_dimension(problem)


@pytest.mark.parametrize("shorthand", ["31,31,31,31,22", "(2)(1),21,21,21"])
def test_accessory_parameters_ascend(shorthand):
    problem = problem_from_shorthand(shorthand)
    built = construct(problem)
    assert_verified(built)
    assert problem.rank > 2
    assert len(built.connection.accessory) == moduli_dimension(problem) > 0


@pytest.mark.parametrize("shorthand", NUMERICAL)
def test_other_types_are_numerical(shorthand):
    built = construct(problem_from_shorthand(shorthand))
    assert_verified(built)
    assert built.connection.kind == "numerical"
    assert {name for name, _ in built.connection.values} == set(built.problem.symbols)


@pytest.mark.parametrize("shorthand", ["11,11,11", "21,21,21,21", "(1)(1),11,11", "(1)(1)(1),21", "22,22,22,211"])
def test_numerical_point_directly_on_the_orbits(shorthand):
    built = construct(problem_from_shorthand(shorthand), numeric=True)
    assert_verified(built)
    assert "on the orbits themselves" in built.method


def test_seeds_are_deterministic_and_different():
    problem = problem_from_shorthand("111,111,111")
    first, again, other = (construct(problem, seed=seed).connection for seed in (1, 1, 2))
    assert first == again
    assert first.values != other.values


JORDAN = {
    "one block": log_problem([("0", [2])], [("1/3", [1]), ("2/5", [1])], [("1/7", [1]), ("-92/105", [1])]),
    "nilpotent order 3": log_problem(
        [("0", [3])], [("1/3", [1, 1]), ("3/7", [1])], [("1/5", [1]), ("1/11", [1]), ("*", [1])]
    ),
    "hypergeometric, unipotent at 0 and infinity": log_problem(
        [("0", [3])], [("0", [1, 1]), ("*", [1])], [("1/2", [3])]
    ),
    "two blocks of size 2, with symbols": log_problem(
        [("1/3", [2, 2])],
        [("a", [1, 1]), ("b", [2])],
        [("1/7", [1]), ("1/13", [1]), ("1/11", [1]), ("*", [1])],
        symbols=("a", "b"),
    ),
    "Jordan blocks everywhere, rank 2": log_problem([("0", [2])], [("0", [2])], [("0", [2])], [("0", [2])]),
}  # fmt: skip


@pytest.mark.parametrize("name", JORDAN)
def test_jordan_types(name):
    built = construct(JORDAN[name])
    assert built.exists, built.method
    assert_verified(built)


def test_jordan_type_inside_an_irregular_block():
    problem = general_problem(
        [
            ("0", [({"1": "1"}, [("0", [2])]), ({}, [("1/3", [1])])]),
            ("infinity", [({}, [("1/5", [1]), ("1/7", [1]), ("*", [1])])]),
        ]
    )
    built = construct(problem)
    assert built.exists
    assert_verified(built)


def test_number_fields():
    problem = log_problem(
        [("sqrt(2)", [1, 1]), ("i", [1])],
        [("1/3", [1]), ("1/5", [1]), ("1/7", [1])],
        [("2*i", [1]), ("sqrt(2)/3", [1]), ("*", [1])],
    )
    built = construct(problem)
    assert_verified(built)
    assert built.connection.kind == "exact"


def test_number_fields_with_symbols():
    problem = log_problem(
        [("a", [1, 1]), ("i", [1])],
        [("b", [1]), ("sqrt(2)", [1]), ("0", [1])],
        [("2*i", [1]), ("c", [1]), ("*", [1])],
        symbols=("a", "b", "c"),
    )
    built = construct(problem)
    assert_verified(built)
    assert built.connection.kind == "exact"


def test_open_positions_stay():
    built = construct(problem_from_shorthand("21,21,21,21"))
    assert [str(pole.at.value) for pole in built.connection.poles][2] == "Value(t1)"


def test_gauges_normalise():
    from app.connection.formal_reduction import product

    built = construct(problem_from_shorthand("(1)(1),(1)(1)"))
    (part, _), pole = exact_parts(built.connection), built.connection.poles[0]
    field = part[0].field
    gauge = [field.matrix(rows) for rows in pole.gauge]
    series = part[::-1]
    # g^(-1) B g is diagonal modulo z^2: B_0 and B_1 in turn
    back = gauge[0].inverse()
    first = back @ series[0] @ gauge[0]
    moved = product(series, gauge)[1] - gauge[1] @ first
    second = back @ moved
    for one in (first, second):
        assert one.entries()[0][1] == 0 and one.entries()[1][0] == 0


def broken(built: Construction, pole: int) -> Construction:
    """The first entry of one residue changed by 1, and with it the trace."""
    poles = list(built.connection.poles)
    rows = [list(row) for row in poles[pole].coefficients[0]]
    rows[0][0] = rows[0][0] + Quotient.of(1)
    changed = (tuple(tuple(row) for row in rows), *poles[pole].coefficients[1:])
    poles[pole] = replace(poles[pole], coefficients=changed)
    return replace(built, connection=replace(built.connection, poles=tuple(poles)))


@pytest.mark.parametrize("shorthand", ["21,111,111", "(1)(1),11"])
def test_a_changed_entry_fails_the_record(shorthand):
    built = construct(problem_from_shorthand(shorthand))
    for pole in range(len(built.problem.poles)):
        changed = broken(built, pole)
        record = verify(changed.problem, changed.connection, Unlimited())
        assert not check(record, "sum of residues").holds
        assert not check(record, f"class at pole {pole + 1}").holds


def test_the_wrong_jordan_type_fails_the_record():
    asked = log_problem([("0", [2])], [("1/3", [1]), ("2/5", [1])], [("1/7", [1]), ("-92/105", [1])])
    other = log_problem([("0", [1, 1])], [("1/3", [1]), ("2/5", [1])], [("1/7", [1]), ("-92/105", [1])])
    connection = construct(asked).connection
    assert not check(verify(other, connection, Unlimited()), "class at pole 1").holds


def test_a_reducible_tuple_fails_irreducibility():
    problem = log_problem([("1/2", [1]), ("1/3", [1])], [("-1/2", [1]), ("-1/3", [1])])
    built = construct(problem)
    assert built.exists is False
    if built.connection is not None:
        assert not check(built.connection.verification, "irreducibility").holds
        assert not built.verified


def test_no_verdicts_are_illustrated():
    built = construct(problem_from_shorthand("22,22,22,22"))
    assert built.exists is False
    assert not built.verified
    assert built.note


def test_failing_fuchs_relation_is_said():
    built = construct(log_problem([("1", [1])], [("1", [1])]))
    assert built.connection is None
    assert "traces" in built.note


def test_too_large_problems_are_refused_before_any_work():
    with pytest.raises(TooLarge, match="rank 40"):
        construct(problem_from_shorthand("[39]1,1^40,1^40"))
    deep = general_problem(
        [
            ("infinity", [({"64": "1"}, [("0", [1] * 10)]), ({}, [("0", [1] * 10)])]),
            ("0", [({}, [("0", [1] * 20)])]),
        ]
    )
    with pytest.raises(TooLarge, match="order"):
        construct(deep)


def test_time_limit():
    with pytest.raises(OutOfTime):
        construct(problem_from_shorthand("41,11111,11111"), time_limit=0.0)


def test_time_out_in_the_verification_keeps_the_connection():
    problem = problem_from_shorthand("21,111,111")
    connection = construct(problem).connection
    record = verify(problem, connection, Deadline(-1.0, OutOfTime))
    assert record[-1].check == "record complete" and not record[-1].holds


def test_values_put_into_exact_matrices_keep_the_record():
    problem = problem_from_shorthand("11,11,11,11")
    connection = construct(problem).connection
    from app.connection.generic_values import generic_values

    special = connection.at_values(generic_values(connection.symbols, 3))
    record = verify(problem, special, Unlimited())
    assert all(line.holds for line in record), record
    assert not special.symbols


def test_values_that_make_eigenvalues_equal_are_refused():
    problem = problem_from_shorthand("11,11,11")
    connection = construct(problem).connection
    with pytest.raises(Refused, match="equal"):
        verify(problem, connection.at_values({"a1": Value.rational(1), "a2": Value.rational(1)}), Unlimited())
