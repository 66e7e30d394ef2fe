"""The record of checks that comes with every connection.

Everything is recomputed from the finished matrices and the problem; nothing is taken over from the construction.

    sum of residues      the residues of all poles add up to 0
    class at a pole      formal reduction to the asked exponents, then ranks of powers of L − ξ for every eigenvalue;
                         at a ramified pole gauges to the normal form are sought (``verification_ramified``)
    irreducibility       the coefficients generate an algebra of dimension n²
    tangent dimension    ranks of X ↦ [X, A] at the poles, against the expected dimension 2p(α)

Exact matrices: ``verification_exact``; floating ones: ``verification_floating``, which adds how far they are from
exactness.  Against ramified data exact matrices too are checked in floating arithmetic.
"""

from collections.abc import Iterator
from dataclasses import replace

from app.connection.connection import Check, Connection
from app.errors import OutOfTime, Place, Refused
from app.exact.value import Value
from app.local.conjugates import conjugates
from app.local.formal_type import Block, Eigenvalue, Exponent, Pole, Position
from app.local.problem import Problem
from app.progress import Progress


def verify(problem: Problem, connection: Connection, progress: Progress) -> tuple[Check, ...]:
    """All checks of a connection against the problem, at the connection's values for the problem's symbols.

    Poles are matched by their place in the list; a pole that the connection leaves out has to be apparent.
    Where the time limit runs out the record ends with a line that does not hold and says so.
    Raises Refused where rank or positions do not match, or where a floating connection leaves symbols without value.
    """
    asked = problem_at(problem, dict(connection.values))
    _check_match(asked, connection)
    found: list[Check] = []
    try:
        for check in _checks(asked, connection, progress):
            found.append(check)
            progress.check()
    except OutOfTime as error:
        found.append(Check("record complete", False, error.message))
    return tuple(found)


def _checks(problem: Problem, connection: Connection, progress: Progress) -> Iterator[Check]:
    if connection.kind == "exact" and not problem.ramified:
        from app.connection.verification_exact import exact_checks

        return exact_checks(problem, connection, progress)
    from app.connection.verification_floating import floating_checks

    return floating_checks(problem, connection, progress)


def _check_match(problem: Problem, connection: Connection) -> None:
    if connection.rank != problem.rank:
        message = f"The connection has rank {connection.rank}, the problem rank {problem.rank}"
        raise Refused(f"{message}.", (Place("/rank", message, f"rank {problem.rank}"),))
    if [pole.at for pole in connection.poles] != [pole.at for pole in problem.poles]:
        message = "The poles of the connection are not those of the problem, in the same order"
        raise Refused(f"{message}.", (Place("/poles", message, "the same positions in the same order"),))
    if connection.kind == "exact" and problem.ramified and connection.symbols:
        names = ", ".join(connection.symbols)
        raise Refused(
            f"Ramified data are checked in floating arithmetic, with a value for every symbol; {names} have none."
        )
    if (connection.kind == "numerical" or problem.ramified) and unassigned(problem):
        names = ", ".join(unassigned(problem))
        raise Refused(f"A numerical connection needs a value for every symbol; {names} have none.")


def unassigned(problem: Problem) -> tuple[str, ...]:
    """Symbols that occur in eigenvalues and exponents, by name (positions do not enter any check)."""
    found: set[str] = set()
    for pole in problem.poles:
        for block in pole.blocks:
            for value in (*(v for _, v in block.exponent.terms), *(e.value for e in block.residue)):
                found |= value.symbols()
    return tuple(sorted(found))


def problem_at(problem: Problem, values: dict[str, Value]) -> Problem:
    """The problem with constants in place of symbols.

    Raises Refused where eigenvalues, exponents (up to conjugation) or positions that were distinct become equal, or a
    ramification index falls: then the values are not values of this problem.
    """
    if not values:
        return problem
    poles = []
    for number, pole in enumerate(problem.poles):
        at = Position(None if pole.at.value is None else pole.at.value.substitute(values))
        blocks = tuple(_block_at(block, values, f"/poles/{number}/blocks/{j}") for j, block in enumerate(pole.blocks))
        # one conjugate stands for a whole Galois orbit; two orbits are equal or disjoint
        for j, block in enumerate(blocks):
            if any(conjugates(block.exponent)[0] in conjugates(other.exponent) for other in blocks[:j]):
                _refuse_equal("exponents", f"/poles/{number}/blocks")
        poles.append(Pole(at, blocks))
    if len({pole.at for pole in poles}) < len(poles):
        _refuse_equal("positions", "/poles")
    symbols = tuple(name for name in problem.symbols if name not in values)
    return replace(problem, poles=tuple(poles), symbols=symbols)


def _block_at(block: Block, values: dict[str, Value], at: str) -> Block:
    terms = tuple((power, value.substitute(values)) for power, value in block.exponent.terms)
    residue = tuple(Eigenvalue(e.value.substitute(values), e.jordan) for e in block.residue)
    if len({eigenvalue.value for eigenvalue in residue}) < len(residue):
        _refuse_equal("eigenvalues", f"{at}/residue")
    exponent = Exponent(tuple(term for term in terms if term[1]))
    if exponent.ramification != block.exponent.ramification:
        message = "Under these values the ramification index of an exponent falls"
        place = Place(f"{at}/exponent", message, "values that keep coefficients of fractional powers different from 0")
        raise Refused(f"{message} (at {at}).", (place,))
    return Block(exponent, residue)


def _refuse_equal(what: str, at: str) -> None:
    message = f"Under these values two {what} become equal"
    raise Refused(f"{message} (at {at}).", (Place(at, message, f"values that keep the {what} distinct"),))
