"""Principal parts on unramified orbits whose residues have a sum with small eigenspaces.

All eigenspaces of a matrix S have dimension r or less if and only if r columns V exist such that V, SV, S²V, … span
everything (Popov, Belevitch and Hautus, common practice).  Gauges and columns are drawn with small integer entries and
multiplied out modulo a prime: what spans modulo the prime spans for generic values of the symbols.
"""

import random
from collections.abc import Sequence
from fractions import Fraction
from operator import mul

from app.exact.modular import NoSpecialisation, Specialisation, specialisation
from app.existence.ramified_certificates import Gauge, IntegerMatrix, ResidueSum
from app.local.formal_type import Pole
from app.local.problem import Problem
from app.roots.build import slope_of_difference

_PRIME = 2**61 - 1
_LARGEST_WORK = 60
_ATTEMPTS = 3
_ENTRY = 9

Rows = list[list[int]]


def find_residue_sum(problem: Problem, pole: int, slope: Fraction, others: list[int]) -> ResidueSum | None:
    """Principal parts at the poles ``others`` whose residues have a sum with eigenspaces of dimension r or less.

    Args:
        problem: the local data.
        pole: the maximally ramified pole, whose slope is r/n.
        slope: r/n, n the rank.
        others: the other poles that count, all unramified.

    None when the draws fail, or when n·(1 + sum of the orders) is above a bound; None proves nothing.
    Cost: for every pole of order s about s² products of n × n matrices.
    """
    rank = problem.rank
    orders = [
        max(slope_of_difference(first.exponent, second.exponent) for first in blocks for second in blocks)
        for blocks in (problem.poles[i].blocks for i in others)
    ]
    if rank * (1 + sum(orders)) > _LARGEST_WORK:
        return None
    for seed in range(_ATTEMPTS):
        source = random.Random(seed)
        gauges = tuple(
            Gauge(i, tuple(_drawn(source, rank) for _ in range(order + 1)))
            for i, order in zip(others, orders, strict=True)
        )
        columns = tuple(row[: slope.numerator] for row in _drawn(source, rank))
        try:
            image = _image(problem, others, seed)
            total = [[0] * rank for _ in range(rank)]
            for gauge in gauges:
                residue = _gauged_residue(
                    _normal_form(problem.poles[gauge.pole], len(gauge.terms), image), gauge, image
                )
                total = _combined(total, 1, residue)
        except (NoSpecialisation, ZeroDivisionError):
            continue
        if _spans(total, columns, image.prime):
            return ResidueSum(pole, slope, gauges, columns)
    return None


def _drawn(source: random.Random, rank: int) -> IntegerMatrix:
    return tuple(tuple(source.randint(-_ENTRY, _ENTRY) for _ in range(rank)) for _ in range(rank))


def _image(problem: Problem, others: list[int], seed: int) -> Specialisation:
    """Values at the other poles to a prime field; without square roots at a prime known beforehand."""
    blocks = [block for i in others for block in problem.poles[i].blocks]
    values = [e.value for block in blocks for e in block.residue]
    values += [value for block in blocks for _, value in block.exponent.terms]
    radicals = {radical for value in values for _, radical in value.terms} - {1}
    names = sorted({name for value in values for name in value.symbols()})
    if radicals:
        return specialisation(names, radicals, seed)
    source = random.Random(seed)
    return Specialisation(_PRIME, {name: source.randint(2, 10**6) for name in names}, {})


def _normal_form(pole: Pole, length: int, image: Specialisation) -> list[Rows]:
    """Coefficients of z^(−1), …, z^(−length) of ⊕(dq_j/dz + L_j/z), classes in Jordan form.

    Higher ones are scalar: they commute with every gauge and do not reach the residue.
    """
    size = pole.rank
    parts: list[Rows] = [[[0] * size for _ in range(size)] for _ in range(length)]
    at = 0
    for block in pole.blocks:
        for row in range(at, at + block.multiplicity):
            for power, value in block.exponent.terms:
                if power < length:
                    parts[int(power)][row][row] = -int(power) * image.value(value) % image.prime
        for eigenvalue in block.residue:
            for jordan in eigenvalue.jordan:
                for k in range(jordan):
                    parts[0][at + k][at + k] = image.value(eigenvalue.value)
                    if k:
                        parts[0][at + k - 1][at + k] = 1
                at += jordan
    return parts


def _gauged_residue(parts: list[Rows], gauge: Gauge, image: Specialisation) -> Rows:
    """Residue of g·Λ·g⁻¹ modulo the prime: A·g = g·Λ solved from the highest pole down.

    ZeroDivisionError where g is singular at the pole.
    """
    prime, terms = image.prime, gauge.terms
    inverse = _inverse(terms[0], prime)
    found: dict[int, Rows] = {}
    for k in range(len(parts) - 1, -1, -1):
        rest = [[0] * len(inverse) for _ in inverse]
        for a in range(len(parts) - k):
            rest = _combined(rest, 1, _product(terms[a], parts[k + a], prime))
            if a:
                rest = _combined(rest, -1, _product(found[k + a], terms[a], prime))
        found[k] = _product(rest, inverse, prime)
    return found[0]


def _product(a: Sequence[Sequence[int]], b: Sequence[Sequence[int]], prime: int) -> Rows:
    columns = list(zip(*b, strict=True))
    return [[sum(map(mul, row, column)) % prime for column in columns] for row in a]


def _combined(a: Rows, sign: int, b: Rows) -> Rows:
    return [[x + sign * y for x, y in zip(*rows, strict=True)] for rows in zip(a, b, strict=True)]


def _inverse(matrix: IntegerMatrix, prime: int) -> Rows:
    """Inverse modulo the prime; ZeroDivisionError for a singular matrix."""
    size = len(matrix)
    rows = [[entry % prime for entry in row] + [int(i == j) for j in range(size)] for i, row in enumerate(matrix)]
    for column in range(size):
        pivot = next((k for k in range(column, size) if rows[k][column]), None)
        if pivot is None:
            raise ZeroDivisionError("the gauge is singular at the pole")
        rows[column], rows[pivot] = rows[pivot], rows[column]
        scale = pow(rows[column][column], -1, prime)
        head = rows[column] = [entry * scale % prime for entry in rows[column]]
        for k in range(size):
            factor = rows[k][column]
            if k != column and factor:
                rows[k] = [(a - factor * b) % prime for a, b in zip(rows[k], head, strict=True)]
    return [row[size:] for row in rows]


def _spans(matrix: Rows, columns: Sequence[Sequence[int]], prime: int) -> bool:
    """Whether the columns and their images under powers of the matrix span everything, modulo the prime."""
    size = len(matrix)
    waiting = [[row[c] % prime for row in columns] for c in range(len(columns[0]))]
    echelon: dict[int, list[int]] = {}
    while waiting and len(echelon) < size:
        vector = waiting.pop(0)
        rest = list(vector)
        for place, head in sorted(echelon.items()):
            if rest[place]:
                factor = rest[place]
                rest = [(a - factor * b) % prime for a, b in zip(rest, head, strict=True)]
        place = next((k for k, entry in enumerate(rest) if entry), -1)
        if place >= 0:
            inverse = pow(rest[place], -1, prime)
            echelon[place] = [entry * inverse % prime for entry in rest]
            waiting.append([sum(a * b for a, b in zip(row, vector, strict=True)) % prime for row in matrix])
    return len(echelon) == size
