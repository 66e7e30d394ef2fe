"""The problem: poles with formal types of one rank, symbols, and how the class of each residue is meant.

A ``Problem`` is always valid: ``local/document.py`` is the only place that makes one from outside data.
"""

from dataclasses import dataclass
from functools import cached_property
from typing import Literal

from app.exact.value import Value, total
from app.local.formal_type import Pole

Reading = Literal["residue", "local_monodromy"]


@dataclass(frozen=True)
class ForcedValue:
    """Where the eigenvalue "*" stands: indices of pole, block and eigenvalue (its value is already filled in)."""

    pole: int
    block: int
    eigenvalue: int


@dataclass(frozen=True)
class Problem:
    """Local data of a linear differential system on the Riemann sphere.

    ``reading`` says whether eigenvalues are of residues ξ, or θ of local monodromy e^(2πiθ).
    ``base`` is the chosen base pole, or None for the default choice of ``roots/``.
    """

    poles: tuple[Pole, ...]
    symbols: tuple[str, ...] = ()
    name: str = ""
    base: int | None = None
    notes: str = ""
    reading: Reading = "residue"
    forced: ForcedValue | None = None

    @cached_property
    def rank(self) -> int:
        """Rank of the system."""
        return self.poles[0].rank

    @cached_property
    def ramified(self) -> bool:
        """Whether some block at some pole is ramified."""
        return any(pole.ramified for pole in self.poles)

    @cached_property
    def all_log(self) -> bool:
        """Whether every pole is logarithmic."""
        return all(pole.is_log for pole in self.poles)

    @cached_property
    def trace_sum(self) -> Value:
        """Sum of value times multiplicity over everything: the defect of the Fuchs relation."""
        return total(
            eigenvalue.value * eigenvalue.multiplicity
            for pole in self.poles
            for block in pole.blocks
            for eigenvalue in block.residue
        )
