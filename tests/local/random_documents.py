"""Random valid problem documents: every feature of the format in some of them.

Written with plain pseudo-random choices, so that thousands are cheap; ``documents`` and ``problems`` hand them to
hypothesis by their seed.
"""

from fractions import Fraction
from random import Random
from typing import Any

from hypothesis import strategies as st

from app.errors import Refused
from app.local.document import problem_from_json
from app.local.problem import Problem

SYMBOLS = ("a", "b", "x_1", "α", "Ω2", "é", "_c")
POSITIONS = ("t1", "t2", "τ")
_NAME_CHARACTERS = "ab Z'\"\\/<>&{}\n\t\u00e9\u2028\U0001f600∞\u0000"
_FACTORS = [f"{name}^{power}" if power > 1 else name for name in SYMBOLS for power in (1, 2, 3)]
_CONSTANTS = ["i", "sqrt(2)", "sqrt(-3)", "sqrt(8/9)", "1.25", "(1+i)", "2^3"]


def random_fraction(random: Random) -> Fraction:
    """A small rational, often an integer."""
    return Fraction(random.randint(-9, 9), random.choice((1, 1, 1, 2, 3, 7)))


def number_text(random: Random) -> str:
    """A number in some spelling: blanks, signs, decimals, roots, powers of symbols."""
    if random.random() < 0.4:
        return str(random.choice((random_fraction(random), random.choice(SYMBOLS))))
    pieces = []
    for _ in range(random.randint(1, 3)):
        monomial = "*".join(random.choices(_FACTORS + _CONSTANTS, k=random.randint(0, 3)))
        coefficient = str(random_fraction(random))
        pieces.append(f"({coefficient})*{monomial}" if monomial and random.random() < 0.5 else monomial or coefficient)
    return random.choice((" + ", "-", " -")).join(pieces)


def _partition(random: Random, total: int) -> list[int]:
    parts = []
    while total:
        parts.append(random.randint(1, total))
        total -= parts[-1]
    random.shuffle(parts)
    return parts


def _residue(random: Random, multiplicity: int) -> list[dict[str, Any]]:
    return [
        {"value": random.choice((number_text(random), random.randint(-20, 20))), "jordan": _partition(random, size)}
        for size in _partition(random, multiplicity)
    ]


def _exponent(random: Random, ramification: int) -> dict[str, Any]:
    if ramification == 1:
        return {str(power): number_text(random) for power in random.sample(range(1, 5), random.randint(0, 3))}
    numerators = [k for k in range(1, 8) if Fraction(k, ramification).denominator == ramification]
    first = Fraction(random.choice(numerators), ramification)
    nonzero = random.choice(("1", "-1/2", "i", "-sqrt(2)", "a", f"2 + ({number_text(random)})*b"))
    exponent = {str(first): nonzero}
    if random.random() < 0.5:
        exponent[str(first + Fraction(1, ramification))] = number_text(random)
    return exponent


def _blocks(random: Random, rank: int, log: bool, ramified: bool) -> list[dict[str, Any]]:
    if log:
        return [{"exponent": {}, "residue": _residue(random, rank)}]
    blocks: list[dict[str, Any]] = []
    while rank:
        index = random.choice([k for k in (1, 1, 2, 3, 4) if k <= rank and (ramified or k == 1)])
        multiplicity = random.randint(1, rank // index)
        blocks.append({"exponent": _exponent(random, index), "residue": _residue(random, multiplicity)})
        rank -= index * multiplicity
    return blocks


def random_document(random: Random, ramified: bool = True) -> dict[str, Any]:
    """A document of rank ≤ 5; it may be refused, but only because two drawn values happen to be equal."""
    rank, count = random.randint(1, 5), random.randint(1, 4)
    monodromy = random.random() < 0.15
    places = random.sample(["0", "1", "-1/2", "sqrt(2)+i", "infinity", *POSITIONS], count)
    poles = [
        {"at": place, "blocks": _blocks(random, rank, monodromy or random.random() < 0.5, ramified)} for place in places
    ]
    document: dict[str, Any] = {
        "format": "polewright-problem/1",
        "name": "".join(random.choices(_NAME_CHARACTERS, k=random.randint(0, 12))),
        "symbols": random.sample(SYMBOLS + POSITIONS, len(SYMBOLS + POSITIONS)),
        "poles": poles,
    }
    if random.random() < 0.5:
        document["base"] = random.randrange(count)
    if random.random() < 0.5:
        document["notes"] = "".join(random.choices(_NAME_CHARACTERS, k=30))
    blocks = [block for pole in poles for block in pole["blocks"]]
    if monodromy:
        for block in blocks:
            block["local_monodromy"] = block.pop("residue")
    elif random.random() < 0.5:
        random.choice(random.choice(blocks)["residue"])["value"] = "*"
    return document


def random_problem(random: Random, ramified: bool = True) -> Problem:
    """The problem of a random document; documents with values that happen to be equal are drawn again."""
    while True:
        try:
            return problem_from_json(random_document(random, ramified))
        except Refused as refusal:
            if not any("equal" in place.message or "conjugate" in place.message for place in refusal.places):
                raise


def documents(ramified: bool = True) -> st.SearchStrategy[dict[str, Any]]:
    """Random documents, by seed."""
    return st.integers(0, 2**64).map(lambda seed: random_document(Random(seed), ramified))


def problems(ramified: bool = True) -> st.SearchStrategy[Problem]:
    """Random problems, by seed."""
    return st.integers(0, 2**64).map(lambda seed: random_problem(Random(seed), ramified))


def number_texts() -> st.SearchStrategy[str]:
    """Random numbers, by seed."""
    return st.integers(0, 2**64).map(lambda seed: number_text(Random(seed)))
