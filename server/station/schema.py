"""The JSON schema of a station file, with the titles, units and ranges of its fields."""

from collections.abc import Iterator

from pydantic import JsonValue

from server.station.fields import Node, root, walk
from server.station.station import Station
from server.units import symbols


def station_schema() -> dict[str, JsonValue]:
    """Return the schema of a station file.

    Ranges are given in SI under `x-firmhead`, since the number in a file is in its own unit.
    """
    schema: dict[str, JsonValue] = Station.model_json_schema()
    definitions = schema.get("$defs")
    if isinstance(definitions, dict):
        for holder, name, node in _places():
            model = schema if holder == Station.__name__ else definitions.get(holder)
            properties = model.get("properties") if isinstance(model, dict) else None
            member = properties.get(name) if isinstance(properties, dict) else None
            if isinstance(member, dict):
                member.update(_told(node))
    return {"$schema": "https://json-schema.org/draft/2020-12/schema", **schema}


def _places() -> Iterator[tuple[str, str, Node]]:
    """Return every field and group with the name of the model that holds it."""
    for node in (root(), *walk(root())):
        holder = node if node.model is not None else node.item
        if holder is not None and holder.model is not None:
            for name, child in holder.children.items():
                yield holder.model.__name__, name, child


def _told(node: Node) -> dict[str, JsonValue]:
    """Return what a field says about itself."""
    told: dict[str, JsonValue] = {"title": node.title}
    entry = node.entry
    if entry is None:
        return told
    if entry.guidance:
        told["description"] = entry.guidance
    more: dict[str, JsonValue] = {"sheet": node.sheet}
    if entry.dimension is not None:
        more["dimension"] = entry.dimension.value
        if node.kind == "quantity":
            more["units"] = list(symbols(entry.dimension))
    if entry.low is not None:
        more["above_si" if entry.above else "from_si"] = entry.low
    if entry.high is not None:
        more["to_si"] = entry.high
    if entry.refers_to is not None:
        more["refers_to"] = entry.refers_to
    told["x-firmhead"] = more
    return told
