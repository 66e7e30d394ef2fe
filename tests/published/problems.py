"""Problems for published checks, built from tuples of partitions and from lists of eigenvalues."""

from fractions import Fraction
from typing import Any

from app.local.document import problem_from_json
from app.local.problem import Problem

Class = list[tuple[str | int | Fraction, list[int]]]


def log_problem(*classes: Class, reading: str = "residue", symbols: tuple[str, ...] = ()) -> Problem:
    """Log poles with the given classes; the last one at infinity."""
    poles: list[dict[str, Any]] = []
    for k, residue in enumerate(classes):
        at = "infinity" if k == len(classes) - 1 else str(k)
        written = [{"value": str(value), "jordan": jordan} for value, jordan in residue]
        poles.append({"at": at, "blocks": [{"exponent": {}, reading: written}]})
    document = {"format": "polewright-problem/1", "name": "", "symbols": list(symbols), "poles": poles}
    return problem_from_json(document)


def semisimple(values: tuple[str | int | Fraction, ...], multiplicities: tuple[int, ...]) -> Class:
    """A semisimple class with the given eigenvalues and multiplicities."""
    return [(value, [1] * m) for value, m in zip(values, multiplicities, strict=True)]
