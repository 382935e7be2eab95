"""The name of an item where it stands in headings, put right when an edit changes it."""

from server.pages.forms import pattern_of
from server.station import paths
from server.station.station import Station

# items whose name stands in a heading of their sheet, in an element that `data-names` marks
NAMED = frozenset(
    {
        "/suction_line/reaches/*",
        "/discharge_main/reaches/*",
        "/zone/points/*",
        "/pumps/*",
        "/pumps/*/curves/*",
    }
)


def renamed(path: str, before: Station, after: Station) -> tuple[str, str] | None:
    """Return the element id and the new name of the item that an edit at `path` renamed."""
    item = path.rpartition("/")[0]
    if pattern_of(item) not in NAMED:
        return None
    name = paths.item_title(after, item)
    if paths.has(before, item) and name == paths.item_title(before, item):
        return None
    return paths.html_id(item), name
