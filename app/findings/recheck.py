"""Findings read back from JSON and checked against their problem.

The certificates are read from the document as it stands (another program, or an editor, may have made it), the quiver
is built anew from the problem, and ``existence/check.py`` works out every claim.
"""

from collections.abc import Mapping
from typing import Any

from app.errors import NumberFault, Place, Refused
from app.exact.number import parse_number
from app.existence.check import Check, check_certificate
from app.existence.problems import local_monodromy_problem
from app.existence.verdict import Certificate, Decomposition, FuchsDefect, NotARoot, Part, Reflections, Step
from app.findings.findings import examine
from app.findings.ramified_json import ramified_checks
from app.local.problem import Problem
from app.roots.build import quiver_of
from app.roots.quiver import Quiver

_FIGURES = ("rank", "dimension", "rigidity_index", "fuchs", "solved", "orbits", "formal", "quiver", "diagram", "root")


def recheck(problem: Problem, findings: object) -> tuple[Check, ...]:
    """Check the figures and the certificates of findings (JSON data) against a problem.

    Raises ``Refused`` with the place when the findings are not of the right shape.
    """
    if not isinstance(findings, Mapping):
        raise _refusal("/findings", "this is no object", "findings as the program writes them")
    computed = examine(problem).as_json()
    checks = [Check(f"{key} as computed anew", _plain(findings.get(key)) == _plain(computed[key])) for key in _FIGURES]
    if not problem.ramified:
        checks += _verdict_checks(quiver_of(problem), findings, "additive", problem, modulo_integers=False)
    else:
        checks += ramified_checks(problem, findings)
    if problem.all_log:
        merged = quiver_of(local_monodromy_problem(problem))
        checks += _verdict_checks(merged, findings, "multiplicative", problem, modulo_integers=True)
    return tuple(checks)


def _verdict_checks(
    quiver: Quiver, findings: Mapping[str, Any], key: str, problem: Problem, *, modulo_integers: bool
) -> list[Check]:
    verdict = findings.get(key)
    if verdict is None:
        return []
    place = f"/findings/{key}"
    if not isinstance(verdict, Mapping) or verdict.get("exists") not in (True, False, None):
        raise _refusal(place, "this is no verdict", "exists, status, reason, certificate")
    if verdict.get("certificate") is None:
        return [Check(f"{key}: a decided verdict has a certificate", verdict["exists"] is None)]
    certificate = _certificate(verdict["certificate"], f"{place}/certificate", quiver, problem)
    found = check_certificate(quiver, certificate, verdict["exists"], modulo_integers)
    return [Check(f"{key}: {one.claim}", one.holds, one.figure) for one in found]


def _certificate(data: object, place: str, quiver: Quiver, problem: Problem) -> Certificate:
    if not isinstance(data, Mapping):
        raise _refusal(place, "this is no object", "a certificate")
    match data.get("kind"):
        case "reflections":
            criterion = data.get("criterion")
            return Reflections(
                _steps(data.get("steps"), f"{place}/steps", quiver),
                _vector(data.get("reduced"), f"{place}/reduced", quiver),
                criterion if criterion in ("coordinate vector", "enumeration") else "fundamental set",
            )
        case "not-a-root":
            failure = data.get("failure")
            return NotARoot(
                _steps(data.get("steps"), f"{place}/steps", quiver),
                () if failure == "negative p" else _vector(data.get("reduced"), f"{place}/reduced", quiver),
                failure if failure in ("disconnected support", "negative p") else "negative entry",
            )
        case "decomposition":
            parts = data.get("parts")
            if not isinstance(parts, list):
                raise _refusal(f"{place}/parts", "this is no list", "parts with multiplicity, vector, p")
            read = tuple(_part(part, f"{place}/parts/{k}", quiver) for k, part in enumerate(parts))
            return Decomposition(read, "enumeration")
        case "fuchs":
            try:
                return FuchsDefect(parse_number(str(data.get("defect")), problem.symbols))
            except NumberFault as fault:
                raise _refusal(f"{place}/defect", fault.message, fault.expected) from fault
    raise _refusal(f"{place}/kind", "unknown kind", "reflections, decomposition, not-a-root or fuchs")


def _part(data: object, place: str, quiver: Quiver) -> Part:
    if not isinstance(data, Mapping) or not _is_integer(data.get("multiplicity")) or not _is_integer(data.get("p")):
        raise _refusal(place, "this is no part", "multiplicity, vector, p")
    return Part(data["multiplicity"], _vector(data.get("vector"), f"{place}/vector", quiver), data["p"])


def _vector(data: object, place: str, quiver: Quiver) -> tuple[int, ...]:
    size = len(quiver.vertices)
    if not isinstance(data, list) or len(data) != size or not all(_is_integer(n) for n in data):
        raise _refusal(place, "this is no vector on the quiver's vertices", f"{size} integers")
    return tuple(data)


def _steps(data: object, place: str, quiver: Quiver) -> tuple[Step, ...]:
    known = {vertex.id for vertex in quiver.vertices}
    steps: list[Step] = []
    for k, entry in enumerate(data if isinstance(data, list) else [None]):
        names = entry if isinstance(entry, list) else [entry]
        if not names or any(not isinstance(name, str) or name not in known for name in names):
            raise _refusal(f"{place}/{k}", "this is no step", "a vertex id, or a list of vertex ids")
        steps.append(entry if isinstance(entry, str) else tuple(names))
    return tuple(steps)


def _is_integer(value: object) -> bool:
    return isinstance(value, int) and not isinstance(value, bool)


def _plain(value: object) -> object:
    """JSON data with tuples as lists, so that read and computed values compare."""
    if isinstance(value, Mapping):
        return {key: _plain(entry) for key, entry in value.items()}
    return [_plain(entry) for entry in value] if isinstance(value, list | tuple) else value


def _refusal(at: str, message: str, expected: str) -> Refused:
    return Refused("The findings cannot be read.", (Place(at, message, expected),))
