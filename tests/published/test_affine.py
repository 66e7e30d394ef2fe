"""Affine types: the four log types of dimension 2, the rank 2 confluences, and Kostov's non-existence cases."""

import pytest

from app.exact.value import Value
from app.findings.findings import Findings, examine
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from tests.published.problems import Class, log_problem, semisimple

AFFINE = {"D4": "11,11,11,11", "E6": "111,111,111", "E7": "1111,1111,22", "E8": "111111,222,33"}


def additive(problem: Problem) -> bool | None:
    verdict = examine(problem).additive
    assert verdict is not None
    return verdict.exists


@pytest.mark.parametrize("name", AFFINE)
def test_the_four_log_types_of_dimension_two(name: str) -> None:
    """Kostov, J. Algebra 281 (2004): the four indivisible tuples of index 0."""
    findings = examine(problem_from_shorthand(AFFINE[name]))
    assert findings.support_type == f"{name}^(1)"
    assert (findings.dimension, findings.rigidity_index, findings.root_class) == (2, 0, "isotropic")
    assert findings.additive is not None and findings.additive.exists is True


@pytest.mark.parametrize(
    ("shorthand", "type_", "equation"),
    [
        ("(1)(1),11,11", "A3^(1)", "Painlevé V"),
        ("((1))((1)),11", "A2^(1)", "Painlevé IV"),
        ("(((1)))(((1)))", "A1^(1)", "Painlevé II"),
    ],
)
def test_rank_two_confluences(shorthand: str, type_: str, equation: str) -> None:
    """Orders 2, 3, 4: Jimbo and Miwa, Physica D 2 (1981); symmetry types of Okamoto, Studies I–IV (1986–87)."""
    findings = examine(problem_from_shorthand(shorthand))
    assert (findings.support_type, findings.dimension) == (type_, 2)
    assert findings.additive is not None and findings.additive.exists is True
    assert equation in [family.name for family in findings.families]


def test_two_poles_of_order_two() -> None:
    """Painlevé III(D6): Jimbo and Miwa, Physica D 2 (1981)."""
    findings = examine(problem_from_shorthand("(1)(1),(1)(1)"))
    assert findings.dimension == 2 and findings.additive is not None and findings.additive.status == "proved"


@pytest.mark.parametrize("times", [2, 3])
@pytest.mark.parametrize("name", AFFINE)
def test_multiples_do_not_exist(name: str, times: int) -> None:
    """mδ with m ≥ 2, semisimple with generic eigenvalues: Kostov, J. Algebra 281 (2004), rigidity index 0."""
    parts = [[int(digit) * times for digit in part] for part in AFFINE[name].split(",")]
    shorthand = ",".join("".join(f"[{m}]" for m in part) for part in parts)
    findings = examine(problem_from_shorthand(shorthand))
    assert findings.dimension == 2
    assert findings.additive is not None and findings.additive.exists is False
    assert getattr(findings.additive.certificate, "criterion", "") == "multiple of an isotropic root"


def end_shape(name: str, m: int, jordan: bool) -> Problem:
    """mδ of an affine type with a further vertex of dimension 1 at an end where δ is 1.

    The last class gets one more slot: m, m becomes m, m−1, 1; either as a Jordan block or with distinct eigenvalues.
    """
    shapes = {
        "D4": [(m, m)] * 3 + [(m,)],
        "E6": [(m, m, m)] * 2 + [(m, m)],
        "E7": [(2 * m, 2 * m), (m, m, m, m), (m, m, m)],
        "E8": [(3 * m, 3 * m), (2 * m, 2 * m, 2 * m), (m,) * 5],
    }[name]
    primes = iter((2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43))
    classes: list[Class] = []
    trace = 0
    for shape in shapes:
        values = tuple(next(primes) for _ in shape)
        trace += sum(v * k for v, k in zip(values, shape, strict=True))
        classes.append(semisimple(values, shape))
    if jordan:
        # one eigenvalue with a Jordan block of size 2 beside m − 2 of size 1
        forced = Value.rational(-trace) / m
        rational = forced.as_rational()
        assert rational is not None
        classes[-1] = [*classes[-1], (rational, [2] + [1] * (m - 2))]
    else:
        classes[-1] = [*classes[-1], (1, [1] * (m - 1)), (-trace - (m - 1), [1])]
    return log_problem(*classes)


@pytest.mark.parametrize("m", [2, 3])
@pytest.mark.parametrize("name", AFFINE)
def test_one_vertex_behind_a_multiple(name: str, m: int) -> None:
    """(m m, m m, m m, m (m−1) 1) and its three relatives.

    With a Jordan block the parameter at the further vertex vanishes, so λ·δ = 0 and no irreducible system exists; with
    distinct eigenvalues it exists.  Crawley-Boevey, Duke Math. J. 118 (2003); Compositio Math. 126 (2001), Theorem 8.1.
    """
    refuted = examine(end_shape(name, m, jordan=True))
    assert refuted.additive is not None and refuted.additive.exists is False
    assert getattr(refuted.additive.certificate, "criterion", "") == "affine end"
    assert refuted.dimension == 2 * m
    assert additive(end_shape(name, m, jordan=False)) is True


def four_pairs(*values: tuple[int, int]) -> list[Class]:
    return [semisimple(pair, (2, 2)) for pair in values]


def test_single_cases_with_given_eigenvalues() -> None:
    """Values worked out by hand from Crawley-Boevey, Duke Math. J. 118 (2003)."""
    pairs = four_pairs((0, 1), (0, 3), (0, 7))
    assert additive(log_problem(*pairs, *four_pairs((0, -11)))) is False
    assert additive(log_problem(*pairs, semisimple((0, 5, -27), (2, 1, 1)))) is True
    findings: Findings = examine(log_problem(*pairs, semisimple((0, 5, -27), (2, 1, 1))))
    assert findings.dimension == 4
    assert additive(log_problem(*pairs, [(0, [1, 1]), (-11, [2])])) is False
