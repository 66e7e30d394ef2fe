"""What of a quiver is drawn one by one, and what only counted.

An *arm* is a vertex with the leg that runs outwards from it: a core vertex with the leg of its block, or a leg that is
joined to every base core vertex.  Long legs, long groups of arms and long lists of poles are folded alike: the first
few, a mark with the number left out, the last.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from app.roots.quiver import Quiver

LEG_SHOWN = 6
SMALL_LEG_SHOWN = 4
GROUP_SHOWN = 8
PLACES_SHOWN = 16
_FIRST = 3

Arm = tuple[int, ...]


@dataclass(frozen=True)
class Place:
    """A place round the middle: one arm that is drawn, or a mark for several that are not."""

    arms: tuple[Arm, ...]

    @property
    def is_mark(self) -> bool:
        """Whether the arms are counted and not drawn; a mark stands for two arms or more."""
        return len(self.arms) > 1


def arms_of(quiver: Quiver) -> list[list[Arm]]:
    """Arms in groups: base core vertices, core vertices of each other pole, legs joined to all of the base."""
    legs: dict[tuple[int, int], list[int]] = {}
    core: dict[int, list[int]] = {}
    for v, vertex in enumerate(quiver.vertices):
        if vertex.role == "core":
            core.setdefault(vertex.pole, []).append(v)
        else:
            legs.setdefault((vertex.pole, vertex.block), []).append(v)
    groups: list[list[Arm]] = []
    for members in core.values():
        keys = [(quiver.vertices[v].pole, quiver.vertices[v].block) for v in members]
        groups.append([(v, *legs.pop(key, ())) for v, key in zip(members, keys, strict=True)])
    shared = [tuple(leg) for leg in legs.values()]
    return [*groups, shared] if shared else groups


def ring_places(groups: Sequence[Sequence[Arm]]) -> list[Place]:
    """Places for groups of arms: at most ``PLACES_SHOWN``.

    Groups are folded beyond ``GROUP_SHOWN``; where that leaves too many places, all groups after the first are taken
    as two, core vertices and legs, and folded harder.
    """
    places = [place for group in groups for place in _folded(group, GROUP_SHOWN)]
    if len(places) > PLACES_SHOWN:
        places = [place for group in groups for place in _folded(group, _FIRST + 2)]
    if len(places) > PLACES_SHOWN:
        merged = [arm for group in groups[1:] for arm in group]
        places = _folded(groups[0], _FIRST + 2) + _folded(merged, PLACES_SHOWN - _FIRST - 2)
    return places


def star_places(arms: Sequence[Arm]) -> list[Place]:
    """Places for the arms of a star: at most ``PLACES_SHOWN``."""
    return _folded(arms, PLACES_SHOWN, first=PLACES_SHOWN - 2)


def shown_of_leg(leg: Sequence[int], most: int) -> list[int | None]:
    """The vertices of a leg, with None where some are left out."""
    if len(leg) <= most:
        return list(leg)
    # at least two vertices are left out: a mark for one would take the place of it
    return [*leg[: min(_FIRST, most - 2)], None, leg[-1]]


def words_for_mark(quiver: Quiver, arms: Sequence[Arm]) -> str:
    """What a mark stands for."""
    core = sum(quiver.vertices[arm[0]].role == "core" for arm in arms)
    total = sum(len(arm) for arm in arms)
    kinds = [f"{count} more {kind}" for count, kind in ((core, "core vertices"), (len(arms) - core, "legs")) if count]
    in_all = "" if total == core else f", {total} vertices in all,"
    return f"{' and '.join(kinds)}{in_all} are not drawn"


def _folded(group: Sequence[Arm], most: int, first: int = _FIRST) -> list[Place]:
    if len(group) <= most:
        return [Place((arm,)) for arm in group]
    return [*(Place((arm,)) for arm in group[:first]), Place(tuple(group[first:-1])), Place((group[-1],))]
