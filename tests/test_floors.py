"""Imports point downwards only: a room imports rooms on lower floors, and never a room beside it."""

import ast
from pathlib import Path

ROOT = Path(__file__).parent.parent
FLOORS = {
    "errors": 0,
    "progress": 0,
    "exact": 1,
    "local": 2,
    "roots": 3,
    "existence": 4,
    "operations": 4,
    "connection": 5,
    "findings": 7,
    "drawing": 7,
    "jobs": 8,
    "desk": 9,
    "web": 10,
    "__main__": 11,
}


def room_of(module: str) -> str | None:
    """The room of a module of the package; None for the package itself and for foreign modules."""
    parts = module.split(".")
    return parts[1] if parts[0] == "app" and len(parts) > 1 else None


def imports_of(path: Path) -> list[tuple[int, str]]:
    """Every imported module name with its line, imports inside functions included."""
    found = []
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found += [(node.lineno, alias.name) for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}:{node.lineno}: relative import"
            names = [f"{node.module}.{alias.name}" for alias in node.names] if node.module == "app" else [node.module]
            found += [(node.lineno, name) for name in names if name]
    return found


def upward_imports(path: Path, own: str) -> list[str]:
    wrong = []
    for line, name in imports_of(path):
        room = room_of(name)
        if room in (None, own, "PROGRAM", "NAME", "VERSION"):
            continue
        if FLOORS[room] >= FLOORS[own]:
            wrong.append(f"{path.relative_to(ROOT)}:{line}: {own} imports {room}")
    return wrong


def test_imports_point_downwards() -> None:
    wrong = []
    for path in sorted((ROOT / "app").rglob("*.py")):
        relative = path.relative_to(ROOT / "app")
        own = relative.parts[0].removesuffix(".py")
        if own != "__init__":
            wrong += upward_imports(path, own)
    assert not wrong, "\n".join(wrong)


def test_the_rule_can_fail() -> None:
    path = ROOT / "app" / "roots" / "quiver.py"
    assert upward_imports(path, "errors"), "an import of exact/ from the floor below has to be seen"


def test_every_room_says_what_it_is() -> None:
    for folder in (ROOT / "app").iterdir():
        if folder.is_dir() and folder.name in FLOORS:
            text = (folder / "__init__.py").read_text(encoding="utf-8")
            assert len(ast.get_docstring(ast.parse(text)) or "") > 80, folder


def test_top_level_entries() -> None:
    allowed = {"README.md", "DEVELOPERS.md", "pyproject.toml", "app", "templates", "static", "tests", "demo_data"}
    extra = {entry.name for entry in ROOT.iterdir() if not entry.name.startswith(".")} - allowed
    # what installing leaves behind
    assert not {name for name in extra if not name.endswith(".egg-info")} - {"build"}


def test_no_long_files_and_functions() -> None:
    """Files under 500 lines, functions under 60: a reader should see the whole of a thing."""
    wrong = []
    for path in sorted((ROOT / "app").rglob("*.py")):
        text = path.read_text(encoding="utf-8")
        if text.count("\n") > 500:
            wrong.append(f"{path.relative_to(ROOT)}: {text.count(chr(10))} lines")
        for node in ast.walk(ast.parse(text)):
            if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef) and (node.end_lineno or 0) - node.lineno > 60:
                wrong.append(f"{path.relative_to(ROOT)}: {node.name}")
    assert not wrong, "\n".join(wrong)
