"""Where the parameter of a vertex is written: beside it, inside the picture, clear of edges, vertices and other labels.

Labels are shown on demand, or all at once in a file of its own.  They follow the texts' lengths and move no vertex.
"""

from collections.abc import Sequence
from dataclasses import replace
from math import hypot
from typing import Literal, NamedTuple

from app.drawing.geometry import CORNER, Fold, Link, Node, Point

LONGEST = 20
ROOM = 150.0
"""Width that the longest label takes."""
_LETTER = 7.0
_HEIGHT = 15.0
_GAP = 4.0
_ACROSS_AN_EDGE = 80.0
_CLEAR = 0.73


class _Frame(NamedTuple):
    left: float
    top: float
    right: float
    bottom: float


class _Side(NamedTuple):
    """Where a label may stand: from the vertex, in a direction."""

    direction: Point
    anchor: Literal["start", "middle", "end"]


_SLANT = 0.72
_SIDES = (
    _Side((1, 0), "start"),
    _Side((-1, 0), "end"),
    _Side((0, -1), "middle"),
    _Side((0, 1), "middle"),
    _Side((_SLANT, -_SLANT), "start"),
    _Side((_SLANT, _SLANT), "start"),
    _Side((-_SLANT, -_SLANT), "end"),
    _Side((-_SLANT, _SLANT), "end"),
)


def shortened(text: str) -> str:
    """The text as it fits beside a vertex."""
    return text if len(text) <= LONGEST else text[: LONGEST - 1] + "…"


def with_labels(
    nodes: Sequence[Node], links: Sequence[Link], folds: Sequence[Fold], box: tuple[float, float, float, float]
) -> tuple[Node, ...]:
    """The nodes with their labels placed, in their order; each label avoids vertices, marks and earlier labels.

    Of eight places (right, left, above, below, and between these) the first with nothing in the way is taken, or else
    the one with least.  Cost: number of nodes times number of things to avoid, up to eight times.
    """
    left, top, width, height = box
    inside = _Frame(left + 2, top + 2, left + width - 2, top + height - 2)
    taken = [_around(node.at, node.radius + 2, node.radius + 2) for node in nodes]
    taken += [_around(fold.at, 19.0, 12.0) for fold in folds]
    leaving = _directions(links)
    placed = []
    for node in nodes:
        best, side = _best(node, leaving.get(node.at, []), taken, inside)
        taken.append(best)
        x = {"start": best.left + 2, "middle": (best.left + best.right) / 2, "end": best.right - 2}[side.anchor]
        placed.append(replace(node, label_at=(x, best.bottom - 4), label_anchor=side.anchor))
    return tuple(placed)


def _best(node: Node, leaving: Sequence[Point], taken: Sequence[_Frame], inside: _Frame) -> tuple[_Frame, _Side]:
    """The frame and the side with least in the way, the first of several."""
    width = _LETTER * len(node.parameter) + 4
    found: tuple[float, _Frame, _Side] | None = None
    for side in _SIDES:
        frame = _moved_inside(_beside(node, side.direction, width), inside)
        cost = _overlap(frame, taken) + _edges_below(side.direction, leaving)
        if found is None or cost < found[0]:
            found = (cost, frame, side)
        if cost == 0:
            break
    assert found is not None
    return found[1], found[2]


def _directions(links: Sequence[Link]) -> dict[Point, list[Point]]:
    """For every place the directions in which its edges leave."""
    leaving: dict[Point, list[Point]] = {}
    for link in links:
        dx, dy = link.end[0] - link.start[0], link.end[1] - link.start[1]
        length = hypot(dx, dy) or 1.0
        leaving.setdefault(link.start, []).append((dx / length, dy / length))
        leaving.setdefault(link.end, []).append((-dx / length, -dy / length))
    return leaving


def _edges_below(direction: Point, leaving: Sequence[Point]) -> float:
    """How much the edges of a vertex are in the way on a side of it: nothing from about 45 degrees away on."""
    x, y = direction
    near = (x * dx + y * dy for dx, dy in leaving)
    return round(sum(_ACROSS_AN_EDGE * (cosine - _CLEAR) for cosine in near if cosine > _CLEAR), 3)


def _beside(node: Node, direction: Point, width: float) -> _Frame:
    x, y = direction
    reach = node.radius * CORNER + _GAP
    aside, up = (x > 0) - (x < 0), (y > 0) - (y < 0)
    centre = (node.at[0] + x * reach + aside * width / 2, node.at[1] + y * reach + up * _HEIGHT / 2)
    return _around(centre, width / 2, _HEIGHT / 2)


def _around(centre: Point, half_width: float, half_height: float) -> _Frame:
    return _Frame(centre[0] - half_width, centre[1] - half_height, centre[0] + half_width, centre[1] + half_height)


def _moved_inside(frame: _Frame, inside: _Frame) -> _Frame:
    right = max(0.0, inside.left - frame.left) - max(0.0, frame.right - inside.right)
    down = max(0.0, inside.top - frame.top) - max(0.0, frame.bottom - inside.bottom)
    return _Frame(frame.left + right, frame.top + down, frame.right + right, frame.bottom + down)


def _overlap(frame: _Frame, taken: Sequence[_Frame]) -> float:
    """The surface that a frame shares with others, rounded so that equal sides stay in their order."""
    left, top, right, bottom = frame
    total = 0.0
    for a, b, c, d in taken:
        if a < right and left < c and b < bottom and top < d:
            total += (min(c, right) - max(a, left)) * (min(d, bottom) - max(b, top))
    return round(total, 3)
