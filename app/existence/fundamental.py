"""What can still forbid existence when α lies in the fundamental set.

Three shapes, each giving an explicit decomposition of α into positive roots whose p reach p(α):

    (I)    α = mδ is a multiple of an isotropic root
    (II)   a bridge with dimension 1 at both ends
    (III)  a bridge with dimension 1 at one end and a multiple mδ of an affine root behind the other

Sources: Crawley-Boevey, Compositio Math. 126 (2001), Theorem 8.1, for the additive problem with one pole that has core
vertices; for the multiplicative one Crawley-Boevey and Shaw, Adv. Math. 201 (2006).
"""

from collections.abc import Callable
from dataclasses import dataclass

from app.exact.value import Value
from app.existence.verdict import Criterion
from app.roots.form import (
    bridges,
    component,
    content,
    in_lattice,
    p_of,
    pairing_with,
    restrict,
    support,
)
from app.roots.quiver import Quiver, Vector

Edge = tuple[int, int]


@dataclass(frozen=True)
class Obstruction:
    """A decomposition of the reduced vector as (multiplicity, vector), and the shape that gave it."""

    parts: tuple[tuple[int, Vector], ...]
    criterion: Criterion


def order_of(value: Value, *, modulo_integers: bool) -> int | None:
    """The least r ≥ 1 for which r·value vanishes (or is an integer); None if there is none."""
    if value.is_zero:
        return 1
    rational = value.as_rational() if modulo_integers else None
    return rational.denominator if rational is not None else None


def obstruction(
    quiver: Quiver, vector: Vector, value_on: Callable[[Vector], Value], *, modulo_integers: bool
) -> Obstruction | None:
    """The first of the shapes (I), (II), (III) that applies to a vector of the fundamental set, or None.

    ``value_on`` gives λ on a vector.  Hypotheses: λ·α vanishes, the support is connected, (α, ε) ≤ 0 for every ε and
    (α, e_v) ≤ 0 on the legs.
    Cost: the number of edges, for every bridge that ends in dimension 1.
    """
    found = _multiple(quiver, vector, value_on, modulo_integers)
    if found is not None:
        return found
    ends = [edge for edge in bridges(quiver, support(vector)) if 1 in (vector[edge[0]], vector[edge[1]])]
    return _bridge(quiver, vector, ends, value_on, modulo_integers) or _affine_end(
        quiver, vector, ends, value_on, modulo_integers
    )


def _multiple(quiver: Quiver, vector: Vector, value_on: Callable[[Vector], Value], modulo: bool) -> Obstruction | None:
    multiple = content(vector)
    if multiple < 2 or p_of(quiver, vector) != 1:
        return None
    delta = tuple(n // multiple for n in vector)
    order = order_of(value_on(delta), modulo_integers=modulo)
    if order is None or order >= multiple:
        return None
    part = tuple(n * order for n in delta)
    return Obstruction(((multiple // order, part),), "multiple of an isotropic root")


def _bridge(
    quiver: Quiver, vector: Vector, ends: list[Edge], value_on: Callable[[Vector], Value], modulo: bool
) -> Obstruction | None:
    whole = support(vector)
    for j, k in ends:
        if vector[j] == 1 and vector[k] == 1:
            side = _side(quiver, whole, j, k)
            ours, rest = restrict(vector, side), restrict(vector, whole - side)
            if not in_lattice(quiver, ours):
                continue
            if order_of(value_on(ours), modulo_integers=modulo) == 1:
                return Obstruction(((1, ours), (1, rest)), "bridge")
    return None


def _affine_end(
    quiver: Quiver, vector: Vector, ends: list[Edge], value_on: Callable[[Vector], Value], modulo: bool
) -> Obstruction | None:
    whole = support(vector)
    for edge in ends:
        for j, k in (edge, edge[::-1]):
            multiple = vector[k]
            # behind the bridge α pairs to 0 with k only if α itself pairs to −α_j; the look saves a walk
            if vector[j] != 1 or multiple < 2 or pairing_with(quiver, vector, k) != -1:
                continue
            side = _side(quiver, whole, k, j)
            behind = restrict(vector, side)
            if content(behind) != multiple or any(pairing_with(quiver, behind, v) for v in side):
                continue
            delta = tuple(n // multiple for n in behind)
            rest = restrict(vector, whole - side)
            if not (in_lattice(quiver, delta) and in_lattice(quiver, rest)):
                continue
            if order_of(value_on(delta), modulo_integers=modulo) == 1:
                return Obstruction(((multiple, delta), (1, rest)), "affine end")
    return None


def _side(quiver: Quiver, whole: frozenset[int], inside: int, outside: int) -> frozenset[int]:
    """The vertices on the inside of a bridge."""
    return component(quiver, inside, whole - {outside})
