"""Diagram of ramified data → placed picture.

Vertices stand where ``layout.py`` puts them.  What is new are negative edges, drawn as one broken curve with their
signed number; loops, small arcs on the side of a vertex that has most room, broken where their number is negative; and
the weight of a core vertex, written ×e below its dimension.
"""

from dataclasses import dataclass, replace
from math import atan2, cos, hypot, pi, sin

from app.drawing.geometry import Fold, Link, Node, Point
from app.drawing.layout import bundle, place
from app.exact.value import ZERO
from app.roots.orbit_diagram import OrbitDiagram, OrbitVertex
from app.roots.quiver import Quiver, Vertex

_MOST_ARCS = 3
_REACH = 34.0
_NEXT_ARC = 15.0
_OPENING = 0.5
_MARGIN = 14.0
_LABEL_WIDTH = 30.0
MINUS = "−"


@dataclass(frozen=True)
class SignedLink:
    """A bundle of negative edges, drawn as one broken curve."""

    link: Link
    label: str
    label_at: Point


@dataclass(frozen=True)
class Loop:
    """Loops at a vertex: cubic arcs (start, two controls, end), their signed number, and where it is written."""

    arcs: tuple[tuple[Point, Point, Point, Point], ...]
    count: int
    label: str
    label_at: Point


@dataclass(frozen=True)
class OrbitPicture:
    """Everything that is drawn; ``weights`` has the weight of every node that has one above 1, by id."""

    nodes: tuple[Node, ...]
    links: tuple[Link, ...]
    negative: tuple[SignedLink, ...]
    loops: tuple[Loop, ...]
    folds: tuple[Fold, ...]
    weights: tuple[tuple[str, int], ...]
    box: tuple[float, float, float, float]


def place_orbits(diagram: OrbitDiagram) -> OrbitPicture:
    """Place the diagram of ramified data; by structure alone, as ``layout.place`` does.

    Cost: that of ``layout.place`` plus the number of edges and loops.
    """
    vertices = tuple(Vertex(v.id, v.role, v.pole, v.block, v.leg, v.dimension, ZERO) for v in diagram.vertices)
    skeleton = tuple((i, j, abs(count)) for i, j, count in diagram.edges)
    placed = place(Quiver(diagram.base, vertices, skeleton))
    known = {vertex.id: vertex for vertex in diagram.vertices}
    nodes = tuple(replace(node, name=orbit_vertex_name(known[node.id]), parameter="") for node in placed.nodes)
    at = {node.id: node for node in nodes}
    drawn = [
        (at[diagram.vertices[i].id], at[diagram.vertices[j].id], count)
        for i, j, count in diagram.edges
        if diagram.vertices[i].id in at and diagram.vertices[j].id in at
    ]
    marks = {fold.at for fold in placed.folds}
    # bundles that end at a mark may mix signs: they are left out, the mark itself says how much is not drawn
    links = [link for link in placed.links if not link.bundled and (link.start in marks or link.end in marks)]
    links += [bundle(a.at, b.at, count) for a, b, count in drawn if count > 0]
    negative = tuple(_negative(a.at, b.at, count) for a, b, count in drawn if count < 0)
    every = [*links, *(signed.link for signed in negative)]
    loops = tuple(
        _loop(at[diagram.vertices[i].id], count, every) for i, count in diagram.loops if diagram.vertices[i].id in at
    )
    weights = tuple((node.id, known[node.id].weight) for node in nodes if known[node.id].weight > 1)
    return OrbitPicture(nodes, tuple(links), negative, loops, placed.folds, weights, _box(placed.box, negative, loops))


def orbit_vertex_name(vertex: OrbitVertex) -> str:
    """What a vertex is, for those who hear it: poles, blocks and places are counted from one."""
    where = f"pole {vertex.pole + 1}, block {vertex.block + 1}"
    if vertex.role == "leg":
        return f"leg vertex {vertex.leg} of {where}: dimension {vertex.dimension}"
    if vertex.weight == 1:
        return f"core vertex of {where}: dimension {vertex.dimension}, unramified"
    weight = f"weight {vertex.weight}, the number of conjugates of its exponent"
    return f"core vertex of {where}: dimension {vertex.dimension}, {weight}"


