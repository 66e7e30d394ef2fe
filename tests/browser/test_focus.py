"""The keyboard alone: what is reached, and where the focus stands after parts of the page were drawn anew."""

from typing import Any

from tests.browser.conftest import Desk


def focused(desk: Desk) -> str:
    """Id of the element with the focus, or the action of the button with it."""
    here: str = desk.page.evaluate(
        "() => { const e = document.activeElement; return e.name === 'action' ? e.value : e.id || e.tagName }"
    )
    return here


def press_with_keyboard(desk: Desk, name: str) -> None:
    desk.page.get_by_role("button", name=name, exact=True).first.focus()
    with desk.answered():
        desk.page.keyboard.press("Enter")


def tab_to(desk: Desk, wanted: str, key: str = "Tab") -> None:
    for _ in range(150):
        desk.page.keyboard.press(key)
        if focused(desk) == wanted:
            return
    raise AssertionError(f"{wanted} was not reached by {key}")


def test_the_whole_path_by_keys(desk: Desk) -> None:
    page: Any = desk.page
    tab_to(desk, "shorthand")
    page.keyboard.press("Control+A")
    page.keyboard.type("11,11,11,11,11")
    with desk.answered():
        page.keyboard.press("Enter")
    assert "dimension 4" in desk.answer()
    assert focused(desk) == "shorthand"
    last = desk.values().last.get_attribute("id") or ""
    tab_to(desk, last)
    page.keyboard.press("Control+A")
    with desk.answered():
        page.keyboard.type("7")
    assert desk.answer() == "No irreducible system exists."
    assert focused(desk) == last
    tab_to(desk, "undo", "Shift+Tab")
    with desk.answered():
        page.keyboard.press("Space")
    assert "dimension 4" in desk.answer()
    assert focused(desk) == "undo"


def test_a_vertex_is_chosen_by_keys_and_stays_chosen(desk: Desk) -> None:
    desk.page.locator("a.vertex-link").nth(1).focus()
    desk.page.keyboard.press("Enter")
    chosen = desk.page.locator("tr.chosen")
    assert chosen.get_attribute("id") == "vertex-0.0.1"
    desk.edit(desk.values().nth(0), "5/2")
    assert chosen.get_attribute("id") == "vertex-0.0.1"
    assert desk.page.locator("#diagram g.chosen .parameter").is_visible()


def test_after_adding_the_focus_is_in_the_new_entry(desk: Desk) -> None:
    press_with_keyboard(desk, "Add pole")
    new = desk.page.locator(".pole").last.get_attribute("id")
    assert focused(desk) == f"{new}.at"
    press_with_keyboard(desk, "Add eigenvalue to block 1 of pole 1")
    new = desk.page.locator(".pole").first.locator(".eigenvalue").last.get_attribute("id")
    assert focused(desk) == f"{new}.value"


def test_moving_keeps_the_focus_on_the_button(desk: Desk) -> None:
    button = desk.page.get_by_role("button", name="Move pole 1 down", exact=True)
    action = button.get_attribute("value")
    press_with_keyboard(desk, "Move pole 1 down")
    assert focused(desk) == action


def test_after_removing_the_focus_stays_nearby(desk: Desk) -> None:
    block = desk.page.locator(".pole").nth(1).locator(".block").first
    eigenvalue = block.locator(".eigenvalue").first
    eigenvalue.locator("button[value^='remove']").focus()
    identity = block.get_attribute("id")
    with desk.answered():
        desk.page.keyboard.press("Enter")
    inside = "id => document.getElementById(id).contains(document.activeElement)"
    assert desk.page.evaluate(inside, identity)


def test_undoing_everything_does_not_lose_the_focus(desk: Desk) -> None:
    desk.page.get_by_role("button", name="Undo", exact=True).focus()
    for _ in range(40):
        if focused(desk) != "undo":
            break
        with desk.answered():
            desk.page.keyboard.press("Enter")
    assert focused(desk) == "redo"
