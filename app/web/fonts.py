"""The math font: STIX Two Math (SIL Open Font License), taken from an installed package and served to the browser.

Browsers stretch parentheses and roots only with a font that has a table for it, and few machines have one.
"""

from functools import lru_cache
from importlib.util import find_spec
from pathlib import Path

from fastapi import APIRouter
from starlette.responses import FileResponse, Response

from app.errors import NotFound

router = APIRouter()
_PACKAGE, _FILE = "ziamath", "fonts/STIXTwoMath-Regular.ttf"
_WEEK = 7 * 24 * 3600


@router.get("/fonts/mathematics.ttf")
async def math_font() -> Response:
    """The font file; without it pages still work, with smaller parentheses."""
    path = _path()
    if path is None:
        raise NotFound("The math font is not installed.")
    return FileResponse(path, media_type="font/ttf", headers={"Cache-Control": f"public, max-age={_WEEK}"})


@lru_cache(maxsize=1)
def _path() -> Path | None:
    # found without importing the package, which would take time for nothing
    spec = find_spec(_PACKAGE)
    if spec is None or spec.origin is None:
        return None
    path = Path(spec.origin).parent / _FILE
    return path if path.is_file() else None
