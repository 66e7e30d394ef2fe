"""Findings as JSON: the shape, the example of the documented interface, and the schemas."""

import json
import subprocess
import sys
from typing import Any

import jsonschema
import pytest

from app.errors import NotFound, Refused
from app.findings.findings import Findings, examine, examine_cached
from app.findings.schema import NAMES, schema
from app.findings.types import FindingsJson
from app.local.document import problem_from_json
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand

DOCUMENT: dict[str, Any] = {
    "format": "polewright-problem/1",
    "name": "an order-3 pole and two log poles, rank 3",
    "symbols": ["a", "b"],
    "poles": [
        {
            "at": "0",
            "blocks": [
                {"exponent": {}, "residue": [{"value": "a", "jordan": [1, 1]}, {"value": "b", "jordan": [1]}]},
            ],
        },
        {"at": "1", "blocks": [{"exponent": {}, "residue": [{"value": "0", "jordan": [2, 1]}]}]},
        {
            "at": "infinity",
            "blocks": [
                {"exponent": {"2": "1/2", "1": "-a"}, "residue": [{"value": "1/3", "jordan": [1]}]},
                {"exponent": {}, "residue": [{"value": "*", "jordan": [1, 1]}]},
            ],
        },
    ],
}

TYPES = ["11,11,11", "21,111,111", "11,11,11,11", "(1)(1),11,11", "((1))((1)),11", "(1)(1),(1)(1)", "22,22,22,22"]


def airy() -> Problem:
    """Airy's equation: one pole, exponent z^(−3/2), value 0."""
    block = {"exponent": {"3/2": "2/3"}, "residue": [{"value": "0", "jordan": [1]}]}
    document = {"format": "polewright-problem/1", "poles": [{"at": "infinity", "blocks": [block]}]}
    return problem_from_json(document | {"name": "", "symbols": []})


def test_the_documented_example() -> None:
    """Every figure of the example was worked out by hand from the published definitions of quiver and parameters."""
    found = examine(problem_from_json(DOCUMENT)).as_json()
    assert found["rank"] == 3 and found["dimension"] == 4 and found["rigidity_index"] == -2
    assert found["fuchs"] == {"holds": True, "defect": "0"}
    assert found["solved"] == {"at": "/poles/2/blocks/1/residue/0/value", "value": "-a-1/2*b-1/6"}
    assert [orbit["dimension"] for orbit in found["orbits"]] == [4, 4, 12]
    assert [orbit["slope"] for orbit in found["orbits"]] == ["0", "0", "2"]
    quiver = found["quiver"]
    assert quiver["base"] == 2 and quiver["type"] == "hyperbolic"
    assert [vertex["id"] for vertex in quiver["vertices"]] == ["2.0", "2.1", "0.0.1", "1.0.1"]
    assert [vertex["dimension"] for vertex in quiver["vertices"]] == [1, 2, 1, 1]
    assert [vertex["parameter"] for vertex in quiver["vertices"]] == ["-a-1/3", "1/2*b+1/6", "a-b", "0"]
    assert ["leg" in vertex for vertex in quiver["vertices"]] == [False, False, True, True]
    pairs = [("2.0", "2.1"), ("2.0", "0.0.1"), ("2.1", "0.0.1"), ("2.0", "1.0.1"), ("2.1", "1.0.1")]
    assert quiver["edges"] == [(*pair, 1) for pair in pairs]
    assert found["root"] == {"class": "anisotropic", "p": 2}
    assert found["additive"]["exists"] is True and found["additive"]["status"] == "proved"
    assert found["additive"]["certificate"]["kind"] == "reflections"
    assert found["multiplicative"] is None and found["walls"] is None


def test_keys_stand_in_the_documented_order() -> None:
    found = examine(problem_from_json(DOCUMENT)).as_json()
    assert list(found) == list(FindingsJson.__annotations__)


@pytest.mark.parametrize("shorthand", TYPES)
def test_findings_keep_to_their_schema(shorthand: str) -> None:
    found = json.loads(json.dumps(examine(problem_from_shorthand(shorthand)).as_json()))
    jsonschema.validate(found, schema("findings"))


def test_ramified_findings_keep_to_their_schema() -> None:
    findings = examine(airy())
    found = json.loads(json.dumps(findings.as_json()))
    jsonschema.validate(found, schema("findings"))
    assert found["additive"]["status"] == "proved" and found["additive"]["exists"] is True
    assert found["quiver"] is None and found["root"] is None
    assert (found["rank"], found["dimension"], found["rigidity_index"]) == (2, 0, 2)


def test_a_wrong_result_breaks_the_schema() -> None:
    found = json.loads(json.dumps(examine(problem_from_json(DOCUMENT)).as_json()))
    found["additive"]["status"] = "likely"
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.validate(found, schema("findings"))


def test_documents_and_errors_keep_to_their_schemas() -> None:
    jsonschema.validate(DOCUMENT, schema("problem"))
    with pytest.raises(Refused) as refused:
        problem_from_json(DOCUMENT | {"colour": "red"})
    jsonschema.validate({"error": refused.value.as_json()}, schema("error"))
    assert set(NAMES) >= {"problem", "findings", "error"}
    with pytest.raises(NotFound):
        schema("weather")


def test_the_cache_knows_a_problem_by_its_canonical_form() -> None:
    first: Findings = examine_cached(problem_from_json(DOCUMENT))
    assert examine_cached(problem_from_json(json.loads(json.dumps(DOCUMENT)))) is first
    assert examine_cached(problem_from_json(DOCUMENT | {"name": "another"})) is not first


def test_resonances_are_pairs_with_integer_difference() -> None:
    document = json.loads(json.dumps(DOCUMENT))
    document["poles"][0]["blocks"][0]["residue"] = [
        {"value": "a+2", "jordan": [1]},
        {"value": "a", "jordan": [1]},
        {"value": "1/2", "jordan": [1]},
    ]
    found = examine(problem_from_json(document)).as_json()
    assert found["resonances"] == [{"pole": 0, "block": 0, "values": ("a", "a+2"), "difference": 2}]


def test_examining_imports_nothing_heavy() -> None:
    program = (
        "import sys; from app.__main__ import main; status = main(['examine', '--type', '21,111,111', '--json']);"
        "heavy = {'sympy', 'scipy', 'numpy', 'networkx', 'fastapi', 'starlette', 'pydantic', 'jinja2', 'flint'};"
        "print(sorted(heavy & set(sys.modules)), file=sys.stderr); sys.exit(status)"
    )
    run = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert run.stderr.strip() == "[]"


def test_the_descent_of_local_monodromies_stops_at_integers() -> None:
    """θ_1 + θ_2 + θ_3 = 1 for one eigenvalue of each pole: the middle convolution there is trivial."""
    poles = [
        {"at": str(k), "blocks": [{"exponent": {}, "local_monodromy": [{"value": v, "jordan": [1]} for v in pair]}]}
        for k, pair in enumerate((("1/2", "0"), ("1/3", "0"), ("1/6", "0")))
    ]
    document = {"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles}
    findings = examine(problem_from_json(document))
    assert findings.descent == ()
    assert findings.multiplicative is not None and findings.multiplicative.exists is False


def test_rank_one_is_said_to_be_rank_one() -> None:
    verdict = examine(problem_from_shorthand("1,1,1")).additive
    assert verdict is not None and verdict.exists is True and verdict.reason.startswith("The rank is one")
