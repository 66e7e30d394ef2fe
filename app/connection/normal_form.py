"""Normal forms of formal types as floating principal parts, ramified ones too.

Unramified block (q, L): dq·1 + L dz/z.

Ramified block: q is a polynomial in 1/w, w^e = z, with a class of values ξ on C^m.  It is the push-forward of the
connection d − (dq·1 + Λ dw/w) on C((w))^m, in the frame v w^(−k), k = 0 … e − 1.  This frame spans the lattice
w^(−(e−1)) C[[w]]^m, one of the complete chain of lattices w^j C[[w]]^m, all of which multiplication by 1/w permutes.
There

*   w^(−1) moves the frame vector k to k + 1, the last one to z^(−1) times the first;
*   w^(−p) is a power of that, and z dq/dz = Σ −s c_s z^(−s) with z^(−s) = w^(−es);
*   the derivative of w^(−k) leaves the residue (Λ + k)/e at the frame vector k.

So the trace of the residue is tr Λ + m(e − 1)/2, and with ξ the sum of the block's exponents per unit of multiplicity
Λ = ξ − (e − 1)/2.  Other lattices of the chain differ by an integer in Λ; the given ξ is what fixes the lattice.

A pole's lattice is the direct sum of the lattices of its blocks, and its *orbit* consists of the principal parts of
g Λ g^(−1), g ∈ GL_n(C[z]/z^(r+1)): gauges of the trivial lattice, not those alone that preserve the whole chain (the
parahoric subgroup).  For one Galois orbit of multiplicity 1 and slope p/e in lowest terms nothing depends on this: the
functionals on gl_n(C[[z]]) that restrict to the parahoric orbit of Λ are all conjugate under the parahoric subgroup,
since [X, Λ] meets every term behind the residue that GL_n sees [own argument; the setting is that of Bremer and Sage,
Int. Math. Res. Notices (2013)].  In general ``orbit_defect`` compares the dimension of this orbit with
Irr(End) + n² − dim Inv; tests find them equal for ramified blocks of several levels, multiplicities and mixtures.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from app.connection.float_matrix import Array, floating
from app.connection.stages import StageBlock, principal_scalars
from app.exact.value import ZERO, Value
from app.local.formal_type import Block, Pole
from app.local.orbit import orbit_dimension
from app.local.partition import conjugate

_SMALL = 1e-9


@dataclass(frozen=True)
class NormalForm:
    """A normal form of shape (r + 1, n, n), entry k belonging to z^(−k−1) dz, and parts that gauges may rescale.

    ``spaces`` are ranges of columns with one formal eigenvalue, each with whether every gauge of that range commutes
    with the normal form (otherwise only scalars do for certain).
    """

    form: Array
    spaces: tuple[tuple[range, bool], ...]

    @property
    def scalar(self) -> bool:
        """Whether the orbit is a point."""
        return len(self.spaces) == 1 and self.spaces[0][1]


def normal_form(pole: Pole) -> NormalForm:
    """The normal form of a pole whose values are constants (KeyError where symbols occur).

    The order r is the least integer that is no smaller than any slope.  Cost: n² entries for every power.
    """
    order = max(-int(-block.exponent.slope // 1) for block in pole.blocks)
    form = np.zeros((order + 1, pole.rank, pole.rank), dtype=np.complex128)
    spaces: list[tuple[range, bool]] = []
    start = 0
    for block in pole.blocks:
        ramification = block.exponent.ramification
        scalars = _dilated_scalars(block)
        for eigenvalue in block.residue:
            end = start + ramification * eigenvalue.multiplicity
            spaces.append((range(start, end), ramification == 1 and max(eigenvalue.jordan) == 1))
            for length in eigenvalue.jordan:
                for j in range(length):
                    own = start + ramification * j
                    _add_orbit(form, own, ramification, scalars, floating(eigenvalue.value))
                    if j:
                        for k in range(ramification):
                            form[0, own - ramification + k, own + k] += 1
                start += ramification * length
    return NormalForm(form, tuple(spaces))


def _dilated_scalars(block: Block) -> list[tuple[int, complex]]:
    """z dq/dz as pairs (p, coefficient of w^(−p))."""
    ramification = block.exponent.ramification
    return [(int(power * ramification), floating(value * -power)) for power, value in block.exponent.terms]


def _add_orbit(
    form: Array, start: int, ramification: int, scalars: Sequence[tuple[int, complex]], value: complex
) -> None:
    """Add the push-forward of one line, in the frame w^(−k), to the rows and columns from ``start`` on."""
    exponent = value - (ramification - 1) / 2
    for k in range(ramification):
        form[0, start + k, start + k] += (exponent + k) / ramification
        for shift, scalar in scalars:
            # w^(−p) w^(−k) = z^(−t) w^(−k') with p + k = t e + k'
            turns, row = divmod(shift + k, ramification)
            form[turns, start + row, start + k] += scalar


def coordinate_scale(pole: Pole) -> float:
    """The largest c such that after z → z/c no leading coefficient of z dq/dz exceeds 1 in absolute value; 1 if log."""
    leading = [block.exponent.terms[0] for block in pole.blocks if not block.exponent.is_zero]
    return min((abs(floating(value * power)) ** float(-1 / power) for power, value in leading), default=1.0)


def stage_normal_form(blocks: tuple[StageBlock, ...]) -> NormalForm:
    """The normal form of a pole of a stage, all of whose blocks are unramified and without symbols."""
    spaces: list[tuple[range, bool]] = []
    size = sum(block.multiplicity for block in blocks)
    order = max((block.exponent[0][0] for block in blocks if block.exponent), default=0)
    form = np.zeros((order + 1, size, size), dtype=np.complex128)
    start = 0
    for block in blocks:
        for k, scalar in enumerate(principal_scalars(block.exponent, ZERO)):
            for j in range(start, start + block.multiplicity):
                form[k, j, j] += floating(scalar)
        for value, jordan in jordan_type(block):
            spaces.append((range(start, start + sum(jordan)), max(jordan) == 1))
            for length in jordan:
                for j in range(start, start + length):
                    form[0, j, j] += floating(value)
                    if j > start:
                        form[0, j - 1, j] = 1
                start += length
    return NormalForm(form, tuple(spaces))


def jordan_type(block: StageBlock) -> list[tuple[Value, tuple[int, ...]]]:
    """Eigenvalues of a block's class with their Jordan block sizes, from its slots."""
    drops: dict[Value, list[int]] = {}
    for slot in block.slots:
        drops.setdefault(slot.value, []).append(slot.drop)
    return [(value, conjugate(tuple(sorted(found, reverse=True)))) for value, found in drops.items()]


def orbit_defect(pole: Pole) -> int:
    """Dimension of the GL_n-orbit of the normal form less Irr(End) + n² − dim Inv; 0 where the lattice is right.

    Numerical rank of X ↦ principal part of [X, Λ].  Cost: singular values of a matrix of size n²(r + 1).
    """
    form = normal_form(pole).form
    sizes = np.linalg.svd(tangent_map(form), compute_uv=False)
    rank = int((sizes > _SMALL * max(1.0, float(np.abs(form).max(initial=0)))).sum())
    return rank - orbit_dimension(pole)


def tangent_map(part: Sequence[Array] | Array) -> Array:
    """The matrix of X ↦ principal part of [X, A] on gl_n[z]/z^(r+1); the residue's rows stand first."""
    size, length = part[0].shape[0], len(part)
    one = np.eye(size)
    brackets = [np.kron(one, matrix.T) - np.kron(matrix, one) for matrix in part]
    zero = np.zeros_like(brackets[0])
    rows = [[brackets[k + m] if k + m < length else zero for m in range(length)] for k in range(length)]
    return np.asarray(np.block(rows), dtype=np.complex128)
