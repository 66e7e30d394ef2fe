"""One problem, or one quiver, decided by the program and by enumeration, with every certificate worked out again."""

from collections import Counter
from dataclasses import replace
from math import prod

from app.errors import Refused
from app.exact.value import Value
from app.existence.check import check
from app.existence.decide import decide
from app.existence.verdict import Decomposition, Reflections, Verdict
from app.findings.findings import examine
from app.local.document import problem_from_json
from app.roots.quiver import Quiver
from app.roots.reduction import reduce
from tests.existence import random_data
from tests.existence.brute_force import Case, Pole, case_of, exists, in_lattice, is_root, number_of_vectors, p, vanishes

LARGEST = 4_000


def case_of_quiver(quiver: Quiver) -> Case:
    """The program's quiver as a plain case."""
    case = Case()
    for vertex in quiver.vertices:
        value = vertex.parameter.as_rational()
        assert value is not None
        case.add(vertex.dimension, value)
    for a, b, count in quiver.edges:
        case.join(a, b, count)
    poles = sorted({v.pole for v in quiver.vertices if v.role == "core"})
    case.groups = [[k for k, v in enumerate(quiver.vertices) if v.role == "core" and v.pole == pole] for pole in poles]
    return case


def with_case(quiver: Quiver, case: Case) -> Quiver:
    """The quiver with the dimensions and parameters of a case on the same diagram."""
    vertices = tuple(
        replace(vertex, dimension=n, parameter=Value.rational(value))
        for vertex, n, value in zip(quiver.vertices, case.alpha, case.parameters, strict=True)
    )
    return replace(quiver, vertices=vertices)


def assert_decomposition(case: Case, certificate: Decomposition, modulo: bool) -> None:
    """The parts of a decomposition worked out by the code of the enumeration."""
    parts = certificate.parts
    added = [sum(part.multiplicity * part.vector[v] for part in parts) for v in range(len(case.alpha))]
    assert added == case.alpha
    assert sum(part.multiplicity for part in parts) >= 2
    for part in parts:
        assert is_root(case, part.vector) and in_lattice(case, part.vector) and vanishes(case, part.vector, modulo)
    assert sum(part.multiplicity * p(case, part.vector) for part in parts) >= p(case, case.alpha)


def words_for(verdict: Verdict, case: Case) -> list[str]:
    """What kind of case a verdict was, for the counts: problem, answer, and how it was found."""
    problem = "multiplicative" if verdict.modulo_integers else "additive"
    answer = "yes" if verdict.exists else "no"
    how = getattr(verdict.certificate, "criterion", type(verdict.certificate).__name__)
    words = [f"{problem} {answer}", f"{problem} {answer}, {how}"]
    if len(case.groups) > 1:
        words += [f"several core poles {answer}", f"several core poles {answer}, {how}"]
    return words


def compare_verdict(verdict: Verdict, case: Case, counts: Counter[str]) -> None:
    """The verdict against the enumeration of the case, and its certificate against two checks."""
    modulo = verdict.modulo_integers
    assert exists(case, modulo_integers=modulo) == verdict.exists, (case, verdict)
    assert all(one.holds for one in check(verdict)), (case, verdict)
    if isinstance(verdict.certificate, Decomposition):
        assert_decomposition(case, verdict.certificate, modulo)
    if isinstance(verdict.certificate, Reflections) and verdict.certificate.reduced != tuple(case.alpha):
        counts["yes, after reflections"] += 1
    counts.update(words_for(verdict, case))


def compare(found: list[Pole], counts: Counter[str], *, reading: str = "residue", largest: int = LARGEST) -> None:
    """Examine one problem and enumerate it; counts what it was."""
    try:
        problem = problem_from_json(random_data.document(found, reading))
    except Refused:
        return
    findings = examine(problem)
    assert findings.quiver is not None
    if findings.additive is not None:
        # the quiver itself is built a second time from the plain data
        case = case_of(found, findings.quiver.base)
        assert tuple(case.alpha) == findings.quiver.dimension
        assert case.parameters == [v.parameter.as_rational() for v in findings.quiver.vertices]
    for verdict in (findings.additive, findings.multiplicative):
        if verdict is None:
            continue
        assert verdict.quiver is not None
        # for local monodromies, equal classes modulo Z are merged, with a quiver of their own
        own = case_of_quiver(verdict.quiver) if verdict.modulo_integers else case
        if number_of_vectors(own) > largest:
            counts["too large to enumerate"] += 1
        else:
            compare_verdict(verdict, own, counts)


def compare_case(quiver: Quiver, case: Case, counts: Counter[str], *, modulo_integers: bool) -> None:
    """Decide the case on the quiver's diagram by the program and by enumeration."""
    given = with_case(quiver, case)
    assert prod(n + 1 for n in case.alpha) <= LARGEST
    reduction = reduce(given, modulo_integers=modulo_integers)
    compare_verdict(decide(given, reduction, modulo_integers=modulo_integers), case, counts)
