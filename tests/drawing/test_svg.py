"""SVG of diagrams: well formed, escaped, named, without style or scripts."""

import xml.etree.ElementTree as ElementTree

import pytest

from app.drawing.layout import place
from app.drawing.svg import small_svg, svg
from app.local.shorthand import problem_from_shorthand
from app.roots.build import quiver_of

TYPES = ["11,11,11,11", "(1)(1),(1)(1)", "1^100,1^100,99 1", "(1)" * 100 + ",99 1", ",".join(["1^100"] * 12)]


def picture(shorthand: str, **options: object) -> str:
    diagram = place(quiver_of(problem_from_shorthand(shorthand)))
    return svg(diagram, title="a <title>", description='a "description" & more', **options)  # type: ignore[arg-type]


@pytest.mark.parametrize("shorthand", TYPES)
def test_it_is_well_formed_and_named(shorthand: str) -> None:
    root = ElementTree.fromstring(picture(shorthand))
    names = {child.tag: child.text for child in root if child.tag in ("title", "desc")}
    assert names == {"title": "a <title>", "desc": 'a "description" & more'}
    labelled = root.attrib["aria-labelledby"].split()
    assert labelled == [child.attrib["id"] for child in root if child.tag in ("title", "desc")]


@pytest.mark.parametrize("shorthand", TYPES)
def test_it_is_small_and_has_no_style(shorthand: str) -> None:
    markup = picture(shorthand)
    assert len(markup) < 150_000
    assert "style" not in markup and "<script" not in markup and "href" not in markup


def test_every_vertex_has_a_name_and_its_dimension() -> None:
    root = ElementTree.fromstring(picture("(1)(1),11,11"))
    groups = [element for element in root.iter("g") if "data-vertex" in element.attrib]
    assert [group.attrib["data-vertex"] for group in groups] == ["0.0", "0.1", "1.0.1", "2.0.1"]
    title = groups[0].find("title")
    assert title is not None and title.text is not None
    assert title.text.startswith("core vertex of pole 1, block 1: dimension 1, parameter ")


def test_core_and_leg_differ_by_shape_and_empty_vertices_by_class() -> None:
    quiver = quiver_of(problem_from_shorthand("11,11,11"))
    root = ElementTree.fromstring(svg(place(quiver, (2, 1, 1, 0)), title="", description=""))
    groups = [element for element in root.iter("g") if "data-vertex" in element.attrib]
    assert [group[1].tag for group in groups] == ["polygon", "circle", "circle", "circle"]
    assert ["empty" in group.attrib["class"] for group in groups] == [False, False, False, True]


def test_wrap_and_selected_reach_the_vertex_they_name() -> None:
    markup = picture("11,11,11", selected="1.0.1", wrap=lambda name, inner: f'<a class="{name}">{inner}</a>')
    root = ElementTree.fromstring(markup)
    chosen = [link.attrib["class"] for link in root.iter("a") if "selected" in link[0].attrib["class"]]
    assert chosen == ["1.0.1"]


def test_a_file_of_its_own_has_namespace_and_style() -> None:
    root = ElementTree.fromstring(picture("11,11,11", alone=True))
    assert root.tag == "{http://www.w3.org/2000/svg}svg"
    assert root.find("{http://www.w3.org/2000/svg}style") is not None


def test_small_pictures_have_dimensions_and_no_parameters() -> None:
    quiver = quiver_of(problem_from_shorthand("21,111,111"))
    markup = small_svg(place(quiver), title="t", description="d", name="step-1")
    root = ElementTree.fromstring(markup)
    classes = [text.attrib["class"] for text in root.iter("text")]
    assert classes.count("dimension") == len(quiver.vertices) and "parameter" not in classes
