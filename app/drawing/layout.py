"""Quiver → placed diagram.

Where all edges between places go through one vertex, that vertex stands in the middle and its legs run outwards in all
directions: a star.  Otherwise core vertices stand on a ring, in an order with few crossings, together with the heads of
the legs that hang on all of them; every leg runs straight outwards from its place on the ring, so legs never cross
anything.  Places depend on the structure of the quiver alone, never on dimensions: a diagram stays put while its
numbers change.  Sizes of vertices follow the dimensions, within the room that every vertex has.
"""

from collections.abc import Sequence
from dataclasses import replace
from math import cos, hypot, log, pi, sin

from app.drawing.folding import (
    LEG_SHOWN,
    SMALL_LEG_SHOWN,
    Arm,
    Place,
    arms_of,
    ring_places,
    shown_of_leg,
    star_places,
    words_for_mark,
)
from app.drawing.geometry import CORNER, Diagram, Fold, Link, Node, Point
from app.drawing.labels import ROOM, shortened, with_labels
from app.drawing.ring import clearance, ring_order
from app.exact.number import write_number
from app.exact.value import Value
from app.roots.quiver import Quiver, Vertex

CORE_ROOM = 21.0
LEG_ROOM = 16.0
"""The largest radius of a core vertex and of a leg vertex."""
_SMALLEST = 0.74
_LARGE_DIMENSION = 12
_APART = 8.0
_STEP = 58.0
_SMALL_STEP = 44.0
_RING_STEP = 66.0
_LARGEST_RING = 320.0
_BOW = 26.0
_MOST_CURVES = 5
_MARGIN = 36.0
_MARGIN_ASIDE = 48.0
_SMALL_MARGIN = 26.0
_MOST_TERMS = 40
_LONGEST_NAME = 160


def place(
    quiver: Quiver, dimension: Sequence[int] | None = None, *, small: bool = False, symbols: Sequence[str] = ()
) -> Diagram:
    """Place the vertices of a quiver; ``dimension`` replaces the dimensions written in them.

    ``small`` is for pictures of the size of a thumb: short legs, no labels, every vertex as large as it may be.
    ``symbols`` gives the order of the symbols in parameters.  Cost: the number of edges, and what is drawn; at most six
    places on a ring are ordered by trying all orders, once for every shape.
    """
    return _Placer(quiver, quiver.dimension if dimension is None else dimension, small, symbols).diagram()


