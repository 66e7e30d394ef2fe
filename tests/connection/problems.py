"""Problems for the tests of this room."""

from fractions import Fraction

from app.exact.value import Value
from app.local.document import problem_from_json
from app.local.problem import Problem


def log_problem(*poles: list[tuple[str, list[int]]], symbols: tuple[str, ...] = ()) -> Problem:
    """A problem with log poles at 0, 1, 2, … and infinity, each a list of (eigenvalue, Jordan sizes)."""
    places = [*(str(k) for k in range(len(poles) - 1)), "infinity"]
    return problem_from_json(
        {
            "format": "polewright-problem/1",
            "name": "",
            "symbols": list(symbols),
            "poles": [
                {
                    "at": at,
                    "blocks": [{"exponent": {}, "residue": [{"value": v, "jordan": j} for v, j in eigenvalues]}],
                }
                for at, eigenvalues in zip(places, poles, strict=True)
            ],
        }
    )


def general_problem(poles: list[tuple[str, list[tuple[dict[str, str], list[tuple[str, list[int]]]]]]], symbols=()):
    """A problem from (position, [(exponent, [(eigenvalue, Jordan sizes), …]), …]) for each pole."""
    return problem_from_json(
        {
            "format": "polewright-problem/1",
            "name": "",
            "symbols": list(symbols),
            "poles": [
                {
                    "at": at,
                    "blocks": [
                        {"exponent": exponent, "residue": [{"value": v, "jordan": j} for v, j in residue]}
                        for exponent, residue in blocks
                    ],
                }
                for at, blocks in poles
            ],
        }
    )


def rational(text: str) -> Value:
    return Value.rational(Fraction(text))
