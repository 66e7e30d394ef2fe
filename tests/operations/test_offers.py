"""Operations offered at a vertex: by name, with a condition that is kept exactly when the operation goes through."""

import random

import pytest

from app.errors import Refused
from app.existence.problems import local_monodromy_problem
from app.local.shorthand import problem_from_shorthand
from app.operations.offers import MOST_EPSILONS, all_operations, carry_out
from app.roots.build import quiver_of
from tests.operations.random_problems import random_problem


def test_offers_at_a_leg_vertex() -> None:
    problem = problem_from_shorthand("(1)(1)(1),111")
    offers = {offer.key: offer for offer in all_operations(problem, "1.0.1")}
    assert set(offers) == {"exchange", "first", "base", "reading"}
    assert offers["exchange"].holds and offers["first"].holds and offers["base"].holds
    assert not offers["reading"].holds and "already" in offers["reading"].words
    assert "reading" not in {offer.key for offer in all_operations(problem, "1.0.2")}
    moved = carry_out(problem, "first", ["1.0.2"]).problem.poles[1].blocks[0].residue
    assert moved[0] == problem.poles[1].blocks[0].residue[2]


def test_offers_at_a_core_vertex() -> None:
    problem = problem_from_shorthand("(1)(1)(1),111")
    offers = {offer.key: offer for offer in all_operations(problem, "0.1")}
    assert set(offers) == {"reflect", "normalise", "base", "reading"}
    assert offers["reading"].holds and not offers["base"].holds
    assert carry_out(problem, "reading", ["0.1"]).problem.rank == 2
    normal = carry_out(problem, "normalise", ["0.1"]).problem.poles[0].blocks[1]
    assert normal.exponent.is_zero and not normal.residue[0].value
    assert "middle convolution" in offers["reflect"].words


def test_every_epsilon_through_the_vertex_is_offered() -> None:
    problem = problem_from_shorthand("(1)(1)(1),(1)(1)(1),(2)(1)")
    offers = [offer for offer in all_operations(problem, "1.2") if offer.key == "reflect"]
    assert len({offer.vertices for offer in offers}) == 6
    assert all("1.2" in offer.vertices for offer in offers)
    many = problem_from_shorthand("(1)(1)(1)(1)(1),(1)(1)(1)(1)(1),(1)(1)(1)(1)(1)")
    assert sum(offer.key == "reflect" for offer in all_operations(many, "0.0")) == MOST_EPSILONS


@pytest.mark.parametrize("seed", range(5))
def test_holds_means_that_it_goes_through(seed: int) -> None:
    generator = random.Random(seed)
    seen = set()
    for _ in range(6):
        problem = random_problem(generator, generic=False)
        for vertex in quiver_of(problem).vertices:
            for offer in all_operations(problem, vertex.id):
                seen.add(offer.holds)
                assert offer.condition.endswith(".") and offer.words.endswith(".")
                if offer.holds:
                    assert carry_out(problem, offer.key, offer.vertices).words == offer.words
                else:
                    with pytest.raises(Refused):
                        carry_out(problem, offer.key, offer.vertices)
    assert seen == {True, False}


def test_refusals() -> None:
    problem = problem_from_shorthand("11,11,11")
    for key, vertices in (("unknown", ["0.0"]), ("base", []), ("base", ["9.9"]), ("exchange", ["0.0.5"])):
        with pytest.raises(Refused):
            carry_out(problem, key, vertices)
    with pytest.raises(Refused) as refused:
        all_operations(problem, "0.9")
    assert "no vertex" in refused.value.message


def test_local_monodromies_have_offers_too() -> None:
    problem = local_monodromy_problem(problem_from_shorthand("21,111,111"))
    offers = {offer.key: offer for offer in all_operations(problem, "0.0")}
    assert offers["reflect"].holds and offers["normalise"].holds
    assert not offers["reading"].holds and "residues" in offers["reading"].words
