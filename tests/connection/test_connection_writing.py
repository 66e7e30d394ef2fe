"""LaTeX and source code: the source is run and must give the same matrices."""

import numpy as np
import pytest
import sympy

from app.connection.connection import floating_parts
from app.connection.construction import construct
from app.connection.generic_values import generic_values
from app.connection.text import construction_json, construction_text
from app.connection.writing import connection_latex, numpy_source, sympy_source
from app.exact.approximate import approximate
from app.exact.quotient_text import write_quotient
from app.local.shorthand import problem_from_shorthand
from tests.connection.problems import log_problem

NAMES = log_problem(
    [("lambda", [1]), ("np", [1])], [("I", [1]), ("sqrt(2)*i", [1])], [("α", [1]), ("*", [1])],
    symbols=("lambda", "np", "I", "α"),
)  # fmt: skip


def run(source: str) -> dict:
    space: dict = {}
    exec(compile(source, "source", "exec"), space)  # the program's own output
    return space


@pytest.mark.parametrize("problem", [problem_from_shorthand("(1)(1),11,11"), NAMES], ids=["irregular", "odd names"])
def test_numpy_source(problem):
    connection = construct(problem).connection
    values = generic_values(connection.symbols, 1)
    parts = run(numpy_source(connection))["principal_parts"](
        *(approximate(values[name], {}) for name in connection.symbols)
    )
    expected = floating_parts(connection.at_values(values))
    for (_, matrices), part in zip(parts, expected, strict=True):
        for ours, theirs in zip(matrices, part, strict=True):
            assert np.allclose(ours, theirs.array, rtol=1e-12, atol=1e-12)


@pytest.mark.parametrize("problem", [problem_from_shorthand("21,111,111"), NAMES], ids=["rigid", "odd names"])
def test_sympy_source(problem):
    connection = construct(problem).connection
    parts = run(sympy_source(connection))["principal_parts"]
    letters = {name: sympy.Symbol(name) for name in connection.symbols}
    for (_, matrices), pole in zip(parts, connection.poles, strict=True):
        for ours, rows in zip(matrices, pole.coefficients, strict=True):
            for i, row in enumerate(rows):
                for j, entry in enumerate(row):
                    text = write_quotient(entry).replace("^", "**").replace("lambda", "lambda_").replace("i*", "imag*")
                    known = {**letters, "lambda_": letters.get("lambda"), "imag": sympy.I}
                    assert sympy.cancel(ours[i, j] - sympy.sympify(text, locals=known)) == 0


def test_numerical_sources():
    connection = construct(problem_from_shorthand("111,111,111")).connection
    parts = run(numpy_source(connection))["principal_parts"]()
    assert np.abs(sum(matrices[0] for _, matrices in parts)).max() < 1e-10
    theirs = run(sympy_source(connection))["principal_parts"]
    assert complex(theirs[0][1][0][0, 0]) == complex(parts[0][1][0][0, 0])


def test_latex_of_every_coefficient():
    connection = construct(problem_from_shorthand("(1)(1),11,11")).connection
    text = connection_latex(connection)
    assert text.count(r"\begin{pmatrix}") == 4
    assert text.count("{") == text.count("}")
    assert r"\infty" in text


def test_text_and_json():
    built = construct(problem_from_shorthand("11,11,11,11"))
    text = construction_text(built)
    assert "Accessory parameters: q1, p1" in text or "Accessory parameters: q1, q2" in text
    assert text.count("holds") == 7
    assert construction_json(built)["format"] == "polewright-connection/1"
    nothing = construct(log_problem([("1", [1])], [("1", [1])]))
    assert construction_json(nothing)["connection"] is None
    assert "traces" in construction_text(nothing)
