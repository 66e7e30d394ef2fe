"""Ramified types whose dimension is published, and the diagram's form on them.

Slopes of rank-2 types are those of q_1 − q_2.  A name "from memory" was not compared with the paper; its dimension
is worked out by hand where it is not a standard fact.
"""

from collections import Counter
from itertools import combinations_with_replacement

import pytest

from app.local.newton import irregularity
from app.local.orbit import irregularity_of_endomorphisms, moduli_dimension, rigidity_index
from app.local.shorthand import problem_from_shorthand
from app.roots.orbit_diagram import orbit_diagram

# Ohyama and Okumura, J. Phys. A 39 (2006): the ramified types among the ten of rank 2 and dimension 2
PAINLEVE = {
    "I": "(1)_5/2",
    "34": "(1)_3/2,11",
    "degenerate V": "(1)_1/2,11,11",
    "III(D7)": "(1)_1/2,(1)(1)",
    "III(D8)": "(1)_1/2,(1)_1/2",
}
# degenerate Garnier systems in two variables, from memory: Kawamuko, Funkcial. Ekvac. 52 (2009);
# Kawakami, Four-dimensional Painlevé-type equations associated with ramified linear equations III
GARNIER = [
    "(1)_7/2", "(1)_5/2,11", "(1)_3/2,11,11", "(1)_1/2,11,11,11", "(1)_3/2,(1)(1)", "(1)_3/2,(1)_1/2",
    "(1)_1/2,((1))((1))", "(1)_1/2,(1)(1),11", "(1)_1/2,(1)_1/2,11",
]  # fmt: skip
# matrix Painlevé systems with ramified poles, from memory: Kawakami, part I; dimension by hand, e.g. the first:
# Irr(End) = 4·2·(5/2) = 20, orbit 20 + 16 − 2 = 34, 34 − 30 = 4
MATRIX = [
    "(11)_5/2", "(11)_3/2,22", "(2)_3/2,211", "(11)_1/2,22,22", "(2)_1/2,211,22",
    "(11)_1/2,(2)(2)", "(2)_1/2,(11)(2)", "(11)_1/2,(2)_1/2",
]  # fmt: skip
# order 3, dimension by hand: a pole with one Galois orbit of slope r/3 has Irr(End) = 2r and dimension 2r + 8, one with
# an orbit of slope s = k/2 and an exponent 0 has Irr(End) = 2s + 4s and dimension 6s + 7
ORDER_THREE = {
    "(1)_1/3,111": 0, "(1)_2/3,21": 0, "(1)_4/3": 0,
    "(1)_5/3": 2, "(1)_2/3,111": 2, "(1)_1/3,21,21": 2, "(1)_1/3,(1)(2)": 2,
    "(1)_4/3,21": 4, "(1)_2/3,21,21": 4, "(1)_1/3,(1)(11)": 4, "(1)_2/3,(1)_2/3": 8,
    "(1)_1/2(1)_0,111": 0, "(1)_3/2(1)_0,21": 4,
}  # fmt: skip


def dimension(shorthand: str) -> int:
    """The dimension by the rigidity index and by the diagram, which have to agree."""
    problem = problem_from_shorthand(shorthand)
    diagram = orbit_diagram(problem)
    by_form = 2 - diagram.form(diagram.dimension)
    assert by_form == moduli_dimension(problem) == 2 - rigidity_index(problem)
    return by_form


@pytest.mark.parametrize("name", PAINLEVE)
def test_ramified_painleve_types_have_dimension_two(name: str) -> None:
    assert dimension(PAINLEVE[name]) == 2


@pytest.mark.parametrize("shorthand", [*GARNIER, *MATRIX])
def test_ramified_types_of_dimension_four(shorthand: str) -> None:
    assert dimension(shorthand) == 4


@pytest.mark.parametrize("shorthand", ORDER_THREE)
def test_types_of_order_three(shorthand: str) -> None:
    assert dimension(shorthand) == ORDER_THREE[shorthand]


def poles_of_weight(weight: int) -> list[str]:
    """Poles of rank 2 by weight, common practice: log 2; order k + 1 or slope k − 1/2: 2(k + 1)."""
    if weight == 2:
        return ["11"]
    k = weight // 2 - 1
    return ["(" * k + "1" + ")" * k + "(" * k + "1" + ")" * k, f"(1)_{2 * k - 1}/2"]


@pytest.mark.parametrize(("total", "types", "ramified"), [(6, 5, 2), (8, 10, 5), (10, 16, 9)])
def test_the_lists_of_rank_two_are_complete(total: int, types: int, ramified: int) -> None:
    """Weights adding up to 6: rigid; 8: the ten Painlevé types; 10: the sixteen two-variable Garnier types."""
    kinds = [(w, p) for w in range(2, total + 1, 2) for p in poles_of_weight(w)]
    found = [
        ",".join(p for _, p in chosen)
        for count in range(1, total // 2 + 1)
        for chosen in combinations_with_replacement(kinds, count)
        if sum(w for w, _ in chosen) == total
    ]
    assert len(found) == types and sum("_" in text for text in found) == ramified
    assert {dimension(text) for text in found} == {total - 6}
    listed = {6: ["(1)_3/2", "11,(1)_1/2"], 8: list(PAINLEVE.values()), 10: GARNIER}[total]
    assert {frozenset(Counter(text.split(",")).items()) for text in found if "_" in text} == {
        frozenset(Counter(text.split(",")).items()) for text in listed
    }


@pytest.mark.parametrize("order", range(2, 9))
def test_generalised_airy_equations_are_rigid(order: int) -> None:
    """y^(n) = x·y has slope (n + 1)/n at infinity [Katz, Ann. of Math. Studies 124 (1990)]."""
    airy = f"(1)_{order + 1}/{order}"
    assert dimension(airy) == 0
    (pole,) = problem_from_shorthand(airy).poles
    assert irregularity(pole) == order + 1
    assert irregularity_of_endomorphisms(pole) == (order + 1) * (order - 1)


@pytest.mark.parametrize("order", range(2, 9))
def test_kloosterman_equations_are_rigid(order: int) -> None:
    """Slope 1/n with one log pole of one Jordan block: Bessel for n = 2 [Katz 1990; Frenkel and Gross 2009]."""
    assert dimension(f"(1)_1/{order}," + "1" * order) == 0
