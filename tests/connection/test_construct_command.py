"""``python -m app construct``: what it prints, its exit status, and that examining stays light."""

import json
import subprocess
import sys

import pytest

from app.__main__ import main
from app.connection.document import connection_from_json
from app.local.shorthand import problem_from_shorthand
from app.local.writer import canonical_text


def test_text(capsys):
    assert main(["construct", "--type", "21,111,111"]) == 0
    out = capsys.readouterr().out
    assert out.startswith("Exact") and "irreducibility" in out and "FAILS" not in out


def test_json_of_a_file(tmp_path, capsys):
    path = tmp_path / "problem.json"
    path.write_text(canonical_text(problem_from_shorthand("(1)(1),11")), encoding="utf-8")
    assert main(["construct", str(path), "--json"]) == 0
    connection = connection_from_json(json.loads(capsys.readouterr().out))
    assert connection.verified and connection.kind == "exact"


def test_numeric_and_seed(capsys):
    texts = []
    for seed in ("1", "1", "2"):
        assert main(["construct", "--type", "11,11,11,11", "--numeric", "--seed", seed, "--json"]) == 0
        texts.append(capsys.readouterr().out)
    assert texts[0] == texts[1] != texts[2]
    assert json.loads(texts[0])["kind"] == "numerical"


def test_out_of_time(capsys):
    assert main(["construct", "--type", "41,11111,11111", "--time-limit", "0"]) == 3
    assert "time limit" in capsys.readouterr().err


@pytest.mark.parametrize("shorthand", ["21,11", "x"])
def test_refused(shorthand, capsys):
    assert main(["construct", "--type", shorthand]) == 1
    assert capsys.readouterr().err


def test_a_reducible_tuple_is_called_so(capsys):
    assert main(["construct", "--type", "22,22,22,22"]) == 0
    captured = capsys.readouterr()
    assert captured.out.startswith("No irreducible system exists")
    assert "Not every check" in captured.err


def test_exact_construction_needs_no_numpy_and_examining_neither():
    code = (
        "import sys\nfrom app.__main__ import main\n"
        "main(['examine', '--type', '11,11,11'])\n"
        "assert not {'numpy', 'sympy'} & set(sys.modules), 'examine'\n"
        "main(['construct', '--type', '21,111,111'])\n"
        "assert not {'numpy', 'sympy'} & set(sys.modules), 'construct'\n"
    )
    found = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert found.returncode == 0, found.stderr
