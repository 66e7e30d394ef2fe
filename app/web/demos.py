"""The demo problems: documents in one folder, offered on the page; the first is on the desk at the first start."""

import logging
from dataclasses import dataclass, replace
from pathlib import Path

from app.desk.draft import Draft
from app.desk.reading import draft_of
from app.errors import NotFound, PolewrightError
from app.local.document import read_document
from app.local.problem import Problem
from app.local.shorthand import problem_from_shorthand

FALLBACK = "11,11,11,11"
_log = logging.getLogger("polewright.web")


@dataclass(frozen=True)
class Demo:
    """One demo: its key (the file's name without ending) and the problem's name."""

    key: str
    name: str


class Demos:
    """The demo problems of a folder, in the order of their file names.

    All are read once, here; a file that is refused is left out, which the log says.
    """

    def __init__(self, folder: Path) -> None:
        self._problems: dict[str, Problem] = {}
        for path in sorted(folder.glob("*.json")):
            try:
                self._problems[path.stem] = read_document(path.read_bytes())
            except (OSError, PolewrightError) as error:
                _log.warning("the demo problem %s is left out: %s", path, error)
        self.entries = tuple(Demo(key, problem.name or key) for key, problem in self._problems.items())

    def draft(self, key: str, first_id: int = 1) -> Draft:
        """A draft of a demo, with ids counted from ``first_id``.

        Raises NotFound for an unknown key.
        """
        problem = self._problems.get(key)
        if problem is None:
            raise NotFound(f"There is no demo problem {key[:60]!r}.")
        return draft_of(problem, first_id)

    def first(self) -> Draft:
        """What stands on a new desk: the first demo, or four generic logarithmic poles of rank 2."""
        return self.draft(self.entries[0].key) if self.entries else new_draft()

    def is_name_of_demo(self, name: str) -> bool:
        """Whether a name is that of a demo, and so nobody's own."""
        return any(demo.name == name for demo in self.entries)


def new_draft(first_id: int = 1) -> Draft:
    """A small generic problem to begin with; nobody has named it yet."""
    return replace(draft_of(problem_from_shorthand(FALLBACK), first_id), name="")
