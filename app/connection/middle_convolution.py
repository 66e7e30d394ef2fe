"""Middle convolution of tuples of principal parts, uniform for every order of pole.

With minimal realisations A_(i,k) = Q_i N_i^k P_i, W = ⊕ W_i, Q = (Q_1 …) and P the P_i one above the other, let V' be
the image of M = PQ + μ on W.  Then A'_(i,k) = Q'_i N_i^k P'_i with P' the inclusion of V' into W and Q' = M : W → V'.
Neither positions nor coordinates of the poles enter.  For log poles this is the additive middle convolution of
Dettweiler and Reiter, J. Algebra 318 (2007).
"""

from collections.abc import Sequence
from itertools import accumulate

from app.connection.realisation import M, Realisation, realise
from app.exact.matrix import Scalar


def middle_convolution(
    parts: Sequence[Sequence[M]],
    mu: Scalar,
    *,
    dimensions: Sequence[int] | None = None,
    rank: int | None = None,
) -> list[list[M]]:
    """The principal parts after mc_μ.

    Args:
        parts: for each pole its coefficients A_0, …, A_r, n × n; a pole that is to play the role of infinity, with
            residue minus the sum of all A_0, is left out.
        mu: the parameter; for μ = 0 the result is the given tuple up to conjugation, if that is irreducible.
        dimensions: the expected dim W_i; rank: the expected rank of the result.  Floating kernels need both.

    Raises NotTheRank where an expected rank is not found.
    Cost: an elimination of size n(r+1) for each pole and one of size dim W.
    """
    sizes: Sequence[int | None] = dimensions if dimensions is not None else [None] * len(parts)
    realised = [realise(part, size) for part, size in zip(parts, sizes, strict=True)]
    lefts = [one.left for one in realised]
    rights = [one.right for one in realised]
    left, right = lefts[0].beside(lefts[1:]), rights[0].above(rights[1:])
    inclusion, projection, _ = (right @ left).shifted(mu).factor(rank)
    ends = list(accumulate(one.nilpotent.height for one in realised))
    found = []
    for one, end in zip(realised, ends, strict=True):
        own = range(end - one.nilpotent.height, end)
        made = Realisation(projection.take_columns(own), one.nilpotent, inclusion.take_rows(own), one.order)
        found.append(made.coefficients())
    return found


def twisted(part: Sequence[M], scalars: Sequence[Scalar]) -> list[M]:
    """The principal part with ``scalars[k]`` times the identity added to A_k; it may become longer."""
    size = part[0].height
    longer = [*part, *[part[0].zeros(size, size)] * (len(scalars) - len(part))]
    return [
        matrix.shifted(scalars[k]) if k < len(scalars) and scalars[k] else matrix for k, matrix in enumerate(longer)
    ]
