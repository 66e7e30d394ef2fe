"""Existence for ramified data: published cases, a second way in rank 2, certificates and their independent check."""

import random
from dataclasses import replace
from fractions import Fraction
from functools import cache
from math import gcd
from typing import Any

import pytest

from app.errors import Refused
from app.existence import check_ramified as check_module
from app.existence import residue_sum
from app.existence.check_ramified import check_ramified
from app.existence.problems import additive_verdict
from app.existence.ramified import maximal_slope
from app.existence.ramified_certificates import (
    FreeResidue,
    Gauge,
    JordanBlocks,
    LargeEigenspace,
    RamifiedCertificate,
    ResidueSum,
    RigidityExcess,
)
from app.existence.verdict import FuchsDefect, Verdict
from app.local.document import problem_from_json
from app.local.orbit import moduli_dimension, rigidity_index
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from app.roots.build import quiver_of
from app.roots.reduction import reduce
from tests.local.document_parts import block, log_pole, make, pole

ONE: tuple[object, list[int]] = (0, [1])


def certificate_of(verdict: Verdict) -> RamifiedCertificate | FuchsDefect:
    if isinstance(verdict.certificate, FuchsDefect):
        return verdict.certificate
    assert verdict.ramified is not None and verdict.certificate is None
    return verdict.ramified


def decided(problem: Problem) -> Verdict:
    """The verdict, after its certificate has been worked out again."""
    verdict = additive_verdict(problem, None, None)
    assert verdict is not None
    if verdict.exists is None:
        assert verdict.status == "open" and verdict.ramified is None and verdict.certificate is None
        return verdict
    assert verdict.status == ("proved" if verdict.exists else "refuted")
    checks = check_ramified(problem, certificate_of(verdict), verdict.exists)
    assert len(checks) >= 2 and [check for check in checks if not check.holds] == []
    return verdict


# --- published cases


@pytest.mark.parametrize("shorthand", [
    # Airy and y^(n) = x·y; Bessel in x² = 4t and the Kloosterman equations [Katz, Ann. of Math. Studies 124 (1990)]
    "(1)_3/2", "(1)_4/3", "(1)_5/4", "(1)_1/2,11", "(1)_1/3,111", "(1)_1/5,11111",
    # ramified types of rank 2 with Painlevé equations [Ohyama and Okumura, J. Phys. A 39 (2006)]
    "(1)_5/2", "(1)_3/2,11", "(1)_1/2,11,11", "(1)_1/2,(1)(1)", "(1)_1/2,(1)_1/2",
    "(1)_2/3,21", "(1)_2/3,111", "(1)_1/3,21,21", "(1)_1/3,(1)(2)", "(1)_1/4,22,22", "(1)_3/4,31",
])  # fmt: skip
def test_generic_types_that_exist(shorthand: str) -> None:
    verdict = decided(problem_from_shorthand(shorthand))
    assert verdict.exists is True


@pytest.mark.parametrize("shorthand", [
    "(1)_1/2", "(1)_2/3", "(1)_1/3,21", "(1)_1/4,22", "(1)_2/5,311", "(1)_1/4,31,31", "(1)_1/2,2,2", "(1)_1/5,41,41,41",
])  # fmt: skip
def test_generic_types_that_do_not_exist(shorthand: str) -> None:
    verdict = decided(problem_from_shorthand(shorthand))
    assert verdict.exists is False


def slope_and_class(slope: str, *jordan: list[int]) -> Problem:
    """A maximally ramified pole at infinity and a log pole with eigenvalues 0, 1, −1, 2, … times the rank."""
    rank = sum(map(sum, jordan))
    eigenvalues = [(k * (-1) ** k, sizes) for k, sizes in enumerate(jordan)]
    trace = sum(value * sum(sizes) for value, sizes in eigenvalues)
    assert Fraction(slope).denominator == rank
    return problem_from_json(make(pole("infinity", block({slope: 1}, (-trace, [1]))), log_pole(0, *eigenvalues)))


@pytest.mark.parametrize(("problem", "exists"), [
    (slope_and_class("2/5", [3, 2]), True),
    (slope_and_class("2/5", [3, 1, 1]), False),
    (slope_and_class("3/5", [3, 1, 1]), True),
    (slope_and_class("2/5", [2], [2, 1]), True),
    (slope_and_class("1/5", [2], [2, 1]), False),
    (slope_and_class("1/5", [2], [3]), True),
    (slope_and_class("6/5", [1, 1, 1, 1, 1]), True),
    (slope_and_class("4/5", [1, 1, 1, 1, 1]), False),
])  # fmt: skip
def test_the_theorem_counts_jordan_blocks(problem: Problem, exists: bool) -> None:
    verdict = decided(problem)
    assert verdict.exists is exists and isinstance(verdict.ramified, JordanBlocks)


