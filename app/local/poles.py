"""The poles of a document: each read as far as possible, then what concerns several of them.

Distinct positions, distinct exponents within a pole, one rank everywhere, and the value that the Fuchs relation
forces on "*".
"""

from collections import Counter
from collections.abc import Sequence

from app.exact.bounded import check_size
from app.exact.limits import OverLimit
from app.exact.value import ZERO, Value, total
from app.local.blocks import BlockRead, BlockReader, check_keys, nonempty_list
from app.local.conjugates import Conjugate, conjugates
from app.local.faults import Faults
from app.local.formal_type import Block, Eigenvalue, Pole, Position
from app.local.limits import MAXIMUM_POLES, MAXIMUM_RANK
from app.local.numbers import Numbers
from app.local.problem import ForcedValue, Reading


class PolesReader:
    """Reads all poles, then checks what concerns several of them."""

    def __init__(self, numbers: Numbers, reading: Reading, faults: Faults) -> None:
        self._numbers = numbers
        self._reading = reading
        self._faults = faults
        self._blocks = BlockReader(numbers, reading, faults)
        self._positions: list[Position | None] = []
        self._read: list[list[BlockRead] | None] = []
        self._forced: ForcedValue | None = None
        self._forced_value: Value | None = None

    def all(self, data: object) -> None:
        """Read the list of poles and note every fault in it."""
        poles = nonempty_list(data, "/poles", self._faults, "poles")
        if poles is None:
            return
        if len(poles) > MAXIMUM_POLES:
            message = f"{len(poles)} poles are given, over the limit of {MAXIMUM_POLES}"
            self._faults.add("/poles", message, f"at most {MAXIMUM_POLES} poles")
            poles = poles[:MAXIMUM_POLES]
        for number, pole in enumerate(poles):
            self._pole(pole, f"/poles/{number}")
        self._check_positions()
        self._check_ranks()
        self._numbers.check_whole()
        self._solve_forced()

    def finished(self) -> tuple[tuple[Pole, ...], ForcedValue | None]:
        """The poles and the place of "*"; only after ``all`` found no fault."""
        poles = []
        for position, blocks in zip(self._positions, self._read, strict=True):
            if position is None or blocks is None:
                raise ValueError("poles with faults cannot be finished")
            poles.append(Pole(position, tuple(self._finished_block(block) for block in blocks)))
        return tuple(poles), self._forced

    def _finished_block(self, block: BlockRead) -> Block:
        if block.exponent is None or block.residue is None:
            raise ValueError("blocks with faults cannot be finished")
        residue = []
        for eigenvalue in block.residue:
            value = eigenvalue.value if isinstance(eigenvalue.value, Value) else self._forced_value
            if value is None or eigenvalue.jordan is None:
                raise ValueError("eigenvalues with faults cannot be finished")
            residue.append(Eigenvalue(value, eigenvalue.jordan))
        return Block(block.exponent, tuple(residue))

    def _pole(self, data: object, at: str) -> None:
        position, blocks = None, None
        if not isinstance(data, dict):
            self._faults.wrong_type(at, data, "an object with the keys at and blocks")
        else:
            check_keys(data, ("at", "blocks"), at, self._faults)
            if "at" in data:
                position = self._position(data["at"], f"{at}/at")
            else:
                self._faults.add(at, "The key at is missing", 'a position: a number, "infinity" or a symbol')
            if "blocks" in data:
                blocks = self._pole_blocks(data["blocks"], f"{at}/blocks")
            else:
                self._faults.add(at, "The key blocks is missing", "a list of blocks")
        self._positions.append(position)
        self._read.append(blocks)

    def _position(self, data: object, at: str) -> Position | None:
        if isinstance(data, str) and data.strip() == "infinity":
            return Position(None)
        value = self._numbers.read_position(data, at)
        if value is None:
            return None
        if not value.is_constant and value not in [Value.symbol(name) for name in value.symbols()]:
            message = "The position is an expression in symbols"
            self._faults.add(at, message, 'an exact number without symbols, "infinity", or one symbol alone')
            return None
        return Position(value)

    def _pole_blocks(self, data: object, at: str) -> list[BlockRead] | None:
        entries = nonempty_list(data, at, self._faults, "blocks")
        if entries is None:
            return None
        if len(entries) > MAXIMUM_RANK:
            message = f"{len(entries)} blocks make the rank larger than the limit of {MAXIMUM_RANK}"
            self._faults.add(at, message, f"a rank of at most {MAXIMUM_RANK}")
            return None
        if self._reading == "local_monodromy" and len(entries) > 1:
            message = "A local monodromy is given, but the pole has several blocks"
            self._faults.add(at, message, "one block with exponent {}")
        blocks = [self._blocks.read(entry, f"{at}/{number}") for number, entry in enumerate(entries)]
        self._check_exponents(blocks, at)
        return blocks

    def _check_exponents(self, blocks: Sequence[BlockRead], at: str) -> None:
        """Exponents of a pole must lie in different Galois orbits."""
        taken: dict[Conjugate, int] = {}
        size = 0
        for number, block in enumerate(blocks):
            if block.exponent is None:
                continue
            size += block.exponent.ramification
            if size > MAXIMUM_RANK:
                return
            orbit = conjugates(block.exponent)
            first = taken.get(orbit[0])
            if first is None:
                taken.update((conjugate, number) for conjugate in orbit)
                continue
            same = "equal" if blocks[first].exponent == block.exponent else "a Galois conjugate of"
            same += " to that" if same == "equal" else " that"
            self._faults.add(
                f"{at}/{number}/exponent",
                f"The exponent is {same} of the block at {at}/{first}",
                "one block for each exponent and its conjugates; eigenvalues of one exponent stand in one block",
            )

    def _check_positions(self) -> None:
        """Positions must be distinct, and a position that is a symbol may occur nowhere else."""
        open_positions = any(position and position.value and position.value.symbols() for position in self._positions)
        used = self._numbers.symbols_used() if open_positions else frozenset()
        seen: dict[Value | None, int] = {}
        for number, position in enumerate(self._positions):
            if position is None:
                continue
            first = seen.setdefault(position.value, number)
            if first != number:
                message = f"The position is equal to the one at /poles/{first}/at"
                self._faults.add(f"/poles/{number}/at", message, "distinct positions")
            elif position.value is not None and not used.isdisjoint(position.value.symbols()):
                message = "The symbol of this position also occurs in another number"
                self._faults.add(f"/poles/{number}/at", message, "a symbol used for this position alone")

    def _check_ranks(self) -> None:
        """All poles must have one rank, within the limit."""
        ranks = [_rank(blocks) for blocks in self._read]
        known = [rank for rank in ranks if rank is not None]
        if not known:
            return
        usual = Counter(known).most_common(1)[0][0]
        for number, rank in enumerate(ranks):
            if rank is None:
                continue
            if rank > MAXIMUM_RANK:
                shown = str(rank) if rank < 10**9 else "very large"
                message = f"The rank here is {shown}, over the limit of {MAXIMUM_RANK}"
                self._faults.add(f"/poles/{number}", message, f"a rank of at most {MAXIMUM_RANK}")
            elif rank != usual and usual <= MAXIMUM_RANK:
                message = f"The rank here is {rank}, but {usual} at /poles/{ranks.index(usual)}"
                self._faults.add(f"/poles/{number}", message, "one rank at all poles")

    def _solve_forced(self) -> None:
        """Find the value that the Fuchs relation forces on "*", if everything else is known."""
        parts: list[Value] = []
        place: tuple[int, int, int] | None = None
        weight = 0
        for pole, blocks in enumerate(self._read):
            for number, block in enumerate(blocks or []):
                if block.residue is None:
                    return
                for index, eigenvalue in enumerate(block.residue):
                    if eigenvalue.value is None or eigenvalue.jordan is None:
                        return
                    if isinstance(eigenvalue.value, Value):
                        parts.append(eigenvalue.value * sum(eigenvalue.jordan))
                    else:
                        place, weight = (pole, number, index), sum(eigenvalue.jordan)
        if place is None or None in self._read:
            return
        self._forced = ForcedValue(*place)
        self._forced_value = total(parts) / -weight
        self._check_forced(place)

    def _check_forced(self, place: tuple[int, int, int]) -> None:
        """The forced value must be within the limits and differ from the other eigenvalues of its block."""
        pole, number, index = place
        block = (self._read[pole] or [])[number]
        at = f"/poles/{pole}/blocks/{number}/residue"
        try:
            check_size(self._forced_value or ZERO)
        except OverLimit as fault:
            message = f'The value forced on "*" is too large: {fault.message[:1].lower()}{fault.message[1:]}'
            self._faults.add(f"{at}/{index}/value", message, "smaller or fewer eigenvalues")
        for other, eigenvalue in enumerate(block.residue or ()):
            if other != index and eigenvalue.value == self._forced_value:
                message = f'The value forced on "*" is equal to the eigenvalue at {at}/{other}/value'
                expected = "eigenvalues for which the forced value is another; or one entry with all Jordan blocks"
                self._faults.add(f"{at}/{index}/value", message, expected)


def _rank(blocks: Sequence[BlockRead] | None) -> int | None:
    """Rank of a pole, if every block of it could be read."""
    if blocks is None:
        return None
    ranks = [block.rank for block in blocks]
    return sum(rank for rank in ranks if rank is not None) if None not in ranks else None
