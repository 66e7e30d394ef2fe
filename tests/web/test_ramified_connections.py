"""Constructions for ramified data on their page and through the interface: the caution is always with them."""

import json
import time

from starlette.testclient import TestClient

from app.local.shorthand import problem_from_shorthand
from app.local.writer import canonical_text

OPEN = "(1)_1/2(1)_0,111"


def test_the_page_says_what_a_point_is_worth(client: TestClient) -> None:
    fields = {"document": canonical_text(problem_from_shorthand(OPEN)), "action": "construct"}
    begun = client.post("/connection", data=fields, follow_redirects=False)
    assert begun.status_code == 303, begun.text
    text = ""
    for _ in range(100):
        text = client.get(begun.headers["location"]).text
        if 'http-equiv="refresh"' not in text:
            break
        time.sleep(0.2)
    assert "Existence is open" in text and "no proof" in text and "do not rely" not in text
    assert "dimension 9 of 9" in text and "Exact matrices are built for unramified data only" in text


def test_the_interface_answers_with_the_caution(client: TestClient) -> None:
    answer = client.post("/api/construct", content=json.dumps({"type": OPEN}))
    body = answer.json()
    for _ in range(50):
        if "rank" in body:
            break
        body = client.get(answer.json()["job"]).json().get("result", body)
        time.sleep(0.2)
    assert body["kind"] == "numerical" and all(check["holds"] for check in body["verification"])
    assert "no proof" in body["method"] and "Existence is open" in body["method"]
