"""The exceptions of the fundamental set against enumeration: multiples of affine types, with a vertex at an end or not.

POLEWRIGHT_DEEP=1 makes the runs ten times as long.
"""

import os
import random
from collections import Counter
from fractions import Fraction

import pytest

from app.local.document import problem_from_json
from app.roots.build import quiver_of
from tests.existence import random_data, shaped_data
from tests.existence.brute_force import number_of_vectors
from tests.existence.comparison import LARGEST, case_of_quiver, compare, compare_case
from tests.existence.shaped_data import AFFINE, End

DEPTH = 10 if os.environ.get("POLEWRIGHT_DEEP") else 1
LOG = ["four log poles", "rank 3, three log poles"]
ONE_CORE = [name for name in AFFINE if name != "two of order 2"]
ENDS: list[End | None] = [None, "jordan", "distinct"]


def shown(capsys: pytest.CaptureFixture[str], counts: Counter[str]) -> None:
    with capsys.disabled():
        print("\n" + "\n".join(f"  {number:6} {what}" for what, number in sorted(counts.items())))


def test_multiples_with_and_without_an_end(capsys: pytest.CaptureFixture[str]) -> None:
    """Every affine type, twice and three times, for the residues' own values."""
    generator = random.Random(21)
    counts: Counter[str] = Counter()
    for name in AFFINE:
        for times in (2, 3):
            for end in ENDS:
                for _ in range(4 * DEPTH):
                    found = shaped_data.multiple(generator, name, times, end, Fraction(0))
                    if found is not None:
                        compare(found, counts, largest=25_000)
    shown(capsys, counts)
    for what in (
        "additive no, multiple of an isotropic root",
        "additive no, affine end",
        "additive yes, fundamental set",
        "several core poles no, multiple of an isotropic root",
        "several core poles no, affine end",
        "multiplicative no, multiple of an isotropic root",
        "multiplicative no, affine end",
        "multiplicative yes, fundamental set",
    ):
        assert counts[what] > 0, what


def test_multiples_for_local_monodromies(capsys: pytest.CaptureFixture[str]) -> None:
    """θ·mδ is any integer, so θ·δ has any order dividing m modulo Z."""
    generator = random.Random(22)
    counts: Counter[str] = Counter()
    for name in LOG:
        for times in (2, 3):
            for end in ENDS:
                for _ in range(20 * DEPTH):
                    total = Fraction(generator.randint(-2, 2))
                    found = shaped_data.multiple(generator, name, times, end, total)
                    if found is not None:
                        compare(found, counts, reading="local_monodromy", largest=25_000)
    shown(capsys, counts)
    for what in (
        "multiplicative yes, fundamental set",
        "multiplicative no, multiple of an isotropic root",
        "multiplicative no, affine end",
    ):
        assert counts[what] > 0, what


def test_after_reflections(capsys: pytest.CaptureFixture[str]) -> None:
    """The same shapes carried away from the fundamental set, so that certificates have to be pulled back."""
    generator = random.Random(23)
    counts: Counter[str] = Counter()
    for name in AFFINE:
        for end in ENDS:
            for _ in range(12 * DEPTH):
                found = shaped_data.multiple(generator, name, 2, end, Fraction(0))
                if found is None:
                    continue
                quiver = quiver_of(problem_from_json(random_data.document(found)))
                case = shaped_data.raised(generator, case_of_quiver(quiver), 6)
                if number_of_vectors(case) > LARGEST:
                    counts["too large to enumerate"] += 1
                    continue
                compare_case(quiver, case, counts, modulo_integers=False)
                if len(case.groups) == 1:
                    compare_case(quiver, case, counts, modulo_integers=True)
    shown(capsys, counts)
    for what in (
        "additive no, affine end",
        "additive no, vanishing parameter",
        "several core poles no, affine end",
        "multiplicative no, affine end",
        "yes, after reflections",
    ):
        assert counts[what] > 0, what


@pytest.mark.parametrize("modulo_integers", [False, True])
def test_multiples_carried_outside_their_support(modulo_integers: bool) -> None:
    """A multiple of δ is fixed by the reflections of its own diagram; one more vertex carries it to other vectors."""
    generator = random.Random(24)
    counts: Counter[str] = Counter()
    for _ in range(60 * DEPTH):
        name = generator.choice(ONE_CORE)
        times = generator.choice([2, 3])
        found = shaped_data.multiple(generator, name, times, "distinct", Fraction(0))
        if found is None:
            continue
        quiver = quiver_of(problem_from_json(random_data.document(found)))
        case = case_of_quiver(quiver)
        # the last vertex is the further one: without it α is mδ, and λ at the core is moved so that θ·δ is k/m
        end = len(case.alpha) - 1
        case.alpha[end] = 0
        core = case.groups[0][0]
        delta = [n // times for n in case.alpha]
        value = sum((a * n for a, n in zip(case.parameters, delta, strict=True)), Fraction(0))
        aimed = Fraction(generator.randint(0, times - 1), times) if modulo_integers else Fraction(0)
        case.parameters[core] += (aimed - value) / delta[core]
        case = shaped_data.raised(generator, case, 8)
        if number_of_vectors(case) <= LARGEST:
            compare_case(quiver, case, counts, modulo_integers=modulo_integers)
            counts["carried"] += case.alpha[end] > 0
    problem = "multiplicative" if modulo_integers else "additive"
    assert counts[f"{problem} no, multiple of an isotropic root"] > 0 and counts["carried"] > 5, counts
    assert not modulo_integers or counts["multiplicative yes, fundamental set"] > 0, counts
