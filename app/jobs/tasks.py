"""The tasks: top-level functions, JSON text in, JSON text out, so that they cross a process border as they are.

A refusal raised inside travels as a refusal; anything else is a fault of the program.  Heavy modules are imported
inside the tasks, so that the parent process never loads them.
"""

import json
from collections.abc import Callable

from app.progress import Progress

Task = Callable[[str, Progress], str]


def construct_connection(text: str, progress: Progress) -> str:
    """A connection for a problem: ``{"problem": …, "numeric": …, "seed": …}`` → the construction's JSON."""
    from app.connection.construction import construct
    from app.connection.text import construction_record
    from app.local.document import problem_from_json

    given = json.loads(text)
    problem = problem_from_json(given["problem"])
    built = construct(problem, numeric=bool(given["numeric"]), seed=int(given["seed"]), progress=progress)
    return json.dumps(construction_record(built), ensure_ascii=False)


TASKS: dict[str, Task] = {"construct": construct_connection}
"""Every task by its name."""
