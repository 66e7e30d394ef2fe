"""Figures of formal types: by two ways on random data, and against published values."""

from fractions import Fraction
from random import Random

import pytest
from hypothesis import given, settings

from app.local.conjugates import conjugates
from app.local.document import problem_from_json
from app.local.formal_type import Pole
from app.local.orbit import (
    invariant_dimension,
    irregularity_of_endomorphisms,
    largest_slope,
    moduli_dimension,
    orbit_dimension,
    rigidity_index,
    unramified_moduli_dimension,
    unramified_orbit_dimension,
)
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from tests.local.document_parts import block, log_pole, make, pole
from tests.local.random_documents import problems, random_problem


@settings(max_examples=500, deadline=None)
@given(problems(ramified=False))
def test_two_ways_to_the_dimension(problem: Problem) -> None:
    assert moduli_dimension(problem) == unramified_moduli_dimension(problem)
    for p in problem.poles:
        assert orbit_dimension(p) == unramified_orbit_dimension(p)


def irregularity_by_pairs(p: Pole) -> tuple[Fraction, Fraction]:
    """Irr(End) and the largest slope by comparing all pairs of conjugates one by one."""
    members = [(dict(c), b.multiplicity) for b in p.blocks for c in conjugates(b.exponent)]
    whole, largest = Fraction(0), Fraction(0)
    for first, weight in members:
        for second, factor in members:
            slope = max((s for s in first.keys() | second.keys() if first.get(s) != second.get(s)), default=Fraction(0))
            whole += weight * factor * slope
            largest = max(largest, slope)
    return whole, largest


def test_irregularity_by_pairs_of_conjugates() -> None:
    random = Random(11)
    ramified = 0
    for _ in range(300):
        problem = random_problem(random)
        ramified += problem.ramified
        for p in problem.poles:
            whole, largest = irregularity_by_pairs(p)
            assert whole.denominator == 1
            assert irregularity_of_endomorphisms(p) == whole
            assert largest_slope(p) == largest
            assert orbit_dimension(p) % 2 == 0 or p.ramified
    assert ramified > 60


@settings(max_examples=200, deadline=None)
@given(problems())
def test_a_scalar_twist_changes_nothing(problem: Problem) -> None:
    # Adding one and the same 5/z^7 to all exponents of a pole leaves all differences as they are.
    from dataclasses import replace

    from app.exact.value import Value

    term = (Fraction(7), Value.rational(5))
    poles = tuple(
        replace(
            p, blocks=tuple(replace(b, exponent=replace(b.exponent, terms=(term, *b.exponent.terms))) for b in p.blocks)
        )
        for p in problem.poles
    )
    twisted = replace(problem, poles=poles)
    assert rigidity_index(twisted) == rigidity_index(problem)
    assert [largest_slope(p) for p in twisted.poles] == [largest_slope(p) for p in problem.poles]


def test_the_unramified_formula_refuses_ramified_poles() -> None:
    problem = problem_from_json(make(pole("infinity", block({"3/2": 1}, ("*", [1])))))
    with pytest.raises(ValueError, match="unramified"):
        unramified_orbit_dimension(problem.poles[0])


def test_classes_of_one_log_pole() -> None:
    # Dimensions of conjugacy classes: nilpotent ones by the conjugate partition.
    for sizes, dimension in (([3], 6), ([2, 1], 4), ([1, 1, 1], 0), ([2, 2], 8), ([4], 12), ([1], 0)):
        p = problem_from_json(make(log_pole(0, (0, sizes)))).poles[0]
        assert orbit_dimension(p) == unramified_orbit_dimension(p) == dimension
        assert invariant_dimension(p) == sum(sizes) ** 2 - dimension


# Kostov, J. Algebra 281 (2004): log data with index 0.  Katz, Rigid local systems (1996): hypergeometric type rigid.
# Kawakami, Nakamura, Sakai, arXiv:1209.3836: the four log types of dimension 4 and their confluences; the types of
# dimension 2 in rank 2 belong to Painlevé VI, V, III(D6), IV, II (Jimbo and Miwa, Physica D 2 (1981)).
# Boalch, Publ. IHES 116 (2012): connections with one pole of order 3, here with core A3 and A2.
TYPES = [
    ("11,11,11", 0),
    ("21,111,111", 0),
    ("31,1^4,1^4", 0),
    ("41,1^5,1^5", 0),
    ("211,22,1^4", 0),
    ("21,21,21,21", 0),
    ("11,11,11,11", 2),
    ("111,111,111", 2),
    ("1111,1111,22", 2),
    ("111111,222,33", 2),
    ("(1)(1),11,11", 2),
    ("(1)(1),(1)(1)", 2),
    ("((1))((1)),11", 2),
    ("(((1)))(((1)))", 2),
    ("((1)(1))((1)(1))", 2),
    ("((1))((1))((1))", 2),
    ("(1)(1)(1),111", 2),
    ("11,11,11,11,11", 4),
    ("21,21,111,111", 4),
    ("31,22,22,1111", 4),
    ("22,22,22,211", 4),
    ("(1)(1),11", 0),
    ("((1))((1))", 0),
    ("(1)(1)(1),21", 0),
    ("(11)(1),111", 0),
    ("22,22,22,22", 2),
    ("11,11", -2),
    ("1", 0),
]


