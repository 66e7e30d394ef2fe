"""Middle convolution and twists of whole connections, exact and floating side by side."""

from fractions import Fraction

import numpy as np
import pytest

from app.connection.connection import exact_parts, floating_parts
from app.connection.construction import construct
from app.connection.convolved import convolved, twisted_connection
from app.connection.document import connection_text, read_connection
from app.connection.generic_values import generic_values
from app.errors import Refused
from app.exact.value import Value
from app.local.shorthand import problem_from_shorthand
from tests.connection.conjugation import conjugator
from tests.connection.problems import general_problem

MU = Value.rational(Fraction(3, 7))


def at_values(shorthand):
    connection = construct(problem_from_shorthand(shorthand)).connection
    return connection.at_values(generic_values(connection.symbols, 4))


def finite_irregular():
    problem = general_problem(
        [
            ("0", [({"1": "1"}, [("1/3", [1])]), ({}, [("1/5", [1])])]),
            ("1", [({}, [("1/7", [1]), ("1/2", [1])])]),
            ("infinity", [({}, [("2/11", [1]), ("*", [1])])]),
        ]
    )
    connection = construct(problem).connection
    return connection.at_values(generic_values(connection.symbols, 4))


@pytest.mark.parametrize("make", [lambda: at_values("11,11,11"), lambda: at_values("21,21,21,21"), finite_irregular])
def test_back_and_forth(make):
    connection = make()
    there = convolved(connection, MU)
    back = convolved(there, -MU)
    assert back.rank == connection.rank != there.rank
    assert [pole.at for pole in back.poles] == [pole.at for pole in connection.poles]
    assert conjugator(exact_parts(back), exact_parts(connection)) is not None
    assert read_connection(connection_text(there)) == there


@pytest.mark.parametrize("shorthand", ["21,111,111", "21,21,21,21"])
def test_floating_does_the_same(shorthand):
    connection = at_values(shorthand)
    exact = floating_parts(convolved(connection, MU))
    rounded = floating_parts(connection)
    from dataclasses import replace

    from app.connection.connection import poles_of

    floating = replace(connection, kind="numerical", poles=poles_of([p.at for p in connection.poles], rounded))
    ours = floating_parts(convolved(floating, MU))
    for first, second in zip(ours, exact, strict=True):
        for a, b in zip(first, second, strict=True):
            assert np.allclose(np.poly(a.array), np.poly(b.array), atol=1e-8)


def test_a_symbol_as_parameter():
    connection = construct(problem_from_shorthand("11,11,11")).connection
    there = convolved(connection, Value.symbol("mu"))
    assert there.symbols[-1] == "mu" and there.rank == 4


def test_irregular_infinity_is_refused():
    with pytest.raises(Refused, match="Infinity"):
        convolved(construct(problem_from_shorthand("(1)(1),11")).connection, MU)


def test_nothing_left_is_refused():
    from app.connection.document import connection_from_json

    rank_one = connection_from_json(
        {
            "format": "polewright-connection/1", "kind": "exact", "rank": 1, "symbols": [],
            "poles": [{"at": "0", "coefficients": [[["-3/7"]]]}, {"at": "infinity", "coefficients": [[["3/7"]]]}],
        }
    )  # fmt: skip
    with pytest.raises(Refused, match="rank 0"):
        convolved(rank_one, MU)


def test_twists():
    connection = at_values("11,11,11")
    moved = twisted_connection(connection, {0: [MU, Value.rational(2)], 2: [-MU]})
    assert len(moved.poles[0].coefficients) == 2
    assert moved.poles[0].coefficients[0][0][0] == connection.poles[0].coefficients[0][0][0] + MU
    assert twisted_connection(moved, {0: [-MU, Value.rational(-2)], 2: [MU]}).poles == connection.poles
    with pytest.raises(Refused, match="add up"):
        twisted_connection(connection, {0: [MU]})
