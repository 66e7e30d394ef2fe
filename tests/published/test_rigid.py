"""Rigid types: hypergeometric, Okubo, Jordan–Pochhammer, Simpson's list, and their irreducibility conditions."""

import random
from fractions import Fraction

import pytest

from app.findings.findings import examine
from app.local.shorthand import problem_from_shorthand
from tests.published.problems import log_problem, semisimple

RIGID = [
    "11,11,11",
    "21,111,111",
    "31,1^4,1^4",
    "41,1^5,1^5",
    "21,21,21,21",
    "31,31,31,31,31",
    "22,211,1^4",
    "32,221,1^5",
    "33,321,1^6",
    "42,222,1^6",
    "211,211,211",
    "(1)(1),11",
    "((1))((1))",
    "(1)(1)(1),21",
    "(11)(1),111",
]


@pytest.mark.parametrize("shorthand", RIGID)
def test_rigid_types_exist_for_generic_eigenvalues(shorthand: str) -> None:
    """Katz, Rigid local systems (1996); Simpson, Products of matrices (1992); confluences common practice."""
    findings = examine(problem_from_shorthand(shorthand))
    assert (findings.rigidity_index, findings.dimension, findings.root_class) == (2, 0, "real")
    assert findings.additive is not None and findings.additive.exists is True
    assert findings.descent and findings.descent[-1].rank == 1


@pytest.mark.parametrize("order", range(2, 9))
def test_hypergeometric_tuples(order: int) -> None:
    """1^n, 1^n, (n−1)1: Beukers and Heckman, Invent. Math. 95 (1989); DLMF §16.8."""
    findings = examine(problem_from_shorthand(f"1^{order},1^{order},{order - 1} 1"))
    assert findings.dimension == 0 and findings.additive is not None and findings.additive.exists is True
    assert len(findings.descent) == order - 1


def hypergeometric(a: list[Fraction], b: list[Fraction]) -> tuple[bool | None, bool | None]:
    """Additive and multiplicative verdict for exponents a at 0, b at infinity and 0, …, 0, c at 1."""
    order = len(a)
    rest = -sum(a, Fraction(0)) - sum(b, Fraction(0))
    problem = log_problem(
        semisimple(tuple(a), (1,) * order), semisimple((0, rest), (order - 1, 1)), semisimple(tuple(b), (1,) * order)
    )
    findings = examine(problem)
    assert findings.additive is not None and findings.multiplicative is not None
    return findings.additive.exists, findings.multiplicative.exists


def test_the_irreducibility_condition_of_hypergeometric_systems() -> None:
    """Irreducible monodromy iff no a_i + b_j is an integer; irreducible system iff none is 0.

    Beukers and Heckman, Invent. Math. 95 (1989), Proposition 3.3; for the system, Crawley-Boevey (2003).
    """
    generator = random.Random(7)
    seen = {True: 0, False: 0}
    for _ in range(120):
        order = generator.choice([2, 3])
        a = [Fraction(n, 5) for n in generator.sample(range(-7, 8), order)]
        b = [Fraction(n, 5) for n in generator.sample(range(-7, 8), order)]
        rest = -sum(a, Fraction(0)) - sum(b, Fraction(0))
        distinct = len({x % 1 for x in a}) == len({x % 1 for x in b}) == order and rest % 1 != 0
        if not distinct:
            continue
        system, monodromy = hypergeometric(a, b)
        assert system is all(x + y != 0 for x in a for y in b)
        assert monodromy is all((x + y) % 1 != 0 for x in a for y in b)
        seen[bool(system)] += 1
    assert min(seen.values()) > 5


@pytest.mark.parametrize("order", [2, 3, 4, 5])
def test_jordan_pochhammer(order: int) -> None:
    """((n−1) 1)^(n+1): the middle convolution of rank one, Dettweiler and Reiter, J. Algebra 318 (2007).

    Descent is a single step, from rank n to rank 1.
    """
    findings = examine(problem_from_shorthand(",".join([f"{order - 1} 1"] * (order + 1))))
    assert findings.dimension == 0 and [step.rank for step in findings.descent] == [1]
    assert any("Jordan–Pochhammer" in family.name for family in findings.families) or order == 2


def test_middle_convolution_of_rank_one() -> None:
    """Residues a, b, c of rank 1 and infinity −(a+b+c): mc_μ has rank 3 with residues (a+μ, 0, 0), … and at infinity
    −μ, −μ, −(a+b+c+μ).  Dettweiler and Reiter, J. Algebra 318 (2007), Lemma 2.7 (worked out by hand).
    """
    a, b, c, mu = Fraction(1, 2), Fraction(1, 3), Fraction(1, 5), Fraction(1, 7)
    finite = [semisimple((x + mu, 0), (1, 2)) for x in (a, b, c)]
    problem = log_problem(*finite, semisimple((-mu, -(a + b + c + mu)), (2, 1)))
    findings = examine(problem)
    assert findings.fuchs_holds and findings.dimension == 0
    assert findings.additive is not None and findings.additive.exists is True
    assert [step.rank for step in findings.descent] == [1]


@pytest.mark.parametrize("order", [3, 4, 5])
def test_okubo_types(order: int) -> None:
    """Okubo systems (x − T) y' = A y with diagonal T: at the k-th point of T the residue has rank equal to the
    multiplicity of t_k, at infinity A.  Semisimple A with eigenvalues of multiplicities 1, …, 1 and T of
    multiplicities n−1, 1: the type 1^n, (n−1)1 …, rigid for the hypergeometric case.

    Okubo's list I (from memory): n−1 1 with 1^n at the other finite point and 1^n at infinity.
    """
    shorthand = f"{order - 1} 1,1^{order},1^{order}"
    findings = examine(problem_from_shorthand(shorthand))
    assert findings.rigidity_index == 2 and findings.additive is not None and findings.additive.exists is True


@pytest.mark.parametrize("half", [2, 3, 4])
def test_simpsons_families(half: int) -> None:
    """Even: 1^2m, m m, m (m−1) 1.  Odd: 1^(2m+1), m m 1, (m+1) m.  Simpson, Products of matrices (1992)."""
    even = f"1^{2 * half},{half} {half},{half} {half - 1} 1"
    odd = f"1^{2 * half + 1},{half} {half} 1,{half + 1} {half}"
    for shorthand, word in ((even, "even"), (odd, "odd")):
        findings = examine(problem_from_shorthand(shorthand))
        assert findings.rigidity_index == 2 and findings.additive is not None and findings.additive.exists is True
        assert any(word in family.name for family in findings.families)


def test_the_extra_case_of_order_six() -> None:
    """42, 222, 1^6: Simpson, Products of matrices (1992)."""
    findings = examine(problem_from_shorthand("42,222,1^6"))
    assert findings.rigidity_index == 2
    assert any("extra case" in family.name for family in findings.families)
