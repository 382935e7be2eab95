"""A strategy of two lists of edits that touch different fields and items of one station."""

from hypothesis import strategies as st

from server.station import fields
from server.station.edits import Edit
from server.station.fresh import new_item
from server.station.paths import get
from server.station.station import Station
from tests.strategies import field_paths, quantities, short_texts, stations

_TESTED = ("static_pressure", "residual_pressure")  # judged together, so never disjoint


@st.composite
def disjoint_edits(draw: st.DrawFn) -> tuple[Station, list[Edit], list[Edit]]:
    """Draw a station with two lists of edits that touch different fields and items."""
    base = draw(stations())
    paths = [p for p in field_paths(base) if p.rpartition("/")[2] not in _TESTED]
    chosen = draw(st.lists(st.sampled_from(paths), min_size=2, max_size=8, unique=True))
    sides: tuple[list[Edit], list[Edit]] = ([], [])
    for place, path in enumerate(chosen):
        node = fields.node_at(path)
        if node.kind == "quantity":
            value = draw(st.none() | quantities(node))
        elif node.kind == "text" and not path.endswith(("/made_at", "/date")):
            value = draw(short_texts)
        elif node.kind == "choice":
            value = draw(st.sampled_from([key for key, _ in node.entry.choices]))
        else:
            continue
        sides[place % 2].append(Edit("set", path, value))
    lists = ["/legs", "/zone/points", "/memo/notes", "/discharge_main/reaches"]
    for side in sides:
        for list_path in draw(st.lists(st.sampled_from(lists), max_size=2)):
            items = get(base, list_path)
            before = draw(st.none() | st.sampled_from([item.id for item in items] or [None]))
            side.append(Edit("insert", list_path, new_item(base, list_path), before=before))
    if base.answers and not any(edit.path.startswith("/answers") for edit in sides[1]):
        key = base.answers[0].id
        sides[0][:] = [
            edit for edit in sides[0] if not edit.path.startswith(f"/answers/{key}/")
        ]
        sides[0].append(Edit("remove", f"/answers/{key}"))
    return base, *sides
