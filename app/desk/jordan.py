"""Jordan block sizes as a text: a sum, 2+1, in which 1^4 stands for 1+1+1+1.

parse_jordan(text)   sizes in descending order
write_jordan(sizes)  the text
"""

import re
from collections.abc import Sequence
from itertools import groupby

from app.errors import NumberFault
from app.exact.names import shown

LIMIT = 400
_EXPECTED = "block sizes written as a sum, such as 2+1, or 1^4 for four blocks of size 1"
_TERM = re.compile(r"[ \t]*([0-9]{1,6})[ \t]*(?:\^[ \t]*([0-9]{1,6})[ \t]*)?")
_SHORTEST_RUN = 4


def parse_jordan(text: str) -> tuple[int, ...]:
    """Block sizes in descending order, all positive, their sum at most 400 (the largest rank).

    Raises NumberFault with the place in the text.  Cost: linear in the text and in the sum.

    >>> parse_jordan("1^2+2")
    (2, 1, 1)
    """
    if not text.strip():
        raise NumberFault("No block sizes are given", 0, _EXPECTED)
    sizes: list[int] = []
    position = total = 0
    while True:
        match = _TERM.match(text, position)
        if match is None:
            raise NumberFault("There is no block size here", position, _EXPECTED)
        size, count = int(match[1]), int(match[2] or 1)
        if size == 0 or count == 0:
            raise NumberFault("A block size and a number of blocks are at least 1", position, _EXPECTED)
        total += size * count
        if total > LIMIT:
            raise NumberFault(f"The block sizes add up to more than {LIMIT}", position, f"a sum of at most {LIMIT}")
        sizes.extend([size] * count)
        position = match.end()
        if position == len(text):
            return tuple(sorted(sizes, reverse=True))
        if text[position] != "+":
            raise NumberFault(f"{shown(text[position])} does not belong here", position, _EXPECTED)
        position += 1


def write_jordan(sizes: Sequence[int]) -> str:
    """The sizes as a sum, descending; four equal sizes and more as size^number.

    >>> write_jordan((2, 1, 1))
    '2+1+1'
    >>> write_jordan((1, 1, 1, 1))
    '1^4'
    """
    terms: list[str] = []
    for size, run in groupby(sorted(sizes, reverse=True)):
        count = len(list(run))
        terms.extend([f"{size}^{count}"] if count >= _SHORTEST_RUN else [str(size)] * count)
    return "+".join(terms)
