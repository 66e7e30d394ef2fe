"""Exact linear algebra over Q, against slow elimination, empty shapes included."""

from fractions import Fraction
from itertools import permutations
from math import prod

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.exact.linear import determinant, nullspace, rank

entries = st.one_of(st.integers(-3, 3), st.fractions(-2, 2, max_denominator=6))


sizes = st.integers(1, 4)


def matrices(rows=sizes, columns=sizes):
    return st.tuples(rows, columns).flatmap(
        lambda shape: st.lists(
            st.lists(entries, min_size=shape[1], max_size=shape[1]), min_size=shape[0], max_size=shape[0]
        )
    )


square = st.integers(1, 4).flatmap(lambda n: matrices(st.just(n), st.just(n)))


def slow_rank(matrix):
    rows, found = [list(map(Fraction, row)) for row in matrix], 0
    for column in range(len(rows[0])):
        pivot = next((k for k in range(found, len(rows)) if rows[k][column]), None)
        if pivot is None:
            continue
        rows[found], rows[pivot] = rows[pivot], rows[found]
        for k in range(found + 1, len(rows)):
            factor = rows[k][column] / rows[found][column]
            rows[k] = [x - factor * y for x, y in zip(rows[k], rows[found], strict=True)]
        found += 1
    return found


def signature(order):
    return (-1) ** sum(order[i] > order[j] for i in range(len(order)) for j in range(i + 1, len(order)))


@given(matrices())
def test_rank(matrix):
    assert rank(matrix) == slow_rank(matrix)


@given(matrices())
def test_nullspace(matrix):
    columns = len(matrix[0])
    basis = nullspace(matrix, columns)
    assert len(basis) == columns - slow_rank(matrix)
    assert not basis or rank(basis) == len(basis)
    for vector in basis:
        assert all(sum(x * y for x, y in zip(row, vector, strict=True)) == 0 for row in matrix)
        assert all(isinstance(x, Fraction) for x in vector)


@given(square)
def test_determinant_by_permutations(matrix):
    n = len(matrix)
    terms = (signature(order) * prod(matrix[k][order[k]] for k in range(n)) for order in permutations(range(n)))
    assert determinant(matrix) == sum(terms)


def test_empty_shapes():
    assert rank([]) == rank([[]]) == rank([[], []]) == 0
    assert nullspace([], 2) == ((1, 0), (0, 1))
    assert nullspace([[], []], 0) == () == nullspace([], 0)
    assert nullspace([[0, 0]], 2) == ((1, 0), (0, 1))
    assert determinant([]) == 1 and isinstance(determinant([]), Fraction)
    assert determinant([[Fraction(3, 2)]]) == Fraction(3, 2)


def test_wrong_shapes():
    for wrong in (lambda: determinant([[1, 2]]), lambda: nullspace([[1, 2]], 3), lambda: rank([[1, 2], [1]]),
                  lambda: determinant([[1, 2], [1]])):  # fmt: skip
        with pytest.raises(ValueError, match=r"row|square"):
            wrong()
