"""Values for free symbols: rational, deterministic by seed, in general position.

A symbol gets a fraction whose denominator is a prime of its own, between 11 and a few hundred: no two differ by an
integer, no small multiple of one is an integer, and a linear relation with small coefficients between them is
impossible, since the primes do not cancel.  Sizes stay near 1, so that floating matrices stay well scaled.
"""

import random
from collections.abc import Sequence
from fractions import Fraction

from app.exact.value import Value


def generic_values(symbols: Sequence[str], seed: int = 0) -> dict[str, Value]:
    """A value for every symbol, in absolute value between about 1/5 and 2.

    The same symbols and seed give the same values.  Identities between polynomials in the symbols (the Fuchs relation)
    stay true under any values.
    """
    source = random.Random(f"{seed}:{len(symbols)}")
    primes = _primes(len(symbols))
    source.shuffle(primes)
    found = {}
    for name, prime in zip(symbols, primes, strict=True):
        while True:
            numerator = source.randint(prime // 5 + 1, 2 * prime)
            if numerator % prime:
                break
        found[name] = Value.rational(Fraction(numerator * source.choice((1, -1)), prime))
    return found


def _primes(count: int) -> list[int]:
    """The first primes from 11 on."""
    found: list[int] = []
    candidate = 11
    while len(found) < count:
        if all(candidate % divisor for divisor in range(2, int(candidate**0.5) + 1)):
            found.append(candidate)
        candidate += 2
    return found
