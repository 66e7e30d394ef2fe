"""axe finds no violation, and the page fits narrow screens."""

from collections.abc import Callable
from typing import Any

import pytest

from tests.browser.conftest import Desk
from tests.web.conftest import Running


def violations(desk: Desk) -> list[str]:
    from axe_playwright_python.sync_playwright import Axe

    found: dict[str, Any] = Axe().run(desk.page).response
    return [
        f"{one['id']}: {node['html'][:160]} {node['failureSummary'][:200]}"
        for one in found["violations"]
        for node in one["nodes"]
    ]


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("state", ["good", "faulty", "large", "irregular"])
def test_the_desk(desk_at: Callable[..., Desk], shared_server: Running, scheme: str, state: str) -> None:
    # bypass_csp lets axe run its own script; the page's policy is tested elsewhere
    desk = desk_at(shared_server, color_scheme=scheme, bypass_csp=True).open()
    desk.read_type("(1)(1),(1)(1),11" if state == "irregular" else "21,111,111")
    for details in desk.page.locator("details").all():
        details.evaluate("element => { element.open = true }")
    if state == "faulty":
        desk.edit(desk.values().nth(0), "2*")
    if state == "large":
        with desk.page.expect_navigation():
            desk.page.get_by_role("button", name="Large type").click()
    assert violations(desk) == []


@pytest.mark.parametrize("path", ["help", "certificate", "nowhere"])
def test_other_pages(desk_at: Callable[..., Desk], shared_server: Running, path: str) -> None:
    desk = desk_at(shared_server, bypass_csp=True)
    desk.page.goto(desk.address + path)
    assert violations(desk) == []


@pytest.mark.parametrize("width", [360, 768])
def test_narrow_screens_do_not_scroll_sideways(
    desk_at: Callable[..., Desk], shared_server: Running, width: int
) -> None:
    desk = desk_at(shared_server).open()
    desk.page.set_viewport_size({"width": width, "height": 800})
    for shorthand in ("1^9,1^9,81", "(11)(1),(1)(1)(1),21"):
        desk.read_type(shorthand)
        assert desk.page.evaluate("() => document.documentElement.scrollWidth") <= width


@pytest.mark.parametrize(
    "button",
    [
        "Operations at 0.0",
        "Operations on the whole problem",
        "Play the descent step by step",
        "Walls and closures",
        "Construct with values and choices",
        "Construct matrices",
    ],
)
def test_pages_that_the_desk_leads_to(desk_at: Callable[..., Desk], shared_server: Running, button: str) -> None:
    desk = desk_at(shared_server, bypass_csp=True).open()
    desk.read_type("21,111,111")
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name=button, exact=True).click()
    if button == "Construct matrices":
        desk.page.get_by_text("Verification record").wait_for()
    for details in desk.page.locator("details").all():
        details.evaluate("element => { element.open = true }")
    assert violations(desk) == []


@pytest.mark.parametrize("shorthand", ["(1)_3/2", "(1)_1/2(1)_0,111", "(1)_1/2,(1)_1/2"])
def test_ramified_data(desk_at: Callable[..., Desk], shared_server: Running, shorthand: str) -> None:
    desk = desk_at(shared_server, bypass_csp=True).open()
    desk.read_type(shorthand)
    assert desk.page.locator(".newton svg").count() >= 1
    assert desk.page.locator("#diagram .vertex").count() >= 1
    for details in desk.page.locator("details").all():
        details.evaluate("element => { element.open = true }")
    assert violations(desk) == []
