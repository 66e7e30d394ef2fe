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
from app.findings.findings import examine
from app.local.document import problem_from_json
from app.roots.build import quiver_of
from tests.existence import random_data
from tests.existence.brute_force import Pole, case_of, exists, number_of_vectors
from tests.existence.comparison import LARGEST, case_of_quiver, compare, compare_case
from tests.existence.shaped_data import raised

DEPTH = 10 if os.environ.get("POLEWRIGHT_DEEP") else 1


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
        "additive no, vanishing parameter",
        "additive no, NotARoot",
        "additive no, FuchsDefect",
        "additive yes, fundamental set",
        "additive yes, enumeration",
        "additive yes, coordinate vector",
        "multiplicative no, vanishing parameter",
        "multiplicative yes, coordinate vector",
    ):
        assert counts[what] > 0, what


@pytest.mark.parametrize("decided_by", ["enumeration", "criterion"])
def test_several_core_poles_with_small_parameters(
    decided_by: str, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    """Diagrams of problems with several core poles, α carried by reflections, λ redrawn from −1, 0, 1.

    This is the case where the program's criterion is not a theorem, so special parameters are wanted often.  Once the
    program enumerates small vectors itself, as it does; once it may not, so that its criterion alone is compared.
    """
    if decided_by == "criterion":
        monkeypatch.setattr("app.existence.decide.is_small", lambda vector: False)
    generator = random.Random(6)
    counts: Counter[str] = Counter()
    for found in draws(7, 2500 * DEPTH, 0.9, (2, 3)):
        try:
            quiver = quiver_of(problem_from_json(random_data.document(found)))
        except Refused:
            continue
        case = case_of_quiver(quiver)
        if len(case.groups) < 2:
            continue
        case = raised(generator, case, generator.choice([0, 2, 4]))
        case.parameters = [Fraction(generator.choice([0, 0, 1, -1])) for _ in case.alpha]
        fixed = generator.choice(case.groups[0])
        off = sum((a * n for a, n in zip(case.parameters, case.alpha, strict=True)), Fraction(0))
        case.parameters[fixed] -= off / case.alpha[fixed]
        if number_of_vectors(case) <= LARGEST:
            compare_case(quiver, case, counts, modulo_integers=False)
    with capsys.disabled():
        print("\n" + "\n".join(f"  {number:6} {what}" for what, number in sorted(counts.items())))
    assert counts["several core poles no, vanishing parameter"] > 0
    expected = {"enumeration": "yes, enumeration", "criterion": "yes, fundamental set, several poles"}[decided_by]
    assert counts[f"several core poles {expected}"] > 200 * DEPTH
    assert counts["several core poles no"] > 50 * DEPTH


@pytest.mark.parametrize(("times", "order"), [(1, 1), (2, 1), (2, 2), (3, 1), (3, 3), (4, 2)])
def test_multiples_of_an_isotropic_root_modulo_integers(times: int, order: int) -> None:
    """m m, m m, m m, m m: an irreducible one exists exactly when the order of θ·δ modulo Z is m itself.

    Crawley-Boevey and Shaw, Adv. Math. 201 (2006).
    """
    pairs = [(Fraction(0), Fraction(1, n)) for n in (11, 13, 17)]
    seventh = Fraction(1, 7)
    pairs.append((seventh, Fraction(1, order) - seventh - sum(pair[1] for pair in pairs)))
    found: list[Pole] = [[({}, [(value, [1] * times) for value in pair])] for pair in pairs]
    verdict = examine(problem_from_json(random_data.document(found, "local_monodromy"))).multiplicative
    assert verdict is not None and verdict.quiver is not None
    assert verdict.exists is (order == times)
    assert exists(case_of_quiver(verdict.quiver), modulo_integers=True) is (order == times)


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
