"""Quivers built by hand, after the rules for edges and nothing of the program that builds them."""

from random import Random

from app.exact.value import ZERO, Value
from app.roots.quiver import Quiver, Vertex

Block = tuple[int, ...]
"""Multiplicity, then the dimensions along the leg."""
Pole = list[Block]


def built(poles: list[Pole], base: int = 0, slopes: dict[int, int] | None = None) -> Quiver:
    """The quiver of poles given by their blocks; ``slopes`` has the slope of all q_i − q_j at a pole, else it is 1."""
    order = [base, *(k for k, pole in enumerate(poles) if k != base and len(pole) > 1)]
    core = [(k, j) for k in order for j in range(len(poles[k]))]
    vertices = [Vertex(f"{k}.{j}", "core", k, j, 0, poles[k][j][0], Value.symbol(f"c{k}_{j}")) for k, j in core]
    edges = []
    for a, (k, _) in enumerate(core):
        for b, (m, _) in enumerate(core[:a]):
            count = (slopes or {}).get(k, 1) - 1 if k == m else 1 if base in (k, m) else 0
            if count:
                edges.append((b, a, count))
    for k, pole in enumerate(poles):
        for j, block in enumerate(pole):
            for step, dimension in enumerate(block[1:], start=1):
                here = len(vertices)
                vertices.append(Vertex(f"{k}.{j}.{step}", "leg", k, j, step, dimension, ZERO))
                if step > 1:
                    edges.append((here - 1, here, 1))
                elif (k, j) in core:
                    edges.append((core.index((k, j)), here, 1))
                else:
                    edges += [(a, here, 1) for a, (m, _) in enumerate(core) if m == base]
    return Quiver(base, tuple(vertices), tuple(sorted(edges)))


def leg(length: int, top: int = 0) -> Block:
    """A block of multiplicity one more than what its leg begins with, the leg falling by one."""
    first = max(top, length)
    return (first + 1, *range(first, first - length, -1))


def random_quiver(random: Random, most_poles: int = 5, most_blocks: int = 5, most_leg: int = 9) -> Quiver:
    """Any shape: stars, rings, several poles with blocks, multiple edges, no edges between blocks."""
    poles = [
        [leg(random.choice((0, 0, 1, 2, random.randint(0, most_leg)))) for _ in range(random.randint(1, most_blocks))]
        for _ in range(random.randint(1, most_poles))
    ]
    slopes = {k: random.choice((1, 1, 2, 2, 3, 4, 8)) for k in range(len(poles))}
    return built(poles, random.randrange(len(poles)), slopes)


POINT = built([[(1,)]])
D4 = built([[(2, 1)]] * 4)
E8 = built([[(6, 5, 4, 3, 2, 1)], [(6, 4, 2)], [(6, 3)]])
TWELVE_LEGS = built([[tuple(range(100, 0, -1))]] * 12)
TRIANGLE = built([[(3, 2, 1), (2, 1), (1,)]], slopes={0: 2})
TRIANGLE_WITH_LEGS = built([[(3, 2, 1), (2, 1), (1,)], [(6, 5, 4)], [(6, 3)]], slopes={0: 2})
TWO_POLES = built([[(2, 1), (1,)], [(1,), (1,), (1,)], [(3, 2, 1)]])
KRONECKER = built([[(1,), (1,)]], slopes={0: 3})
TRIPLE = built([[(1,), (1,), (1,)]], slopes={0: 4})
SEVENFOLD = built([[(1,), (1,)]], slopes={0: 8})
APART = built([[(2, 1), (1,), (3, 2, 1)]])
LOG_BASE = built([[(4, 3, 2)], [(2, 1), (1,), (1,)], [(4, 1)]])
MANY_BLOCKS = built([[(1,)] * 60, [(1,)] * 60])
MANY_POLES = built([[(1, 1), (1,)]] * 40 + [[(2, 1)]] * 24)
MANY_LOG_POLES = built([[(5, 4, 3, 2, 1)]] * 64)
LONG_LEG = built([[leg(399)], [(400, 1)]])
FULL = built([[(1,)] * 400], slopes={0: 2})

NAMED = {
    "point": POINT, "D4": D4, "E8": E8, "twelve legs": TWELVE_LEGS, "triangle": TRIANGLE,
    "triangle with legs": TRIANGLE_WITH_LEGS, "two poles": TWO_POLES, "Kronecker": KRONECKER, "triple": TRIPLE,
    "sevenfold": SEVENFOLD, "apart": APART, "log base": LOG_BASE, "many blocks": MANY_BLOCKS,
    "many poles": MANY_POLES, "many log poles": MANY_LOG_POLES, "long leg": LONG_LEG, "full": FULL,
}  # fmt: skip
UNFOLDED = [
    "point", "D4", "E8", "triangle", "triangle with legs", "two poles", "Kronecker", "triple", "sevenfold", "apart",
    "log base",
]  # fmt: skip
