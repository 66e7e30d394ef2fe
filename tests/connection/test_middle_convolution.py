"""Middle convolution: against the block matrices of Dettweiler and Reiter, its inverse, and how data move.

Everything is done over the rationals, where every rank is exact.
"""

import random
from fractions import Fraction

import pytest

from app.connection.middle_convolution import middle_convolution
from app.connection.realisation import realise
from app.exact.field import Field
from app.exact.modular import algebra_dimension
from tests.connection.conjugation import conjugator

RATIONALS = Field((), (1,))


def matrix(rows):
    return RATIONALS.matrix([list(row) for row in rows])


def numbers(one):
    return [[entry.as_rational() for entry in row] for row in one.entries()]


def random_matrix(source, size, bound=3):
    return matrix([[source.randint(-bound, bound) for _ in range(size)] for _ in range(size)])


def random_low_rank(source, size, rank):
    left = matrix([[source.randint(-2, 2) for _ in range(rank)] for _ in range(size)])
    right = matrix([[source.randint(-2, 2) for _ in range(size)] for _ in range(rank)])
    return left @ right


def generated_dimension(parts):
    prime = 2**61 - 1
    letters = [
        [[int(x.numerator * pow(x.denominator, -1, prime)) % prime for x in row] for row in numbers(m)]
        for part in parts
        for m in part
    ]
    return algebra_dimension(letters, prime)


def dettweiler_reiter(residues, mu):
    """mc_μ by its definition: B_i on V^p, and the quotient by K + L.  Written without the program's realisations.

    B_i has A_1, …, A_i + μ, …, A_p in its i-th block row and 0 elsewhere; K = ⊕ ker A_i, L = ∩ ker B_i = ker ΣB_i.
    """
    count, size = len(residues), residues[0].height
    blocks = []
    for i in range(count):
        rows = [residues[0].zeros(size, size * count) for _ in range(count)]
        rows[i] = (
            residues[0]
            .shifted(mu if i == 0 else 0)
            .beside([residues[j].shifted(mu if i == j else 0) for j in range(1, count)])
        )
        blocks.append(rows[0].above(rows[1:]))
    kernels = []
    for i, residue in enumerate(residues):
        kernel = residue.kernel()
        pieces = [kernel if j == i else kernel.zeros(size, kernel.width) for j in range(count)]
        kernels.append(pieces[0].above(pieces[1:]))
    whole = blocks[0]
    for block in blocks[1:]:
        whole = whole + block
    subspace = kernels[0].beside([*kernels[1:], whole.kernel()])
    basis, _, _ = subspace.factor()
    # complete the basis of K + L by unit vectors, and read the action on the quotient
    completed, _, _ = basis.beside([whole.scalar(size * count, 1)]).factor(size * count)
    inverse = completed.inverse()
    rest = range(basis.width, size * count)
    return [(inverse @ block @ completed).take(rest, rest) for block in blocks]


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("mu", [1, -2])
def test_log_poles_against_the_definition(seed, mu):
    source = random.Random(seed)
    size = 2 + seed % 2
    residues = [random_low_rank(source, size, 1 + source.randrange(size)) for _ in range(3)]
    if generated_dimension([[r] for r in residues]) < size * size:
        pytest.skip("a reducible tuple")
    ours = middle_convolution([[residue] for residue in residues], mu)
    theirs = dettweiler_reiter(residues, mu)
    assert ours[0][0].height == theirs[0].height
    assert conjugator(ours, [[m] for m in theirs]) is not None


def random_irregular(source, size):
    """A tuple with a pole of order 3, one of order 2 and a log pole, general enough to be irreducible."""
    order_three = [random_matrix(source, size), random_matrix(source, size), random_low_rank(source, size, size - 1)]
    order_two = [random_matrix(source, size), random_low_rank(source, size, 1)]
    return [order_three, order_two, [random_low_rank(source, size, 1)]]


