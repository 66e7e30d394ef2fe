"""Certificates checked by code of their own.

Nothing here calls the decision, the reduction, the shapes of the fundamental set or the forms of ``roots/``: a vector
is a plain list, the diagram a table of edges, and every claim of a certificate is worked out again from the quiver's
vertices and edges.  ``check`` returns the single claims with what was found, so that a page and the command line can
show them.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from math import gcd, prod

from app.exact.value import Value, total
from app.existence.verdict import Certificate, Decomposition, FuchsDefect, NotARoot, Reflections, Verdict
from app.roots.quiver import Quiver


@dataclass(frozen=True)
class Check:
    """One claim, whether it holds, and the figure found."""

    claim: str
    holds: bool
    figure: str = ""


def check(verdict: Verdict) -> tuple[Check, ...]:
    """Check a verdict's certificate against the verdict's quiver; empty when there is nothing to check.

    Cost: the reflections of the certificate on λ and α; for a decomposition a root test of every part.
    """
    if verdict.certificate is None or verdict.quiver is None:
        return ()
    return check_certificate(verdict.quiver, verdict.certificate, verdict.exists, verdict.modulo_integers)


def check_certificate(
    quiver: Quiver, certificate: Certificate, exists: bool | None, modulo_integers: bool
) -> tuple[Check, ...]:
    """Check that a certificate proves (or, for a criterion, supports) the stated answer for the quiver."""
    diagram = _Diagram(quiver, modulo_integers)
    match certificate:
        case FuchsDefect():
            found: tuple[Check, ...] = (diagram.claim_defect(certificate),)
            right_way = exists is False
        case Decomposition():
            found = diagram.claim_decomposition(certificate)
            right_way = exists is False
        case NotARoot():
            found = diagram.claim_not_a_root(certificate)
            right_way = exists is False
        case Reflections():
            found = diagram.claim_reflections(certificate)
            right_way = exists is True
    return (*found, Check("the kind of certificate fits the answer", right_way))


class _Diagram:
    """The quiver as plain tables, with the few operations that the claims need."""

    def __init__(self, quiver: Quiver, modulo_integers: bool) -> None:
        self.ids = {vertex.id: v for v, vertex in enumerate(quiver.vertices)}
        self.roles = [vertex.role for vertex in quiver.vertices]
        self.alpha = [vertex.dimension for vertex in quiver.vertices]
        self.values = [vertex.parameter for vertex in quiver.vertices]
        self.size = len(self.alpha)
        self.edges = quiver.edges
        self.rows: list[dict[int, int]] = [{} for _ in self.alpha]
        for a, b, count in quiver.edges:
            self.rows[a][b] = self.rows[a].get(b, 0) + count
            self.rows[b][a] = self.rows[b].get(a, 0) + count
        self.modulo_integers = modulo_integers
        poles = sorted({vertex.pole for vertex in quiver.vertices if vertex.role == "core"})
        self.groups = [
            [v for v, vertex in enumerate(quiver.vertices) if vertex.role == "core" and vertex.pole == pole]
            for pole in poles
        ]

    # the plain operations

    def vanishes(self, value: Value) -> bool:
        return value.is_integer if self.modulo_integers else not value

    def against(self, x: Sequence[int], v: int) -> int:
        return 2 * x[v] - sum(count * x[u] for u, count in self.rows[v].items())

    def p(self, x: Sequence[int]) -> int:
        return 1 - sum(n * n for n in x) + sum(count * x[a] * x[b] for a, b, count in self.edges)

    def dot(self, values: Sequence[Value], x: Sequence[int]) -> Value:
        return total(value * n for value, n in zip(values, x, strict=True) if n)

    def balanced(self, x: Sequence[int]) -> bool:
        return len({sum(x[v] for v in group) for group in self.groups}) <= 1

    def pieces(self, inside: set[int], without: tuple[int, int] | None = None) -> list[set[int]]:
        """Connected pieces of a vertex set, optionally with one edge taken out."""
        rest, found = set(inside), []
        while rest:
            grown = {rest.pop()}
            border = set(grown)
            while border:
                border = {u for v in border for u in self.rows[v] if u in rest and without not in ((u, v), (v, u))}
                rest -= border
                grown |= border
            found.append(grown)
        return found

    def is_root(self, vector: Sequence[int]) -> bool:
        """Kac's test, vertex after vertex in turn until nothing falls any more."""
        x = list(vector)
        if min(x) < 0 or not any(x):
            return False
        falling = True
        while falling:
            falling = False
            for v in range(self.size):
                height = self.against(x, v)
                if height > 0:
                    if sum(x) == x[v]:
                        return x[v] == 1
                    x[v] -= height
                    falling = True
                    if x[v] < 0:
                        return False
        return len(self.pieces({v for v in range(self.size) if x[v]})) == 1

    # the steps of a certificate

    def vertices_of(self, step: str | tuple[str, ...]) -> list[int]:
        return [self.ids[name] for name in ((step,) if isinstance(step, str) else step)]

    def is_proper(self, step: str | tuple[str, ...]) -> bool:
        """Whether a step is made of leg vertices alone, or is one core vertex of every pole that has some."""
        vertices = self.vertices_of(step)
        if all(self.roles[v] == "leg" for v in vertices):
            return True
        one_each = all(sum(v in group for v in vertices) == 1 for group in self.groups)
        return one_each and len(vertices) == len(self.groups)

    def replay(self, steps: Sequence[str | tuple[str, ...]]) -> tuple[list[int], list[Value], bool]:
        """Reflect α and λ along the steps; the last entry says whether every parameter on the way was non-zero."""
        x, values, clean = list(self.alpha), list(self.values), True
        for step in steps:
            vertices = self.vertices_of(step)
            together = all(self.roles[v] == "core" for v in vertices)
            for group in [vertices] if together else [[v] for v in vertices]:
                parameter = total(values[v] for v in group)
                clean = clean and not self.vanishes(parameter)
                height = sum(self.against(x, v) for v in group)
                weights: dict[int, int] = {}
                for v in group:
                    x[v] -= height
                    weights[v] = weights.get(v, 0) + 2
                    for u, count in self.rows[v].items():
                        weights[u] = weights.get(u, 0) - count
                for u, weight in weights.items():
                    values[u] = values[u] - parameter * weight
        return x, values, clean

    # the claims

    def claim_defect(self, certificate: FuchsDefect) -> Check:
        found = -self.dot(self.values, self.alpha)
        stated = found == certificate.defect
        return Check("the traces do not sum to what they must", stated and not self.vanishes(found))

    def claim_decomposition(self, certificate: Decomposition) -> tuple[Check, ...]:
        parts = certificate.parts
        if any(part.multiplicity < 1 or min(part.vector) < 0 for part in parts):
            return (Check("multiplicities are positive and dimensions not negative", False),)
        added = [sum(part.multiplicity * part.vector[v] for part in parts) for v in range(self.size)]
        if added != self.alpha:
            return (Check("the parts add up to α", False),)
        heights = sum(part.multiplicity * self.p(part.vector) for part in parts)
        return (
            Check("the parts add up to α", True),
            Check("there are two parts or more", sum(part.multiplicity for part in parts) >= 2),
            Check("every part is a positive root", all(self.is_root(part.vector) for part in parts)),
            Check("every part lies in the lattice", all(self.balanced(part.vector) for part in parts)),
            Check("λ vanishes on every part", all(self.vanishes(self.dot(self.values, p.vector)) for p in parts)),
            Check("every stated p is right", all(part.p == self.p(part.vector) for part in parts)),
            Check("Σ p ≥ p(α)", heights >= self.p(self.alpha), f"{heights} ≥ {self.p(self.alpha)}"),
        )

    def claim_not_a_root(self, certificate: NotARoot) -> tuple[Check, ...]:
        if certificate.failure == "negative p":
            return (Check("p(α) is negative", self.p(self.alpha) < 0, str(self.p(self.alpha))),)
        x, _, _ = self.replay(certificate.steps)
        proper = all(map(self.is_proper, certificate.steps))
        reached = Check("reflections lead to the stated vector", proper and x == list(certificate.reduced))
        if certificate.failure == "disconnected support":
            return (reached, Check("the vector reached is no root", not self.is_root(x)))
        # a root is positive or negative throughout, and so is its mirror image
        mixed = min(x) < 0 < max(x)
        return (
            reached,
            Check("a dimension is negative", min(x) < 0, str(min(x))),
            Check("the vector reached is no root", mixed or not self.is_root([-n for n in x])),
        )

    def claim_reflections(self, certificate: Reflections) -> tuple[Check, ...]:
        x, values, clean = self.replay(certificate.steps)
        checks = [
            Check("every step is a reflection of the lattice", all(map(self.is_proper, certificate.steps))),
            Check("the steps lead to the stated vector", x == list(certificate.reduced)),
            Check("no parameter vanishes on the way", clean),
            Check("λ vanishes on the vector reached", self.vanishes(self.dot(values, x))),
            Check("the vector reached lies in the lattice", self.balanced(x)),
        ]
        if certificate.criterion == "coordinate vector":
            return (*checks, Check("it is one core vertex of each pole, once", self.is_unit(x)))
        checks.append(Check("it lies in the fundamental set", self.is_fundamental(x)))
        checks.append(Check("its support is connected", len(self.pieces({v for v in range(self.size) if x[v]})) == 1))
        if certificate.criterion == "enumeration":
            checks.append(Check("no decomposition reaches its p", self.survives_enumeration(x, values)))
        else:
            checks.append(Check("no exception of the fundamental set applies", not self.is_exception(x, values)))
        return tuple(checks)

    def is_unit(self, x: Sequence[int]) -> bool:
        on_core = all(sorted(x[v] for v in group) == [0] * (len(group) - 1) + [1] for group in self.groups)
        return on_core and all(x[v] == 0 for v in range(self.size) if self.roles[v] == "leg")

    def is_fundamental(self, x: Sequence[int]) -> bool:
        highest = sum(max(self.against(x, v) for v in group) for group in self.groups)
        on_legs = all(self.against(x, v) <= 0 for v in range(self.size) if self.roles[v] == "leg")
        return min(x) >= 0 and highest <= 0 and on_legs

    def is_exception(self, x: list[int], values: list[Value]) -> bool:
        """Whether (I), (II) or (III) applies, by taking out single edges one after another."""
        multiple = gcd(*x)
        if self.p(x) == 1 and any(
            self.vanishes(self.dot(values, [n // multiple for n in x]) * r) for r in range(1, multiple)
        ):
            return True
        inside = {v for v in range(self.size) if x[v]}
        for a, b, count in self.edges:
            if count != 1 or not {a, b} <= inside or 1 not in (x[a], x[b]):
                continue
            pieces = self.pieces(inside, without=(a, b))
            if len(pieces) == 2 and any(self.splits(x, values, piece) for piece in pieces):
                return True
        return False

    def splits(self, x: list[int], values: list[Value], piece: set[int]) -> bool:
        """Whether the piece behind a bridge is cut off: by (II) if both ends are 1, by (III) if it is affine."""
        behind = [n if v in piece else 0 for v, n in enumerate(x)]
        front = [n - b for n, b in zip(x, behind, strict=True)]
        (end,) = [v for v in piece for u in self.rows[v] if front[u] and u not in piece]
        (other,) = [u for u in self.rows[end] if front[u]]
        if not (self.balanced(behind) and self.balanced(front)) or x[other] != 1:
            return False
        if x[end] == 1:
            return self.vanishes(self.dot(values, behind))
        multiple = gcd(*behind)
        delta = [n // multiple for n in behind]
        affine = multiple == x[end] and all(self.against(behind, v) == 0 for v in piece)
        return affine and self.balanced(delta) and self.vanishes(self.dot(values, delta))

    def survives_enumeration(self, x: list[int], values: list[Value]) -> bool:
        """Largest Σ p over all decompositions, by filling a table of all vectors below x in ascending order."""
        if prod(n + 1 for n in x) > 5_000:
            return False
        below: list[tuple[int, ...]] = [()]
        for n in x:
            below = [(*head, k) for head in below for k in range(n + 1)]
        admissible = [
            y
            for y in below
            if any(y) and list(y) != x and self.balanced(y) and self.vanishes(self.dot(values, y)) and self.is_root(y)
        ]
        best: dict[tuple[int, ...], int] = {below[0]: 0}
        for y in sorted(below, key=sum)[1:]:
            for root in admissible:
                rest = tuple(a - b for a, b in zip(y, root, strict=True))
                if rest in best:
                    best[y] = max(best.get(y, -1), best[rest] + self.p(root))
        return best.get(tuple(x), -1) < self.p(x)
