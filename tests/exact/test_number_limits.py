"""Every limit on a number: just inside is read, just outside is refused at once and by name."""

import time

import pytest

from app.errors import NumberFault
from app.exact import limits
from app.exact.limits import Budget
from app.exact.number import parse_laurent, parse_number, write_number

MANY = tuple(f"x{k}" for k in range(2001))
NAMES = frozenset(MANY) | {"a", "b", "c"}


def summed(count, pattern="x{0}"):
    return "+".join(pattern.format(k) for k in range(count))


P1, P2, P3 = 999_999_999_999_999_989, 999_999_999_999_999_967, 999_999_999_999_999_877
PRIMES = (2, 3, 5, 7, 11, 13, 17)
ROOTS = "+".join(f"sqrt({p})" for p in PRIMES)

# text, piece of the message, position (None: not compared)
REFUSED = [
    ("1" * 20_001, "20,000 characters", 20_000),
    (" " * 20_000 + "1", "20,000 characters", 20_000),
    (f"({summed(12)})^64", "2,000 terms", len(summed(12)) + 2),
    (f"({summed(63)})^2", "2,000 terms", None),
    (f"({summed(40)})*({summed(40, 'x{0}^2')})*({summed(40, 'x{0}^3')})", "elementary products", None),
    (f"({summed(900)})^2", "2,000 terms", None),
    (f"({summed(900)}+a^2)^2", "elementary products", None),
    (f"({summed(600)})*({summed(600, 'x{0}+')}1)", "elementary products", None),
    (summed(2001), "2,000 terms", None),
    ("+".join(["(a+b)^64"] * 1500), "elementary products", None),
    ("+".join(["(a+b+c)^40"] * 1500), "elementary products", None),
    ("(a+b+c)^40", "20,000 characters", 0),
    ("(a+b+c)^60", "elementary products", None),
    ("(" * 51 + "1" + ")" * 51, "50 deep", 50),
    ("sqrt(" * 51 + "1" + ")" * 51, "50 deep", 254),
    ("(" * 20_000, "50 deep", 50),
    ("2^65", "up to 64", 2),
    ("2^-65", "up to 64", 2),
    ("a^65", "up to 64", 2),
    ("2^100000000000000000000", "up to 64", 2),
    ("a^64*a", "power of a goes over 64", 4),
    ("(a^8)^9", "power of a goes over 64", 5),
    ("(a^33+b)^2", "power of a goes over 64", None),
    ("*".join("a" * 65), "power of a goes over 64", None),
    ("sqrt(1000000000000000001)", "10^18", 0),
    ("1+sqrt(1/1000000000000000001)", "10^18", 2),
    ("sqrt(10^40+1)", "10^18", 0),
    (f"sqrt({P1})*sqrt({P2})*sqrt({P3})", "10^36", None),
    ("1" * 401, "400 digits", 0),
    ("0." + "0" * 400 + "1", "400 digits", 0),
    ("10^64*10^64*10^64*10^64*10^64*10^64*10^16", "400 digits", 35),
    (f"{'9' * 400}+1", "400 digits", 400),
    (f"1/{'9' * 400}/10", "400 digits", None),
    (f"1/{'9' * 399}+1/1{'0' * 398}", "400 digits", None),
    (f"({'9' * 300})^2", "400 digits", 302),
    (f"({'9' * 300})^2-({'9' * 300})^2", "400 digits", 302),
    (f"(1/{'9' * 300}*a+b)^2", "400 digits", None),
    ("*".join(["(1+sqrt(2))"] * 1500), "400 digits", None),
    (f"1/({ROOTS})", "more than 6 independent square roots", 2),
    (f"({ROOTS})^-1", "more than 6 independent square roots", 0),
    (ROOTS, "more than 6 independent square roots", ROOTS.rindex("sqrt")),
    ("+".join(f"sqrt({10**17 + 3 * k})" for k in range(700)), "more than 6 independent square roots", None),
    ("+".join(f"sqrt({10**17 + 3 * k}/{10**17 + 3 * k + 1})" for k in range(400)), "more than 6", None),
    ("1/(" + "+".join(f"sqrt({10**16 + 3 * k})" for k in range(1, 7)) + ")", "over", 2),
    ("+".join(["1/(1+sqrt(2)+sqrt(3)+sqrt(5)+sqrt(7)+sqrt(11))"] * 400), "elementary products", None),
]


