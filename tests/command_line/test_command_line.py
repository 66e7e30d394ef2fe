"""The command line as a user runs it: output, error stream, exit status."""

import json
import subprocess
import sys
from pathlib import Path

import pytest

from app import PROGRAM


def log_pole(at: str, *values: str) -> dict[str, object]:
    return {"at": at, "blocks": [{"exponent": {}, "residue": [{"value": v, "jordan": [1]} for v in values]}]}


DOCUMENT = json.dumps(
    {
        "format": "polewright-problem/1",
        "name": "three log poles",
        "symbols": ["a"],
        "poles": [log_pole("0", "a", "0"), log_pole("1", "1/3", "0"), log_pole("infinity", "1/7", "*")],
    }
)


def run(*arguments: str, given: str = "") -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "app", *arguments], input=given, capture_output=True, text=True, timeout=60, check=False
    )


def test_a_document_as_text() -> None:
    done = run("examine", "-", given=DOCUMENT)
    assert done.returncode == 0 and done.stderr == ""
    assert "three log poles" in done.stdout and "Irreducible system: exists (proved)." in done.stdout
    assert "Riemann scheme" in done.stdout


def test_a_document_as_json_from_a_file(tmp_path: Path) -> None:
    file = tmp_path / "problem.json"
    file.write_text(DOCUMENT, encoding="utf-8")
    done = run("examine", str(file), "--json")
    found = json.loads(done.stdout)
    assert found["program"] == PROGRAM and found["rigidity_index"] == 2
    assert done.returncode == 0


def test_a_type_instead_of_a_file() -> None:
    found = json.loads(run("examine", "--type", "11,11,11,11", "--json").stdout)
    assert found["quiver"]["type"] == "D4^(1)" and found["dimension"] == 2


def test_json_lines_go_on_after_a_bad_line() -> None:
    done = run("examine", given=f'{DOCUMENT}\n\n{{"format": 7}}\nno json\n{DOCUMENT}\n')
    lines = [json.loads(line) for line in done.stdout.splitlines()]
    assert [sorted(line)[0] for line in lines] == ["additive", "error", "error", "additive"]
    assert lines[1]["error"]["kind"] == "refused" and lines[2]["error"]["kind"] == "malformed"
    assert done.returncode == 1


def test_json_lines_may_begin_with_a_bad_line() -> None:
    done = run("examine", given=f"no json\n{DOCUMENT}\n")
    lines = [json.loads(line) for line in done.stdout.splitlines()]
    assert ["error" in line for line in lines] == [True, False]


def test_a_document_over_several_lines_is_one_document() -> None:
    pretty = json.dumps(json.loads(DOCUMENT), indent=2)
    done = run("examine", "--json", given=pretty)
    assert json.loads(done.stdout)["name"] == "three log poles"


@pytest.mark.parametrize(
    ("arguments", "given", "status", "word"),
    [
        (("examine", "-"), "", 1, ""),
        (("examine", "-"), "{", 1, ""),
        (("examine", "/nowhere/at/all.json"), "", 1, "cannot be read"),
        (("examine", "--type", "21,11"), "", 1, "/type"),
        (("examine", "--no-such-option"), "", 2, "usage"),
        (("paint",), "", 2, "paint"),
        (("schema", "weather"), "", 1, "weather"),
        (("check", "-"), "[]", 1, "problem"),
    ],
)
def test_refusals(arguments: tuple[str, ...], given: str, status: int, word: str) -> None:
    done = run(*arguments, given=given)
    assert done.returncode == status, done.stderr
    assert done.stdout == "" and word in done.stderr
    assert "Traceback" not in done.stderr


def test_a_refusal_as_json_goes_to_the_error_stream() -> None:
    done = run("examine", "--json", given=DOCUMENT.replace('"1/3"', '"1/0"'))
    error = json.loads(done.stderr)["error"]
    assert error["kind"] == "refused" and error["places"][0]["at"] == "/poles/1/blocks/0/residue/0/value"
    assert done.returncode == 1 and done.stdout == ""


def test_check_accepts_own_findings_and_finds_spoiled_ones() -> None:
    findings = json.loads(run("examine", "--json", given=DOCUMENT).stdout)
    pair = {"problem": json.loads(DOCUMENT), "findings": findings}
    done = run("check", "-", given=json.dumps(pair))
    assert done.returncode == 0 and "FAILS" not in done.stdout
    findings["additive"]["certificate"]["steps"] = findings["additive"]["certificate"]["steps"][:1]
    done = run("check", "-", given=json.dumps(pair))
    assert done.returncode == 1 and "FAILS" in done.stdout


def test_version_and_schema() -> None:
    assert run("--version").stdout.strip() == PROGRAM
    assert json.loads(run("schema", "problem").stdout)["$schema"].startswith("https://json-schema.org/")


def test_walls_on_request() -> None:
    """Nine walls for the hypergeometric tuple of order 3: the conditions on a_i + b_j."""
    text = run("examine", "--walls", "--type", "21,111,111").stdout
    assert "Walls (for generic eigenvalues an irreducible system exists)" in text and "  9. " in text
    found = json.loads(run("examine", "--walls", "--json", "--type", "21,111,111").stdout)
    assert len(found["walls"]) == 9
    assert json.loads(run("examine", "--json", "--type", "21,111,111").stdout)["walls"] is None
    refused = run("examine", "--walls", "--json", "--type", "(1)_3/2")
    assert refused.returncode == 1 and "Traceback" not in refused.stderr


def test_check_verifies_a_connection_against_its_problem() -> None:
    connection = json.loads(run("construct", "--json", given=DOCUMENT).stdout)
    pair = {"problem": json.loads(DOCUMENT), "connection": connection}
    done = run("check", "-", given=json.dumps(pair))
    assert done.returncode == 0 and "irreducibility" in done.stdout and "FAILS" not in done.stdout
    for pole, change in ((0, "+1"), (1, "-1")):
        connection["poles"][pole]["coefficients"][0][0][0] += change
    done = run("check", "-", given=json.dumps(pair))
    assert done.returncode == 1 and "FAILS" in done.stdout
