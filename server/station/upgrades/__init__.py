"""Older station files brought to the newest version, one pure step a version.

A step `v1_to_v2` takes the raw JSON of a version-1 file and returns that of version 2. Version
1 is the first, so there is no step yet. Steps run when a file is opened; what they give is
written only at the next save.
"""

from collections.abc import Callable, Mapping

from pydantic import JsonValue

from server.station.station import VERSION

Tree = dict[str, JsonValue]
Step = Callable[[Tree], Tree]

# the step from each version to the next
STEPS: Mapping[int, Step] = {}


def upgraded(
    tree: Tree, version: int, steps: Mapping[int, Step] = STEPS, newest: int = VERSION
) -> Tree:
    """Return the raw JSON of a file of `version` in the shape of the newest version.

    Raises
    ------
    KeyError
        If there is no step from some version on the way.
    """
    while version < newest:
        tree = steps[version](dict(tree))
        version += 1
        tree["version"] = version
    return tree