class _Placer:
    """The work of placing one quiver."""

    def __init__(self, quiver: Quiver, dimension: Sequence[int], small: bool, symbols: Sequence[str]) -> None:
        self.quiver = quiver
        self.dimension = dimension
        self.small = small
        self.symbols = symbols
        self.step = _SMALL_STEP if small else _STEP
        self.nodes: dict[int, Node] = {}
        self.links: list[Link] = []
        self.folds: list[Fold] = []

    def diagram(self) -> Diagram:
        groups = arms_of(self.quiver)
        places = ring_places(groups)
        counts = self._edges(places)
        middle = self._middle(places, counts)
        if middle is None:
            self._ring(places, counts)
        else:
            arms = [arm for group in groups for arm in group]
            self._star(middle, arms)
        box = self._box()
        # in the quiver's order, so that the keyboard walks through the vertices as the table lists them
        nodes = tuple(self.nodes[v] for v in sorted(self.nodes))
        if not self.small:
            nodes = with_labels(nodes, self.links, self.folds, box)
        return Diagram(nodes, tuple(self.links), tuple(self.folds), box)

    def _edges(self, places: Sequence[Place]) -> dict[tuple[int, int], int]:
        """Numbers of edges between different places, by their numbers, the quiver's smaller vertex first."""
        at = [-1] * len(self.quiver.vertices)
        for k, slot in enumerate(places):
            for arm in slot.arms:
                at[arm[0]] = k
        counts: dict[tuple[int, int], int] = {}
        for i, j, count in self.quiver.edges:
            a, b = at[i], at[j]
            if a >= 0 and b >= 0 and a != b:
                counts[a, b] = counts.get((a, b), 0) + count
        return counts

    def _middle(self, places: Sequence[Place], counts: dict[tuple[int, int], int]) -> int | None:
        """The vertex through which all edges between places go, if every other place has such an edge.

        Two core vertices face each other, and neither is in the middle.
        """
        heads = [slot.arms[0][0] for slot in places]
        if len(counts) != len(places) - 1:
            return None
        if len(places) == 2 and self.quiver.vertices[heads[1]].role == "core":
            return None
        for k, slot in enumerate(places):
            if not slot.is_mark and all(k in pair for pair in counts):
                return heads[k]
        return None

    def _star(self, middle: int, arms: Sequence[Arm]) -> None:
        """A vertex in the middle and all other arms, its own leg among them, round it."""
        own = next(arm for arm in arms if arm[0] == middle)
        around = [arm for arm in arms if arm[0] != middle]
        if len(own) > 1:
            # a core vertex' own leg comes where its pole is in the list; the rest of a leg comes where its head was
            key = self.quiver.vertices[own[1]]
            position = sum(self._pole(arm) < (key.pole, key.block) for arm in around)
            around.insert(position, own[1:])
        self._node(middle, (0.0, 0.0))
        places = star_places(around)
        counts = self._edges([Place(((middle,),)), *places])
        room = max((_room(self.quiver.vertices[p.arms[0][0]]) for p in places), default=0.0)
        reach = self.step + (CORE_ROOM - LEG_ROOM if room > LEG_ROOM else 0.0)
        if len(places) > 2:
            reach = max(reach, (room * CORNER + _APART / 2) / sin(pi / len(places)))
        for k, slot in enumerate(places):
            direction = _direction(k, len(places), start=pi)
            point = (reach * direction[0], reach * direction[1])
            count = counts.get((0, k + 1), 0) + counts.get((k + 1, 0), 0)
            self._join((0.0, 0.0), point, count, bundled=slot.is_mark)
            self._place(slot, point, direction)

    def _pole(self, arm: Arm) -> tuple[int, int]:
        vertex = self.quiver.vertices[arm[0]]
        return (vertex.pole, vertex.block)

    def _ring(self, places: Sequence[Place], counts: dict[tuple[int, int], int]) -> None:
        size = len(places)
        order = ring_order(size, tuple(counts))
        radius = max(64.0, size * _RING_STEP / (2 * pi))
        clear = CORE_ROOM * CORNER + _APART / 2
        radius = min(max(radius, clear / clearance(order, tuple(counts))), max(radius, _LARGEST_RING))
        if size == 2:
            radius = 54.0
        start = pi if size <= 2 else -pi / 2 if size % 2 else -pi / 2 - pi / size
        points: dict[int, Point] = {}
        for k, slot in enumerate(order):
            direction = _direction(k, size, start)
            points[slot] = (radius * direction[0], radius * direction[1])
            self._place(places[slot], points[slot], direction)
        for (a, b), count in counts.items():
            self._join(points[a], points[b], count, bundled=places[a].is_mark or places[b].is_mark)

    # --- parts

    def _join(self, start: Point, end: Point, count: int, *, bundled: bool) -> None:
        if bundled:
            self.links.append(Link(start, end, (_middle(start, end),), count, bundled=True))
        else:
            self.links.append(bundle(start, end, count))

    def _place(self, slot: Place, point: Point, direction: Point) -> None:
        """An arm outwards from its place, its leg folded where it is long; or a mark."""
        if slot.is_mark:
            hidden = sum(len(arm) for arm in slot.arms)
            self.folds.append(Fold(point, hidden, words_for_mark(self.quiver, slot.arms)))
            return
        (arm,) = slot.arms
        most = SMALL_LEG_SHOWN if self.small else LEG_SHOWN
        body = arm[1:] if self.quiver.vertices[arm[0]].role == "core" else arm
        shown = [*arm[: len(arm) - len(body)], *shown_of_leg(body, most)]
        hidden = len(arm) - sum(v is not None for v in shown)
        previous = point
        for k, v in enumerate(shown):
            at = (point[0] + k * self.step * direction[0], point[1] + k * self.step * direction[1])
            if k:
                self.links.append(Link(previous, at, (_middle(previous, at),), 1))
            if v is None:
                self.folds.append(Fold(at, hidden, f"{hidden} more vertices of this leg are not drawn"))
            else:
                self._node(v, at)
            previous = at

    def _node(self, v: int, point: Point) -> None:
        vertex = self.quiver.vertices[v]
        dimension = self.dimension[v]
        radius = _room(vertex) if self.small else radius_of(vertex, dimension)
        parameter = "" if self.small else _parameter(vertex.parameter, self.symbols)
        name = vertex_name(replace(vertex, dimension=dimension), parameter)
        self.nodes[v] = Node(
            vertex.id, vertex.role, point, radius, dimension, shortened(parameter), name, point, "middle"
        )

    def _box(self) -> tuple[float, float, float, float]:
        """The box of all that is drawn, with room for the label of any vertex."""
        points = [node.at for node in self.nodes.values()] + [fold.at for fold in self.folds]
        points += [control for link in self.links for control in link.controls]
        margin = _SMALL_MARGIN if self.small else _MARGIN
        aside = margin if self.small else _MARGIN_ASIDE
        left, right = min(x for x, _ in points) - aside, max(x for x, _ in points) + aside
        top, bottom = min(y for _, y in points) - margin, max(y for _, y in points) + margin
        if not self.small:
            lack = max(0.0, ROOM + 4 - (right - left)) / 2
            left, right = left - lack, right + lack
        return (left, top, right - left, bottom - top)


