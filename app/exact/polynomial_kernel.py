"""Between exact values and flint's polynomials: the only place where one becomes the other.

flint's values do not pickle and name their variables, so they stay inside the kernels of this room: matrices of
rational functions, greatest common divisors.  A context is chosen by the number of variables alone, which keeps flint's
cache of contexts small; the names stay with ``Variables``.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property
from math import lcm
from typing import TYPE_CHECKING

from app.exact.value import Key, Monomial, Radical, Rational, Value

if TYPE_CHECKING:
    from flint import fmpz_mpoly, fmpz_mpoly_ctx


@dataclass(frozen=True)
class Variables:
    """Symbols in a fixed order, and the ring of integer polynomials in them."""

    names: tuple[str, ...]

    @cached_property
    def context(self) -> "fmpz_mpoly_ctx":
        """flint's ring for this number of variables."""
        from flint import Ordering, fmpz_mpoly_ctx

        return fmpz_mpoly_ctx.get(tuple(f"x{k}" for k in range(max(1, len(self.names)))), Ordering.degrevlex)

    @cached_property
    def _places(self) -> dict[str, int]:
        return {name: place for place, name in enumerate(self.names)}

    def polynomial(self, terms: Iterable[tuple[Monomial, Rational]], scale: int) -> "fmpz_mpoly":
        """``scale`` times the sum of the terms; the scale must clear their denominators."""
        width = max(1, len(self.names))
        places = self._places
        collected: dict[tuple[int, ...], int] = {}
        for monomial, coefficient in terms:
            powers = [0] * width
            for name, power in monomial:
                powers[places[name]] = int(power)
            collected[tuple(powers)] = int(coefficient * scale)
        return self.context.from_dict(collected)

    def components(self, value: Value) -> tuple[dict[Radical, "fmpz_mpoly"], int]:
        """The value as radical → integer polynomial, all over one positive denominator."""
        scale = common_denominator(value)
        parts: dict[Radical, list[tuple[Monomial, Rational]]] = {}
        for (monomial, radical), coefficient in value.terms.items():
            parts.setdefault(radical, []).append((monomial, coefficient))
        return {radical: self.polynomial(terms, scale) for radical, terms in parts.items()}, scale

    def value(self, components: Mapping[Radical, "fmpz_mpoly"]) -> Value:
        """The value with these polynomials beside its radicals."""
        names = self.names
        found: dict[Key, Rational] = {}
        for radical, polynomial in components.items():
            for powers, coefficient in polynomial.to_dict().items():
                monomial = tuple((name, int(power)) for name, power in zip(names, powers, strict=False) if power)
                found[tuple(sorted(monomial)), radical] = int(coefficient)
        return Value(found)


def common_denominator(value: Value) -> int:
    """The least common denominator of the coefficients."""
    return lcm(*(coefficient.denominator for coefficient in value.terms.values()))


def variables_of(*values: Value) -> Variables:
    """The symbols that occur in the values, by name."""
    return Variables(tuple(sorted(frozenset().union(*(value.symbols() for value in values)))))
