"""Routes, forms and view models; one file a page, the file named as the page."""

from importlib import import_module

from fastapi import APIRouter

# Every module that serves an address, in the order of matching. Each has `router`.
PAGES: tuple[str, ...] = (
    "server.vendor",
    "server.pages.health",
    "server.pages.api",
    "server.pages.api_solve",
    "server.pages.stations",
    "server.pages.edits",
    "server.pages.sources",
    "server.pages.summary",
    "server.pages.supply",
    "server.pages.main_and_zone",
    "server.pages.demand",
    "server.pages.pumps",
    "server.pages.sets",
    "server.pages.duty",
    "server.pages.criteria",
    "server.pages.memo",
    "server.pages.history",
    "server.pages.charts",
    "server.pages.tables",
)


def routers() -> tuple[APIRouter, ...]:
    """Return the router of each page module, in the order of `PAGES`.

    The modules are imported here and not above, because each of them imports this package.
    """
    return tuple(import_module(name).router for name in PAGES)
