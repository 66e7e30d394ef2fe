"""Quiver → placed diagram.

A single core vertex stands in the middle and its legs run outwards in all directions: a star.  Several core vertices
stand on a ring, in an order with few crossings, together with the heads of the legs that hang on all of them; every leg
runs straight outwards from its place on the ring, so legs never cross anything.  Places depend on the structure of the
quiver alone, never on dimensions: a diagram stays put while its numbers change.

Long legs and large groups of core vertices are folded: the first few, a mark with the number left out, the last.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import cos, hypot, pi, sin
from typing import Literal

from app.drawing.geometry import Diagram, Fold, Link, Node, Point
from app.drawing.ring import ring_order
from app.exact.number import write_number
from app.roots.quiver import Quiver, Vertex

LEG_SHOWN = 6
GROUP_SHOWN = 10
_FIRST_OF_LEG = 3
_CORE_RADIUS = 19.0
_LEG_RADIUS = 15.0
_STEP = 58.0
_BOW = 26.0
_MOST_CURVES = 5
_MARGIN = 30.0
_MOST_TERMS = 40


@dataclass(frozen=True)
class _Ray:
    """Where a leg runs: from a point, in a direction."""

    start: Point
    direction: Point


def place(quiver: Quiver, dimension: Sequence[int] | None = None) -> Diagram:
    """Place the vertices of a quiver; ``dimension`` replaces the dimensions written in them.

    Cost: linear in what is drawn; at most six places on a ring are ordered by trying all orders, once for every shape.
    """
    return _Placer(quiver, quiver.dimension if dimension is None else dimension).diagram()


class _Placer:
    """The work of placing one quiver."""

    def __init__(self, quiver: Quiver, dimension: Sequence[int]) -> None:
        self.quiver = quiver
        self.dimension = dimension
        self.nodes: list[Node] = []
        self.links: list[Link] = []
        self.folds: list[Fold] = []
        self.places: dict[int, Point] = {}
        self.legs: dict[tuple[int, int], list[int]] = {}
        groups: dict[int, list[int]] = {}
        for v, vertex in enumerate(quiver.vertices):
            if vertex.role == "core":
                groups.setdefault(vertex.pole, []).append(v)
            else:
                self.legs.setdefault((vertex.pole, vertex.block), []).append(v)
        self.groups = list(groups.values())
        self.own = {
            v: self.legs[quiver.vertices[v].pole, quiver.vertices[v].block]
            for group in self.groups
            for v in group
            if (quiver.vertices[v].pole, quiver.vertices[v].block) in self.legs
        }
        owned = [leg[0] for leg in self.own.values()]
        self.shared = [leg for leg in self.legs.values() if leg[0] not in owned]

    def diagram(self) -> Diagram:
        if sum(len(group) for group in self.groups) == 1:
            self._star()
        else:
            self._ring()
        # in the quiver's order, so that the keyboard walks through the vertices as the table lists them
        rank = {vertex.id: v for v, vertex in enumerate(self.quiver.vertices)}
        nodes = tuple(sorted(self.nodes, key=lambda node: rank[node.id]))
        return Diagram(nodes, tuple(self.links), tuple(self.folds), self._box())

    # --- a star

    def _star(self) -> None:
        ((core,),) = self.groups
        self._node(core, (0.0, 0.0), (0.0, -1.0))
        legs = list(self.legs.values())
        for k, leg in enumerate(legs):
            direction = _direction(k, len(legs), start=pi)
            self._leg(leg, _Ray((0.0, 0.0), direction), _spread(len(legs)))

    # --- a ring

    def _ring(self) -> None:
        members, hidden = self._members()
        index = {v: k for k, v in enumerate(members)}
        inside = [edge for edge in self.quiver.edges if edge[0] in index and edge[1] in index]
        order = ring_order(len(members), tuple((index[a], index[b]) for a, b, _ in inside))
        size = len(members) + len(hidden)
        radius = max(64.0, size * (2 * _CORE_RADIUS + 26.0) / (2 * pi))
        if len(members) == 2 and not hidden:
            radius = 52.0
        heads = {leg[0]: leg for leg in self.shared}
        start = pi if size <= 2 else -pi / 2 if size % 2 else -pi / 2 - pi / size
        angles = self._angles(order, members, hidden)
        for v, k in angles.items():
            direction = _direction(k, size, start)
            point = (radius * direction[0], radius * direction[1])
            self.places[v] = point
            self._node(v, point, direction)
            leg = heads[v][1:] if v in heads else self.own.get(v, [])
            self._leg(leg, _Ray(point, direction), 0.0)
        for k, (count, name) in hidden.items():
            direction = _direction(k, size, start)
            self.folds.append(Fold((radius * direction[0], radius * direction[1]), count, name))
        for a, b, count in inside:
            self.links.append(bundle(self.places[a], self.places[b], count))

    def _members(self) -> tuple[list[int], dict[int, tuple[int, str]]]:
        """Vertices on the ring in the given order, and marks for those left out: place → (number, in words)."""
        members: list[int] = []
        hidden: dict[int, tuple[int, str]] = {}
        heads = [leg[0] for leg in self.shared]
        for group in [*self.groups, heads] if heads else self.groups:
            if len(group) <= GROUP_SHOWN:
                members += group
                continue
            shown = group[: GROUP_SHOWN - 2]
            members += shown
            count = len(group) - len(shown) - 1
            hidden[len(members) + len(hidden)] = (count, f"{count} more vertices of this kind are not drawn")
            members.append(group[-1])
        return members, hidden

    def _angles(self, order: Sequence[int], members: list[int], hidden: dict[int, tuple[int, str]]) -> dict[int, int]:
        """Place number of every member; marks keep their own places in between."""
        free = [k for k in range(len(members) + len(hidden)) if k not in hidden]
        return {members[member]: k for member, k in zip(order, free, strict=True)}

    # --- parts

    def _leg(self, leg: list[int], ray: _Ray, extra: float) -> None:
        """A leg outwards along its ray, folded when it is long."""
        shown: list[int | None] = list(leg)
        if len(leg) > LEG_SHOWN:
            shown = [*leg[:_FIRST_OF_LEG], None, leg[-1]]
        previous = ray.start
        for k, v in enumerate(shown):
            reach = _STEP * (k + 1) + extra
            point = (ray.start[0] + reach * ray.direction[0], ray.start[1] + reach * ray.direction[1])
            self.links.append(Link(previous, point, (_middle(previous, point),), 1))
            if v is None:
                hidden = len(leg) - _FIRST_OF_LEG - 1
                self.folds.append(Fold(point, hidden, f"{hidden} more vertices of this leg are not drawn"))
            else:
                self._node(v, point, ray.direction)
            previous = point

    def _node(self, v: int, point: Point, direction: Point) -> None:
        vertex = self.quiver.vertices[v]
        radius = _CORE_RADIUS if vertex.role == "core" else _LEG_RADIUS
        terms = len(vertex.parameter.terms)
        parameter = write_number(vertex.parameter) if terms <= _MOST_TERMS else f"a sum of {terms} terms"
        # the parameter stands beside the vertex, across the direction of the leg, where no edge runs
        across = (-direction[1], direction[0]) if abs(direction[0]) > 0.3 else (1.0, 0.0)
        if across[1] > 0.5:
            across = (-across[0], -across[1])
        label = (point[0] + across[0] * (radius + 9), point[1] + across[1] * (radius + 9) + 4)
        anchor: Literal["start", "middle", "end"] = "middle"
        if abs(across[0]) > 0.5:
            anchor = "start" if across[0] > 0 else "end"
        name = vertex_name(replace(vertex, dimension=self.dimension[v]), parameter)
        self.nodes.append(
            Node(vertex.id, vertex.role, point, radius, self.dimension[v], parameter, name, label, anchor)
        )

    def _box(self) -> tuple[float, float, float, float]:
        """The box of all that is drawn, parameters' labels included up to a length."""
        points = [node.at for node in self.nodes] + [fold.at for fold in self.folds]
        points += [control for link in self.links for control in link.controls]
        left, right = min(x for x, _ in points) - _MARGIN, max(x for x, _ in points) + _MARGIN
        top, bottom = min(y for _, y in points) - _MARGIN, max(y for _, y in points) + _MARGIN
        return (left, top, right - left, bottom - top)


