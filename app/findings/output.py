"""Findings as JSON data, in the shape of ``types.py``."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from app import PROGRAM
from app.exact.number import write_number
from app.exact.value import Value
from app.exact.writing import SymbolOrder
from app.existence.verdict import (
    Certificate,
    Decomposition,
    FuchsDefect,
    NotARoot,
    Reflections,
    Step,
    Verdict,
)
from app.findings.findings import Findings
from app.findings.ramified_json import diagram_json, ramified_certificate_json
from app.roots.quiver import Quiver

if TYPE_CHECKING:
    # the types alone: what they are made with takes time to import
    from app.findings.types import (
        CertificateJson,
        FindingsJson,
        QuiverJson,
        RootJson,
        VerdictJson,
        VertexJson,
    )

Write = Callable[[Value], str]


def findings_json(findings: Findings) -> FindingsJson:
    """The findings as JSON data.  Cost: linear in what is written."""
    symbols = SymbolOrder(findings.problem.symbols)
    written: dict[Value, str] = {}

    def write(value: Value) -> str:
        # the two verdicts often speak of one quiver, whose parameters need not be written twice
        if value not in written:
            written[value] = write_number(value, symbols)
        return written[value]

    quiver = findings.quiver
    solved = findings.solved
    return {
        "program": PROGRAM,
        "name": findings.problem.name,
        "rank": findings.rank,
        "dimension": findings.dimension,
        "rigidity_index": findings.rigidity_index,
        "fuchs": {"holds": findings.fuchs_holds, "defect": write(findings.fuchs_defect)},
        "solved": None if solved is None else {"at": solved.at, "value": write(solved.value)},
        "orbits": [{"pole": o.pole, "dimension": o.dimension, "slope": str(o.slope)} for o in findings.orbits],
        "formal": [
            {
                "pole": figure.pole,
                "irregularity": figure.irregularity,
                "slopes": [(str(slope), width) for slope, width in figure.slopes],
                "newton_polygon": list(figure.newton_polygon),
            }
            for figure in findings.formal
        ],
        "quiver": None if quiver is None else _quiver(quiver, findings.support_type or "", write),
        "diagram": None if findings.diagram is None else diagram_json(findings.diagram),
        "root": _root(findings),
        "additive": _verdict(findings.additive, write),
        "multiplicative": _verdict(findings.multiplicative, write),
        "resonances": [
            {"pole": r.pole, "block": r.block, "values": (write(r.first), write(r.second)), "difference": r.difference}
            for r in findings.resonances
        ],
        "walls": None,
        "descent": [
            {
                "vertex": step.vertices[0] if len(step.vertices) == 1 else list(step.vertices),
                "pairing": step.pairing,
                "parameter": write(step.parameter),
                "rank": step.rank,
                "operation": step.operation,
            }
            for step in findings.descent
        ],
        "families": [{"name": family.name, "source": family.source} for family in findings.families],
    }


def _root(findings: Findings) -> RootJson | None:
    if findings.root_class is None or findings.p is None:
        return None
    return {"class": findings.root_class, "p": findings.p}


def _quiver(quiver: Quiver, type_: str, write: Write) -> QuiverJson:
    return {"base": quiver.base, "type": type_, "vertices": _vertices(quiver, write), "edges": _edges(quiver)}


def _vertices(quiver: Quiver, write: Write) -> list[VertexJson]:
    written: list[VertexJson] = []
    for vertex in quiver.vertices:
        entry: VertexJson = {
            "id": vertex.id,
            "role": vertex.role,
            "pole": vertex.pole,
            "block": vertex.block,
            "leg": vertex.leg,
            "dimension": vertex.dimension,
            "parameter": write(vertex.parameter),
        }
        if vertex.role == "core":
            del entry["leg"]
        written.append(entry)
    return written


def _edges(quiver: Quiver) -> list[tuple[str, str, int]]:
    return [(quiver.vertices[i].id, quiver.vertices[j].id, count) for i, j, count in quiver.edges]


def _verdict(verdict: Verdict | None, write: Write) -> VerdictJson | None:
    if verdict is None:
        return None
    certificate = None if verdict.certificate is None else certificate_json(verdict.certificate, write)
    if certificate is not None and verdict.modulo_integers and verdict.quiver is not None:
        certificate["vertices"] = _vertices(verdict.quiver, write)
        certificate["edges"] = _edges(verdict.quiver)
    if verdict.ramified is not None:
        certificate = ramified_certificate_json(verdict.ramified)
    return {
        "exists": verdict.exists,
        "status": verdict.status,
        "reason": verdict.reason,
        "certificate": certificate,
    }


def certificate_json(certificate: Certificate, write: Write) -> CertificateJson:
    """A certificate as JSON data; ``write`` writes its numbers."""
    match certificate:
        case Reflections(steps, reduced, criterion):
            return {
                "kind": "reflections",
                "steps": [_step(step) for step in steps],
                "reduced": list(reduced),
                "criterion": criterion,
            }
        case Decomposition(parts, criterion):
            return {
                "kind": "decomposition",
                "parts": [{"multiplicity": q.multiplicity, "vector": list(q.vector), "p": q.p} for q in parts],
                "criterion": criterion,
            }
        case NotARoot(steps, reduced, failure):
            return {
                "kind": "not-a-root",
                "steps": [_step(step) for step in steps],
                "reduced": list(reduced),
                "failure": failure,
            }
        case FuchsDefect(defect):
            return {"kind": "fuchs", "defect": write(defect)}


def _step(step: Step) -> str | list[str]:
    return step if isinstance(step, str) else list(step)
