"""Every address the program writes, built from its route's name; it works under a prefix."""

from urllib.parse import quote, urlencode

from fastapi import FastAPI, Request
from fastapi.routing import APIRoute

from server.pages import routers

# what of a sheet's address says how it is looked at, and goes along to the next sheet
VIEW_PARAMETERS = ("case", "set", "units", "at")


def named_routes() -> dict[str, APIRoute]:
    """Return every route by its name.

    Raises
    ------
    ValueError
        If two routes have one name, so that a link could lead to either.
    """
    found: dict[str, APIRoute] = {}
    for router in routers():
        for route in router.routes:
            if not isinstance(route, APIRoute):
                raise ValueError(f"{route} is not declared with the router's own methods")
            if route.name in found and found[route.name].path != route.path:
                raise ValueError(f"two addresses are named {route.name}")
            found[route.name] = route
    return found


def link(request: Request, name: str, **parameters: str | int | None) -> str:
    """Return the address of the route `name`.

    Parameters
    ----------
    request : Request
        The request being answered; its prefix goes in front.
    name : str
        Name of the route, which is its function's name if nothing else was said.
    **parameters
        Parts of the path; what the path does not take becomes the query. None is left out.

    Raises
    ------
    KeyError
        If there is no such route, or a part of its path is missing.
    """
    app: FastAPI = request.app
    route: APIRoute = app.state.named_routes[name]
    path = route.path_format
    query: dict[str, str | int] = {}
    for key, value in parameters.items():
        if key in route.param_convertors:
            path = path.replace("{" + key + "}", quote(str(value), safe=""))
        elif value is not None:
            query[key] = value
    if "{" in path:
        raise KeyError(f"the address {route.path} needs more than {sorted(parameters)}")
    prefix = str(request.scope.get("root_path", "")).rstrip("/")
    return prefix + path + (f"?{urlencode(query)}" if query else "")


def view_of(request: Request) -> dict[str, str]:
    """Return the part of this request's query that says how a station is looked at."""
    return {
        key: request.query_params[key]
        for key in VIEW_PARAMETERS
        if request.query_params.get(key)
    }
