"""From a problem to a connection, always with its verification record.

Exact where that is possible: the descent of the data (``stages``) ends at rank 1 (rigid: one connection up to
isomorphism) or at a fundamental datum; one of rank 2 has a chart with accessory parameters (``rank_two``); from there
the matrices climb back up (``ascent``).  Otherwise a numerical point is found on the fundamental datum, with generic
values for the symbols, and climbs up in floating arithmetic; on request, directly on the problem's own orbits.

Ramified data: numerical points only, on the orbits of their normal forms (``normal_form``).  Where existence is open,
a verified irreducible point is evidence, and a search without one decides nothing; the note says which.

Where no irreducible system exists the numerical search on the problem's orbits is run as an illustration, and what it
found is said.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import ceil
from typing import TYPE_CHECKING

from app.connection.ascent import ascend, parts_of_rank_one
from app.connection.connection import (
    Connection,
    ConnectionPole,
    Rows,
    exact_field,
    exact_parts,
    floating_parts,
    poles_of,
    rows_of,
)
from app.connection.formal_reduction import formal_reduction
from app.connection.generic_values import generic_values
from app.connection.rank_two import chart
from app.connection.stages import Descent, Stage, descend, stage_of
from app.connection.verification import problem_at, verify
from app.errors import Failed, OutOfTime, Refused, TooLarge
from app.exact.diagonal_gauge import diagonally_shortened
from app.exact.function_matrix import FunctionMatrix
from app.exact.matrix import ExactMatrix, NotTheRank
from app.exact.number import write_number
from app.exact.quotient import Quotient
from app.exact.value import Value
from app.existence.problems import additive_verdict
from app.existence.verdict import Verdict
from app.local.problem import Problem
from app.progress import Deadline, Progress, Unlimited
from app.roots.build import quiver_of
from app.roots.reduction import reduce

if TYPE_CHECKING:
    from app.connection.float_matrix import FloatMatrix
    from app.connection.numerical_point import Point

DEFAULT_TIME_LIMIT = 60.0
MAXIMUM_RANK = 32
MAXIMUM_SIZE = 2048
_SEEDS = 5
_SEED_STEP = 1000
_ATTEMPTS = 3
_RAMIFIED_SEARCH = (
    "Numerical search on the orbits of the ramified normal forms; exact matrices are not built for these."
)
_EVIDENCE = (
    "Existence is open. The point found is irreducible and passes every check in floating arithmetic: numerical "
    "evidence that an irreducible system exists, no proof."
)


@dataclass(frozen=True)
class Construction:
    """A problem, the connection found (None where there is none to show), and how it came about.

    ``method`` is a sentence; ``exists`` repeats the additive verdict; ``note`` says what a failed search found.
    A connection that fails a check is kept, with its record: ``verified`` is then False.
    """

    problem: Problem
    connection: Connection | None
    method: str
    exists: bool | None
    note: str = ""

    @property
    def verified(self) -> bool:
        """Whether there is a connection and its whole record holds."""
        return self.connection is not None and self.connection.verified


def construct(
    problem: Problem,
    *,
    numeric: bool = False,
    seed: int = 0,
    time_limit: float | None = DEFAULT_TIME_LIMIT,
    progress: Progress | None = None,
) -> Construction:
    """A connection with the problem's orbits.

    Args:
        problem: with residues given.  Ramified data have a numerical point only.
        numeric: a floating point by Newton's method directly on the problem's orbits, independent of the descent.
        seed: chooses the values for symbols and the starts of numerical searches.
        time_limit: in seconds, None for none; ``progress`` replaces it where given.

    Raises Refused for local monodromies and for a field too large; TooLarge; OutOfTime; Failed
    where the construction contradicts the verdict (a fault of the program).
    """
    if problem.reading == "local_monodromy":
        raise Refused("A connection is constructed from residues; this problem gives local monodromies.")
    _check_size(problem)
    watch = progress or (Unlimited() if time_limit is None else Deadline(time_limit, OutOfTime))
    watch.report("existence")
    verdict = _verdict(problem)
    if verdict is None:
        raise Failed("There is no verdict on this problem.")
    if verdict.exists is False:
        return _illustration(problem, verdict, seed, watch)
    if problem.ramified:
        return _ramified(problem, verdict, seed, watch)
    if numeric:
        return _direct(problem, verdict, seed, watch)
    descent = descend(problem)
    if descent.blocked:
        raise Failed("The descent of the data stops although an irreducible system exists.")
    if descent.last.rank <= 2:
        return _exact(problem, verdict, descent, watch)
    return _floating(problem, verdict, seed, watch)


def _verdict(problem: Problem) -> Verdict | None:
    quiver = None if problem.ramified else quiver_of(problem)
    return additive_verdict(problem, quiver, None if quiver is None else reduce(quiver))


def _check_size(problem: Problem) -> None:
    """Refuse, before any work, what would need too large matrices: the tangent maps have size n²(r + 1)."""
    if problem.rank > MAXIMUM_RANK:
        raise TooLarge(f"Connections are constructed up to rank {MAXIMUM_RANK}; this problem has rank {problem.rank}.")
    order = max((ceil(block.exponent.slope) for pole in problem.poles for block in pole.blocks), default=0)
    if problem.rank**2 * (order + 1) > MAXIMUM_SIZE:
        raise TooLarge(
            f"Connections are constructed while rank² · order of the worst pole is at most {MAXIMUM_SIZE}; here it is "
            f"{problem.rank**2 * (order + 1)}."
        )


def _exact(problem: Problem, verdict: Verdict, descent: Descent, progress: Progress) -> Construction:
    """Exact matrices from rank 1, or from a chart of rank 2."""
    values = [Quotient.of(value) for value in _stage_values(stage_of(problem))]
    accessory: tuple[str, ...] = ()
    try:
        if descent.last.rank == 1:
            bottom = parts_of_rank_one(descent.last, exact_field(values).matrix([[1]]))
            method = "Exact, by middle convolutions and twists from rank 1."
        else:
            made = chart(descent.last, problem.symbols)
            accessory = made.accessory
            entries = [entry for tables in made.tables for table in tables for row in table for entry in row]
            bottom = made.parts(exact_field([*values, *entries]))
            method = f"Exact, on a chart of rank 2 with {len(accessory)} accessory parameters"
            method += ", then by middle convolutions and twists." if descent.steps else "."
        parts = ascend(descent, bottom, progress, _shortened)
    except NotTheRank as error:
        raise Failed(f"The ascent met a matrix that contradicts the verdict: {error}") from error
    connection = Connection(
        "exact",
        problem.rank,
        poles_of([pole.at for pole in problem.poles], parts),
        (*problem.symbols, *accessory),
        accessory,
    )
    return _finished(problem, verdict, connection, method, progress)


def _shortened(parts: list[list[ExactMatrix]]) -> list[list[ExactMatrix]]:
    """A common diagonal gauge that makes entries with symbols shorter."""
    flat = [matrix for part in parts for matrix in part if isinstance(matrix, FunctionMatrix)]
    if not flat:
        return parts
    shorter = iter(diagonally_shortened(flat))
    return [[next(shorter) for _ in part] for part in parts]


def _floating(problem: Problem, verdict: Verdict, seed: int, progress: Progress) -> Construction:
    """A numerical point on the fundamental datum, ascended; the first of a few that is verified, else the first."""
    from app.connection.numerical_point import find_point

    values = _values(problem, seed)
    special = problem_at(problem, values)
    descent = descend(special)
    if descent.blocked:
        raise Refused("These values of the symbols are not generic enough: the descent of the data stops.")
    best: Construction | None = None
    missed: Point | None = None
    for attempt in range(_ATTEMPTS):
        point = find_point(descent.last, seed + _SEED_STEP * attempt, progress)
        if not point.converged:
            missed = point
            continue
        parts = ascend(descent, point.parts, progress)
        method = (
            f"Numerical: Newton's method on the fundamental datum of rank {descent.last.rank} (start {point.starts})"
        )
        method += ", then middle convolutions and twists." if descent.steps else "."
        connection = _numerical(special, values, poles_of([pole.at for pole in special.poles], parts))
        built = _finished(problem, verdict, connection, method, progress)
        if built.verified:
            return built
        best = best or built
    if best is not None or missed is None:
        return best or _not_found(problem, verdict, "No start was made", float("inf"))
    starts = missed.starts * _ATTEMPTS
    return _not_found(problem, verdict, f"Newton's method did not converge from {starts} starts", missed.residual)


def _direct(problem: Problem, verdict: Verdict, seed: int, progress: Progress) -> Construction:
    """A numerical point directly on the problem's orbits; where none is good, one by ascent."""
    values = _values(problem, seed)
    special = problem_at(problem, values)
    best: Construction | None = None
    for attempt in range(_ATTEMPTS):
        point = _point_on_orbits(special, seed + _SEED_STEP * attempt, progress)
        if not point.converged:
            continue
        method = f"Numerical: Newton's method on the orbits themselves (start {point.starts})."
        connection = _numerical(special, values, poles_of([pole.at for pole in special.poles], point.parts))
        built = _finished(problem, verdict, connection, method, progress)
        if built.verified:
            return built
        best = best or built
    if verdict.exists:
        ascended = _floating(problem, verdict, seed, progress)
        if ascended.verified or best is None:
            return ascended
    return best or _not_found(problem, verdict, "Newton's method did not converge from any start", point.residual)


