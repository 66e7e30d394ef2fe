"""Certificates read back from JSON and checked against their problem; spoiled ones are found."""

import copy
import json
from typing import Any

import pytest

from app.errors import Refused
from app.findings.findings import examine
from app.findings.recheck import recheck
from app.local.document import problem_from_json
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand


def log_problem(*poles: list[tuple[str, list[int]]]) -> Problem:
    """Log poles at 0, 1, 2, … given as (value, Jordan sizes)."""
    document: dict[str, Any] = {"format": "polewright-problem/1", "name": "", "symbols": [], "poles": []}
    for k, classes in enumerate(poles):
        residue = [{"value": value, "jordan": jordan} for value, jordan in classes]
        document["poles"].append({"at": str(k), "blocks": [{"exponent": {}, "residue": residue}]})
    return problem_from_json(document)


HALVES = [("1/2", [1, 1]), ("-1/2", [1, 1])]
CASES = {
    "rigid": problem_from_shorthand("21,111,111"),
    "four log poles": problem_from_shorthand("11,11,11,11"),
    "two irregular poles": problem_from_shorthand("(1)(1),(1)(1),11"),
    "not a root": problem_from_shorthand("21,21,21"),
    "Fuchs relation fails": log_problem([("1", [1]), ("0", [1])], [("0", [1]), ("1", [1])], [("5", [2])]),
    "twice the smallest isotropic root": log_problem(HALVES, HALVES, HALVES, HALVES),
    "vanishing parameter": log_problem([("1", [1]), ("0", [1])], [("2", [1]), ("0", [1])], [("-3", [1]), ("0", [1])]),
}


def written(problem: Problem) -> dict[str, Any]:
    """Findings as another program would read them."""
    found: dict[str, Any] = json.loads(json.dumps(examine(problem).as_json()))
    return found


@pytest.mark.parametrize("name", CASES)
def test_own_findings_pass(name: str) -> None:
    checks = recheck(CASES[name], written(CASES[name]))
    assert len(checks) > 9
    assert [one for one in checks if not one.holds] == []


def test_all_kinds_of_certificate_occur() -> None:
    kinds = {written(problem)["additive"]["certificate"]["kind"] for problem in CASES.values()}
    assert kinds == {"reflections", "decomposition", "not-a-root", "fuchs"}


def spoil(findings: dict[str, Any], change: Any) -> dict[str, Any]:
    spoiled = copy.deepcopy(findings)
    change(spoiled)
    return spoiled


def test_spoiled_certificates_are_found() -> None:
    spoilers: list[tuple[str, Any]] = [
        ("rigid", lambda f: f["additive"]["certificate"]["steps"].pop()),
        ("rigid", lambda f: f["additive"].update(exists=False)),
        ("rigid", lambda f: f.update(dimension=2)),
        ("four log poles", lambda f: f["additive"]["certificate"].update(criterion="coordinate vector")),
        ("four log poles", lambda f: f["additive"]["certificate"]["reduced"].__setitem__(0, 3)),
        ("not a root", lambda f: f["additive"]["certificate"]["steps"].pop()),
        ("Fuchs relation fails", lambda f: f["additive"]["certificate"].update(defect="7")),
        ("vanishing parameter", lambda f: f["additive"]["certificate"]["parts"].pop()),
        ("vanishing parameter", lambda f: f["additive"]["certificate"]["parts"][0].update(multiplicity=-1)),
        ("twice the smallest isotropic root", lambda f: f["additive"]["certificate"]["parts"][0].update(p=9)),
    ]
    for name, change in spoilers:
        checks = recheck(CASES[name], spoil(written(CASES[name]), change))
        assert any(not one.holds for one in checks), name


def test_a_certificate_of_another_problem_does_not_pass() -> None:
    """The parameters of the certificate's own problem count, not those of the findings."""
    generic = CASES["four log poles"]
    special = log_problem(*[[("1/3", [1]), ("-1/3", [1])]] * 4)
    assert any(not one.holds for one in recheck(special, written(generic)))


@pytest.mark.parametrize(
    ("spoiler", "place"),
    [
        (lambda f: f["additive"]["certificate"].update(kind="vision"), "/findings/additive/certificate/kind"),
        (lambda f: f["additive"]["certificate"].update(steps=["9.9"]), "/findings/additive/certificate/steps/0"),
        (lambda f: f["additive"]["certificate"].update(reduced=[1]), "/findings/additive/certificate/reduced"),
        (lambda f: f["additive"].update(exists="yes"), "/findings/additive"),
    ],
)
def test_unreadable_findings_are_refused_with_their_place(spoiler: Any, place: str) -> None:
    problem = CASES["rigid"]
    with pytest.raises(Refused) as refused:
        recheck(problem, spoil(written(problem), spoiler))
    assert refused.value.places[0].at == place
