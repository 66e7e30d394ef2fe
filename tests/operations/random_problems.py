"""Random unramified problems, built from the plain values and not from documents; seeded by the caller."""

import random
from fractions import Fraction

from app.exact.value import Value, total
from app.local.formal_type import Block, Eigenvalue, Exponent, Pole, Position
from app.local.problem import Problem


def partition(generator: random.Random, number: int) -> tuple[int, ...]:
    parts = []
    while number:
        parts.append(generator.randint(1, number))
        number -= parts[-1]
    return tuple(sorted(parts, reverse=True))


def residue(generator: random.Random, multiplicity: int, values: list[Value]) -> tuple[Eigenvalue, ...]:
    found = []
    for part in partition(generator, multiplicity):
        jordan = partition(generator, part) if generator.random() < 0.25 else (1,) * part
        found.append(Eigenvalue(values.pop(), jordan))
    generator.shuffle(found)
    return tuple(found)


def exponents(generator: random.Random, count: int, highest: int) -> list[Exponent]:
    found: list[Exponent] = []
    while len(found) < count:
        powers = [power for power in range(highest, 0, -1) if generator.random() < 0.6]
        terms = tuple((Fraction(power), Value.rational(generator.randint(1, 2))) for power in powers)
        if Exponent(terms) not in found:
            found.append(Exponent(terms))
    return found


def random_problem(generator: random.Random, *, generic: bool, irregular: float = 0.5, rank: int = 4) -> Problem:
    """A problem with the Fuchs relation; eigenvalues are symbols, or small fractions that often meet walls."""
    size = generator.randint(1, rank)
    poles = []
    names = (f"e{number}" for number in range(1000))
    for number in range(generator.randint(2, 4)):
        log = generator.random() > irregular
        parts = (size,) if log else partition(generator, size)
        blocks = []
        for exponent, multiplicity in zip(exponents(generator, len(parts), 0 if log else 2), parts, strict=True):
            if generic:
                values = [Value.symbol(next(names)) for _ in range(multiplicity)]
            else:
                span = range(-multiplicity - 2, multiplicity + 3)
                values = [Value.rational(Fraction(n, 2)) for n in generator.sample(span, multiplicity)]
            blocks.append(Block(exponent, residue(generator, multiplicity, values)))
        poles.append(Pole(Position(Value.rational(number)), tuple(blocks)))
    return with_fuchs_relation(Problem(tuple(poles)))


def with_fuchs_relation(problem: Problem) -> Problem:
    """The problem with every eigenvalue of the first pole's first block moved so that the traces sum to 0."""
    first, *others = problem.poles
    block, *more = first.blocks
    shift = problem.trace_sum / -block.multiplicity
    moved = tuple(Eigenvalue(e.value + shift, e.jordan) for e in block.residue)
    poles = (Pole(first.at, (Block(block.exponent, moved), *more)), *others)
    symbols = {name for pole in poles for b in pole.blocks for e in b.residue for name in e.value.symbols()}
    assert not total(e.value * e.multiplicity for pole in poles for b in pole.blocks for e in b.residue)
    return Problem(poles, tuple(sorted(symbols)))
