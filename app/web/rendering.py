"""The templates' environment: everything is escaped, and a name that was not given is an error."""

from functools import lru_cache
from pathlib import Path

from jinja2 import Environment, FileSystemLoader, StrictUndefined
from starlette.responses import HTMLResponse

ROOT = Path(__file__).resolve().parents[2]
TEMPLATES = ROOT / "templates"
STATIC = ROOT / "static"


@lru_cache(maxsize=1)
def environment() -> Environment:
    """The one environment; templates are compiled once in a process."""
    return Environment(
        loader=FileSystemLoader(TEMPLATES),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        auto_reload=False,
    )


def render(template: str, **names: object) -> str:
    """The text of a template.

    Raises jinja2.TemplateNotFound or jinja2.UndefinedError: faults of the program.
    """
    return environment().get_template(template).render(**names)


def page(template: str, status: int = 200, **names: object) -> HTMLResponse:
    """A template as a page."""
    return HTMLResponse(render(template, **names), status_code=status)
