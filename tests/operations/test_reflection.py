"""Reflections of problems: exactly (s_ε α, r_ε λ) of the quiver, with invariants kept and the way back."""

import random
from dataclasses import replace
from fractions import Fraction
from itertools import product

import pytest

from app.errors import Refused
from app.exact.value import Value
from app.existence.decide import decide
from app.local.document import problem_from_json
from app.local.formal_type import Exponent
from app.local.orbit import rigidity_index, unramified_moduli_dimension
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from app.local.writer import document
from app.operations.reflection import Choice, Reflected, first_choices, reflect, reflect_at
from app.roots.build import quiver_of
from app.roots.form import core_groups
from app.roots.reduction import reduce
from tests.operations.plain_reflection import Plain
from tests.operations.random_problems import random_problem


def epsilons(problem: Problem) -> list[tuple[str, ...]]:
    quiver = quiver_of(problem)
    groups = core_groups(quiver)
    return [tuple(quiver.vertices[v].id for v in choice) for choice in product(*groups)]


def exists(problem: Problem) -> bool | None:
    quiver = quiver_of(problem)
    return decide(quiver, reduce(quiver)).exists


def reflections(seed: int, *, generic: bool) -> list[tuple[Problem, tuple[str, ...], Reflected]]:
    generator = random.Random(seed)
    found = []
    for _ in range(25):
        problem = random_problem(generator, generic=generic)
        for epsilon in epsilons(problem):
            try:
                result = reflect(problem, epsilon)
            except Refused:
                continue
            assert isinstance(result, Reflected)
            found.append((problem, epsilon, result))
    assert len(found) >= 10
    return found


def expected(problem: Problem, epsilon: tuple[str, ...]) -> Plain:
    plain = Plain(quiver_of(problem))
    plain.reflect(*epsilon)
    rank = sum(n for v, n in plain.alpha.items() if v.count(".") == 1 and int(v.split(".")[0]) == plain.base)
    for number, pole in enumerate(problem.poles):
        for index in range(len(pole.blocks)):
            block = f"{number}.{index}"
            plain.push_vanished_slots(block, plain.alpha.get(block, rank))
    plain.strip()
    return plain


@pytest.mark.parametrize("seed", range(8))
def test_the_quiver_is_reflected(seed: int) -> None:
    for problem, epsilon, result in reflections(seed, generic=True):
        assert Plain(quiver_of(result.problem)).summary() == expected(problem, epsilon).summary(), epsilon


@pytest.mark.parametrize("generic", [True, False])
@pytest.mark.parametrize("seed", range(8))
def test_invariants(seed: int, generic: bool) -> None:
    for problem, _, result in reflections(100 + seed, generic=generic):
        after = result.problem
        assert rigidity_index(after) == rigidity_index(problem)
        assert unramified_moduli_dimension(after) == unramified_moduli_dimension(problem)
        assert not after.trace_sum
        assert after.rank == problem.rank - result.pairing
        assert exists(after) == exists(problem)
        assert problem_from_json(dict(document(after))) == after


@pytest.mark.parametrize("generic", [True, False])
@pytest.mark.parametrize("seed", range(8))
def test_the_way_back(seed: int, generic: bool) -> None:
    for problem, epsilon, result in reflections(200 + seed, generic=generic):
        back = reflect_at(result.problem, result.back)
        assert back.parameter == -result.parameter
        assert back.pairing == -result.pairing
        assert back.back == first_choices(problem, epsilon)
        assert unordered(back.problem) == unordered(problem)


def unordered(problem: Problem) -> list[frozenset[object]]:
    return [frozenset((b.exponent, frozenset(b.residue)) for b in pole.blocks) for pole in problem.poles]


def test_new_block_and_new_eigenvalue_appear() -> None:
    start = problem_from_shorthand("(1)(1),11")
    eigenvalue = start.poles[1].blocks[0].residue[0].value
    new = Exponent(((Fraction(2), Value.rational(5)),))
    result = reflect_at(start, (Choice(new, Value.rational(1)), Choice(Exponent(), eigenvalue * 3)))
    assert result.pairing == -4
    assert [len(pole.blocks) for pole in result.problem.poles] == [3, 1]
    assert [e.multiplicity for e in result.problem.poles[1].blocks[0].residue] == [4, 1, 1]
    assert rigidity_index(result.problem) == rigidity_index(start)
    assert "new exponent at pole 1" in result.words and "(new there)" in result.words
    assert unordered(reflect_at(result.problem, result.back).problem) == unordered(start)


