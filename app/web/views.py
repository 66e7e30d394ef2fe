"""How a reader wants to see pages: the choices that the browser keeps."""

from starlette.requests import Request

LARGE_COOKIE = "type"


def is_large(request: Request) -> bool:
    """Whether large type was chosen."""
    return request.cookies.get(LARGE_COOKIE) == "large"
