"""Newton polygon of a pole → SVG: rank to the right, irregularity upwards, a vertex wherever the slope changes.

Classes: ``diagram``, ``grid``, ``axis``, ``under`` (the surface below the polygon), ``polygon``, ``corner``, ``tick``
and ``slope`` for the texts.
"""

from fractions import Fraction
from itertools import pairwise

from app.drawing.markup import coordinate, head, pair

_WIDTH = 220.0
_HEIGHT = 150.0
_LEFT = 34.0
_BELOW = 34.0
_ABOVE = 26.0
_RIGHT = 40.0
_MOST_LINES = 12
_TALLEST = 1.2

Corner = tuple[int, int]


def newton_svg(corners: tuple[Corner, ...], *, title: str, name: str, alone: bool = False) -> str:
    """The polygon through the corners, from (0, 0) to (rank, irregularity), as an SVG element.

    ``name`` begins the ids in it.  Lengths are scaled to one size of picture, each axis by itself.
    Cost: number of corners.
    """
    rank, irregularity = corners[-1]
    across = _WIDTH / rank
    # a flat polygon stays flat: one unit upwards is never much longer than one to the right
    upwards = min(_HEIGHT / max(irregularity, 1), across * _TALLEST)
    height = upwards * max(irregularity, 1)
    points = [(x * across, -y * upwards) for x, y in corners]
    box = (-_LEFT, -height - _ABOVE, _LEFT + _WIDTH + _RIGHT, height + _ABOVE + _BELOW)
    parts = [head(box, title, newton_description(corners), name, alone=alone, scale=1.0)]
    for x in _lines(rank):
        parts.append(_line("grid", (x * across, 0.0), (x * across, -height)))
        parts.append(_text("tick", str(x), (x * across, 16.0), "middle"))
    for y in _lines(irregularity):
        parts.append(_line("grid", (0.0, -y * upwards), (_WIDTH, -y * upwards)))
        parts.append(_text("tick", str(y), (-8.0, -y * upwards + 4), "end"))
    outline = " ".join(f"L{pair(point)}" for point in points[1:])
    parts.append(f'<path class="under" d="M{pair(points[0])} {outline} L{pair((points[-1][0], 0.0))}Z"/>')
    parts.append(_line("axis", (0.0, 0.0), (_WIDTH, 0.0)) + _line("axis", (0.0, 0.0), (0.0, -height)))
    parts.append(f'<path class="polygon" d="M{pair(points[0])} {outline}"/>')
    for (start, end), (a, b) in zip(pairwise(points), pairwise(corners), strict=True):
        slope = Fraction(b[1] - a[1], b[0] - a[0])
        # above and left of the edge, where the polygon's convexity leaves room
        middle = ((start[0] + end[0]) / 2 - 6, (start[1] + end[1]) / 2 - 8)
        parts.append(_text("slope", str(slope), middle, "end" if slope else "middle"))
    parts += [f'<circle class="corner" cx="{coordinate(x)}" cy="{coordinate(y)}" r="3"/>' for x, y in points]
    parts.append(_text("tick", "rank", (_WIDTH / 2, 30.0), "middle"))
    parts.append(_text("tick", "irregularity", (4 - _LEFT, 14 - height - _ABOVE), "start"))
    parts.append("</svg>")
    return "".join(parts)


def newton_description(corners: tuple[Corner, ...]) -> str:
    """The polygon in words: slopes with their multiplicities, and the irregularity."""
    slopes = [
        f"slope {Fraction(b[1] - a[1], b[0] - a[0])} with multiplicity {b[0] - a[0]}" for a, b in pairwise(corners)
    ]
    return f"Newton polygon: {', '.join(slopes)}; irregularity {corners[-1][1]}."


def _lines(last: int) -> range:
    """Marks on an axis: all integers, or a round number of them."""
    step = 1
    while last // step > _MOST_LINES:
        step = step * 2 if str(step)[0] != "2" else step // 2 * 5
    return range(0, last + 1, step)


def _line(kind: str, start: tuple[float, float], end: tuple[float, float]) -> str:
    return f'<path class="{kind}" d="M{pair(start)}L{pair(end)}"/>'


def _text(kind: str, text: str, at: tuple[float, float], anchor: str) -> str:
    return f'<text class="{kind}" text-anchor="{anchor}" x="{coordinate(at[0])}" y="{coordinate(at[1])}">{text}</text>'
