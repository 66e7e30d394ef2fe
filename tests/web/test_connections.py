"""Pages and interface of explicit connections and operations: jobs, results, refusals, hostile input."""

import json
import re
import time
from typing import Any

import pytest
from starlette.testclient import TestClient

from app.local.shorthand import problem_from_shorthand
from app.local.writer import canonical_text

RIGID = canonical_text(problem_from_shorthand("21,111,111"))


def result_page(client: TestClient, **fields: str) -> str:
    """Begin a construction and wait for its page to be the last one."""
    begun = client.post("/connection", data={"document": RIGID, **fields}, follow_redirects=False)
    assert begun.status_code == 303, begun.text
    for _ in range(100):
        text = client.get(begun.headers["location"]).text
        if 'http-equiv="refresh"' not in text:
            return text
        time.sleep(0.2)
    raise AssertionError("the construction did not end")


def test_an_exact_construction_with_its_record(client: TestClient) -> None:
    text = result_page(client, action="construct", kind="exact")
    assert "Exact entries" in text and "every check of the record holds" in text
    assert text.count("<math>") >= 3 and "generated algebra of dimension 9 of 9" in text
    for title in ("LaTeX", "Python source for numpy", "Python source for sympy", "JSON"):
        assert title in text


def test_a_numerical_point_is_called_evidence(client: TestClient) -> None:
    text = result_page(client, action="construct", kind="numerical", seed="3")
    assert "numerical evidence, not a proof" in text


def test_generic_values_are_filled_in_and_can_be_used(client: TestClient) -> None:
    form = client.post("/connection", data={"document": RIGID, "action": "generic"}).text
    typed = dict(re.findall(r'name="(value\.\w+)" value="([^"]+)"', form))
    assert len(typed) == 7
    text = result_page(client, action="construct", kind="exact", **typed)
    assert "Exact entries" in text


def test_a_faulty_value_is_said_beside_its_field(client: TestClient) -> None:
    answer = client.post("/connection", data={"document": RIGID, "action": "construct", "value.a1": "2*"})
    assert answer.status_code == 200 and 'aria-invalid="true"' in answer.text and 'value="2*"' in answer.text


def test_values_that_make_eigenvalues_equal_are_refused(client: TestClient) -> None:
    fields = {"document": RIGID, "action": "construct", "value.b1": "1", "value.b2": "1"}
    answer = client.post("/connection", data=fields)
    assert answer.status_code == 422 and 'id="message"' in answer.text


def test_the_interface_constructs(client: TestClient) -> None:
    answer = client.post("/api/construct", content=json.dumps({"type": "11,11,11"}))
    assert answer.status_code in (200, 202)
    body: dict[str, Any] = answer.json()
    for _ in range(50):
        if "rank" in body:
            break
        found = client.get(body["job"] if "job" in body else answer.json()["job"]).json()
        body = found.get("result", body)
        time.sleep(0.2)
    assert body["format"] == "polewright-connection/1" and body["rank"] == 2
    assert all(check["holds"] for check in body["verification"])


def test_jobs_that_are_not_there(client: TestClient) -> None:
    assert client.get("/api/jobs/0123").status_code == 404
    assert client.delete("/api/jobs/0123").status_code == 404
    assert client.get("/connection/0123").status_code == 404


@pytest.mark.parametrize("path", ["/connection", "/operations", "/operation", "/descent"])
@pytest.mark.parametrize("document", ["", "{", "[]", '{"format": "<script>"}'])
def test_bad_documents_are_refused_with_a_page(client: TestClient, path: str, document: str) -> None:
    answer = client.post(path, data={"document": document, "vertex": "0.0", "operation": "reflect 0.0"})
    assert answer.status_code in (400, 422) and 'id="message"' in answer.text
    assert "<script>" not in answer.text.replace('<script src="/static/desk.js" defer></script>', "")


def test_operations_at_a_vertex_and_carried_out(client: TestClient) -> None:
    offers = client.post("/operations", data={"document": RIGID, "vertex": "0.0"}).text
    assert "Middle convolution" in offers and "Condition" in offers
    operation = re.search(r'name="operation" value="([^"]+)"', offers)
    assert operation is not None
    done = client.post("/operation", data={"document": RIGID, "operation": operation[1]}).text
    assert "Rank 3 → 2" in done and "Put this problem on the desk" in done


@pytest.mark.parametrize("operation", ["", "paint 0.0", "reflect", "reflect 9.9", "reflect " + "0.0 " * 50, "<b> <i>"])
def test_impossible_operations_are_refused(client: TestClient, operation: str) -> None:
    answer = client.post("/operation", data={"document": RIGID, "operation": operation})
    assert answer.status_code == 422 and "<b>" not in answer.text


def test_the_descent_forward_and_to_the_end(client: TestClient) -> None:
    first = client.post("/descent", data={"document": RIGID, "step": "0"}).text
    assert "before the first step" in first
    last = client.post("/descent", data={"document": RIGID, "step": "99"}).text
    assert "Here it ends" in last and "The rank is 1." in last
    assert client.post("/descent", data={"document": RIGID, "step": "x"}).status_code == 422


def test_the_math_font_is_served(client: TestClient) -> None:
    answer = client.get("/fonts/mathematics.ttf")
    assert answer.status_code == 200 and answer.content[:4] in (b"\0\1\0\0", b"OTTO")


def test_middle_convolution_of_a_finished_construction(client: TestClient) -> None:
    """Two finite poles with invertible residues of size 2: mc_μ has rank 4 for generic μ (Dettweiler–Reiter 2007)."""
    document = canonical_text(problem_from_shorthand("11,11,11"))
    begun = client.post("/connection", data={"document": document, "action": "construct"}, follow_redirects=False)
    address = begun.headers["location"]
    for _ in range(100):
        if 'http-equiv="refresh"' not in client.get(address).text:
            break
        time.sleep(0.1)
    done = client.post(f"{address}/convolve", data={"mu": "1/2"})
    assert done.status_code == 200 and "rank 4" in done.text and "<math>" in done.text
    assert client.post(f"{address}/convolve", data={"mu": "2*"}).status_code == 422
