"""The pages over HTTP: with and without scripts, what is sent and what is left out, hostile texts."""

import json
import re
from html.parser import HTMLParser

import pytest

from app.desk.fields import structure_of
from app.web.application import Settings, create_application
from tests.web.conftest import BASE

JSON = {"accept": "application/json"}
HOSTILE = "\"><script>alert(1)</script><img src=x onerror=alert(1)>'&amp;{{7*7}}"


class Page(HTMLParser):
    """The tags of a page; ``faults``: what the policy would stop or a reader would trip over."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.feed(text)

    def handle_starttag(self, tag, attrs):
        self.tags.append((tag, dict(attrs)))

    def named(self, name: str) -> dict[str, str | None]:
        (found,) = (attributes for _, attributes in self.tags if attributes.get("name") == name)
        return found

    @property
    def faults(self) -> list[str]:
        found = []
        ids = [attributes["id"] for _, attributes in self.tags if "id" in attributes]
        found += [f"id {one} stands twice" for one in set(ids) if ids.count(one) > 1]
        for tag, attributes in self.tags:
            found += [f"{tag} {name}" for name in attributes if name == "style" or name.startswith("on")]
            if tag == "style" or (tag == "script" and not attributes.get("src")):
                found.append(f"inline {tag}")
            for name in ("src", "href", "action"):
                value = attributes.get(name) or ""
                if value and not value.startswith(("/", "#")):
                    found.append(f"{tag} {name}={value}")
        return found


def current(application):
    return application.state.store.current()


def base_fields(application) -> dict[str, str]:
    revision = current(application)
    return {"revision": str(revision.number), "structure": structure_of(revision.draft)}


def first_value(application) -> str:
    """Address of the first eigenvalue's value."""
    return f"eigenvalue.{current(application).draft.poles[0].blocks[0].residue[0].id}.value"


def post(client, application, headers=JSON, **fields):
    return client.post("/desk", data=base_fields(application) | fields, headers=headers, follow_redirects=False)


@pytest.mark.parametrize("path", ["/", "/help", "/certificate", "/nowhere"])
def test_pages_keep_to_the_policy(client, path):
    page = Page(client.get(path).text)
    assert page.faults == []


@pytest.mark.parametrize("shorthand", ["21,111,111", "(11)(1),(1)(1)(1),21", "(1)_3/2", "1^30,1^30,29 1"])
def test_every_state_keeps_to_the_policy(client, application, shorthand):
    post(client, application, shorthand=shorthand)
    assert Page(client.get("/").text).faults == []


def test_the_first_button_of_the_form_takes_over(client):
    buttons = [a for tag, a in Page(client.get("/").text).tags if tag == "button" and a.get("name") == "action"]
    assert buttons[0]["value"] == "save"


def test_without_scripts_an_edit_leads_back_to_the_page(client, application):
    address = first_value(application)
    answer = post(client, application, headers={"accept": "text/html"}, **{address: "3/7"})
    assert answer.status_code == 303 and answer.headers["location"] == "/"
    assert Page(client.get("/").text).named(address)["value"] == "3/7"


def test_without_scripts_an_action_that_cannot_be_done_says_so(client, application):
    answer = post(client, application, headers={"accept": "text/html"}, action="remove:e999")
    assert answer.status_code == 200
    assert "not on the desk any more" in answer.text


def test_a_broken_field_says_what_is_wrong_and_keeps_its_text(client, application):
    address = first_value(application)
    before = client.get("/").text
    answer = post(client, application, **{address: "2*"}).json()
    assert [fault["field"] for fault in answer["faults"]] == [address]
    page = client.get("/").text
    field = Page(page).named(address)
    assert field["value"] == "2*" and field["aria-invalid"] == "true"
    message = re.search(rf'id="{re.escape(field["aria-describedby"])}">([^<]+)<', page)
    assert message is not None and "character" in message[1]
    verdict = re.search(r'<p class="answer">[^<]+', before)[0]
    assert verdict in page and "Of the last state that could be read." in page
    assert "Of the last state that could be read." not in before


def test_a_mark_shown_is_not_sent_again(client, application):
    address = first_value(application)
    answer = post(client, application, **{address: "3/7"}).json()
    marks = {name: fragment["mark"] for name, fragment in answer["fragments"].items()}
    assert {"status", "diagram", "findings"} <= set(marks)
    again = post(client, application, name="Skerry", shown=json.dumps(marks)).json()
    assert not {"findings", "descent", "history"} & set(again["fragments"])
    changed = post(client, application, **{address: "4/7"}, shown=json.dumps(marks)).json()
    assert {"diagram", "findings"} <= set(changed["fragments"])
    assert changed["fragments"]["findings"]["mark"] != marks["findings"]


def test_the_page_says_its_marks(client, application):
    shown = {a["id"]: a["data-mark"] for _, a in Page(client.get("/").text).tags if "data-mark" in a}
    assert set(shown) == {"history", "status", "leads", "diagram", "findings", "descent"}
    answer = post(client, application, name="Skerry", shown=json.dumps(shown)).json()
    assert not {"findings", "descent"} & set(answer["fragments"])


