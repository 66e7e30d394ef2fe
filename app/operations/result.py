"""What an operation on a problem returns, and how it refuses.

Every operation is a pure function of a valid problem.  It returns a ``Result`` with a valid problem, or raises
``Refused`` with one sentence that names the condition that fails.
"""

from collections.abc import Iterable
from dataclasses import dataclass, replace

from app.errors import Place, Refused
from app.exact.bounded import check_size
from app.exact.limits import OverLimit
from app.exact.value import Value
from app.local.formal_type import Pole
from app.local.limits import MAXIMUM_RANK, MAXIMUM_SYMBOLS
from app.local.problem import Problem
from app.roots.build import base_pole


@dataclass(frozen=True)
class Result:
    """The problem after an operation, what happens to the connection, and the condition that was checked ("": none)."""

    problem: Problem
    words: str
    condition: str = ""


def refusal(message: str, expected: str = "", at: str = "") -> Refused:
    """A refusal to be raised: one sentence, and what would be right."""
    return Refused(message, (Place(at, message, expected),))


def values_of(pole: Pole) -> Iterable[Value]:
    """All coefficients of exponents and all eigenvalues at a pole."""
    for block in pole.blocks:
        yield from (coefficient for _, coefficient in block.exponent.terms)
        yield from (eigenvalue.value for eigenvalue in block.residue)


def checked(problem: Problem) -> Problem:
    """The problem if it is within the limits of documents, with all symbols listed; ``Refused`` otherwise.

    Cost: one look at every number.
    """
    if problem.rank > MAXIMUM_RANK:
        raise refusal(
            f"The rank would become {problem.rank}, over the limit of {MAXIMUM_RANK}.",
            f"a rank of at most {MAXIMUM_RANK}",
        )
    used: set[str] = set()
    for number, pole in enumerate(problem.poles):
        for value in values_of(pole):
            used |= value.symbols()
            try:
                check_size(value)
            except OverLimit as fault:
                raise refusal(f"A number at pole {number + 1} would become too large: {fault.message}.") from fault
        if pole.at.value is not None:
            used |= pole.at.value.symbols()
    new = sorted(used.difference(problem.symbols))
    if len(problem.symbols) + len(new) > MAXIMUM_SYMBOLS:
        raise refusal(f"There would be more than {MAXIMUM_SYMBOLS} symbols.")
    return replace(problem, symbols=(*problem.symbols, *new)) if new else problem


def with_base_kept(problem: Problem, base: int) -> Problem:
    """The problem with this base pole, written down only where it is not the default choice anyway."""
    if problem.base is None and base_pole(problem) == base:
        return problem
    return replace(problem, base=base)


def pole_at(problem: Problem, index: int) -> Pole:
    """The pole with this index, or ``Refused``."""
    if not 0 <= index < len(problem.poles):
        raise refusal(f"There is no pole {index + 1}.", f"a pole from 1 to {len(problem.poles)}", at=f"/poles/{index}")
    return problem.poles[index]
