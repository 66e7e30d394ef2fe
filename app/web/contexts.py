"""What the templates are given: frozen values with everything worked out, so that templates only set it out.

DeskContext             the whole desk; its parts follow
brief_of(...)           the verdicts in a few words
findings_context(...)   verdicts, figures, certificate, scheme
DiagramContext          see diagram_contexts
descent_context(...)    the steps of the descent
leads_context(...)      what goes along to other pages
"""

from collections.abc import Mapping
from dataclasses import dataclass

from markupsafe import Markup

from app.desk.draft import READINGS, Draft
from app.desk.jordan import write_jordan
from app.desk.reading import FieldFault
from app.drawing.layout import place
from app.drawing.svg import small_svg
from app.exact.number import write_number
from app.existence.verdict import Verdict
from app.findings.families import Family
from app.findings.findings import Findings
from app.local.formal_type import Block
from app.local.problem import Problem
from app.local.writer import canonical_text
from app.roots.form import p_of
from app.web.certificate_words import certificate_words
from app.web.demos import Demo
from app.web.diagram_contexts import LIST_SHOWN, DiagramContext
from app.web.mathematics import exponent_mathml, type_mathml, value_mathml

ROWS_SHOWN = 12
RESONANCES_SHOWN = 20
STEPS_SHOWN = 8
STEPS_LISTED = 40
DOCUMENT_CARRIED = 12_000
_SHORTEST_EIGENVALUE = len('{"value":"a","jordan":[1]}')

STATUS_WORDS = {
    "proved": "proved",
    "refuted": "refuted, with proof",
    "criterion": "by a checked criterion, not proved",
    "evidence": "numerical evidence, no proof",
    "open": "not decided",
}
BRIEF_WORDS = {
    "proved": "proved",
    "refuted": "refuted",
    "criterion": "criterion, no proof",
    "evidence": "numerical evidence",
    "open": "",
}


@dataclass(frozen=True)
class VerdictContext:
    """A verdict as sentences, and its certificate in words; ``status`` is the anchor of its word in the help."""

    question: str
    answer: str
    outcome: str
    status: str
    sure: str
    reason: str
    certificate: tuple[str, ...]


@dataclass(frozen=True)
class BriefContext:
    """A verdict in a few words, for the line that stays in sight."""

    question: str
    answer: str
    outcome: str
    status: str


@dataclass(frozen=True)
class FigureContext:
    """One figure: what it is, and its value."""

    name: str
    value: str | Markup


@dataclass(frozen=True)
class SchemeEigenvalue:
    """One eigenvalue in the Riemann scheme; ``jordan`` is empty for a single block of size 1."""

    value: Markup
    jordan: str


@dataclass(frozen=True)
class SchemeEntry:
    """One block in the Riemann scheme: its exponent (None for 0), its eigenvalues, and how many are not listed."""

    exponent: Markup | None
    eigenvalues: tuple[SchemeEigenvalue, ...]
    left_out: int


@dataclass(frozen=True)
class SchemeColumn:
    """One pole in the Riemann scheme, and how many of its blocks are not listed."""

    position: str
    entries: tuple[SchemeEntry, ...]
    left_out: int


@dataclass(frozen=True)
class ResonanceContext:
    """Two eigenvalues at a pole (counted from 1) that differ by an integer."""

    pole: int
    first: Markup
    second: Markup
    difference: int


@dataclass(frozen=True)
class FindingsContext:
    """Everything in the findings."""

    verdicts: tuple[VerdictContext, ...]
    figures: tuple[FigureContext, ...]
    warnings: tuple[str, ...]
    resonances: tuple[ResonanceContext, ...]
    resonances_left_out: int
    families: tuple[Family, ...]
    scheme: tuple[SchemeColumn, ...]


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
    """The descent: steps with pictures, further steps in words, how many are not listed, and where it ends."""

    steps: tuple[StepContext, ...]
    further: tuple[StepContext, ...]
    left_out: int
    ending: str


@dataclass(frozen=True)
class FormContext:
    """The form of the local data: the draft as typed, with the faults by field."""

    draft: Draft
    structure: str
    revision: int
    faults: Mapping[str, FieldFault]
    rows_shown: int = ROWS_SHOWN

    @property
    def shows_more(self) -> bool:
        """Whether the folded fields stand open: something is wrong there, or not as it is by default."""
        unusual = bool(self.draft.notes or self.draft.base) or self.draft.reading != READINGS[0]
        return unusual or any(field in self.faults for field in ("notes", "reading", "base"))

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
    """The line above the desk: the verdicts in brief, what happened, and the faults of the whole."""

    brief: tuple[BriefContext, ...]
    message: str
    notice: str
    fault_count: int
    whole: str
    stale: bool