@pytest.mark.parametrize("shown", ["", "{", "[]", "7", "null", '{"findings": 7}', "[" * 100_000])
def test_marks_that_cannot_be_read_count_as_none(client, application, shown):
    answer = post(client, application, shown=shown)
    assert answer.status_code == 200 and "findings" in answer.json()["fragments"]


def test_the_data_are_sent_only_when_entries_change(client, application):
    answer = post(client, application, **{first_value(application): "5"}).json()
    assert "data" not in answer["fragments"]
    answer = post(client, application, action="add-pole").json()
    assert "data" in answer["fragments"]
    assert answer["structure"] == structure_of(current(application).draft)


def test_texts_that_the_desk_changed_are_sent(client, application):
    address = first_value(application)
    old = current(application).draft.poles[0].blocks[0].residue[0].value
    post(client, application, **{address: "5"})
    answer = post(client, application, action="undo").json()
    assert answer["texts"][address] == old
    assert answer["revision"] == current(application).number


@pytest.mark.parametrize("where", ["name", "notes", "shorthand", "value", "jordan", "at", "exponent", "base"])
def test_hostile_text_stays_text(client, application, where):
    draft = current(application).draft
    pole, block = draft.poles[0], draft.poles[0].blocks[0]
    addresses = {
        "value": f"eigenvalue.{block.residue[0].id}.value",
        "jordan": f"eigenvalue.{block.residue[0].id}.jordan",
        "at": f"pole.{pole.id}.at",
        "exponent": f"block.{block.id}.exponent",
    }
    answer = post(client, application, **{addresses.get(where, where): HOSTILE})
    assert answer.status_code == 200
    for fragment in answer.json()["fragments"].values():
        assert "<script" not in fragment["html"] and "<img" not in fragment["html"]
    page = client.get("/").text
    assert Page(page).faults == []
    assert "<script>alert" not in page and "<img" not in page
    if where != "base":  # a choice, which shows no text of its own
        assert "{{7*7}}" in page, "nothing typed is a template"


def test_a_document_comes_back_the_same(client, application):
    post(client, application, shorthand="21,111,111")
    post(client, application, name="Tide table", notes="by heart")
    answer = client.get("/desk/document")
    assert answer.headers["content-disposition"].startswith("attachment")
    post(client, application, action="new")
    back = client.post("/desk/document", data={"document": answer.text}, follow_redirects=False)
    assert back.status_code == 303
    assert client.get("/desk/document").text == answer.text
    post(client, application, action="undo")
    assert current(application).draft.name == "", "the problem that was on the desk before"


def test_a_document_that_cannot_be_read_stays_with_its_faults(client, application):
    before = current(application).number
    answer = client.post("/desk/document", data={"document": '{"format": "x", "poles": []}'})
    assert answer.status_code == 422
    assert "/format" in answer.text and "{&#34;format&#34;: &#34;x&#34;" in answer.text
    assert current(application).number == before


def test_an_empty_document_is_refused(client):
    assert client.post("/desk/document", data={"document": ""}).status_code == 422


def test_data_that_cannot_be_read_cannot_be_taken_out(client, application):
    post(client, application, **{first_value(application): "2*"})
    answer = client.get("/desk/document")
    assert answer.status_code == 422 and "mend the marked fields" in answer.text


def test_large_type_is_a_setting_of_the_browser(client):
    assert 'class="large"' not in client.get("/").text
    answer = client.post("/view", data={"type": "large"}, follow_redirects=False)
    cookie = answer.headers["set-cookie"].lower()
    assert "httponly" in cookie and "samesite=strict" in cookie
    assert 'class="large"' in client.get("/").text and 'class="large"' in client.get("/help").text
    client.post("/view", data={"type": "normal"})
    assert 'class="large"' not in client.get("/").text


def test_the_certificate_is_worked_out_again(client, application):
    post(client, application, shorthand="21,111,111")
    text = client.get("/certificate").text
    assert text.count("<h2>") == 2 and "<td>holds" in text and "<td>fails" not in text


def test_the_demos_are_offered_and_opened(tmp_path):
    from starlette.testclient import TestClient

    application = create_application(Settings(data=tmp_path))
    with TestClient(application, base_url=BASE) as client:
        page = client.get("/").text
        assert len(application.state.demos.entries) >= 10
        for demo in application.state.demos.entries:
            assert f'value="open:{demo.key}"' in page
            answer = post(client, application, action=f"open:{demo.key}").json()
            assert answer["faults"] == []
            assert Page(client.get("/").text).faults == []


def test_a_form_of_2400_fields_is_accepted(client, application):
    post(client, application, shorthand=",".join(["1^100"] * 12))
    page = Page(client.get("/").text)
    fields = {
        a["name"]: a.get("value") or ""
        for tag, a in page.tags
        if tag == "input" and a.get("name") and a["name"].startswith(("eigenvalue.", "block.", "pole."))
    }
    assert len(fields) >= 2_400
    address = first_value(application)
    answer = post(client, application, **(fields | {address: "7/3"}))
    assert answer.status_code == 200
    assert answer.json()["faults"] == [] and "data" not in answer.json()["fragments"]
    assert current(application).draft.poles[0].blocks[0].residue[0].value == "7/3"
