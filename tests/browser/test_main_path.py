"""The main path in a browser: load, edit, see the verdict change, break a field, undo, restart, still there."""

import json
import signal
from collections.abc import Callable
from pathlib import Path
from typing import Any

from tests.browser.conftest import Desk
from tests.web.conftest import Running

EXISTS = "An irreducible system exists"
NOT = "No irreducible system exists."


def test_an_edit_changes_the_verdict_without_a_reload(desk: Desk) -> None:
    assert desk.answer().startswith(EXISTS)
    desk.page.evaluate("() => { document.body.dataset.loaded = 'once' }")
    desk.edit(desk.values().nth(7), "5")
    assert desk.answer() == NOT
    assert desk.page.locator("body").get_attribute("data-loaded") == "once"
    assert desk.complaints == []


def test_the_diagram_follows_the_edit(desk: Desk) -> None:
    assert desk.page.locator("#diagram .vertex").count() == 5
    desk.read_type("(1)(1),11,11")
    assert desk.page.locator("#diagram .vertex.core").count() == 2
    assert desk.page.locator("#diagram .vertex.leg").count() == 2
    desk.page.locator("#diagram a.vertex-link .shape").first.click()
    assert desk.page.locator("tr:target").count() == 1


def test_a_broken_field_keeps_everything_else(desk: Desk) -> None:
    first, second = desk.values().nth(0), desk.values().nth(1)
    desk.edit(second, "1/3")
    before = desk.answer()
    desk.edit(first, "2*")
    assert first.get_attribute("aria-invalid") == "true"
    described = first.get_attribute("aria-describedby")
    message = desk.page.locator(f"[id='{described}']")
    assert message.is_visible() and "character" in message.inner_text()
    assert first.input_value() == "2*" and second.input_value() == "1/3"
    assert desk.answer() == before
    assert desk.page.locator("#findings .stale-note").is_visible()
    desk.edit(first, "2*a")
    assert first.get_attribute("aria-invalid") is None and not message.is_visible()
    assert not desk.page.locator("#findings .stale-note").is_visible()
    assert desk.complaints == []


def test_undo_and_redo(desk: Desk) -> None:
    field = desk.values().nth(0)
    old = field.input_value()
    desk.edit(field, "17/4")
    desk.press("Undo")
    assert field.input_value() == old
    desk.press("Redo")
    assert field.input_value() == "17/4"


def test_poles_blocks_and_eigenvalues_come_and_go(desk: Desk) -> None:
    poles = desk.page.locator(".pole")
    desk.press("Add pole")
    assert poles.count() == 5
    desk.press("Remove pole 5")
    assert poles.count() == 4
    desk.press("Copy pole 1")
    assert poles.count() == 5
    desk.press("Undo")
    position = desk.page.locator("input[name^='pole.']").nth(0).input_value()
    desk.press("Move pole 1 down")
    assert desk.page.locator("input[name^='pole.']").nth(1).input_value() == position
    count = desk.values().count()
    desk.press("Add eigenvalue to block 1 of pole 1")
    assert desk.values().count() == count + 1
    desk.press("Add block to pole 1")
    assert desk.page.locator(".block").count() == 5


def test_typing_fast_keeps_caret_and_text(desk: Desk) -> None:
    """Answers that arrive between keystrokes must not move the caret or bring back an older text."""
    field = desk.values().nth(0)
    field.fill("")
    text = "1/2+alpha*sqrt(2)-beta^2+3"
    for k, letter in enumerate(text):
        field.press_sequentially(letter)
        desk.page.wait_for_timeout(280 if k % 5 == 4 else 30)
    desk.page.wait_for_timeout(600)
    assert field.input_value() == text
    assert desk.page.evaluate("() => document.activeElement.selectionStart") == len(text)
    desk.open()
    assert desk.values().nth(0).input_value() == text