def vertex_name(vertex: Vertex, parameter: str) -> str:
    """What a vertex is, for those who hear it: poles, blocks and places are counted from one."""
    where = f"pole {vertex.pole + 1}, block {vertex.block + 1}"
    kind = "core vertex" if vertex.role == "core" else f"leg vertex {vertex.leg}"
    return f"{kind} of {where}: dimension {vertex.dimension}, parameter {parameter}"


def _direction(k: int, size: int, start: float) -> Point:
    """The k-th of ``size`` equally spaced directions, clockwise from ``start``."""
    angle = start + 2 * pi * k / size
    return (round(cos(angle), 6), round(sin(angle), 6))


def _spread(legs: int) -> float:
    """How far the first vertices move out so that neighbouring legs keep a distance."""
    return max(0.0, legs * (2 * _LEG_RADIUS + 8.0) / (2 * pi) - _STEP)


def _middle(a: Point, b: Point) -> Point:
    return ((a[0] + b[0]) / 2, (a[1] + b[1]) / 2)


def bundle(a: Point, b: Point, count: int) -> Link:
    """Parallel curves for a multiple edge; from ``_MOST_CURVES`` on one curve with its number."""
    middle = _middle(a, b)
    length = hypot(b[0] - a[0], b[1] - a[1]) or 1.0
    across = ((a[1] - b[1]) / length, (b[0] - a[0]) / length)
    drawn = count if count <= _MOST_CURVES else 1
    offsets = [(k - (drawn - 1) / 2) * _BOW for k in range(drawn)]
    controls = tuple((middle[0] + across[0] * o, middle[1] + across[1] * o) for o in offsets)
    return Link(a, b, controls, count)
