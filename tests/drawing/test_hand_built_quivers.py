"""Placement of quivers of any shape: geometry of legs, edges, marks and labels."""

from collections import Counter
from dataclasses import replace
from itertools import combinations
from math import hypot
from random import Random

import networkx
import pytest

from app.drawing.geometry import CORNER, Diagram, Fold, Link, Node, Point
from app.drawing.layout import CORE_ROOM, LEG_ROOM, place
from app.local.shorthand import problem_from_shorthand
from app.roots.build import quiver_of
from app.roots.quiver import Quiver
from tests.drawing.hand_built import NAMED, UNFOLDED, built, leg, random_quiver

RANDOM = [random_quiver(Random(seed)) for seed in range(120)]
ALL = [pytest.param(quiver, id=name) for name, quiver in NAMED.items()]
ALL += [pytest.param(quiver, id=f"seed {seed}") for seed, quiver in enumerate(RANDOM)]


def grown(quiver: Quiver) -> Quiver:
    """The same quiver with dimensions so large that every vertex takes all its room."""
    return replace(quiver, vertices=tuple(replace(v, dimension=v.dimension + 100) for v in quiver.vertices))


def reach(node: Node) -> float:
    return node.radius * (CORNER if node.role == "core" else 1)


def extent(thing: Node | Fold) -> tuple[float, float]:
    """Half width and half height."""
    if isinstance(thing, Fold):
        return (9.5 + 3.75 * max(2, len(str(thing.hidden))), 10.0)
    return (reach(thing), reach(thing))


def distance_to_segment(point: Point, start: Point, end: Point) -> float:
    (px, py), (ax, ay), (bx, by) = point, start, end
    square = (bx - ax) ** 2 + (by - ay) ** 2
    along = max(0.0, min(1.0, ((px - ax) * (bx - ax) + (py - ay) * (by - ay)) / square))
    return hypot(px - ax - along * (bx - ax), py - ay - along * (by - ay))


def cross(first: Link, second: Link) -> bool:
    def side(a: Point, b: Point, c: Point) -> float:
        return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])

    a, b, c, d = first.start, first.end, second.start, second.end
    return side(a, b, c) * side(a, b, d) < -1e-6 and side(c, d, a) * side(c, d, b) < -1e-6


def leg_links(quiver: Quiver, diagram: Diagram) -> list[Link]:
    """Links along legs: from a vertex outwards, to a vertex of the same block or to a mark and from it."""
    known = {vertex.id: vertex for vertex in quiver.vertices}
    block = {node.at: (known[node.id].pole, known[node.id].block) for node in diagram.nodes}
    marks = {fold.at for fold in diagram.folds}
    return [
        link
        for link in diagram.links
        if not link.bundled
        and (link.start in marks or link.end in marks or block[link.start] == block[link.end])
    ]  # fmt: skip


@pytest.mark.parametrize("quiver", ALL)
@pytest.mark.parametrize("small", [False, True])
def test_nothing_overlaps(quiver: Quiver, small: bool) -> None:
    diagram = place(grown(quiver), small=small)
    for first, second in combinations([*diagram.nodes, *diagram.folds], 2):
        if isinstance(first, Node) and isinstance(second, Node):
            apart = hypot(first.at[0] - second.at[0], first.at[1] - second.at[1])
            assert apart > reach(first) + reach(second) + 1, (first, second)
            continue
        (wide, high), (broad, tall) = extent(first), extent(second)
        dx, dy = abs(first.at[0] - second.at[0]), abs(first.at[1] - second.at[1])
        corner = hypot(max(0, dx - wide), max(0, dy - high))
        assert dx > wide + broad or dy > high + tall or corner > min(broad, tall), (first, second)


@pytest.mark.parametrize("quiver", ALL)
def test_legs_run_straight_outwards_and_cross_nothing(quiver: Quiver) -> None:
    diagram = place(quiver)
    legs = leg_links(quiver, diagram)
    for link in legs:
        (ax, ay), (bx, by) = link.start, link.end
        assert hypot(bx, by) > hypot(ax, ay), link
        assert abs(ax * by - ay * bx) < 0.1, "the middle, the start and the end lie on one line"
    for link in legs:
        assert not any(cross(link, other) for other in diagram.links)


@pytest.mark.parametrize("quiver", ALL)
def test_edges_pass_no_other_vertex(quiver: Quiver) -> None:
    diagram = place(grown(quiver))
    for link in diagram.links:
        if len(link.controls) > 1:
            continue
        for node in diagram.nodes:
            if node.at not in (link.start, link.end):
                assert distance_to_segment(node.at, link.start, link.end) > node.radius, (link, node)


@pytest.mark.parametrize("quiver", [pytest.param(NAMED[name], id=name) for name in UNFOLDED])
def test_the_picture_has_the_edges_of_the_quiver(quiver: Quiver) -> None:
    diagram = place(quiver)
    name = {node.at: node.id for node in diagram.nodes}
    assert not diagram.folds
    drawn = networkx.MultiGraph(
        [(name[link.start], name[link.end]) for link in diagram.links for _ in range(link.count)]
    )
    ids = [vertex.id for vertex in quiver.vertices]
    drawn.add_nodes_from(name.values())
    true = networkx.MultiGraph([(ids[i], ids[j]) for i, j, count in quiver.edges for _ in range(count)])
    true.add_nodes_from(ids)
    assert networkx.utils.graphs_equal(drawn, true)


