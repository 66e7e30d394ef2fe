"""The multiplicative problem: Crawley-Boevey and Shaw, Adv. Math. 201 (2006), with values worked out by hand."""

from app.findings.findings import examine
from app.local.problem import Problem
from tests.published.problems import log_problem, semisimple

THETA = "local_monodromy"


def monodromy(problem: Problem) -> bool | None:
    verdict = examine(problem).multiplicative
    assert verdict is not None
    return verdict.exists


def test_twice_d4() -> None:
    """22,22,22,22: θ·δ of order 2 modulo Z exists, of order 1 does not."""
    halves = semisimple((0, "1/2"), (2, 2))
    generic = semisimple(("z", "-z"), (2, 2))
    assert monodromy(log_problem(halves, halves, halves, generic, reading=THETA, symbols=("z",))) is True
    tenth = semisimple(("1/10", "-1/10"), (2, 2))
    assert monodromy(log_problem(halves, halves, tenth, generic, reading=THETA, symbols=("z",))) is False


def test_twice_e6() -> None:
    """222,222,222 with θ·δ ≡ 1/2 exists."""
    thirds = semisimple((0, "1/3", "2/3"), (2, 2, 2))
    last = semisimple(("z", "w", "1/2-z-w"), (2, 2, 2))
    assert monodromy(log_problem(thirds, thirds, last, reading=THETA, symbols=("z", "w"))) is True


def test_additive_yes_and_multiplicative_no() -> None:
    """The sum of one eigenvalue from each pole is an integer but not 0: a system exists, its monodromy is reducible."""
    problem = log_problem(
        semisimple(("3/10", 0), (1, 1)), semisimple((0, "9/20"), (1, 1)), semisimple((1, "-7/4"), (1, 1))
    )
    findings = examine(problem)
    assert findings.additive is not None and findings.additive.exists is True
    assert monodromy(problem) is False


def three_pairs(*pairs: tuple[str, str]) -> Problem:
    return log_problem(*(semisimple(pair, (1, 1)) for pair in pairs), reading=THETA)


def test_rank_two_with_three_poles() -> None:
    """Irreducible iff no sum of one θ from each pole is an integer: classical (common practice)."""
    first, second = ("0", "1/3"), ("0", "1/5")
    assert monodromy(three_pairs(first, second, ("1/11", "-1/3-1/5-1/11"))) is True
    assert monodromy(three_pairs(first, second, ("-1/3", "-1/5"))) is False


def test_the_determinant_relation() -> None:
    """The θ must sum to an integer, which need not be 0."""
    third = ("0", "1/3")
    assert monodromy(three_pairs(third, third, ("1/7", "1/3-1/7"))) is True
    assert monodromy(three_pairs(third, third, ("1/7", "1/5-1/7"))) is False
