"""Normal forms of ramified types: eigenvalues near the pole, orbits of the right dimension, equations of the books."""

import cmath
import dataclasses
from fractions import Fraction

import numpy as np
import pytest

from app.connection.connection import Connection, ConnectionPole
from app.connection.float_matrix import floating
from app.connection.generic_values import generic_values
from app.connection.normal_form import normal_form, orbit_defect, stage_normal_form, tangent_map
from app.connection.stages import stage_of
from app.connection.verification import problem_at, verify
from app.connection.verification_ramified import ramified_class_check
from app.errors import Refused
from app.exact.number import parse_number
from app.exact.quotient import Quotient
from app.exact.value import Value
from app.local.formal_type import Position
from app.local.orbit import orbit_dimension
from app.local.shorthand import problem_from_shorthand
from app.progress import Unlimited
from tests.connection.problems import general_problem

TYPES = [
    "(1)_3/2", "(1)_5/2", "(1)_1/3,111", "(1)_2/3,111", "(1)_4/3", "(1)_3/4,1^4", "(11)_1/2,22", "(2)_1/2,22",
    "(2)_3/2", "(1)_1/2(1)_0,111", "(1)_1/2(11)_0,1^4", "(1)_3/2(1)_1/2", "(1)_1/2(1)_1/3", "((1)_1(1)_1)_3/2",
    "((1)_1/4)_1/2", "((1)_1/4)_3/2", "(1)_2(1)_1/2", "(1)_4/3(1)_1/2", "(1)_1/2(1)_1/2",
]  # fmt: skip


def ramified_pole(shorthand, seed=0):
    problem = problem_from_shorthand(shorthand)
    return problem_at(problem, generic_values(problem.symbols, seed)).poles[0]


@pytest.mark.parametrize("shorthand", TYPES)
def test_orbits_have_the_dimension_of_the_formal_type(shorthand):
    assert orbit_defect(ramified_pole(shorthand)) == 0


def test_in_a_lattice_outside_the_chain_the_orbit_has_another_dimension():
    """The frame vector w^(-1) divided by z spans with 1 a lattice that is no w^j C[[w]]."""
    pole = ramified_pole("(1)_1/2,11")
    form = normal_form(pole).form
    assert form[1, 0, 1] and form[0, 1, 0] and not form[0, 0, 1] and not form[1, 1, 0]
    wrong = np.zeros((3, 2, 2), dtype=complex)
    wrong[0] = np.diag(form[0].diagonal())
    wrong[2, 0, 1] = form[1, 0, 1]  # the entry below the diagonal becomes holomorphic
    assert np.linalg.matrix_rank(tangent_map(wrong)) != orbit_dimension(pole)


def expected_eigenvalues(pole, point):
    """z dq/dz + ξ/e over all conjugates, at one point."""
    found = []
    for block in pole.blocks:
        index = block.exponent.ramification
        for eigenvalue in block.residue:
            for k in range(index):
                root = point ** (1 / index) * cmath.exp(2j * cmath.pi * k / index)
                value = floating(eigenvalue.value) / index
                for power, coefficient in block.exponent.terms:
                    value -= float(power) * floating(coefficient) * root ** -int(power * index)
                found += [value] * eigenvalue.multiplicity
    return np.array(found)


@pytest.mark.parametrize("shorthand", [t for t in TYPES if t not in ("(2)_1/2,22", "(2)_3/2")])
def test_eigenvalues_near_the_pole(shorthand):
    """Those of z A are z dq/dz + ξ/e up to terms that vanish at the pole: exponents and normalisation at once."""
    pole = ramified_pole(shorthand, 2)
    form = normal_form(pole).form
    point = 1e-4
    found = np.linalg.eigvals(sum(matrix * point**-k for k, matrix in enumerate(form)))
    for value in expected_eigenvalues(pole, point):
        assert np.abs(found - value).min() < 0.12


@pytest.mark.parametrize("shorthand", TYPES)
def test_traces_are_the_values(shorthand):
    """The trace of the residue is Σ ξ · multiplicity, and no other coefficient of fractional origin has a trace."""
    pole = ramified_pole(shorthand)
    whole = sum(floating(e.value) * e.multiplicity for block in pole.blocks for e in block.residue)
    assert abs(np.trace(normal_form(pole).form[0]) - whole) < 1e-12


@pytest.mark.parametrize("shorthand", ["21,111,111", "((11))((1))((1)),31", "(11)(1),111"])
def test_two_ways_to_unramified_normal_forms(shorthand):
    problem = problem_from_shorthand(shorthand)
    special = problem_at(problem, generic_values(problem.symbols, 0))
    for pole, blocks in zip(special.poles, stage_of(special).poles, strict=True):
        first, second = normal_form(pole), stage_normal_form(blocks)
        assert np.allclose(first.form, second.form) and first.spaces == second.spaces


def exact(*poles):
    """An exact connection from (position, coefficient matrices of texts) for each pole."""
    rank = len(poles[0][1][0])
    made = [
        ConnectionPole(
            Position(None if at == "infinity" else Value.rational(Fraction(at))),
            tuple(tuple(tuple(Quotient.of(parse_number(e, ())) for e in row) for row in m) for m in matrices),
        )
        for at, matrices in poles
    ]
    return Connection("exact", rank, tuple(made))


