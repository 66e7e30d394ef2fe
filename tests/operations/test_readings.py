"""Readings share quiver, parameters, p and verdict, and lower ranks where published examples do."""

import random
from dataclasses import replace
from fractions import Fraction

import networkx
import pytest

from app.errors import Refused
from app.exact.value import Value
from app.existence.decide import decide
from app.local.document import problem_from_json
from app.local.formal_type import Block, Exponent, Pole, Position
from app.local.orbit import rigidity_index
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand, to_shorthand
from app.local.writer import document
from app.operations.readings import Impossible, Reading, readings
from app.roots.build import quiver_of
from app.roots.dynkin import type_name
from app.roots.form import support
from app.roots.reduction import reduce
from tests.operations.random_problems import residue, with_fuchs_relation


def exists(problem: Problem) -> bool | None:
    quiver = quiver_of(problem)
    return decide(quiver, reduce(quiver)).exists


def labelled_graph(problem: Problem) -> networkx.Graph:
    quiver = quiver_of(problem)
    graph = networkx.Graph()
    for v, vertex in enumerate(quiver.vertices):
        graph.add_node(v, label=(vertex.dimension, vertex.parameter))
    for i, j, count in quiver.edges:
        graph.add_edge(i, j, count=count)
    return graph


def same_diagram(first: Problem, second: Problem) -> bool:
    return networkx.is_isomorphic(
        labelled_graph(first),
        labelled_graph(second),
        node_match=lambda a, b: a["label"] == b["label"],
        edge_match=lambda a, b: a["count"] == b["count"],
    )


def random_supernova(generator: random.Random, *, generic: bool) -> Problem:
    """One core pole of order at most 3 and some logarithmic poles, all of one rank."""
    size = generator.randint(2, 5)
    names = (f"e{number}" for number in range(1000))

    def values(multiplicity: int) -> list[Value]:
        if generic:
            return [Value.symbol(next(names)) for _ in range(multiplicity)]
        return [Value.rational(n) for n in generator.sample(range(-multiplicity, multiplicity + 1), multiplicity)]

    exponents = [
        Exponent(tuple((Fraction(power), Value.rational(n)) for power, n in ((3, 7), (2, second), (1, first)) if n))
        for second in (0, 1, 3)
        for first in (0, 2)
    ]
    generator.shuffle(exponents)
    blocks, rest = [], size
    while rest and exponents:
        multiplicity = rest if len(exponents) == 1 else generator.randint(1, rest)
        blocks.append(Block(exponents.pop(), residue(generator, multiplicity, values(multiplicity))))
        rest -= multiplicity
    at = generator.choice([Position(None), Position(Value.rational(5))])
    poles = [Pole(at, tuple(blocks))]
    for number in range(generator.randint(0, 2)):
        log = Block(Exponent(), residue(generator, size, values(size)))
        poles.append(Pole(Position(Value.rational(number)), (log,)))
    if generator.random() < 0.5:
        poles.reverse()
    problem = with_fuchs_relation(Problem(tuple(poles)))
    return replace(problem, base=next(k for k, pole in enumerate(problem.poles) if pole.at == at))


@pytest.mark.parametrize("generic", [True, False])
@pytest.mark.parametrize("seed", range(8))
def test_readings_agree(seed: int, generic: bool) -> None:
    generator = random.Random(seed)
    seen = 0
    for _ in range(20):
        problem = random_supernova(generator, generic=generic)
        found = readings(problem)
        assert sum(reading.is_given for reading in found if isinstance(reading, Reading)) == 1
        for reading in found:
            if isinstance(reading, Impossible):
                assert not exists(problem) or problem.rank == 1 or "rank would be 0" in reading.reason, reading
                continue
            seen += not reading.is_given
            other = reading.problem
            assert problem_from_json(dict(document(other))) == other
            assert rigidity_index(other) == rigidity_index(problem)
            assert exists(other) == exists(problem)
            assert not other.trace_sum
    assert seen > 15


