"""JSON Schema of the documents and results, written from the program's own types.

Imports pydantic, which the rest of this room does without; only the commands that show a schema come here.
"""

from typing import Any

from pydantic import TypeAdapter

from app.connection.document import ConnectionDocument
from app.errors import NotFound
from app.findings.types import ErrorJson, FindingsJson
from app.local.document_types import ProblemDocument

_TYPES: dict[str, type] = {
    "problem": ProblemDocument,
    "findings": FindingsJson,
    "connection": ConnectionDocument,
    "error": ErrorJson,
}
NAMES = tuple(_TYPES)


def schema(name: str) -> dict[str, Any]:
    """The JSON Schema (draft 2020-12) called ``name``; raises ``NotFound`` for an unknown name."""
    if name not in _TYPES:
        raise NotFound(f"There is no schema {name!r}; there are {', '.join(NAMES)}.")
    described = TypeAdapter(_TYPES[name]).json_schema()
    return {"$schema": "https://json-schema.org/draft/2020-12/schema", **described}
