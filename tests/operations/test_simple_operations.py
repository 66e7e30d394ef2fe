"""Twists, reorderings, change of the base pole, regular points: what stays and what moves."""

import random
from dataclasses import replace
from fractions import Fraction

import pytest

from app.errors import Refused
from app.exact.value import Value
from app.existence.decide import decide
from app.local.document import problem_from_json
from app.local.formal_type import Exponent, Position
from app.local.orbit import rigidity_index
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from app.local.writer import document
from app.operations.poles import add_regular_point, change_base, drop_regular_point
from app.operations.reflection import reflect
from app.operations.reordering import reorder
from app.operations.twist import ScalarPart, negative, twist
from app.roots.build import quiver_of
from app.roots.reduction import reduce
from tests.operations.plain_reflection import Plain
from tests.operations.random_problems import random_problem

HALF = Value.rational(Fraction(1, 2))
SQUARE = Exponent(((Fraction(2), Value.symbol("w")), (Fraction(1), HALF)))


def exists(problem: Problem) -> bool | None:
    quiver = quiver_of(problem)
    return decide(quiver, reduce(quiver)).exists


def read_again(problem: Problem) -> Problem:
    return problem_from_json(dict(document(problem)))


@pytest.mark.parametrize("seed", range(6))
def test_a_twist_keeps_the_quiver_and_can_be_undone(seed: int) -> None:
    generator = random.Random(seed)
    for _ in range(10):
        problem = replace(random_problem(generator, generic=True), base=0)
        parts = {0: ScalarPart(SQUARE, HALF), 1: ScalarPart(Exponent(), -HALF)}
        result = twist(problem, parts)
        assert read_again(result.problem) == result.problem
        assert "w" in result.problem.symbols and not result.problem.trace_sum
        ours, theirs = quiver_of(result.problem), quiver_of(problem)
        assert ours.edges == theirs.edges and ours.dimension == theirs.dimension
        assert exists(result.problem) == exists(problem)
        undo = {k: ScalarPart(negative(part.exponent), -part.residue) for k, part in parts.items()}
        assert twist(result.problem, undo).problem.poles == problem.poles


def test_a_twist_between_one_block_poles_keeps_every_parameter() -> None:
    problem = problem_from_shorthand("11,11,11,11")
    twisted = twist(problem, {1: ScalarPart(residue=HALF), 2: ScalarPart(residue=-HALF)}).problem
    assert twisted.poles != problem.poles
    assert quiver_of(twisted).parameters == quiver_of(problem).parameters
    assert twisted.forced == problem.forced and read_again(twisted) == twisted


def test_a_ramified_eigenvalue_moves_by_its_index() -> None:
    pole = {"at": "0", "blocks": [{"exponent": {"3/2": "1"}, "residue": [{"value": "0", "jordan": [1]}]}]}
    other = {"at": "1", "blocks": [{"exponent": {}, "residue": [{"value": "0", "jordan": [1, 1]}]}]}
    problem = problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": [pole, other]})
    twisted = twist(problem, {0: ScalarPart(residue=HALF), 1: ScalarPart(residue=-HALF)}).problem
    assert twisted.poles[0].blocks[0].residue[0].value == 1
    assert not twisted.trace_sum


@pytest.mark.parametrize(
    ("parts", "message"),
    [
        ({0: ScalarPart(residue=HALF)}, "add up to 1/2"),
        ({7: ScalarPart()}, "no pole 8"),
        ({0: ScalarPart(Exponent(((Fraction(1, 2), HALF),)))}, "fractional"),
        ({0: ScalarPart(Exponent(((Fraction(1), Value.symbol("t1")),)))}, "position of pole 3"),
    ],
)
def test_refused_twists(parts: dict[int, ScalarPart], message: str) -> None:
    with pytest.raises(Refused) as refused:
        twist(problem_from_shorthand("11,11,11,11"), parts)
    assert message in refused.value.message


