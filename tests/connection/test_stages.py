"""The descent of data agrees with the reduction of the quiver, and its numbers with the trade's."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.connection.rank_two import chart
from app.connection.stages import descend, principal_scalars, realisation_dimension, stage_of
from app.exact.value import Value, total
from app.existence.problems import additive_verdict
from app.local.orbit import orbit_dimension
from app.local.shorthand import problem_from_shorthand
from app.roots.build import quiver_of
from app.roots.reduction import CoreMove, reduce

TYPES = [
    "21,111,111", "22,211,1111", "1^6,222,42", "31,31,31,31,22", "(1)(1),11", "(2)(1),21,21", "(1)(1)(1),21",
    "((1))((1))", "((11))((1))((1)),31", "111,111,111", "42,222,1^6", "211,211,211", "(11)(1),111",
]  # fmt: skip


@pytest.mark.parametrize("shorthand", TYPES)
def test_ranks_fall_as_in_the_quiver(shorthand):
    """One-block poles aside, a core move at ε is a step: the same pairings, the same parameters up to order."""
    problem = problem_from_shorthand(shorthand)
    quiver = quiver_of(problem)
    moves = [move for move in reduce(quiver).moves if isinstance(move, CoreMove)]
    descent = descend(problem)
    falls = [step.upper.rank - step.lower.rank for step in descent.steps]
    assert falls == [move.pairing for move in moves][: len(falls)]
    assert descent.blocked is (additive_verdict(problem, quiver, reduce(quiver)).exists is False)
    for step in descent.steps:
        assert step.lower.excess == -step.parameter


@pytest.mark.parametrize("shorthand", TYPES)
def test_traces_add_up_to_the_excess_at_every_stage(shorthand):
    for step in descend(problem_from_shorthand(shorthand)).steps:
        for stage in (step.upper, step.lower):
            traces = total(slot.value * slot.drop for pole in stage.poles for block in pole for slot in block.slots)
            assert traces == stage.excess * stage.rank


def dimension_of_orbits(stage):
    """Σ dim O from slots: m_i m_j (slope + 1) over pairs, and m² − Σ drop² inside blocks."""
    whole = 0
    for pole in stage.poles:
        for i, block in enumerate(pole):
            whole += block.multiplicity**2 - sum(slot.drop**2 for slot in block.slots)
            for j, other in enumerate(pole):
                if i != j:
                    slope = max(
                        (p for p, v in dict(block.exponent).items() if dict(other.exponent).get(p) != v), default=0
                    )
                    slope = max(
                        slope, max((p for p in dict(other.exponent) if p not in dict(block.exponent)), default=0)
                    )
                    whole += block.multiplicity * other.multiplicity * (slope + 1)
    return whole


@pytest.mark.parametrize("shorthand", TYPES)
def test_expected_dimension_is_kept(shorthand):
    problem = problem_from_shorthand(shorthand)
    stages = [stage_of(problem), *(step.lower for step in descend(problem).steps)]
    assert dimension_of_orbits(stages[0]) == sum(orbit_dimension(pole) for pole in problem.poles)
    kept = {dimension_of_orbits(stage) - 2 * (stage.rank**2 - 1) for stage in stages}
    assert len(kept) == 1


def test_realisation_dimension_of_a_log_pole_is_its_rank():
    blocks = stage_of(problem_from_shorthand("21,111,111")).poles[0]
    assert realisation_dimension(blocks, 0, 2) == 1
    assert realisation_dimension(blocks, 0, 1) == 2


@given(st.lists(st.integers(-3, 3), min_size=1, max_size=4))
def test_principal_scalars_are_the_derivative(coefficients):
    exponent = tuple((k + 1, Value.rational(c)) for k, c in reversed(list(enumerate(coefficients))) if c)
    scalars = principal_scalars(exponent, Value.rational(7))
    assert scalars[0] == 7
    for power, value in exponent:
        assert scalars[power] == value * -power


def test_charts_avoid_names_that_are_taken():
    stage = stage_of(problem_from_shorthand("11,11,11,11"))
    names = chart(stage, {"q1", "q2", "p1"}).accessory
    assert len(names) == 2 and not {"q1", "q2", "p1"} & set(names)


def test_rigid_data_have_no_chart():
    with pytest.raises(ValueError, match="fundamental"):
        chart(stage_of(problem_from_shorthand("11,11")), ())
