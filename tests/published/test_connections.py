"""Explicit connections against published closed forms.

Gauss and generalised hypergeometric systems: companion matrices, Beukers and Heckman, Invent. Math. 95 (1989), §§ 2–3.
Jordan–Pochhammer: Dettweiler and Reiter, J. Algebra 318 (2007); the rows of the convolution of rank 1.
Rigid families: Simpson, Products of matrices, in: Differential geometry, global analysis, and topology (1991).
Kummer: DLMF §13.2; Bessel: DLMF §10.6(i) (recurrence relations and derivatives).
Rank 2 with two accessory parameters: Jimbo and Miwa, Physica D 2 (1981), systems of Painlevé VI, V, IV, III, II.
"""

from fractions import Fraction
from itertools import combinations_with_replacement

import pytest
import sympy

from app.connection.connection import Connection, ConnectionPole, exact_parts
from app.connection.construction import construct
from app.connection.verification import verify
from app.exact.number import parse_number
from app.exact.quotient import Quotient
from app.exact.quotient_text import write_quotient
from app.exact.value import Value
from app.findings.findings import examine
from app.local.formal_type import Position
from app.local.shorthand import problem_from_shorthand
from app.progress import Unlimited
from tests.connection.conjugation import conjugator
from tests.connection.problems import general_problem, log_problem


def closed_form(symbols, poles):
    """An exact connection from positions and matrices of texts."""
    made = []
    for at, matrices in poles:
        position = Position(None if at == "infinity" else parse_number(at))
        tables = tuple(
            tuple(tuple(Quotient.of(parse_number(entry, symbols)) for entry in row) for row in matrix)
            for matrix in matrices
        )
        made.append(ConnectionPole(position, tables))
    return Connection("exact", len(made[0].coefficients[0]), tuple(made), tuple(symbols))


def companion(roots):
    """The companion matrix whose characteristic polynomial has these roots, rational ones; last row −coefficients."""
    t = sympy.Symbol("t")
    polynomial = sympy.Poly(sympy.prod([t - root for root in roots]), t)
    coefficients = polynomial.all_coeffs()[::-1]
    size = len(roots)
    rows = [[sympy.Integer(int(j == i + 1)) for j in range(size)] for i in range(size - 1)]
    return sympy.Matrix([*rows, [-c for c in coefficients[:-1]]])


def texts(matrix):
    return [[str(matrix[i, j]) for j in range(matrix.cols)] for i in range(matrix.rows)]


def hypergeometric(at_zero, at_infinity):
    """A_0 and A_0 + A_1 = −A_∞ companion matrices: θY = (A_0 + z/(z − 1) A_1) Y, A_1 of rank 1."""
    zero = companion([sympy.Rational(x) for x in at_zero])
    infinity = -companion([-sympy.Rational(x) for x in at_infinity])
    return closed_form((), [("0", [texts(zero)]), ("1", [texts(-zero - infinity)]), ("infinity", [texts(infinity)])])


def hypergeometric_problem(at_zero, at_infinity):
    ordinary = [("0", [1] * (len(at_zero) - 1)), ("*", [1])]
    return log_problem([(x, [1]) for x in at_zero], ordinary, [(x, [1]) for x in at_infinity])


EXPONENTS = {
    2: (["1/3", "-2/7"], ["1/5", "3/11"]),
    3: (["1/3", "-2/7", "5/13"], ["1/5", "3/11", "-1/17"]),
}


@pytest.mark.parametrize("order", [2, 3])
def test_hypergeometric_systems_are_conjugate_to_companion_matrices(order):
    problem = hypergeometric_problem(*EXPONENTS[order])
    built = construct(problem)
    assert built.verified and built.connection.kind == "exact"
    published = hypergeometric(*EXPONENTS[order])
    assert all(line.holds for line in verify(problem, published, Unlimited()))
    assert conjugator(exact_parts(built.connection), exact_parts(published)) is not None


