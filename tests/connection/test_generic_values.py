"""Generic values: deterministic, in general position, never integers."""

from itertools import combinations

from app.connection.generic_values import generic_values
from app.exact.relations import integer_relations


def test_deterministic_and_by_seed():
    names = ("a", "b", "c")
    assert generic_values(names, 1) == generic_values(names, 1) != generic_values(names, 2)


def test_general_position():
    values = list(generic_values([f"s{k}" for k in range(40)], 7).values())
    assert all(not value.is_integer and abs(value.as_rational()) <= 2 for value in values)
    assert all(abs(value.as_rational()) > 0.2 for value in values)
    for x, y in combinations(values, 2):
        assert not (x - y).is_integer and not (x + y).is_integer and not (x * 2 - y).is_integer


def test_no_small_relations():
    values = list(generic_values(["a", "b", "c", "d"], 3).values())
    for relation in integer_relations(values):
        assert max(abs(n) for n in relation) > 5


def test_nothing_to_choose():
    assert generic_values((), 0) == {}
