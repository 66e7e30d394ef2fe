"""The descent as problems: every stage has the same dimension and verdict, and ranks fall as the reduction says."""

import pytest

from app.errors import Refused
from app.findings.findings import examine
from app.local.shorthand import problem_from_shorthand
from app.operations.playing import play

TYPES = [
    "21,111,111",
    "1^5,1^5,41",
    "42,222,1^6",
    "(1)(1)(1),21",
    "(11)(1),111",
    "31,22,22,1111",
    "21,21,21,21",
    "(1)(1),(1)(1),11",
]


@pytest.mark.parametrize("shorthand", TYPES)
def test_stages_keep_dimension_and_verdict(shorthand: str) -> None:
    problem = problem_from_shorthand(shorthand)
    first = examine(problem)
    played = play(problem)
    assert first.additive is not None
    ranks = [stage.problem.rank for stage in played.stages]
    assert ranks == sorted(set(ranks), reverse=True)
    for stage in played.stages[1:]:
        findings = examine(stage.problem)
        assert findings.additive is not None
        assert (findings.dimension, findings.additive.exists) == (first.dimension, first.additive.exists)
        assert stage.words
    if first.root_class == "real":
        assert ranks[-1] == 1 and played.end == "The rank is 1."
    assert ranks[1:] == [step.rank for step in first.descent]


def test_a_vanishing_parameter_ends_the_play_with_its_reason() -> None:
    from app.local.document import problem_from_json

    poles = [
        {"at": str(k), "blocks": [{"exponent": {}, "residue": [{"value": v, "jordan": [1]} for v in pair]}]}
        for k, pair in enumerate((("1", "0"), ("2", "0"), ("-3", "0")))
    ]
    document = {"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles}
    played = play(problem_from_json(document))
    assert len(played.stages) == 1 and "λ(ε)" in played.end


def test_ramified_data_are_refused() -> None:
    from app.local.document import problem_from_json

    block = {"exponent": {"3/2": "1"}, "residue": [{"value": "0", "jordan": [1]}]}
    poles = [{"at": "infinity", "blocks": [block]}]
    problem = problem_from_json({"format": "polewright-problem/1", "name": "", "symbols": [], "poles": poles})
    with pytest.raises(Refused):
        play(problem)
