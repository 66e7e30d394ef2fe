"""Classes as slots along a leg, and back.

The slots of a class are its eigenvalues, each as often as its largest Jordan block is long, with the drop of rank
that each brings.  Slots of one eigenvalue stand in one run with drops that do not increase; any other sequence is
brought to this form by exchanging neighbours, or belongs to no class.
"""

from collections.abc import Iterable

from app.exact.number import write_number
from app.exact.value import Value, modulo_one
from app.local.formal_type import Eigenvalue
from app.local.partition import conjugate
from app.local.problem import Reading
from app.operations.result import refusal
from app.roots.build import Slot


def same_value(value: Value, reading: Reading) -> Value:
    """What two eigenvalues share exactly when they are equal: themselves, or their class modulo the integers."""
    return modulo_one(value) if reading == "local_monodromy" else value


def class_of_slots(slots: Iterable[Slot], reading: Reading, place: str) -> tuple[Eigenvalue, ...]:
    """The class with these slots: each eigenvalue stands where its first slot stands, slots with drop 0 vanish.

    Slots of one eigenvalue are brought together past other eigenvalues, where all parameters are non-zero.  Raises
    ``Refused`` where the drops of one eigenvalue increase along the leg: a kernel of (L − ξ)^(k+1) would grow faster
    than that of (L − ξ)^k, and the leg vertex between them splits off.  ``place`` names the class in the refusal.
    """
    runs: dict[Value, tuple[Value, list[int]]] = {}
    for slot in slots:
        runs.setdefault(same_value(slot.value, reading), (slot.value, []))[1].append(slot.drop)
    found = []
    for value, drops in runs.values():
        if sorted(drops, reverse=True) != drops:
            raise refusal(
                f"{place}: the eigenvalue {write_number(value)} would take the ranks down by "
                f"{', then '.join(map(str, drops))}, an order that no class has; no irreducible system has such data.",
                "eigenvalues that stay distinct, or meet with drops in descending order",
            )
        kept = tuple(drop for drop in drops if drop)
        if kept:
            found.append(Eigenvalue(value, conjugate(kept)))
    return tuple(found)