def orbit_description(diagram: OrbitDiagram) -> str:
    """The diagram in words: vertices, edges and loops with their signs, and how these are drawn."""
    ids = [vertex.id for vertex in diagram.vertices]
    said = [f"{orbit_vertex_name(vertex)}." for vertex in diagram.vertices]
    said += [f"{_counted(count, 'edge')} between {ids[i]} and {ids[j]}." for i, j, count in diagram.edges]
    said += [f"{_counted(count, 'loop')} at {ids[i]}." for i, count in diagram.loops]
    if any(vertex.weight > 1 for vertex in diagram.vertices):
        said.append("Below a dimension, ×e is the weight of a Galois orbit of e exponents.")
    if any(count < 0 for _, _, count in diagram.edges) or any(count < 0 for _, count in diagram.loops):
        said.append("Negative edges and loops are broken lines with their number.")
    return " ".join(said)


def _counted(count: int, thing: str) -> str:
    number = f"{MINUS if count < 0 else ''}{abs(count)}"
    return f"{number} {thing}" if abs(count) == 1 else f"{number} {thing}s"


def _negative(a: Point, b: Point, count: int) -> SignedLink:
    """One straight curve; the number stands beside its middle."""
    link = replace(bundle(a, b, 1), count=count)
    length = hypot(b[0] - a[0], b[1] - a[1]) or 1.0
    across = ((b[1] - a[1]) / length, (a[0] - b[0]) / length)
    if across[1] > 0:
        across = (-across[0], -across[1])
    middle = link.controls[0]
    label = f"{MINUS}{-count}"
    return SignedLink(link, label, (middle[0] + 12 * across[0], middle[1] + 12 * across[1] + 4))


def _loop(node: Node, count: int, links: list[Link]) -> Loop:
    """Arcs on the side of the vertex where the gap between its edges is widest."""
    angles = sorted(
        angle
        for link in links
        for end, control in ((link.start, link.controls[0]), (link.end, link.controls[-1]))
        if end == node.at
        for angle in [atan2(control[1] - end[1], control[0] - end[0])]
    )
    middle = -pi / 2
    if angles:
        gaps = [(b - a, (a + b) / 2) for a, b in zip(angles, [*angles[1:], angles[0] + 2 * pi], strict=True)]
        # upwards among equals, so that pictures look alike
        middle = max(gaps, key=lambda gap: (round(gap[0], 6), -sin(gap[1])))[1]
    drawn = count if 0 < count <= _MOST_ARCS else 1
    arcs = []
    for k in range(drawn):
        reach = node.radius + _REACH + k * _NEXT_ARC
        opening = _OPENING + 0.12 * k
        ends = [_polar(node.at, middle + side * opening, node.radius) for side in (-1, 1)]
        controls = [_polar(node.at, middle + side * opening * 1.25, reach * 1.15) for side in (-1, 1)]
        arcs.append((ends[0], controls[0], controls[1], ends[1]))
    # a cubic arc reaches three quarters of the way to its controls
    outermost = node.radius / 4 + 0.75 * 1.15 * (node.radius + _REACH + (drawn - 1) * _NEXT_ARC)
    label_at = _polar(node.at, middle, outermost + 6)
    label = f"{MINUS if count < 0 else '+'}{abs(count)} loop" + ("" if abs(count) == 1 else "s")
    # a text's anchor is its middle: beside a vertex it moves out by half its width
    label_at = (label_at[0] + cos(middle) * _LABEL_WIDTH / 2, label_at[1] + 4)
    return Loop(tuple(arcs), count, label, label_at)


def _polar(centre: Point, angle: float, length: float) -> Point:
    return (centre[0] + length * cos(angle), centre[1] + length * sin(angle))


def _box(
    box: tuple[float, float, float, float], negative: tuple[SignedLink, ...], loops: tuple[Loop, ...]
) -> tuple[float, float, float, float]:
    """The box of the vertices, widened for arcs and labels."""
    left, top, width, height = box
    points = [point for loop in loops for arc in loop.arcs for point in arc]
    labels = [loop.label_at for loop in loops] + [signed.label_at for signed in negative]
    points += [(x + side * _LABEL_WIDTH, y) for x, y in labels for side in (-1, 1)]
    right = max([left + width, *(x + _MARGIN for x, _ in points)])
    bottom = max([top + height, *(y + _MARGIN for _, y in points)])
    left = min([left, *(x - _MARGIN for x, _ in points)])
    top = min([top, *(y - _MARGIN for _, y in points)])
    return (left, top, right - left, bottom - top)
