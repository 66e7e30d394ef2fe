"""Problem → JSON document, always in canonical form, so that equal problems give equal bytes."""

import json

from app.exact.number import write_number
from app.local.document_types import BlockDocument, EigenvalueDocument, PoleDocument, ProblemDocument
from app.local.formal_type import Block, Pole, Position
from app.local.problem import Problem


def document(problem: Problem) -> ProblemDocument:
    """The problem as a document of plain data, keys in canonical order, numbers in canonical form."""
    written: ProblemDocument = {
        "format": "polewright-problem/1",
        "name": problem.name,
        "symbols": list(problem.symbols),
        "poles": [_pole(problem, index, pole) for index, pole in enumerate(problem.poles)],
    }
    if problem.base is not None:
        written["base"] = problem.base
    if problem.notes:
        written["notes"] = problem.notes
    return written


def canonical_text(problem: Problem) -> str:
    """The document as text: one line of JSON with a final newline; reads back to an equal problem.

    Being one line, canonical documents one after the other are JSON Lines.
    """
    return json.dumps(document(problem), ensure_ascii=False) + "\n"


def _pole(problem: Problem, index: int, pole: Pole) -> PoleDocument:
    blocks = [_block(problem, (index, number), block) for number, block in enumerate(pole.blocks)]
    return {"at": _position(problem, pole.at), "blocks": blocks}


def _position(problem: Problem, position: Position) -> str:
    return "infinity" if position.value is None else write_number(position.value, problem.symbols)


def _block(problem: Problem, place: tuple[int, int], block: Block) -> BlockDocument:
    symbols = problem.symbols
    exponent: dict[str, str | int] = {str(power): write_number(value, symbols) for power, value in block.exponent.terms}
    forced = problem.forced
    chosen = forced.eigenvalue if forced is not None and (forced.pole, forced.block) == place else None
    eigenvalues: list[EigenvalueDocument] = [
        {
            "value": "*" if number == chosen else write_number(eigenvalue.value, symbols),
            "jordan": list(eigenvalue.jordan),
        }
        for number, eigenvalue in enumerate(block.residue)
    ]
    if problem.reading == "local_monodromy":
        return {"exponent": exponent, "local_monodromy": eigenvalues}
    return {"exponent": exponent, "residue": eigenvalues}
