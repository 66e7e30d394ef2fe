"""Template contexts: every name a template uses is given to it, and what they say is true of the findings."""

import types
import typing
from collections.abc import Iterator, Mapping
from dataclasses import fields, is_dataclass
from pathlib import Path

import pytest
from jinja2 import nodes

from app.desk.fields import structure_of
from app.desk.reading import draft_of, read_draft
from app.errors import Place
from app.existence.check import Check
from app.findings.findings import examine
from app.local.document import read_document
from app.local.shorthand import problem_from_shorthand
from app.web.certificate_words import CRITERIA
from app.web.contexts import (
    BRIEF_WORDS,
    STATUS_WORDS,
    DeskContext,
    FormContext,
    Fragment,
    HistoryContext,
    StatusContext,
    brief_of,
    descent_context,
    findings_context,
    leads_context,
)
from app.web.diagram_contexts import diagram_context
from app.web.rendering import TEMPLATES, environment, render

DEMOS = sorted((Path(__file__).parents[2] / "demo_data").glob("*.json"))
TYPES = ["1,1", "11,11,11", "21,111,111", "(1)(1),(1)(1),11", "(1)_3/2", "1^30,1^30,29 1", "22,22,22,22"]
FRAGMENTS = ("history", "status", "leads", "data", "diagram", "findings", "descent")

# what the routes give to each template
GIVEN: dict[str, dict[str, object]] = {
    "desk.html": {
        "desk": DeskContext,
        "fragments": dict[str, Fragment],
        "large": bool,
        "document_text": str,
        "document_faults": tuple[Place, ...],
    },
    "help.html": {"large": bool},
    "certificate.html": {"checked": list[tuple[str, tuple[Check, ...]]], "large": bool},
    "error.html": {"status": int, "kind": str, "message": str, "places": tuple[Place, ...], "reference": str},
} | {f"desk_{name}.html": {"desk": DeskContext} for name in FRAGMENTS}


def desk_of(problem) -> DeskContext:
    draft = draft_of(problem)
    findings = examine(problem)
    return DeskContext(
        form=FormContext(draft, structure_of(draft), 1, {}),
        history=HistoryContext(True, False),
        status=StatusContext(brief_of(findings), "", "", 0, "", False),
        findings=findings_context(findings),
        diagram=diagram_context(findings),
        descent=descent_context(findings),
        leads=leads_context(findings),
        demos=(),
    )


def _problems() -> Iterator[object]:
    for path in DEMOS:
        yield pytest.param(read_document(path.read_bytes()), id=path.stem)
    for shorthand in TYPES:
        yield pytest.param(problem_from_shorthand(shorthand), id=shorthand)


PROBLEMS = list(_problems())


# --- the contract


class Names:
    """Walks a template with the types of its names; ``faults`` lists attributes that do not exist."""

    def __init__(self, given: Mapping[str, object]) -> None:
        self.types = dict(given)
        self.faults: list[str] = []
        self.used: set[tuple[type, str]] = set()

    def visit(self, node: nodes.Node) -> None:
        match node:
            case nodes.For(target=target, iter=iterated, body=body, else_=other):
                self.visit(iterated)
                self.bind(target, element_of(self.type_of(iterated)))
                for child in [*body, *other]:
                    self.visit(child)
            case nodes.Assign(target=nodes.Name(name=name), node=value):
                self.visit(value)
                self.types[name] = self.type_of(value)
            case nodes.Getattr():
                self.visit(node.node)
                self.type_of(node)
            case _:
                for child in node.iter_child_nodes():
                    self.visit(child)

    def bind(self, target: nodes.Node, kind: object) -> None:
        if isinstance(target, nodes.Name):
            self.types[target.name] = kind
        else:
            parts = typing.get_args(kind) or [None] * len(target.items)
            for item, part in zip(target.items, parts, strict=True):
                self.bind(item, part)

    def type_of(self, node: nodes.Node) -> object:
        """The type of an expression, None where it is not known."""
        match node:
            case nodes.Name(name=name):
                return self.types.get(name)
            case nodes.Getattr(node=inner, attr=attribute):
                return self.attribute(self.type_of(inner), attribute)
            case nodes.Getitem(node=inner, arg=nodes.Slice()):
                return self.type_of(inner)
        return None

    def attribute(self, kind: object, name: str) -> object:
        kind = without_none(kind)
        if typing.get_origin(kind) is dict:
            return typing.get_args(kind)[1]
        if not (isinstance(kind, type) and is_dataclass(kind)):
            return None
        self.used.add((kind, name))
        hints = typing.get_type_hints(kind)
        if name in hints:
            return hints[name]
        found = getattr(kind, name, None)
        if found is None:
            self.faults.append(f"{kind.__name__} has no {name}")
            return None
        return typing.get_type_hints(found.fget).get("return") if isinstance(found, property) else None