def test_a_restart_and_a_kill_lose_nothing(
    desk_at: Callable[..., Desk], server_in: Callable[[Path], Running], tmp_path: Path
) -> None:
    running = server_in(tmp_path)
    desk = desk_at(running).open()
    desk.read_type("21,111,111")
    desk.edit(desk.values().nth(0), "22/7")
    running.process.send_signal(signal.SIGKILL)
    running.process.wait()
    again = desk_at(server_in(tmp_path)).open()
    assert again.values().nth(0).input_value() == "22/7"
    assert again.page.input_value("#shorthand") == "21,111,111"
    again.press("Undo")
    assert again.values().nth(0).input_value() != "22/7"


def test_the_server_away_is_said_and_the_text_is_kept(
    desk_at: Callable[..., Desk], server_in: Callable[[Path], Running], tmp_path: Path
) -> None:
    running = server_in(tmp_path)
    desk = desk_at(running).open()
    running.stop()
    desk.values().nth(0).fill("41")
    desk.page.get_by_text("does not answer").wait_for()
    assert desk.values().nth(0).input_value() == "41"


def test_a_demo_is_opened(desk: Desk) -> None:
    desk.page.get_by_text("Demo problems").click()
    button = desk.page.locator("#demos button").nth(3)
    name = button.inner_text()
    with desk.answered():
        button.click()
    assert desk.page.input_value("#name") == name
    assert not button.is_visible(), "the list folds up again"


def test_a_document_goes_out_and_comes_back(desk: Desk) -> None:
    with desk.page.expect_download() as download:
        desk.page.get_by_text("Save this problem as a document").click()
    text = Path(download.value.path()).read_text(encoding="utf-8")
    assert json.loads(text)["format"] == "polewright-problem/1"
    desk.read_type("11,11,11")
    desk.page.get_by_text("Bring in a document").click()
    desk.page.fill("#document", text)
    with desk.page.expect_navigation():
        desk.page.get_by_text("Put it on the desk").click()
    assert desk.page.input_value("#shorthand") == "11,11,11,11"


def test_a_refused_document_stays_with_its_faults(desk: Desk) -> None:
    desk.page.get_by_text("Bring in a document").click()
    desk.page.fill("#document", '{"format": "something"}')
    desk.page.get_by_text("Put it on the desk").click()
    faults = desk.page.locator("#document-faults")
    faults.wait_for()
    assert "/format" in faults.inner_text()
    assert desk.page.input_value("#document") == '{"format": "something"}'


def test_large_type_is_kept(desk: Desk) -> None:
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Large type").click()
    assert desk.page.locator("html.large").count() == 1
    desk.open()
    assert desk.page.locator("html.large").count() == 1


def test_without_scripts_the_form_posts(desk_at: Callable[..., Desk], shared_server: Running) -> None:
    desk = desk_at(shared_server, java_script_enabled=False).open()
    desk.page.fill("#shorthand", "11,11,11")
    with desk.page.expect_navigation():
        desk.page.press("#shorthand", "Enter")
    assert "rigid" in desk.answer()
    desk.values().nth(0).fill("2*")
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Take over what is typed").click()
    assert desk.values().nth(0).input_value() == "2*"
    assert desk.values().nth(0).get_attribute("aria-invalid") == "true"
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Undo").click()
    assert desk.values().nth(0).get_attribute("aria-invalid") is None


def test_the_keyboard_alone(desk: Desk) -> None:
    page: Any = desk.page
    page.locator("#shorthand").focus()
    page.keyboard.press("Control+A")
    page.keyboard.type("21,111,111")
    with desk.answered():
        page.keyboard.press("Enter")
    assert "rigid" in desk.answer()
    reached = set()
    for _ in range(120):
        page.keyboard.press("Tab")
        reached.add(
            page.evaluate("() => document.activeElement.getAttribute('class') + '|' + document.activeElement.tagName")
        )
    assert any("vertex-link" in place for place in reached), "the vertices of the diagram can be reached"
    assert any(place.endswith("|SUMMARY") for place in reached)


def test_a_large_problem_answers_soon(desk: Desk) -> None:
    desk.read_type(",".join(["1^100"] * 12))
    desk.page.locator(".pole").nth(11).wait_for()
    desk.edit(desk.values().nth(2), "7/3")
    assert desk.answer().startswith(EXISTS)
    assert desk.page.locator("#diagram .fold").count() == 12
    assert desk.complaints == []
