"""What an edit means for other fields: a slot's pump changed, an item in use removed."""

from collections.abc import Sequence

from server.station.changes import Op
from server.station.faults import Fault
from server.station.fields import find
from server.station.paths import all_ids, item_title
from server.station.station import Station
from server.station.titles import subject


def following_edits(station: Station, op: Op, path: str) -> tuple[str, ...]:
    """Return the paths of fields that an edit just made at `path` leaves without meaning."""
    parts = path.split("/")
    if op != "set" or len(parts) != 6 or parts[1] != "sets" or parts[5] != "pump":
        return ()
    slots = (s for one in station.sets if one.id == parts[2] for s in one.slots)
    slot = next((slot for slot in slots if slot.id == parts[4]), None)
    if slot is None or slot.curve is None:
        return ()
    own = {c.id for pump in station.pumps if pump.id == slot.pump for c in pump.curves}
    return () if slot.curve in own else (f"{path.rpartition('/')[0]}/curve",)


def refusals_of_removed(
    old: Station, new: Station, found: Sequence[Fault]
) -> tuple[Fault, ...]:
    """Return the faults, those of a removed item worded as "cannot be removed while ..."."""
    gone = all_ids(old) - all_ids(new)
    return tuple(_worded(old, new, fault) if fault.given in gone else fault for fault in found)


def _worded(old: Station, new: Station, fault: Fault) -> Fault:
    node = find(fault.path)
    to = node.entry.refers_to if node is not None and node.entry is not None else None
    if to is None:
        return fault
    name = _removed_title(old, to, fault.given)
    sentence = (
        f"{name} cannot be removed while it is in use: {subject(new, fault.path)} names it. "
        "Choose another there first."
    )
    return Fault(fault.path, fault.sheet, fault.given, fault.allowed, sentence)


def _removed_title(old: Station, to: str, item_id: str) -> str:
    if "*" not in to:
        return _capital(item_title(old, f"{to}/{item_id}"))
    for pump in old.pumps:
        if any(curve.id == item_id for curve in pump.curves):
            return _capital(
                f"{item_title(old, f'/pumps/{pump.id}/curves/{item_id}')} of {pump.title}"
            )
    return item_id


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