def without_none(kind: object) -> object:
    if typing.get_origin(kind) in (typing.Union, types.UnionType):
        (kind,) = (part for part in typing.get_args(kind) if part is not type(None))
    return kind


def element_of(kind: object) -> object:
    kind = without_none(kind)
    return typing.get_args(kind)[0] if typing.get_origin(kind) in (tuple, list) else None


def tree_of(template: str) -> nodes.Template:
    return environment().parse((TEMPLATES / template).read_text(encoding="utf-8"))


def walked(template: str) -> Names:
    names = Names(GIVEN[template])
    names.visit(tree_of(template))
    return names


def test_every_part_of_the_desk_has_a_contract():
    assert {path.name for path in TEMPLATES.glob("desk*.html")} <= set(GIVEN)


@pytest.mark.parametrize("template", sorted(GIVEN))
def test_names_and_attributes_are_given(template):
    from jinja2.meta import find_undeclared_variables

    given = set(GIVEN[template]) | ({"fragments"} if template == "desk.html" else set())
    assert find_undeclared_variables(tree_of(template)) <= given
    assert walked(template).faults == []


def test_the_contract_can_fail():
    names = Names({"desk": DeskContext})
    names.visit(environment().parse("{% for v in desk.findings.verdicts %}{{ v.answer }}{{ v.aanswer }}{% endfor %}"))
    assert names.faults == ["VerdictContext has no aanswer"]


def test_nothing_is_given_that_no_template_uses():
    used = set().union(*(walked(template).used for template in GIVEN))
    contexts = {kind for kind, _ in used if kind.__module__ in ("app.web.contexts", "app.web.diagram_contexts")}
    # what macros and conditions reach under other names
    known = {(Fragment, "html"), (Fragment, "mark")}
    missing = {(kind.__name__, f.name) for kind in contexts for f in fields(kind) if (kind, f.name) not in used | known}
    assert missing == set()


@pytest.mark.parametrize("problem", PROBLEMS)
def test_every_state_renders(problem):
    """StrictUndefined raises at any name that is missing in some branch."""
    desk = desk_of(problem)
    for name in FRAGMENTS:
        assert "Undefined" not in render(f"desk_{name}.html", desk=desk)


# --- what they say


def test_every_status_and_criterion_has_words():
    from app.existence.verdict import Criterion, Status

    assert set(STATUS_WORDS) == set(BRIEF_WORDS) == set(typing.get_args(Status))
    assert set(CRITERIA) == set(typing.get_args(Criterion))


def test_every_status_is_explained_in_the_help():
    text = render("help.html", large=False)
    assert all(f'id="{status}"' in text for status in STATUS_WORDS)


def answers(shorthand: str) -> list[tuple[str, str]]:
    context = findings_context(examine(problem_from_shorthand(shorthand)))
    return [(verdict.outcome, verdict.answer) for verdict in context.verdicts]


def test_answers_are_sentences():
    assert answers("21,111,111") == [
        ("yes", "An irreducible system exists; it is rigid."),
        ("yes", "An irreducible local system exists; it is rigid."),
    ]
    assert answers("(1)(1),11,11") == [("yes", "An irreducible system exists; it moves in a family of dimension 2.")]
    assert answers("21,21,21")[0] == ("no", "No irreducible system exists.")


