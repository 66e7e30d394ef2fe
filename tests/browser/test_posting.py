"""What the script posts and brings in: no action is lost, nothing is sent twice, nothing that was typed goes away."""

import json
from pathlib import Path
from typing import Any

from tests.browser.conftest import Desk


def test_unchanged_parts_are_not_sent_again(desk: Desk) -> None:
    desk.open()
    with desk.page.expect_response("**/desk") as answer:
        desk.page.fill("#name", "Saltmarsh gauges")
    fragments = answer.value.json()["fragments"]
    assert not {"findings", "descent", "data", "history"} & set(fragments)
    with desk.page.expect_response("**/desk") as answer:
        desk.values().nth(0).fill("11/3")
    fragments = answer.value.json()["fragments"]
    assert {"findings", "diagram"} <= set(fragments)
    assert "data" not in fragments


def test_only_edited_fields_are_posted(desk: Desk) -> None:
    field = desk.values().nth(0)
    with desk.page.expect_request("**/desk") as request:
        field.fill("13/3")
    names = [pair.split("=")[0] for pair in request.value.post_data.split("&")]
    assert sorted(names) == sorted([field.get_attribute("name"), "revision", "structure", "shown"])


def test_actions_pressed_in_a_hurry_are_all_done(desk: Desk) -> None:
    before = desk.page.locator(".pole").count()
    desk.page.evaluate(
        """() => {
            const button = document.querySelector("button[value='add-pole']");
            button.click(); button.click(); button.click();
        }"""
    )
    desk.page.locator(".pole").nth(before + 2).wait_for()
    desk.page.locator("#desk-form:not([aria-busy])").wait_for()
    assert desk.page.locator(".pole").count() == before + 3


def test_typing_while_an_action_is_under_way_is_kept(desk: Desk) -> None:
    held: list[Any] = []

    def hold(route: Any) -> None:
        held.append(route)

    desk.page.route("**/desk", hold, times=1)
    field = desk.values().nth(0)
    desk.page.get_by_role("button", name="Add pole", exact=True).click()
    field.fill("19/5")
    desk.page.wait_for_timeout(500)
    assert len(held) == 1
    assert desk.page.locator(".pole").count() == 4, "the edit waits for the action's answer"
    held[0].continue_()
    desk.page.locator(".pole").nth(4).wait_for()
    assert desk.values().nth(0).input_value() == "19/5"
    desk.page.wait_for_function("() => !document.querySelector('#desk-form[aria-busy]')")
    desk.page.wait_for_timeout(300)
    desk.open()
    assert desk.values().nth(0).input_value() == "19/5"
    assert desk.page.locator(".pole").count() == 5


def test_text_typed_just_before_leaving_is_kept(desk: Desk) -> None:
    desk.values().nth(0).fill("23/4")
    desk.page.goto(desk.address + "help")
    desk.page.wait_for_timeout(300)
    desk.open()
    assert desk.values().nth(0).input_value() == "23/4"


def test_the_message_goes_when_the_server_is_back(desk: Desk) -> None:
    desk.page.route("**/desk", lambda route: route.abort())
    desk.values().nth(0).fill("29/4")
    message = desk.page.get_by_text("does not answer")
    message.wait_for()
    desk.page.unroute("**/desk")
    desk.edit(desk.values().nth(1), "1/3")
    desk.page.wait_for_timeout(600)
    assert message.count() == 0
    desk.open()
    assert [desk.values().nth(k).input_value() for k in (0, 1)] == ["29/4", "1/3"]


def test_a_page_of_an_older_state_is_brought_up_to_date(desk: Desk, desk_at: Any, shared_server: Any) -> None:
    other = desk_at(shared_server).open()
    other.edit(other.values().nth(1), "31/4")
    desk.edit(desk.values().nth(0), "37/4")
    assert desk.values().nth(1).input_value() == "31/4"
    assert desk.complaints == []


def test_a_file_is_brought_in(desk: Desk, tmp_path: Path) -> None:
    text = json.dumps(
        {
            "format": "polewright-problem/1",
            "name": "from a file",
            "symbols": [],
            "poles": [
                {"at": at, "blocks": [{"exponent": {}, "residue": [{"value": value, "jordan": [1]}]}]}
                for at, value in (("0", "1/2"), ("infinity", "-1/2"))
            ],
        }
    )
    path = tmp_path / "problem.json"
    path.write_text(text, encoding="utf-8")
    desk.page.get_by_text("Bring in a document").click()
    desk.page.set_input_files("#document-file", path)
    desk.page.wait_for_function("() => document.getElementById('document').value !== ''")
    with desk.page.expect_navigation():
        desk.page.get_by_text("Put it on the desk").click()
    assert desk.page.input_value("#name") == "from a file"
    assert "rigid" in desk.answer()


def test_parameters_are_shown_on_demand(desk: Desk) -> None:
    label = desk.page.locator("#diagram .parameter").first
    assert not label.is_visible()
    desk.page.get_by_label("show the parameters").check()
    assert label.is_visible()
    desk.edit(desk.values().nth(0), "41/4")
    assert desk.page.locator("#diagram .parameter").first.is_visible()


def test_the_status_line_says_the_verdicts(desk: Desk) -> None:
    status = desk.page.locator("#status")
    assert status.get_attribute("role") == "status"
    assert "Irreducible system: exists, dimension 2 (proved)" in status.inner_text()
    desk.edit(desk.values().last, "5")
    assert "does not exist (refuted)" in status.inner_text()
