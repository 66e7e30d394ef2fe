"""Every demo problem is in canonical form and shows what it is meant to show."""

from dataclasses import dataclass
from itertools import product
from pathlib import Path

import pytest

from app.existence.check import Check, check
from app.existence.check_ramified import check_ramified
from app.existence.verdict import Verdict
from app.findings.findings import Findings, examine
from app.local.document import read_document
from app.local.writer import canonical_text

FOLDER = Path(__file__).parent.parent / "demo_data"
FILES = sorted(FOLDER.glob("*.json"))


@dataclass(frozen=True)
class Meant:
    """What a demo shows: rank, dimension, verdicts (additive, multiplicative), how, and the type of its quiver."""

    rank: int
    dimension: int
    additive: bool | None
    multiplicative: bool | None
    how: str
    type: str | None


MEANT = {
    "01-four-buoys": Meant(2, 2, True, True, "fundamental set", "D4^(1)"),
    "02-two-buoys-meet": Meant(2, 2, True, None, "fundamental set", "A3^(1)"),
    "03-three-buoys-meet": Meant(2, 2, True, None, "fundamental set", "A2^(1)"),
    "04-all-buoys-meet": Meant(2, 2, True, None, "fundamental set", "A1^(1)"),
    "05-two-pairs-meet": Meant(2, 2, True, None, "enumeration", "A3^(1)"),
    "06-third-order-tide": Meant(3, 0, True, True, "coordinate vector", "E6"),
    "07-fifth-order-tide": Meant(5, 0, True, True, "coordinate vector", "indefinite"),
    "08-a-jordan-block-at-the-pier": Meant(3, 0, True, True, "coordinate vector", "E6"),
    "09-two-storm-fronts": Meant(3, 10, True, None, "enumeration", "indefinite"),
    "10-twice-four-buoys": Meant(4, 2, False, False, "multiple of an isotropic root", "D4^(1)"),
    "11-a-hidden-summand": Meant(4, 4, False, False, "affine end", "hyperbolic"),
    "12-a-leaking-gauge": Meant(2, 0, False, False, "vanishing parameter", "D4"),
    "13-the-sum-is-wrong": Meant(2, 0, False, False, "", "D4"),
    "14-on-a-wall": Meant(3, 0, False, False, "vanishing parameter", "E6"),
    "15-monodromy-of-the-lock": Meant(4, 2, None, True, "fundamental set", "D4^(1)"),
    "16-the-light-at-the-cape": Meant(2, 0, True, None, "", None),
    "17-resonant-buoys": Meant(2, 0, True, False, "coordinate vector", "D4"),
}


def findings_of(name: str) -> Findings:
    return examine(read_document((FOLDER / f"{name}.json").read_bytes()))


def claims_of(findings: Findings, verdict: Verdict) -> tuple[Check, ...]:
    """The claims of a verdict's certificate, worked out again."""
    if verdict.ramified is not None:
        return check_ramified(findings.problem, verdict.ramified, verdict.exists)
    return check(verdict)


def test_every_demo_is_described_here_and_has_a_name_of_its_own() -> None:
    assert [file.stem for file in FILES] == list(MEANT)
    problems = [read_document(file.read_bytes()) for file in FILES]
    assert len({problem.name for problem in problems}) == len(FILES) >= 10
    assert all(len(problem.notes) > 60 for problem in problems)


@pytest.mark.parametrize("file", FILES, ids=lambda file: file.stem)
def test_the_file_is_in_canonical_form(file: Path) -> None:
    assert canonical_text(read_document(file.read_bytes())).encode() == file.read_bytes()


@pytest.mark.parametrize("name", MEANT)
def test_the_demo_shows_what_it_is_meant_to_show(name: str) -> None:
    findings, meant = findings_of(name), MEANT[name]
    assert (findings.rank, findings.dimension, findings.support_type) == (meant.rank, meant.dimension, meant.type)
    assert (None if findings.additive is None else findings.additive.exists) == meant.additive
    assert (None if findings.multiplicative is None else findings.multiplicative.exists) == meant.multiplicative
    decisive = findings.additive or findings.multiplicative
    assert decisive is not None
    assert getattr(decisive.certificate, "criterion", "") == meant.how
    for verdict in (findings.additive, findings.multiplicative):
        if verdict is not None:
            claims = claims_of(findings, verdict)
            assert claims and all(one.holds for one in claims)


def test_single_points_of_the_scenario() -> None:
    assert not findings_of("13-the-sum-is-wrong").fuchs_holds
    assert "Airy equation" in [family.name for family in findings_of("16-the-light-at-the-cape").families]
    painleve = [findings_of(name).families[0].name for name in list(MEANT)[:5]]
    assert painleve == ["Painlevé VI", "Painlevé V", "Painlevé IV", "Painlevé II", "Painlevé III(D6)"]


def test_the_resonances_that_separate_system_and_monodromy() -> None:
    """The three values 3/10, 9/20 and −7/4 sum to −1: no obstacle to a system, and one to its monodromy."""
    findings = findings_of("17-resonant-buoys")
    poles = findings.problem.poles
    values = [[e.value.as_rational() for e in pole.blocks[0].residue] for pole in poles]
    sums = [sum(chosen) for chosen in product(*values)]  # type: ignore[arg-type]
    assert 0 not in sums and any(value.denominator == 1 for value in sums)


def test_the_wall_is_left_when_the_value_moves() -> None:
    text = (FOLDER / "14-on-a-wall.json").read_text(encoding="utf-8")
    assert '"value":"-a1"' in text.replace(" ", "")
    moved = text.replace('"-a1"', '"-a1+1/7"')
    verdict = examine(read_document(moved)).additive
    assert verdict is not None and verdict.exists is True
