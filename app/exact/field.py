"""A field of entries, and the choice of the kernel for matrices over it.

The field is Q(symbols) with finitely many square roots adjoined (i is one of them).  An element a = Σ a_d √d of a field
of degree D over Q(symbols) is kept inside matrices as the D × D block of its multiplication, so that matrices over
the field become matrices over Q or over Q(symbols): products, sums and *reduced echelon forms* go over into
each other (the blocks of a reduced echelon form are again one, and it is unique).  One block elimination by a
compiled kernel beats arithmetic in the number field by far.

    no symbols    ``rational_matrix``: flint's matrices of rationals
    symbols       ``function_matrix``: fraction-free elimination over flint's polynomials
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING

from app.exact.polynomial_kernel import Variables
from app.exact.quotient import Quotient, quotient
from app.exact.value import Key, Radical, Rational, Value, multiply_radicals

if TYPE_CHECKING:
    from app.exact.matrix import ExactMatrix

MAX_DEGREE = 16
"""Largest degree of a field of entries over Q(symbols): blocks of this size."""


class FieldTooLarge(ValueError):
    """The square roots generate a field of too large a degree."""


@dataclass(frozen=True)
class Field:
    """Q(symbols) with the square roots of ``radicals``; these hold 1 and are closed under multiplication."""

    symbols: tuple[str, ...]
    radicals: tuple[Radical, ...]

    @property
    def degree(self) -> int:
        """Degree over Q(symbols): the size of the blocks."""
        return len(self.radicals)

    @cached_property
    def variables(self) -> Variables:
        """The ring of integer polynomials in the symbols."""
        return Variables(self.symbols)

    @cached_property
    def products(self) -> tuple[tuple[tuple[int, int], ...], ...]:
        """For each pair of radicals their product, as (integer factor, place of the radical)."""
        places = {radical: place for place, radical in enumerate(self.radicals)}
        table = []
        for first in self.radicals:
            row = [multiply_radicals(first, second) for second in self.radicals]
            table.append(tuple((factor, places[radical]) for factor, radical in row))
        return tuple(table)

    def matrix(
        self, rows: Sequence[Sequence[Quotient | Value | Fraction | int]], columns: int | None = None
    ) -> "ExactMatrix":
        """The matrix with these entries; ``columns`` is needed where there are no rows.

        Entries must lie in the field (KeyError otherwise).
        """
        from app.exact.function_matrix import FunctionMatrix
        from app.exact.rational_matrix import RationalMatrix

        kernel = FunctionMatrix if self.symbols else RationalMatrix
        width = len(rows[0]) if rows else (columns or 0)
        return kernel.of_entries(self, [[quotient(entry) for entry in row] for row in rows], width)

    def components(self, numerator: Value) -> list[Value]:
        """The coefficients of a value beside the radicals, in their order."""
        places = {radical: place for place, radical in enumerate(self.radicals)}
        parts: list[list[tuple[Key, Rational]]] = [[] for _ in self.radicals]
        for (monomial, radical), coefficient in numerator.terms.items():
            parts[places[radical]].append(((monomial, 1), coefficient))
        return [Value.from_terms(part) for part in parts]


def field_of(entries: Iterable[Quotient | Value]) -> Field:
    """The smallest field that holds the entries; raises FieldTooLarge where its degree exceeds MAX_DEGREE."""
    symbols: set[str] = set()
    radicals: set[Radical] = set()
    for entry in entries:
        symbols |= entry.symbols()
        radicals |= entry.radicals()
    closed: list[Radical] = [1]
    for radical in sorted(radicals, key=lambda r: (abs(r), r)):
        if radical not in closed:
            closed += [multiply_radicals(radical, other)[1] for other in closed]
        if len(closed) > MAX_DEGREE:
            raise FieldTooLarge(
                f"The square roots that occur generate a field of degree over {MAX_DEGREE}, too large to compute in."
            )
    return Field(tuple(sorted(symbols)), tuple(closed))
