"""Checks of exact connections.

Matrices with symbols are checked as matrices of rational functions wherever equality is claimed.  A rank that has to be
*large* is proved by one specialisation (``exact/modular``).  A semisimple class needs no elimination with symbols: if
Π (L − ξ) = 0 over the distinct eigenvalues, the kernels of the L − ξ span everything; each can only grow under
specialisation, so if they have the asked dimensions there, which add up to n, they have them generically.  And the
product is 0 as soon as it is 0 on vectors whose images under powers of L span everything, which again is proved
by the specialisation: one vector for a class with simple eigenvalues.
"""

from collections.abc import Iterator, Sequence

from app.connection.connection import Check, Connection, exact_parts
from app.connection.formal_reduction import conjugation_defect, formal_reduction
from app.exact.matrix import ExactMatrix, NotTheRank
from app.exact.modular import (
    ModularMatrix,
    NoSpecialisation,
    Specialisation,
    algebra_dimension,
    modular_rank,
    specialisation,
)
from app.exact.number import write_number
from app.exact.value import Value
from app.local.formal_type import Eigenvalue, Pole
from app.local.orbit import moduli_dimension
from app.local.problem import Problem
from app.progress import Progress

_ATTEMPTS = 3


def exact_checks(problem: Problem, connection: Connection, progress: Progress) -> Iterator[Check]:
    """The checks, one after another; see the heads of this module and of ``verification``."""
    parts = exact_parts(connection, _values_of(problem))
    progress.report("verification: sum of residues")
    yield _sum_check(parts)
    image = _Image.of(parts)
    for number, (pole, part) in enumerate(zip(problem.poles, parts, strict=True)):
        progress.report(f"verification: class at pole {number + 1}")
        progress.check()
        yield _class_check(number, pole, part, image)
    progress.report("verification: irreducibility")
    yield _irreducibility(image, connection)
    progress.report("verification: tangent dimension")
    yield _tangent_check(image, moduli_dimension(problem))


def _values_of(problem: Problem) -> list[Value]:
    found = []
    for pole in problem.poles:
        for block in pole.blocks:
            found += [value for _, value in block.exponent.terms] + [e.value for e in block.residue]
    return found


def _sum_check(parts: Sequence[Sequence[ExactMatrix]]) -> Check:
    whole = parts[0][0]
    for part in parts[1:]:
        whole = whole + part[0]
    return Check("sum of residues", whole.is_zero, "0" if whole.is_zero else "not 0")


class _Image:
    """All coefficients under one specialisation, or under another where denominators vanish."""

    def __init__(self, chosen: Specialisation, parts: list[list[ModularMatrix]], specialised: bool) -> None:
        self.chosen = chosen
        self.parts = parts
        self.specialised = specialised

    @property
    def size(self) -> int:
        """The rank of the connection."""
        return len(self.parts[0][0])

    @classmethod
    def of(cls, parts: Sequence[Sequence[ExactMatrix]], seed: int = 1) -> "_Image":
        """The image under the first specialisation that every denominator admits."""
        field = parts[0][0].field
        tables = [[matrix.entries() for matrix in part] for part in parts]
        for attempt in range(seed, seed + 20):
            chosen = specialisation(field.symbols, field.radicals, attempt)
            try:
                images = [[chosen.matrix(table) for table in part] for part in tables]
            except NoSpecialisation:
                continue
            return cls(chosen, images, bool(field.symbols))
        raise ArithmeticError("no specialisation of these matrices was found")


def _class_check(number: int, pole: Pole, part: Sequence[ExactMatrix], image: _Image) -> Check:
    name = f"class at pole {number + 1}"
    exponents = [tuple((int(power), value) for power, value in block.exponent.terms) for block in pole.blocks]
    sizes = [block.multiplicity for block in pole.blocks]
    order = max((exponent[0][0] for exponent in exponents if exponent), default=0)
    if any(not matrix.is_zero for matrix in part[order + 1 :]):
        return Check(name, False, f"the order of the pole is larger than {order + 1}")
    if order == 0:
        residues = [part[0]]
        reduced_words = ""
    else:
        try:
            reduced = formal_reduction(part[: order + 1], exponents, sizes)
        except NotTheRank as error:
            return Check(name, False, f"formal reduction: {error}")
        if any(not matrix.is_zero for matrix in conjugation_defect(part[: order + 1], reduced)):
            return Check(name, False, "the principal part is not conjugate to one with these exponents")
        residues = list(reduced.residues)
        reduced_words = f"formal reduction to {len(sizes)} exponents; "
    figures = []
    holds = True
    for block, residue in zip(pole.blocks, residues, strict=True):
        right, figure = _class_of(residue, block.residue, image.chosen)
        holds = holds and right
        figures.append(figure)
    return Check(name, holds, reduced_words + "; ".join(figures))