@pytest.mark.parametrize("order", [2, 3])
def test_hypergeometric_characteristic_polynomials_with_free_exponents(order):
    problem = problem_from_shorthand({2: "11,11,11", 3: "21,111,111"}[order])
    connection = construct(problem).connection
    t = sympy.Symbol("t")
    for pole, placed in zip(problem.poles, connection.poles, strict=True):
        matrix = sympy.Matrix(
            [[sympy.sympify(write_quotient(e).replace("^", "**")) for e in row] for row in placed.coefficients[0]]
        )
        expected = sympy.Integer(1)
        for eigenvalue in pole.blocks[0].residue:
            value = sympy.sympify(write_quotient(Quotient.of(eigenvalue.value)).replace("^", "**"))
            expected *= (t - value) ** eigenvalue.multiplicity
        assert sympy.expand(matrix.charpoly(t).as_expr() - expected) == 0


@pytest.mark.parametrize("order", [2, 3])
def test_hypergeometric_irreducibility_condition(order):
    """Reducible exactly when A_0 and −A_∞ have a common eigenvalue, that is ξ_0 + ξ_∞ = 0 for some pair."""
    zero, infinity = EXPONENTS[order]
    assert examine(hypergeometric_problem(zero, infinity)).additive.exists
    for i in range(order):
        for j in range(order):
            changed = list(infinity)
            changed[j] = str(-Fraction(zero[i]))
            problem = hypergeometric_problem(zero, changed)
            assert examine(problem).additive.exists is False
            record = {line.check: line for line in verify(problem, hypergeometric(zero, changed), Unlimited())}
            assert not record["irreducibility"].holds


def test_jordan_pochhammer_of_order_four():
    weights = [Fraction(1, 3), Fraction(2, 7), Fraction(-1, 5), Fraction(3, 11)]
    mu = Fraction(5, 13)
    poles, places = [], ["0", "1", "2", "3"]
    for i, at in enumerate(places):
        rows = [["0"] * 4 for _ in range(4)]
        rows[i] = [str(w + (mu if i == j else 0)) for j, w in enumerate(weights)]
        poles.append((at, [rows]))
    whole = [[str(-(w + (mu if i == j else 0))) for j, w in enumerate(weights)] for i in range(4)]
    published = closed_form((), [*poles, ("infinity", [whole])])
    problem = log_problem(
        *([("0", [1, 1, 1]), (str(w + mu), [1])] for w in weights),
        [(str(-mu), [1, 1, 1]), (str(-mu - sum(weights)), [1])],
    )
    assert all(line.holds for line in verify(problem, published, Unlimited()))
    built = construct(problem)
    assert built.verified
    assert conjugator(exact_parts(built.connection), exact_parts(published)) is not None


SIMPSON = {
    "even family, order 4": "1111,211,22",
    "even family, order 6": "1^6,321,33",
    "odd family, order 5": "11111,221,32",
    "odd family, order 7": "1^7,331,43",
    "extra case, order 6": "1^6,222,42",
}


@pytest.mark.parametrize("name", SIMPSON)
def test_simpson_families(name):
    from app.connection.generic_values import generic_values
    from app.connection.verification import problem_at

    free = problem_from_shorthand(SIMPSON[name])
    problem = problem_at(free, generic_values(free.symbols, 2))
    built = construct(problem)
    assert built.verified and built.connection.kind == "exact"
    assert examine(problem).rigidity_index == 2


def test_simpson_with_free_symbols():
    assert construct(problem_from_shorthand(SIMPSON["even family, order 4"])).verified
    assert construct(problem_from_shorthand(SIMPSON["odd family, order 5"])).verified


