"""Linear relations over Q and Z between exact values.

Values are written over the basis of pairs (monomial, square root), which are linearly independent over Q (see
``value``).  A relation between values then is a relation between the columns of a rational matrix with one row
for each basis element, so every relation found is proved and none is missed.
"""

from collections.abc import Sequence
from fractions import Fraction
from math import lcm

from app.exact.value import Value


def rational_rows(values: Sequence[Value]) -> tuple[tuple[Fraction, ...], ...]:
    """The coordinates of the values: one row for each basis element that occurs, one column for each value.

    Σ c_i v_i = 0 with rational c exactly when every row vanishes on c.  No rows when all values are zero.
    Rows stand in a fixed order (by monomial, then real roots before imaginary ones, by size).
    Cost: rows times values.

    >>> rational_rows([Value.rational(2), Value.symbol("a"), Value.rational(0)])
    ((Fraction(2, 1), Fraction(0, 1), Fraction(0, 1)), (Fraction(0, 1), Fraction(1, 1), Fraction(0, 1)))
    """
    keys = {key for value in values for key in value.terms}
    ordered = sorted(keys, key=lambda key: (key[0], key[1] < 0, abs(key[1])))
    maps = [value.terms for value in values]
    return tuple(tuple(Fraction(terms.get(key, 0)) for terms in maps) for key in ordered)


def integer_relations(values: Sequence[Value]) -> tuple[tuple[int, ...], ...]:
    """A basis of the lattice of all integer vectors n with Σ n_i v_i = 0.

    The vectors are reduced (short), and the first entry of each that is not 0 is positive.  As many vectors as
    there are values, minus the rank of ``rational_rows``.
    Method: row operations over Z on [Aᵀ | 1] until Aᵀ is in Hermite form; the rows whose left part vanished carry
    on the right a basis of the kernel, because the operations are invertible over Z.  Then lattice reduction
    [Lenstra, Lenstra and Lovász 1982].
    """
    from flint import fmpz_mat

    rows = [_cleared(row) for row in rational_rows(values)]
    count, height = len(values), len(rows)
    if not count:
        return ()
    stacked = [[row[k] for row in rows] + [int(k == place) for place in range(count)] for k in range(count)]
    hermite = fmpz_mat(stacked).hnf()
    kernel = [[int(x) for x in row[height:]] for row in hermite.tolist() if not any(row[:height])]
    if not kernel:
        return ()
    reduced = fmpz_mat(kernel).lll()
    return tuple(_oriented([int(x) for x in row]) for row in reduced.tolist())


def _cleared(row: tuple[Fraction, ...]) -> list[int]:
    """The row times its common denominator."""
    common = lcm(*(entry.denominator for entry in row))
    return [int(entry * common) for entry in row]


def _oriented(vector: list[int]) -> tuple[int, ...]:
    """The vector or its negative, whichever begins positive."""
    first = next(entry for entry in vector if entry)
    return tuple(vector) if first > 0 else tuple(-entry for entry in vector)
