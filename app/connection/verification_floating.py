"""Checks of floating connections: singular values with their gaps, never an equality.

A rank r is accepted where the singular values fall after the r-th by a factor of at least ``GAP``; the figure shows the
last one kept and the first one dropped, relative to the largest.  Such a record is evidence, not a proof; its last line
says how far the matrices are from satisfying the conditions exactly.
"""

from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from app.connection.connection import Check, Connection, floating_parts
from app.connection.float_matrix import Array, FloatMatrix, floating
from app.connection.formal_reduction import conjugation_defect, formal_reduction
from app.connection.normal_form import tangent_map
from app.connection.verification_ramified import ramified_class_check
from app.exact.matrix import NotTheRank
from app.exact.number import write_number
from app.local.formal_type import Eigenvalue, Pole
from app.local.orbit import moduli_dimension
from app.local.problem import Problem
from app.progress import Progress

GAP = 1e3
SMALL = 1e-7
"""Relative size below which a singular value or a defect counts as 0."""
_FLOOR = 1e-2


def floating_checks(problem: Problem, connection: Connection, progress: Progress) -> Iterator[Check]:
    """The checks, one after another; see the heads of this module and of ``verification``."""
    parts = floating_parts(connection)
    arrays = [[matrix.array for matrix in part] for part in parts]
    scale = max(1.0, *(float(np.abs(array).max(initial=0)) for part in arrays for array in part))
    missing = float(np.abs(np.sum([part[0] for part in arrays], axis=0)).max(initial=0)) / scale
    distances = [missing]
    yield Check("sum of residues", missing < SMALL, f"{missing:.1e} relative to the largest entry")
    for number, (pole, part) in enumerate(zip(problem.poles, parts, strict=True)):
        progress.report(f"verification: class at pole {number + 1}")
        progress.check()
        check, distance = _class_check(number, pole, part)
        distances.append(distance)
        yield check
    progress.report("verification: irreducibility")
    yield _irreducibility([array for part in arrays for array in part])
    progress.report("verification: tangent dimension")
    yield _tangent_check(arrays, moduli_dimension(problem))
    worst = max(distances)
    yield Check("distance from exactness", worst < SMALL, f"{worst:.1e}")


class _Rank:
    """A numerical rank against an expected one: last singular value kept, first one dropped, relative to the scale."""

    def __init__(self, matrix: NDArray[np.complex128], expected: int, scale: float | None = None) -> None:
        sizes = np.linalg.svd(matrix, compute_uv=False) if matrix.size else np.zeros(0)
        largest = scale if scale is not None else float(sizes.max(initial=0))
        relative = sizes / largest if largest else sizes
        self.kept = float(relative[expected - 1]) if 0 < expected <= len(relative) else 1.0
        self.dropped = float(relative[expected]) if expected < len(relative) else 0.0
        self.holds = self.dropped < SMALL and self.kept > GAP * max(self.dropped, 1e-16)


def _class_check(number: int, pole: Pole, part: Sequence[FloatMatrix]) -> tuple[Check, float]:
    """The class at a pole, and its distance from exactness."""
    name = f"class at pole {number + 1}"
    if pole.ramified:
        return ramified_class_check(name, pole, [matrix.array for matrix in part])
    exponents = [tuple((int(power), value) for power, value in block.exponent.terms) for block in pole.blocks]
    sizes = [block.multiplicity for block in pole.blocks]
    order = max((exponent[0][0] for exponent in exponents if exponent), default=0)
    excess = max((float(np.abs(matrix.array).max(initial=0)) for matrix in part[order + 1 :]), default=0.0)
    defect, residues, words = excess, [part[0]], ""
    if order:
        try:
            reduced = formal_reduction(part[: order + 1], exponents, sizes)
        except NotTheRank as error:
            return Check(name, False, f"formal reduction: {error}"), 1.0
        scale = max(1.0, *(float(np.abs(matrix.array).max()) for matrix in part))
        left = [float(np.abs(m.array).max()) for m in conjugation_defect(part[: order + 1], reduced)]
        defect = max(excess, *left) / scale
        residues = list(reduced.residues)
        words = f"formal reduction to {len(sizes)} exponents with defect {defect:.1e}; "
    holds, worst, figures = defect < SMALL, defect, []
    floor = _FLOOR * max(float(np.abs(matrix.array).max()) for matrix in part)
    for block, residue in zip(pole.blocks, residues, strict=True):
        right, distance, figure = _class_of(residue.array, block.residue, floor)
        holds, worst = holds and right, max(worst, distance)
        figures.append(figure)
    return Check(name, holds, words + "; ".join(figures)), worst


