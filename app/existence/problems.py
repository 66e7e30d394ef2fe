"""Additive and multiplicative verdicts of a problem.

Additive: is there an irreducible system on the trivial bundle with exactly these orbits?  Multiplicative (log poles
only): is there an irreducible local system with these classes of local monodromy?  For residues the multiplicative
problem is that of the classes of exp(2πi·residue): eigenvalues that differ by an integer merge, their Jordan blocks
side by side.
"""

from dataclasses import replace

from app.exact.value import Value, modulo_one
from app.existence.decide import decide
from app.existence.ramified import ramified_verdict
from app.existence.verdict import Verdict
from app.local.formal_type import Block, Eigenvalue, Pole
from app.local.problem import Problem
from app.roots.build import quiver_of
from app.roots.quiver import Quiver
from app.roots.reduction import Reduction, reduce


def additive_verdict(problem: Problem, quiver: Quiver | None, reduction: Reduction | None) -> Verdict | None:
    """The verdict on irreducible systems, None where local monodromies are given instead of residues.

    ``quiver`` and ``reduction`` are those of the problem, None for ramified data.
    """
    if problem.reading == "local_monodromy":
        return None
    if quiver is None or reduction is None:
        return ramified_verdict(problem)
    return decide(quiver, reduction)


def multiplicative_verdict(problem: Problem, quiver: Quiver | None) -> Verdict | None:
    """The verdict on irreducible local systems, None where some pole is irregular.

    ``quiver`` is that of the problem.  Merged classes have a quiver of their own, which the verdict carries.
    Source: Crawley-Boevey and Shaw, Adv. Math. 201 (2006); Crawley-Boevey, arXiv:2509.11998; Shu, arXiv:2509.11841.
    """
    if not problem.all_log:
        return None
    merged = local_monodromy_problem(problem)
    if quiver is None or merged.poles != problem.poles:
        quiver = quiver_of(merged)
    return decide(quiver, reduce(quiver, modulo_integers=True), modulo_integers=True)


def local_monodromy_problem(problem: Problem) -> Problem:
    """The problem of the classes of exp(2πi·residue), with the first of merged eigenvalues standing for all of them.

    Without resonance these are the classes of the local monodromies; with it they only lie in their closures.
    """
    poles = tuple(Pole(pole.at, tuple(_merged(block) for block in pole.blocks)) for pole in problem.poles)
    return replace(problem, poles=poles, reading="local_monodromy", forced=None)


def _merged(block: Block) -> Block:
    classes: dict[Value, Eigenvalue] = {}
    for eigenvalue in block.residue:
        key = modulo_one(eigenvalue.value)
        if key in classes:
            known = classes[key]
            jordan = tuple(sorted((*known.jordan, *eigenvalue.jordan), reverse=True))
            classes[key] = Eigenvalue(known.value, jordan)
        else:
            classes[key] = eigenvalue
    return Block(block.exponent, tuple(classes.values()))