def _point_on_orbits(special: Problem, seed: int, progress: Progress) -> "Point":
    """A numerical point on the orbits of a problem without symbols, for every formal type."""
    from app.connection.numerical_point import find_point_at

    return find_point_at(special.poles, seed, progress)


def _ramified(problem: Problem, verdict: Verdict, seed: int, progress: Progress) -> Construction:
    """A numerical point for ramified data, the first of a few that is verified, else the first; with a careful note."""
    values = _values(problem, seed)
    special = problem_at(problem, values)
    best: Construction | None = None
    starts, residual = 0, float("inf")
    for attempt in range(_ATTEMPTS):
        point = _point_on_orbits(special, seed + _SEED_STEP * attempt, progress)
        starts += point.starts
        residual = min(residual, point.residual)
        if not point.converged:
            continue
        method = (
            "Numerical evidence, no proof: Newton's method on the orbits of the ramified normal forms "
            f"(start {point.starts}). Exact matrices are built for unramified data only."
        )
        connection = _numerical(special, values, poles_of([pole.at for pole in special.poles], point.parts))
        built = _finished(problem, verdict, connection, method, progress)
        if built.verified:
            return built if verdict.exists else _noted(built, _EVIDENCE)
        best = best or built
    conclusion = "A theorem proves existence all the same." if verdict.exists else "This decides nothing."
    if best is not None:
        return _noted(best, f"No point that passes all checks was found in {starts} starts. {conclusion}")
    missed = _not_found(
        problem,
        verdict,
        f"Nothing was found in {starts} {'start' if starts == 1 else 'starts'}",
        residual,
        _RAMIFIED_SEARCH,
    )
    return replace(missed, note=f"{missed.note} {conclusion}")


