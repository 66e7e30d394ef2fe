"""Structural edits."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.desk import edits
from app.desk.draft import Draft
from app.desk.fields import structure_of, with_texts
from app.desk.reading import draft_of, read_draft
from app.errors import NotFound, Refused
from app.local.shorthand import problem_from_shorthand


def draft_from(line, first_id=1):
    return draft_of(problem_from_shorthand(line), first_id)


def ids_in_order(draft):
    return list(draft.places)


def test_add_pole_to_a_problem_with_a_forced_value_stays_a_problem():
    for line in ("11,11,11", "21,111,111", "(1)(1),11", "1,1,1"):
        draft = edits.add_pole(draft_from(line))
        reading = read_draft(draft)
        assert reading.faults == (), (line, reading.faults)
        assert reading.problem is not None
        assert len(reading.problem.poles) == len(draft_from(line).poles) + 1


def test_add_pole_to_nothing():
    draft = edits.add_pole(Draft())
    assert [pole.at for pole in draft.poles] == ["infinity"]
    assert len(draft.poles[0].blocks[0].residue) == 2


def test_add_block_and_eigenvalue_use_new_names():
    draft = draft_from("11,11,11")
    symbols = set(edits.symbols_of(draft))
    pole, block = draft.poles[0], draft.poles[0].blocks[0]
    more = edits.add_eigenvalue(edits.add_block(draft, pole.id), block.id)
    assert structure_of(more).startswith("p1:b2.e3.e4.")
    new = set(edits.symbols_of(more)) - symbols
    assert len(new) == 3
    assert read_draft(more).problem is None
    assert {fault.field for fault in read_draft(more).faults} == {"pole.p1"}


def test_copied_pole_has_its_own_position_and_no_second_star():
    draft = draft_from("11,11,11")
    star_pole = draft.poles[-1]
    copied = edits.copy(draft, star_pole.id)
    twin = copied.poles[-1]
    assert twin.at not in {pole.at for pole in draft.poles}
    assert sum(e.value == "*" for pole in copied.poles for block in pole.blocks for e in block.residue) == 1
    assert read_draft(copied).faults == ()


def test_copied_block_and_eigenvalue_stand_behind():
    draft = draft_from("(1)(1),11")
    block = draft.poles[0].blocks[0]
    copied = edits.copy(draft, block.id)
    assert [b.exponent for b in copied.poles[0].blocks[:2]] == [block.exponent] * 2
    assert {fault.field for fault in read_draft(copied).faults} >= {f"block.{copied.poles[0].blocks[1].id}.exponent"}
    eigenvalue = draft.poles[1].blocks[0].residue[0]
    copied = edits.copy(draft, eigenvalue.id)
    assert [e.value for e in copied.poles[1].blocks[0].residue[:2]] == [eigenvalue.value] * 2


def test_removing_the_last_eigenvalue_takes_its_block_and_pole():
    draft = draft_from("(1)(1),11")
    first, second = draft.poles[0].blocks
    without = edits.remove(draft, first.residue[0].id)
    assert without.poles[0].blocks == (second,)
    without = edits.remove(without, second.residue[0].id)
    assert without.poles == draft.poles[1:]
    assert edits.remove(without, without.poles[0].id).poles == ()


def test_moving_goes_to_the_ends_and_no_further():
    draft = draft_from("11,11,11")
    ids = [pole.id for pole in draft.poles]
    assert [p.id for p in edits.move(draft, ids[0], 1).poles] == [ids[1], ids[0], ids[2]]
    assert [p.id for p in edits.move(draft, ids[0], -1).poles] == ids
    assert [p.id for p in edits.move(draft, ids[2], 5).poles] == ids
    eigenvalues = draft.poles[0].blocks[0].residue
    moved = edits.move(draft, eigenvalues[1].id, -1)
    assert moved.poles[0].blocks[0].residue == (eigenvalues[1], eigenvalues[0])


def test_the_base_follows_its_pole():
    draft = with_texts(draft_from("11,11,11"), {"base": " 1 "})
    ids = [pole.id for pole in draft.poles]
    assert edits.move(draft, ids[1], 1).base == "2"
    assert edits.move(draft, ids[0], 1).base == "0"
    assert edits.remove(draft, ids[0]).base == "0"
    assert edits.remove(draft, ids[1]).base == ""
    assert edits.copy(draft, ids[0]).base == "2"
    faulty = with_texts(draft, {"base": "first"})
    assert edits.remove(faulty, ids[0]).base == "first"


def test_what_is_not_there():
    draft = draft_from("11,11,11")
    for edit in (edits.remove, edits.copy, edits.add_block, edits.add_eigenvalue):
        with pytest.raises(NotFound, match="not on the desk"):
            edit(draft, "p99")
    with pytest.raises(NotFound):
        edits.add_block(draft, draft.poles[0].blocks[0].id)
    with pytest.raises(NotFound):
        edits.add_eigenvalue(draft, draft.poles[0].id)


def test_limits():
    draft = draft_from(",".join(["11"] * 64))
    for refused in (lambda: edits.add_pole(draft), lambda: edits.copy(draft, draft.poles[0].id)):
        with pytest.raises(Refused, match="64 poles"):
            refused()
    wide = draft_from("1^400,1^400,[399]1")
    for refused in (
        lambda: edits.add_eigenvalue(wide, wide.poles[0].blocks[0].id),
        lambda: edits.add_block(wide, wide.poles[0].id),
        lambda: edits.copy(wide, wide.poles[0].blocks[0].id),
    ):
        with pytest.raises(Refused, match="400"):
            refused()


EDITS = {
    "add-pole": lambda draft, entry: edits.add_pole(draft),
    "add-block": edits.add_block,
    "add-eigenvalue": edits.add_eigenvalue,
    "remove": edits.remove,
    "copy": edits.copy,
    "earlier": lambda draft, entry: edits.move(draft, entry, -1),
    "later": lambda draft, entry: edits.move(draft, entry, 1),
}


@settings(max_examples=40, deadline=None)
@given(st.lists(st.tuples(st.sampled_from(sorted(EDITS)), st.integers(0, 10**6)), max_size=12))
def test_any_sequence_keeps_ids_distinct_and_never_gives_one_twice(steps):
    draft = draft_from("(1)(1),11")
    given_ids = set(draft.places)
    for name, pick in steps:
        ids = ids_in_order(draft)
        entry = ids[pick % len(ids)] if ids else "p1"
        try:
            after = EDITS[name](draft, entry)
        except (NotFound, Refused):
            continue
        every = [i for p in after.poles for b in p.blocks for i in (b.id, *(e.id for e in b.residue))]
        every += [p.id for p in after.poles]
        assert len(every) == len(set(every)) == len(after.places)
        new = set(every) - set(draft.places)
        assert new.isdisjoint(given_ids), "an id was given twice"
        assert all(int(i[1:]) < after.next_id for i in every)
        given_ids |= new
        if name in ("earlier", "later"):
            assert sorted(every) == sorted(draft.places)
        read_draft(after)
        draft = after
