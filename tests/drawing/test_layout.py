"""Placement of diagrams: nothing overlaps, legs do not cross, dimensions move nothing."""

from dataclasses import replace
from itertools import combinations
from math import hypot

import pytest

from app.drawing.geometry import Diagram, Link
from app.drawing.layout import place
from app.drawing.ring import crossings, ring_order
from app.local.shorthand import problem_from_shorthand
from app.roots.build import quiver_of
from app.roots.quiver import Quiver

TYPES = [
    "1,1",
    "11,11,11",
    "11,11,11,11",
    "21,111,111",
    "111111,222,33",
    "1^100,1^100,99 1",
    ",".join(["1^30"] * 12),
    "(1)(1),11,11",
    "(1)(1),(1)(1)",
    "((1)(1))((1)(1))",
    "(((1)))(((1)))",
    "(11)(1),(1)(1)(1),21",
    "(1)(1)(1)(1)(1)(1)(1),61,1^7",
    "(21)(1)(1),32,11111,(3)(2)",
    "(1)" * 60 + ",59 1," + "(1)" * 60,
    "((((((((1))))))))((((((((1))))))))",
]


def quiver(shorthand: str) -> Quiver:
    return quiver_of(problem_from_shorthand(shorthand))


def crosses(first: Link, second: Link) -> bool:
    """Whether two straight links cross in their interiors."""

    def side(a: tuple[float, float], b: tuple[float, float], c: tuple[float, float]) -> float:
        return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])

    a, b, c, d = first.start, first.end, second.start, second.end
    return side(a, b, c) * side(a, b, d) < -1e-6 and side(c, d, a) * side(c, d, b) < -1e-6


def leg_links(diagram: Diagram) -> list[Link]:
    legs = {node.at for node in diagram.nodes if node.role == "leg"} | {fold.at for fold in diagram.folds}
    return [link for link in diagram.links if link.end in legs]


@pytest.mark.parametrize("shorthand", TYPES)
def test_no_two_vertices_overlap(shorthand: str) -> None:
    diagram = place(quiver(shorthand))
    for first, second in combinations(diagram.nodes, 2):
        distance = hypot(first.at[0] - second.at[0], first.at[1] - second.at[1])
        assert distance > first.radius + second.radius + 4, (first.id, second.id)


@pytest.mark.parametrize("shorthand", [t for t in TYPES if "(" not in t])
def test_the_legs_of_a_star_do_not_cross(shorthand: str) -> None:
    diagram = place(quiver(shorthand))
    assert not any(crosses(a, b) for a, b in combinations(diagram.links, 2))


def test_crossing_links_are_seen() -> None:
    diagonal = Link((0, 0), (2, 2), ((1, 1),), 1)
    assert crosses(diagonal, Link((0, 2), (2, 0), ((1, 1),), 1))
    assert not crosses(diagonal, Link((1, 0), (3, 2), ((2, 1),), 1))


@pytest.mark.parametrize("shorthand", TYPES)
def test_dimensions_and_parameters_move_nothing(shorthand: str) -> None:
    before = quiver(shorthand)
    changed = replace(before, vertices=tuple(replace(v, dimension=v.dimension + 3) for v in before.vertices))
    first, second = place(before), place(changed)
    assert [node.at for node in first.nodes] == [node.at for node in second.nodes]
    assert first.box == second.box
    assert [node.dimension + 3 for node in first.nodes] == [node.dimension for node in second.nodes]


@pytest.mark.parametrize("shorthand", TYPES)
def test_everything_stands_inside_the_box(shorthand: str) -> None:
    diagram = place(quiver(shorthand))
    left, top, width, height = diagram.box
    for node in diagram.nodes:
        assert left <= node.at[0] - node.radius and node.at[0] + node.radius <= left + width
        assert top <= node.at[1] - node.radius and node.at[1] + node.radius <= top + height


@pytest.mark.parametrize("shorthand", TYPES)
def test_every_vertex_is_drawn_or_counted(shorthand: str) -> None:
    whole = quiver(shorthand)
    diagram = place(whole)
    shown = {node.id for node in diagram.nodes}
    hidden_core = [v for v in whole.vertices if v.role == "core" and v.id not in shown]
    counted = sum(fold.hidden for fold in diagram.folds)
    hidden_on_folded_core = sum(
        (v.pole, v.block) in {(c.pole, c.block) for c in hidden_core} and v.role == "leg" for v in whole.vertices
    )
    assert len(shown) + counted + hidden_on_folded_core == len(whole.vertices)


def test_a_multiple_edge_has_as_many_curves() -> None:
    (link,) = [link for link in place(quiver("((((1))))((((1))))")).links if link.count > 1]
    assert link.count == len(link.controls) == 3
    (link,) = place(quiver("((((((((1))))))))((((((((1))))))))")).links
    assert (link.count, len(link.controls)) == (7, 1)


def test_the_quiver_of_painleve_five_is_a_square_without_crossing() -> None:
    """Blocks and log poles alternate: A3^(1) is a cycle, drawn as one."""
    diagram = place(quiver("(1)(1),11,11"))
    assert not any(crosses(a, b) for a, b in combinations(diagram.links, 2))


def test_ring_order_against_the_given_order() -> None:
    chords = ((0, 2), (1, 3), (0, 3), (1, 2))
    order = ring_order(4, chords)
    assert crossings(order, chords) == 0 < crossings((0, 1, 2, 3), ((0, 2), (1, 3)))