def test_a_criterion_is_not_called_a_fact():
    found = [
        verdict
        for shorthand in ("(1^9)(1^9),(1^9)(1^9),1^18", "(1^12)(1^12),(1^12)(1^12),1^24,1^24")
        for verdict in findings_context(examine(problem_from_shorthand(shorthand))).verdicts
        if verdict.status == "criterion"
    ]
    assert found
    assert all(verdict.answer.startswith("By a criterion that is not proved, ") for verdict in found)


@pytest.mark.parametrize("problem", PROBLEMS)
def test_brief_answers_agree_with_the_verdicts(problem):
    findings = examine(problem)
    briefs, context = brief_of(findings), findings_context(findings)
    assert [b.question for b in briefs] == [v.question for v in context.verdicts]
    assert [b.outcome for b in briefs] == [v.outcome for v in context.verdicts]
    for brief, verdict in zip(briefs, context.verdicts, strict=True):
        assert ("rigid" in brief.answer) == ("rigid" in verdict.answer)


@pytest.mark.parametrize("problem", PROBLEMS)
def test_a_decomposition_shows_sums_that_refute(problem):
    for verdict in findings_context(examine(problem)).verdicts:
        for line in verdict.certificate:
            if line.startswith("their p add up to"):
                total, whole = (int(word.strip(",")) for word in line.split() if word.strip(",").isdigit())
                assert total >= whole


def test_long_lists_are_shortened_and_say_so():
    context = desk_of(problem_from_shorthand("1^30,1^30,29 1"))
    assert context.findings is not None and context.diagram is not None and context.descent is not None
    listed = sum(vertex.left_out or 1 for vertex in context.diagram.vertices)
    assert listed == 1 + 29 + 29 + 1
    entry = context.findings.scheme[0].entries[0]
    assert len(entry.eigenvalues) + entry.left_out == 30
    steps = context.descent
    assert len(steps.steps) + len(steps.further) + steps.left_out == 29


def test_what_a_vertex_stands_for():
    context = diagram_context(examine(problem_from_shorthand("1111,1111,22")))
    meanings = {vertex.id: vertex.stands_for for vertex in context.vertices}
    assert meanings["0.0"] == "pole 1"
    assert meanings["1.0.1"] == "rank of (L − ξ₁) at pole 2"
    assert meanings["1.0.2"] == "rank of (L − ξ₁)(L − ξ₂) at pole 2"
    assert meanings["1.0.3"] == "rank of (L − ξ₁)…(L − ξ₃) at pole 2"


def test_blocks_with_faults_stand_open():
    from dataclasses import replace

    draft = draft_of(problem_from_shorthand("1^30,1^30,29 1"))
    pole = draft.poles[1]
    block = pole.blocks[0]
    broken = replace(block, residue=(*block.residue[:-1], replace(block.residue[-1], value="2*")))
    draft = replace(draft, poles=(draft.poles[0], replace(pole, blocks=(broken,)), draft.poles[2]))
    faults = {fault.field: fault for fault in read_draft(draft).faults}
    assert FormContext(draft, structure_of(draft), 1, faults).open_blocks == {block.id}


def test_what_leads_to_other_pages_is_the_problem_itself():
    problem = problem_from_shorthand("21,111,111")
    leads = leads_context(examine(problem))
    assert leads is not None and read_document(leads.document) == problem


def test_what_leads_on_from_ramified_data_says_that_they_are_ramified():
    leads = leads_context(examine(problem_from_shorthand("(1)_3/2")))
    assert leads is not None and leads.ramified


@pytest.mark.parametrize("shorthand", [",".join(["1^60"] * 10), "1^300,1^300,299 1"])
def test_nothing_leads_on_from_large_problems(shorthand):
    assert leads_context(examine(problem_from_shorthand(shorthand))) is None
