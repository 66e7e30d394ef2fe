"""The application put together: guard around refusals around pages and API, with the store behind."""

import gc
from collections.abc import AsyncIterator
from contextlib import asynccontextmanager
from dataclasses import dataclass
from pathlib import Path

from fastapi import FastAPI
from fastapi.exceptions import RequestValidationError
from starlette.exceptions import HTTPException
from starlette.staticfiles import StaticFiles

from app import VERSION
from app.desk.store import Store
from app.errors import PolewrightError
from app.jobs.pool import Jobs
from app.web import api, connections, fonts, jobs_api, operate_api, operating, pages, walls
from app.web.demos import Demos
from app.web.guard import Guard
from app.web.refusals import on_framework_error, on_refusal, on_validation_error
from app.web.rendering import ROOT, STATIC
from app.web.work import Work

TITLE = "Polewright"
DESK_FILE = "desk.sqlite"
# Findings are large webs of small values that live long in caches.  With Python's own thresholds the collector walks
# through all of them every few edits, which doubles the time of such an edit; rarer full walks cost some memory only.
_COLLECTOR = (100_000, 50, 100)


@dataclass(frozen=True)
class Settings:
    """``data``: the folder that keeps the desk; ``port``: the served port, None to accept every one in Host."""

    data: Path
    port: int | None = None
    demos: Path = ROOT / "demo_data"


def create_application(settings: Settings) -> FastAPI:
    """The application, its desk open.  ``app.state`` has settings, demos, store and work.

    Raises Refused when the desk cannot be opened.  The desk is closed when the application shuts down.
    """
    demos = Demos(settings.demos)
    store = Store(settings.data / DESK_FILE, demos.first)
    jobs = Jobs()

    @asynccontextmanager
    async def lifespan(_: FastAPI) -> AsyncIterator[None]:
        thresholds = gc.get_threshold()
        gc.set_threshold(*_COLLECTOR)
        yield
        gc.set_threshold(*thresholds)
        jobs.close()
        store.close()

    application = FastAPI(
        title=TITLE,
        version=VERSION,
        docs_url=None,
        redoc_url=None,
        openapi_url="/api/openapi.json",
        lifespan=lifespan,
        exception_handlers={
            PolewrightError: on_refusal,
            HTTPException: on_framework_error,
            RequestValidationError: on_validation_error,
        },
    )
    application.state.settings = settings
    application.state.demos = demos
    application.state.store = store
    application.state.work = Work()
    application.state.jobs = jobs
    application.include_router(api.router)
    for interface in (jobs_api, operate_api):
        application.include_router(interface.router)
    for shown in (pages, connections, operating, walls, fonts):
        application.include_router(shown.router, include_in_schema=False)
    application.mount("/static", StaticFiles(directory=STATIC, check_dir=False), name="static")
    application.add_middleware(Guard, port=settings.port)
    return application