@pytest.mark.parametrize("rank", range(2, 9))
def test_rigid_ones_with_nilpotent_residue(rank: int) -> None:
    """Smallest nilpotent class that exists: r blocks, sizes as equal as can be; rigid iff r divides n − 1 or n + 1.

    Kulkarni, Livesay, Matherne, Nguyen and Sage (2022), from memory; it agrees with 1 + r − s(r − s), n = qr + s.
    """
    for numerator in range(1, rank):
        if gcd(numerator, rank) == 1:
            sizes = [rank // numerator + (k < rank % numerator) for k in range(numerator)]
            problem = slope_and_class(f"{numerator}/{rank}", sizes)
            assert decided(problem).exists is True
            rigid = (rank - 1) % numerator == 0 or (rank + 1) % numerator == 0
            assert (rigidity_index(problem) == 2) is rigid


# --- rank 2 a second way


Matrix = list[list[Fraction]]


def times(a: Matrix, b: Matrix) -> Matrix:
    return [[sum((x * y for x, y in zip(row, column, strict=True)), Fraction(0)) for column in zip(*b, strict=True)]
            for row in a]  # fmt: skip


def trace(a: Matrix, b: Matrix) -> Fraction:
    return sum((row[k] for k, row in enumerate(times(a, b))), Fraction(0))


def nilpotent_against(residue: Matrix, wanted: Fraction) -> Matrix:
    """A nilpotent N with tr(N·residue) = wanted ≠ 0; StopIteration where the traceless residue is 0."""
    shapes = [[[0, 1], [0, 0]], [[0, 0], [1, 0]], [[1, -1], [1, -1]]]
    candidates = ([[Fraction(entry) for entry in row] for row in shape] for shape in shapes)
    found = next(n for n in candidates if trace(n, residue))
    scale = wanted / trace(found, residue)
    return [[scale * entry for entry in row] for row in found]


def part_with_residue(slope: Fraction, coefficient: Fraction, residue: Matrix) -> list[Matrix]:
    """Coefficients of dz/z, dz/z², … of a traceless principal part of slope 1/2 or 3/2 with the given residue."""
    # −det of z·A has to be (z·q')² = (slope·coefficient)²·z^(−2·slope) down to z^(−order + 1)
    leading = (slope * coefficient) ** 2
    if slope == Fraction(1, 2):
        return [residue, nilpotent_against(residue, leading)]
    top: Matrix = [[Fraction(0), Fraction(1)], [Fraction(0), Fraction(0)]]
    middle: Matrix = [[Fraction(0), Fraction(0)], [leading, Fraction(0)]]
    # adding t·top to the middle changes tr(middle²)/2 by t·leading
    middle[0][1] = -(trace(top, residue) + trace(middle, middle) / 2) / leading
    return [residue, middle, top]


def half_traces(part: list[Matrix]) -> list[Fraction]:
    """−det of Σ A_k z^(−k), by powers z^0, z^(−1), …: half the trace of the square."""
    size = len(part)
    return [
        sum((trace(part[i], part[k - i]) for i in range(size) if 0 <= k - i < size), Fraction(0)) / 2
        for k in range(2 * size - 1)
    ]


@pytest.mark.parametrize("slope", [Fraction(1, 2), Fraction(3, 2)])
def test_rank_two_systems_written_down(slope: Fraction) -> None:
    """With log poles beside it the system can be written down whenever the verdict is yes, and only then."""
    source = random.Random(4)
    seen = {True: 0, False: 0}
    for _ in range(40):
        count = source.randint(0, 2)
        classes = [source.choice([[("1", [1]), ("-1", [1])], [("0", [2])], [("0", [1, 1])]]) for _ in range(count)]
        logs = [log_pole(k, *eigenvalues) for k, eigenvalues in enumerate(classes)]
        problem = problem_from_json(make(pole("infinity", block({str(slope): 3}, ONE)), *logs))
        total: Matrix = [[Fraction(0)] * 2 for _ in range(2)]
        for eigenvalues in classes:
            upper = Fraction(int(len(eigenvalues) == 1 and eigenvalues[0][1] == [2]))
            value = Fraction(eigenvalues[0][0])
            normal = [[value, upper], [Fraction(0), -value]]
            shear = [[Fraction(1), Fraction(source.randint(1, 5))], [Fraction(source.randint(-5, -1)), Fraction(1)]]
            determinant = 1 - shear[0][1] * shear[1][0]
            inverse = [[shear[1][1], -shear[0][1]], [-shear[1][0], shear[0][0]]]
            moved = times(times(shear, normal), inverse)
            total = [
                [a - b / determinant for a, b in zip(*rows, strict=True)] for rows in zip(total, moved, strict=True)
            ]
        exists = decided(problem).exists
        assert exists is not None
        seen[exists] += 1
        if not exists:
            assert slope < 1 and not any(any(row) for row in total)
            continue
        part = part_with_residue(slope, Fraction(3), total)
        found = half_traces(part)
        assert part[0] == total and found[-1] == 0
        expected = [(slope * 3) ** 2] if slope < 1 else [Fraction(0), (slope * 3) ** 2]
        assert found[len(part) - 1 : -1] == expected
    assert seen[True] > 10 and (slope > 1 or seen[False] > 3)


# --- random data, certificates


def random_problem(source: random.Random) -> Problem | None:
    """A maximally ramified pole, mostly, and up to three others; the Fuchs relation mostly holds."""
    rank = source.randint(2, 6)
    numerator = 1 if source.random() < 0.5 else source.choice([k for k in range(1, 2 * rank) if gcd(k, rank) == 1])
    exponent = {f"{numerator}/{rank}": "2", "1": "1"}
    poles = [pole("infinity", block(exponent, ("*" if source.random() < 0.9 else 5, [1])))]
    for k in range(source.randint(0, 3)):
        if source.random() < 0.15:
            poles.append(pole(k, block({f"1/{rank}": 3}, ONE)))
            continue
        if source.random() < 0.3:
            poles.append(log_pole(k, (0, [1] * (rank - 1)), (1, [1])))
            continue
        blocks, rest = [], rank
        while rest:
            size = rest if source.random() < 0.6 else source.randint(1, rest)
            rest -= size
            eigenvalues: list[tuple[object, list[int]]] = []
            while size:
                part = source.randint(1, size)
                size -= part
                value = source.choice(["", "a+", "sqrt(2)+"]) + str(len(eigenvalues))
                eigenvalues.append((value, source.choice([[1] * part, [part]])))
            blocks.append(block({str(source.randint(1, 2)): len(blocks) + 1} if blocks else {}, *eigenvalues))
        poles.append(pole(k, *blocks))
    try:
        return problem_from_json(make(*poles, symbols=["a"]))
    except Refused:
        return None


@cache
def random_verdicts() -> list[tuple[Problem, Verdict]]:
    source = random.Random(77)
    found = []
    while len(found) < 600:
        problem = random_problem(source)
        if problem is not None:
            found.append((problem, decided(problem)))
    return found


def test_random_verdicts_agree_with_the_rigidity_index() -> None:
    kinds: dict[type, int] = {}
    stronger = 0
    for problem, verdict in random_verdicts():
        assert maximal_slope(problem.poles[0]) is not None
        if verdict.exists is None:
            assert any(p.ramified for p in problem.poles[1:]), "unramified poles beside it: always decided so far"
            continue
        kinds[type(certificate_of(verdict))] = kinds.get(type(certificate_of(verdict)), 0) + 1
        if verdict.exists:
            assert moduli_dimension(problem) >= 0
        stronger += verdict.exists is False and moduli_dimension(problem) >= 0 and verdict.ramified is not None
    assert set(kinds) >= {JordanBlocks, FreeResidue, ResidueSum, LargeEigenspace, FuchsDefect}
    assert min(kinds.values()) >= 4 and stronger > 0


def test_a_rigidity_index_above_two_refutes() -> None:
    two_orbits = problem_from_json(
        make(pole(0, block({"1/2": 1}, ONE), block({"1/2": 2}, ONE)), log_pole(1, (0, [2, 2])))
    )
    verdict = decided(two_orbits)
    assert verdict.exists is False and verdict.ramified == RigidityExcess(rigidity_index(two_orbits))


def test_two_ways_to_the_residue_of_a_gauged_normal_form() -> None:
    """The search solves A·g = g·Λ from the highest pole down, the check multiplies by the inverse series."""
    source = random.Random(12)
    shapes = ["((1)(1))((2))", "(((1))((1)))(((1)(1)))", "(2)(1)(1)", "22"]
    for shorthand in shapes:
        problem = problem_from_shorthand(shorthand)
        (at,) = problem.poles
        order = max(int(b.exponent.slope) for b in at.blocks)
        terms = tuple(tuple(tuple(source.randint(-9, 9) for _ in range(4)) for _ in range(4)) for _ in range(order + 1))
        image = residue_sum._image(problem, [0], 5)
        gauge = Gauge(0, terms)
        solved = residue_sum._gauged_residue(residue_sum._normal_form(at, order + 1, image), gauge, image)
        multiplied = check_module._residue(at, gauge, image)
        assert all((a - b) % image.prime == 0 for rows in zip(solved, multiplied, strict=True)
                   for a, b in zip(*rows, strict=True))  # fmt: skip
        # the trace is that of the normal form, whatever the gauge
        wanted = sum(image.value(e.value) * e.multiplicity for b in at.blocks for e in b.residue)
        assert (sum(solved[k][k] for k in range(4)) - wanted) % image.prime == 0


def test_a_leading_power_of_smaller_index_is_not_maximal() -> None:
    """z^(−3/2) + z^(−5/4) is one orbit of index 4, but its leading term has equal conjugates."""
    problem = problem_from_shorthand("((1)_5/4)_3/2")
    assert maximal_slope(problem.poles[0]) is None and decided(problem).exists is None
    claimed = JordanBlocks(0, Fraction(3, 2), None, (4,))
    for slope in ("3/2", "5/4"):
        checks = check_ramified(problem, replace(claimed, slope=Fraction(slope)), False)
        assert any(not check.holds for check in checks)


def test_what_no_theorem_decides_stays_open() -> None:
    verdict = decided(problem_from_shorthand("(1)_3/2(1)_0,111"))
    assert verdict.exists is None and "not decided" in verdict.reason


def test_a_scalar_pole_only_twists() -> None:
    scalar = pole(5, block({"2": 1}, (1, [1, 1, 1])))
    base = pole("infinity", block({"2/3": 1, "1": 7}, ("*", [1])))
    log = log_pole(0, (0, [1, 1]), (1, [1]))
    for poles in ([base, log], [base, scalar, log], [scalar, base], [base]):
        verdict = decided(problem_from_json(make(*poles)))
        assert isinstance(verdict.ramified, JordanBlocks)
        assert verdict.exists is (log in poles)


def test_rank_one_is_never_ramified() -> None:
    for value, exists in ((0, True), (1, False)):
        problem = problem_from_json(make(pole("infinity", block({"3": 1}, (value, [1])))))
        quiver = quiver_of(problem)
        verdict = additive_verdict(problem, quiver, reduce(quiver))
        assert not problem.ramified and verdict is not None and verdict.exists is exists


def spoiled(certificate: Any) -> list[Any]:
    """Changes that make a certificate wrong."""
    if isinstance(certificate, FuchsDefect):
        return [FuchsDefect(certificate.defect + 1)]
    if isinstance(certificate, RigidityExcess):
        return [RigidityExcess(certificate.index + 1)]
    found = [replace(certificate, pole=certificate.pole + 1), replace(certificate, slope=certificate.slope + 1)]
    if isinstance(certificate, JordanBlocks):
        found.append(replace(certificate, counts=(*certificate.counts, 1)))
    if isinstance(certificate, LargeEigenspace):
        found += [replace(certificate, dimension=certificate.dimension + 1), replace(certificate, choices=())]
    if isinstance(certificate, ResidueSum):
        zero = tuple((0,) * len(row) for row in certificate.columns)
        found += [replace(certificate, columns=zero), replace(certificate, gauges=certificate.gauges[1:])]
        for terms in ((((0,) * len(zero),) * len(zero),), ()):
            first = replace(certificate.gauges[0], terms=terms)
            found.append(replace(certificate, gauges=(first, *certificate.gauges[1:])))
    if isinstance(certificate, FreeResidue):
        found.append(replace(certificate, second=certificate.pole))
    return found


def test_spoiled_certificates_are_found() -> None:
    tried = 0
    for problem, verdict in random_verdicts():
        if verdict.exists is None:
            continue
        certificate = certificate_of(verdict)
        assert any(not check.holds for check in check_ramified(problem, certificate, not verdict.exists))
        for wrong in spoiled(certificate):
            assert any(not check.holds for check in check_ramified(problem, wrong, verdict.exists)), wrong
            tried += 1
    assert tried > 400
