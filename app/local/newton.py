"""Newton polygons: slopes with multiplicities and the irregularity of a pole's formal type, exactly.

A block of exponent q, ramification index e and multiplicity m has the one slope of q with multiplicity e·m, because
all conjugates of q have the same leading power.  The polygon begins at (0, 0) and runs through the slopes in ascending
order: a slope s of multiplicity w adds the vector (w, s·w).  So it is convex, its width is the rank, its height the
irregularity, and its vertices have integer coordinates.
[Katz, Invent. Math. 87 (1987); Malgrange, Équations différentielles à coefficients polynomiaux (1991)]

These are figures of the connection itself.  Those of its endomorphisms are in ``orbit.py``; a twist by a scalar
changes the first and not the second.
"""

from fractions import Fraction

from app.local.formal_type import Pole

Vertex = tuple[int, int]


def slopes(pole: Pole) -> tuple[tuple[Fraction, int], ...]:
    """The slopes of a pole in ascending order, each with its multiplicity; multiplicities add up to the rank.

    Every formal type is meant, ramified ones too.  Cost: number of blocks.
    """
    found: dict[Fraction, int] = {}
    for block in pole.blocks:
        slope = block.exponent.slope
        found[slope] = found.get(slope, 0) + block.rank
    return tuple(sorted(found.items()))


def irregularity(pole: Pole) -> int:
    """The sum of the slopes with their multiplicities: an integer, 0 where the pole is logarithmic."""
    return newton_polygon(pole)[-1][1]


def newton_polygon(pole: Pole) -> tuple[Vertex, ...]:
    """Vertices of the Newton polygon from (0, 0) to (rank, irregularity), the slopes between them ascending.

    Every width times its slope is an integer: the ramification index is a multiple of the slope's denominator.
    """
    vertices: list[Vertex] = [(0, 0)]
    for slope, width in slopes(pole):
        across, height = vertices[-1]
        vertices.append((across + width, height + int(slope * width)))
    return tuple(vertices)
