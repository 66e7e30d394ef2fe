"""Numerical points: on the orbits by construction, at the goal, reproducible, and honest where there is none."""

import numpy as np
import pytest

from app.connection.generic_values import generic_values
from app.connection.normal_form import jordan_type
from app.connection.numerical_point import find_point
from app.connection.stages import descend, stage_of
from app.connection.verification import problem_at
from app.errors import OutOfTime
from app.local.shorthand import problem_from_shorthand
from app.progress import Deadline, Unlimited
from tests.connection.problems import log_problem

TYPES = [
    "21,111,111", "31,1111,1111", "41,11111,11111", "1^6,222,42", "211,211,211", "(1)(1)(1),21", "(11)(1),111",
    "111,111,111", "22,22,22,211", "((1))((1)),11", "((11))((1))((1)),31", "(((1)))(((1)))", "(1)(1),(1)(1)",
]  # fmt: skip


def special(shorthand, seed):
    problem = problem_from_shorthand(shorthand)
    return problem_at(problem, generic_values(problem.symbols, seed))


@pytest.mark.parametrize("shorthand", TYPES)
@pytest.mark.parametrize("seed", [0, 1])
def test_points_are_found(shorthand, seed):
    problem = special(shorthand, seed)
    point = find_point(stage_of(problem), seed, Unlimited())
    assert point.converged
    whole = sum(part[0].array for part in point.parts)
    scale = max(np.abs(matrix.array).max() for part in point.parts for matrix in part)
    assert np.abs(whole).max() < 1e-11 * max(1, scale)


def test_the_excess_is_reached():
    descent = descend(special("21,111,111", 0))
    stage = descent.steps[0].lower
    point = find_point(stage, 0, Unlimited())
    whole = sum(part[0].array for part in point.parts)
    assert np.allclose(whole, float(stage.excess.as_rational()) * np.eye(stage.rank), atol=1e-10)


def test_characteristic_polynomials_stay():
    problem = special("111,111,111", 3)
    point = find_point(stage_of(problem), 3, Unlimited())
    for pole, part in zip(problem.poles, point.parts, strict=True):
        expected = sorted(float(e.value.as_rational()) for e in pole.blocks[0].residue)
        assert np.allclose(sorted(np.linalg.eigvals(part[0].array).real), expected, atol=1e-8)


def test_deterministic():
    stage = stage_of(special("111,111,111", 0))
    first, again, other = (find_point(stage, seed, Unlimited()) for seed in (5, 5, 6))
    assert np.array_equal(first.parts[0][0].array, again.parts[0][0].array)
    assert not np.array_equal(first.parts[0][0].array, other.parts[0][0].array)


def test_none_is_found_where_there_is_none():
    """Residues (1/2, 1/3) at 0 and (−1/2, −1/4), sum of traces 1/12 ≠ 0: no tuple at all."""
    problem = log_problem([("1/2", [1]), ("1/3", [1])], [("-1/2", [1]), ("-1/4", [1])])
    point = find_point(stage_of(problem), 0, Unlimited(), starts=2)
    assert not point.converged
    assert point.residual > 1e-3


def test_jordan_types_are_read_off_slots():
    problem = log_problem([("0", [3, 1, 1]), ("1", [2])], [("*", [1] * 7)])
    found = jordan_type(stage_of(problem).poles[0][0])
    assert [jordan for _, jordan in found] == [(3, 1, 1), (2,)]


def test_time_limit():
    with pytest.raises(OutOfTime):
        find_point(stage_of(special("111,111,111", 0)), 0, Deadline(-1.0, OutOfTime))


def test_zero_orbits():
    """All residues zero: the starting point is the answer, and nothing is divided by zero."""
    point = find_point(stage_of(log_problem([("0", [1, 1])], [("0", [1, 1])])), 0, Unlimited())
    assert point.converged and point.residual == 0
