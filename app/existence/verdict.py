"""Verdicts and certificates.

A certificate is what a reader needs to check the verdict without this program:

    Reflections     the reflections that lead to a reduced vector, and the criterion that applies to it
    Decomposition   α as a sum of positive roots whose p add up to p(α) or more
    NotARoot        reflections that lead to a vector that no root can become
    FuchsDefect     the non-zero sum of the traces

Those of ramified data are in ``ramified_certificates.py``.

A step of a certificate is a vertex id (one reflection), several core ids (the reflection at their sum ε), or several
ids of one leg (reflections one after another: a reordering of eigenvalues).
"""

from dataclasses import dataclass
from typing import Literal

from app.exact.value import Value
from app.existence.ramified_certificates import RamifiedCertificate
from app.roots.quiver import Quiver, Vector

Status = Literal["proved", "refuted", "criterion", "evidence", "open"]
Step = str | tuple[str, ...]
Criterion = Literal[
    "coordinate vector",
    "fundamental set",
    "fundamental set, several poles",
    "enumeration",
    "vanishing parameter",
    "multiple of an isotropic root",
    "bridge",
    "affine end",
]
Failure = Literal["negative entry", "disconnected support", "negative p"]


@dataclass(frozen=True)
class Part:
    """A positive root with its multiplicity in a decomposition, and its p."""

    multiplicity: int
    vector: Vector
    p: int


@dataclass(frozen=True)
class Reflections:
    """Steps, the reduced vector in the order of the quiver's vertices, and why it is in Σ."""

    steps: tuple[Step, ...]
    reduced: Vector
    criterion: Criterion


@dataclass(frozen=True)
class Decomposition:
    """α = Σ multiplicity · vector with Σ multiplicity · p ≥ p(α); ``criterion`` says how it was found."""

    parts: tuple[Part, ...]
    criterion: Criterion


@dataclass(frozen=True)
class NotARoot:
    """Steps to a vector that shows that α is no positive root."""

    steps: tuple[Step, ...]
    reduced: Vector
    failure: Failure


@dataclass(frozen=True)
class FuchsDefect:
    """λ·α up to sign: the sum of the traces, which had to be 0 (or an integer for local monodromies)."""

    defect: Value


Certificate = Reflections | Decomposition | NotARoot | FuchsDefect


@dataclass(frozen=True)
class Verdict:
    """Whether an irreducible system (or irreducible monodromy) exists, how sure that is, and why.

    ``exists`` is None when nothing is decided.  ``quiver`` is the one that the certificate speaks of, None for
    ramified data.  ``modulo_integers`` marks the multiplicative problem.  ``ramified`` is a certificate that speaks of
    the problem's own ramified poles instead of a quiver.
    """

    exists: bool | None
    status: Status
    reason: str
    certificate: Certificate | None
    quiver: Quiver | None
    modulo_integers: bool = False
    ramified: RamifiedCertificate | None = None
