"""Certificates of verdicts on ramified data, checked against the problem by code of their own.

Nothing here calls the decision or the figures of ``local/orbit.py``: slopes are read off the conjugates pair by pair,
ranks are counted from Jordan blocks, and the residues of a certificate are multiplied out modulo another prime.  What
is taken on trust is the theorem that ``ramified.py`` states.
"""

from collections.abc import Sequence
from fractions import Fraction
from itertools import product
from random import Random

from app.exact.modular import NoSpecialisation, Specialisation, specialisation
from app.exact.value import total
from app.existence.check import Check
from app.existence.ramified_certificates import (
    FreeResidue,
    Gauge,
    IntegerMatrix,
    JordanBlocks,
    LargeEigenspace,
    RamifiedCertificate,
    ResidueSum,
    RigidityExcess,
)
from app.existence.verdict import FuchsDefect
from app.local.conjugates import Conjugate, conjugates
from app.local.formal_type import Eigenvalue, Pole
from app.local.problem import Problem

_PRIME = 2**89 - 1
Rows = list[list[int]]


def check_ramified(
    problem: Problem, certificate: RamifiedCertificate | FuchsDefect, exists: bool | None
) -> tuple[Check, ...]:
    """Check that a certificate proves the stated answer for a problem with ramified poles.

    Cost: pairs of conjugates at every pole for a rigidity index; for a sum of residues products of n × n matrices.
    """
    traces = total(e.value * e.multiplicity for p in problem.poles for b in p.blocks for e in b.residue)
    if isinstance(certificate, FuchsDefect):
        stated = Check("the traces do not sum to 0", traces == certificate.defect and not traces.is_zero)
        return (stated, Check("the kind of certificate fits the answer", exists is False))
    if isinstance(certificate, RigidityExcess):
        index = _rigidity_index(problem)
        excess = Check("the rigidity index is larger than 2", index == certificate.index and index > 2, str(index))
        return (excess, Check("the kind of certificate fits the answer", exists is False))
    known = range(len(problem.poles))
    if certificate.pole not in known:
        return (Check("the maximally ramified pole is a pole of the problem", False, str(certificate.pole)),)
    checks = [
        Check("the traces sum to 0", traces.is_zero),
        Check(
            "the pole is maximally ramified with this slope",
            _is_maximal(problem.poles[certificate.pole], certificate.slope),
            str(certificate.slope),
        ),
    ]
    match certificate:
        case JordanBlocks():
            checks += _claim_jordan_blocks(problem, certificate, exists)
        case FreeResidue():
            checks += _claim_free_residue(problem, certificate, exists)
        case ResidueSum():
            checks += _claim_residue_sum(problem, certificate, exists)
        case LargeEigenspace():
            checks += _claim_large_eigenspace(problem, certificate, exists)
    return tuple(checks)


def _is_maximal(pole: Pole, slope: Fraction) -> bool:
    """One orbit of n conjugates, and any two of them differ first at z^(−r/n): no twist changes that."""
    if len(pole.blocks) != 1 or sum(len(e.jordan) * e.jordan[0] for e in pole.blocks[0].residue) != 1:
        return False
    orbit = conjugates(pole.blocks[0].exponent)
    rank = len(orbit)
    apart = {_first_difference(a, b) for i, a in enumerate(orbit) for b in orbit[:i]}
    return rank == pole.rank > 1 and slope.denominator == rank and apart == {slope}


def _first_difference(first: Conjugate, second: Conjugate) -> Fraction:
    a, b = dict(first), dict(second)
    return max((power for power in {*a, *b} if a.get(power) != b.get(power)), default=Fraction(0))


def _rigidity_index(problem: Problem) -> int:
    """2n² − Σ (Irr(End) + n² − dim Inv), pair by pair."""
    rank = sum(len(conjugates(b.exponent)) * e for b in problem.poles[0].blocks for e in _sizes(b.residue))
    index = Fraction(2 * rank * rank)
    for pole in problem.poles:
        members = [(c, sum(_sizes(block.residue))) for block in pole.blocks for c in conjugates(block.exponent)]
        index -= sum(m * n * _first_difference(a, b) for (a, m), (b, n) in product(members, members))
        invariants = sum(min(p, q) for block in pole.blocks for e in block.residue for p in e.jordan for q in e.jordan)
        index -= rank * rank - invariants
    return int(index)


def _sizes(residue: Sequence[Eigenvalue]) -> list[int]:
    return [sum(eigenvalue.jordan) for eigenvalue in residue]


def _others(problem: Problem, pole: int) -> list[int]:
    """The other poles whose local type is not a multiple of the identity."""
    return [
        i
        for i, other in enumerate(problem.poles)
        if i != pole
        and not (
            _is_one_unramified(other)
            and len(other.blocks[0].residue) == 1
            and set(other.blocks[0].residue[0].jordan) == {1}
        )
    ]


