"""Operations on the whole problem, as asked for by a form or by JSON: texts in, a result out.

    moebius   change of the variable x → (a x + b)/(c x + d)
    twist     scalar principal parts at the poles, exponents and residues, residues summing to 0
    add       a regular point as a pole
    drop      a pole that is a regular point
    vertex    everything that ``operations/offers.py`` offers at a vertex

Faults of texts are refusals with the name of the field as their place.
"""

from collections.abc import Mapping

from app.errors import NumberFault, Place, Refused
from app.exact.number import parse_laurent, parse_number
from app.exact.value import Value
from app.local.formal_type import Position
from app.local.problem import Problem
from app.operations.moebius import Moebius, change_variable
from app.operations.offers import carry_out
from app.operations.poles import add_regular_point, drop_regular_point
from app.operations.result import Result
from app.operations.twist import ScalarPart, exponent_of, twist

KINDS = ("moebius", "twist", "add", "drop")


def operated(problem: Problem, kind: str, texts: Mapping[str, str]) -> Result:
    """Carry out the operation of this kind with the given texts.

    Texts: a, b, c, d (moebius); exponent.N and residue.N for pole index N (twist); at (add); pole (drop: an index);
    vertices, separated by blanks (any key of an offer).  Raises Refused naming the field or the condition.
    """
    if kind == "moebius":
        numbers = [_number(texts, name, problem, default) for name, default in zip("abcd", "1001", strict=True)]
        return change_variable(problem, Moebius(*numbers))
    if kind == "twist":
        return twist(problem, _parts(problem, texts))
    if kind == "add":
        at = texts.get("at", "").strip()
        return add_regular_point(problem, Position(None if at == "infinity" else _number(texts, "at", problem)))
    if kind == "drop":
        return drop_regular_point(problem, _index(texts, "pole"))
    return carry_out(problem, kind, texts.get("vertices", "").split())


def _parts(problem: Problem, texts: Mapping[str, str]) -> dict[int, ScalarPart]:
    parts: dict[int, ScalarPart] = {}
    for number in range(len(problem.poles)):
        exponent, residue = texts.get(f"exponent.{number}", "").strip(), texts.get(f"residue.{number}", "").strip()
        if not exponent and not residue:
            continue
        try:
            terms = parse_laurent(exponent, set(problem.symbols)) if exponent else {}
        except NumberFault as fault:
            raise _fault(f"exponent.{number}", fault) from fault
        value = _number(texts, f"residue.{number}", problem) if residue else Value.rational(0)
        parts[number] = ScalarPart(exponent_of(terms), value)
    return parts


def _number(texts: Mapping[str, str], name: str, problem: Problem, default: str = "") -> Value:
    try:
        return parse_number(texts.get(name, "").strip() or default, set(problem.symbols))
    except NumberFault as fault:
        raise _fault(name, fault) from fault


def _index(texts: Mapping[str, str], name: str) -> int:
    text = texts.get(name, "").strip()
    if not (text.isascii() and text.isdigit() and len(text) < 4):
        raise Refused("No pole is named.", (Place(name, "this is no index of a pole", "a number from 0 on"),))
    return int(text)


def _fault(name: str, fault: NumberFault) -> Refused:
    return Refused(f"The field {name} cannot be read: {fault.message}.", (Place(name, fault.message, fault.expected),))
