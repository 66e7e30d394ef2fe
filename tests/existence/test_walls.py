"""Walls: published counts, a brute-force enumeration, verdicts on and off them."""

import random
from time import process_time

import pytest

from app.errors import Refused
from app.exact.value import Value
from app.existence.check import check
from app.existence.decide import decide
from app.existence.strata import MOST_ROWS, generic_point, specialise, stratification, symbols_to_solve
from app.existence.verdict import Verdict
from app.existence.walls import MOST_WALLS, reduced_form, walls, with_eigenvalues
from app.local.document import problem_from_json
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from app.local.writer import document
from app.roots.build import quiver_of
from app.roots.form import evaluate
from app.roots.reduction import reduce
from tests.existence.brute_force_walls import Enumeration


def verdict_of(problem: Problem) -> Verdict:
    quiver = quiver_of(problem)
    return decide(quiver, reduce(quiver))


# (1) rigid tuples with the numbers of their walls; n² for hypergeometric systems is the known irreducibility
# condition α_i ≠ β_j [Beukers and Heckman, Invent. Math. 95 (1989)], the others were computed by enumeration
COUNTS = [
    ("11,11,11", 4),
    ("21,111,111", 9),
    ("31,1^4,1^4", 16),
    ("41,1^5,1^5", 25),
    ("21,21,21,21", 5),
    ("31,31,31,31,31", 6),
    ("22,211,1^4", 14),
    ("32,221,1^5", 20),
    ("33,321,1^6", 27),
    ("42,222,1^6", 28),
    ("211,211,211", 11),
]


@pytest.mark.parametrize(("text", "count"), COUNTS)
def test_counts_of_rigid_tuples(text: str, count: int) -> None:
    problem = problem_from_shorthand(text)
    start = process_time()
    found = walls(problem)
    assert process_time() - start < 0.2
    assert found.complete and found.proved and found.generic.exists is True
    assert len(found.walls) == count
    assert not any(wall.holds for wall in found.walls)


def test_hypergeometric_walls_are_the_known_conditions() -> None:
    """At order n the exponents at 0 and infinity: a_i + b_j + (the repeated eigenvalue) = 0 for all i, j."""
    problem = problem_from_shorthand("21,111,111")
    middle = problem.poles[0].blocks[0].residue[0].value
    expected = set()
    for a in problem.poles[1].blocks[0].residue:
        for b in problem.poles[2].blocks[0].residue:
            value = middle + a.value + b.value
            expected |= {value, -value}
    found = walls(problem).walls
    assert all(wall.value in expected for wall in found)
    assert len({frozenset((wall.value, -wall.value)) for wall in found}) == 9


SMALL = [
    *(text for text, _ in COUNTS[:3]),
    "21,21,21,21",
    "211,211,211",
    "22,22,22,22",
    "22,22,22,211",
    "11,11,11,11",
    "111,111,111",
    "21,21,111,111",
    "31,31,22,22",
    "31,31,31,211",
    "21,21,21,21,21",
    "(1)(1),11",
    "((1))((1))",
    "(1)(1)(1),21",
    "(1)(1)(1),111",
    "(11)(1),111",
    "(11)(1),21,21",
    "(2)(1),21,111",
    "((1)(1))((1)(1))",
    "((1))((1))((1))",
    "((2))((1)),21",
    "((11))((1)),21",
    "((2))((1)),21,21",
    "(((1)))(((1)))",
    "(1)(1),(1)(1)",
    "(1)(1)(1),(2)(1)",
    "(11)(1),(2)(1)",
    "(1)(1)(1),(2)(1),21",
    "(2)(1),(2)(1),(2)(1)",
    "((1))((1)),(1)(1),11",
]


@pytest.mark.parametrize("text", SMALL)
def test_against_enumeration(text: str) -> None:
    problem = problem_from_shorthand(text)
    quiver = quiver_of(problem)
    enumeration = Enumeration(quiver)
    found = walls(problem)
    assert (found.generic.exists is True) == enumeration.generic_answer()
    assert {enumeration.line(wall.vector) for wall in found.walls} == enumeration.walls()
    assert len({enumeration.line(wall.vector) for wall in found.walls}) == len(found.walls)


