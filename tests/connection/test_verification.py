"""The record must be able to fail, line by line."""

from dataclasses import replace

import pytest

from app.connection.connection import Connection, ConnectionPole
from app.connection.construction import construct
from app.connection.verification import verify
from app.errors import Refused
from app.exact.modular import specialisation
from app.exact.quotient import Quotient
from app.exact.value import Value
from app.local.formal_type import Position
from app.local.shorthand import problem_from_shorthand
from app.progress import Unlimited
from tests.connection.problems import general_problem, log_problem


def record_of(problem, connection):
    return {line.check: line for line in verify(problem, connection, Unlimited())}


def test_an_eigenvalue_that_is_right_only_at_the_specialisation_is_seen():
    """The specialisation is known, so an entry can be made that agrees with a there and nowhere else."""
    problem = log_problem([("a", [1])], [("-a", [1])], symbols=("a", "b"))
    there = specialisation(("a", "b"), (), 1).symbols["b"]
    wrong = Quotient.of(Value.symbol("a") + Value.symbol("b") - there)
    poles = (
        ConnectionPole(Position(Value.rational(0)), (((wrong,),),)),
        ConnectionPole(Position(None), (((-wrong,),),)),
    )
    record = record_of(problem, Connection("exact", 1, poles, ("a", "b")))
    assert record["sum of residues"].holds
    assert not record["class at pole 1"].holds and not record["class at pole 2"].holds


@pytest.mark.parametrize("size", [1e-2, 1e-5])
@pytest.mark.parametrize("shorthand", ["111,111,111", "(1)(1),11,11"])
def test_a_floating_class_that_is_off_is_seen(shorthand, size):
    problem = problem_from_shorthand(shorthand)
    connection = construct(problem, numeric=True).connection
    poles = list(connection.poles)
    for place, sign in ((0, 1), (1, -1)):
        rows = [list(row) for row in poles[place].coefficients[0]]
        rows[0][0] += sign * size
        changed = (tuple(map(tuple, rows)), *poles[place].coefficients[1:])
        poles[place] = replace(poles[place], coefficients=changed)
    record = record_of(problem, replace(connection, poles=tuple(poles)))
    assert record["sum of residues"].holds
    assert not record["class at pole 1"].holds and not record["class at pole 2"].holds
    assert record["class at pole 3"].holds
    assert not record["distance from exactness"].holds


@pytest.mark.parametrize("numeric", [False, True])
def test_a_wrong_exponent_is_seen(numeric):
    def problem(coefficient):
        blocks = [({"1": coefficient}, [("1/3", [1])]), ({}, [("1/5", [1])])]
        return general_problem([("infinity", blocks), ("0", [({}, [("1/7", [1]), ("*", [1])])])])

    connection = construct(problem("1"), numeric=numeric).connection
    assert record_of(problem("1"), connection)["class at pole 1"].holds
    assert not record_of(problem("2"), connection)["class at pole 1"].holds


def test_a_pole_of_too_high_an_order_is_seen():
    problem = problem_from_shorthand("11,11,11")
    connection = construct(problem).connection
    poles = list(connection.poles)
    one = ((Quotient.of(0), Quotient.of(1)), (Quotient.of(0), Quotient.of(0)))
    poles[0] = replace(poles[0], coefficients=(*poles[0].coefficients, one))
    assert not record_of(problem, replace(connection, poles=tuple(poles)))["class at pole 1"].holds


@pytest.mark.parametrize("numeric", [False, True])
def test_a_direct_sum_is_reducible(numeric):
    """Two systems of rank 1 side by side, exact and floating."""
    problem = log_problem([("1/3", [1]), ("1/5", [1])], [("-1/3", [1]), ("-1/5", [1])])
    entry = [Quotient.of(Value.rational(1) / 3), Quotient.of(Value.rational(1) / 5)]
    zero = Quotient.of(0)
    tables = [((e, zero), (zero, f)) for e, f in (entry, [-entry[0], -entry[1]])]
    poles = tuple(
        ConnectionPole(position, (table,))
        for position, table in zip((Position(Value.rational(0)), Position(None)), tables, strict=True)
    )
    connection = Connection("exact", 2, poles)
    if numeric:
        rounded = tuple(
            replace(
                pole,
                coefficients=tuple(
                    tuple(tuple(complex(float(e.as_rational())) for e in row) for row in m) for m in pole.coefficients
                ),
            )
            for pole in poles
        )
        connection = Connection("numerical", 2, rounded)
    record = record_of(problem, connection)
    assert record["class at pole 1"].holds
    assert not record["irreducibility"].holds
    assert "dimension 2 of 4" in record["irreducibility"].figure
    assert not record["tangent dimension"].holds


def test_a_connection_of_another_problem_is_refused():
    connection = construct(problem_from_shorthand("11,11,11")).connection
    with pytest.raises(Refused, match="rank"):
        verify(problem_from_shorthand("21,111,111"), connection, Unlimited())
    with pytest.raises(Refused, match="poles"):
        verify(problem_from_shorthand("11,11,11,11"), connection, Unlimited())


def test_floating_connections_need_all_values():
    problem = problem_from_shorthand("111,111,111")
    connection = construct(problem).connection
    with pytest.raises(Refused, match="value"):
        verify(problem, replace(connection, values=connection.values[1:]), Unlimited())