def radius_of(vertex: Vertex, dimension: int) -> float:
    """The size of a vertex: it grows with the logarithm of the dimension up to the room that the vertex has."""
    grown = min(1.0, log(max(dimension, 1)) / log(_LARGE_DIMENSION))
    return _room(vertex) * (_SMALLEST + (1 - _SMALLEST) * grown)


def vertex_name(vertex: Vertex, parameter: str) -> str:
    """What a vertex is, for those who hear it: poles, blocks and places are counted from one."""
    where = f"pole {vertex.pole + 1}, block {vertex.block + 1}"
    kind = "core vertex" if vertex.role == "core" else f"leg vertex {vertex.leg}"
    said = f", parameter {parameter}" if parameter else ""
    return f"{kind} of {where}: dimension {vertex.dimension}{said}"


def bundle(a: Point, b: Point, count: int) -> Link:
    """Parallel curves for a multiple edge; from ``_MOST_CURVES`` on one curve with its number."""
    middle = _middle(a, b)
    length = hypot(b[0] - a[0], b[1] - a[1]) or 1.0
    across = ((a[1] - b[1]) / length, (b[0] - a[0]) / length)
    drawn = count if count <= _MOST_CURVES else 1
    offsets = [(k - (drawn - 1) / 2) * _BOW for k in range(drawn)]
    controls = tuple((middle[0] + across[0] * o, middle[1] + across[1] * o) for o in offsets)
    return Link(a, b, controls, count)


def _room(vertex: Vertex) -> float:
    return CORE_ROOM if vertex.role == "core" else LEG_ROOM


def _parameter(value: Value, symbols: Sequence[str]) -> str:
    """The parameter as it is said: whole, or what it is like where it is long."""
    terms = len(value.terms)
    text = write_number(value, symbols) if terms <= _MOST_TERMS else ""
    if text and len(text) <= _LONGEST_NAME:
        return text
    return f"a sum of {terms} terms" if terms > 1 else f"{text[:_LONGEST_NAME]}…"


def _direction(k: int, size: int, start: float) -> Point:
    """The k-th of ``size`` equally spaced directions, clockwise from ``start``."""
    angle = start + 2 * pi * k / size
    return (round(cos(angle), 6), round(sin(angle), 6))


def _middle(a: Point, b: Point) -> Point:
    return ((a[0] + b[0]) / 2, (a[1] + b[1]) / 2)