@dataclass(frozen=True)
class HistoryContext:
    """Whether there is something to undo or redo."""

    can_undo: bool
    can_redo: bool


@dataclass(frozen=True)
class LeadsContext:
    """What goes along to the pages of operations, descent and connection: the problem as a document.

    ``ramified``: the quiver's operations and the descent are not offered.
    """

    document: str
    ramified: bool


@dataclass(frozen=True)
class DeskContext:
    """The whole page.  ``findings`` and what hangs on them are None when no state could ever be read."""

    form: FormContext
    history: HistoryContext
    status: StatusContext
    findings: FindingsContext | None
    diagram: DiagramContext | None
    descent: DescentContext | None
    leads: LeadsContext | None
    demos: tuple[Demo, ...]


@dataclass(frozen=True)
class Fragment:
    """A rendered part of the page, and a mark that differs when the part differs."""

    html: Markup
    mark: str


def brief_of(findings: Findings) -> tuple[BriefContext, ...]:
    """The verdicts in a few words.  Cost: none to speak of."""
    found = []
    for question, verdict in _verdicts(findings):
        answer = {True: "exists", False: "does not exist", None: "not decided"}[verdict.exists]
        if verdict.exists:
            size = _family_size(findings, verdict)
            answer += ", rigid" if size == 0 else f", dimension {size}"
        found.append(BriefContext(question, answer, _OUTCOMES[verdict.exists], BRIEF_WORDS[verdict.status]))
    return tuple(found)


def findings_context(findings: Findings) -> FindingsContext:
    """The findings set out for the page.  Cost: linear in what is shown."""
    symbols = findings.problem.symbols
    resonances = tuple(
        ResonanceContext(r.pole + 1, value_mathml(r.first, symbols), value_mathml(r.second, symbols), r.difference)
        for r in findings.resonances[:RESONANCES_SHOWN]
    )
    return FindingsContext(
        verdicts=tuple(_verdict(findings, verdict, question) for question, verdict in _verdicts(findings)),
        figures=tuple(_figures(findings)),
        warnings=findings.warnings,
        resonances=resonances,
        resonances_left_out=len(findings.resonances) - len(resonances),
        families=findings.families,
        scheme=tuple(_scheme(findings.problem)),
    )


_OUTCOMES = {True: "yes", False: "no", None: "open"}


def _verdicts(findings: Findings) -> list[tuple[str, Verdict]]:
    pairs = (("Irreducible system", findings.additive), ("Irreducible monodromy", findings.multiplicative))
    return [(question, verdict) for question, verdict in pairs if verdict is not None]


def _family_size(findings: Findings, verdict: Verdict) -> int:
    """Dimension of the moduli space of what exists; merged classes have one of their own."""
    quiver = verdict.quiver
    return findings.dimension if quiver is None else 2 * p_of(quiver, quiver.dimension)


def _verdict(findings: Findings, verdict: Verdict, question: str) -> VerdictContext:
    thing = "irreducible local system" if verdict.modulo_integers else "irreducible system"
    if verdict.exists:
        size = _family_size(findings, verdict)
        family = "it is rigid" if size == 0 else f"it moves in a family of dimension {size}"
        answer = f"An {thing} exists; {family}."
        if verdict.status == "criterion":
            answer = f"By a criterion that is not proved, an {thing} exists; {family}."
    elif verdict.exists is False:
        answer = f"No {thing} exists."
    else:
        answer = f"Whether an {thing} exists is not decided."
    certificate = tuple(certificate_words(verdict))
    outcome, status = _OUTCOMES[verdict.exists], verdict.status
    return VerdictContext(question, answer, outcome, status, STATUS_WORDS[status], verdict.reason, certificate)


