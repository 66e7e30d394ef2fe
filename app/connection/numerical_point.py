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
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from app.connection.float_matrix import Array, FloatMatrix, floating
from app.connection.stages import Stage, StageBlock, principal_scalars
from app.exact.value import ZERO, Value
from app.local.partition import conjugate
from app.progress import Progress

STARTS = 8
ITERATIONS = 200
_GOAL = 1e-13
_LARGEST_STEP = 1.0
_LARGEST_ENTRY = 1e7
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
    """A point on the orbits of a stage without symbols, residues adding up to its excess.

    Deterministic for a seed.  Returns the best start where none converges.
    Cost: for each iteration one linear system of size n² and products of matrices of size n(r+1).
    """
    normal = [_normal_form(blocks) for blocks in stage.poles]
    excess = floating(stage.excess)
    real = bool(np.isreal(excess)) and all(np.isrealobj(part) or not part.imag.any() for part in normal)
    best: tuple[float, list[Array]] | None = None
    for start in range(starts):
        source = np.random.default_rng([seed, start])
        complex_start = not real or start >= starts // 2
        progress.report(f"numerical search: start {start + 1} of {starts}", start / starts)
        found = _newton([_moved_at_random(part, source, complex_start) for part in normal], excess, progress)
        if best is None or found[0] < best[0]:
            best = found
        if found[0] < _GOAL * 100:
            return _point(found, start + 1, True)
    if best is None:
        raise ValueError("at least one start is needed")
    return _point(best, starts, False)


def _point(found: tuple[float, list[Array]], starts: int, converged: bool) -> Point:
    parts = tuple(tuple(FloatMatrix(matrix) for matrix in part) for part in found[1])
    return Point(parts, found[0], starts, converged)


def _normal_form(blocks: tuple[StageBlock, ...]) -> Array:
    """The normal form of a pole as an array of shape (r + 1, n, n), entry k belonging to z^(−k−1) dz."""
    size = sum(block.multiplicity for block in blocks)
    order = max((block.exponent[0][0] for block in blocks if block.exponent), default=0)
    form = np.zeros((order + 1, size, size), dtype=np.complex128)
    start = 0
    for block in blocks:
        for k, scalar in enumerate(principal_scalars(block.exponent, ZERO)):
            for j in range(start, start + block.multiplicity):
                form[k, j, j] += floating(scalar)
        for value, jordan in jordan_type(block):
            for length in jordan:
                for j in range(start, start + length):
                    form[0, j, j] += floating(value)
                    if j > start:
                        form[0, j - 1, j] = 1
                start += length
    return form


def jordan_type(block: StageBlock) -> list[tuple[Value, tuple[int, ...]]]:
    """Eigenvalues of a block's class with their Jordan block sizes, from its slots."""
    drops: dict[Value, list[int]] = {}
    for slot in block.slots:
        drops.setdefault(slot.value, []).append(slot.drop)
    return [(value, conjugate(tuple(sorted(found, reverse=True)))) for value, found in drops.items()]


def _moved_at_random(part: Array, source: np.random.Generator, complex_start: bool) -> Array:
    """A random point of the orbit, by a well conditioned random gauge."""
    length, size, _ = part.shape
    gauge = np.zeros_like(part)
    for k in range(length):
        gauge[k] = source.standard_normal((size, size)) * (0.4 if k else 0.5)
        if complex_start:
            gauge[k] = gauge[k] + 1j * source.standard_normal((size, size)) * 0.4
    unitary = np.linalg.qr(gauge[0])[0]
    gauge[0] = unitary @ (np.eye(size) + gauge[0] / max(1.0, np.linalg.norm(gauge[0], 2)) / 2)
    whole = _toeplitz(gauge)
    inverse = np.asarray(np.linalg.inv(whole), dtype=np.complex128)
    return _conjugated(part, whole, inverse)


def _toeplitz(series: Array) -> Array:
    """A matrix polynomial Σ G_k z^k as a block lower triangular matrix with blocks G_(a−b)."""
    length, size, _ = series.shape
    whole = np.zeros((length * size, length * size), dtype=np.complex128)
    for a in range(length):
        for b in range(a + 1):
            whole[a * size : (a + 1) * size, b * size : (b + 1) * size] = series[a - b]
    return whole


def _conjugated(part: Array, gauge: Array, inverse: Array) -> Array:
    """Principal part of g A g^(−1), gauge and inverse given as block Toeplitz matrices."""
    length, size, _ = part.shape
    moved = gauge @ _toeplitz(part[::-1]) @ inverse
    return moved[:, :size].reshape(length, size, size)[::-1].copy()


def _newton(parts: list[Array], excess: complex, progress: Progress) -> tuple[float, list[Array]]:
    """Iterate from a start; returns the relative residual and the parts."""
    missing = _missing(parts, excess)
    for _ in range(ITERATIONS):
        progress.check()
        error, largest_entry = float(np.linalg.norm(missing)), _largest(parts)
        if error < _GOAL * max(1.0, largest_entry) or largest_entry > _LARGEST_ENTRY:
            break
        movers = _least_norm_step(parts, missing)
        largest = _largest(movers)
        scale = min(1.0, _LARGEST_STEP / largest) if largest else 1.0
        while scale > _SMALLEST_SCALE:
            tried = [_stepped(part, mover * scale) for part, mover in zip(parts, movers, strict=True)]
            missing = _missing(tried, excess)
            if float(np.linalg.norm(missing)) < error:
                break
            scale /= 2
        else:
            break
        parts = _balanced(tried)
        missing = _missing(parts, excess)
    return float(np.linalg.norm(_missing(parts, excess))) / max(1.0, _largest(parts)), parts


def _balanced(parts: list[Array]) -> list[Array]:
    """The parts after a common constant gauge that lowers Σ |A|², by a few steps of descent.

    The equation does not see such a gauge, and without it matrices run away along the orbits.  At the minimum
    Σ [A, A†] = 0 (Kempf and Ness, 1979).
    """
    for _ in range(_SWEEPS):
        square = sum(float(np.sum(np.abs(part) ** 2)) for part in parts)
        moment = sum(
            np.einsum("kij,klj->il", part, part.conj()) - np.einsum("kji,kjl->il", part.conj(), part) for part in parts
        )
        if float(np.linalg.norm(moment)) <= _BALANCED * square:
            break
        sizes, vectors = np.linalg.eigh(moment / (2 * square))
        forth = (vectors * np.exp(-sizes)) @ vectors.conj().T
        back = (vectors * np.exp(sizes)) @ vectors.conj().T
        parts = [np.asarray(forth @ part @ back, dtype=np.complex128) for part in parts]
    return parts


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


def _stepped(part: Array, mover: Array) -> Array:
    """The part after the Cayley transform of the mover."""
    whole = _toeplitz(mover) / 2
    one = np.eye(whole.shape[0])
    gauge = np.asarray(np.linalg.solve(one - whole, one + whole), dtype=np.complex128)
    inverse = np.asarray(np.linalg.solve(one + whole, one - whole), dtype=np.complex128)
    return _conjugated(part, gauge, inverse)
