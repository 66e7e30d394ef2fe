"""Random unramified problems with Jordan blocks, irregular poles and special values: whatever exists is verified."""

import random
from fractions import Fraction

import pytest

from app.connection.construction import construct
from app.errors import Refused
from app.existence.problems import additive_verdict
from app.local.document import problem_from_json
from app.local.problem import Problem
from app.roots.build import quiver_of
from app.roots.reduction import reduce


def parts_of(source: random.Random, number: int) -> list[int]:
    found = []
    while number:
        found.append(source.randint(1, number))
        number -= found[-1]
    return found


def random_problem(source: random.Random) -> Problem | None:
    rank, poles = source.choice([1, 2, 2, 3, 3, 4]), []
    for place in range(source.randint(2, 4)):
        order, taken, blocks = source.choice([0, 0, 0, 1, 2, 3]), set(), []
        for size in parts_of(source, rank) if order else [rank]:
            exponent = {str(k): str(source.randint(-2, 2)) for k in range(1, order + 1)}
            if str(exponent) in taken:
                return None
            taken.add(str(exponent))
            residue = []
            for multiplicity in parts_of(source, size):
                value = Fraction(source.randint(-9, 9), source.choice([1, 2, 3, 7, 11]))
                jordan = parts_of(source, multiplicity) if source.random() < 0.4 else [1] * multiplicity
                residue.append({"value": str(value), "jordan": jordan})
            blocks.append({"exponent": exponent, "residue": residue})
        poles.append({"at": str(place), "blocks": blocks})
    source.choice(source.choice(source.choice(poles)["blocks"])["residue"])["value"] = "*"
    try:
        return problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles})
    except Refused:
        return None


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("numeric", [False, True])
def test_what_exists_is_constructed_and_verified(seed, numeric):
    source = random.Random(seed)
    made = 0
    while made < 6:
        problem = random_problem(source)
        if problem is None:
            continue
        quiver = quiver_of(problem)
        verdict = additive_verdict(problem, quiver, reduce(quiver))
        if verdict is not None and verdict.exists:
            built = construct(problem, numeric=numeric)
            failing = [line for line in built.connection.verification if not line.holds] if built.connection else []
            assert built.verified, (problem, built.method, built.note, failing)
            made += 1
