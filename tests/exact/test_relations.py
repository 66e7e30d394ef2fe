"""Q-linear relations: named cases, and on random values that they hold, are independent, and none is missed."""

from fractions import Fraction
from itertools import product
from math import gcd

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.exact.linear import rank
from app.exact.number import parse_number
from app.exact.relations import integer_relations, rational_rows
from app.exact.value import total
from tests.exact.number_strategies import rationals, values, values_over


def parsed(*texts):
    return [parse_number(text, ("a", "b")) for text in texts]


def test_rows():
    rows = rational_rows(parsed("1+a", "sqrt(2)/2", "0", "a-i"))
    assert rows == (
        (1, 0, 0, 0),
        (0, Fraction(1, 2), 0, 0),
        (0, 0, 0, -1),
        (1, 0, 0, 1),
    )
    assert all(isinstance(entry, Fraction) for row in rows for entry in row)
    assert rational_rows([]) == () == rational_rows(parsed("0", "a-a"))


@pytest.mark.parametrize(
    ("texts", "relations"),
    [((), set()), (("0",), {(1,)}), (("1",), set()), (("1/2", "1/3"), {(2, -3)}), (("2", "4"), {(2, -1)}),
     (("a", "b"), set()),
     (("a", "b", "a+b"), {(1, 1, -1)}), (("sqrt(2)", "sqrt(8)"), {(2, -1)}),
     (("1", "sqrt(2)", "sqrt(3)", "sqrt(6)", "i"), set()),
     (("sqrt(2)", "i*sqrt(2)"), set()), (("a-1/2", "1/2-a"), {(1, 1)}), (("0", "0"), {(1, 0), (0, 1)}),
     (("0", "3"), {(1, 0)})],
)  # fmt: skip
def test_named_relations(texts, relations):
    assert {*integer_relations(parsed(*texts))} == relations


@settings(max_examples=60)
@given(st.lists(values, max_size=5), st.data())
def test_relations_hold_and_count_is_right(generators, data):
    # linear combinations, so that relations do occur
    combined = [total(v * data.draw(rationals) for v in generators) for _ in range(data.draw(st.integers(0, 3)))]
    numbers = generators + combined
    relations = integer_relations(numbers)
    for relation in relations:
        assert len(relation) == len(numbers)
        assert total(v * n for v, n in zip(numbers, relation, strict=True)).is_zero
        assert next(n for n in relation if n) > 0
    assert rank(relations) == len(relations) == len(numbers) - rank(rational_rows(numbers))
    assert len(relations) >= len(combined)


@settings(max_examples=40)
@given(st.lists(values_over(radicals=(1, 2, -1), max_size=2), min_size=1, max_size=4))
def test_every_small_integer_relation_is_an_integer_combination_of_the_basis(numbers):
    basis = integer_relations(numbers)
    for vector in product(range(-2, 3), repeat=len(numbers)):
        if total(v * n for v, n in zip(numbers, vector, strict=True)).is_zero:
            assert in_lattice(vector, basis)


def in_lattice(vector, basis):
    """Whether the vector is an integer combination: the same gcd of maximal minors with and without it."""
    if not any(vector):
        return True
    return bool(basis) and rank([*basis, vector]) == len(basis) and minors(basis) == minors([*basis, vector])


def minors(rows):
    """Greatest common divisor of all minors of the size of the rank."""
    from itertools import combinations

    from app.exact.linear import determinant

    size, width = rank(rows), len(rows[0])
    found = 0
    for chosen in combinations(rows, size):
        for columns in combinations(range(width), size):
            found = gcd(found, int(determinant([[row[c] for c in columns] for row in chosen])))
    return found
