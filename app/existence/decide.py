"""The decision α ∈ Σ_λ for a quiver with parameters, in polynomial time.

1. λ·α must vanish (the Fuchs relation).
2. Reflections bring α to the fundamental set; one whose parameter vanishes splits its vertex off.
3. In the fundamental set the shapes of ``fundamental.py`` are the only exceptions.

With one pole that has core vertices these are theorems [Crawley-Boevey, Compositio Math. 126 (2001); for the
multiplicative problem Crawley-Boevey and Shaw, Adv. Math. 201 (2006)].  With several, step 3 is a criterion that is
checked by enumeration where the reduced vector is small, and called a criterion where it is not.

Every "no" comes with a decomposition or a failed root test, so it is proved in every case
[Hiroe, Duke Math. J. 166 (2017)].
"""

from collections.abc import Sequence

from app.exact.number import write_number
from app.exact.value import Value
from app.existence.enumeration import best_decomposition, is_small
from app.existence.fundamental import Obstruction, obstruction, order_of
from app.existence.verdict import (
    Criterion,
    Decomposition,
    FuchsDefect,
    NotARoot,
    Part,
    Reflections,
    Step,
    Verdict,
)
from app.roots.form import core_groups, evaluate, p_of, pairing
from app.roots.positive import root_class
from app.roots.quiver import Quiver, Vector
from app.roots.reduction import CoreMove, Move, Reduction, pull_back

SYSTEM = "system"
MONODROMY = "local system"


def decide(quiver: Quiver, reduction: Reduction, *, modulo_integers: bool = False) -> Verdict:
    """The verdict on the quiver's (α, λ), given its reduction (made with the same ``modulo_integers``).

    Cost: beyond the reduction, the number of edges for every bridge; at most 2,000 vectors are enumerated, and only
    when several poles have core vertices.
    """
    return _Judge(quiver, reduction, modulo_integers).verdict()


def steps_of(quiver: Quiver, moves: Sequence[Move]) -> tuple[Step, ...]:
    """The moves of a reduction in the words of a certificate: ids, or tuples of ids."""

    def step(vertices: tuple[int, ...]) -> Step:
        ids = tuple(quiver.vertices[v].id for v in vertices)
        return ids[0] if len(ids) == 1 else ids

    return tuple(step(move.vertices) for move in moves)


