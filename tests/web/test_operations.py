"""Operations on the whole problem, readings, walls and closures: pages and interface."""

import json
import re
from typing import Any

import pytest
from starlette.testclient import TestClient

from app.local.document import problem_from_json
from app.local.shorthand import problem_from_shorthand, to_shorthand
from app.local.writer import canonical_text, document

RIGID = canonical_text(problem_from_shorthand("21,111,111"))


def operate(client: TestClient, operation: str, shorthand: str = "21,111,111", **arguments: str) -> Any:
    problem = document(problem_from_shorthand(shorthand))
    body = {"problem": problem, "operation": operation, "arguments": arguments}
    return client.post("/api/operate", content=json.dumps(body))


def test_a_change_of_the_variable_and_back(client: TestClient) -> None:
    moved = operate(client, "moebius", a="0", b="1", c="1", d="0").json()
    positions = [pole["at"] for pole in moved["problem"]["poles"]]
    assert positions == ["infinity", "1", "0"]
    body = {"problem": moved["problem"], "operation": "moebius", "arguments": {"a": "0", "b": "1", "c": "1", "d": "0"}}
    back = client.post("/api/operate", content=json.dumps(body)).json()
    assert [pole["at"] for pole in back["problem"]["poles"]] == ["0", "1", "infinity"]


def test_a_twist_needs_residues_that_sum_to_zero(client: TestClient) -> None:
    good = operate(client, "twist", **{"residue.0": "1/2", "residue.2": "-1/2"})
    assert good.status_code == 200 and good.json()["words"]
    bad = operate(client, "twist", **{"residue.0": "1/2"})
    assert bad.status_code == 422


def test_a_regular_point_comes_and_goes(client: TestClient) -> None:
    added = operate(client, "add", at="5").json()["problem"]
    assert len(added["poles"]) == 4
    body = {"problem": added, "operation": "drop", "arguments": {"pole": "3"}}
    assert len(client.post("/api/operate", content=json.dumps(body)).json()["problem"]["poles"]) == 3


def test_a_reflection_by_the_interface(client: TestClient) -> None:
    answer = operate(client, "reflect", vertices="0.0").json()
    assert to_shorthand(problem_from_json(answer["problem"])) == "11,11,11"
    assert "λ(ε)" in answer["condition"]


@pytest.mark.parametrize(
    ("operation", "arguments"),
    [
        ("moebius", {"a": "1", "b": "1", "c": "1", "d": "1"}),
        ("moebius", {"a": "2*"}),
        ("drop", {"pole": "0"}),
        ("drop", {"pole": "x"}),
        ("add", {"at": "0"}),
        ("paint", {}),
    ],
)
def test_what_cannot_be_done_is_refused(client: TestClient, operation: str, arguments: dict[str, str]) -> None:
    answer = operate(client, operation, **arguments)
    assert answer.status_code == 422 and answer.json()["error"]["message"]


@pytest.mark.parametrize(
    "body", ["[]", "{}", '{"problem": 1, "operation": []}', '{"problem": {}, "arguments": {"a": 1}}']
)
def test_requests_of_another_shape(client: TestClient, body: str) -> None:
    assert client.post("/api/operate", content=body).status_code == 422


def test_the_page_keeps_what_was_typed(client: TestClient) -> None:
    page = client.post("/operations", data={"document": RIGID}).text
    assert "Change of the variable" in page and "Readings of the quiver" in page
    fields = {"document": RIGID, "operation": "moebius", "a": "2*", "b": "7/3"}
    answer = client.post("/operation", data=fields)
    assert answer.status_code == 422 and 'value="2*"' in answer.text and 'value="7/3"' in answer.text


def test_readings_of_painleve_six_in_rank_three(client: TestClient) -> None:
    """(1)(1)(1),111 reads as four log poles of rank 2: Harnad (1994), Boalch (2012)."""
    text = canonical_text(problem_from_shorthand("(1)(1)(1),111"))
    page = client.post("/operations", data={"document": text}).text
    assert "<code>11,11,11,11</code>" in page and "Put this reading on the desk" in page


def test_walls_by_interface_and_page(client: TestClient) -> None:
    """Nine walls for 21,111,111: the n² conditions a_i + b_j of the hypergeometric equation of order 3."""
    found = client.post("/api/walls", content=json.dumps({"type": "21,111,111"})).json()
    assert found["generic"] is True and len(found["walls"]) == 9 and not any(w["holds"] for w in found["walls"])
    page = client.post("/walls", data={"document": RIGID}).text
    assert page.count('aria-label="Wall') >= 9 and "By a theorem there are no others" in page


def test_a_symbol_is_put_on_a_wall_and_the_verdict_changes(client: TestClient) -> None:
    page = client.post("/walls", data={"document": RIGID}).text
    onto = re.search(r'name="onto" value="([^"]+)"', page)
    assert onto is not None
    placed = client.post("/walls/onto", data={"document": RIGID, "onto": onto[1]}).text
    assert "No irreducible system exists." in placed
    assert client.post("/walls/onto", data={"document": RIGID, "onto": "999 a1"}).status_code == 422
    assert client.post("/walls/onto", data={"document": RIGID, "onto": "0 nothing"}).status_code == 422


def test_closures_by_interface_and_page(client: TestClient) -> None:
    data = document(problem_from_shorthand("111,111,111"))
    data["poles"][0]["blocks"][0]["residue"] = [{"value": "0", "jordan": [3]}]  # type: ignore[typeddict-item]
    found = client.post("/api/closures", content=json.dumps(data)).json()
    assert [row["changes"][0]["jordan"] for row in found["rows"]] == [[2, 1], [1, 1, 1]]
    assert client.post("/walls", data={"document": json.dumps(data)}).text.count("→") >= 2