def test_an_exchange_is_the_reflection_at_the_leg_vertex() -> None:
    problem = problem_from_shorthand("21,111,111")
    for vertex in ("0.0.1", "1.0.1", "1.0.2", "2.0.2"):
        plain = Plain(quiver_of(problem))
        plain.reflect(vertex)
        result = reflect(problem, [vertex])
        assert Plain(quiver_of(result.problem)).summary() == plain.summary()
        assert reflect(result.problem, [vertex]).problem == problem
        assert read_again(result.problem) == result.problem


def test_an_exchange_that_tears_an_eigenvalue_apart_is_refused() -> None:
    residue = [{"value": "0", "jordan": [2, 1]}, {"value": "1", "jordan": [1]}]
    poles = [{"at": "0", "blocks": [{"exponent": {}, "residue": residue}]}]
    problem = problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles})
    for vertex, message in (("0.0.1", "larger Jordan block"), ("0.0.2", "no admissible order"), ("0.0.3", "no vertex")):
        with pytest.raises(Refused) as refused:
            reflect(problem, [vertex])
        assert message in refused.value.message
    whole = reorder(problem, 0, 0, [1, 0]).problem
    assert [e.value for e in whole.poles[0].blocks[0].residue] == [1, 0]
    with pytest.raises(Refused):
        reorder(problem, 0, 0, [1, 1])


@pytest.mark.parametrize("seed", range(6))
def test_verdict_and_index_do_not_depend_on_order_and_base(seed: int) -> None:
    generator = random.Random(seed)
    for _ in range(15):
        problem = random_problem(generator, generic=False)
        pole = generator.randrange(len(problem.poles))
        block = generator.randrange(len(problem.poles[pole].blocks))
        order = list(range(len(problem.poles[pole].blocks[block].residue)))
        generator.shuffle(order)
        reordered = reorder(problem, pole, block, order).problem
        rebased = change_base(problem, generator.randrange(len(problem.poles))).problem
        for other in (reordered, rebased):
            assert exists(other) == exists(problem)
            assert rigidity_index(other) == rigidity_index(problem)


@pytest.mark.parametrize("seed", range(4))
def test_a_regular_point_comes_and_goes(seed: int) -> None:
    generator = random.Random(seed)
    for _ in range(10):
        problem = random_problem(generator, generic=False)
        more = add_regular_point(problem, Position(None)).problem
        assert read_again(more) == more
        assert len(more.poles) == len(problem.poles) + 1
        assert rigidity_index(more) == rigidity_index(problem)
        assert exists(more) == exists(problem)
        assert drop_regular_point(more, len(problem.poles)).problem == problem


def test_dropping_keeps_the_base_and_the_forced_value() -> None:
    problem = problem_from_shorthand("11,11,11,11")
    first = twist(replace(problem, base=2), {0: ScalarPart(residue=HALF), 1: ScalarPart(residue=-HALF)}).problem
    more = add_regular_point(first, Position(Value.symbol("s"))).problem
    moved = replace(more, poles=(more.poles[4], *more.poles[:4]), base=3, forced=replace(more.forced, pole=4))
    dropped = drop_regular_point(moved, 0).problem
    assert dropped.poles == first.poles
    assert (dropped.base, dropped.forced, dropped.symbols) == (2, first.forced, first.symbols)


def test_refusals_about_regular_points() -> None:
    problem = problem_from_shorthand("11,11,11,11")
    taken = [
        (Position(None), "at this position"),
        (Position(Value.rational(1)), "at this position"),
        (Position(Value.symbol("a1")), "also occurs"),
        (Position(Value.symbol("s") + 1), "without symbols"),
    ]
    for position, message in taken:
        with pytest.raises(Refused) as refused:
            add_regular_point(problem, position)
        assert message in refused.value.message
    with pytest.raises(Refused) as refused:
        drop_regular_point(problem, 0)
    assert "not zero." in refused.value.message
    scalar = problem_from_shorthand("2,11,11")
    with pytest.raises(Refused) as refused:
        drop_regular_point(scalar, 0)
    assert "a twist can move" in refused.value.message
