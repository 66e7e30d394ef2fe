"""Value: normal form, equality, hashing, pickling, ring operations on named cases."""

import pickle
import subprocess
import sys
from fractions import Fraction

import pytest

from app.exact.number import parse_number
from app.exact.value import IMAGINARY_UNIT, ONE, ZERO, Value, modulo_one, total

A, B = Value.symbol("a"), Value.symbol("b")
UNIT = IMAGINARY_UNIT
ROOT2 = Value.from_terms([(((), 2), 1)])
ROOT3 = Value.from_terms([(((), 3), 1)])
ROOT6 = Value.from_terms([(((), 6), 1)])


def test_roots_multiply_as_they_should():
    assert ROOT2 * ROOT2 == 2
    assert ROOT2 * ROOT3 == ROOT6
    assert ROOT6 * ROOT2 == ROOT3 * 2
    assert UNIT * UNIT == -1
    assert (UNIT * ROOT2) * (UNIT * ROOT3) == -ROOT6
    assert (UNIT * ROOT2) * ROOT2 == UNIT * 2
    assert (UNIT * ROOT2) ** 2 == -2
    assert (ONE + UNIT) ** 2 - UNIT * 2 == 0


def test_integral_coefficients_are_ints():
    half = Value.rational(Fraction(1, 2))
    for value in (half + half, half * 2, half * half * 4, Value.rational(Fraction(4, 2)), (half * A + half * A)):
        assert all(type(c) is int for c in value.terms.values())
    assert type(next(iter(half.terms.values()))) is Fraction
    assert type(next(iter(Value.rational(True).terms.values()))) is int


def test_zero_terms_are_dropped():
    assert (A - A).terms == {}
    assert (A * 0).terms == {}
    assert (A * B - B * A).terms == {}
    assert ((A + ROOT2) * (A - ROOT2) - A * A).terms == {((), 1): -2}
    assert not ZERO and ONE and not Value.rational(0)


@pytest.mark.parametrize(
    ("value", "constant", "rational", "integer", "number"),
    [
        (ZERO, True, True, True, Fraction(0)),
        (ONE * 7, True, True, True, Fraction(7)),
        (Value.rational(Fraction(-2, 3)), True, True, False, Fraction(-2, 3)),
        (UNIT, True, False, False, None),
        (ROOT2 + 1, True, False, False, None),
        (A, False, False, False, None),
        (A + 1, False, False, False, None),
        (A - A + 3, True, True, True, Fraction(3)),
        (ROOT2 * ROOT2, True, True, True, Fraction(2)),
    ],
)
def test_kinds_of_value(value, constant, rational, integer, number):
    assert (value.is_constant, value.is_rational, value.is_integer) == (constant, rational, integer)
    assert value.as_rational() == number
    assert value.is_zero == (number == 0 and number is not None)


def test_symbols_and_radicals():
    value = A * B + ROOT2 * UNIT + 1
    assert value.symbols() == {"a", "b"}
    assert value.radicals() == {-2}
    assert ZERO.symbols() == frozenset() == ZERO.radicals()


def test_scalars_on_both_sides():
    assert 2 * A == A * 2 == A + A
    assert Fraction(1, 2) * A == A / 2
    assert 1 - A == -(A - 1)
    assert 1 + A == A + 1
    assert +A is A
    assert A * 1 is A and (A * -1) == -A


def test_foreign_types_are_not_mixed_in():
    for operation in (lambda: A + 0.5, lambda: A * 0.5, lambda: A - "a", lambda: A / 0.5, lambda: A**0.5):
        with pytest.raises(TypeError):
            operation()
    assert A != 0.5 and A != "a"


def test_equal_numbers_hash_alike():
    assert hash(Value.rational(3)) == hash(3) and Value.rational(3) == 3
    assert hash(Value.rational(Fraction(1, 3))) == hash(Fraction(1, 3))
    assert {ZERO: "x"}[0] == "x"  # type: ignore[index]
    assert hash(A + B + 1) == hash(1 + B + A)
    assert len({A * B, B * A, (A + B) ** 2 - A**2 - B**2 - A * B}) == 1


