"""What ramified data add to the findings, as JSON data: the diagram, the formal figures, the certificates.

Certificates are read back here too, for ``recheck.py``; what cannot be read is refused with its place.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from app.errors import NumberFault, Place, Refused
from app.exact.number import parse_number
from app.existence.check import Check
from app.existence.check_ramified import check_ramified
from app.existence.ramified_certificates import (
    FreeResidue,
    Gauge,
    IntegerMatrix,
    JordanBlocks,
    LargeEigenspace,
    RamifiedCertificate,
    ResidueSum,
    RigidityExcess,
)
from app.existence.verdict import FuchsDefect
from app.local.problem import Problem
from app.roots.orbit_diagram import OrbitDiagram

if TYPE_CHECKING:
    from app.findings.types import CertificateJson, DiagramJson, OrbitVertexJson

_KINDS = "fuchs, rigidity-excess, jordan-blocks, free-residue, residue-sum or large-eigenspace"


def diagram_json(diagram: OrbitDiagram) -> DiagramJson:
    """The diagram as JSON data: vertices with their weights, and the entries of its matrix by ids."""
    vertices: list[OrbitVertexJson] = []
    for vertex in diagram.vertices:
        entry: OrbitVertexJson = {
            "id": vertex.id,
            "role": vertex.role,
            "pole": vertex.pole,
            "block": vertex.block,
            "leg": vertex.leg,
            "dimension": vertex.dimension,
            "weight": vertex.weight,
        }
        if vertex.role == "core":
            del entry["leg"]
        vertices.append(entry)
    entries = [(diagram.vertices[i].id, diagram.vertices[j].id, count) for i, j, count in diagram.entries]
    return {"base": diagram.base, "vertices": vertices, "entries": entries}


def ramified_certificate_json(certificate: RamifiedCertificate) -> CertificateJson:
    """A certificate of a verdict on ramified data as JSON data."""
    if isinstance(certificate, RigidityExcess):
        return {"kind": "rigidity-excess", "index": certificate.index}
    written: CertificateJson = {"kind": "jordan-blocks", "pole": certificate.pole, "slope": str(certificate.slope)}
    match certificate:
        case JordanBlocks():
            written |= {"other": certificate.other, "counts": list(certificate.counts)}
        case FreeResidue():
            written |= {"kind": "free-residue", "second": certificate.second}
        case ResidueSum():
            written |= {
                "kind": "residue-sum",
                "gauges": [{"pole": g.pole, "terms": [_rows(term) for term in g.terms]} for g in certificate.gauges],
                "columns": _rows(certificate.columns),
            }
        case LargeEigenspace():
            written |= {
                "kind": "large-eigenspace",
                "choices": [list(choice) for choice in certificate.choices],
                "dimension": certificate.dimension,
            }
    return written


def _rows(matrix: IntegerMatrix) -> list[list[int]]:
    return [list(row) for row in matrix]


# --- reading back


def ramified_checks(problem: Problem, findings: Mapping[str, Any]) -> list[Check]:
    """The additive certificate of findings (JSON data) worked out again for a problem with ramified poles.

    Raises ``Refused`` with the place where the findings are not of the right shape.
    """
    verdict = findings.get("additive")
    if verdict is None:
        return [Check("additive: there is a verdict", False)]
    if not isinstance(verdict, Mapping) or verdict.get("exists") not in (True, False, None):
        raise _refusal("/findings/additive", "this is no verdict", "exists, status, reason, certificate")
    if verdict.get("certificate") is None:
        return [Check("additive: a decided verdict has a certificate", verdict["exists"] is None)]
    certificate = _Reader(verdict["certificate"], "/findings/additive/certificate").certificate(problem)
    found = check_ramified(problem, certificate, verdict["exists"])
    return [Check(f"additive: {one.claim}", one.holds, one.figure) for one in found]


class _Reader:
    """One JSON object being read, with its place."""

    def __init__(self, data: object, place: str) -> None:
        if not isinstance(data, Mapping):
            raise _refusal(place, "this is no object", "a certificate")
        self._data = data
        self._place = place

    def certificate(self, problem: Problem) -> RamifiedCertificate | FuchsDefect:
        kind = self._data.get("kind")
        if kind == "fuchs":
            try:
                return FuchsDefect(parse_number(str(self._data.get("defect")), problem.symbols))
            except NumberFault as fault:
                raise _refusal(f"{self._place}/defect", fault.message, fault.expected) from fault
        if kind == "rigidity-excess":
            return RigidityExcess(self._integer("index"))
        makers: dict[object, Callable[[int, Fraction], RamifiedCertificate]] = {
            "jordan-blocks": lambda pole, slope: JordanBlocks(
                pole, slope, self._pole("other", problem), self._vector("counts")
            ),
            "free-residue": lambda pole, slope: FreeResidue(pole, slope, self._pole("second", problem)),
            "residue-sum": lambda pole, slope: ResidueSum(pole, slope, self._gauges(problem), self._matrix("columns")),
            "large-eigenspace": lambda pole, slope: LargeEigenspace(
                pole, slope, self._choices(problem), self._integer("dimension")
            ),
        }
        if kind not in makers:
            raise _refusal(f"{self._place}/kind", "unknown kind", _KINDS)
        pole = self._pole("pole", problem)
        if pole is None:
            raise _refusal(f"{self._place}/pole", "this is no pole", "the index of a pole")
        return makers[kind](pole, self._slope())

    def _integer(self, key: str) -> int:
        value = self._data.get(key)
        if not _is_integer(value):
            raise _refusal(f"{self._place}/{key}", "this is no integer", "an integer")
        return int(self._data[key])

    def _pole(self, key: str, problem: Problem) -> int | None:
        value = self._data.get(key)
        if value is not None and (not _is_integer(value) or value not in range(len(problem.poles))):
            raise _refusal(f"{self._place}/{key}", "this is no pole", "the index of a pole, counted from 0, or null")
        return value

    def _slope(self) -> Fraction:
        text = self._data.get("slope")
        numerator, mark, denominator = text.partition("/") if isinstance(text, str) else ("", "", "")
        digits = (numerator, denominator or "1")
        right = all(part.isascii() and part.isdigit() and len(part) < 10 for part in digits) and digits[1].strip("0")
        if not right or (mark and not denominator):
            raise _refusal(f"{self._place}/slope", "this is no slope", 'a fraction such as "3/2"')
        return Fraction(int(digits[0]), int(digits[1]))

    def _vector(self, key: str) -> tuple[int, ...]:
        return self._row(self._data.get(key), f"{self._place}/{key}")

    def _row(self, data: object, place: str) -> tuple[int, ...]:
        if not isinstance(data, list) or not data or not all(_is_integer(entry) for entry in data):
            raise _refusal(place, "this is no list of integers", "integers")
        return tuple(data)

    def _matrix(self, key: str) -> IntegerMatrix:
        return self._rows(self._data.get(key), f"{self._place}/{key}")

    def _rows(self, data: object, place: str) -> IntegerMatrix:
        if not isinstance(data, list) or not data:
            raise _refusal(place, "this is no matrix", "rows of integers")
        return tuple(self._row(row, f"{place}/{k}") for k, row in enumerate(data))

    def _gauges(self, problem: Problem) -> tuple[Gauge, ...]:
        data, found = self._data.get("gauges"), []
        place = f"{self._place}/gauges"
        for k, entry in enumerate(data if isinstance(data, list) else [None]):
            reader = _Reader(entry, f"{place}/{k}")
            pole, terms = reader._pole("pole", problem), reader._data.get("terms")
            if pole is None or not isinstance(terms, list) or not terms:
                raise _refusal(f"{place}/{k}", "this is no gauge", "pole, and terms as matrices of integers")
            found.append(Gauge(pole, tuple(self._rows(m, f"{place}/{k}/terms/{t}") for t, m in enumerate(terms))))
        return tuple(found)

    def _choices(self, problem: Problem) -> tuple[tuple[int, int, int], ...]:
        data, found = self._data.get("choices"), []
        for k, entry in enumerate(data if isinstance(data, list) else [None]):
            place = f"{self._place}/choices/{k}"
            row = self._row(entry, place)
            if len(row) != 3 or row[0] not in range(len(problem.poles)):
                raise _refusal(place, "this is no choice", "indices of a pole, a block and an eigenvalue")
            found.append((row[0], row[1], row[2]))
        return tuple(found)


def _is_integer(value: object) -> bool:
    return isinstance(value, int) and not isinstance(value, bool)


def _refusal(at: str, message: str, expected: str) -> Refused:
    return Refused("The findings cannot be read.", (Place(at, message, expected),))
