"""The diagram of any formal type: 2 − (α, α) is the expected dimension; for unramified data it is the quiver."""

import random
from typing import Any

import pytest

from app.errors import Refused
from app.local.document import problem_from_json
from app.local.orbit import moduli_dimension
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from app.roots.build import quiver_of
from app.roots.orbit_diagram import orbit_diagram

POWERS = ["1/3", "1/2", "2/3", "1", "3/2", "5/3", "2", "5/2"]


def random_residue(generator: random.Random, multiplicity: int) -> list[dict[str, Any]]:
    residue, rest = [], multiplicity
    while rest:
        size = generator.randint(1, rest)
        rest -= size
        jordan = [size] if generator.random() < 0.5 else [1] * size
        residue.append({"value": str(len(residue) * 7 + generator.randint(0, 3)), "jordan": jordan})
    return residue


def random_blocks(generator: random.Random, rank: int) -> list[dict[str, Any]] | None:
    """Blocks of the given rank with integer and fractional powers, or None when a draw does not fit."""
    blocks, rest = [], rank
    while rest:
        powers = generator.sample(POWERS, generator.randint(0, 2))
        exponent = {power: str(generator.choice([1, 2, -1, 3])) for power in powers}
        index = 1
        for power in powers:
            denominator = int(power.partition("/")[2] or 1)
            index = index * denominator if index % denominator else index
        if index > rest:
            return None
        multiplicity = generator.randint(1, rest // index)
        rest -= index * multiplicity
        blocks.append({"exponent": exponent, "residue": random_residue(generator, multiplicity)})
    return blocks


def random_problem(generator: random.Random) -> Problem | None:
    rank = generator.randint(1, 6)
    poles = []
    for k in range(generator.randint(1, 4)):
        blocks = random_blocks(generator, rank)
        if blocks is None:
            return None
        poles.append({"at": str(k), "blocks": blocks})
    try:
        return problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles})
    except Refused:
        return None


def test_the_form_gives_the_expected_dimension() -> None:
    generator = random.Random(20)
    seen = ramified = several = negative = 0
    while seen < 400:
        problem = random_problem(generator)
        if problem is None:
            continue
        diagram = orbit_diagram(problem)
        assert 2 - diagram.form(diagram.dimension) == moduli_dimension(problem)
        seen += 1
        ramified += problem.ramified
        several += sum(not pole.is_log for pole in problem.poles) > 1
        negative += any(count < 0 for _, _, count in diagram.edges) or any(n < 0 for _, n in diagram.loops)
    assert ramified > 50 and several > 50 and negative > 5


@pytest.mark.parametrize(
    "shorthand", ["11,11,11,11", "(1)(1),11,11", "((1)(1))((1)(1))", "(11)(1),(1)(1)(1),21", "(((1)))(((1)))"]
)
def test_unramified_data_give_the_quiver(shorthand: str) -> None:
    problem = problem_from_shorthand(shorthand)
    diagram, quiver = orbit_diagram(problem), quiver_of(problem)
    assert diagram.edges == quiver.edges and diagram.loops == ()
    assert [vertex.id for vertex in diagram.vertices] == [vertex.id for vertex in quiver.vertices]
    assert diagram.dimension == quiver.dimension


@pytest.mark.parametrize(
    ("power", "loops"),
    # C = 4 + 1 − 2·slope for one orbit of index 2, common practice; Airy: a real root, Painlevé I: (α, α) = 0
    [("1/2", -1), ("3/2", 0), ("5/2", 1), ("7/2", 2)],
)
def test_one_pole_of_rank_two(power: str, loops: int) -> None:
    block = {"exponent": {power: "1"}, "residue": [{"value": "0", "jordan": [1]}]}
    poles = [{"at": "infinity", "blocks": [block]}]
    problem = problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles})
    diagram = orbit_diagram(problem)
    assert diagram.loops == (((0, loops),) if loops else ())
