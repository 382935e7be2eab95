"""The template environment: undefined names are errors, numbers are rounded here and only here.

In every template: `link(name, ...)`, `static_url(file)` and `vendor_url(file)`, which put the
prefix of the request in front (a macro that uses them is imported `with context`), and the
filters `amount` (number with its unit), `number` (without) and `unit` (the unit alone).
"""

from functools import cache

from fastapi import Request
from fastapi.responses import HTMLResponse
from jinja2 import Environment, FileSystemLoader, StrictUndefined, pass_context
from jinja2.runtime import Context

from server import __version__, vendor
from server.pages.links import link
from server.resources import folder
from server.studies.shapes import Amount
from server.units import Dimension, View, display_unit, shown, shown_with_unit


@cache
def environment() -> Environment:
    """Return the one environment of all templates."""
    made = Environment(
        loader=FileSystemLoader(folder("templates")),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    made.globals.update(
        link=_link, static_url=_static_url, vendor_url=_vendor_url, program_version=__version__
    )
    made.filters.update(amount=amount, number=number, unit=unit)
    return made


def render(
    request: Request, template: str, context: dict[str, object], *, status: int = 200
) -> HTMLResponse:
    """Return a page or a fragment as an answer."""
    return HTMLResponse(fragment(request, template, context), status)


def fragment(request: Request, template: str, context: dict[str, object]) -> str:
    """Return the text of a template; it reads `context` and `request`."""
    return environment().get_template(template).render({**context, "request": request})


def amount(
    value: Amount | float | None,
    view: View,
    dimension: Dimension | str | None = None,
    decimals: int | None = None,
) -> str:
    """Return an SI number with its unit as it is read; an Amount brings its own dimension."""
    if isinstance(value, Amount):
        return shown_with_unit(value.value, value.dimension, view, value.decimals)
    return shown_with_unit(value, _dimension(dimension), view, decimals)


def number(
    value: Amount | float | None,
    view: View,
    dimension: Dimension | str | None = None,
    decimals: int | None = None,
) -> str:
    """Return an SI number as a person reads it, its unit standing elsewhere."""
    if isinstance(value, Amount):
        return shown(value.value, value.dimension, view, value.decimals)
    return shown(value, _dimension(dimension), view, decimals)


def unit(dimension: Dimension | str, view: View) -> str:
    """Return the unit, as printed, in which a dimension is read."""
    return display_unit(_dimension(dimension), view).printed


def _dimension(dimension: Dimension | str | None) -> Dimension:
    if dimension is None:
        raise TypeError("a plain number needs the dimension that it is written in")
    return Dimension(dimension)


def _request(context: Context) -> Request:
    request = context.get("request")
    if not isinstance(request, Request):
        raise TypeError(
            f"{context.name}: a macro that writes an address is imported `with context`"
        )
    return request


def _prefix(context: Context) -> str:
    return str(_request(context).scope.get("root_path", "")).rstrip("/")


@pass_context
def _link(context: Context, name: str, **parameters: str | int | None) -> str:
    return link(_request(context), name, **parameters)


@pass_context
def _static_url(context: Context, name: str) -> str:
    return f"{_prefix(context)}/static/{vendor.own_file(name).digest}/{name}"


@pass_context
def _vendor_url(context: Context, name: str) -> str:
    return f"{_prefix(context)}/vendor/{vendor.packaged_file(name).digest}/{name}"
