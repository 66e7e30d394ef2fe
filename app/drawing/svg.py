"""Placed diagram → SVG, with classes and ids and without style, links or scripts.

Core vertices are hexagons, leg vertices discs; a vertex of dimension 0 has a broken outline.  Classes: ``diagram`` with
``small``; ``link`` with ``bundle``; ``link-count``; ``vertex`` with ``core`` or ``leg`` and with ``empty`` or
``selected``; in it ``shape``, ``dimension`` with ``wide``, ``parameter``; ``fold`` with ``fold-count``.
"""

from collections.abc import Callable
from html import escape

from app.drawing.geometry import Diagram, Node
from app.drawing.markup import coordinate, fold_markup, head, link_markup, shape

_FULL = 1.4
_SMALL = 0.5


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
    parts = [head(diagram.box, title, description, name, alone=alone, scale=_FULL, role=role)]
    parts += [link_markup(link) for link in diagram.links]
    parts += [fold_markup(fold) for fold in diagram.folds]
    for node in diagram.nodes:
        markup = _node(node, selected=node.id == selected)
        parts.append(wrap(node.id, markup) if wrap is not None else markup)
    parts.append("</svg>")
    return "".join(parts)


def small_svg(diagram: Diagram, *, title: str, description: str, name: str) -> str:
    """A small picture of a diagram, best placed with ``small``: dimensions alone."""
    parts = [head(diagram.box, title, description, name, alone=False, scale=_SMALL, kind="diagram small")]
    parts += [link_markup(link) for link in diagram.links]
    parts += [fold_markup(fold) for fold in diagram.folds]
    parts += [_node(node, selected=False, bare=True) for node in diagram.nodes]
    parts.append("</svg>")
    return "".join(parts)


def _node(node: Node, *, selected: bool, bare: bool = False) -> str:
    classes = f"vertex {node.role}"
    if node.dimension == 0:
        classes += " empty"
    if selected:
        classes += " selected"
    x, y = node.at
    number = str(node.dimension)
    size = f' class="dimension{" wide" if len(number) > 2 else ""}"'
    markup = f'{shape(node)}<text{size} x="{coordinate(x)}" y="{coordinate(y + 5)}">{number}</text>'
    if bare:
        return f'<g class="{classes}">{markup}</g>'
    x, y = node.label_at
    place = f'text-anchor="{node.label_anchor}" x="{coordinate(x)}" y="{coordinate(y)}"'
    text = f'<text class="parameter" {place}>{escape(node.parameter)}</text>'
    title = f"<title>{escape(node.name)}</title>"
    return f'<g class="{classes}" data-vertex="{escape(node.id)}">{title}{markup}{text}</g>'
