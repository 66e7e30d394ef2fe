"""Formal reduction at an unramified pole: the normalising gauge, up to the order that the principal part needs.

With B(z) = z^(r+1) A = B_0 + B_1 z + … + B_r z^r (so B_k = A_(r−k)), a gauge g(z) acts by conjugation modulo z^(r+1):
its derivative is holomorphic.  The normal form is Λ = ⊕ (scalar polynomial of dq_j + z^r L_j).

Splitting: B_0 must be semisimple with the leading coefficients as eigenvalues; after a constant gauge it is a scalar on
every group of blocks, and then (1 + X z^k) with X_ab = B_k,ab / (v_a − v_b) removes what couples the groups at order
k.  Inside a group the leading coefficient is a scalar and drops out, so r falls by one.  At the end stand the L_j.

Source: the classical reduction, e.g. Wasow, Asymptotic expansions for ordinary differential equations (1965), §§ 11–12.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Generic

from app.connection.realisation import M
from app.connection.stages import Coefficients, principal_scalars
from app.exact.quotient import Quotient
from app.exact.value import ZERO, Value


@dataclass(frozen=True)
class Reduced(Generic[M]):
    """The gauge g_0 + g_1 z + … (A = g Λ g^(−1) as principal parts), the L_j by block, and the normal form Λ.

    ``columns`` says which columns of the gauge belong to which block.
    """

    gauge: tuple[M, ...]
    residues: tuple[M, ...]
    normal: tuple[M, ...]
    columns: tuple[range, ...]


def formal_reduction(part: Sequence[M], exponents: Sequence[Coefficients], sizes: Sequence[int]) -> Reduced[M]:
    """The reduction of a principal part with these exponents and multiplicities, blocks in the given order.

    Exact kernels raise NotTheRank where some leading coefficient is not semisimple with the eigenvalues that the
    exponents say; what is left undecided (are the L_j in their classes, are scalars what they should be) is seen by
    comparing with ``normal`` and by looking at the residues.
    Cost: r² products of n × n matrices and an inverse for each level of splitting.
    """
    order = max((exponent[0][0] for exponent in exponents if exponent), default=0)
    zero = part[0].zeros(part[0].height, part[0].width)
    padded = [*part, *[zero] * (order + 1 - len(part))]
    leading = [_leading_first(exponent, order) for exponent in exponents]
    series = [padded[order - k] for k in range(order + 1)]
    splitting = _Splitting(leading, list(sizes))
    gauge, blocks = splitting.split(series, list(range(len(exponents))), 0)
    placed = {block: (columns, residue) for block, columns, residue in blocks}
    normal = []
    for k in range(order + 1):
        whole = zero
        for block, (columns, residue) in placed.items():
            own = residue if k == order else residue.scalar(residue.height, leading[block][k])
            whole = whole + _placed(own, columns.start, zero.height)
        normal.append(whole)
    ordered = range(len(exponents))
    return Reduced(
        tuple(gauge), tuple(placed[b][1] for b in ordered), tuple(normal), tuple(placed[b][0] for b in ordered)
    )


def conjugation_defect(part: Sequence[M], reduced: Reduced[M]) -> list[M]:
    """The coefficients of B·g − g·Λ modulo z^(r+1): all 0 exactly when the gauge does what it says."""
    order = len(reduced.normal) - 1
    zero = part[0].zeros(part[0].height, part[0].width)
    padded = [*part, *[zero] * (order + 1 - len(part))]
    series = [padded[order - k] for k in range(order + 1)]
    first, second = product(series, reduced.gauge), product(reduced.gauge, reduced.normal)
    return [a - b for a, b in zip(first, second, strict=True)]


def product(first: Sequence[M], second: Sequence[M]) -> list[M]:
    """The product of two matrix polynomials in z of equal length, truncated to that length."""
    found = []
    for k in range(len(first)):
        term = first[0] @ second[k]
        for a in range(1, k + 1):
            term = term + first[a] @ second[k - a]
        found.append(term)
    return found


def _leading_first(exponent: Coefficients, order: int) -> list[Value]:
    """Scalar coefficients of z^(r+1) dq/dz: entry k belongs to z^k; the last one, at the residue, is 0."""
    scalars = principal_scalars(exponent, ZERO)
    scalars += [ZERO] * (order + 1 - len(scalars))
    return scalars[::-1]


@dataclass
class _Splitting:
    """The recursion: leading coefficients and multiplicities of all blocks."""

    leading: list[list[Value]]
    sizes: list[int]

    def split(self, series: list[M], members: list[int], level: int) -> tuple[list[M], list[tuple[int, range, M]]]:
        """Gauge and (block, its columns, L) for the blocks ``members``, which agree below ``level``."""
        size = series[0].height
        one, zero = series[0].scalar(size, 1), series[0].zeros(size, size)
        if len(series) == 1 or len(members) == 1:
            (block,) = members
            return [one, *[zero] * (len(series) - 1)], [(block, range(size), series[-1])]
        groups: dict[Value, list[int]] = {}
        for block in members:
            groups.setdefault(self.leading[block][level], []).append(block)
        gauge = [one, *[zero] * (len(series) - 1)]
        if len(groups) > 1:
            gauge, series = self._separated(series, groups)
        inner_gauge = [zero] * len(series)
        found: list[tuple[int, range, M]] = []
        start = 0
        for group in groups.values():
            own = range(start, start + sum(self.sizes[block] for block in group))
            rest = [matrix.take(own, own) for matrix in series[1:]]
            inner, blocks = self.split(rest, group, level + 1)
            for k, matrix in enumerate(inner):
                inner_gauge[k] = inner_gauge[k] + _placed(matrix, start, size)
            found += [(block, range(start + r.start, start + r.stop), residue) for block, r, residue in blocks]
            start = own.stop
        return product(gauge, inner_gauge), found

    def _separated(self, series: list[M], groups: dict[Value, list[int]]) -> tuple[list[M], list[M]]:
        """The gauge that makes the series block diagonal with respect to the groups, and the series after it."""
        counts = [sum(self.sizes[block] for block in group) for group in groups.values()]
        bases = [series[0].shifted(-value).kernel(count) for value, count in zip(groups, counts, strict=True)]
        constant = bases[0].beside(bases[1:])
        back = constant.inverse()
        series = [back @ matrix @ constant for matrix in series]
        zero = constant.zeros(constant.height, constant.width)
        gauge = [constant, *[zero] * (len(series) - 1)]
        for k in range(1, len(series)):
            mover = _mover(series[k], list(groups), counts)
            one = constant.scalar(constant.height, 1)
            forth = [one if m == 0 else mover if m == k else zero for m in range(len(series))]
            inverse = _geometric(mover, k, len(series))
            series = product(product(forth, series), inverse)
            gauge = product(gauge, inverse)
        return gauge, series


def _mover(matrix: M, values: list[Value], counts: list[int]) -> M:
    """X with X_ab = matrix_ab / (v_a − v_b) between different groups and 0 inside them."""
    starts = [sum(counts[:place]) for place in range(len(counts))]
    rows = []
    for a, (start, count) in enumerate(zip(starts, counts, strict=True)):
        pieces = []
        for b, (other, width) in enumerate(zip(starts, counts, strict=True)):
            piece = matrix.take(range(start, start + count), range(other, other + width))
            factor = Quotient.of(0) if a == b else 1 / Quotient.of(values[a] - values[b])
            pieces.append(piece.times(factor))
        rows.append(pieces[0].beside(pieces[1:]))
    return rows[0].above(rows[1:])


def _geometric(mover: M, step: int, length: int) -> list[M]:
    """(1 + X z^step)^(−1) as a polynomial of the given length."""
    size = mover.height
    found = [mover.zeros(size, size) for _ in range(length)]
    power = mover.scalar(size, 1)
    for k in range(0, length, step):
        found[k] = power
        power = -(power @ mover)
    return found


def _placed(matrix: M, start: int, size: int) -> M:
    """The square matrix on the diagonal of a zero matrix of the given size, beginning at ``start``."""
    end = start + matrix.height
    middle = matrix.zeros(matrix.height, start).beside([matrix, matrix.zeros(matrix.height, size - end)])
    return matrix.zeros(start, size).above([middle, matrix.zeros(size - end, size)])
