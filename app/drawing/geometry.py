"""A placed diagram: positions, shapes and texts, without markup.

Lengths are in user units of the drawing (one unit is one CSS pixel at scale 1); y grows downwards.
"""

from dataclasses import dataclass
from typing import Literal

Point = tuple[float, float]

CORNER = 1.1
"""How much farther than its radius the corners of a core vertex reach."""


@dataclass(frozen=True)
class Node:
    """A drawn vertex of the quiver: where it is, how large, and what it says.

    ``parameter`` is written beside the vertex and is shortened to fit there, ``name`` says all about the vertex.
    """

    id: str
    role: Literal["core", "leg"]
    at: Point
    radius: float
    dimension: int
    parameter: str
    name: str
    label_at: Point
    label_anchor: Literal["start", "middle", "end"]


@dataclass(frozen=True)
class Link:
    """A drawn bundle of edges between two places: the control point of each curve, and how many edges it stands for.

    Straight edges have their control point on the line.  ``count`` differs from the number of curves when many edges
    are drawn as one.  ``bundled`` marks the edges between vertices of which some are not drawn one by one.
    """

    start: Point
    end: Point
    controls: tuple[Point, ...]
    count: int
    bundled: bool = False


@dataclass(frozen=True)
class Fold:
    """A mark for vertices that are not drawn one by one: where, how many, and in words."""

    at: Point
    hidden: int
    name: str


@dataclass(frozen=True)
class Diagram:
    """Everything that is drawn, with the box that holds it: left, top, width, height."""

    nodes: tuple[Node, ...]
    links: tuple[Link, ...]
    folds: tuple[Fold, ...]
    box: tuple[float, float, float, float]