def random_text(generator: random.Random) -> str:
    size = generator.randint(2, 3)

    def parts(total: int) -> list[int]:
        found = []
        while total:
            found.append(generator.randint(1, total))
            total -= found[-1]
        return found

    poles = []
    for _ in range(generator.randint(1, 4)):
        depth = generator.choice([0, 0, 1, 2])
        entries = parts(size)
        if depth == 0:
            poles.append("".join(map(str, entries)))
        else:
            texts = ["".join(map(str, parts(entry))) for entry in entries]
            poles.append("".join("(" * depth + text + ")" * depth for text in texts))
    return ",".join(poles)


@pytest.mark.parametrize("seed", range(12))
def test_against_enumeration_at_random(seed: int) -> None:
    generator = random.Random(seed)
    for _ in range(8):
        text = random_text(generator)
        problem = problem_from_shorthand(text)
        quiver = quiver_of(problem)
        size = 1
        for n in quiver.dimension:
            size *= n + 1
        if size > 2_500:
            continue
        enumeration = Enumeration(quiver)
        found = walls(problem)
        assert {enumeration.line(wall.vector) for wall in found.walls} == enumeration.walls(), text


@pytest.mark.parametrize("text", ["21,111,111", "211,211,211", "(11)(1),111", "22,22,31,31", "(1)(1)(1),(2)(1)"])
def test_on_a_wall_no_irreducible_system_exists(text: str) -> None:
    problem = problem_from_shorthand(text)
    quiver = quiver_of(problem)
    for wall in walls(problem).walls:
        assert wall.value in (evaluate(quiver.parameters, wall.vector), -evaluate(quiver.parameters, wall.vector))
        for symbol in symbols_to_solve(problem, wall)[:2]:
            special = specialise(problem, wall, symbol)
            assert symbol not in special.symbols
            assert problem_from_json(dict(document(special))) == special
            verdict = verdict_of(special)
            assert verdict.exists is False
            assert all(item.holds for item in check(verdict))
            (there,) = [w for w in walls(special).walls if w.vector == wall.vector]
            assert there.holds
            assert sum(w.holds for w in walls(special).walls) == 1


def test_the_shape_of_an_affine_end_gives_a_wall() -> None:
    """In 22,22,22,211 its equation only compares two eigenvalues; a reflection of it has it as a wall.

    There a subsystem of type 11,11,11,11 splits off twice.
    """
    assert walls(problem_from_shorthand("22,22,22,211")).walls == ()
    problem = problem_from_shorthand("32,32,32,221")
    ends = [wall for wall in walls(problem).walls if wall.criterion == "affine end"]
    assert [wall.equation for wall in ends] == ["a1+a2+b1+b2+c1+c2+d1+d2 = 0"]
    verdict = verdict_of(specialise(problem, ends[0], "a1"))
    assert verdict.exists is False and all(item.holds for item in check(verdict))
    enumeration = Enumeration(quiver_of(problem))
    assert {enumeration.line(wall.vector) for wall in walls(problem).walls} == enumeration.walls()


@pytest.mark.parametrize("text", ["22,22,22,22", "222,222,222", "21,21,21", "11,11", "(2)(2),22"])
def test_no_walls_where_the_generic_verdict_is_no(text: str) -> None:
    found = walls(problem_from_shorthand(text))
    assert found.generic.exists is False
    assert found.walls == () and found.complete


def test_jordan_blocks_stay() -> None:
    """One Jordan block of size 2 with eigenvalue b at the second pole: a_i + b + c_j = 0, two walls instead of four."""
    text = problem_from_shorthand("11,11,11")
    data = dict(document(text))
    data["poles"][1]["blocks"][0]["residue"] = [{"value": "b1", "jordan": [2]}]
    found = walls(problem_from_json(data))
    assert len(found.walls) == 2
    assert {wall.equation for wall in found.walls} == {"a1+b1+c1 = 0", "a2+b1+c1 = 0"}


def numeric(values: list[list[str]]) -> Problem:
    poles = [
        {"at": str(k), "blocks": [{"exponent": {}, "residue": [{"value": v, "jordan": [1]} for v in own]}]}
        for k, own in enumerate(values)
    ]
    return problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles})


