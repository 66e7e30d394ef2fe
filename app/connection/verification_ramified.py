"""Whether a floating principal part lies on the orbit of a ramified normal form.

Sought are gauges g modulo z^(r+1) with A g = g Λ as principal parts: a linear system.  If A lies on the orbit, its
solutions are one gauge times the stabiliser of Λ: their dimension is n²(r + 1) − dim O, and a random one is invertible.
Conversely one invertible solution puts A on the orbit.  Checked are thus the gap of the singular values at that
dimension, and the condition at z = 0 of a gauge drawn among the solutions.

This settles the whole formal type at the pole, in the lattice that ``normal_form`` describes.  For give the frame
vector w^(−k) the degree −k/e and z the degree 1: then the holomorphic terms, of which a principal part says nothing,
have positive degree, and all of Λ has degree 0 or less.  Terms of positive degree are gauged away degree by degree,
as at a log pole, unless two values of one block differ by a non-zero integer (resonance).
"""

from collections.abc import Sequence

import numpy as np

from app.connection.connection import Check
from app.connection.float_matrix import Array
from app.connection.normal_form import normal_form
from app.local.formal_type import Pole
from app.local.orbit import orbit_dimension

GAP = 1e3
_SMALL = 1e-7
_LARGEST_CONDITION = 1e7
_DRAWS = 5


def ramified_class_check(name: str, pole: Pole, part: Sequence[Array]) -> tuple[Check, float]:
    """The check of a pole with constants as values, and how far the part is from the orbit.

    Cost: singular values of a matrix of size n²(r + 1).
    """
    normal = normal_form(pole).form
    length, size, _ = normal.shape
    given: Array = np.zeros((max(length, len(part)), size, size), dtype=np.complex128)
    given[: len(part)] = part
    scale = max(1.0, float(np.abs(given).max(initial=0)), float(np.abs(normal).max(initial=0)))
    excess = float(np.abs(given[length:]).max(initial=0)) / scale
    whole = _intertwining(given[:length], normal) / scale
    dimension = size * size * length - orbit_dimension(pole)
    _, sizes, vectors = np.linalg.svd(whole)
    relative = sizes / max(float(sizes[0]), 1e-300)
    dropped = float(relative[len(relative) - dimension])
    kept = float(relative[len(relative) - dimension - 1]) if dimension < len(relative) else 1.0
    gauge = _well_conditioned(vectors[len(vectors) - dimension :].conj(), size)
    condition = float(np.linalg.cond(gauge[0]))
    defect = max(excess, dropped)
    holds = defect < _SMALL and kept > GAP * max(dropped, 1e-16) and condition < _LARGEST_CONDITION
    figure = (
        f"gauges to the ramified normal form: dimension {dimension} ({kept:.1e} | {dropped:.1e}), "
        f"one of condition {condition:.1e} drawn; excess of the order {excess:.1e}"
    )
    return Check(name, holds, figure), defect


def _intertwining(part: Array, normal: Array) -> Array:
    """The matrix of g ↦ principal part of A g − g Λ."""
    length, size, _ = part.shape
    one = np.eye(size)
    zero = np.zeros((size * size, size * size), dtype=np.complex128)
    pieces = [np.kron(a, one) - np.kron(one, b.T) for a, b in zip(part, normal, strict=True)]
    rows = [[pieces[k + m] if k + m < length else zero for m in range(length)] for k in range(length)]
    return np.asarray(np.block(rows), dtype=np.complex128)


def _well_conditioned(basis: Array, size: int) -> Array:
    """A combination of gauges, the best conditioned at z = 0 of a few drawn ones (deterministic)."""
    source = np.random.default_rng(0)
    drawn = [
        (source.standard_normal(len(basis)) + 1j * source.standard_normal(len(basis))) @ basis for _ in range(_DRAWS)
    ]
    series = [np.asarray(vector.reshape(-1, size, size), dtype=np.complex128) for vector in drawn]
    return min(series, key=lambda one: float(np.linalg.cond(one[0])))
