"""Whatever data comes in: a problem, or a refusal with sendable places; nothing else is ever raised."""

import copy
import json
from random import Random
from typing import Any

from hypothesis import given, settings
from hypothesis import strategies as st

from app.errors import Refused
from app.local.document import problem_from_json, read_document
from app.local.orbit import moduli_dimension, orbit_dimension
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand, to_shorthand
from app.local.writer import canonical_text
from tests.local.random_documents import random_document

KEYS = [
    "format",
    "name",
    "symbols",
    "poles",
    "base",
    "notes",
    "at",
    "blocks",
    "exponent",
    "residue",
    "local_monodromy",
    "value",
    "jordan",
    "1",
    "1/2",
    "x",
]
ODD: list[Any] = [
    None,
    True,
    False,
    0,
    -1,
    1,
    10**500,
    0.5,
    float("nan"),
    float("inf"),
    "",
    "*",
    "infinity",
    "a",
    "a+b",
    "2*",
    "i",
    "\ud800",
    "sqrt(",
    "é",
    "(" * 60,
    "1" * 500,
    "9^64^64",
    "(a+b+c)^64",
    [],
    {},
    [[]],
    [1, 1],
    ["a"],
    b"a",
    (1,),
    {1: 2},
    object(),
    "polewright-problem/1",
    "residue",
    "x" * 20_001,
    "1/0",
    "0*a",
    "t1",
    "e\u0301",
]

leaves = st.sampled_from(ODD) | st.text(max_size=5) | st.integers() | st.floats()
anything = st.recursive(
    leaves,
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.sampled_from(KEYS) | st.text(max_size=2), inner),
    max_leaves=25,
)


def examined(data: object) -> Problem | None:
    """The problem, every figure computed and written, or None after a refusal that can be sent."""
    try:
        problem = problem_from_json(data)
    except Refused as refusal:
        assert refusal.places
        json.dumps(refusal.as_json(), ensure_ascii=False).encode("utf-8")
        return None
    assert read_document(canonical_text(problem)) == problem
    assert moduli_dimension(problem) == sum(map(orbit_dimension, problem.poles)) - 2 * (problem.rank**2 - 1)
    to_shorthand(problem)
    return problem


@settings(max_examples=1000, deadline=None)
@given(anything)
def test_arbitrary_data(data: Any) -> None:
    examined(data)


def _places(data: Any) -> list[tuple[Any, Any]]:
    """All (container, key) pairs."""
    found: list[tuple[Any, Any]] = []
    waiting = [data]
    while waiting:
        here = waiting.pop()
        keys = list(here) if isinstance(here, dict) else range(len(here)) if isinstance(here, list) else []
        for key in keys:
            found.append((here, key))
            waiting.append(here[key])
    return found


def _changed(random: Random, data: dict[str, Any]) -> dict[str, Any]:
    """A document with a few parts replaced, removed, repeated, or moved."""
    for _ in range(random.randint(1, 3)):
        places = _places(data)
        if not places:
            return data
        here, key = random.choice(places)
        kind = random.randrange(4)
        if kind == 0:
            here[key] = random.choice(ODD)
        elif kind == 1:
            del here[key]
        elif kind == 2:
            there, other = random.choice(places)
            here[key] = copy.deepcopy(there[other])
        elif isinstance(here, list):
            here.insert(key, copy.deepcopy(here[key]))
        else:
            here[random.choice(KEYS)] = copy.deepcopy(here[key])
    return data


def test_documents_with_some_parts_changed() -> None:
    random = Random(20_240_601)
    accepted = sum(examined(_changed(random, random_document(random))) is not None for _ in range(4000))
    assert 100 < accepted < 3900


@settings(max_examples=1000, deadline=None)
@given(st.text() | st.text(alphabet="123(),^[] ") | st.text(alphabet="1(),"))
def test_arbitrary_shorthand(text: str) -> None:
    try:
        problem = problem_from_shorthand(text)
    except Refused as refusal:
        assert {place.at for place in refusal.places} == {"/type"}
        json.dumps(refusal.as_json(), ensure_ascii=False).encode("utf-8")
        return
    assert read_document(canonical_text(problem)) == problem
