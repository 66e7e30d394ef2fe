"""Operations on a connection itself: middle convolution and twists, in the coordinate x.

Here positions matter in one way only: the pole at infinity must be logarithmic (or absent) for mc_μ, since the residue
there is minus the sum of the others whatever μ is.
"""

from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from app.connection.connection import Connection, ConnectionPole, exact_parts, floating_parts, poles_of
from app.connection.middle_convolution import middle_convolution, twisted
from app.connection.realisation import M
from app.errors import Place, Refused
from app.exact.value import Value, total
from app.local.formal_type import Position

if TYPE_CHECKING:
    from app.connection.float_matrix import FloatMatrix

Poles = tuple[ConnectionPole, ...]


def convolved(connection: Connection, mu: Value) -> Connection:
    """mc_μ of a connection, without a verification record.

    Hypotheses: infinity is no pole or a logarithmic one (Refused otherwise), and something is left (Refused where the
    rank becomes 0).  For irreducible connections other than 0 and −μ dx/(x − t), mc_{−μ} mc_μ is the identity up to
    conjugation.  Floating ranks are guessed from singular values.
    """
    finite = [pole for pole in connection.poles if not pole.at.at_infinity]
    for number, pole in enumerate(connection.poles):
        if pole.at.at_infinity and any(entry for m in pole.coefficients[1:] for row in m for entry in row):
            message = "Infinity is an irregular pole, so the middle convolution in x is not of this kind"
            place = Place(f"/poles/{number}", message, "a Möbius change that moves this pole to a finite place")
            raise Refused(f"{message}.", (place,))
    known = replace(connection, poles=tuple(finite))
    if connection.kind == "exact":
        poles, rank = _with_infinity(finite, middle_convolution(exact_parts(known, [mu]), mu))
    else:
        poles, rank = _with_infinity(finite, _floating(floating_parts(known), mu))
    if rank == 0:
        raise Refused("The middle convolution leaves nothing: the connection has rank 0 after it.")
    names = (*connection.symbols, *sorted(mu.symbols() - set(connection.symbols)))
    return Connection(connection.kind, rank, poles, names, connection.accessory, values=connection.values)


def _with_infinity(finite: Sequence[ConnectionPole], parts: Sequence[Sequence[M]]) -> tuple[Poles, int]:
    """The poles, infinity added with minus the sum of the residues; and the rank."""
    whole = parts[0][0]
    for part in parts[1:]:
        whole = whole + part[0]
    return poles_of([*(pole.at for pole in finite), Position(None)], [*parts, [-whole]]), whole.height


def _floating(parts: Sequence[Sequence["FloatMatrix"]], mu: Value) -> "list[list[FloatMatrix]]":
    """mc_μ with ranks read off from gaps between singular values."""
    from app.connection.float_matrix import numerical_rank
    from app.connection.realisation import hankel, realise

    dimensions = [numerical_rank(hankel(part)) for part in parts]
    realised = [realise(part, dimension) for part, dimension in zip(parts, dimensions, strict=True)]
    left = realised[0].left.beside([one.left for one in realised[1:]])
    right = realised[0].right.above([one.right for one in realised[1:]])
    rank = numerical_rank((right @ left).shifted(mu))
    return middle_convolution(parts, mu, dimensions=dimensions, rank=rank)


def twisted_connection(connection: Connection, scalars: Mapping[int, Sequence[Value]]) -> Connection:
    """The connection with ``scalars[i][k]`` times the identity added to coefficient k of pole i.

    The residues of the twist must add up to 0 (Refused otherwise).
    """
    rest = total(values[0] for values in scalars.values() if values)
    if rest:
        raise Refused("The residues of a twist have to add up to 0.")
    values = [value for row in scalars.values() for value in row]
    if connection.kind == "exact":
        exact = exact_parts(connection, values)
        poles = poles_of(
            [pole.at for pole in connection.poles],
            [twisted(part, scalars.get(number, ())) for number, part in enumerate(exact)],
        )
    else:
        floating = floating_parts(connection)
        poles = poles_of(
            [pole.at for pole in connection.poles],
            [twisted(part, scalars.get(number, ())) for number, part in enumerate(floating)],
        )
    more = sorted({name for value in values for name in value.symbols()} - set(connection.symbols))
    return replace(connection, poles=poles, symbols=(*connection.symbols, *more), verification=())
