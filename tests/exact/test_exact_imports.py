"""Importing the room, and reading and writing ordinary numbers, loads no library of algebra."""

import pkgutil
import subprocess
import sys

import app.exact

HEAVY = ("flint", "sympy", "numpy", "networkx", "mpmath", "math_core", "fastapi")


def heavy_modules_after(code):
    program = f"import sys\n{code}\nprint(*[m for m in {HEAVY!r} if m in sys.modules])"
    run = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    return run.stdout.split()


def test_no_module_of_the_room_loads_a_library():
    modules = [module.name for module in pkgutil.iter_modules(app.exact.__path__)]
    assert {"value", "number", "relations", "linear", "latex", "approximate", "independence"} <= {*modules}
    assert heavy_modules_after("\n".join(f"import app.exact.{name}" for name in modules)) == []


def test_ordinary_numbers_need_no_library():
    code = (
        "from app.exact.number import parse_number, write_number\n"
        "write_number(parse_number('(a+sqrt(999/1000))^2/3-1/(1+i*sqrt(1000000))', {'a'}), ('a',))"
    )
    assert heavy_modules_after(code) == []


def test_large_radicands_do():
    code = "from app.exact.number import parse_number\nparse_number('sqrt(123456789123456)')"
    assert heavy_modules_after(code) == ["flint"]
