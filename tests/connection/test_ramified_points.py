"""Constructions for ramified data: found where they exist, checked by other means, and careful in their words."""

import dataclasses
import json
from fractions import Fraction

import numpy as np
import pytest

from app.__main__ import main
from app.connection import construction
from app.connection.connection import Connection, floating_parts, poles_of
from app.connection.construction import construct
from app.connection.document import connection_from_json
from app.connection.generic_values import generic_values
from app.connection.normal_form import normal_form
from app.connection.numerical_point import find_point_at
from app.connection.verification import problem_at, verify
from app.connection.verification_ramified import ramified_class_check
from app.errors import Refused
from app.exact.value import Value
from app.existence.problems import additive_verdict
from app.jobs.tasks import construct_connection
from app.local.newton import slopes
from app.local.orbit import moduli_dimension
from app.local.shorthand import problem_from_shorthand
from app.local.writer import document
from app.progress import Unlimited
from tests.connection.problems import general_problem

# name: (type, dimension); the dimensions are those of the equations (common practice)
PROVED = {
    "Airy": ("(1)_3/2", 0),
    "generalised Airy, order 3": ("(1)_4/3", 0),
    "Bessel after x² = 4t": ("(1)_1/2,11", 0),
    "Painlevé I": ("(1)_5/2", 2),
    "Painlevé III(D7)": ("(1)_1/2,(1)(1)", 2),
    "Painlevé III(D8)": ("(1)_1/2,(1)_1/2", 2),
    "degenerate Painlevé V": ("(1)_1/2,11,11", 2),
    "hypergeometric 0F2": ("(1)_1/3,111", 0),
}
OPEN = {
    "1F2": "(1)_1/2(1)_0,111",
    "1F3": "(1)_1/3(1)_0,1^4",
    "two levels": "((1)_1(1)_1)_3/2",
    "rank 3, four-dimensional": "(1)_1/2(1)_0,111,21",
}


@pytest.mark.parametrize("name", PROVED)
def test_points_where_existence_is_proved(name):
    shorthand, dimension = PROVED[name]
    problem = problem_from_shorthand(shorthand)
    built = construct(problem)
    assert moduli_dimension(problem) == dimension
    assert built.exists and built.verified, built.connection and built.connection.verification
    assert built.method.startswith("Numerical evidence, no proof") and "Exact matrices" in built.method
    assert built.connection.kind == "numerical" and not built.note
    check_slopes(problem, built.connection)


@pytest.mark.parametrize("name", OPEN)
def test_evidence_where_existence_is_open(name):
    problem = problem_from_shorthand(OPEN[name])
    built = construct(problem)
    assert built.exists is None and built.verified
    assert "evidence" in built.note and "no proof" in built.note
    assert built.note in built.connection.method
    assert additive_verdict(problem, None, None).status == "open"
    check_slopes(problem, built.connection)


def check_slopes(problem, connection):
    """Newton slopes read off eigenvalues at two points near each irregular pole: nothing of the construction enters."""
    for pole, part in zip(problem.poles, floating_parts(connection), strict=True):
        sizes = []
        for point in (1e-4, 1e-5):
            whole = sum(matrix.array * point**-k for k, matrix in enumerate(part))
            sizes.append(np.sort(np.abs(np.linalg.eigvals(whole))))
        found = np.log10(sizes[1] / sizes[0])
        wanted = [float(slope) for slope, width in slopes(pole) for _ in range(width)]
        assert np.allclose(found, wanted, atol=0.2), (found, wanted)


def test_what_does_not_exist_is_not_found():
    """The expected dimension is −2."""
    built = construct(problem_from_shorthand("(1)_1/2(1)_0,21"))
    assert built.exists is False and built.connection is None
    assert built.method.startswith("No irreducible system exists")


def test_a_scalar_residue_is_not_met():
    """A scalar residue at 0 forces one at a pole of slope 1/2, where residues are never scalar."""
    problem = problem_from_shorthand("(1)_1/2,2")
    special = problem_at(problem, {name: value_of(k) for k, name in enumerate(problem.symbols)})
    assert not special.trace_sum
    point = find_point_at(special.poles, 0, Unlimited(), starts=1)
    assert not point.converged


def value_of(number):
    return Value.rational(Fraction(number + 2, 7 + 2 * number))


BESIDE = {
    2: ["", "11", "2", "11,11", "(1)(1)", "11,2", "(1)_1/2"],
    3: ["", "21", "111", "3", "21,21", "111,21", "(1)(1)(1)", "(11)(1)", "(2)(1)", "(1)_1/3"],
}


@pytest.mark.parametrize("maximal", ["(1)_1/2", "(1)_3/2", "(1)_1/3", "(1)_2/3", "(1)_4/3"])
def test_the_search_agrees_with_the_theorem(maximal):
    """One maximally ramified pole: a verified point is found exactly where the verdict says that a system exists."""
    for other in BESIDE[problem_from_shorthand(maximal).rank]:
        problem = problem_from_shorthand(f"{maximal},{other}" if other else maximal)
        verdict = additive_verdict(problem, None, None)
        special = problem_at(problem, generic_values(problem.symbols, 0))
        point = find_point_at(special.poles, 0, Unlimited(), starts=6 if verdict.exists else 1)
        poles = poles_of([pole.at for pole in special.poles], point.parts)
        record = verify(special, Connection("numerical", special.rank, poles), Unlimited())
        assert all(check.holds for check in record) == (verdict.status == "proved"), (other, verdict.reason)