@pytest.mark.parametrize("seed", range(8))
def test_readings_share_the_quiver_with_its_parameters(seed: int) -> None:
    """Literally so where no residue at a new pole is invertible (there the leg begins one place later)."""
    generator = random.Random(50 + seed)
    compared = 0
    for _ in range(20):
        problem = random_supernova(generator, generic=True)
        for reading in readings(problem):
            if isinstance(reading, Impossible):
                continue
            rank = reading.problem.rank
            dimensions = dict(
                zip((v.id for v in quiver_of(problem).vertices), quiver_of(problem).dimension, strict=True)
            )
            if all(dimensions[v] < rank for v in reading.part):
                assert same_diagram(problem, reading.problem)
                compared += 1
    assert compared > 20


@pytest.mark.parametrize(
    ("text", "diagram", "ranks", "lower"),
    [
        # Harnad 1994: the dual of a Fuchsian system of rank 2 with four poles has rank 3 and an irregular pole
        ("(1)(1)(1),111", "D4^(1)", [2, 3, 5], "11,11,11,11"),
        # Boalch 2012: the triangle and the square, Painlevé IV and V
        ("((1))((1))((1))", "A2^(1)", [2, 2, 2, 3], "((1))((1)),11"),
        ("((1)(1))((1)(1))", "A3^(1)", [2, 2, 4], "(1)(1),11,11"),
    ],
)
def test_published_readings(text: str, diagram: str, ranks: list[int], lower: str) -> None:
    problem = problem_from_shorthand(text)
    quiver = quiver_of(problem)
    assert type_name(quiver, support(quiver.dimension)) == diagram
    found = [reading for reading in readings(problem) if isinstance(reading, Reading)]
    assert sorted(reading.problem.rank for reading in found) == ranks
    least = min(found, key=lambda reading: reading.problem.rank)
    assert least.problem.rank == 2
    assert to_shorthand(least.problem) == lower
    for reading in found:
        assert exists(reading.problem) is True
        assert rigidity_index(reading.problem) == 0
        assert same_diagram(reading.problem, problem)


def test_exact_labels() -> None:
    """a = 1, 3 at infinity, a log pole at 5: with the part a = 3 at infinity, a' = 1/2 and 0, t' = −1 and −5."""
    one = Value.rational(1)
    core = [({"2": "1/2", "1": "2"}, "1"), ({"2": "3/2", "1": "7"}, "2")]
    poles = [
        {
            "at": "infinity",
            "blocks": [{"exponent": q, "residue": [{"value": v, "jordan": [1]}]} for q, v in core],
        },
        {
            "at": "5",
            "blocks": [{"exponent": {}, "residue": [{"value": "0", "jordan": [1]}, {"value": "-3", "jordan": [1]}]}],
        },
    ]
    problem = problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles})
    found = {reading.part: reading.problem for reading in readings(problem) if isinstance(reading, Reading)}
    assert set(found) == {("0.0",), ("0.1",), ("1.0.1",), ()}
    other = found[("0.1",)]
    assert other.poles[1].at == Position(Value.rational(7))
    assert [dict(block.exponent.terms) for block in other.poles[0].blocks] == [
        {Fraction(2): Fraction(1, 4), Fraction(1): -one},
        {Fraction(1): Value.rational(-5)},
    ]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("(1)(1),(1)(1)", "Several poles"),
        ("(((1)))(((1)))", "slope 3"),
    ],
)
def test_refusals(text: str, message: str) -> None:
    with pytest.raises(Refused) as refused:
        readings(problem_from_shorthand(text))
    assert message in refused.value.message


def test_residues_are_needed() -> None:
    problem = replace(problem_from_shorthand("11,11,11"), reading="local_monodromy")
    with pytest.raises(Refused) as refused:
        readings(problem)
    assert "residues" in refused.value.message