def _figures(findings: Findings) -> list[FigureContext]:
    symbols = findings.problem.symbols
    holds: str | Markup = "holds"
    if not findings.fuchs_holds:
        holds = Markup("fails by {}").format(value_mathml(findings.fuchs_defect, symbols))
    figures = [
        FigureContext("rank", str(findings.rank)),
        FigureContext("dimension of the moduli space", _integer(findings.dimension)),
        FigureContext("rigidity index", _integer(findings.rigidity_index)),
        FigureContext("Fuchs relation", holds),
    ]
    if findings.solved is not None:
        figures.append(FigureContext("value forced for *", value_mathml(findings.solved.value, symbols)))
    if findings.quiver is not None:
        root = "no root" if findings.root_class == "none" else f"{findings.root_class} root"
        p = "" if findings.p is None else f", p = {_integer(findings.p)}"
        figures.append(FigureContext("type of the quiver", type_mathml(findings.support_type or "")))
        figures.append(FigureContext("dimension vector α", root + p))
        figures.append(FigureContext("base pole", str(findings.quiver.base + 1)))
    figures.append(FigureContext("dimensions of the orbits", _orbits(findings)))
    return figures


def _orbits(findings: Findings) -> str:
    """The orbits' dimensions in the order of the poles, with the slopes that are not 0."""
    shown = findings.orbits[: 2 * LIST_SHOWN]
    words = [f"{orbit.dimension}{f' (slope {orbit.slope})' if orbit.slope else ''}" for orbit in shown]
    left_out = len(findings.orbits) - len(shown)
    return ", ".join(words) + (f", and {left_out} more" if left_out else "")


def _integer(number: int) -> str:
    return str(number).replace("-", "−")


def _scheme(problem: Problem) -> list[SchemeColumn]:
    columns = []
    for pole in problem.poles:
        # as text: a heading that is a formula alone has no text for screen readers
        position = "x = ∞" if pole.at.value is None else f"x = {write_number(pole.at.value, problem.symbols)}"
        shown = pole.blocks[: 2 * LIST_SHOWN]
        entries = tuple(_scheme_entry(problem, block) for block in shown)
        columns.append(SchemeColumn(position, entries, len(pole.blocks) - len(shown)))
    return columns


def _scheme_entry(problem: Problem, block: Block) -> SchemeEntry:
    exponent = None if block.exponent.is_zero else exponent_mathml(block.exponent, problem.symbols)
    shown = block.residue[:LIST_SHOWN]
    eigenvalues = tuple(
        SchemeEigenvalue(value_mathml(e.value, problem.symbols), "" if e.jordan == (1,) else write_jordan(e.jordan))
        for e in shown
    )
    return SchemeEntry(exponent, eigenvalues, len(block.residue) - len(shown))


def leads_context(findings: Findings) -> LeadsContext | None:
    """What leads from the desk to other pages; None for problems too large for those.

    Cost: one canonical text.
    """
    eigenvalues = sum(len(block.residue) for pole in findings.problem.poles for block in pole.blocks)
    if eigenvalues > DOCUMENT_CARRIED // _SHORTEST_EIGENVALUE:
        return None
    document = canonical_text(findings.problem)
    return LeadsContext(document, findings.problem.ramified) if len(document) <= DOCUMENT_CARRIED else None


def descent_context(findings: Findings) -> DescentContext | None:
    """The steps of the descent, the first with pictures.  Cost: a picture for each of the first few steps."""
    quiver = findings.quiver
    if quiver is None:
        return None
    symbols = findings.problem.symbols
    steps = []
    for number, step in enumerate(findings.descent[: STEPS_SHOWN + STEPS_LISTED], start=1):
        picture = Markup("")
        if number <= STEPS_SHOWN:
            picture = Markup(
                small_svg(
                    place(quiver, step.dimension, small=True),
                    title=f"After step {number}",
                    description=f"rank {step.rank}",
                    name=f"step-{number}",
                )
            )
        vertex = " + ".join(step.vertices)
        parameter = value_mathml(-step.parameter, symbols)
        steps.append(StepContext(number, picture, step.rank, vertex, parameter, step.operation))
    left_out = max(0, len(findings.descent) - STEPS_SHOWN - STEPS_LISTED)
    return DescentContext(tuple(steps[:STEPS_SHOWN]), tuple(steps[STEPS_SHOWN:]), left_out, _ending(findings))


def _ending(findings: Findings) -> str:
    rank = findings.descent[-1].rank if findings.descent else findings.rank
    if rank == 1:
        return "Rank 1 is the end of every descent." if not findings.descent else "It ends at rank 1."
    where = "It ends" if findings.descent else "There is no step: the data are"
    return f"{where} at rank {rank}: no reflection lowers the rank further, or the next one has parameter 0."
