"""POST /api/examine and the descriptions of the interface."""

import json

import jsonschema
import pytest

from app.findings.findings import examine
from app.findings.schema import NAMES, schema
from app.local.document import read_document
from app.local.shorthand import problem_from_shorthand
from app.local.writer import canonical_text

EXAMINE = "/api/examine"
SHORTHANDS = ["11,11,11,11", "21,111,111", "(1)(1),11,11", "22,22,22,22"]


@pytest.mark.parametrize("line", SHORTHANDS)
def test_a_shorthand_and_its_document_give_the_same_findings(client, line):
    problem = problem_from_shorthand(line)
    expected = json.loads(json.dumps(examine(problem).as_json()))
    by_type = client.post(EXAMINE, json={"type": line})
    by_document = client.post(EXAMINE, content=canonical_text(problem).encode())
    assert by_type.status_code == by_document.status_code == 200
    assert by_type.json() == by_document.json() == expected


def test_findings_are_utf8(client):
    document = json.loads(canonical_text(problem_from_shorthand("11,11,11")))
    document["name"] = "Größe α"
    response = client.post(EXAMINE, content=json.dumps(document).encode())
    assert response.json()["name"] == "Größe α"
    assert "Größe α".encode() in response.content


def test_the_declared_type_of_the_body_does_not_matter(client):
    for content_type in ("application/json", "text/plain", "application/x-www-form-urlencoded", "nonsense"):
        response = client.post(EXAMINE, content=b'{"type": "11,11,11"}', headers={"Content-Type": content_type})
        assert response.status_code == 200


REFUSALS = {
    "nothing": (b"", 400, "malformed", None),
    "no JSON": (b"{", 400, "malformed", None),
    "not UTF-8": (b'{"type": "\xff"}', 400, "malformed", None),
    "a list": (b"[]", 422, "refused", ""),
    "a number": (b"3", 422, "refused", ""),
    "no keys": (b"{}", 422, "refused", ""),
    "a type that is no text": (b'{"type": 5}', 422, "refused", "/type"),
    "a faulty shorthand": (b'{"type": "11,1x"}', 422, "refused", "/type"),
    "a type beside others": (b'{"type": "11,11,11", "name": "x"}', 422, "refused", "/type"),
    "a duplicate key": (b'{"type": "11,11,11", "type": "11,11"}', 422, "refused", "/type"),
    "NaN": (b'{"type": NaN}', None, None, None),
    "deep nesting": (b"[" * 5000 + b"]" * 5000, None, None, None),
    "a huge integer": (b'{"type": ' + b"9" * 100_000 + b"}", None, None, None),
    "a lone surrogate": (b'{"type": "\\ud800"}', 422, "refused", "/type"),
}


@pytest.mark.parametrize(("body", "status", "kind", "at"), REFUSALS.values(), ids=REFUSALS.keys())
def test_refusals(client, body, status, kind, at):
    response = client.post(EXAMINE, content=body)
    error = response.json()["error"]
    assert response.status_code in ((400, 413, 422) if status is None else (status,))
    assert response.headers["content-type"] == "application/json"
    assert kind is None or error["kind"] == kind
    jsonschema.validate(response.json(), schema("error"))
    if at is not None:
        assert at in [place["at"] for place in error["places"]]


def test_all_faults_of_a_document_come_together(client):
    document = json.loads(canonical_text(problem_from_shorthand("11,11,11")))
    document["poles"][0]["at"] = "1//2"
    document["poles"][1]["blocks"][0]["residue"][0]["value"] = "("
    error = client.post(EXAMINE, json=document).json()["error"]
    assert [place["at"] for place in error["places"]] == ["/poles/0/at", "/poles/1/blocks/0/residue/0/value"]
    assert all(place["message"] and place["expected"] for place in error["places"])


def test_findings_match_their_schema(client):
    for line in SHORTHANDS:
        jsonschema.validate(client.post(EXAMINE, json={"type": line}).json(), schema("findings"))


@pytest.mark.parametrize("name", NAMES)
def test_schemas(client, name):
    response = client.get(f"/api/schema/{name}")
    assert response.status_code == 200
    assert response.json() == schema(name)
    jsonschema.Draft202012Validator.check_schema(response.json())


def test_an_unknown_schema(client):
    response = client.get("/api/schema/nonsense")
    assert response.status_code == 404
    assert response.json()["error"]["kind"] == "not_found"


def test_the_interface_describes_itself(client):
    described = client.get("/api/openapi.json").json()
    assert described["info"]["title"] == "Polewright"
    assert set(described["paths"]) == {
        "/api/examine",
        "/api/schema/{name}",
        "/api/construct",
        "/api/jobs/{job_id}",
        "/api/operate",
        "/api/walls",
        "/api/closures",
    }
    examine_described = described["paths"]["/api/examine"]["post"]
    assert {"200", "400", "403", "413", "422", "503"} <= set(examine_described["responses"])
    # every schema that the description refers to is served by the program itself
    assert set(references(described)) >= {"/api/schema/problem", "/api/schema/findings", "/api/schema/error"}
    for reference in references(described):
        if not reference.startswith("#"):
            assert client.get(reference).status_code == 200


def references(data):
    if isinstance(data, dict):
        if isinstance(data.get("$ref"), str):
            yield data["$ref"]
        for value in data.values():
            yield from references(value)
    elif isinstance(data, list):
        for value in data:
            yield from references(value)


def test_there_are_no_pages_that_load_from_elsewhere(client):
    for path in ("/docs", "/redoc", "/openapi.json"):
        assert client.get(path).status_code == 404


def test_a_document_of_the_largest_rank(client):
    response = client.post(EXAMINE, json={"type": "1^400,1^400,[399]1"})
    assert response.status_code == 200
    assert response.json()["rank"] == 400
    assert read_document(canonical_text(problem_from_shorthand("1^400,1^400,[399]1"))).rank == 400


def test_faults_of_text_and_content_come_together(client):
    body = '{"format": "polewright-problem/1", "name": 7, "symbols": [], "symbols": [], "poles": []}'
    places = [place["at"] for place in client.post("/api/examine", content=body).json()["error"]["places"]]
    assert {"/symbols", "/name", "/poles"} <= set(places)
    assert client.post("/api/examine", content='{"type": "11,11", "type": "1,1"}').status_code == 422