def test_present_values_are_marked() -> None:
    problem = numeric([["1/2", "1/3"], ["-1/4", "5"], ["-1/4", "-16/3"]])
    found = walls(problem)
    holding = [wall for wall in found.walls if wall.holds]
    assert len(holding) == 1 and found.generic.exists is True
    assert holding[0].equation == "the eigenvalues 1/2 of pole 1, -1/4 of pole 2, -1/4 of pole 3 sum to 0"
    assert symbols_to_solve(problem, holding[0]) == ()
    with pytest.raises(Refused) as refused:
        specialise(problem, holding[0], "a")
    assert "solved" in refused.value.message
    rows = stratification(problem)
    assert rows.walls[0].holds and rows.rows[0].holds and not rows.rows[1].holds


def test_stratification() -> None:
    rows = stratification(problem_from_shorthand("21,111,111"))
    assert rows.complete and len(rows.rows) == 9 + 36
    assert all(row.verdict.exists is False for row in rows.rows)
    assert all(sum(count * rank for count, rank in row.splits) == 3 for row in rows.rows)
    # two conditions a_i + b_j, a_i + b_k make two eigenvalues at infinity equal
    assert sum(row.eigenvalues_meet for row in rows.rows) == 18
    large = stratification(problem_from_shorthand("42,222,1^6"))
    assert len(large.rows) == MOST_ROWS and not large.complete


@pytest.mark.parametrize("text", ["21,111,111", "(1)(1)(1),(2)(1)", "22,22,31,31"])
def test_rows_carry_checked_certificates(text: str) -> None:
    for row in stratification(problem_from_shorthand(text)).rows[:60]:
        assert all(item.holds for item in check(row.verdict))


def test_generic_points_lie_on_their_walls_alone() -> None:
    problem = problem_from_shorthand("211,211,211")
    found = walls(problem).walls
    for wall in found:
        point = generic_point(problem, [wall])
        assert [w.vector for w in walls(point).walls if w.holds] == [wall.vector]


def test_equal_eigenvalues_become_a_larger_jordan_block() -> None:
    problem = problem_from_shorthand("21,111")
    one, two = Value.rational(1), Value.rational(2)
    merged = with_eigenvalues(problem, [one, one, one, two, one])
    assert [e.jordan for e in merged.poles[0].blocks[0].residue] == [(2, 1)]
    assert [(e.value, e.jordan) for e in merged.poles[1].blocks[0].residue] == [(1, (2,)), (2, (1,))]


def test_specialising_may_not_make_eigenvalues_equal() -> None:
    data = dict(document(problem_from_shorthand("11,11,11")))
    data["symbols"] = ["a"]
    values = [["a", "-a"], ["a+1", "0"], ["1", "-2-a"]]
    for pole, own in zip(data["poles"], values, strict=True):
        pole["blocks"][0]["residue"] = [{"value": v, "jordan": [1]} for v in own]
    problem = problem_from_json(data)
    walls_by_equation = {wall.equation: wall for wall in walls(problem).walls}
    wall = walls_by_equation["2*a+2 = 0"]
    with pytest.raises(Refused) as refused:
        specialise(problem, wall, "a")
    assert "become equal" in refused.value.message


def test_other_data_are_refused() -> None:
    pole = {"at": "0", "blocks": [{"exponent": {"5/2": "1"}, "residue": [{"value": "0", "jordan": [1]}]}]}
    ramified = problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": [pole]})
    monodromy = [
        {"at": str(k), "blocks": [{"exponent": {}, "local_monodromy": [{"value": "0", "jordan": [1]}]}]}
        for k in range(2)
    ]
    theta = problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": monodromy})
    for problem, word in ((ramified, "ramified"), (theta, "additive")):
        with pytest.raises(Refused) as refused:
            walls(problem)
        assert word in refused.value.message


def test_many_walls_are_cut() -> None:
    found = walls(problem_from_shorthand("[35]1,1^36,1^36"))
    assert len(found.walls) == MOST_WALLS and not found.complete


def test_equations_have_whole_coefficients() -> None:
    equations = {wall.equation for wall in walls(problem_from_shorthand("32,32,32,32")).walls}
    assert "a1+b1-c1+2*c2+d1 = 0" in equations
    assert not any("/" in equation for equation in equations)


def test_reduced_forms() -> None:
    assert reduced_form((0, 2, 0), (1, 1, 1)) == (0, 1, 0)
    assert reduced_form((1, 0, 1), (1, 1, 1)) == (0, 1, 0)
    assert reduced_form((2, 2, 2), (1, 1, 1)) == (0, 0, 0)