def _is_one_unramified(pole: Pole) -> bool:
    return len(pole.blocks) == 1 and len(conjugates(pole.blocks[0].exponent)) == 1


def _claim_jordan_blocks(problem: Problem, certificate: JordanBlocks, exists: bool | None) -> list[Check]:
    others = _others(problem, certificate.pole)
    alone = others == ([] if certificate.other is None else [certificate.other])
    checks = [Check("no other pole counts", alone)]
    if not alone:
        return checks
    counted = [problem.rank]
    if certificate.other is not None:
        other = problem.poles[certificate.other]
        checks.append(Check("the other pole is a log pole up to a twist", _is_one_unramified(other)))
        counted = [len(eigenvalue.jordan) for eigenvalue in other.blocks[0].residue]
    checks.append(Check("the Jordan blocks are counted right", list(certificate.counts) == counted, str(counted)))
    small = max(counted) <= certificate.slope.numerator
    fits = exists is small
    checks.append(Check("the counts decide as stated", fits, f"{max(counted)} against {certificate.slope.numerator}"))
    return checks


def _claim_free_residue(problem: Problem, certificate: FreeResidue, exists: bool | None) -> list[Check]:
    if certificate.second is None:
        enough = Check("the slope is larger than 1", certificate.slope > 1, str(certificate.slope))
    else:
        second = certificate.second
        slopes = {Fraction(k, problem.rank) for k in range(1, 1 + 64 * problem.rank)}
        inside = second in range(len(problem.poles)) and second != certificate.pole
        holds = inside and any(_is_maximal(problem.poles[second], slope) for slope in slopes)
        enough = Check("the second pole is another maximally ramified one", holds)
    return [enough, Check("the kind of certificate fits the answer", exists is True)]


def _claim_large_eigenspace(problem: Problem, certificate: LargeEigenspace, exists: bool | None) -> list[Check]:
    others, rank = _others(problem, certificate.pole), problem.rank
    named = sorted(i for i, _, _ in certificate.choices) == others
    unramified = all(len(conjugates(block.exponent)) == 1 for i in others for block in problem.poles[i].blocks)
    checks = [
        Check("an eigenvalue is chosen at every other pole", named),
        Check("the other poles are unramified", unramified),
    ]
    if not (named and unramified):
        return checks
    least = rank
    for i, j, k in certificate.choices:
        blocks = problem.poles[i].blocks
        if j not in range(len(blocks)) or k not in range(len(blocks[j].residue)):
            return [*checks, Check("the chosen eigenvalues exist", False)]
        least -= _hankel_rank(problem.poles[i], j, k)
    checks.append(Check("the dimension is n − Σ d", least == certificate.dimension, str(least)))
    too_large = least > certificate.slope.numerator
    checks.append(Check("it is larger than the slope allows", too_large, f"{least} > {certificate.slope.numerator}"))
    return [*checks, Check("the kind of certificate fits the answer", exists is False)]


def _hankel_rank(pole: Pole, chosen: int, eigenvalue: int) -> int:
    """Rank of the block Hankel matrix of the normal form after a twist that makes the chosen eigenvalue 0."""
    own = pole.blocks[chosen]
    found = sum(_sizes(own.residue)) - len(own.residue[eigenvalue].jordan)
    (reference,) = conjugates(own.exponent)
    for j, block in enumerate(pole.blocks):
        if j != chosen:
            (other,) = conjugates(block.exponent)
            found += sum(_sizes(block.residue)) * (1 + int(_first_difference(reference, other)))
    return found


def _claim_residue_sum(problem: Problem, certificate: ResidueSum, exists: bool | None) -> list[Check]:
    others, rank = _others(problem, certificate.pole), problem.rank
    shapes = [term for gauge in certificate.gauges for term in gauge.terms]
    square = all(len(m) == rank and all(len(row) == rank for row in m) for m in shapes)
    columns = certificate.columns
    fits = len(columns) == rank and all(len(row) == certificate.slope.numerator for row in columns)
    named = [gauge.pole for gauge in certificate.gauges] == others and all(g.terms for g in certificate.gauges)
    checks = [
        Check("a gauge is given at every other pole", named),
        Check("the other poles are unramified", not any(problem.poles[i].ramified for i in others)),
        Check("matrices are square, columns as many as the slope's numerator", square and fits),
    ]
    if not all(check.holds for check in checks):
        return checks
    try:
        spanned = _spanned(problem, certificate.gauges, columns)
    except (NoSpecialisation, ZeroDivisionError):
        return [*checks, Check("the gauges are invertible", False)]
    checks.append(Check("the columns generate everything under the sum", spanned == rank, f"{spanned} of {rank}"))
    return [*checks, Check("the kind of certificate fits the answer", exists is True)]