class _Judge:
    """One decision: the values that its steps share."""

    def __init__(self, quiver: Quiver, reduction: Reduction, modulo: bool) -> None:
        self.quiver = quiver
        self.reduction = reduction
        self.modulo = modulo
        self.thing = MONODROMY if modulo else SYSTEM
        self.steps = steps_of(quiver, reduction.moves)

    def verdict(self) -> Verdict:
        defect = -evaluate(self.quiver.parameters, self.quiver.dimension)
        if order_of(defect, modulo_integers=self.modulo) != 1:
            return self._no(self._fuchs_words(defect), FuchsDefect(defect))
        reduction = self.reduction
        if reduction.outcome == "negative":
            return self._no(
                f"{self._lead()} to a negative dimension, so the dimension vector is not a root and no irreducible "
                f"{self.thing} exists.",
                NotARoot(self.steps, reduction.dimension, "negative entry"),
            )
        if reduction.outcome == "disconnected" or not self._is_root():
            end = "with disconnected support" if reduction.outcome == "disconnected" else "that is no root"
            return self._no(
                f"{self._lead()} to a vector {end}, so the dimension vector is not a root and every {self.thing} "
                "with these data is reducible.",
                NotARoot(self.steps, reduction.dimension, "disconnected support"),
            )
        if reduction.blocked is not None:
            return self._split()
        if reduction.outcome == "real":
            words = f"{self._lead(' with non-zero parameter')} to rank one" if reduction.moves else "The rank is one"
            reason = f"{words}: the data are rigid, and the {self.thing} is unique up to isomorphism."
            return self._yes(reason, "coordinate vector")
        return self._fundamental()

    def _is_root(self) -> bool:
        """With one core pole the reduction decides; with several its end may still be moved by single reflections."""
        if self.reduction.outcome == "real" or len(core_groups(self.quiver)) == 1:
            return True
        return root_class(self.quiver, self.reduction.dimension) != "none"

    def _split(self) -> Verdict:
        """A reflection with vanishing parameter: α = s(α) + (α, ε)·ε, pulled back to the given vector."""
        blocked = self.reduction.blocked
        assert blocked is not None
        before = self.reduction.moves[: blocked.moves_before]
        unit = tuple(int(v in blocked.vertices) for v in range(len(self.quiver.vertices)))
        root = pull_back(self.quiver, before, unit)
        # reflections preserve the form, so the pairing of α with the pulled-back root is the pairing at that stage
        height = pairing(self.quiver, self.quiver.dimension, root)
        rest = tuple(a - height * b for a, b in zip(self.quiver.dimension, root, strict=True))
        ids = " + ".join(self.quiver.vertices[v].id for v in blocked.vertices)
        vanishes = "is an integer" if self.modulo else "is 0"
        reason = (
            f"{self._lead(moves=blocked.moves_before)} to a stage where the parameter at {ids} {vanishes} "
            f"while the reflection there would lower the dimension: that vertex splits off, and every {self.thing} "
            "with these data is reducible."
        )
        return self._no(reason, self._decomposition(((1, rest), (height, root)), "vanishing parameter"))

    def _fundamental(self) -> Verdict:
        reduction = self.reduction
        found = obstruction(self.quiver, reduction.dimension, self._value, modulo_integers=self.modulo)
        if found is not None:
            return self._obstructed(found)
        parameters = 2 * p_of(self.quiver, self.quiver.dimension)
        family = f"the irreducible {self.thing}s form a smooth connected family of dimension {parameters}"
        if len(core_groups(self.quiver)) == 1:
            words = f"{self._lead(' with non-zero parameter')} to the fundamental set"
            if not reduction.moves:
                words = "The dimension vector lies in the fundamental set"
            return self._yes(f"{words}, and none of the exceptions there applies: {family}.", "fundamental set")
        return self._several_poles(family)

    def _value(self, vector: Vector) -> Value:
        """The reduced parameters on a vector: λ on the vector that the moves bring to it."""
        return evaluate(self.quiver.parameters, pull_back(self.quiver, self.reduction.moves, vector))

    def _several_poles(self, family: str) -> Verdict:
        reduction = self.reduction
        if not is_small(reduction.dimension):
            reason = (
                "The reduced vector lies in the fundamental set and none of the known exceptions applies; for several "
                f"irregular poles this criterion is checked but not proved. By it {family}."
            )
            return self._yes(reason, "fundamental set, several poles", proved=False)
        best = best_decomposition(self.quiver, reduction.dimension, self._value, modulo_integers=self.modulo)
        total = sum(count * p_of(self.quiver, part) for count, part in best or ())
        if best is not None and total >= p_of(self.quiver, reduction.dimension):
            return self._obstructed(Obstruction(best, "enumeration"))
        return self._yes(
            f"All decompositions of the reduced vector were enumerated and none reaches its p: {family}.", "enumeration"
        )

    def _obstructed(self, found: Obstruction) -> Verdict:
        parts = tuple((count, pull_back(self.quiver, self.reduction.moves, vector)) for count, vector in found.parts)
        return self._no(
            _OBSTRUCTION_WORDS[found.criterion].format(thing=self.thing), self._decomposition(parts, found.criterion)
        )

    def _decomposition(self, parts: tuple[tuple[int, Vector], ...], criterion: Criterion) -> Decomposition:
        return Decomposition(
            tuple(Part(count, vector, p_of(self.quiver, vector)) for count, vector in parts), criterion
        )

    def _no(self, reason: str, certificate: Decomposition | NotARoot | FuchsDefect) -> Verdict:
        return Verdict(False, "refuted", reason, certificate, self.quiver, self.modulo)

    def _yes(self, reason: str, criterion: Criterion, *, proved: bool = True) -> Verdict:
        certificate = Reflections(self.steps, self.reduction.dimension, criterion)
        return Verdict(True, "proved" if proved else "criterion", reason, certificate, self.quiver, self.modulo)

    def _fuchs_words(self, defect: Value) -> str:
        value = write_number(defect)
        if self.modulo:
            return (
                f"The exponents θ sum to {value}, which is not an integer, so the determinants of the local "
                "monodromies do not multiply to 1 and no local system exists."
            )
        return f"The traces of the residues sum to {value} instead of 0 (Fuchs relation), so no system exists."

    def _lead(self, qualifier: str = "", moves: int | None = None) -> str:
        """ "Two core reflections lead", for the moves made so far, with a qualifier before the verb."""
        made = self.reduction.moves if moves is None else self.reduction.moves[:moves]
        number = sum(isinstance(move, CoreMove) for move in made)
        if number == 0:
            return "The eigenvalues in descending order of multiplicity lead"
        words = "One core reflection" if number == 1 else f"{number} core reflections"
        return f"{words}{qualifier} {'leads' if number == 1 else 'lead'}"


_OBSTRUCTION_WORDS: dict[Criterion, str] = {
    "multiple of an isotropic root": (
        "The reduced vector is a proper multiple of an isotropic root on which the parameters vanish, so every "
        "{thing} with these data is reducible."
    ),
    "bridge": (
        "The reduced diagram falls into two parts over a bridge of dimension 1 and the parameters vanish on each part, "
        "so every {thing} with these data is reducible."
    ),
    "affine end": (
        "Behind a bridge of the reduced diagram stands a multiple of an isotropic root on which the parameters vanish; "
        "it splits off, so every {thing} with these data is reducible."
    ),
    "enumeration": (
        "The reduced vector is a sum of roots on which the parameters vanish and whose p reach its own, so every "
        "{thing} with these data is reducible."
    ),
}