def airy(n):
    """The companion system of the equation y^(n) = x y, at infinity: dx = −dz/z², x = 1/z."""
    zero = [["0"] * n for _ in range(n)]
    shift = [["-1" if j == i + 1 else "0" for j in range(n)] for i in range(n)]
    corner = [["-1" if (i, j) == (n - 1, 0) else "0" for j in range(n)] for i in range(n)]
    return exact(("infinity", [zero, shift, corner]))


def airy_problem(n, value="0", coefficient=None):
    """Solutions grow like exp(n/(n+1) x^((n+1)/n))."""
    return general_problem(
        [("infinity", [({f"{n + 1}/{n}": coefficient or f"{n}/{n + 1}"}, [(value, [1])])])],
        symbols=(),
    )


@pytest.mark.parametrize("n", [2, 3, 4])
def test_airy(n):
    record = verify(airy_problem(n), airy(n), Unlimited())
    assert all(check.holds for check in record), record


@pytest.mark.parametrize("coefficient", ["1", "1/2", "2/3*i"])
def test_another_coefficient_is_not_airy(coefficient):
    record = verify(airy_problem(2, coefficient=coefficient), airy(2), Unlimited())
    assert next(check.check for check in record if not check.holds) == "class at pole 1"


def bessel(order):
    """θ²y = (ν²/4 − t) y in t = x²/4, θ = t d/dt, as a system for (y, θy)."""
    square = f"({order})^2/4"
    residue = [["0", "1"], [square, "0"]]
    return exact(("0", [residue]), ("infinity", [[["0", "-1"], [f"-{square}", "0"]], [["0", "0"], ["1", "0"]]]))


def bessel_problem(order, value="0"):
    """Solutions behave like t^(±ν/2) at 0 and like exp(±2i t^(1/2)) at infinity."""
    exponents = [(f"({order})/2", [1]), (f"-({order})/2", [1])]
    return general_problem([("0", [({}, exponents)]), ("infinity", [({"1/2": "2*i"}, [(value, [1])])])])


def test_bessel():
    record = verify(bessel_problem("1/3"), bessel("1/3"), Unlimited())
    assert all(check.holds for check in record), record


def test_another_order_is_not_that_bessel_equation():
    record = verify(bessel_problem("1/3"), bessel("2/5"), Unlimited())
    assert not record[1].holds and record[2].holds


def test_exact_matrices_with_symbols_are_not_checked_against_ramified_data():
    with pytest.raises(Refused, match="floating"):
        verify(airy_problem(2), dataclasses.replace(airy(2), symbols=("a",)), Unlimited())


def hypergeometric(betas, alphas):
    """Π(θ − β) y = x Π(θ + α) y, θ = x d/dx, as a companion system (A_0 + x A_1) dx/x: its coefficients at infinity."""
    rank = len(betas)
    left = np.poly([float(beta) for beta in betas])
    right = np.atleast_1d(np.poly([-float(alpha) for alpha in alphas]))
    residue = np.diag(np.ones(rank - 1), 1).astype(complex)
    residue[-1] = -left[:0:-1]
    leading = np.zeros((rank, rank), dtype=complex)
    leading[-1, : len(right)] = right[::-1]
    return [-residue, -leading]


BETAS = [Fraction(1, 5), Fraction(2, 7), Fraction(-3, 11), Fraction(5, 13), Fraction(4, 17)]
ALPHAS = [Fraction(1, 3), Fraction(2, 19), Fraction(3, 23)]


@pytest.mark.parametrize(("rank", "count"), [(2, 0), (3, 0), (3, 1), (4, 0), (4, 1), (4, 2), (5, 1), (5, 2), (5, 3)])
def test_hypergeometric_equations(rank, count):
    """At infinity rank − count solutions grow like exp(e x^(1/e)), e = rank − count; the others behave like x^(−α).

    The trivial lattice is the sum of a lattice of the chain and one for the α: with any α moved by 1 it is not.
    """
    betas, alphas = BETAS[:rank], ALPHAS[:count]
    part = hypergeometric(betas, alphas)
    assert ramified_class_check("", hypergeometric_pole(betas, alphas), part)[0].holds
    for shift in (-1, 1):
        pole = hypergeometric_pole(betas, [*alphas[:-1], alphas[-1] + shift] if alphas else [], 0 if alphas else shift)
        assert not ramified_class_check("", pole, part)[0].holds


def hypergeometric_pole(betas, alphas, shift=0):
    """The formal type at infinity; the Fuchs relation gives the value of the ramified block."""
    index = len(betas) - len(alphas)
    blocks = [({f"1/{index}": str(index)}, [(str(-sum(betas) - sum(alphas) + shift), [1])])]
    if alphas:
        blocks.append(({}, [(str(alpha), [1]) for alpha in alphas]))
    log = ({}, [(str(beta), [1]) for beta in betas[:-1]])
    log[1].append(("*", [1]))
    return general_problem([("infinity", blocks), ("0", [log])]).poles[0]
