"""Reflections of a problem: twist, middle convolution, twist back.

At every pole a block and one of its eigenvalues are chosen.  The twist that makes that exponent and that eigenvalue 0
leaves residues with sum λ(ε)·1, where λ(ε) = −Σ (chosen eigenvalues); the middle convolution with μ = −λ(ε) follows.
It keeps the exponents, moves every other eigenvalue of a block with exponent of slope s by (s + 1)μ (μ for s = 0), and
changes the multiplicity of the chosen eigenvalue by −(α, ε).  The residues then add up to −λ(ε)·1, and the twist back
makes that 0: the chosen eigenvalue of every core pole other than the base grows by λ(ε), that of the base by
(2 − p)λ(ε) with p the number of these other core poles, and those of one-block poles stay.  With this choice the
parameters of the new problem's quiver are exactly λ_v − (e_v, ε)λ(ε), as its vector is α − (α, ε)ε.

A chosen block or eigenvalue may be new (multiplicity 0 before), and may vanish.  Of an eigenvalue with Jordan blocks
the first place of its leg is chosen; the other places move like other eigenvalues.

Sources: Dettweiler and Reiter, J. Algebra 318 (2007) for log poles; Hiroe, Duke Math. J. 166 (2017).
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from app.exact.number import write_number
from app.exact.value import ZERO, Value, total
from app.local.formal_type import Block, Exponent, Pole
from app.local.problem import Problem
from app.operations.classes import class_of_slots, same_value
from app.operations.reordering import exchange
from app.operations.result import Result, checked, refusal, with_base_kept
from app.roots.build import Slot, base_pole, slope_of_difference, slots


@dataclass(frozen=True)
class Choice:
    """At one pole: the exponent and the eigenvalue that the twist makes 0; either may be absent from the problem."""

    exponent: Exponent
    value: Value


@dataclass(frozen=True)
class Reflected(Result):
    """A ``Result`` with λ(ε), (α, ε), and the choices whose reflection leads back."""

    parameter: Value = ZERO
    pairing: int = 0
    back: tuple[Choice, ...] = ()


def reflect(problem: Problem, vertices: Sequence[str]) -> Result:
    """The reflection at a vertex of the problem's quiver, or at ε, a sum of one core vertex of every core pole.

    One leg vertex: the exchange of two neighbouring eigenvalues.  Core vertices, one of each pole that has some: the
    reflection with the first eigenvalue of each chosen block, and of each one-block pole.  Ids as in ``roots/quiver``.
    Raises ``Refused`` naming the condition that fails.
    """
    ids = [_numbers(vertex) for vertex in vertices]
    if len(ids) == 1 and len(ids[0]) == 3:
        return exchange(problem, *ids[0])
    return reflect_at(problem, first_choices(problem, vertices))


def first_choices(problem: Problem, vertices: Sequence[str]) -> tuple[Choice, ...]:
    """The choices of a reflection at core vertices: the first eigenvalue of these blocks and of one-block poles."""
    _refuse_ramified(problem)
    base = base_pole(problem)
    core = [i for i, pole in enumerate(problem.poles) if i == base or len(pole.blocks) > 1]
    chosen: dict[int, int] = {}
    for vertex in vertices:
        numbers = _numbers(vertex)
        known = len(numbers) == 2 and numbers[0] in core and numbers[1] < len(problem.poles[numbers[0]].blocks)
        if not known or numbers[0] in chosen:
            raise refusal(f"{vertex} is not one more core vertex of the quiver.", "one core vertex of each core pole")
        chosen[numbers[0]] = numbers[1]
    missing = [str(i + 1) for i in core if i not in chosen]
    if missing:
        raise refusal(
            f"With core vertices at several poles a reflection takes one of each; none is chosen at pole "
            f"{' and '.join(missing)}.",
            "one core vertex of each core pole",
        )
    blocks = [pole.blocks[chosen.get(i, 0)] for i, pole in enumerate(problem.poles)]
    return tuple(Choice(block.exponent, block.residue[0].value) for block in blocks)


def reflect_at(problem: Problem, choices: Sequence[Choice]) -> Reflected:
    """The reflection with these choices, one for every pole, as a twist, a middle convolution and a twist back.

    Hypotheses: no block is ramified.  Raises ``Refused`` when the Fuchs relation fails, when λ(ε) is 0 (an integer,
    where local monodromies are given), and when a multiplicity would become negative or a class impossible: in the last
    two cases no irreducible system has the given data.
    Cost: for every pole the number of blocks and eigenvalues.
    """
    _refuse_ramified(problem)
    if len(choices) != len(problem.poles):
        raise refusal("A reflection takes one choice for every pole.")
    defect = problem.trace_sum
    modular = problem.reading == "local_monodromy"
    if not (defect.is_integer if modular else defect.is_zero):
        raise refusal("The Fuchs relation fails, so there is no connection to convolve.", "traces that sum to 0")
    parameter = -total(choice.value for choice in choices)
    if parameter.is_integer if modular else parameter.is_zero:
        raise refusal(
            f"The parameter λ(ε) is {write_number(parameter)}, so the middle convolution would have μ = 0 and change "
            "nothing: there is no reflection here.",
            "chosen eigenvalues whose sum is not 0" if not modular else "chosen exponents whose sum is no integer",
        )
    sites = [_Site(pole, choice, problem) for pole, choice in zip(problem.poles, choices, strict=True)]
    gain = sum(site.dimension for site in sites) - 2 * problem.rank
    if problem.rank + gain < 1:
        raise refusal(f"The rank would become {problem.rank + gain}.", "a reflection after which the rank is positive")
    base = base_pole(problem)
    others = sum(site.is_core and number != base for number, site in enumerate(sites))
    shifts = [
        parameter * (2 - others) if number == base else parameter if site.is_core else ZERO
        for number, site in enumerate(sites)
    ]
    poles = tuple(
        site.convolved(gain, -parameter, shift, n + 1)
        for n, (site, shift) in enumerate(zip(sites, shifts, strict=True))
    )
    reflected = with_base_kept(replace(problem, poles=poles, forced=None), base)
    return Reflected(
        checked(reflected),
        _words(problem, sites, shifts, parameter, gain),
        f"λ(ε) = {write_number(parameter, problem.symbols)} is not {'an integer' if modular else '0'}.",
        parameter,
        -gain,
        tuple(Choice(c.exponent, c.value + shift) for c, shift in zip(choices, shifts, strict=True)),
    )


class _Site:
    """One pole with its choice: which block and place of the leg it is, and what the realisation needs there."""

    def __init__(self, pole: Pole, choice: Choice, problem: Problem) -> None:
        self.pole = pole
        self.choice = choice
        self.reading = problem.reading
        self.block = next((j for j, b in enumerate(pole.blocks) if b.exponent == choice.exponent), None)
        self.places = slots(pole.blocks[self.block]) if self.block is not None else ()
        key = same_value(choice.value, self.reading)
        self.place = next((k for k, s in enumerate(self.places) if same_value(s.value, self.reading) == key), None)
        self.drop = self.places[self.place].drop if self.place is not None else 0

    @property
    def is_core(self) -> bool:
        """Whether the pole has several blocks, a new chosen one counted."""
        return len(self.pole.blocks) + (self.block is None) > 1

    @property
    def dimension(self) -> int:
        """dim W of the minimal realisation after the twist: Σ m_j(s_j + 1) over other blocks, and the rank of L."""
        own = sum(slot.drop for slot in self.places) - self.drop
        return own + sum(
            block.multiplicity * (slope_of_difference(block.exponent, self.choice.exponent) + 1)
            for number, block in enumerate(self.pole.blocks)
            if number != self.block
        )

    def convolved(self, gain: int, mu: Value, shift: Value, number: int) -> Pole:
        """The formal type after the convolution and the twist back, which moves the chosen eigenvalue by ``shift``."""
        if self.drop + gain < 0:
            raise refusal(
                f"At pole {number} the multiplicity of the chosen eigenvalue would become {self.drop + gain}, so no "
                "irreducible system has the given data.",
                "data of an irreducible system",
            )
        blocks = []
        for index, block in enumerate(self.pole.blocks):
            if index == self.block:
                blocks += self._chosen_block(gain, mu + shift, shift, number)
                continue
            slope = slope_of_difference(block.exponent, self.choice.exponent)
            moved = tuple(replace(e, value=e.value + mu * (slope + 1) + shift) for e in block.residue)
            blocks.append(Block(block.exponent, moved))
        if self.block is None:
            blocks += self._chosen_block(gain, mu + shift, shift, number)
        return replace(self.pole, blocks=tuple(blocks))

    def _chosen_block(self, gain: int, other: Value, shift: Value, number: int) -> list[Block]:
        """The chosen block, if it does not vanish: the chosen place first, all others moved by ``other``."""
        moved = [Slot(s.value + other, s.drop) for k, s in enumerate(self.places) if k != self.place]
        first = Slot(self.choice.value + shift, self.drop + gain)
        residue = class_of_slots([first, *moved], self.reading, f"Pole {number}")
        return [Block(self.choice.exponent, residue)] if residue else []


def _words(problem: Problem, sites: Sequence[_Site], shifts: Sequence[Value], parameter: Value, gain: int) -> str:
    """What happens to the connection, in one sentence each for twist, convolution and twist back."""
    chosen = []
    for number, site in enumerate(sites):
        text = f"the eigenvalue {write_number(site.choice.value, problem.symbols)} at pole {number + 1}"
        if site.block is None:
            text = f"a new exponent at pole {number + 1}"
        elif site.is_core:
            text = f"the exponent and {text} (block {site.block + 1})"
        elif not site.choice.exponent.is_zero:
            text = f"the exponent and {text}"
        chosen.append(text + (" (new there)" if site.place is None and site.block is not None else ""))
    back = [
        f"{write_number(shift, problem.symbols)} at pole {number + 1}" for number, shift in enumerate(shifts) if shift
    ]
    more = f", the residues moved by {' and '.join(back)} besides so that they add up to 0" if back else ""
    kind = "Tensor with a local system of rank one" if problem.reading == "local_monodromy" else "Twist"
    return (
        f"{kind} so that {', '.join(chosen)} become 0; middle convolution with "
        f"μ = {write_number(-parameter, problem.symbols)}; twist back{more}. "
        f"Rank {problem.rank} → {problem.rank + gain}."
    )


def _numbers(vertex: str) -> tuple[int, ...]:
    """The indices in a vertex id: pole and block, and the place along the leg for a leg vertex."""
    parts = vertex.split(".")
    if len(parts) not in (2, 3) or not all(part.isascii() and part.isdigit() and len(part) < 6 for part in parts):
        raise refusal(
            f"{vertex[:40]!r} is no vertex.", "pole.block for a core vertex, pole.block.place for a leg vertex"
        )
    return tuple(int(part) for part in parts)


def _refuse_ramified(problem: Problem) -> None:
    if problem.ramified:
        raise refusal("The reflection is defined for unramified data.", "exponents with integer powers")
