"""Twists: tensoring with a connection of rank one, given by a scalar principal part at every pole.

The scalar part at a pole is dq + r dz/z with q a polynomial in 1/z with integer powers and r a number.  It adds q to
every exponent of the pole and r to every exponent of formal monodromy; the eigenvalue of a block with ramification
index e, being the sum of e exponents, moves by e·r.  The residues r have to add up to zero, because a connection of
rank one on the trivial bundle has residues with that sum.
"""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from fractions import Fraction

from app.exact.number import write_laurent, write_number
from app.exact.value import ZERO, Value, total
from app.local.formal_type import Block, Exponent, Pole
from app.local.problem import Problem
from app.operations.result import Result, checked, pole_at, refusal

NO_EXPONENT = Exponent()


@dataclass(frozen=True)
class ScalarPart:
    """A scalar principal part: exponent q and residue r."""

    exponent: Exponent = NO_EXPONENT
    residue: Value = ZERO


def twist(problem: Problem, parts: Mapping[int, ScalarPart]) -> Result:
    """The problem of the connections tensored with the rank-one connection that has these principal parts.

    ``parts`` gives the scalar part by pole index; where none is given it is zero.  The quiver, its parameters on the
    lattice and all verdicts stay.  Raises ``Refused`` when the residues do not add up to 0 (to an integer, where local
    monodromies are given), when an exponent has a fractional power, for an exponent where local monodromies are given,
    and when the position of a pole is a symbol that the parts use.
    Cost: one pass over the poles named.
    """
    for index, part in parts.items():
        pole_at(problem, index)
        _check_part(problem, index, part)
    defect = total(part.residue for part in parts.values())
    closed = defect.is_integer if problem.reading == "local_monodromy" else defect.is_zero
    if not closed:
        raise refusal(
            f"The residues of the twist add up to {write_number(defect)}, so it is no connection of rank one.",
            "residues with the sum 0",
        )
    poles = tuple(twisted(pole, parts[index]) if index in parts else pole for index, pole in enumerate(problem.poles))
    listed = [
        f"{written_part(problem, part)} at pole {index + 1}"
        for index, part in sorted(parts.items())
        if part.residue or not part.exponent.is_zero
    ]
    words = f"Twist by the connection of rank one with principal parts {' and '.join(listed)}."
    if not listed:
        words = "Twist by the trivial connection of rank one, which changes nothing."
    return Result(checked(replace(problem, poles=poles)), words, "The residues of the twist add up to 0.")


def twisted(pole: Pole, part: ScalarPart) -> Pole:
    """The formal type at a pole after adding a scalar part; powers in the part are integers."""
    return replace(pole, blocks=tuple(_twisted_block(block, part) for block in pole.blocks))


def sum_of_exponents(first: Exponent, second: Exponent) -> Exponent:
    """q + q'.  Cost: the number of terms."""
    terms = dict(first.terms)
    for power, coefficient in second.terms:
        terms[power] = terms.get(power, ZERO) + coefficient
    return exponent_of(terms)


def exponent_of(terms: Mapping[Fraction, Value]) -> Exponent:
    """The exponent with these coefficients by power of 1/z; zeros are left out."""
    return Exponent(tuple((power, terms[power]) for power in sorted(terms, reverse=True) if terms[power]))


def negative(exponent: Exponent) -> Exponent:
    """−q."""
    return Exponent(tuple((power, -coefficient) for power, coefficient in exponent.terms))


def written_part(problem: Problem, part: ScalarPart) -> str:
    """The scalar part as text, as a 1-form in the local coordinate z."""
    pieces = []
    if not part.exponent.is_zero:
        pieces.append(f"d({write_laurent(dict(part.exponent.terms), problem.symbols)})")
    if part.residue or not pieces:
        pieces.append(f"({write_number(part.residue, problem.symbols)}) dz/z")
    return " + ".join(pieces)


def _twisted_block(block: Block, part: ScalarPart) -> Block:
    weight = block.exponent.ramification
    residue = tuple(replace(e, value=e.value + part.residue * weight) for e in block.residue)
    return Block(sum_of_exponents(block.exponent, part.exponent), residue)


def _check_part(problem: Problem, index: int, part: ScalarPart) -> None:
    at = f"/poles/{index}"
    if any(power.denominator != 1 for power, _ in part.exponent.terms):
        raise refusal("A connection of rank one has no fractional powers.", "an exponent with integer powers", at)
    if problem.reading == "local_monodromy" and not part.exponent.is_zero:
        raise refusal("Where local monodromies are given the poles are logarithmic.", "a twist by residues alone", at)
    used = part.residue.symbols().union(*(coefficient.symbols() for _, coefficient in part.exponent.terms))
    for number, pole in enumerate(problem.poles):
        if pole.at.value is not None and not used.isdisjoint(pole.at.value.symbols()):
            raise refusal(
                f"The symbol that is the position of pole {number + 1} occurs in the twist.",
                "a symbol used for a position alone",
                at,
            )
