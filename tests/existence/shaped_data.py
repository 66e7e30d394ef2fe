"""Local data of the shapes where existence is an exception: multiples of affine types, with a vertex at an end or not.

An affine type is a list of poles; a pole is a list of blocks (exponent, multiplicities of the eigenvalues).  All of
them have dimension 2, and some have several poles with core vertices.
"""

import random
from fractions import Fraction
from typing import Literal

from tests.existence.brute_force import Case, Pole, Residue

Shape = list[list[tuple[dict[int, int], list[int]]]]
End = Literal["jordan", "distinct"]

LOG_PAIR: list[tuple[dict[int, int], list[int]]] = [({}, [1, 1])]


def blocks(order: int, *parts: list[int]) -> list[tuple[dict[int, int], list[int]]]:
    """A pole whose exponents differ in the coefficient of the power ``order`` of 1/z."""
    return [({order: k + 1}, part) for k, part in enumerate(parts)]


AFFINE: dict[str, Shape] = {
    "four log poles": [LOG_PAIR] * 4,
    "order 2 and two log": [blocks(1, [1], [1]), LOG_PAIR, LOG_PAIR],
    "order 3 and log": [blocks(2, [1], [1]), LOG_PAIR],
    "order 4": [blocks(3, [1], [1])],
    "two of order 2": [blocks(1, [1], [1]), blocks(1, [1], [1])],
    "rank 3, order 3": [blocks(2, [1], [1], [1])],
    "rank 3, order 2 and log": [blocks(1, [1], [1], [1]), [({}, [1, 1, 1])]],
    "rank 3, three log poles": [[({}, [1, 1, 1])]] * 3,
}


def multiple(generator: random.Random, name: str, times: int, end: End | None, total: Fraction) -> list[Pole] | None:
    """The multiple of an affine type with random eigenvalues and the given sum of traces; None if a draw is not valid.

    With ``end`` the last class gets one more leg vertex of dimension 1: its last eigenvalue becomes one Jordan block of
    size 2 beside ``times`` − 2 of size 1, or two eigenvalues of multiplicities ``times`` − 1 and 1.
    """
    values = [Fraction(n, 4) for n in range(-4, 5)]
    found: list[Pole] = []
    for shape in AFFINE[name]:
        pole: Pole = []
        for exponent, parts in shape:
            residue: Residue = [
                (value, [1] * (times * part))
                for value, part in zip(generator.sample(values, len(parts)), parts, strict=True)
            ]
            pole.append((exponent, residue))
        found.append(pole)
    last = found[-1][-1][1]
    value, sizes = last[-1]
    if end == "jordan":
        last[-1] = (value, [2] + [1] * (times - 2))
    elif end == "distinct":
        last[-1:] = [(value, [1] * (times - 1)), (value + generator.choice(values), [1])]
    trace = sum(v * sum(sizes) for pole in found for _, block in pole for v, sizes in block)
    value, sizes = last[-1]
    last[-1] = (value + (total - trace) / sum(sizes), sizes)
    return found if len({v for v, _ in last}) == len(last) else None


def reflect(case: Case, vertices: list[int]) -> Case:
    """The reflection at a sum ε of vertices with q(ε) = 1, on α and on the parameters: λ'(β) = λ(sβ)."""
    size = len(case.alpha)

    def cartan(u: int, v: int) -> int:
        return 2 if u == v else -case.edges.get((u, v), 0)

    weights = [sum(cartan(u, v) for v in vertices) for u in range(size)]
    height = sum(n * w for n, w in zip(case.alpha, weights, strict=True))
    parameter = sum((case.parameters[v] for v in vertices), Fraction(0))
    alpha = [n - height * (v in vertices) for v, n in enumerate(case.alpha)]
    parameters = [value - parameter * w for value, w in zip(case.parameters, weights, strict=True)]
    return Case(alpha, parameters, case.edges, case.groups)


def raised(generator: random.Random, case: Case, steps: int) -> Case:
    """The case after random reflections that do not lower α: single leg vertices, and sums of one core vertex of each
    pole.  Whether α ∈ Σ is kept where the parameters of the reflections do not vanish.
    """
    core = {v for group in case.groups for v in group}
    legs = [[v] for v in range(len(case.alpha)) if v not in core]
    for _ in range(steps):
        epsilon = [generator.choice(group) for group in case.groups]
        higher = reflect(case, generator.choice([*legs, epsilon, epsilon]))
        if sum(higher.alpha) >= sum(case.alpha):
            case = higher
    return case
