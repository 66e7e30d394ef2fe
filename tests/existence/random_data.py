"""Random local data, plain and as documents: small ranks, special eigenvalues, several irregular poles."""

import random
from fractions import Fraction
from typing import Any

from tests.existence.brute_force import Exponent, Pole, Residue

INTEGERS = [Fraction(n) for n in (0, 1, -1, 2, -2)]
HALVES = [Fraction(n, 2) for n in range(-2, 3)]
FEW = [Fraction(n) for n in (0, 1, -1)]


def composition(generator: random.Random, total: int) -> list[int]:
    """A composition of a positive integer."""
    parts = []
    while total:
        parts.append(generator.randint(1, total))
        total -= parts[-1]
    return parts


def residue(generator: random.Random, multiplicity: int, values: list[Fraction]) -> Residue | None:
    """A class with distinct eigenvalues among the given values; None when they do not suffice."""
    parts = composition(generator, multiplicity)
    if len(parts) > len(values):
        return None
    chosen = generator.sample(values, len(parts))
    return [
        (value, sorted(composition(generator, part), reverse=True) if generator.random() < 0.4 else [1] * part)
        for value, part in zip(chosen, parts, strict=True)
    ]


def poles(generator: random.Random, *, irregular: float, count: tuple[int, int]) -> list[Pole] | None:
    """Poles with the Fuchs relation mostly satisfied; None when a draw is not valid."""
    rank = generator.choice([1, 2, 2, 3, 3, 4, 4])
    values = generator.choice([INTEGERS, HALVES, FEW])
    found: list[Pole] = []
    for _ in range(generator.randint(*count)):
        parts = composition(generator, rank) if generator.random() < irregular else [rank]
        pole: Pole = []
        exponents: list[Exponent] = []
        for part in parts:
            top = generator.choice([1, 1, 2, 3])
            drawn = {k: generator.choice([0, 0, 1, 2]) for k in range(1, top + 1)}
            exponent = {k: c for k, c in drawn.items() if c} if len(parts) > 1 else {}
            block = residue(generator, part, values)
            if exponent in exponents or block is None:
                return None
            exponents.append(exponent)
            pole.append((exponent, block))
        found.append(pole)
    return balanced(generator, found)


def balanced(generator: random.Random, found: list[Pole]) -> list[Pole] | None:
    """The poles with the very last eigenvalue moved so that the traces sum to 0 (now and then left as they are)."""
    trace = sum(value * sum(sizes) for pole in found for _, block in pole for value, sizes in block)
    block = found[-1][-1][1]
    if trace and generator.random() < 0.95:
        value, sizes = block[-1]
        block[-1] = (value - trace / sum(sizes), sizes)
    return found if len({value for value, _ in block}) == len(block) else None


def document(found: list[Pole], reading: str = "residue") -> dict[str, Any]:
    """The problem document of plain data."""
    written = [
        {
            "at": str(i),
            "blocks": [
                {
                    "exponent": {str(k): str(c) for k, c in exponent.items()},
                    reading: [{"value": str(value), "jordan": sizes} for value, sizes in block],
                }
                for exponent, block in pole
            ],
        }
        for i, pole in enumerate(found)
    ]
    return {"format": "polewright-problem/1", "name": "", "symbols": [], "poles": written}