@pytest.mark.parametrize(("shorthand", "dimension"), TYPES)
def test_dimensions_of_types(shorthand: str, dimension: int) -> None:
    problem = problem_from_shorthand(shorthand)
    if shorthand == "22,22,22,22":
        # m·δ with m = 2: q is quadratic, so q(2δ) = 0 and the expected dimension is 2 as for δ.
        assert problem.rank == 4
    assert moduli_dimension(problem) == unramified_moduli_dimension(problem) == dimension
    assert rigidity_index(problem) == 2 - dimension


def ramified(*parts: tuple[object, list[dict[str, object]]]) -> Problem:
    """A problem of rank 2 with distinct eigenvalues: exponents of every block, by pole."""
    poles = []
    for at, exponents in parts:
        blocks = [
            block(dict(q), *[(f"{k}/{7 + len(poles)}", [1]) for k in range(2)] if q == {} else [(0, [1])])
            for q in exponents
        ]
        poles.append(pole(at, *blocks))
    return problem_from_json(make(*poles))


LOG: list[dict[str, object]] = [{}]
HALF: list[dict[str, object]] = [{"1/2": 1}]
RANK_TWO = [
    # Airy's equation and the Bessel and Weber-like rigid ones: known by heart, by hand 2·4 − (2·3/2 + 4 − 1) = 2.
    ([("infinity", [{"3/2": "2/3"}])], 0),
    ([("infinity", HALF), ("0", LOG)], 0),
    ([("infinity", [{"1": 1}, {"1": -1}]), ("0", LOG)], 0),
    # Painlevé I: one pole with z^(−5/2) (Jimbo and Miwa, Physica D 2 (1981)); the 34th: z^(−3/2) and a log pole.
    ([("infinity", [{"5/2": "4/5", "1/2": "1"}])], 2),
    ([("infinity", [{"3/2": 1}]), ("0", LOG)], 2),
    # Degenerate V, III(D7), III(D8): slopes 1/2 with two log poles, with an order-2 pole, with 1/2 (from memory).
    ([("infinity", HALF), ("0", LOG), ("1", LOG)], 2),
    ([("infinity", HALF), ("0", [{"1": 1}, {"1": -1}])], 2),
    ([("infinity", HALF), ("0", HALF)], 2),
    ([("infinity", [{"7/2": 1}])], 4),
    # A scalar part of higher order does not count.
    ([("infinity", [{"5": 1, "5/2": 1}])], 2),
]


@pytest.mark.parametrize(("parts", "dimension"), RANK_TWO)
def test_rank_two_with_ramification(parts: list[tuple[object, list[dict[str, object]]]], dimension: int) -> None:
    assert moduli_dimension(ramified(*parts)) == dimension


@pytest.mark.parametrize("n", range(2, 13))
def test_generalised_airy_equations_are_rigid(n: int) -> None:
    # y^(n) = x·y: one pole at infinity with x^((n+1)/n), irreducible and rigid (Katz, Rigid local systems (1996)).
    problem = problem_from_json(make(pole("infinity", block({f"{n + 1}/{n}": 1}, ("*", [1])))))
    assert problem.rank == n
    assert irregularity_of_endomorphisms(problem.poles[0]) == (n + 1) * (n - 1)
    assert largest_slope(problem.poles[0]) == Fraction(n + 1, n)
    assert rigidity_index(problem) == 2


@pytest.mark.parametrize("n", range(2, 13))
def test_frenkel_gross_type_connections_are_rigid(n: int) -> None:
    # Slope 1/n at infinity, one unipotent block at 0: the Kloosterman connection (Katz 1996; Arinkin 2010 treats
    # rigid irregular connections in general).
    problem = problem_from_json(make(log_pole("0", (0, [n])), pole("infinity", block({f"1/{n}": n}, ("*", [1])))))
    assert irregularity_of_endomorphisms(problem.poles[1]) == n - 1
    assert rigidity_index(problem) == 2


def test_conjugates_of_one_block_against_another() -> None:
    # z^(−1/2) and z^(−1/2) + z^(−1/4): of the 6·5 ordered pairs 18 differ at 1/2 or earlier, counted by hand.
    problem = problem_from_json(make(pole(0, block({"1/2": 1}, (0, [1])), block({"1/2": 1, "1/4": 1}, (0, [1])))))
    # Coefficients at 1/2: +, − in the first block; +, −, +, − in the second: 2·3·3 pairs differ there.
    # At 1/4 the three with equal sign are 0, w, −w (w of them): 3·2 pairs, twice.
    assert irregularity_of_endomorphisms(problem.poles[0]) == 18 * Fraction(1, 2) + 12 * Fraction(1, 4)
