"""Matrix kernels: identities that any exact linear algebra satisfies, over every kind of field."""

import random

import pytest
import sympy

from app.exact.field import MAX_DEGREE, FieldTooLarge, field_of
from app.exact.matrix import NotTheRank
from app.exact.modular import algebra_dimension, modular_rank, specialisation
from app.exact.number import parse_number
from app.exact.quotient import Quotient
from app.exact.quotient_text import write_quotient
from app.exact.value import Value

FIELDS = {
    "rationals": ((), ()),
    "gaussian": ((), ("i",)),
    "two roots": ((), ("sqrt(2)", "i")),
    "symbols": (("a", "b"), ()),
    "symbols and i": (("a", "b"), ("i",)),
    "symbols and roots": (("a",), ("sqrt(3)", "i*sqrt(2)")),
}


def random_rows(source, symbols, roots, height, width):
    def entry():
        value = Value.rational(source.randint(-2, 2))
        for text in (*symbols, *roots):
            value = value + parse_number(text, symbols) * source.randint(-2, 2)
        below = Value.rational(source.randint(1, 3))
        if symbols and source.random() < 0.3:
            below = below + Value.symbol(symbols[0])
        return Quotient(value, below)

    return [[entry() for _ in range(width)] for _ in range(height)]


@pytest.mark.parametrize("name", FIELDS)
@pytest.mark.parametrize("seed", range(3))
def test_factor_kernel_and_inverse(name, seed):
    symbols, roots = FIELDS[name]
    source = random.Random(f"{name}{seed}")
    rows = random_rows(source, symbols, roots, 3, 4)
    rows.append([x * 2 - y for x, y in zip(rows[0], rows[2], strict=True)])
    field = field_of([entry for row in rows for entry in row] + [Quotient.of(parse_number(r)) for r in roots])
    matrix = field.matrix(rows)
    assert matrix.entries() == rows
    assert matrix.rank() == 3
    left, right, section = matrix.factor(3)
    assert (left @ right - matrix).is_zero
    assert (right @ section - matrix.scalar(3, 1)).is_zero
    kernel = matrix.kernel(1)
    assert (matrix @ kernel).is_zero and not kernel.is_zero
    shifted = matrix.shifted(17)
    assert (shifted @ shifted.inverse() - matrix.scalar(4, 1)).is_zero
    with pytest.raises(NotTheRank):
        matrix.inverse()
    with pytest.raises(NotTheRank):
        matrix.factor(4)
    with pytest.raises(NotTheRank):
        matrix.kernel(2)


@pytest.mark.parametrize("name", FIELDS)
def test_products_and_sums_entry_by_entry(name):
    symbols, roots = FIELDS[name]
    source = random.Random(name)
    first, second = random_rows(source, symbols, roots, 2, 3), random_rows(source, symbols, roots, 3, 2)
    field = field_of([entry for row in (*first, *second) for entry in row])
    product = field.matrix(first) @ field.matrix(second)
    for i in range(2):
        for j in range(2):
            expected = first[i][0] * second[0][j] + first[i][1] * second[1][j] + first[i][2] * second[2][j]
            assert product.entries()[i][j] == expected
    doubled = field.matrix(first) + field.matrix(first)
    assert doubled.entries() == [[entry * 2 for entry in row] for row in first]
    assert field.matrix(first).times(Quotient.of(2)).entries() == doubled.entries()


@pytest.mark.parametrize("name", ["rationals", "symbols"])
def test_degenerate_shapes(name):
    symbols, _ = FIELDS[name]
    field = field_of([Quotient.of(Value.symbol(s)) for s in symbols])
    empty = field.matrix([], 3)
    assert empty.rank() == 0
    assert empty.kernel(3).entries() == field.matrix([[1, 0, 0], [0, 1, 0], [0, 0, 1]]).entries()
    zero = field.matrix([[0, 0], [0, 0]])
    left, right, _ = zero.factor(0)
    assert (left.height, left.width, right.height, right.width) == (2, 0, 0, 2)
    assert (left @ right).is_zero
    assert field.matrix([[5]]).inverse().entries() == [[Quotient.of(parse_number("1/5"))]]