def _noted(built: Construction, note: str) -> Construction:
    """With a note, in the connection's own words too, so that its document never travels without the caution."""
    connection = built.connection
    if connection is not None:
        connection = replace(connection, method=f"{connection.method} {note}")
    return replace(built, note=note, connection=connection)


def _illustration(problem: Problem, verdict: Verdict, seed: int, progress: Progress) -> Construction:
    """No irreducible system exists: what a numerical search on the orbits finds all the same."""
    method = "No irreducible system exists; numerical search as an illustration."
    if problem.trace_sum:
        note = f"The traces add up to {write_number(problem.trace_sum)}, so the residues cannot add up to 0."
        return Construction(problem, None, method, False, note)
    values = _values(problem, seed)
    special = problem_at(problem, values)
    point = _point_on_orbits(special, seed, progress)
    if not point.converged:
        return _not_found(problem, verdict, f"{point.starts} starts did not converge", point.residual, method)
    connection = _numerical(special, values, poles_of([pole.at for pole in special.poles], point.parts))
    found = _finished(problem, verdict, connection, method, progress)
    return replace(found, note="A tuple on these orbits was found; the record says what it is.")


def _not_found(
    problem: Problem, verdict: Verdict, words: str, residual: float, method: str = "Numerical search."
) -> Construction:
    note = f"{words}; the best one missed the sum of residues by {residual:.1e} relative to the largest coefficient."
    if residual == float("inf"):
        note = f"{words}; all ran away along the orbits."
    return Construction(problem, None, method, verdict.exists, note)