def test_a_block_vanishes() -> None:
    start = problem_from_shorthand("(1)(1),11")
    result = reflect(start, ["0.0"])
    assert result.problem.rank == 1
    assert [len(pole.blocks) for pole in result.problem.poles] == [1, 1]
    assert result.problem.base is None or result.problem.base == 0


def test_words_name_the_convolution() -> None:
    result = reflect(problem_from_shorthand("11,11,11"), ["0.0"])
    assert "middle convolution with μ = a1+b1+c1" in result.words
    assert "Rank 2 → 1" in result.words
    assert "is not 0" in result.condition


@pytest.mark.parametrize(
    ("poles", "vertices", "message"),
    [
        ([["1", "2"], ["-1", "5"], ["0", "-7"]], ["0.0"], "μ = 0"),
        ([["1", "2"], ["1", "5"], ["0", "-9"]], ["0.7"], "0.7 is not"),
        ([["1", "2"], ["1", "5"], ["0", "-9"]], [], "pole 1"),
        ([["1", "2"], ["1", "5"], ["0", "-9"]], ["0.x"], "no vertex"),
        ([["1", "2"], ["1", "5"], ["0", "-8"]], ["0.0"], "Fuchs relation"),
        ([["1", "2"], ["-3/2"]], ["0.0"], "would become"),
    ],
)
def test_refusals(poles: list[list[str]], vertices: list[str], message: str) -> None:
    with pytest.raises(Refused) as refused:
        reflect(log_problem(poles), vertices)
    assert message in refused.value.message


def log_problem(poles: list[list[str]], reading: str = "residue") -> Problem:
    rank = max(len(values) for values in poles)
    return problem_from_json(
        {
            "format": "polewright-problem/1",
            "name": "",
            "symbols": [],
            "poles": [
                {
                    "at": str(k),
                    "blocks": [
                        {
                            "exponent": {},
                            reading: [{"value": v, "jordan": [1] * (rank // len(values))} for v in values],
                        }
                    ],
                }
                for k, values in enumerate(poles)
            ],
        }
    )


def test_a_chosen_eigenvalue_may_not_meet_a_larger_one() -> None:
    """After the convolution two eigenvalues meet with drops 0 and 1: no class, and no irreducible system before."""
    problem = log_problem([["1/2", "-21/4"], ["1/4", "5"], ["1/4", "-3/4"]])
    assert not exists(problem)
    with pytest.raises(Refused) as refused:
        reflect(problem, ["0.0"])
    assert "no class" in refused.value.message


def test_local_monodromies_are_reflected_modulo_integers() -> None:
    problem = log_problem([["1/3", "0"], ["1/5", "0"], ["1/7", "34/105"]], "local_monodromy")
    result = reflect(problem, ["0.0"])
    assert result.problem.rank == 1
    assert result.problem.trace_sum.is_integer
    whole = log_problem([["1/3", "0"], ["1/3", "0"], ["1/3", "1/2"], ["0", "1/2"]], "local_monodromy")
    with pytest.raises(Refused) as refused:
        reflect(whole, ["0.0"])
    assert "μ = 0" in refused.value.message


def test_ramified_data_are_refused() -> None:
    problem = problem_from_json(
        {
            "format": "polewright-problem/1",
            "name": "",
            "symbols": [],
            "poles": [{"at": "0", "blocks": [{"exponent": {"5/2": "1"}, "residue": [{"value": "0", "jordan": [1]}]}]}],
        }
    )
    with pytest.raises(Refused) as refused:
        reflect(problem, ["0.0"])
    assert "unramified" in refused.value.message


def test_convolution_of_rank_one_residues() -> None:
    """mc_μ of residues a, b, c of rank one: (a + μ, 0, 0), …, and −μ, −μ, −(a + b + c + μ) at infinity.

    Source: Dettweiler and Reiter, J. Algebra 318 (2007); the matrices have one non-zero row each.
    """
    numbers = [Value.rational(n) for n in (2, 3, 5)]
    start = log_problem([["2"], ["3"], ["5"], ["-10"]])
    mu = Value.rational(Fraction(1, 7))
    infinity = 3
    zero = Choice(Exponent(), Value.rational(0))
    result = reflect_at(replace(start, base=infinity), (zero, zero, zero, Choice(Exponent(), mu)))
    assert result.parameter == -mu and result.problem.rank == 3
    classes = [{(e.value, e.multiplicity) for e in pole.blocks[0].residue} for pole in result.problem.poles]
    assert classes[:3] == [{(number + mu, 1), (Value.rational(0), 2)} for number in numbers]
    assert classes[3] == {(-mu, 2), (-mu - 10, 1)}