@pytest.mark.parametrize("seed", range(6))
def test_inverse_up_to_conjugation(seed):
    source = random.Random(100 + seed)
    parts = random_irregular(source, 2 + seed % 2)
    assert generated_dimension(parts) == parts[0][0].height ** 2
    mu = Fraction(source.randint(1, 5), 3)
    there = middle_convolution(parts, mu)
    assert there[0][0].height != parts[0][0].height
    back = middle_convolution(there, -mu)
    found = conjugator(parts, back)
    assert found is not None
    for part, other in zip(parts, back, strict=True):
        for a, b in zip(part, other, strict=True):
            assert (found @ a - b @ found).is_zero


@pytest.mark.parametrize("seed", range(4))
def test_zero_is_the_identity(seed):
    parts = random_irregular(random.Random(200 + seed), 2 + seed % 2)
    assert conjugator(parts, middle_convolution(parts, 0)) is not None


@pytest.mark.parametrize("seed", range(4))
def test_irreducible_stays_irreducible(seed):
    parts = random_irregular(random.Random(300 + seed), 2)
    after = middle_convolution(parts, Fraction(7, 5))
    assert generated_dimension(after) == after[0][0].height ** 2


@pytest.mark.parametrize("seed", range(4))
def test_realisations(seed):
    source = random.Random(400 + seed)
    for part in random_irregular(source, 3):
        realised = realise(part)
        assert all((a - b).is_zero for a, b in zip(realised.coefficients(), part, strict=True))
        power = realised.nilpotent
        for _ in range(realised.order):
            power = power @ realised.nilpotent
        assert power.is_zero
        # minimal: what Q N^k and N^k P span is everything
        columns, rows = [realised.right], [realised.left]
        for _ in range(realised.order):
            columns.append(realised.nilpotent @ columns[-1])
            rows.append(rows[-1] @ realised.nilpotent)
        assert columns[0].beside(columns[1:]).rank() == realised.nilpotent.height
        assert rows[0].above(rows[1:]).rank() == realised.nilpotent.height


def eigenvalue_multiplicity(one, value):
    return one.height - one.shifted(-value).rank()


def test_eigenvalues_of_log_poles_move_by_mu():
    """Rank-1 residues with traces a, b, c: rank 3, residues (a + μ, 0, 0) …, infinity −μ, −μ, −(a + b + c + μ)."""
    mu = Fraction(2, 7)
    after = middle_convolution([[matrix([[Fraction(1, k)]])] for k in (2, 3, 5)], mu)
    assert after[0][0].height == 3
    for k, (residue,) in zip((2, 3, 5), after, strict=True):
        assert eigenvalue_multiplicity(residue, Fraction(1, k) + mu) == 1
        assert eigenvalue_multiplicity(residue, 0) == 2
    infinity = -(after[0][0] + after[1][0] + after[2][0])
    assert eigenvalue_multiplicity(infinity, -mu) == 2
    assert eigenvalue_multiplicity(infinity, -(Fraction(31, 30) + mu)) == 1


def test_exponents_stay_and_eigenvalues_move_by_slope_plus_one():
    """One pole of order 2 with exponents 0 and 1/z, and two log poles with a chosen eigenvalue 0.

    Residues add up to c·1; after mc with −c they add up to −c·1, and the eigenvalue beside the exponent of slope 1 has
    moved by 2μ.
    """
    from app.connection.construction import construct
    from app.connection.stages import descend
    from app.local.shorthand import problem_from_shorthand

    problem = problem_from_shorthand("(2)(1),21,21")
    descent = descend(problem)
    step = descent.steps[0]
    mu = -step.parameter
    before = {block.exponent: block.slots for block in step.upper.poles[0]}
    for block in step.lower.poles[0]:
        if block.exponent:
            original = next(exponent for exponent in before if exponent != step.choices[0].exponent)
            shift = block.slots[0].value - (before[original][0].value - step.choices[0].value)
            assert shift == mu * 2
    # that the matrices really have these data is what the record of a construction checks
    assert construct(problem).verified