def test_kummer():
    """x y'' + (b − x) y' − a y = 0 for (y, x y'): exponents 0 and 1/z at infinity, formal exponents a and b − a − 1."""
    symbols = ("a", "b")
    published = closed_form(
        symbols,
        [
            ("0", [[["0", "1"], ["0", "1-b"]]]),
            ("infinity", [[["0", "-1"], ["0", "b-1"]], [["0", "0"], ["-a", "-1"]]]),
        ],
    )
    problem = general_problem(
        [
            ("0", [({}, [("0", [1]), ("1-b", [1])])]),
            ("infinity", [({}, [("a", [1])]), ({"1": "1"}, [("b-a-1", [1])])]),
        ],
        symbols,
    )
    assert all(line.holds for line in verify(problem, published, Unlimited()))
    built = construct(problem)
    assert built.verified
    assert conjugator(exact_parts(built.connection), exact_parts(published)) is not None


def test_kummer_is_reducible_where_a_vanishes():
    problem = general_problem(
        [
            ("0", [({}, [("0", [1]), ("1/3", [1])])]),
            ("infinity", [({}, [("0", [1])]), ({"1": "1"}, [("-1/3", [1])])]),
        ]
    )
    assert examine(problem).additive.exists is False


def test_bessel():
    """(J_ν, J_(ν+1)): J_ν' = (ν/x) J_ν − J_(ν+1), J_(ν+1)' = J_ν − ((ν+1)/x) J_(ν+1); exponents ±i/z, formal 1/2."""
    symbols = ("ν",)
    published = closed_form(
        symbols,
        [
            ("0", [[["ν", "0"], ["0", "-ν-1"]]]),
            ("infinity", [[["-ν", "0"], ["0", "ν+1"]], [["0", "1"], ["-1", "0"]]]),
        ],
    )
    problem = general_problem(
        [
            ("0", [({}, [("ν", [1]), ("-ν-1", [1])])]),
            ("infinity", [({"1": "i"}, [("1/2", [1])]), ({"1": "-i"}, [("1/2", [1])])]),
        ],
        symbols,
    )
    assert all(line.holds for line in verify(problem, published, Unlimited()))
    built = construct(problem)
    assert built.verified
    field_is_large_enough = exact_parts(published, [parse_number("i")])
    assert conjugator(exact_parts(built.connection), field_is_large_enough) is not None


PAINLEVE = {
    "VI": "11,11,11,11",
    "V": "(1)(1),11,11",
    "IV": "((1))((1)),11",
    "III": "(1)(1),(1)(1)",
    "II": "(((1)))(((1)))",
}


@pytest.mark.parametrize("name", PAINLEVE)
def test_two_accessory_parameters_that_move_invariants(name):
    """Traces of products of two and three coefficients have a Jacobian of rank 2 in the accessory parameters."""
    problem = problem_from_shorthand(PAINLEVE[name])
    connection = construct(problem).connection
    assert connection.verified
    assert len(connection.accessory) == 2
    from app.connection.generic_values import generic_values

    values = generic_values(problem.symbols, 5)
    special = connection.at_values(values)
    matrices = [
        sympy.Matrix([[sympy.sympify(write_quotient(e).replace("^", "**")) for e in row] for row in matrix])
        for pole in special.poles
        for matrix in pole.coefficients
    ]
    letters = [sympy.Symbol(accessory) for accessory in connection.accessory]
    invariants = [(x * y).trace() for x, y in combinations_with_replacement(matrices, 2)]
    invariants += [(x * y * z).trace() for x, y, z in combinations_with_replacement(matrices, 3)]
    point = {letters[0]: sympy.Rational(3, 7), letters[1]: sympy.Rational(-5, 11)}
    jacobian = sympy.Matrix([[sympy.diff(f, letter).subs(point) for letter in letters] for f in invariants])
    assert jacobian.rank() == 2


def test_positions_do_not_enter():
    """The same principal parts serve every choice of positions."""
    first = construct(problem_from_shorthand("21,21,21,21")).connection
    assert {name for entry in first.exact_entries() for name in entry.symbols()}.isdisjoint({"t1"})
    assert isinstance(first.poles[2].at.value, Value)
