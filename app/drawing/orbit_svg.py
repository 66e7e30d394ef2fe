"""Placed picture of ramified data → SVG, with the classes of ``svg.py`` and some more.

``negative`` marks broken edges and loops (the break is an attribute of theirs, so that it shows without a stylesheet),
``loop`` arcs, ``signed`` their numbers, ``weight`` the weight of a core vertex.
"""

from collections.abc import Callable
from html import escape

from app.drawing.geometry import Node, Point
from app.drawing.markup import coordinate, fold_markup, head, link_markup, pair, shape
from app.drawing.orbit_layout import Loop, OrbitPicture, SignedLink

_SCALE = 1.4
_BROKEN = ' stroke-dasharray="6 4"'


def orbit_svg(
    picture: OrbitPicture,
    *,
    title: str,
    description: str,
    name: str = "diagram",
    selected: str | None = None,
    wrap: Callable[[str, str], str] | None = None,
    alone: bool = False,
) -> str:
    """The picture as an SVG element with title and description; the arguments are those of ``svg.svg``.

    ``orbit_layout.orbit_description`` writes a description.  Cost: linear in what is drawn.
    """
    role = "img" if wrap is None else "group"
    parts = [head(picture.box, title, description, name, alone=alone, scale=_SCALE, role=role)]
    parts += [link_markup(link) for link in picture.links]
    parts += [_negative(signed) for signed in picture.negative]
    parts += [_loop(loop) for loop in picture.loops]
    parts += [fold_markup(fold) for fold in picture.folds]
    weights = dict(picture.weights)
    for node in picture.nodes:
        markup = _node(node, weights.get(node.id, 1), selected=node.id == selected)
        parts.append(wrap(node.id, markup) if wrap is not None else markup)
    parts.append("</svg>")
    return "".join(parts)


def _negative(signed: SignedLink) -> str:
    link = signed.link
    path = f"M{pair(link.start)}Q{pair(link.controls[0])} {pair(link.end)}"
    return f'<path class="link negative"{_BROKEN} d="{path}"/>{_signed(signed.label, signed.label_at)}'


def _loop(loop: Loop) -> str:
    kind, broken = ("link loop negative", _BROKEN) if loop.count < 0 else ("link loop", "")
    arcs = "".join(
        f'<path class="{kind}"{broken} d="M{pair(start)}C{pair(first)} {pair(second)} {pair(end)}"/>'
        for start, first, second, end in loop.arcs
    )
    return arcs + _signed(loop.label, loop.label_at)


def _signed(label: str, at: Point) -> str:
    return (
        f'<text class="signed link-count" text-anchor="middle" x="{coordinate(at[0])}" y="{coordinate(at[1])}">'
        f"{escape(label)}</text>"
    )


def _node(node: Node, weight: int, *, selected: bool) -> str:
    classes = f"vertex {node.role}" + (" empty" if node.dimension == 0 else "") + (" selected" if selected else "")
    x, y = node.at
    number = str(node.dimension)
    size = "dimension wide" if len(number) > 2 else "dimension"
    below = ""
    if weight > 1:
        y -= 4
        place = f'text-anchor="middle" x="{coordinate(x)}" y="{coordinate(y + 16)}"'
        below = f'<text class="weight link-count" {place}>×{weight}</text>'
    return (
        f'<g class="{classes}" data-vertex="{escape(node.id)}"><title>{escape(node.name)}</title>{shape(node)}'
        f'<text class="{size}" x="{coordinate(x)}" y="{coordinate(y + 5)}">{number}</text>{below}</g>'
    )
