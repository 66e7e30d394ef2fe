"""Findings as plain text for a terminal."""

from collections.abc import Iterator

from app.exact.number import write_number
from app.exact.value import Value
from app.existence.verdict import Verdict
from app.findings.findings import Findings
from app.local.problem import Problem
from app.roots.orbit_diagram import OrbitDiagram

_STATUS_WORDS = {
    "proved": "proved",
    "refuted": "refuted, with proof",
    "criterion": "by a criterion that is checked but not proved",
    "evidence": "numerical evidence only, no proof",
    "open": "not decided",
}


def findings_text(findings: Findings) -> str:
    """The findings as lines of text, ending with a newline."""
    return "\n".join(_lines(findings)) + "\n"


def _lines(findings: Findings) -> Iterator[str]:
    symbols = findings.problem.symbols

    def write(value: Value) -> str:
        return write_number(value, symbols)

    yield findings.problem.name or "(no name)"
    if findings.additive is not None:
        yield from _verdict_lines("Irreducible system", findings.additive)
    if findings.multiplicative is not None:
        yield from _verdict_lines("Irreducible monodromy", findings.multiplicative)
    yield ""
    yield f"  rank              {findings.rank}"
    yield f"  dimension         {findings.dimension}"
    yield f"  rigidity index    {findings.rigidity_index}"
    holds = "holds" if findings.fuchs_holds else f"fails, defect {write(findings.fuchs_defect)}"
    yield f"  Fuchs relation    {holds}"
    if findings.quiver is not None:
        yield f"  quiver            {findings.support_type}, base pole {findings.quiver.base + 1}"
        yield f"  root              {findings.root_class}, p = {findings.p}"
    if findings.diagram is not None:
        yield from _diagram_lines(findings.diagram)
    for orbit in findings.orbits:
        yield f"  orbit at pole {orbit.pole + 1:<3} dimension {orbit.dimension}, slope {orbit.slope}"
    yield from _formal_lines(findings)
    if findings.solved is not None:
        yield f"  forced value      {write(findings.solved.value)}   ({findings.solved.at})"
    for resonance in findings.resonances:
        yield (
            f"  resonance         {write(resonance.first)} and {write(resonance.second)} at pole {resonance.pole + 1} "
            f"differ by {resonance.difference}"
        )
    for family in findings.families:
        yield f"  known as          {family.name} [{family.source}]"
    for warning in findings.warnings:
        yield f"  note              {warning}"
    yield from _scheme_lines(findings.problem)
    if findings.descent:
        yield ""
        yield "Descent"
        for number, step in enumerate(findings.descent, start=1):
            yield f"  {number}. {step.operation}"


def _formal_lines(findings: Findings) -> Iterator[str]:
    """Slopes and Newton polygon of every irregular pole."""
    for figure in findings.formal:
        if figure.irregularity:
            slopes = ", ".join(f"{slope} ({width} times)" for slope, width in figure.slopes)
            polygon = ", ".join(f"({across}, {height})" for across, height in figure.newton_polygon)
            yield f"  slopes at pole {figure.pole + 1:<2} {slopes}; irregularity {figure.irregularity}"
            yield f"  Newton polygon    {polygon}"


def _diagram_lines(diagram: OrbitDiagram) -> Iterator[str]:
    """The diagram of ramified data: vertices with dimension and weight, edges and loops with their signs."""
    ids = [vertex.id for vertex in diagram.vertices]
    vertices = ", ".join(
        f"{vertex.id}: {vertex.dimension}" + (f" of weight {vertex.weight}" if vertex.weight > 1 else "")
        for vertex in diagram.vertices
    )
    yield f"  diagram           {vertices}; base pole {diagram.base + 1}"
    if diagram.edges:
        yield "  edges             " + ", ".join(f"{ids[i]} – {ids[j]}: {count}" for i, j, count in diagram.edges)
    if diagram.loops:
        yield "  loops             " + ", ".join(f"{ids[i]}: {count}" for i, count in diagram.loops)


def _verdict_lines(subject: str, verdict: Verdict) -> Iterator[str]:
    answer = {True: "exists", False: "does not exist", None: "undecided"}[verdict.exists]
    yield f"{subject}: {answer} ({_STATUS_WORDS[verdict.status]})."
    yield f"  {verdict.reason}"


def _scheme_lines(problem: Problem) -> Iterator[str]:
    """The Riemann scheme: a line for every block with its exponents and their Jordan sizes."""
    yield ""
    yield "Riemann scheme"
    for i, pole in enumerate(problem.poles):
        place = "infinity" if pole.at.value is None else write_number(pole.at.value)
        for block in pole.blocks:
            terms = [f"({write_number(c, problem.symbols)})*z^(-{power})" for power, c in block.exponent.terms]
            classes = ", ".join(
                f"{write_number(e.value, problem.symbols)}:{'+'.join(map(str, e.jordan))}" for e in block.residue
            )
            yield f"  pole {i + 1} at {place}: q = {' + '.join(terms) or '0'}; {classes}"
