"""A numerical point: Newton's method on the orbits themselves, independent of all quiver theory.

Unknown are gauges g_i(z) modulo z^(r+1); the principal parts A_i = g_i Λ_i g_i^(−1) stay on their orbits throughout,
and the only equation is that the residues add up to a given scalar.  An infinitesimal gauge X_i moves A_i by the
principal part of [X_i, A_i], so the residue moves by Σ_k [X_ik, A_ik].  The step of least norm is X_ik = [Y, A_ik†]
with Σ_ik [[Y, A_ik†], A_ik] = −R, a linear system of size n² whatever the number and order of the poles.  The finite
step is the Cayley transform, halved until the residual falls.

Several starts, real ones first where the data are real.  A point found is evidence of existence and a cross-check;
none found proves nothing.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from app.connection.float_matrix import Array, FloatMatrix, floating
from app.connection.normal_form import NormalForm, coordinate_scale, normal_form, stage_normal_form
from app.connection.stages import Stage
from app.local.formal_type import Pole
from app.progress import Progress

STARTS = 8
ITERATIONS = 200
_GOAL = 1e-13
_LARGEST_STEP = 1.0
_LARGEST_ENTRY = 1e7
_LARGEST_CONDITION = 1e8
_SMALLEST_SCALE = 1e-4
_SWEEPS = 10
_BALANCED = 0.02


@dataclass(frozen=True)
class Point:
    """The best tuple found: its parts, what the residues miss relative to the largest coefficient, the starts used."""

    parts: tuple[tuple[FloatMatrix, ...], ...]
    residual: float
    starts: int
    converged: bool


def find_point(stage: Stage, seed: int, progress: Progress, starts: int = STARTS) -> Point:
    """A point on the orbits of a stage without symbols, residues adding up to its excess; see ``find_tuple``."""
    normal = [stage_normal_form(blocks) for blocks in stage.poles]
    return find_tuple(normal, seed, progress, starts, floating(stage.excess))


def find_tuple(
    normal: Sequence[NormalForm], seed: int, progress: Progress, starts: int = STARTS, excess: complex = 0
) -> Point:
    """A point on the orbits of normal forms, ramified or not, residues adding up to ``excess`` times the identity.

    Deterministic for a seed.  Returns the best start where none converges.
    Cost: for each iteration one linear system of size n² and products of matrices of size n(r+1).
    """
    real = bool(np.isreal(excess)) and not any(one.form.imag.any() for one in normal)
    best: tuple[float, list[Array]] | None = None
    for start in range(starts):
        source = np.random.default_rng([seed, start])
        complex_start = not real or start >= starts // 2
        progress.report(f"numerical search: start {start + 1} of {starts}", start / starts)
        found = _newton([_random_place(one, source, complex_start) for one in normal], excess, progress)
        if best is None or found[0] < best[0]:
            best = found
        if found[0] < _GOAL * 100:
            return _point(found, start + 1, True)
    if best is None:
        raise ValueError("at least one start is needed")
    return _point(best, starts, False)


def find_point_at(poles: Sequence[Pole], seed: int, progress: Progress, starts: int = STARTS) -> Point:
    """A point on the orbits of formal types without symbols, ramified or not, residues adding up to 0.

    The residues know nothing of the local coordinates, so every ramified pole has a scale of its own: with z = c·u the
    coefficient k is multiplied by c^(−k).  It is chosen such that no leading coefficient of z dq/dz exceeds 1; far from
    there Newton's method creeps along the orbits.
    """
    normal, scales = [], []
    for pole in poles:
        own = normal_form(pole)
        scales.append(coordinate_scale(pole) if pole.ramified else 1.0)
        normal.append(replace(own, form=_scaled(own.form, scales[-1])))
    found = find_tuple(normal, seed, progress, starts)
    parts = tuple(
        tuple(FloatMatrix(matrix.array * scale**-k) for k, matrix in enumerate(part))
        for part, scale in zip(found.parts, scales, strict=True)
    )
    return replace(found, parts=parts)


def _scaled(form: Array, scale: float) -> Array:
    powers = np.power(scale, np.arange(len(form)))
    return np.asarray(form * powers[:, None, None], dtype=np.complex128)


def _point(found: tuple[float, list[Array]], starts: int, converged: bool) -> Point:
    parts = tuple(tuple(FloatMatrix(matrix) for matrix in part) for part in found[1])
    return Point(parts, found[0], starts, converged)


@dataclass(frozen=True)
class _Place:
    """A point of an orbit: the normal form, the gauge as a block Toeplitz matrix, and the principal part they give."""

    normal: NormalForm
    gauge: Array
    part: Array

    @classmethod
    def of(cls, normal: NormalForm, gauge: Array) -> "_Place":
        """The point that a gauge leads to; parts are always made anew from the normal form, so no errors pile up."""
        return cls(normal, gauge, normal.form if normal.scalar else _conjugated(normal.form, gauge))

    def moved(self, factor: Array) -> "_Place":
        """The point after a further gauge."""
        return _Place.of(self.normal, np.asarray(factor @ self.gauge, dtype=np.complex128))

    def conditioned(self) -> "_Place":
        """The same point with a better conditioned gauge: bases of eigenspaces orthonormal, others of norm 1."""
        length, size, _ = self.part.shape
        factor = np.zeros((size, size), dtype=np.complex128)
        for space, semisimple in self.normal.spaces:
            own = np.ix_(range(size), space)
            basis = self.gauge[:size, :size][own]
            if semisimple:
                factor[np.ix_(space, space)] = np.linalg.inv(np.linalg.qr(basis)[1])
            else:
                factor[space, space] = 1 / np.linalg.norm(basis)
        gauge = np.asarray(self.gauge @ np.kron(np.eye(length), factor), dtype=np.complex128)
        return _Place(self.normal, gauge, self.part)

    @property
    def condition(self) -> float:
        """Condition number of the gauge."""
        return 1.0 if self.normal.scalar else float(np.linalg.cond(self.gauge))


def _random_place(normal: NormalForm, source: np.random.Generator, complex_start: bool) -> _Place:
    """A random point of the orbit, by a well conditioned random gauge."""
    length, size, _ = normal.form.shape
    gauge = np.zeros_like(normal.form)
    for k in range(length):
        gauge[k] = source.standard_normal((size, size)) * (0.4 if k else 0.5)
        if complex_start:
            gauge[k] = gauge[k] + 1j * source.standard_normal((size, size)) * 0.4
    unitary = np.linalg.qr(gauge[0])[0]
    gauge[0] = unitary @ (np.eye(size) + gauge[0] / max(1.0, np.linalg.norm(gauge[0], 2)) / 2)
    return _Place.of(normal, _toeplitz(gauge))


def _toeplitz(series: Array) -> Array:
    """A matrix polynomial Σ G_k z^k as a block lower triangular matrix with blocks G_(a−b)."""
    length, size, _ = series.shape
    whole = np.zeros((length * size, length * size), dtype=np.complex128)
    for a in range(length):
        for b in range(a + 1):
            whole[a * size : (a + 1) * size, b * size : (b + 1) * size] = series[a - b]
    return whole


def _conjugated(part: Array, gauge: Array) -> Array:
    """Principal part of g A g^(−1), the gauge given as a block Toeplitz matrix."""
    length, size, _ = part.shape
    moved = np.linalg.solve(gauge.T, (gauge @ _toeplitz(part[::-1])).T).T
    return np.asarray(moved[:, :size].reshape(length, size, size)[::-1], dtype=np.complex128)


def _newton(places: list[_Place], excess: complex, progress: Progress) -> tuple[float, list[Array]]:
    """Iterate from a start; returns the relative residual (infinite where the gauges run away) and the parts."""
    for _ in range(ITERATIONS):
        progress.check()
        parts = [place.part for place in places]
        missing = _missing(parts, excess)
        error, largest_entry = float(np.linalg.norm(missing)), _largest(parts)
        if error < _GOAL * max(1.0, largest_entry):
            break
        if largest_entry > _LARGEST_ENTRY or max(place.condition for place in places) > _LARGEST_CONDITION:
            return float("inf"), parts
        movers = _least_norm_step(parts, missing)
        largest = _largest(movers)
        scale = min(1.0, _LARGEST_STEP / largest) if largest else 1.0
        while scale > _SMALLEST_SCALE:
            tried = [place.moved(_cayley(mover * scale)) for place, mover in zip(places, movers, strict=True)]
            if float(np.linalg.norm(_missing([place.part for place in tried], excess))) < error:
                break
            scale /= 2
        else:
            break
        places = [place.conditioned() for place in _balanced(tried)]
    parts = [place.part for place in places]
    return float(np.linalg.norm(_missing(parts, excess))) / max(1.0, _largest(parts)), parts


def _balanced(places: list[_Place]) -> list[_Place]:
    """The points after a common constant gauge that lowers Σ |A|², by a few steps of descent.

    The equation does not see such a gauge, and without it matrices run away along the orbits.  At the minimum
    Σ [A, A†] = 0 (Kempf and Ness, 1979).
    """
    for _ in range(_SWEEPS):
        parts = [place.part for place in places]
        square = sum(float(np.sum(np.abs(part) ** 2)) for part in parts)
        moment = sum(
            np.einsum("kij,klj->il", part, part.conj()) - np.einsum("kji,kjl->il", part.conj(), part) for part in parts
        )
        if float(np.linalg.norm(moment)) <= _BALANCED * square:
            break
        sizes, vectors = np.linalg.eigh(moment / (2 * square))
        factor = (vectors * np.exp(-sizes)) @ vectors.conj().T
        places = [place.moved(np.kron(np.eye(len(place.part)), factor)) for place in places]
    return places


def _largest(parts: Sequence[Array]) -> float:
    """The largest absolute value of an entry."""
    return float(max(np.abs(part).max(initial=0) for part in parts))


def _missing(parts: Sequence[Array], excess: complex) -> Array:
    """What the residues miss."""
    size = parts[0].shape[1]
    missing = -excess * np.eye(size, dtype=np.complex128)
    for part in parts:
        missing = missing + part[0]
    return missing


def _least_norm_step(parts: Sequence[Array], missing: Array) -> list[Array]:
    size = missing.shape[0]
    one = np.eye(size)
    normal: NDArray[np.complex128] = np.zeros((size * size, size * size), dtype=np.complex128)
    for part in parts:
        for matrix in part:
            bracket = np.kron(one, matrix.T) - np.kron(matrix, one)
            normal += bracket @ bracket.conj().T
    solution = np.linalg.lstsq(normal, -missing.reshape(-1), rcond=1e-14)[0].reshape(size, size)
    return [np.stack([solution @ matrix.conj().T - matrix.conj().T @ solution for matrix in part]) for part in parts]


def _cayley(mover: Array) -> Array:
    """The Cayley transform of a mover, as a block Toeplitz matrix."""
    whole = _toeplitz(mover) / 2
    one = np.eye(whole.shape[0])
    return np.asarray(np.linalg.solve(one - whole, one + whole), dtype=np.complex128)