def test_terms_are_read_only():
    with pytest.raises(TypeError):
        A.terms["x"] = 1  # type: ignore[index]


def test_pickle_in_a_process_with_other_string_hashes():
    value = parse_number("a^2*sqrt(2)-1/3*i*b+5", {"a", "b"})
    hash(value)
    code = (
        "import pickle, sys; from app.exact.number import parse_number;"
        "v = pickle.loads(bytes.fromhex(sys.argv[1]));"
        "w = parse_number('a^2*sqrt(2)-1/3*i*b+5', {'a', 'b'});"
        "assert v == w and hash(v) == hash(w) and len({v, w}) == 1"
    )
    for seed in ("1", "2"):
        subprocess.run(
            [sys.executable, "-c", code, pickle.dumps(value).hex()],
            check=True,
            env={"PYTHONHASHSEED": seed, "PATH": ""},
        )


def test_powers():
    assert (A + 1) ** 0 == ZERO**0 == 1
    assert (A + B) ** 3 == A**3 + 3 * A**2 * B + 3 * A * B**2 + B**3
    with pytest.raises(ValueError, match="negative"):
        A**-1


@pytest.mark.parametrize(
    "text",
    ["2", "-3/7", "i", "sqrt(2)", "i*sqrt(6)", "1+i", "1+sqrt(2)", "sqrt(2)+sqrt(3)", "sqrt(6)+sqrt(10)+sqrt(15)",
     "1+i*sqrt(3)", "sqrt(2)+sqrt(3)+i*sqrt(5)", "2/3-sqrt(6)/5+i*sqrt(10)", "sqrt(2)+sqrt(3)+sqrt(5)+sqrt(7)+i",
     "sqrt(2)+sqrt(3)+sqrt(5)+sqrt(7)+sqrt(11)+sqrt(13)"],
)  # fmt: skip
def test_inverse(text):
    value = parse_number(text)
    assert value * value.inverse() == 1
    assert ONE / value == value.inverse()


def test_what_has_no_inverse():
    with pytest.raises(ZeroDivisionError):
        ZERO.inverse()
    with pytest.raises(ZeroDivisionError):
        A / 0
    for value in (A, A + 1, A * ROOT2):
        with pytest.raises(ValueError, match="constants"):
            value.inverse()


def test_substitution_is_simultaneous():
    value = A**2 + B * ROOT2 + 1
    assert value.substitute({"a": B, "b": A}) == B**2 + A * ROOT2 + 1
    assert value.substitute({"a": ROOT2, "b": -ROOT2}) == 1
    assert value.substitute({}) == value
    assert value.substitute({"c": A}) == value
    assert (A - B).substitute({"a": B}) == 0


def test_total():
    assert total([]) == 0
    assert total([A, B, -A, ONE, ROOT2]) == B + 1 + ROOT2
    assert total(A for _ in range(5)) == 5 * A
    assert Value.symbol("a") == A  # summing leaves the summands alone


@pytest.mark.parametrize(
    ("value", "reduced"),
    [(ONE, ZERO), (Value.rational(Fraction(-1, 3)), Value.rational(Fraction(2, 3))), (A + 5, A),
     (A - 1 + ROOT2, A + ROOT2),
     (Value.rational(Fraction(7, 2)) + UNIT, Value.rational(Fraction(1, 2)) + UNIT), (ZERO, ZERO)],
)  # fmt: skip
def test_modulo_one(value, reduced):
    assert modulo_one(value) == reduced


def test_representation_shows_the_number():
    assert repr(A * 2 - 1) == "Value(2*a-1)"
    assert repr(Value.from_terms([(((), 10**40 + 1), 1)])) == f"Value(sqrt({10**40 + 1}))"
