"""Pieces of markup that all pictures share: the head, edges, shapes of vertices, marks for what is not drawn."""

from html import escape
from math import cos, pi, sin

from app.drawing.geometry import CORNER, Fold, Link, Node, Point

Box = tuple[float, float, float, float]

STYLE = """
.diagram{font-family:serif;background:#fff}.link{fill:none;stroke:#555;stroke-width:1.4}
.bundle{stroke:#bbb;stroke-width:5}
.shape{fill:#fff;stroke:#222;stroke-width:1.6}.core .shape{fill:#e8e4f4}.empty .shape{stroke-dasharray:3 3}
.dimension{font-size:15px;text-anchor:middle}.parameter,.link-count,.fold-count{font-size:11px;fill:#444}
.parameter{paint-order:stroke;stroke:#fff;stroke-width:3px}.fold-count{text-anchor:middle}.dimension.wide{font-size:12px}.weight,.signed{font-size:10px;text-anchor:middle;fill:#222}
.negative{stroke-dasharray:6 4}.axis{stroke:#222;stroke-width:1}.grid{stroke:#ddd;stroke-width:.6}
.polygon{fill:none;stroke:#222;stroke-width:2}.under{fill:#e8e4f4}.tick,.slope{font-size:11px;fill:#222}
"""
"""Style for a picture that stands alone, outside the page and its stylesheet."""


def head(
    box: Box,
    title: str,
    description: str,
    name: str,
    *,
    alone: bool,
    scale: float,
    role: str = "img",
    kind: str = "diagram",
) -> str:
    """The opening tag, with title and description.

    ``name`` begins their ids, ``alone`` adds namespace and style, ``kind`` is the class.
    """
    left, top, width, height = box
    namespace = ' xmlns="http://www.w3.org/2000/svg"' if alone else ""
    style = f"<style>{STYLE}</style>" if alone else ""
    return (
        f'<svg{namespace} class="{kind}" role="{role}" aria-labelledby="{name}-title {name}-description" '
        f'width="{coordinate(width * scale)}" height="{coordinate(height * scale)}" '
        f'viewBox="{coordinate(left)} {coordinate(top)} {coordinate(width)} {coordinate(height)}">{style}'
        f'<title id="{name}-title">{escape(title)}</title><desc id="{name}-description">{escape(description)}</desc>'
    )


def link_markup(link: Link) -> str:
    """A bundle of edges, with its number where it is drawn with fewer curves."""
    if link.bundled:
        title = f"<title>{link.count} edges</title>"
        return f'<path class="link bundle" d="M{pair(link.start)}L{pair(link.end)}">{title}</path>'
    curves = "".join(
        f'<path class="link" d="M{pair(link.start)}Q{pair(control)} {pair(link.end)}"/>' for control in link.controls
    )
    if link.count == len(link.controls):
        return curves
    # above a flat edge, beside a steep one
    flat = abs(link.end[0] - link.start[0]) > abs(link.end[1] - link.start[1])
    anchor, shift = ("middle", 0) if flat else ("start", 5)
    cx, cy = link.controls[0]
    place = f'text-anchor="{anchor}" x="{coordinate(cx + shift)}" y="{coordinate(cy - 5)}"'
    return f'{curves}<text class="link-count" {place}>{link.count} edges</text>'


def shape(node: Node) -> str:
    """The outline of a vertex: a hexagon for core vertices, a disc on legs."""
    x, y = node.at
    if node.role == "leg":
        return f'<circle class="shape" cx="{coordinate(x)}" cy="{coordinate(y)}" r="{coordinate(node.radius)}"/>'
    reach = node.radius * CORNER
    corners = (pair((x + reach * cos(k * pi / 3), y + reach * sin(k * pi / 3))) for k in range(6))
    return f'<polygon class="shape" points="{", ".join(corners)}"/>'


def fold_markup(fold: Fold) -> str:
    """A mark with the number of vertices that are not drawn."""
    x, y = fold.at
    half = 9.5 + 3.75 * max(2, len(str(fold.hidden)))
    box = f'x="{coordinate(x - half)}" y="{coordinate(y - 10)}" width="{coordinate(2 * half)}" height="20" rx="10"'
    return (
        f'<g class="fold"><title>{escape(fold.name)}</title><rect class="shape" {box}/>'
        f'<text class="fold-count" x="{coordinate(x)}" y="{coordinate(y + 4)}">+{fold.hidden}</text></g>'
    )


def pair(point: Point) -> str:
    """A point as two coordinates."""
    return f"{coordinate(point[0])} {coordinate(point[1])}"


def coordinate(value: float) -> str:
    """A coordinate with one decimal at most."""
    text = f"{value:.1f}"
    return text[:-2] if text.endswith(".0") else text
