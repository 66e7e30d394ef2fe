"""Certificates in words, for the page."""

from collections.abc import Mapping

from app.existence.ramified_certificates import (
    FreeResidue,
    JordanBlocks,
    LargeEigenspace,
    RamifiedCertificate,
    ResidueSum,
    RigidityExcess,
)
from app.existence.verdict import Criterion, Decomposition, FuchsDefect, NotARoot, Reflections, Verdict
from app.roots.form import p_of
from app.roots.quiver import Quiver, Vector

LISTED = 40

CRITERIA: Mapping[Criterion, str] = {
    "coordinate vector": "a coordinate vector is reached, so α is a real root, and no parameter vanished on the way",
    "fundamental set": "the reduced vector lies in the fundamental set and none of the exceptions there applies",
    "fundamental set, several poles": "the criterion for several irregular poles holds for the reduced vector",
    "enumeration": "all decompositions of the reduced vector were enumerated",
    "vanishing parameter": "a reflection whose parameter vanishes was reached; there a part splits off",
    "multiple of an isotropic root": "the reduced vector is a multiple of an isotropic root",
    "bridge": "the diagram has a bridge with dimension 1 at both ends, and a side on which the parameters vanish",
    "affine end": "behind a bridge of the diagram stands a multiple of an isotropic root with vanishing parameters",
}


def certificate_words(verdict: Verdict) -> list[str]:
    """A verdict's certificate as lines of text, long lists cut; empty where there is none to show."""
    certificate, quiver = verdict.certificate, verdict.quiver
    if verdict.ramified is not None:
        return _ramified_words(verdict.ramified)
    if certificate is None or quiver is None:
        return []
    match certificate:
        case Reflections(steps, reduced, criterion):
            return [
                *_steps_words(steps),
                f"reduced vector: {_vector(quiver, reduced)}",
                f"criterion: {CRITERIA[criterion]}",
            ]
        case NotARoot(steps, reduced, failure):
            return [*_steps_words(steps), f"vector reached: {_vector(quiver, reduced)}", f"failure: {failure}"]
        case Decomposition(parts, criterion):
            modulo = " (vanishing is meant modulo integers)" if verdict.modulo_integers else ""
            vanish = "θ takes integers" if verdict.modulo_integers else "λ vanishes"
            words = [f"{q.multiplicity} × ({_vector(quiver, q.vector)}), p = {q.p}" for q in parts]
            total = sum(part.multiplicity * part.p for part in parts)
            return [
                f"α is the sum of these positive roots, on which {vanish}:",
                *words,
                f"their p add up to {total}, which is not less than p(α) = {p_of(quiver, quiver.dimension)}",
                f"found by: {CRITERIA[criterion]}{modulo}",
            ]
        case FuchsDefect():
            return []


def _ramified_words(certificate: RamifiedCertificate) -> list[str]:
    match certificate:
        case RigidityExcess(index):
            return [f"rigidity index {index}, more than 2"]
        case JordanBlocks(pole, slope, other, counts):
            where = "the zero class" if other is None else f"pole {other + 1}"
            counted = ", ".join(map(str, counts))
            return [f"maximally ramified pole {pole + 1}, slope {slope}", f"Jordan blocks at {where}: {counted}"]
        case FreeResidue(pole, slope, second):
            beside = "" if second is None else f", and a second one at pole {second + 1}"
            return [f"maximally ramified pole {pole + 1}, slope {slope}{beside}", "the residue there is free enough"]
        case ResidueSum(pole, slope, gauges, columns):
            places = ", ".join(str(gauge.pole + 1) for gauge in gauges)
            return [
                f"maximally ramified pole {pole + 1}, slope {slope}",
                f"principal parts at poles {places} whose residues have a sum that {len(columns[0])} columns generate",
            ]
        case LargeEigenspace(pole, slope, choices, dimension):
            chosen = "; ".join(f"pole {p + 1}, block {b + 1}, eigenvalue {e + 1}" for p, b, e in choices)
            return [
                f"maximally ramified pole {pole + 1}, slope {slope}",
                f"an eigenspace of dimension {dimension} at least, from {chosen}",
            ]


def _steps_words(steps: tuple[str | tuple[str, ...], ...]) -> list[str]:
    words = [step if isinstance(step, str) else " ".join(step) for step in steps[:LISTED]]
    if not words:
        return ["no reflections needed"]
    more = f", and {len(steps) - LISTED} more" if len(steps) > LISTED else ""
    shortened = (word if len(word) < 60 else word[:57] + "…" for word in words)
    return [f"reflections at {', '.join(shortened)}{more}"]


def _vector(quiver: Quiver, vector: Vector) -> str:
    entries = [f"{v.id}: {n}" for v, n in zip(quiver.vertices, vector, strict=True) if n]
    more = f", and {len(entries) - LISTED} more" if len(entries) > LISTED else ""
    return ", ".join(entries[:LISTED]) + more
