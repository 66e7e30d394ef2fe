"""Small builders of problem documents, for tests."""

from typing import Any

EXAMPLE = """{
  "format": "polewright-problem/1",
  "name": "an order-3 pole and two log poles, rank 3",
  "symbols": ["a", "b"],
  "poles": [
    {"at": "0",        "blocks": [{"exponent": {}, "residue": [{"value": "a", "jordan": [1, 1]}, {"value": "b", "jordan": [1]}]}]},
    {"at": "1",        "blocks": [{"exponent": {}, "residue": [{"value": "0", "jordan": [2, 1]}]}]},
    {"at": "infinity", "blocks": [{"exponent": {"2": "1/2", "1": "-a"}, "residue": [{"value": "1/3", "jordan": [1]}]},
                                  {"exponent": {},                      "residue": [{"value": "*",   "jordan": [1, 1]}]}]}
  ]
}
"""  # noqa: E501 (as it is printed in the description of the format)


def block(exponent: dict[str, object], *eigenvalues: tuple[object, list[int]]) -> dict[str, Any]:
    """A block with an exponent and eigenvalues (value, Jordan sizes)."""
    return {"exponent": exponent, "residue": [{"value": value, "jordan": jordan} for value, jordan in eigenvalues]}


def pole(at: object, *blocks: dict[str, Any]) -> dict[str, Any]:
    """A pole with its blocks."""
    return {"at": at, "blocks": list(blocks)}


def log_pole(at: object, *eigenvalues: tuple[object, list[int]]) -> dict[str, Any]:
    """A logarithmic pole."""
    return pole(at, block({}, *eigenvalues))


def make(*poles: dict[str, Any], symbols: list[str] | None = None, **more: object) -> dict[str, Any]:
    """A document with these poles."""
    return {"format": "polewright-problem/1", "name": "", "symbols": symbols or [], "poles": list(poles), **more}
