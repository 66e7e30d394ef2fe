"""What the templates are given: frozen values with everything worked out, so that templates only set it out.

desk_context(...)       the whole desk
findings_context(...)   verdicts, figures, certificate, scheme
diagram_context(...)    the diagram and the list of its vertices
descent_context(...)    the steps of the descent
"""

from collections.abc import Mapping
from dataclasses import dataclass

from markupsafe import Markup

from app.desk.draft import Draft
from app.desk.reading import FieldFault
from app.drawing.layout import place
from app.drawing.newton import newton_svg
from app.drawing.orbit_layout import orbit_description, orbit_vertex_name, place_orbits
from app.drawing.orbit_svg import orbit_svg
from app.drawing.svg import small_svg, svg
from app.exact.number import write_number
from app.existence.verdict import Verdict
from app.findings.findings import Findings
from app.local.formal_type import Block
from app.local.problem import Problem
from app.local.writer import canonical_text
from app.roots.form import p_of
from app.roots.quiver import Quiver, Vertex
from app.web.certificate_words import certificate_words
from app.web.demos import Demo
from app.web.mathematics import exponent_mathml, type_mathml, value_mathml

LIST_SHOWN = 8
STEPS_SHOWN = 8
STEPS_LISTED = 40
DOCUMENT_CARRIED = 12_000

STATUS_WORDS = {
    "proved": "proved",
    "refuted": "refuted, with proof",
    "criterion": "by a checked criterion, not proved",
    "evidence": "numerical evidence, no proof",
    "open": "not decided",
}


@dataclass(frozen=True)
class VerdictContext:
    """A verdict as sentences, and its certificate in words."""

    question: str
    answer: str
    outcome: str
    status: str
    reason: str
    certificate: tuple[str, ...]


@dataclass(frozen=True)
class FigureContext:
    """One figure: what it is, and its value."""

    name: str
    value: str | Markup


@dataclass(frozen=True)
class SchemeEntry:
    """One block in the Riemann scheme: its exponent (None for 0), its eigenvalues, and how many are not listed."""

    exponent: Markup | None
    eigenvalues: tuple[tuple[Markup, str], ...]
    left_out: int


@dataclass(frozen=True)
class SchemeColumn:
    """One pole in the Riemann scheme."""

    position: str
    entries: tuple[SchemeEntry, ...]


@dataclass(frozen=True)
class FindingsContext:
    """Everything in the findings."""

    verdicts: tuple[VerdictContext, ...]
    figures: tuple[FigureContext, ...]
    warnings: tuple[str, ...]
    resonances: tuple[tuple[int, Markup, Markup, int], ...]
    families: tuple[tuple[str, str], ...]
    scheme: tuple[SchemeColumn, ...]
    reading: str


