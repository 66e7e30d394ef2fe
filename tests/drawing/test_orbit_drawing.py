"""Pictures of ramified data: every vertex, edge and loop with its sign, named, inside the box, without style."""

import xml.etree.ElementTree as ElementTree

import pytest

from app.drawing.layout import place
from app.drawing.orbit_layout import OrbitPicture, orbit_description, place_orbits
from app.drawing.orbit_svg import orbit_svg
from app.local.shorthand import problem_from_shorthand
from app.roots.build import quiver_of
from app.roots.orbit_diagram import OrbitDiagram, orbit_diagram

TYPES = [
    "(1)_1/2", "(1)_5/2", "(1)_3/2,11", "(1)_1/2,(1)(1)", "(1)_1/2,(1)_1/2", "(1)_1/2(1)_0,111",
    "(1)_1/3(1)_1/2,11111,221", "(1)_1/2^3", "(1)_13/4,1111", "(1)_1/2^20,1^40", "((1)_1(1)_1)_3/2,22",
]  # fmt: skip


def diagram_of(shorthand: str) -> OrbitDiagram:
    return orbit_diagram(problem_from_shorthand(shorthand))


def picture(shorthand: str, **options: object) -> str:
    diagram = diagram_of(shorthand)
    words = orbit_description(diagram)
    return orbit_svg(place_orbits(diagram), title="a <title>", description=words, **options)  # type: ignore[arg-type]


def drawn_edges(picture: OrbitPicture) -> dict[tuple[str, str], int]:
    """Numbers of edges between drawn vertices, read off the picture."""
    names = {node.at: node.id for node in picture.nodes}
    links = [*picture.links, *(signed.link for signed in picture.negative)]
    return {
        (names[link.start], names[link.end]): link.count for link in links if link.start in names and link.end in names
    }


@pytest.mark.parametrize("shorthand", TYPES)
def test_edges_and_loops_are_those_of_the_diagram(shorthand: str) -> None:
    diagram = diagram_of(shorthand)
    placed = place_orbits(diagram)
    shown = {node.id for node in placed.nodes}
    ids = [vertex.id for vertex in diagram.vertices]
    expected = {(ids[i], ids[j]): n for i, j, n in diagram.edges if ids[i] in shown and ids[j] in shown}
    assert drawn_edges(placed) == expected
    assert all(signed.link.count < 0 for signed in placed.negative)
    assert all(link.count > 0 for link in placed.links)
    assert [loop.count for loop in placed.loops] == [n for i, n in diagram.loops if ids[i] in shown]
    assert dict(placed.weights) == {v.id: v.weight for v in diagram.vertices if v.weight > 1 and v.id in shown}


@pytest.mark.parametrize("shorthand", TYPES)
def test_everything_lies_in_the_box(shorthand: str) -> None:
    placed = place_orbits(diagram_of(shorthand))
    left, top, width, height = placed.box
    points = [node.at for node in placed.nodes] + [fold.at for fold in placed.folds]
    points += [point for loop in placed.loops for arc in loop.arcs for point in arc]
    points += [loop.label_at for loop in placed.loops] + [signed.label_at for signed in placed.negative]
    assert all(left < x < left + width and top < y < top + height for x, y in points)


@pytest.mark.parametrize("shorthand", TYPES)
def test_loops_keep_clear_of_edges(shorthand: str) -> None:
    """No arc's middle comes near another vertex."""
    placed = place_orbits(diagram_of(shorthand))
    for loop in placed.loops:
        for _, first, second, _ in loop.arcs:
            x, y = (first[0] + second[0]) / 2, (first[1] + second[1]) / 2
            assert all((x - node.at[0]) ** 2 + (y - node.at[1]) ** 2 > node.radius**2 for node in placed.nodes)


@pytest.mark.parametrize("shorthand", TYPES)
def test_markup_is_well_formed_named_and_without_style(shorthand: str) -> None:
    markup = picture(shorthand)
    root = ElementTree.fromstring(markup)
    assert "style" not in markup and "<script" not in markup and "href" not in markup
    labelled = root.attrib["aria-labelledby"].split()
    assert labelled == [child.attrib["id"] for child in root if child.tag in ("title", "desc")]
    diagram = diagram_of(shorthand)
    loops = [e for e in root.iter("path") if "loop" in e.attrib["class"].split()]
    assert bool(loops) == bool(diagram.loops)
    for element in root.iter("path"):
        assert ("negative" in element.attrib["class"].split()) == ("stroke-dasharray" in element.attrib)


def test_signs_weights_and_names_are_written() -> None:
    root = ElementTree.fromstring(picture("(1)_1/2(1)_0,111"))
    texts = [(element.attrib["class"].split()[0], element.text) for element in root.iter("text")]
    assert ("signed", "−1") in texts and ("signed", "−1 loop") in texts and ("weight", "×2") in texts
    titles = [title.text or "" for title in root.iter("title")]
    assert any("block 1: dimension 1, weight 2" in title for title in titles)
    assert any("block 2: dimension 1, unramified" in title for title in titles)
    words = root.find("desc")
    assert words is not None and words.text is not None
    assert "−1 edge between 0.0 and 0.1" in words.text and "−1 loop at 0.0" in words.text
    assert "broken lines" in words.text and "×e is the weight" in words.text


def test_nothing_is_explained_that_does_not_occur() -> None:
    words = orbit_description(diagram_of("(1)(1),11"))
    assert "broken" not in words and "weight" not in words


def test_wrap_selected_and_a_file_of_its_own() -> None:
    markup = picture("(1)_3/2,11", selected="0.0", wrap=lambda name, inner: f'<a class="{name}">{inner}</a>')
    root = ElementTree.fromstring(markup)
    assert [a.attrib["class"] for a in root.iter("a") if "selected" in a[0].attrib["class"]] == ["0.0"]
    assert root.attrib["role"] == "group"
    alone = ElementTree.fromstring(picture("(1)_3/2,11", alone=True))
    assert alone.tag == "{http://www.w3.org/2000/svg}svg"


@pytest.mark.parametrize("shorthand", ["11,11,11,11", "(1)(1),11,11", "((1)(1))((1)(1))", "(1)(1),(1)(1)"])
def test_unramified_diagrams_stand_where_their_quiver_stands(shorthand: str) -> None:
    problem = problem_from_shorthand(shorthand)
    quiver, placed = place(quiver_of(problem)), place_orbits(orbit_diagram(problem))
    assert [(node.id, node.at) for node in quiver.nodes] == [(node.id, node.at) for node in placed.nodes]
    assert not placed.negative and not placed.loops and not placed.weights
