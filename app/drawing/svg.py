"""Placed diagram → SVG, with classes and ids and without style, links or scripts.

Core vertices are hexagons, leg vertices discs; a vertex of dimension 0 has a broken outline.  Classes:
``diagram``, ``link``, ``link-count``, ``vertex`` with ``core`` or ``leg`` and ``empty`` or ``selected``, ``shape``,
``dimension``, ``parameter``, ``fold``, ``fold-count``.
"""

from collections.abc import Callable
from html import escape
from math import cos, pi, sin

from app.drawing.geometry import Diagram, Fold, Link, Node

_LONGEST_LABEL = 18
_FULL = 1.4
_SMALL = 0.5

STYLE = """
.diagram{font-family:serif;background:#fff}.link{fill:none;stroke:#555;stroke-width:1.4}
.shape{fill:#fff;stroke:#222;stroke-width:1.6}.core .shape{fill:#e8e4f4}.empty .shape{stroke-dasharray:3 3}
.dimension{font-size:15px;text-anchor:middle}.parameter,.link-count,.fold-count{font-size:11px;fill:#444}
.fold-count{text-anchor:middle}
"""
"""Style for a picture that stands alone, outside the page and its stylesheet."""


def svg(
    diagram: Diagram,
    *,
    title: str,
    description: str,
    name: str = "diagram",
    selected: str | None = None,
    wrap: Callable[[str, str], str] | None = None,
    alone: bool = False,
) -> str:
    """The diagram as an SVG element with title and description.

    ``name`` begins the ids in it, so that several pictures stand on one page; ``wrap(id, markup)`` may put something
    round a vertex; ``alone`` adds a namespace and style for a file.  Cost: linear in what is drawn.
    """
    role = "img" if wrap is None else "group"
    parts = [_head(diagram, title, description, name, alone=alone, scale=_FULL, role=role)]
    parts += [_link(link) for link in diagram.links]
    parts += [_fold(fold) for fold in diagram.folds]
    for node in diagram.nodes:
        markup = _node(node, selected=node.id == selected)
        parts.append(wrap(node.id, markup) if wrap is not None else markup)
    parts.append("</svg>")
    return "".join(parts)


def small_svg(diagram: Diagram, *, title: str, description: str, name: str) -> str:
    """A small picture of the diagram, with dimensions alone."""
    parts = [_head(diagram, title, description, name, alone=False, scale=_SMALL)]
    parts += [_link(link) for link in diagram.links]
    parts += [_fold(fold) for fold in diagram.folds]
    parts += [_node(node, selected=False, bare=True) for node in diagram.nodes]
    parts.append("</svg>")
    return "".join(parts)


def _head(
    diagram: Diagram, title: str, description: str, name: str, *, alone: bool, scale: float, role: str = "img"
) -> str:
    left, top, width, height = diagram.box
    namespace = ' xmlns="http://www.w3.org/2000/svg"' if alone else ""
    style = f"<style>{STYLE}</style>" if alone else ""
    return (
        f'<svg{namespace} class="diagram" role="{role}" aria-labelledby="{name}-title {name}-description" '
        f'width="{_n(width * scale)}" height="{_n(height * scale)}" '
        f'viewBox="{_n(left)} {_n(top)} {_n(width)} {_n(height)}">{style}'
        f'<title id="{name}-title">{escape(title)}</title><desc id="{name}-description">{escape(description)}</desc>'
    )


def _link(link: Link) -> str:
    (ax, ay), (bx, by) = link.start, link.end
    curves = "".join(
        f'<path class="link" d="M{_n(ax)} {_n(ay)}Q{_n(cx)} {_n(cy)} {_n(bx)} {_n(by)}"/>' for cx, cy in link.controls
    )
    if link.count == len(link.controls):
        return curves
    cx, cy = link.controls[0]
    return f'{curves}<text class="link-count" x="{_n(cx + 5)}" y="{_n(cy - 5)}">{link.count} edges</text>'


def _node(node: Node, *, selected: bool, bare: bool = False) -> str:
    classes = f"vertex {node.role}"
    if node.dimension == 0:
        classes += " empty"
    if selected:
        classes += " selected"
    x, y = node.at
    number = str(node.dimension)
    size = f' class="dimension{" wide" if len(number) > 2 else ""}"'
    markup = f'{_shape(node)}<text{size} x="{_n(x)}" y="{_n(y + 5)}">{number}</text>'
    if bare:
        return f'<g class="{classes}">{markup}</g>'
    label = node.parameter if len(node.parameter) <= _LONGEST_LABEL else node.parameter[: _LONGEST_LABEL - 1] + "…"
    x, y = node.label_at
    text = f'<text class="parameter" text-anchor="{node.label_anchor}" x="{_n(x)}" y="{_n(y)}">{escape(label)}</text>'
    title = f"<title>{escape(node.name)}</title>"
    return f'<g class="{classes}" data-vertex="{escape(node.id)}">{title}{markup}{text}</g>'


def _shape(node: Node) -> str:
    x, y = node.at
    if node.role == "leg":
        return f'<circle class="shape" cx="{_n(x)}" cy="{_n(y)}" r="{_n(node.radius)}"/>'
    corners = (
        f"{_n(x + node.radius * 1.1 * cos(k * pi / 3))},{_n(y + node.radius * 1.1 * sin(k * pi / 3))}" for k in range(6)
    )
    return f'<polygon class="shape" points="{" ".join(corners)}"/>'


def _fold(fold: Fold) -> str:
    x, y = fold.at
    return (
        f'<g class="fold"><title>{escape(fold.name)}</title>'
        f'<rect class="shape" x="{_n(x - 17)}" y="{_n(y - 10)}" width="34" height="20" rx="10"/>'
        f'<text class="fold-count" x="{_n(x)}" y="{_n(y + 4)}">+{fold.hidden}</text></g>'
    )


def _n(value: float) -> str:
    """A coordinate with one decimal at most."""
    text = f"{value:.1f}"
    return text[:-2] if text.endswith(".0") else text
