"""Change of the base pole, and regular points listed as poles or no longer listed.

A *regular point* of the problem is a listed pole at which the connection has no principal part at all: one block with
exponent 0 whose class is the zero matrix (local monodromy 1, where local monodromies are given).  Listing one or
leaving one out changes no connection.  Such a point is not an apparent singularity in the wide sense, where residues
with integer eigenvalues and trivial monodromy are allowed: those have an orbit of positive dimension and stay.
A pole with a scalar principal part becomes regular by a twist that moves the scalar to another pole.
"""

from dataclasses import replace

from app.exact.value import ZERO
from app.local.formal_type import Block, Eigenvalue, Exponent, Pole, Position
from app.local.limits import MAXIMUM_POLES
from app.local.problem import Problem
from app.operations.result import Result, checked, pole_at, refusal, values_of, with_base_kept
from app.roots.build import base_pole


def change_base(problem: Problem, pole: int) -> Result:
    """The same connections, with another base pole for the quiver.

    The base pole has a core vertex for every block.  p(α) and the verdicts stay; with other core vertices the quiver
    is another one in general.  Raises ``Refused`` when there is no such pole.
    """
    pole_at(problem, pole)
    words = f"The connection stays; the quiver is drawn with pole {pole + 1} as its base pole."
    return Result(replace(problem, base=pole), words)


def add_regular_point(problem: Problem, at: Position) -> Result:
    """List a regular point as a further pole, with exponent 0 and residue 0, after all others.

    Raises ``Refused`` when there is a pole at this position, the position is an expression in symbols or a symbol that
    occurs in another number, or the number of poles is at its limit.
    """
    if len(problem.poles) >= MAXIMUM_POLES:
        raise refusal(f"There are {MAXIMUM_POLES} poles, which is the limit.")
    if any(pole.at == at for pole in problem.poles):
        raise refusal("There is a pole at this position.", "a position other than those of the poles")
    if at.value is not None and at.value.symbols():
        (name, *others) = at.value.symbols()
        if others or at.value != at.value.symbol(name):
            raise refusal("A position is a number without symbols, infinity, or one symbol alone.")
        if any(name in value.symbols() for pole in problem.poles for value in values_of(pole)):
            raise refusal(f"The symbol {name} also occurs in another number.", "a symbol used for this position alone")
    base = base_pole(problem)
    regular = Pole(at, (Block(Exponent(), (Eigenvalue(ZERO, (1,) * problem.rank),)),))
    problem = with_base_kept(replace(problem, poles=(*problem.poles, regular)), base)
    return Result(checked(problem), "The connection stays; a regular point is listed as a pole with residue 0.")


def drop_regular_point(problem: Problem, pole: int) -> Result:
    """Leave out a listed pole at which the connection is regular.

    Raises ``Refused`` when the principal part there is not zero, or it is the only pole left.  A base pole that is left
    out is followed by the default choice.
    """
    left_out = pole_at(problem, pole)
    if len(problem.poles) == 1:
        raise refusal("It is the only pole listed, and a problem lists at least one.")
    if not is_regular(problem, pole):
        scalar = len(left_out.blocks) == 1 and len(left_out.blocks[0].residue) == 1
        semisimple = scalar and set(left_out.blocks[0].residue[0].jordan) == {1}
        hint = "; a twist can move this scalar to another pole" if semisimple and not left_out.ramified else ""
        raise refusal(
            f"The principal part at pole {pole + 1} is not zero{hint}.",
            "a pole with exponent 0 and residue 0",
            f"/poles/{pole}",
        )
    base, forced = base_pole(problem), problem.forced
    if forced is not None:
        forced = None if forced.pole == pole else replace(forced, pole=forced.pole - (forced.pole > pole))
    poles = (*problem.poles[:pole], *problem.poles[pole + 1 :])
    dropped = replace(problem, poles=poles, forced=forced, base=None, symbols=_still_used(problem, pole))
    if base != pole:
        dropped = with_base_kept(dropped, base - (base > pole))
    return Result(
        dropped,
        f"The connection stays; pole {pole + 1} is regular and no longer listed.",
        "The pole has exponent 0 and residue 0.",
    )


def is_regular(problem: Problem, pole: int) -> bool:
    """Whether the connection has no principal part at this listed pole (monodromy 1, where monodromies are given)."""
    block, *others = problem.poles[pole].blocks
    if others or not block.exponent.is_zero or len(block.residue) != 1 or max(block.residue[0].jordan) > 1:
        return False
    value = block.residue[0].value
    return value.is_integer if problem.reading == "local_monodromy" else value.is_zero


def _still_used(problem: Problem, pole: int) -> tuple[str, ...]:
    """The symbols without the open position that is left out."""
    position = problem.poles[pole].at.value
    gone = position.symbols() if position is not None else frozenset()
    return tuple(name for name in problem.symbols if name not in gone)
