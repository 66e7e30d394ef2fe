"""Figures of explicit connections: medians against their targets.

    python -m tests.benchmarks.connection_figures

Construction includes the verification record.  The last figure is a ratio: exact elimination in the program's kernel
against sympy's own, on the same matrix in the same run.
"""

import random
import statistics
import time
from collections.abc import Callable

import sympy

from app.connection.construction import Construction, construct
from app.connection.generic_values import generic_values
from app.connection.verification import problem_at
from app.exact.field import field_of
from app.exact.quotient import Quotient
from app.exact.value import Value
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand

RUNS = 5


def hypergeometric(order: int) -> str:
    """The shorthand of the hypergeometric family."""
    return f"[{order - 1}]1,1^{order},1^{order}" if order > 10 else f"{order - 1}1,1^{order},1^{order}"


def with_rational_values(shorthand: str) -> Problem:
    """The type with generic rational eigenvalues."""
    problem = problem_from_shorthand(shorthand)
    return problem_at(problem, generic_values(problem.symbols, 1))


def median_of(run: Callable[[], Construction]) -> float:
    """The median time in seconds; what is built must be verified."""
    times = []
    for _ in range(RUNS):
        start = time.perf_counter()
        built = run()
        times.append(time.perf_counter() - start)
        assert built.verified, built.method
    return statistics.median(times)


def construction_figures() -> list[tuple[str, float, float]]:
    """(name, seconds, target) of the constructions."""
    order_three, order_five = (problem_from_shorthand(hypergeometric(n)) for n in (3, 5))
    order_twelve = with_rational_values(hypergeometric(12))
    rank_eight = with_rational_values("2222,2222,2222,2222,2222")
    return [
        ("hypergeometric, order 3, free exponents", median_of(lambda: construct(order_three)), 0.5),
        ("hypergeometric, order 5, free exponents", median_of(lambda: construct(order_five)), 5.0),
        ("hypergeometric, order 12, rational exponents", median_of(lambda: construct(order_twelve)), 2.0),
        ("numerical point, rank 8, five poles", median_of(lambda: construct(rank_eight, numeric=True)), 1.0),
    ]


def elimination_ratio(size: int = 8) -> tuple[float, float, int]:
    """Seconds of the kernel and of sympy for the reduced echelon form over three symbols, and the rank found by both.

    One more column than rows, so that the form is not an identity matrix alone.  sympy's plain route is its own
    fraction-free elimination over the ring of polynomials.
    """
    source = random.Random(7)
    names = ("x", "y", "z")
    values = [
        [
            Value.from_terms(
                [(((), 1), source.randint(-5, 5)), (((((source.choice(names)), 1),), 1), source.randint(1, 5))]
            )
            for _ in range(size + 1)
        ]
        for _ in range(size)
    ]
    letters = {name: sympy.Symbol(name) for name in names}

    def theirs(value: Value) -> sympy.Expr:
        terms = [c * sympy.prod([letters[n] ** p for n, p in monomial]) for (monomial, _), c in value.terms.items()]
        return sympy.Add(*terms)

    rows = [[Quotient.of(value) for value in row] for row in values]
    matrix = field_of(entry for row in rows for entry in row).matrix(rows)
    times = []
    for _ in range(RUNS):
        start = time.perf_counter()
        reduced, _ = matrix.echelon()
        times.append(time.perf_counter() - start)
    ours = statistics.median(times)
    domain_matrix = sympy.polys.matrices.DomainMatrix.from_Matrix(
        sympy.Matrix(size, size + 1, lambda i, j: theirs(values[i][j]))
    )
    start = time.perf_counter()
    pivots = domain_matrix.to_dense().rref_den(method="FF")[2]
    plain = time.perf_counter() - start
    assert len(pivots) == reduced.height
    return ours, plain, reduced.height


def main() -> int:
    """Print all figures; 1 where a target is missed."""
    missed = 0
    for name, seconds, target in construction_figures():
        missed += seconds > target
        print(f"{'ok  ' if seconds <= target else 'MISS'} {name}: {seconds:.3f} s (target {target} s)")
    ours, plain, rank = elimination_ratio()
    missed += plain < 20 * ours
    print(
        f"{'ok  ' if plain >= 20 * ours else 'MISS'} elimination 8×8, three symbols, rank {rank}: "
        f"{ours:.4f} s, sympy {plain:.3f} s, ratio {plain / ours:.0f} (target 20)"
    )
    return int(missed > 0)


if __name__ == "__main__":
    raise SystemExit(main())
