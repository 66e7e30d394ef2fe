"""Closures: the dominance order against its definition, codimensions, verdicts of known limits."""

from itertools import accumulate, pairwise

import pytest

from app.existence.closures import MOST_ROWS, Closures, closures, covered
from app.local.document import problem_from_json
from app.local.orbit import moduli_dimension, rigidity_index
from app.local.problem import Problem
from app.local.writer import document


def log_problem(*poles: list[tuple[str, list[int]]], symbols: tuple[str, ...] = ()) -> Problem:
    return problem_from_json(
        {
            "format": "polewright-problem/1",
            "name": "",
            "symbols": list(symbols),
            "poles": [
                {"at": str(k), "blocks": [{"exponent": {}, "residue": [{"value": v, "jordan": j} for v, j in own]}]}
                for k, own in enumerate(poles)
            ],
        }
    )


def partitions(number: int, largest: int | None = None) -> list[tuple[int, ...]]:
    if number == 0:
        return [()]
    top = number if largest is None else min(number, largest)
    return [(first, *rest) for first in range(top, 0, -1) for rest in partitions(number - first, first)]


def is_below(lower: tuple[int, ...], upper: tuple[int, ...]) -> bool:
    length = sum(upper)
    sums = [list(accumulate([*p, *[0] * (length - len(p))])) for p in (lower, upper)]
    return all(a <= b for a, b in zip(*sums, strict=True))


@pytest.mark.parametrize("number", range(1, 9))
def test_covers_of_the_dominance_order(number: int) -> None:
    every = partitions(number)
    for upper in every:
        below = [p for p in every if p != upper and is_below(p, upper)]
        maximal = {p for p in below if not any(p != q and is_below(p, q) for q in below)}
        assert set(covered(upper)) == maximal, upper


@pytest.mark.parametrize("jordan", [[2], [3], [4], [3, 2], [3, 3], [2, 2, 1]])
def test_all_classes_below_are_listed_once(jordan: list[int]) -> None:
    size = sum(jordan)
    problem = log_problem([("0", jordan)], [("0", [1] * size)])
    found = closures(problem)
    listed = [row.problem.poles[0].blocks[0].residue[0].jordan for row in found.rows]
    assert found.complete and len(listed) == len(set(listed))
    assert set(listed) == {p for p in partitions(size) if p != tuple(jordan) and is_below(p, tuple(jordan))}
    assert all(a.codimension <= b.codimension for a, b in pairwise(found.rows))


def test_dimensions_and_documents() -> None:
    problem = log_problem(
        [("0", [2, 1]), ("1", [2])], [("0", [3]), ("a", [1, 1])], [("-3/5-2/5*a", [1] * 5)], symbols=("a",)
    )
    start = moduli_dimension(problem)
    found = closures(problem)
    assert len(found.rows) == 2 * 2 * 3 - 1
    for row in found.rows:
        assert row.codimension > 0 and row.codimension % 2 == 0
        assert row.dimension == start - row.codimension == 2 - rigidity_index(row.problem)
        assert problem_from_json(dict(document(row.problem))) == row.problem
        assert row.changes and row.problem.trace_sum == problem.trace_sum


def test_semisimple_classes_are_closed() -> None:
    problem = log_problem([("0", [1, 1])], [("1", [1]), ("-1", [1])])
    assert closures(problem) == Closures((), True)


def test_verdicts_of_limits() -> None:
    """Four nilpotent residues of rank 2: with one of them 0 the system is rigid data that do not exist.

    Three residues with one Jordan block each and traces summing to 0 exist only as reducible systems.
    """
    nilpotent = log_problem(*([("0", [2])] for _ in range(4)))
    (first, *others) = closures(nilpotent).rows
    assert len(others) == 2**4 - 2
    assert first.dimension == 0 and first.additive is not None and first.additive.exists is False
    assert first.multiplicative is not None and first.multiplicative.exists is False


def test_a_limit_that_still_exists() -> None:
    """Rank 2 with five poles: one Jordan block may open, since four poles are left."""
    problem = log_problem([("0", [2])], *([("1/3", [1]), ("-1/3", [1])] for _ in range(4)))
    (row,) = closures(problem).rows
    assert row.dimension == 2 and row.codimension == 2
    assert row.additive is not None and row.additive.exists is True


def test_the_number_of_rows_is_bounded() -> None:
    problem = log_problem(*([("0", [12])] for _ in range(3)))
    found = closures(problem, 20)
    assert len(found.rows) == 20 and not found.complete
    assert MOST_ROWS == 200


def test_ramified_data_have_rows_without_a_quiver() -> None:
    pole = {"at": "0", "blocks": [{"exponent": {"1/2": "1"}, "residue": [{"value": "0", "jordan": [2]}]}]}
    other = {"at": "1", "blocks": [{"exponent": {}, "residue": [{"value": "0", "jordan": [2, 2]}]}]}
    problem = problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": [pole, other]})
    found = closures(problem)
    assert len(found.rows) == 2 * 3 - 1
    assert all(row.dimension == moduli_dimension(row.problem) for row in found.rows)