def _finished(
    problem: Problem, verdict: Verdict, connection: Connection, method: str, progress: Progress
) -> Construction:
    """The connection with its gauges and its record."""
    asked = problem_at(problem, dict(connection.values))
    connection = with_gauges(asked, connection)
    record = verify(problem, connection, progress)
    made = replace(connection, verification=record, method=method)
    return Construction(problem, made, method, verdict.exists)


def with_gauges(problem: Problem, connection: Connection) -> Connection:
    """The connection with a normalising gauge at every irregular pole; none where the formal reduction fails,
    and none for ramified data."""
    if problem.all_log or problem.ramified:
        return connection
    if connection.kind == "exact":
        exact = exact_parts(connection, _stage_values(stage_of(problem)))
        gauges = [_gauge(problem, place, part) for place, part in enumerate(exact)]
    else:
        floating = floating_parts(connection)
        gauges = [_gauge(problem, place, part) for place, part in enumerate(floating)]
    poles = tuple(replace(pole, gauge=gauge) for pole, gauge in zip(connection.poles, gauges, strict=True))
    return replace(connection, poles=poles)


def _gauge(problem: Problem, place: int, part: "Sequence[ExactMatrix] | Sequence[FloatMatrix]") -> tuple[Rows, ...]:
    """The normalising gauge at one pole, () for a log pole or where there is none."""
    blocks = stage_of(problem).poles[place]
    if not any(block.exponent for block in blocks):
        return ()
    order = max(block.exponent[0][0] for block in blocks if block.exponent)
    exponents, sizes = [block.exponent for block in blocks], [block.multiplicity for block in blocks]
    try:
        reduced = formal_reduction(part[: order + 1], exponents, sizes)
    except NotTheRank:
        return ()
    return tuple(rows_of(matrix) for matrix in reduced.gauge)


def _stage_values(stage: Stage) -> list[Value]:
    """All values that occur in a stage."""
    found = [stage.excess]
    for blocks in stage.poles:
        for block in blocks:
            found += [value for _, value in block.exponent] + [slot.value for slot in block.slots]
    return found


def _values(problem: Problem, seed: int) -> dict[str, Value]:
    """Generic values for all symbols under which the problem keeps its verdict."""
    asked = _verdict(problem)
    for attempt in range(_SEEDS):
        values = generic_values(problem.symbols, seed + _SEED_STEP * attempt)
        try:
            special = problem_at(problem, values)
        except Refused:
            continue
        found = _verdict(special)
        if found is not None and asked is not None and found.exists == asked.exists:
            return values
    raise Refused("No values for the symbols were found under which the problem keeps its verdict.")


def _numerical(special: Problem, values: dict[str, Value], poles: tuple[ConnectionPole, ...]) -> Connection:
    return Connection("numerical", special.rank, poles, (), (), (), tuple(sorted(values.items())))