def test_elimination_with_symbols_against_sympy():
    source = random.Random(5)
    rows = random_rows(source, ("a", "b"), (), 4, 4)
    field = field_of([entry for row in rows for entry in row])
    theirs = sympy.Matrix(4, 4, [sympy.sympify(write_quotient(e).replace("^", "**")) for row in rows for e in row])
    inverse = theirs.inv()
    for i, row in enumerate(field.matrix(rows).inverse().entries()):
        for j, entry in enumerate(row):
            ours = sympy.sympify(write_quotient(entry).replace("^", "**"))
            assert sympy.cancel(ours - inverse[i, j]) == 0


def test_too_many_roots_are_refused():
    texts = ["i", "sqrt(2)", "sqrt(3)", "sqrt(5)", "sqrt(7)"]
    with pytest.raises(FieldTooLarge, match=str(MAX_DEGREE)):
        field_of(Quotient.of(parse_number(text)) for text in texts)


def test_specialisation_is_a_homomorphism_and_bounds_ranks():
    symbols, roots = FIELDS["symbols and roots"]
    source = random.Random(11)
    rows = random_rows(source, symbols, roots, 3, 3)
    field = field_of([entry for row in rows for entry in row])
    chosen = specialisation(field.symbols, field.radicals, 3)
    x, y = rows[0][0], rows[1][1]
    assert chosen.quotient(x * y) == chosen.quotient(x) * chosen.quotient(y) % chosen.prime
    assert chosen.quotient(x + y) == (chosen.quotient(x) + chosen.quotient(y)) % chosen.prime
    assert modular_rank(chosen.matrix(rows), chosen.prime) == field.matrix(rows).rank()


def test_dimension_of_generated_algebras():
    prime = 2**61 - 1
    unit = [[0, 1, 0], [0, 0, 1], [1, 0, 0]]
    diagonal = [[1, 0, 0], [0, 2, 0], [0, 0, 4]]
    upper = [[1, 1, 1], [0, 2, 1], [0, 0, 3]]
    assert algebra_dimension([unit], prime) == 3
    assert algebra_dimension([unit, diagonal], prime) == 9
    assert algebra_dimension([diagonal, upper], prime) == 6


def test_diagonal_gauge_is_a_conjugation_and_shortens():
    from app.exact.diagonal_gauge import diagonally_shortened

    a, b = Value.symbol("a"), Value.symbol("b")
    long = (a + b) * (a - b * 3) * (a * 2 + 1)
    field = field_of([Quotient.of(a), Quotient.of(b)])
    first = field.matrix([[a, long, long * b], [1, b, 0], [1, a + b, 3]])
    second = field.matrix([[0, long, 0], [1, b, 1], [0, 0, a]])
    moved = diagonally_shortened([first, second])

    def terms(matrices):
        return sum(len(e.numerator.terms) + len(e.denominator.terms) for m in matrices for r in m.entries() for e in r)

    assert terms(moved) < terms([first, second])
    # one diagonal D for both: D A = A' D, where the ratios d_i / d_0 are read off the second column and third row
    before, after = first.entries(), moved[0].entries()
    ratios = [Quotient.of(1), before[0][1] / after[0][1], before[0][2] / after[0][2]]
    diagonal = field.matrix([[ratios[i] if i == j else 0 for j in range(3)] for i in range(3)])
    for old, new in zip([first, second], moved, strict=True):
        assert (diagonal @ old - new @ diagonal).is_zero


def test_diagonal_gauge_leaves_other_matrices_alone():
    from app.exact.diagonal_gauge import diagonally_shortened

    field = field_of([Quotient.of(Value.symbol("a") * parse_number("i"))])
    matrix = field.matrix([[Value.symbol("a"), 1], [0, parse_number("i")]])
    assert diagonally_shortened([matrix])[0].entries() == matrix.entries()
    assert diagonally_shortened([]) == []
