"""Findings of ramified data: diagram, formal figures and certificates as JSON and text, and the way back."""

import copy
import json
from typing import Any

import jsonschema
import pytest

from app.errors import Refused
from app.findings.findings import examine
from app.findings.ramified_json import ramified_checks
from app.findings.schema import schema
from app.findings.text import findings_text
from app.local.document import problem_from_json
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand
from tests.local.document_parts import block, log_pole, make, pole

CASES = {
    "fuchs": problem_from_json(make(pole("infinity", block({"1/2": 1}, (1, [1]))), log_pole(0, (0, [2])))),
    "rigidity-excess": problem_from_json(
        make(pole(0, block({"1/2": 1}, (0, [1])), block({"1/2": 2}, (0, [1]))), log_pole(1, (0, [2, 2])))
    ),
    "jordan-blocks": problem_from_shorthand("(1)_3/2,11"),
    "jordan-blocks, no log pole": problem_from_shorthand("(1)_5/2"),
    "free-residue": problem_from_shorthand("(1)_4/3,21,21"),
    "free-residue, two poles": problem_from_shorthand("(1)_1/2,(1)_1/2"),
    "residue-sum": problem_from_shorthand("(1)_1/2,(1)(1),11"),
    "large-eigenspace": problem_from_shorthand("(1)_1/5,41,41"),
    "open": problem_from_shorthand("(1)_3/2(1)_0,111"),
}


def written(problem: Problem) -> dict[str, Any]:
    found: dict[str, Any] = json.loads(json.dumps(examine(problem).as_json()))
    return found


@pytest.mark.parametrize("name", CASES)
def test_findings_keep_to_their_schema_and_pass_their_own_check(name: str) -> None:
    findings = written(CASES[name])
    jsonschema.validate(findings, schema("findings"))
    certificate = findings["additive"]["certificate"]
    assert (certificate["kind"] if certificate else "open") == name.partition(",")[0]
    checks = ramified_checks(CASES[name], findings)
    assert checks and [one for one in checks if not one.holds] == []


def test_the_diagram_carries_weights_and_signs() -> None:
    """One orbit of z^(−5/2) beside a log pole, by hand: C_00 = 4 + 1 − 5 = 0, and 2 edges to the leg."""
    found = written(problem_from_shorthand("(1)_5/2,11"))
    vertex = {"id": "0.0", "role": "core", "pole": 0, "block": 0, "dimension": 1, "weight": 2}
    leg = {"id": "1.0.1", "role": "leg", "pole": 1, "block": 0, "leg": 1, "dimension": 1, "weight": 1}
    entries = [["0.0", "1.0.1", -2], ["1.0.1", "1.0.1", 2]]
    assert found["diagram"] == {"base": 0, "vertices": [vertex, leg], "entries": entries}
    assert found["dimension"] == 4 and found["quiver"] is None
    assert written(problem_from_shorthand("(1)(1),11"))["diagram"] is None


def test_formal_figures_of_every_pole() -> None:
    found = written(problem_from_shorthand("(1)_3/2(1)_0,(1)(11)"))
    assert found["formal"] == [
        {"pole": 0, "irregularity": 3, "slopes": [["0", 1], ["3/2", 2]], "newton_polygon": [[0, 0], [1, 0], [3, 3]]},
        {"pole": 1, "irregularity": 3, "slopes": [["1", 3]], "newton_polygon": [[0, 0], [3, 3]]},
    ]


def test_text_shows_slopes_polygon_and_diagram() -> None:
    text = findings_text(examine(problem_from_shorthand("(1)_1/2,11,11")))
    assert "slopes at pole 1  1/2 (2 times); irregularity 1" in text
    assert "Newton polygon    (0, 0), (2, 1)" in text
    assert "diagram           0.0: 1 of weight 2, 1.0.1: 1, 2.0.1: 1; base pole 1" in text
    assert "edges             0.0 – 1.0.1: 2, 0.0 – 2.0.1: 2" in text
    assert "loops             0.0: -1" in text
    plain = findings_text(examine(problem_from_shorthand("21,111,111")))
    assert "slopes" not in plain and "diagram" not in plain


@pytest.mark.parametrize(("name", "change"), [
    ("jordan-blocks", lambda c: c.update(counts=[1])),
    ("jordan-blocks", lambda c: c.update(other=None)),
    ("jordan-blocks", lambda c: c.update(pole=1)),
    ("jordan-blocks", lambda c: c.update(slope="7/2")),
    ("free-residue, two poles", lambda c: c.update(second=0)),
    ("residue-sum", lambda c: c["columns"].__setitem__(0, [0]) or c["columns"].__setitem__(1, [0])),
    ("residue-sum", lambda c: c["gauges"].pop()),
    ("large-eigenspace", lambda c: c.update(dimension=9)),
    ("large-eigenspace", lambda c: c.update(choices=[[1, 0, 1], [2, 0, 0]])),
    ("rigidity-excess", lambda c: c.update(index=3)),
    ("fuchs", lambda c: c.update(defect="2")),
])  # fmt: skip
def test_spoiled_certificates_are_found(name: str, change: Any) -> None:
    findings = copy.deepcopy(written(CASES[name]))
    change(findings["additive"]["certificate"])
    assert any(not one.holds for one in ramified_checks(CASES[name], findings))


@pytest.mark.parametrize(("name", "change", "place"), [
    ("jordan-blocks", {"kind": "vision"}, "kind"),
    ("jordan-blocks", {"slope": "1/0"}, "slope"),
    ("jordan-blocks", {"slope": 1.5}, "slope"),
    ("jordan-blocks", {"pole": 7}, "pole"),
    ("jordan-blocks", {"pole": None}, "pole"),
    ("jordan-blocks", {"counts": [True]}, "counts"),
    ("free-residue", {"second": "x"}, "second"),
    ("residue-sum", {"columns": [[0.5]]}, "columns/0"),
    ("residue-sum", {"gauges": [{"pole": 1, "terms": []}]}, "gauges/0"),
    ("residue-sum", {"gauges": "none"}, "gauges/0"),
    ("large-eigenspace", {"choices": [[1, 0]]}, "choices/0"),
    ("large-eigenspace", {"dimension": None}, "dimension"),
    ("fuchs", {"defect": "1+"}, "defect"),
])  # fmt: skip
def test_unreadable_certificates_are_refused_with_their_place(name: str, change: dict[str, Any], place: str) -> None:
    findings = written(CASES[name])
    findings["additive"]["certificate"].update(change)
    with pytest.raises(Refused) as refused:
        ramified_checks(CASES[name], findings)
    assert refused.value.places[0].at == f"/findings/additive/certificate/{place}"
