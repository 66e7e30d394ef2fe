"""Reading a document must not load heavy libraries: the command line answers in a quarter of a second."""

import subprocess
import sys
from pathlib import Path

import app.local

HEAVY = ("flint", "sympy", "numpy", "networkx", "pydantic", "fastapi", "scipy", "jinja2")


def test_no_heavy_imports() -> None:
    folder = Path(app.local.__path__[0])
    modules = sorted(f"app.local.{path.stem}" for path in folder.glob("*.py") if path.stem != "__init__")
    assert "app.local.document" in modules
    code = (
        f"import sys, {', '.join(modules)}\n"
        "from app.local.shorthand import problem_from_shorthand\n"
        "from app.local.document import read_document\n"
        "from app.local.writer import canonical_text\n"
        "read_document(canonical_text(problem_from_shorthand('((1))((1)),11')))\n"
        f"print([name for name in {HEAVY!r} if name in sys.modules])\n"
    )
    command = [sys.executable, "-c", code]
    finished = subprocess.run(command, capture_output=True, text=True, cwd=folder.parents[1], check=False)
    assert finished.stdout.strip() == "[]", finished.stderr