@dataclass(frozen=True)
class VertexContext:
    """One line in the list of vertices; ``left_out`` > 0 marks a line for vertices that are not listed."""

    id: str
    kind: str
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
    ``document`` goes with the buttons that lead to other pages; it is "" for problems too large for those.
    """

    picture: Markup
    vertices: tuple[VertexContext, ...]
    type: Markup
    document: str
    weighted: bool = False
    polygons: tuple[PolygonContext, ...] = ()


@dataclass(frozen=True)
class StepContext:
    """One step of the descent; ``picture`` is empty for steps that are only listed."""

    number: int
    picture: Markup
    rank: int
    vertex: str
    parameter: Markup
    operation: str


@dataclass(frozen=True)
class DescentContext:
    """The descent: steps with pictures, further steps in words, and how many are not listed."""

    steps: tuple[StepContext, ...]
    further: tuple[StepContext, ...]
    left_out: int


@dataclass(frozen=True)
class FormContext:
    """The form of the local data: the draft as typed, with the faults by field."""

    draft: Draft
    structure: str
    revision: int
    faults: Mapping[str, FieldFault]

    @property
    def open_blocks(self) -> frozenset[str]:
        """Blocks with a fault at one of their eigenvalues: their folded lists stand open."""
        return frozenset(
            block.id
            for pole in self.draft.poles
            for block in pole.blocks
            for eigenvalue in block.residue
            if any(f"eigenvalue.{eigenvalue.id}{ending}" in self.faults for ending in ("", ".value", ".jordan"))
        )


@dataclass(frozen=True)
class StatusContext:
    """The line above the desk: what happened, whether there is something to undo, and the faults of the whole."""

    message: str
    notice: str
    can_undo: bool
    can_redo: bool
    fault_count: int
    whole: str
    stale: bool


@dataclass(frozen=True)
class DeskContext:
    """The whole page.  ``findings`` and what hangs on them are None when no state could ever be read."""

    form: FormContext
    status: StatusContext
    findings: FindingsContext | None
    diagram: DiagramContext | None
    descent: DescentContext | None
    demos: tuple[Demo, ...]


def findings_context(findings: Findings) -> FindingsContext:
    """The findings set out for the page.  Cost: linear in what is shown."""
    symbols = findings.problem.symbols
    verdicts = []
    if findings.additive is not None:
        verdicts.append(_verdict(findings, findings.additive, "Irreducible system"))
    if findings.multiplicative is not None:
        verdicts.append(_verdict(findings, findings.multiplicative, "Irreducible monodromy"))
    return FindingsContext(
        verdicts=tuple(verdicts),
        figures=tuple(_figures(findings)),
        warnings=findings.warnings,
        resonances=tuple(
            (r.pole + 1, value_mathml(r.first, symbols), value_mathml(r.second, symbols), r.difference)
            for r in findings.resonances
        ),
        families=tuple((family.name, family.source) for family in findings.families),
        scheme=tuple(_scheme(findings.problem)),
        reading=findings.problem.reading,
    )


def _verdict(findings: Findings, verdict: Verdict, question: str) -> VerdictContext:
    thing = "irreducible local system" if verdict.modulo_integers else "irreducible system"
    if verdict.exists:
        quiver = verdict.quiver
        size = findings.dimension if quiver is None else 2 * p_of(quiver, quiver.dimension)
        family = "it is rigid" if size == 0 else f"it moves in a family of dimension {size}"
        answer = f"An {thing} exists; {family}."
    elif verdict.exists is False:
        answer = f"No {thing} exists."
    else:
        answer = f"Whether an {thing} exists is not decided."
    outcome = {True: "yes", False: "no", None: "open"}[verdict.exists]
    return VerdictContext(
        question, answer, outcome, STATUS_WORDS[verdict.status], verdict.reason, tuple(certificate_words(verdict))
    )


def _figures(findings: Findings) -> list[FigureContext]:
    symbols = findings.problem.symbols
    holds: str | Markup = "holds"
    if not findings.fuchs_holds:
        holds = Markup("fails by {}").format(value_mathml(findings.fuchs_defect, symbols))
    figures = [
        FigureContext("rank", str(findings.rank)),
        FigureContext("dimension of the moduli space", str(findings.dimension)),
        FigureContext("rigidity index", str(findings.rigidity_index)),
        FigureContext("Fuchs relation", holds),
    ]
    if findings.quiver is not None:
        figures.append(FigureContext("type of the quiver", type_mathml(findings.support_type or "")))
        figures.append(FigureContext("α as a root", f"{findings.root_class or ''}, p = {findings.p}"))
        figures.append(FigureContext("base pole", str(findings.quiver.base + 1)))
    for orbit in findings.orbits[: 2 * LIST_SHOWN]:
        slope = f", slope {orbit.slope}" if orbit.slope else ""
        figures.append(FigureContext(f"orbit at pole {orbit.pole + 1}", f"dimension {orbit.dimension}{slope}"))
    if findings.solved is not None:
        figures.append(FigureContext("value forced for *", value_mathml(findings.solved.value, symbols)))
    return figures


def _scheme(problem: Problem) -> list[SchemeColumn]:
    columns = []
    for pole in problem.poles:
        # as text: a heading that is a formula alone has no text for screen readers
        position = "x = ∞" if pole.at.value is None else f"x = {write_number(pole.at.value, problem.symbols)}"
        shown = pole.blocks[: 2 * LIST_SHOWN]
        columns.append(SchemeColumn(position, tuple(_scheme_entry(problem, block) for block in shown)))
    return columns


def _scheme_entry(problem: Problem, block: Block) -> SchemeEntry:
    exponent = None if block.exponent.is_zero else exponent_mathml(block.exponent, problem.symbols)
    shown = block.residue[:LIST_SHOWN]
    eigenvalues = tuple(
        (value_mathml(e.value, problem.symbols), "" if e.jordan == (1,) else "+".join(map(str, e.jordan)))
        for e in shown
    )
    return SchemeEntry(exponent, eigenvalues, len(block.residue) - len(shown))


def diagram_context(findings: Findings, selected: str | None = None) -> DiagramContext:
    """The diagram and its vertices.  Cost: linear in what is drawn and listed."""
    quiver = findings.quiver
    if quiver is None:
        return _orbit_diagram(findings)
    symbols = findings.problem.symbols
    title = f"Quiver of type {findings.support_type}"
    description = (
        f"{len(quiver.vertices)} vertices and {len(quiver.edges)} bundles of edges; hexagons are core vertices, discs "
        "are leg vertices, the number in each is its dimension."
    )

    def link(vertex_id: str, markup: str) -> str:
        return f'<a href="#vertex-{vertex_id}" class="vertex-link">{markup}</a>'

    picture = Markup(svg(place(quiver), title=title, description=description, selected=selected, wrap=link))
    document = canonical_text(findings.problem)
    if len(document) > DOCUMENT_CARRIED:
        document = ""
    vertices = tuple(_vertices(quiver, symbols))
    type_ = type_mathml(findings.support_type or "")
    return DiagramContext(picture, vertices, type_, document, polygons=_polygons(findings))


def _orbit_diagram(findings: Findings) -> DiagramContext:
    """The diagram of ramified data: Galois orbits with weights, negative edges and loops."""
    diagram = findings.diagram
    if diagram is None:
        return DiagramContext(Markup(""), (), Markup(""), "")
    picture = orbit_svg(
        place_orbits(diagram),
        title="Diagram of Galois orbits",
        description=orbit_description(diagram),
        wrap=lambda vertex_id, markup: f'<a href="#vertex-{vertex_id}" class="vertex-link">{markup}</a>',
    )
    vertices = tuple(
        VertexContext(v.id, v.role, orbit_vertex_name(v).partition(":")[0], v.dimension, Markup(v.weight))
        for v in diagram.vertices[: 4 * LIST_SHOWN]
    )
    document = canonical_text(findings.problem)
    carried = document if len(document) <= DOCUMENT_CARRIED else ""
    return DiagramContext(Markup(picture), vertices, Markup(""), carried, True, _polygons(findings))


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


def _vertices(quiver: Quiver, symbols: tuple[str, ...]) -> list[VertexContext]:
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
                lines.append(VertexContext("", "", "", 0, Markup(""), len(run) - LIST_SHOWN + 1))
                continue
            parameter = value_mathml(entry.parameter, symbols)
            lines.append(VertexContext(entry.id, entry.role, _meaning(entry), entry.dimension, parameter))
    return lines


def _meaning(vertex: Vertex) -> str:
    if vertex.role == "core":
        return f"block {vertex.block + 1} of pole {vertex.pole + 1}"
    factors = "L − ξ1" if vertex.leg == 1 else f"(L − ξ1)…(L − ξ{vertex.leg})"
    return f"rank of {factors} at pole {vertex.pole + 1}, block {vertex.block + 1}"


def descent_context(findings: Findings) -> DescentContext:
    """The steps of the descent, the first with pictures.  Cost: a picture for each of the first few steps."""
    quiver = findings.quiver
    if quiver is None:
        return DescentContext((), (), 0)
    symbols = findings.problem.symbols
    steps = []
    for number, step in enumerate(findings.descent[: STEPS_SHOWN + STEPS_LISTED], start=1):
        picture = Markup("")
        if number <= STEPS_SHOWN:
            picture = Markup(
                small_svg(
                    place(quiver, step.dimension),
                    title=f"After step {number}",
                    description=f"rank {step.rank}",
                    name=f"step-{number}",
                )
            )
        vertex = " + ".join(step.vertices)
        parameter = value_mathml(-step.parameter, symbols)
        steps.append(StepContext(number, picture, step.rank, vertex, parameter, step.operation))
    left_out = max(0, len(findings.descent) - STEPS_SHOWN - STEPS_LISTED)
    return DescentContext(tuple(steps[:STEPS_SHOWN]), tuple(steps[STEPS_SHOWN:]), left_out)