@pytest.mark.parametrize(("text", "message", "position"), REFUSED, ids=range(len(REFUSED)))
def test_refused_at_once(text, message, position):
    began = time.process_time()
    with pytest.raises(NumberFault) as caught:
        parse_number(text, NAMES)
    assert time.process_time() - began < 0.5
    assert message in caught.value.message
    assert position is None or caught.value.position == position
    assert caught.value.expected


WITHIN = [
    "1" * 400,
    " " * 19_999 + "1",
    "0." + "0" * 398 + "1",
    f"({summed(62)})^2",
    summed(2000),
    "(" * 50 + "1" + ")" * 50,
    "-" * 19_999 + "1",
    "+".join(["1"] * 10_000),
    "*".join(["1"] * 10_000),
    "/".join(["1"] * 10_000),
    "+".join(["a"] * 10_000),
    "2^64",
    "(a+b)^64",
    "a^64*b^64",
    "sqrt(1000000000000000000)",
    "sqrt(999999999999999999/1000000000000000000)",
    "sqrt(999999999999999989/999999999999999967)",
    "sqrt(999999999999999989)*sqrt(999999999999999967)",
    "10^64*10^64*10^64*10^64*10^64*10^64*10^15",
    "1/(" + "+".join(f"sqrt({p})" for p in PRIMES[:6]) + ")",
    "1/(i+" + "+".join(f"sqrt({p})" for p in PRIMES[:6]) + ")",
    "*".join(f"(a+sqrt({p}))" for p in PRIMES[:6]),
    "+".join(f"{k}*sqrt({2 * k * k})" for k in range(1, 900)),
    "+".join(["1/(1+sqrt(2)+sqrt(3)+sqrt(5))"] * 300),
    "+".join(["sqrt(999999999999999989)"] * 800),
]


@pytest.mark.parametrize("text", WITHIN, ids=range(len(WITHIN)))
def test_read_within_the_limits_and_written_readably(text):
    began = time.process_time()
    value = parse_number(text, NAMES)
    assert time.process_time() - began < 0.8
    written = write_number(value, MANY)
    assert len(written) <= limits.MAX_CHARACTERS
    assert parse_number(written, NAMES) == value
    assert write_number(parse_number(written, NAMES), MANY) == written


def test_hardest_work_allowed_is_short():
    worst = f"({summed(30)})*({summed(30, 'a*x{0}')})" + "+(1/3*a+b)^40" * 4
    began = time.process_time()
    parse_number(worst, NAMES)
    assert time.process_time() - began < 0.8


@pytest.mark.parametrize("text", ["1/z^65", "z^-65", "z^-60/z^5", "1/z^(1/25)", "z^(64/25)", f"({summed(12)})^64/z"])
def test_limits_of_polynomials_in_the_coordinate(text):
    began = time.process_time()
    with pytest.raises(NumberFault):
        parse_laurent(text, NAMES)
    assert time.process_time() - began < 0.5
    assert parse_laurent("1/z^64+z^(-1/24)+z^60/z^61", ())


def test_a_budget_shared_by_many_numbers_bounds_them_together():
    budget = Budget(20_000)
    parse_number("(a+b)^64", NAMES, budget)
    with pytest.raises(NumberFault, match="elementary products"):
        for _ in range(100):
            parse_number("(a+b)^64", NAMES, budget)
    assert parse_number("1", NAMES, Budget(1)) == 1


def test_a_refusal_costs_the_budget_nothing():
    budget = Budget(10)
    with pytest.raises(limits.OverLimit):
        budget.spend(11)
    assert budget.left == 10
