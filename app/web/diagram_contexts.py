"""What the template of the diagram is given: the picture, a line for every vertex, Newton polygons."""

from dataclasses import dataclass

from markupsafe import Markup

from app.drawing.layout import place
from app.drawing.newton import newton_svg
from app.drawing.orbit_layout import orbit_description, orbit_vertex_name, place_orbits
from app.drawing.orbit_svg import orbit_svg
from app.drawing.svg import svg
from app.findings.findings import Findings
from app.local.problem import Problem
from app.roots.quiver import Quiver, Vertex
from app.web.mathematics import type_mathml, value_mathml

LIST_SHOWN = 8


@dataclass(frozen=True)
class VertexContext:
    """One line in the list of vertices; ``left_out`` > 0 marks a line for vertices that are not listed."""

    id: str
    stands_for: str
    dimension: int
    parameter: Markup
    left_out: int = 0


@dataclass(frozen=True)
class PolygonContext:
    """The Newton polygon of an irregular pole: its number, picture, irregularity and slopes in words."""

    pole: int
    picture: Markup
    words: str


@dataclass(frozen=True)
class DiagramContext:
    """The diagram as markup, its vertices, and the Newton polygons of irregular poles.

    ``weighted``: ramified data, whose vertices have weights and no parameters; these stand in their place.
    """

    picture: Markup
    vertices: tuple[VertexContext, ...]
    type: Markup
    weighted: bool = False
    polygons: tuple[PolygonContext, ...] = ()


def diagram_context(findings: Findings, selected: str | None = None) -> DiagramContext:
    """The diagram and its vertices.  Cost: linear in what is drawn and listed."""
    quiver = findings.quiver
    if quiver is None:
        return _orbit_diagram(findings)
    title = f"Quiver of type {findings.support_type}"
    description = (
        f"{len(quiver.vertices)} vertices and {len(quiver.edges)} bundles of edges; hexagons are core vertices, discs "
        "are leg vertices, the number in each is its dimension."
    )

    def link(vertex_id: str, markup: str) -> str:
        return f'<a href="#vertex-{vertex_id}" class="vertex-link">{markup}</a>'

    picture = Markup(
        svg(
            place(quiver, symbols=findings.problem.symbols),
            title=title,
            description=description,
            selected=selected,
            wrap=link,
        )
    )
    vertices = tuple(_vertices(quiver, findings.problem))
    type_ = type_mathml(findings.support_type or "")
    return DiagramContext(picture, vertices, type_, polygons=_polygons(findings))


def _orbit_diagram(findings: Findings) -> DiagramContext:
    """The diagram of ramified data: Galois orbits with weights, negative edges and loops."""
    diagram = findings.diagram
    if diagram is None:
        return DiagramContext(Markup(""), (), Markup(""))
    picture = orbit_svg(
        place_orbits(diagram),
        title="Diagram of Galois orbits",
        description=orbit_description(diagram),
        wrap=lambda vertex_id, markup: f'<a href="#vertex-{vertex_id}" class="vertex-link">{markup}</a>',
    )
    vertices = tuple(
        VertexContext(v.id, orbit_vertex_name(v).partition(":")[0], v.dimension, Markup(v.weight))
        for v in diagram.vertices[: 4 * LIST_SHOWN]
    )
    return DiagramContext(Markup(picture), vertices, Markup(""), True, _polygons(findings))


def _polygons(findings: Findings) -> tuple[PolygonContext, ...]:
    shown: list[PolygonContext] = []
    for figure in findings.formal:
        if figure.irregularity and len(shown) < LIST_SHOWN:
            title = f"Newton polygon at pole {figure.pole + 1}"
            picture = newton_svg(figure.newton_polygon, title=title, name=f"newton-{figure.pole}")
            slopes = ", ".join(f"{slope} on rank {width}" for slope, width in figure.slopes)
            words = f"irregularity {figure.irregularity}; slopes {slopes}"
            shown.append(PolygonContext(figure.pole + 1, Markup(picture), words))
    return tuple(shown)


def _vertices(quiver: Quiver, problem: Problem) -> list[VertexContext]:
    """Lines for the vertices, long runs of one kind shortened to the first few and the last."""
    runs: dict[tuple[str, int, int], list[Vertex]] = {}
    for vertex in quiver.vertices:
        key = ("core", vertex.pole, 0) if vertex.role == "core" else ("leg", vertex.pole, vertex.block)
        runs.setdefault(key, []).append(vertex)
    lines = []
    for run in runs.values():
        shown = run if len(run) <= LIST_SHOWN else [*run[: LIST_SHOWN - 2], None, run[-1]]
        for entry in shown:
            if entry is None:
                lines.append(VertexContext("", "", 0, Markup(""), len(run) - LIST_SHOWN + 1))
                continue
            parameter = value_mathml(entry.parameter, problem.symbols)
            lines.append(VertexContext(entry.id, _meaning(entry, problem), entry.dimension, parameter))
    return lines


_LOWERED = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")


def _meaning(vertex: Vertex, problem: Problem) -> str:
    alone = len(problem.poles[vertex.pole].blocks) == 1
    where = f"pole {vertex.pole + 1}" if alone else f"block {vertex.block + 1} of pole {vertex.pole + 1}"
    if vertex.role == "core":
        return where
    factors = [f"(L − ξ{k})".translate(_LOWERED) for k in range(1, vertex.leg + 1)]
    product = "".join(factors) if len(factors) < 3 else f"{factors[0]}…{factors[-1]}"
    return f"rank of {product} at {where}"