def test_a_search_without_success_decides_nothing(monkeypatch):
    """Whether a system of this type exists is open here; one short search, which finds none."""
    monkeypatch.setattr(construction, "_ATTEMPTS", 1)
    monkeypatch.setattr(
        construction, "_point_on_orbits", lambda special, seed, progress: find_point_at(special.poles, 0, progress, 1)
    )
    built = construct(problem_from_shorthand("(1)_1/2(11)_0,31,31"))
    assert built.exists is None and built.connection is None
    assert "Nothing was found in 1 start;" in built.note and "decides nothing" in built.note


def mixed(first, second, *log):
    """Slope 1/2 with a block of exponent 0 at infinity, three simple eigenvalues at 0."""
    at_infinity = [({"1/2": "1"}, [(first, [1])]), ({}, [(second, [1])])]
    return general_problem([("infinity", at_infinity), ("0", [({}, [(value, [1]) for value in log])])])


def test_a_reducible_special_value_stays_undecided():
    """The block of exponent 0 and an eigenvalue of opposite sign make a system of rank 1: rigid data then split."""
    built = construct(mixed("1/3", "1/5", "-1/5", "2/11", "*"))
    assert built.exists is None and not built.verified
    assert "decides nothing" in built.note and "starts" in built.note
    failed = [check.check for check in built.connection.verification if not check.holds]
    assert failed == ["irreducibility"] or failed == ["irreducibility", "tangent dimension"]


def doubled(jordan):
    """Slope 1/2 with multiplicity 2: a class that is semisimple or not."""
    orbit = ({"1/2": "1"}, [("1/3", jordan)])
    return general_problem([("infinity", [orbit]), ("0", [({}, [(v, [1]) for v in ("1/5", "1/7", "2/11", "*")])])])


@pytest.mark.parametrize(("own", "other"), [([1, 1], [2]), ([2], [1, 1])])
def test_the_class_on_the_multiplicity_space_is_seen(own, other):
    problem = doubled(own)
    special = [normal_form(pole) for pole in problem.poles]
    right, _ = ramified_class_check("", problem.poles[0], list(special[0].form))
    wrong, _ = ramified_class_check("", doubled(other).poles[0], list(special[0].form))
    assert right.holds and not wrong.holds, (right, wrong)


def test_a_touched_coefficient_fails_the_record():
    problem = problem_from_shorthand("(1)_1/2,11,11")
    connection = construct(problem).connection
    pole = connection.poles[0]
    entry = pole.coefficients[1][0][0] + 1e-3
    matrix = ((entry, *pole.coefficients[1][0][1:]), *pole.coefficients[1][1:])
    touched = dataclasses.replace(pole, coefficients=(pole.coefficients[0], matrix))
    record = verify(problem, dataclasses.replace(connection, poles=(touched, *connection.poles[1:])), Unlimited())
    assert {check.check for check in record if not check.holds} >= {"class at pole 1", "distance from exactness"}


def test_a_higher_order_fails_the_record():
    problem = problem_from_shorthand("(1)_3/2")
    connection = construct(problem).connection
    (pole,) = connection.poles
    higher = dataclasses.replace(pole, coefficients=(*pole.coefficients, pole.coefficients[1]))
    record = verify(problem, dataclasses.replace(connection, poles=(higher,)), Unlimited())
    assert not record[1].holds


@pytest.mark.parametrize(
    ("values", "words"),
    [({"u1": 1, "u2": -1}, "exponents become equal"), ({"u1": 0, "u2": 1}, "ramification index")],
)
def test_values_that_change_the_formal_type_are_refused(values, words):
    """z^(−1/2) and −z^(−1/2) are conjugate; with coefficient 0 nothing is ramified."""
    problem = problem_from_shorthand("(1)_1/2(1)_1/2,1111,31")
    assert {"u1", "u2"} <= set(problem.symbols)
    with pytest.raises(Refused, match=words):
        problem_at(problem, {name: Value.rational(value) for name, value in values.items()})
    problem_at(problem, {"u1": Value.rational(1), "u2": Value.rational(2)})


def test_deterministic():
    problem = problem_from_shorthand("(1)_1/2,(1)_1/2")
    first, again, other = (construct(problem, seed=seed).connection for seed in (1, 1, 2))
    assert first == again and first != other


def test_command_line(capsys):
    assert main(["construct", "--type", "(1)_1/2(1)_0,111"]) == 0
    out = capsys.readouterr().out
    assert "no proof" in out and "Existence is open" in out and "FAILS" not in out
    assert main(["construct", "--type", "(1)_3/2", "--json"]) == 0
    connection = connection_from_json(json.loads(capsys.readouterr().out))
    assert connection.verified and "no proof" in connection.method


def test_as_a_job():
    """What pages and interface run."""
    problem = document(problem_from_shorthand("(1)_1/2(1)_0,111"))
    given = {"problem": problem, "numeric": False, "seed": 0}
    record = json.loads(construct_connection(json.dumps(given), Unlimited()))
    assert record["verified"] and record["exists"] is None and "no proof" in record["note"]
