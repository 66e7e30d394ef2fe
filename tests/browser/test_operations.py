"""From the desk to operations, descent and matrices, and back, by the keyboard where it matters."""

from tests.browser.conftest import Desk


def test_an_operation_at_a_vertex_is_carried_out_and_taken_over(desk: Desk) -> None:
    desk.read_type("21,111,111")
    desk.page.get_by_role("button", name="Operations at 0.0", exact=True).focus()
    with desk.page.expect_navigation():
        desk.page.keyboard.press("Enter")
    assert desk.page.get_by_text("Condition:").count() >= 3
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Middle convolution").first.click()
    assert "Rank 3 → 2" in desk.page.inner_text("main")
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Put this problem on the desk").click()
    assert desk.page.input_value("#shorthand") == "11,11,11"
    desk.press("Undo")
    assert desk.page.input_value("#shorthand") == "21,111,111"


def test_the_descent_is_played_forward_and_back(desk: Desk) -> None:
    desk.read_type("1^4,1^4,31")
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Play the descent step by step").click()
    for heading in ("after step 1", "after step 2"):
        with desk.page.expect_navigation():
            desk.page.get_by_role("button", name="Forward").click()
        assert heading in desk.page.inner_text("h1")
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Back").click()
    assert "after step 1" in desk.page.inner_text("h1")
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="All").click()
    assert "The rank is 1." in desk.page.inner_text("main")


def test_matrices_come_with_their_record(desk: Desk) -> None:
    desk.read_type("11,11,11,11")
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Construct matrices").click()
    desk.page.get_by_text("Verification record").wait_for()
    text = desk.page.inner_text("main")
    assert "Accessory parameters" in text and "tangent dimension" in text
    assert desk.page.locator("math").count() >= 4
    assert desk.complaints == []


def test_ramified_data_lead_to_a_numerical_point(desk: Desk) -> None:
    desk.read_type("(1)_1/2(1)_0,111")
    assert "not decided" in desk.page.inner_text("#findings") and "numerical point" in desk.page.inner_text("#findings")
    assert desk.page.get_by_role("button", name="Play the descent step by step").count() == 0
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Construct matrices").click()
    desk.page.get_by_text("Verification record").wait_for()
    text = desk.page.inner_text("main")
    assert "numerical evidence, not a proof" in text


def test_whole_operations_and_closures_of_ramified_data(desk: Desk) -> None:
    desk.read_type("(1)_3/2")
    for button, heading in (("Operations on the whole problem", "whole problem"), ("Walls and closures", "Walls")):
        with desk.page.expect_navigation():
            desk.page.get_by_role("button", name=button).click()
        assert heading in desk.page.inner_text("h1")
        desk.open()
    assert desk.complaints == []


def test_texts_are_copied_by_a_button(desk: Desk) -> None:
    desk.page.context.grant_permissions(["clipboard-read", "clipboard-write"])
    desk.read_type("11,11,11")
    with desk.page.expect_navigation():
        desk.page.get_by_role("button", name="Construct matrices").click()
    desk.page.get_by_text("Verification record").wait_for()
    desk.page.locator("summary", has_text="LaTeX").click()
    desk.page.get_by_role("button", name="Copy LaTeX").click()
    desk.page.get_by_text("Copied").wait_for()
    copied = desk.page.evaluate("() => navigator.clipboard.readText()")
    assert "pmatrix" in copied
    assert desk.complaints == []
