"""Identities of quiver, root and dimension on random local data, by several routes."""

import random

import pytest

from app.errors import Refused
from app.findings.findings import examine
from app.local.document import problem_from_json
from app.local.orbit import moduli_dimension, unramified_moduli_dimension
from app.local.problem import Problem
from app.roots.build import quiver_of
from app.roots.form import evaluate, p_of, pairing, pairing_with
from app.roots.quiver import Quiver
from app.roots.reduction import CoreMove, pull_back, reduce
from tests.existence import random_data


def random_problems(seed: int, count: int) -> list[Problem]:
    generator = random.Random(seed)
    found: list[Problem] = []
    while len(found) < count:
        drawn = random_data.poles(generator, irregular=0.5, count=(1, 4))
        if drawn is None:
            continue
        try:
            found.append(problem_from_json(random_data.document(drawn)))
        except Refused:
            continue
    return found


PROBLEMS = random_problems(11, 400)


def test_three_ways_to_the_dimension() -> None:
    """2p(α) = Σ dim O − 2(n² − 1) = 2 − rig: quiver, orbit formula, rigidity index."""
    several = 0
    for problem in PROBLEMS:
        quiver = quiver_of(problem)
        by_quiver = 2 * p_of(quiver, quiver.dimension)
        assert by_quiver == unramified_moduli_dimension(problem) == moduli_dimension(problem)
        several += len({v.pole for v in quiver.vertices if v.role == "core"}) > 1
    assert several > 30


def test_the_parameters_give_the_fuchs_relation() -> None:
    """λ·α = −Σ traces."""
    for problem in PROBLEMS:
        quiver = quiver_of(problem)
        assert evaluate(quiver.parameters, quiver.dimension) == -problem.trace_sum


def test_every_base_pole_gives_the_same_p_and_verdict() -> None:
    """The choice of the base pole changes the quiver and nothing else."""
    compared = 0
    for problem in PROBLEMS[:150]:
        verdicts = set()
        for base in range(len(problem.poles)):
            findings = examine(Problem(problem.poles, base=base))
            assert findings.additive is not None and findings.p is not None
            verdicts.add((findings.additive.exists, findings.p))
        assert len(verdicts) == 1, problem
        compared += len(problem.poles) > 1
    assert compared > 50


def reflected(quiver: Quiver, x: list[int], v: int) -> list[int]:
    y = list(x)
    y[v] -= pairing_with(quiver, x, v)
    return y


def test_reflections_preserve_the_form() -> None:
    generator = random.Random(12)
    for problem in PROBLEMS[:100]:
        quiver = quiver_of(problem)
        size = len(quiver.vertices)
        x = [generator.randint(-3, 3) for _ in range(size)]
        y = [generator.randint(-3, 3) for _ in range(size)]
        v = generator.randrange(size)
        assert pairing(quiver, reflected(quiver, x, v), reflected(quiver, y, v)) == pairing(quiver, x, y)


def test_the_reduction_is_the_word_that_it_says() -> None:
    """α and λ carried through the recorded moves one reflection at a time give what the bulk moves gave."""
    for problem in PROBLEMS:
        quiver = quiver_of(problem)
        reduction = reduce(quiver)
        x = list(quiver.dimension)
        values = list(quiver.parameters)
        for move in reduction.moves:
            groups = [move.vertices] if isinstance(move, CoreMove) else [(v,) for v in move.vertices]
            for group in groups:
                height = sum(pairing_with(quiver, x, v) for v in group)
                assert height > 0
                if isinstance(move, CoreMove):
                    assert tuple(x) == move.dimension and height == move.pairing
                    assert sum((values[v] for v in group), start=values[0] * 0) == move.parameter
                parameter = sum((values[v] for v in group), start=values[0] * 0)
                weights = [sum(pairing_with(quiver, [int(w == u) for w in range(len(x))], v) for v in group)
                           for u in range(len(x))]  # fmt: skip
                values = [value - parameter * weight for value, weight in zip(values, weights, strict=True)]
                for v in group:
                    x[v] -= height
        assert tuple(x) == reduction.dimension
        assert pull_back(quiver, reduction.moves, reduction.dimension) == quiver.dimension


def test_a_pulled_back_vector_has_the_reduced_parameter() -> None:
    """λ on a pulled-back vector is what the carried λ gives on the vector: λ(s x) = (rλ)(x)."""
    for problem in PROBLEMS[:60]:
        quiver = quiver_of(problem)
        reduction = reduce(quiver)
        root = pull_back(quiver, reduction.moves, reduction.dimension)
        assert evaluate(quiver.parameters, root) == -problem.trace_sum


@pytest.mark.parametrize("order", [3, 10, 100])
def test_a_hypergeometric_tuple_takes_order_minus_one_core_moves(order: int) -> None:
    from app.local.shorthand import problem_from_shorthand

    quiver = quiver_of(problem_from_shorthand(f"1^{order},1^{order},{order - 1} 1"))
    reduction = reduce(quiver)
    assert sum(isinstance(move, CoreMove) for move in reduction.moves) == order - 1
    assert reduction.outcome == "real" and reduction.blocked is None
