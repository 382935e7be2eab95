"""The application factory."""

from collections.abc import AsyncIterator
from contextlib import asynccontextmanager

from fastapi import FastAPI
from fastapi.telemetry import TelemetryConfig
from starlette.middleware.gzip import GZipMiddleware

from server import __version__
from server.pages import problems, routers
from server.pages.links import named_routes
from server.security import Guard
from server.settings import LARGEST_BODY, Settings
from server.store.store import Store

# whatever the environment says, nothing is sent anywhere
NO_TELEMETRY: TelemetryConfig = {
    "tracing": False,
    "metrics": False,
    "logs": False,
    "operation_spans": False,
    "auto_configure": False,
}


def create_app(settings: Settings) -> FastAPI:
    """Return the application on the data folder of `settings`.

    Raises
    ------
    StoreRefused
        If the folder cannot be used.
    """
    store = Store(settings.data_folder)

    @asynccontextmanager
    async def lifespan(app: FastAPI) -> AsyncIterator[None]:
        yield
        store.close()

    app = FastAPI(
        title="Firmhead",
        version=__version__,
        docs_url=None,
        redoc_url=None,
        openapi_url=None,
        telemetry=NO_TELEMETRY,
        lifespan=lifespan,
    )
    app.state.settings = settings
    app.state.store = store
    app.state.named_routes = named_routes()
    problems.install(app)
    for router in routers():
        app.include_router(router)
    app.add_middleware(GZipMiddleware, minimum_size=1000, compresslevel=5)
    # added last, so that it stands in front of everything
    app.add_middleware(
        Guard,
        allowed_hosts=settings.allowed_hosts,
        largest_body=LARGEST_BODY,
        refuse=problems.refusal,
    )
    return app
