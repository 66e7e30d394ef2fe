"""Möbius maps: composition, and exponents against an expansion done another way."""

import random
from fractions import Fraction

import pytest

from app.errors import Refused
from app.exact.value import Value
from app.local.document import problem_from_json
from app.local.formal_type import Exponent, Position
from app.local.orbit import rigidity_index
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from app.local.writer import document
from app.operations.moebius import Moebius, change_variable, image, re_expanded
from app.roots.build import quiver_of
from tests.operations.random_problems import random_problem


def moebius(*numbers: int | Fraction) -> Moebius:
    a, b, c, d = (Value.rational(number) for number in numbers)
    return Moebius(a, b, c, d)


def after(second: Moebius, first: Moebius) -> Moebius:
    return Moebius(
        second.a * first.a + second.b * first.c,
        second.a * first.b + second.b * first.d,
        second.c * first.a + second.d * first.c,
        second.c * first.b + second.d * first.d,
    )


def random_map(generator: random.Random) -> Moebius:
    while True:
        map_ = moebius(*(generator.randint(-2, 2) for _ in range(4)))
        if map_.determinant:
            return map_


def one_pole(at: str, exponent: dict[str, str]) -> Problem:
    index = max(int(power.partition("/")[2] or 1) for power in exponent)
    poles = [
        {"at": at, "blocks": [{"exponent": exponent, "residue": [{"value": "0", "jordan": [1]}]}]},
        {"at": "7", "blocks": [{"exponent": {}, "residue": [{"value": "0", "jordan": [1] * index}]}]},
    ]
    return problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles})


@pytest.mark.parametrize("seed", range(6))
def test_maps_compose_and_keep_the_quiver(seed: int) -> None:
    generator = random.Random(seed)
    for _ in range(15):
        problem = random_problem(generator, generic=True)
        first, second = random_map(generator), random_map(generator)
        once = change_variable(problem, first).problem
        assert problem_from_json(dict(document(once))) == once
        assert change_variable(once, second).problem == change_variable(problem, after(second, first)).problem
        assert change_variable(once, first.inverse).problem == problem
        assert quiver_of(once) == quiver_of(problem)
        assert rigidity_index(once) == rigidity_index(problem)


@pytest.mark.parametrize("seed", range(20))
def test_exponents_agree_with_a_partial_fraction_of_the_function(seed: int) -> None:
    """q as a rational function of x; its polar part at the image is found by repeated evaluation of (x' − t')^k q."""
    generator = random.Random(seed)
    map_ = random_map(generator)
    t = Fraction(generator.randint(-2, 2))
    coefficients = {power: Fraction(generator.randint(1, 5)) for power in (1, 2, 3)}
    exponent = Exponent(tuple((Fraction(p), Value.rational(coefficients[p])) for p in (3, 2, 1)))
    problem = one_pole(str(t), {str(p): str(c) for p, c in coefficients.items()})
    pole = change_variable(problem, map_).problem.poles[0]
    new = {int(p): c.as_rational() for p, c in pole.blocks[0].exponent.terms}
    assert exponent == problem.poles[0].blocks[0].exponent
    numbers = [value.as_rational() for value in (map_.a, map_.b, map_.c, map_.d)]
    a, b, c, d = numbers
    # the difference of the two polar parts must be bounded near the point: compare along three small steps
    for step in (Fraction(1, 10**6), Fraction(1, 10**7)):
        x = t + step
        y = (a * x + b) / (c * x + d)
        local = 1 / y if pole.at.value is None else y - pole.at.value.as_rational()
        before = sum(value / step**p for p, value in coefficients.items())
        now = sum((value or 0) / local**p for p, value in new.items())
        assert abs(before - now) < 10**5, "a polar term is missing (it would be at least of size 10^6)"


def test_translation_changes_exponents_at_infinity() -> None:
    """(x − 1)² = x² − 2x + 1: an affine map, and the coefficients change."""
    moved = change_variable(one_pole("infinity", {"2": "1"}), moebius(1, 1, 0, 1)).problem
    assert moved.poles[0].blocks[0].exponent.terms == (
        (Fraction(2), Value.rational(1)),
        (Fraction(1), Value.rational(-2)),
    )
    finite = change_variable(one_pole("0", {"2": "1"}), moebius(1, 1, 0, 1)).problem
    assert finite.poles[0].blocks[0].exponent.terms == ((Fraction(2), Value.rational(1)),)


def test_ramified_exponents() -> None:
    """Airy's x^(3/2) at infinity, moved by 1: (x − 1)^(3/2) = x^(3/2) − (3/2)x^(1/2) + ….

    Scaling by 4 divides by 8.
    """
    problem = one_pole("infinity", {"3/2": "2/3"})
    moved = change_variable(problem, moebius(1, 1, 0, 1)).problem.poles[0].blocks[0].exponent
    assert dict(moved.terms) == {Fraction(3, 2): Fraction(2, 3), Fraction(1, 2): -1}
    scaled = change_variable(problem, moebius(4, 0, 0, 1)).problem.poles[0].blocks[0].exponent
    assert dict(scaled.terms) == {Fraction(3, 2): Fraction(1, 12)}
    doubled = change_variable(problem, moebius(2, 0, 0, 1)).problem.poles[0].blocks[0].exponent
    (coefficient,) = dict(doubled.terms).values()
    assert coefficient * coefficient == Fraction(4, 9) / 8
    cubic = one_pole("infinity", {"4/3": "1"})
    with pytest.raises(Refused) as refused:
        change_variable(cubic, moebius(2, 0, 0, 1))
    assert "root of degree 3" in refused.value.message
    eighth = change_variable(cubic, moebius(8, 0, 0, 1)).problem.poles[0].blocks[0].exponent
    assert dict(eighth.terms) == {Fraction(4, 3): Fraction(1, 16)}


def test_re_expansion_is_substitution() -> None:
    exponent = Exponent(((Fraction(3), Value.symbol("u")), (Fraction(1), Value.symbol("v"))))
    new = re_expanded(exponent, Value.rational(2), Value.rational(5))
    assert dict(new.terms) == {
        Fraction(3): Value.symbol("u") * 8,
        Fraction(2): Value.symbol("u") * 60,
        Fraction(1): Value.symbol("u") * 150 + Value.symbol("v") * 2,
    }


def test_open_positions() -> None:
    problem = problem_from_shorthand("11,11,11,11")
    result = change_variable(problem, moebius(0, 1, 1, 0))
    assert result.problem.poles[2].at == problem.poles[2].at
    assert "open positions" in result.words
    irregular = problem_from_shorthand("(1)(1),(1)(1),(1)(1),(1)(1)")
    assert change_variable(irregular, moebius(2, 1, 0, 1)).problem.rank == 2
    with pytest.raises(Refused) as refused:
        change_variable(irregular, moebius(0, 1, 1, 0))
    assert "open position" in refused.value.message


def test_images_and_refused_maps() -> None:
    flip = moebius(0, 1, 1, 0)
    assert image(flip, Position(None)) == Position(Value.rational(0))
    assert image(flip, Position(Value.rational(0))) == Position(None)
    problem = problem_from_shorthand("11,11,11")
    with pytest.raises(Refused) as refused:
        change_variable(problem, moebius(1, 2, 2, 4))
    assert "determinant" in refused.value.message
    with pytest.raises(Refused) as refused:
        change_variable(problem, Moebius(Value.symbol("s"), *(Value.rational(n) for n in (0, 0, 1))))
    assert "symbols" in refused.value.message