def _spanned(problem: Problem, gauges: Sequence[Gauge], columns: IntegerMatrix) -> int:
    """Dimension of the space that the columns generate under the sum of the residues, modulo a prime."""
    image = _image(problem, [gauge.pole for gauge in gauges])
    prime, rank = image.prime, problem.rank
    summed = [[0] * rank for _ in range(rank)]
    for gauge in gauges:
        for row, added in zip(summed, _residue(problem.poles[gauge.pole], gauge, image), strict=True):
            row[:] = [(a + b) % prime for a, b in zip(row, added, strict=True)]
    stack, images = [], [list(column) for column in zip(*columns, strict=True)]
    for _ in range(rank):
        stack += images
        images = [[sum(a * b for a, b in zip(row, v, strict=True)) % prime for row in summed] for v in images]
    return _rank(stack, prime)


def _image(problem: Problem, poles: Sequence[int]) -> Specialisation:
    blocks = [block for i in poles for block in problem.poles[i].blocks]
    values = [e.value for block in blocks for e in block.residue]
    values += [value for block in blocks for _, value in block.exponent.terms]
    radicals = {radical for value in values for _, radical in value.terms} - {1}
    names = sorted({name for value in values for name in value.symbols()})
    if radicals:
        return specialisation(names, radicals, 1_000_003)
    source = Random(len(poles) + 17)
    return Specialisation(_PRIME, {name: source.randint(2, 10**9) for name in names}, {})


def _residue(pole: Pole, gauge: Gauge, image: Specialisation) -> Rows:
    """Coefficient of 1/z in g·Λ·h, h the inverse series of g."""
    prime, size = image.prime, pole.rank
    normal: dict[int, Rows] = {}

    def entry(k: int, row: int, column: int, value: int) -> None:
        if k not in normal:
            normal[k] = [[0] * size for _ in range(size)]
        normal[k][row][column] += value

    at = 0
    for block in pole.blocks:
        for eigenvalue in block.residue:
            for jordan in eigenvalue.jordan:
                for k in range(at, at + jordan):
                    entry(0, k, k, image.value(eigenvalue.value))
                    for power, value in block.exponent.terms:
                        entry(int(power), k, k, -int(power) * image.value(value))
                    if k > at:
                        entry(0, k - 1, k, 1)
                at += jordan
    terms = [[list(row) for row in term] for term in gauge.terms]
    order = max(normal)
    series = [_inverse(terms[0], prime)]
    for k in range(1, order + 1):
        tail: Rows = [[0] * size for _ in range(size)]
        for a in range(1, min(k, len(terms) - 1) + 1):
            tail = _plus(tail, _times(terms[a], series[k - a], prime))
        series.append([[-x % prime for x in row] for row in _times(series[0], tail, prime)])
    residue: Rows = [[0] * size for _ in range(size)]
    for k, part in normal.items():
        for a in range(min(k, len(terms) - 1) + 1):
            residue = _plus(residue, _times(_times(terms[a], part, prime), series[k - a], prime))
    return residue


def _plus(a: Rows, b: Rows) -> Rows:
    return [[x + y for x, y in zip(first, second, strict=True)] for first, second in zip(a, b, strict=True)]


def _times(a: Rows, b: Rows, prime: int) -> Rows:
    across = list(zip(*b, strict=True))
    return [[sum(x * y for x, y in zip(row, column, strict=True)) % prime for column in across] for row in a]


def _inverse(matrix: Rows, prime: int) -> Rows:
    size = len(matrix)
    rows = [[entry % prime for entry in row] + [int(i == j) for j in range(size)] for i, row in enumerate(matrix)]
    if _eliminate(rows, size, prime) < size:
        raise ZeroDivisionError("a gauge is singular at the pole")
    return [row[size:] for row in rows]


def _rank(rows: Rows, prime: int) -> int:
    return _eliminate([[entry % prime for entry in row] for row in rows], len(rows[0]), prime)


def _eliminate(rows: Rows, width: int, prime: int) -> int:
    """Reduce the first columns in place to reduced echelon form; their rank."""
    done = 0
    for column in range(width):
        pivot = next((k for k in range(done, len(rows)) if rows[k][column]), None)
        if pivot is None:
            continue
        rows[done], rows[pivot] = rows[pivot], rows[done]
        scale = pow(rows[done][column], -1, prime)
        rows[done] = [entry * scale % prime for entry in rows[done]]
        for k in range(len(rows)):
            if k != done and rows[k][column]:
                factor = rows[k][column]
                rows[k] = [(a - factor * b) % prime for a, b in zip(rows[k], rows[done], strict=True)]
        done += 1
    return done
