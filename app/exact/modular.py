"""Exact values specialised to a prime field: certificates from below.

Symbols become integers and square roots become roots modulo a prime p.  This is a homomorphism from the values whose
denominators are not divisible by p, so *a rank modulo p is at most the rank over the field*: a large rank found here
proves a large rank for generic values of the symbols.  It proves nothing in the other direction.
"""

import random
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from app.exact.quotient import Quotient
from app.exact.value import Radical, Value

if TYPE_CHECKING:
    from flint import nmod_mat

_SMALLEST_PRIME = 2**61
ModularMatrix = list[list[int]]


class NoSpecialisation(ArithmeticError):
    """A denominator vanishes under this specialisation."""


@dataclass(frozen=True)
class Specialisation:
    """A prime, integers for the symbols, and roots modulo the prime for the radicals."""

    prime: int
    symbols: Mapping[str, int]
    roots: Mapping[Radical, int]

    @cached_property
    def _powers(self) -> dict[tuple[str, int], int]:
        return {}

    def value(self, value: Value) -> int:
        """The image of a value."""
        prime, powers = self.prime, self._powers
        result = 0
        for (monomial, radical), coefficient in value.terms.items():
            term = coefficient.numerator
            if coefficient.denominator != 1:
                term *= self._inverse(coefficient.denominator)
            if radical != 1:
                term *= self.roots[radical]
            for name, power in monomial:
                key = (name, int(power))
                if key not in powers:
                    powers[key] = pow(self.symbols[name], int(power), prime)
                term = term * powers[key] % prime
            result += term
        return result % prime

    def quotient(self, number: Quotient) -> int:
        """The image of a quotient; raises NoSpecialisation where its denominator goes to 0."""
        above = self.value(number.numerator)
        if number.is_polynomial:
            return above
        return above * self._inverse(self.value(number.denominator)) % self.prime

    def matrix(self, rows: Sequence[Sequence[Quotient]]) -> ModularMatrix:
        """The image of a matrix."""
        return [[self.quotient(entry) for entry in row] for row in rows]

    def _inverse(self, number: int) -> int:
        if number % self.prime == 0:
            raise NoSpecialisation("A denominator vanishes under this specialisation.")
        return pow(number, -1, self.prime)


def specialisation(symbols: Iterable[str], radicals: Iterable[Radical], seed: int) -> Specialisation:
    """Integers between 2 and 10^6 for the symbols, and a prime over 2^61 where all the radicals have roots.

    Deterministic for a seed.  Cost: about 2^k candidates of primes for k independent square roots.
    """
    from flint import fmpz

    source = random.Random(seed)
    wanted = sorted(set(radicals) - {1})
    generators = sorted({abs(radical) for radical in wanted} | ({-1} if any(r < 0 for r in wanted) else set()))
    prime = _SMALLEST_PRIME + source.randrange(2**40)
    while True:
        prime += 1
        if not fmpz(prime).is_prime():
            continue
        if all(pow(d % prime, (prime - 1) // 2, prime) == 1 for d in generators if d != 1):
            break
    of = {d: int(fmpz(d).sqrtmod(prime)) if d != 1 else 1 for d in generators}
    roots = {r: of[abs(r)] * (of[-1] if r < 0 else 1) % prime if abs(r) != 1 else of[-1] for r in wanted}
    names = sorted(set(symbols))
    return Specialisation(prime, {name: source.randint(2, 10**6) for name in names}, roots)


def modular_rank(rows: ModularMatrix, prime: int) -> int:
    """Rank modulo a prime."""
    if not rows or not rows[0]:
        return 0
    from flint import nmod_mat

    return int(nmod_mat(len(rows), len(rows[0]), [entry for row in rows for entry in row], prime).rank())


def algebra_dimension(matrices: Sequence[ModularMatrix], prime: int) -> int:
    """Dimension of the algebra with 1 that n × n matrices generate modulo a prime.

    Two random combinations of the matrices are tried first: if they generate everything, so do the matrices, and the
    words in two letters reach n² after about 2·log₂ n rounds.  Only if not, all the matrices are letters.
    Cost: each round one elimination of a matrix with n² columns and a few n² rows; at most n² rounds.
    """
    size = len(matrices[0])
    if len(matrices) > 2:
        source = random.Random(size)
        pair = [_combination(matrices, [source.randrange(1, prime) for _ in matrices], prime) for _ in range(2)]
        if _spanned(pair, prime) == size * size:
            return size * size
    return _spanned(matrices, prime)


def _combination(matrices: Sequence[ModularMatrix], weights: Sequence[int], prime: int) -> ModularMatrix:
    size = range(len(matrices[0]))
    return [[sum(w * m[i][j] for w, m in zip(weights, matrices, strict=True)) % prime for j in size] for i in size]


def _spanned(matrices: Sequence[ModularMatrix], prime: int) -> int:
    """Dimension of the span of all words in the matrices, one letter longer in every round."""
    from flint import nmod_mat

    size = len(matrices[0])
    letters = [nmod_mat(size, size, [entry for row in m for entry in row], prime) for m in matrices]
    basis = nmod_mat(1, size * size, [int(i == j) for i in range(size) for j in range(size)], prime)
    while True:
        height = basis.nrows()
        # rows of length n² are n × n matrices one after the other, so all products with a letter are one product
        stacked = nmod_mat(height * size, size, basis.entries(), prime)
        longer = list(basis.entries())
        for letter in letters:
            longer += (stacked * letter).entries()
        reduced, rank = nmod_mat(len(longer) // (size * size), size * size, longer, prime).rref()
        if rank == height:
            return int(rank)
        basis = _first_rows(reduced, rank, size * size, prime)
        if rank == size * size:
            return int(rank)


def _first_rows(matrix: "nmod_mat", rows: int, width: int, prime: int) -> "nmod_mat":
    from flint import nmod_mat

    return nmod_mat(rows, width, matrix.entries()[: rows * width], prime)