def _class_of(matrix: ExactMatrix, eigenvalues: Sequence[Eigenvalue], chosen: Specialisation) -> tuple[bool, str]:
    """Whether a matrix lies in the class, and the dimensions of the kernels of (L − ξ)^k found."""
    semisimple = all(eigenvalue.jordan[0] == 1 for eigenvalue in eigenvalues)
    if semisimple and matrix.field.symbols:
        image = chosen.matrix(matrix.entries())
        product = matrix.scalar(matrix.height, 1).take_columns(generating_columns(image, chosen.prime))
        for eigenvalue in eigenvalues:
            product = matrix.shifted(-eigenvalue.value) @ product
        if product.is_zero and len({chosen.value(e.value) for e in eigenvalues}) == len(eigenvalues):
            nullities = [_modular_nullity(image, chosen.value(e.value), chosen.prime) for e in eigenvalues]
            return _compared(eigenvalues, [(nullity,) for nullity in nullities])
    found = []
    for eigenvalue in eigenvalues:
        moved = matrix.shifted(-eigenvalue.value)
        power = moved
        nullities = [matrix.height - power.rank()]
        # one power more than the class has, to see that the kernels stop growing
        for _ in range(len(eigenvalue.nullities)):
            if sum(eigenvalue.jordan) == nullities[-1]:
                break
            power = power @ moved
            nullities.append(matrix.height - power.rank())
        found.append(tuple(nullities))
    return _compared(eigenvalues, found)


def generating_columns(image: ModularMatrix, prime: int) -> list[int]:
    """Indices of unit vectors whose images under powers of a matrix modulo a prime span everything; few of them."""
    size = len(image)
    spans = []
    for j in range(size):
        vector = [int(i == j) for i in range(size)]
        span = [vector]
        for _ in range(size - 1):
            vector = [sum(row[k] * vector[k] for k in range(size)) % prime for row in image]
            span.append(vector)
        spans.append(span)
    chosen: list[int] = []
    rows: ModularMatrix = []
    reached = 0
    while reached < size:
        ranks = [modular_rank(rows + spans[j], prime) for j in range(size)]
        best = max(range(size), key=lambda j: (ranks[j], j))
        chosen.append(best)
        rows, reached = rows + spans[best], ranks[best]
    return chosen


def _compared(eigenvalues: Sequence[Eigenvalue], found: Sequence[tuple[int, ...]]) -> tuple[bool, str]:
    words = []
    holds = True
    for eigenvalue, nullities in zip(eigenvalues, found, strict=True):
        asked = tuple(sum(eigenvalue.nullities[: k + 1]) for k in range(len(eigenvalue.nullities)))
        holds = holds and nullities == asked
        words.append(f"{write_number(eigenvalue.value)}: {', '.join(map(str, nullities))}")
    return holds, "kernels of (L − ξ)^k, " + "; ".join(words)


def _modular_nullity(image: ModularMatrix, value: int, prime: int) -> int:
    moved = [
        [(entry - value if i == j else entry) % prime for j, entry in enumerate(row)] for i, row in enumerate(image)
    ]
    return len(moved) - modular_rank(moved, prime)


def _irreducibility(image: _Image, connection: Connection) -> Check:
    """n² modulo a prime proves n² for the field; otherwise two more specialisations are tried."""
    size = image.size
    best = 0
    for attempt in range(_ATTEMPTS):
        tried = image if attempt == 0 else _Image.of(exact_parts(connection), seed=100 * attempt)
        letters = [matrix for part in tried.parts for matrix in part]
        best = max(best, algebra_dimension(letters, tried.chosen.prime))
        if best == size * size:
            break
    where = "at one specialisation of the symbols" if image.specialised else "modulo a prime"
    figure = f"generated algebra of dimension {best} of {size * size}"
    return Check("irreducibility", best == size * size, f"{figure}, {where}")


def _tangent_check(image: _Image, expected: int) -> Check:
    found = tangent_dimension(image.parts, image.chosen.prime)
    return Check("tangent dimension", found == expected, f"{found}, expected {expected}")


def tangent_dimension(parts: Sequence[Sequence[ModularMatrix]], prime: int) -> int:
    """Dimension of the moduli space at a tuple: Σ rank (X ↦ [X, A_i]) − rank of the sum of residues − (n² − 1).

    Hypothesis: the tuple is irreducible, so that the stabiliser is the scalars.
    """
    size = len(parts[0][0])
    whole = 0
    residues: ModularMatrix = []
    for part in parts:
        rows = tangent_rows(part, prime)
        whole += modular_rank(rows, prime)
        residues += [row[: size * size] for row in rows]
    return whole - modular_rank(residues, prime) - (size * size - 1)


def tangent_rows(part: Sequence[ModularMatrix], prime: int) -> ModularMatrix:
    """The images of a basis of gl_n[z]/z^(r+1) under X ↦ principal part of [X, A]; residues stand first."""
    size = len(part[0])
    rows = []
    for m in range(len(part)):
        for a in range(size):
            for b in range(size):
                row = [0] * (size * size * len(part))
                for k in range(len(part) - m):
                    matrix, start = part[k + m], k * size * size
                    for j in range(size):
                        row[start + a * size + j] += matrix[b][j]
                        row[start + j * size + b] -= matrix[j][a]
                rows.append([entry % prime for entry in row])
    return rows