def _class_of(matrix: Array, eigenvalues: Sequence[Eigenvalue], floor: float) -> tuple[bool, float, str]:
    """Whether a matrix is near the class: for every eigenvalue the ranks of powers, last kept and first dropped.

    Sizes are relative to the norm of L − ξ, but at least to ``floor``: what is rounding beside the principal part as a
    whole is nothing.
    """
    size = matrix.shape[0]
    holds, worst, words = True, 0.0, []
    for eigenvalue in eigenvalues:
        moved = matrix - floating(eigenvalue.value) * np.eye(size)
        norm = max(float(np.linalg.norm(moved, 2)), abs(floating(eigenvalue.value)), floor, 1e-300)
        power = np.eye(size, dtype=np.complex128)
        nullity = 0
        for k, drop in enumerate(eigenvalue.nullities):
            power = power @ moved
            nullity += drop
            # relative to the norm of L − ξ, or the rank of a power of a nilpotent matrix would never vanish
            rank = _Rank(power, size - nullity, norm ** (k + 1))
            holds, worst = holds and rank.holds, max(worst, rank.dropped)
            words.append(
                f"{write_number(eigenvalue.value)}: rank {size - nullity} ({rank.kept:.1e} | {rank.dropped:.1e})"
            )
    return holds, worst, ", ".join(words)


def _irreducibility(letters: Sequence[Array]) -> Check:
    """Words in the letters, orthonormalised as they come, until they span everything or no more comes."""
    size = letters[0].shape[0]
    scaled = [letter / norm for letter in letters if (norm := float(np.linalg.norm(letter, 2)))]
    basis = np.eye(size, dtype=np.complex128).reshape(1, -1) / np.sqrt(size)
    fresh, smallest = basis, 1.0
    while len(fresh) and len(basis) < size * size:
        words = np.concatenate([(fresh.reshape(-1, size, size) @ letter).reshape(len(fresh), -1) for letter in scaled])
        words -= (words @ basis.conj().T) @ basis
        words -= (words @ basis.conj().T) @ basis
        sizes, vectors = np.linalg.svd(words, full_matrices=False)[1:]
        count = int((sizes > SMALL).sum())
        if count:
            smallest = min(smallest, float(sizes[count - 1]))
        fresh = np.asarray(vectors[:count], dtype=np.complex128)
        basis = np.concatenate([basis, fresh])
    figure = f"generated algebra of dimension {len(basis)} of {size * size}, smallest new direction {smallest:.1e}"
    return Check("irreducibility", len(basis) == size * size, figure)


def _tangent_check(parts: Sequence[Sequence[Array]], expected: int) -> Check:
    size = parts[0][0].shape[0]
    whole, gap, residues = 0, np.inf, []
    for part in parts:
        rows = tangent_map(part)
        rank, found = _rank_with_gap(rows, max(float(np.abs(array).max(initial=0)) for array in part))
        whole, gap = whole + rank, min(gap, found)
        residues.append(rows[: size * size])
    scale = max(float(np.abs(array).max(initial=0)) for part in parts for array in part)
    rank, found = _rank_with_gap(np.concatenate(residues, axis=1), scale)
    dimension = whole - rank - (size * size - 1)
    return Check(
        "tangent dimension", dimension == expected, f"{dimension}, expected {expected} (gap {min(gap, found):.0e})"
    )


def _rank_with_gap(matrix: Array, scale: float) -> tuple[int, float]:
    """The numerical rank, and the ratio of the last singular value kept to the first dropped.

    Sizes are relative to ``scale``, the largest entry of what the map was made from: where that is scalar, the map is
    rounding and nothing else.
    """
    sizes = np.linalg.svd(matrix, compute_uv=False)
    if not scale:
        return 0, np.inf
    relative = np.maximum(sizes / scale, 1e-17)
    rank = int((relative > SMALL).sum())
    if rank == 0 or rank == len(relative):
        return rank, np.inf
    return rank, float(relative[rank - 1] / relative[rank])
