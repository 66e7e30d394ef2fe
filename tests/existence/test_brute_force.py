"""Verdicts against enumeration: thousands of random problems, no disagreement, every certificate checked.

POLEWRIGHT_DEEP=1 makes the runs ten times as long.
"""

import os
import random
from collections import Counter
from collections.abc import Iterator
from fractions import Fraction

import pytest

from app.errors import Refused
from app.existence.check import check
from app.existence.verdict import Decomposition, Verdict
from app.findings.findings import examine
from app.local.document import problem_from_json
from tests.existence import random_data
from tests.existence.brute_force import Case, Pole, case_of, exists, in_lattice, is_root, number_of_vectors, p, vanishes

LARGEST = 4_000
DEPTH = 10 if os.environ.get("POLEWRIGHT_DEEP") else 1


def case_of_verdict(verdict: Verdict) -> Case:
    """The verdict's own quiver as a plain case (merged classes have a quiver of their own)."""
    quiver = verdict.quiver
    assert quiver is not None
    case = Case()
    for vertex in quiver.vertices:
        value = vertex.parameter.as_rational()
        assert value is not None
        case.add(vertex.dimension, value)
    for a, b, count in quiver.edges:
        case.join(a, b, count)
    poles = sorted({v.pole for v in quiver.vertices if v.role == "core"})
    case.groups = [[k for k, v in enumerate(quiver.vertices) if v.role == "core" and v.pole == pole] for pole in poles]
    return case


def assert_decomposition(case: Case, certificate: Decomposition, modulo: bool) -> None:
    """The parts of a decomposition worked out by the code of the enumeration."""
    parts = certificate.parts
    added = [sum(part.multiplicity * part.vector[v] for part in parts) for v in range(len(case.alpha))]
    assert added == case.alpha
    assert sum(part.multiplicity for part in parts) >= 2
    for part in parts:
        assert is_root(case, part.vector) and in_lattice(case, part.vector) and vanishes(case, part.vector, modulo)
    assert sum(part.multiplicity * p(case, part.vector) for part in parts) >= p(case, case.alpha)


def compare(found: list[Pole], counts: Counter[str]) -> None:
    """Examine one problem and enumerate it; counts what it was."""
    try:
        problem = problem_from_json(random_data.document(found))
    except Refused:
        return
    findings = examine(problem)
    assert findings.quiver is not None and findings.additive is not None
    case = case_of(found, findings.quiver.base)
    assert tuple(case.alpha) == findings.quiver.dimension
    assert case.parameters == [v.parameter.as_rational() for v in findings.quiver.vertices]
    if number_of_vectors(case) > LARGEST:
        return
    for verdict, modulo in ((findings.additive, False), (findings.multiplicative, True)):
        if verdict is None:
            continue
        own = case_of_verdict(verdict) if modulo else case
        assert exists(own, modulo_integers=modulo) == verdict.exists, (found, verdict)
        assert all(one.holds for one in check(verdict)), (found, verdict)
        if isinstance(verdict.certificate, Decomposition):
            assert_decomposition(own, verdict.certificate, modulo)
        kind = "multiplicative" if modulo else "additive"
        counts[f"{kind} {'yes' if verdict.exists else 'no'}"] += 1
        counts[f"{kind} {getattr(verdict.certificate, 'criterion', type(verdict.certificate).__name__)}"] += 1
        if len(own.groups) > 1:
            counts[f"several core poles {'yes' if verdict.exists else 'no'}"] += 1


def draws(seed: int, count: int, irregular: float, poles: tuple[int, int]) -> Iterator[list[Pole]]:
    generator = random.Random(seed)
    made = 0
    while made < count:
        found = random_data.poles(generator, irregular=irregular, count=poles)
        if found is not None:
            made += 1
            yield found


def test_random_problems(capsys: pytest.CaptureFixture[str]) -> None:
    counts: Counter[str] = Counter()
    for found in draws(1, 2500 * DEPTH, 0.35, (1, 4)):
        compare(found, counts)
    for found in draws(2, 2500 * DEPTH, 0.8, (2, 3)):
        compare(found, counts)
    for found in draws(3, 2000 * DEPTH, 0.0, (3, 4)):
        compare(found, counts)
    with capsys.disabled():
        print("\n" + "\n".join(f"  {number:6} {what}" for what, number in sorted(counts.items())))
    for what in (
        "additive yes",
        "additive no",
        "multiplicative yes",
        "multiplicative no",
        "several core poles yes",
        "several core poles no",
        "additive vanishing parameter",
        "additive NotARoot",
        "additive FuchsDefect",
        "additive fundamental set",
        "additive enumeration",
        "additive coordinate vector",
    ):
        assert counts[what] > 0, what


def test_shaped_problems() -> None:
    """Multiples of affine types, with and without one further vertex, for values that are special and that are not."""
    generator = random.Random(4)
    counts: Counter[str] = Counter()
    for _ in range(40 * DEPTH):
        compare(random_data.doubled(generator), counts)
    assert counts["additive multiple of an isotropic root"] > 0
    assert counts["additive affine end"] > 0


@pytest.mark.parametrize("order", [1, 2])
def test_multiples_of_an_isotropic_root_modulo_integers(order: int) -> None:
    """22,22,22,22 with θ·δ of order 1 or 2 modulo Z: only order 2, the multiple itself, gives an irreducible one.

    Crawley-Boevey and Shaw, Adv. Math. 201 (2006).
    """
    z = Fraction(1, 7)
    halves = [Fraction(0), Fraction(1, 2)]
    third = halves if order == 2 else [Fraction(1, 10), Fraction(-1, 10)]
    pairs = [halves, halves, third, [z, -z]]
    found: list[Pole] = [[({}, [(value, [1, 1]) for value in pair])] for pair in pairs]
    verdict = examine(problem_from_json(random_data.document(found, "local_monodromy"))).multiplicative
    assert verdict is not None
    assert verdict.exists is (order == 2)
    assert exists(case_of_verdict(verdict), modulo_integers=True) is (order == 2)


def test_beyond_the_programs_own_bound() -> None:
    """Several core poles, more vectors than the program enumerates: its criterion against the full enumeration."""
    seen = 0
    for found in draws(5, 6000 * DEPTH, 0.9, (2, 3)):
        try:
            findings = examine(problem_from_json(random_data.document(found)))
        except Refused:
            continue
        assert findings.quiver is not None and findings.additive is not None
        case = case_of(found, findings.quiver.base)
        if findings.additive.status == "criterion" and number_of_vectors(case) <= 12_000:
            assert exists(case) is True, found
            seen += 1
        if seen >= 25 * DEPTH:
            break
    assert seen >= 10


def test_the_enumeration_can_disagree() -> None:
    """A case with one value moved off its wall must change the answer of the enumeration as well."""
    zero, one, two, three, half = (Fraction(n, 2) for n in (0, 2, 4, 6, 1))
    on_wall: list[Pole] = [[({}, [(a, [1]), (b, [1])])] for a, b in ((one, zero), (two, zero), (-three, zero))]
    off_wall: list[Pole] = [
        [({}, [(a, [1]), (b, [1])])] for a, b in ((one, zero), (two, zero), (-two - half, half - one))
    ]
    assert exists(case_of(on_wall, 0)) is False
    assert exists(case_of(off_wall, 0)) is True
