"""Published names that apply to a problem, with their sources.

A name is recognised from the shape of the data alone: the drops of rank along the legs of log poles, and for rank 2
the slopes of q_1 − q_2.  A pole where the local type is scalar does not count.
"""

from dataclasses import dataclass
from fractions import Fraction

from app.local.formal_type import Pole
from app.local.orbit import largest_slope
from app.local.problem import Problem
from app.roots.build import slots


@dataclass(frozen=True)
class Family:
    """A published name and where it was published."""

    name: str
    source: str


_JIMBO_MIWA = "Jimbo and Miwa, Physica D 2 (1981)"
_OHYAMA_OKUMURA = "Ohyama and Okumura, J. Phys. A 39 (2006)"
_HANDBOOK = "NIST Digital Library of Mathematical Functions, "
_KAWAKAMI = "Kawakami, Nakamura and Sakai, arXiv:1209.3836"
_SIMPSON = "Simpson, Products of matrices, AMS Contemp. Math. 1 (1992)"

# rank 2, by the slopes of q_1 − q_2 in ascending order
_RANK_TWO: dict[tuple[Fraction, ...], Family] = {
    tuple(map(Fraction, slopes.split())): family
    for slopes, family in {
        "0 0 0": Family("Gauss hypergeometric equation", _HANDBOOK + "§15.10"),
        "0 1": Family("Kummer (confluent hypergeometric) equation", _HANDBOOK + "§13.2"),
        "2": Family("parabolic cylinder (Weber) equation", _HANDBOOK + "§12.2"),
        "0 1/2": Family("Bessel equation in the variable x² = 4t", _HANDBOOK + "§10.2"),
        "3/2": Family("Airy equation", _HANDBOOK + "§9.2"),
        "0 0 0 0": Family("Painlevé VI", _JIMBO_MIWA),
        "0 0 1": Family("Painlevé V", _JIMBO_MIWA),
        "0 2": Family("Painlevé IV", _JIMBO_MIWA),
        "1 1": Family("Painlevé III(D6)", _JIMBO_MIWA),
        "3": Family("Painlevé II", _JIMBO_MIWA),
        "0 0 1/2": Family("degenerate Painlevé V, equivalent to III(D6)", _OHYAMA_OKUMURA),
        "1/2 1": Family("Painlevé III(D7)", _OHYAMA_OKUMURA),
        "1/2 1/2": Family("Painlevé III(D8)", _OHYAMA_OKUMURA),
        "0 3/2": Family("the 34th equation of Gambier's list, equivalent to Painlevé II", _OHYAMA_OKUMURA),
        "5/2": Family("Painlevé I", _JIMBO_MIWA),
    }.items()
}

Drops = tuple[int, ...]


def families(problem: Problem) -> tuple[Family, ...]:
    """Names of published families that the problem belongs to, by its shape; empty when none is known.

    Cost: the number of eigenvalues.
    """
    poles = [pole for pole in problem.poles if not _is_scalar(pole)]
    if problem.rank == 2:
        slopes = tuple(sorted(largest_slope(pole) for pole in poles))
        known = _RANK_TWO.get(slopes)
        garnier = Family("two-variable Garnier system", _KAWAKAMI)
        if slopes == (Fraction(0),) * 5:
            return (garnier,)
        return (known,) if known is not None else ()
    if not all(len(pole.blocks) == 1 and pole.blocks[0].exponent.is_zero for pole in poles):
        return ()
    shapes = sorted(tuple(sorted((slot.drop for slot in slots(pole.blocks[0])), reverse=True)) for pole in poles)
    return tuple(_log_families(problem.rank, shapes))


def _is_scalar(pole: Pole) -> bool:
    """Whether the local type is one exponent times the identity with a scalar class."""
    if len(pole.blocks) != 1 or pole.blocks[0].exponent.ramification > 1:
        return False
    return len(slots(pole.blocks[0])) == 1


def _log_families(rank: int, shapes: list[Drops]) -> list[Family]:
    """Families of log data of rank 3 or more; ``shapes`` are the drops at the poles in ascending order."""
    ones, reflection = (1,) * rank, (rank - 1, 1)
    half = rank // 2
    named: list[tuple[list[Drops], Family]] = [
        ([ones, ones, reflection], Family(f"generalised hypergeometric equation of order {rank}", _HANDBOOK + "§16.8")),
        (
            [reflection] * (rank + 1),
            Family(f"Jordan–Pochhammer equation of order {rank}", "Dettweiler and Reiter, J. Algebra 318 (2007)"),
        ),
        ([(1, 1, 1)] * 3, Family("affine type E6^(1)", "Kostov, J. Algebra 281 (2004)")),
        ([(1, 1, 1, 1)] * 2 + [(2, 2)], Family("affine type E7^(1)", "Kostov, J. Algebra 281 (2004)")),
        ([(1,) * 6, (2, 2, 2), (3, 3)], Family("affine type E8^(1)", "Kostov, J. Algebra 281 (2004)")),
        ([(1, 1, 1)] * 2 + [(2, 1)] * 2, Family("Fuji–Suzuki system", _KAWAKAMI)),
        ([(1, 1, 1, 1), (2, 2), (2, 2), (3, 1)], Family("Sasano system", _KAWAKAMI)),
        ([(2, 1, 1), (2, 2), (2, 2), (2, 2)], Family("matrix Painlevé VI system", _KAWAKAMI)),
        ([(1,) * 6, (2, 2, 2), (4, 2)], Family("Simpson's extra case of order 6", _SIMPSON)),
    ]
    if rank % 2 == 0 and rank >= 4:
        even = Family(f"Simpson's even family, order {rank}", _SIMPSON)
        named.append(([ones, (half, half), (half, half - 1, 1)], even))
    if rank % 2 == 1 and rank >= 5:
        odd = Family(f"Simpson's odd family, order {rank}", _SIMPSON)
        named.append(([ones, (half, half, 1), (half + 1, half)], odd))
    return [family for tuple_, family in named if sorted(tuple_) == shapes]
