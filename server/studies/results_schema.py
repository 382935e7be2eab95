"""The JSON schema of the results, made from the shape that they are written in."""

from functools import cache

from pydantic import JsonValue, TypeAdapter

from server.studies.results_shape import ResultsJson


@cache
def results_adapter() -> TypeAdapter[ResultsJson]:
    """Return the strict reader of results: it refuses what the schema does not name."""
    return TypeAdapter(ResultsJson)


def results_schema() -> dict[str, JsonValue]:
    """Return the schema of a results file."""
    schema: dict[str, JsonValue] = results_adapter().json_schema()
    return {"$schema": "https://json-schema.org/draft/2020-12/schema", **schema}