@pytest.mark.parametrize("quiver", ALL)
def test_every_vertex_is_drawn_or_counted(quiver: Quiver) -> None:
    for small in (False, True):
        diagram = place(quiver, small=small)
        assert len(diagram.nodes) + sum(fold.hidden for fold in diagram.folds) == len(quiver.vertices)
        assert len(diagram.nodes) <= 16 * 8


def test_bundles_count_the_edges_of_what_is_not_drawn() -> None:
    diagram = place(NAMED["many blocks"])
    assert sum(link.count for link in diagram.links) == 60 * 60
    assert [fold.name for fold in diagram.folds] == ["56 more core vertices are not drawn"] * 2
    assert Counter(link.count for link in diagram.links if link.bundled) == Counter({56: 8, 56 * 56: 1})


def test_marks_say_what_they_stand_for() -> None:
    names = [fold.name for fold in place(NAMED["many log poles"]).folds]
    assert names == ["49 more legs, 196 vertices in all, are not drawn"]
    (name,) = [fold.name for fold in place(NAMED["many poles"]).folds]
    assert name == "75 more core vertices and 23 more legs, 135 vertices in all, are not drawn"
    assert place(NAMED["long leg"]).folds[0].name == "395 more vertices of this leg are not drawn"


def test_too_many_places_fold_every_group_before_groups_are_merged() -> None:
    names = [fold.name for fold in place(built([[(1,)] * 8, [(1,)] * 8, *([[(2, 1)]] * 8)])).folds]
    assert names == ["4 more core vertices are not drawn"] * 2 + ["4 more legs, 4 vertices in all, are not drawn"]
    assert not place(built([[(1,)] * 8, [(1,)] * 8])).folds


def test_a_single_base_vertex_stands_in_the_middle_of_the_blocks_of_other_poles() -> None:
    diagram = place(NAMED["log base"])
    (middle,) = [node for node in diagram.nodes if node.at == (0.0, 0.0)]
    assert middle.id == "0.0"
    assert not any(cross(a, b) for a, b in combinations(diagram.links, 2))


def test_three_in_a_line_have_the_shared_leg_between_the_blocks() -> None:
    diagram = place(built([[(1,), (1,)], [(2, 1)]]))
    assert {node.id: node.at[1] for node in diagram.nodes} == {"0.0": 0.0, "0.1": 0.0, "1.0.1": 0.0}
    assert {node.id: node.at[0] for node in diagram.nodes}["1.0.1"] == 0.0


@pytest.mark.parametrize("quiver", ALL)
def test_dimensions_and_parameters_move_nothing(quiver: Quiver) -> None:
    first, second = place(quiver), place(grown(quiver))
    assert [node.at for node in first.nodes] == [node.at for node in second.nodes]
    assert (first.links, first.folds, first.box) == (second.links, second.folds, second.box)
    assert place(quiver) == first


def test_vertices_grow_with_their_dimension_within_their_room() -> None:
    for dimensions in ([0, 1, 2, 3, 6, 12, 100, 400],):
        sizes = [place(NAMED["D4"], (d,) * 5).nodes for d in dimensions]
        core, legs = [nodes[0].radius for nodes in sizes], [nodes[1].radius for nodes in sizes]
        assert core == sorted(core) and core[1] < core[2] < core[3] < core[5] == CORE_ROOM
        assert legs == sorted(legs) and legs[-1] == LEG_ROOM and legs[0] > 10


@pytest.mark.parametrize("quiver", ALL)
def test_labels_lie_in_the_box(quiver: Quiver) -> None:
    diagram = place(quiver)
    left, top, width, height = diagram.box
    for node in diagram.nodes:
        long = 6.5 * len(node.parameter)
        start = node.label_at[0] - {"start": 0.0, "middle": long / 2, "end": long}[node.label_anchor]
        assert left <= start and start + long <= left + width, node
        assert top + 8 <= node.label_at[1] <= top + height - 2, node


@pytest.mark.parametrize("shorthand", ["21,111,111", "111111,222,33", "11,11,11,11", "(1)(1),11,11", "1^7,1^7,61,61"])
def test_labels_cover_no_vertex(shorthand: str) -> None:
    diagram = place(quiver_of(problem_from_shorthand(shorthand)))
    for node in diagram.nodes:
        long = 6.0 * len(node.parameter)
        start = node.label_at[0] - {"start": 0.0, "middle": long / 2, "end": long}[node.label_anchor]
        for other in diagram.nodes:
            dx = max(start - other.at[0], 0.0, other.at[0] - start - long)
            dy = max(node.label_at[1] - 9 - other.at[1], 0.0, other.at[1] - node.label_at[1])
            assert hypot(dx, dy) > other.radius - 1, (node.id, other.id)


def test_long_parameters_are_said_shortly() -> None:
    total = NAMED["D4"].vertices[0].parameter
    for k in range(60):
        total += built([[(1,)] * (k + 1)]).vertices[k].parameter * (k + 2)
    quiver = built([[leg(1)]])
    changed = replace(quiver, vertices=(replace(quiver.vertices[0], parameter=total), *quiver.vertices[1:]))
    node = place(changed).nodes[0]
    assert node.name.endswith("parameter a sum of 60 terms")
    assert node.parameter == "a sum of 60 terms"
