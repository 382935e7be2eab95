"""What the duty of a station still waits for: the way from an empty station to a result."""

from collections.abc import Iterable, Mapping

from server.station.conduit import Leg
from server.station.pump_set import PumpSet, Slot
from server.station.station import Station
from server.studies.assess import Assessment
from server.studies.duty_result import DutyResult, Missing, NotSolved
from server.studies.limits import limits_of
from server.studies.lowering import lower

# stands in for the set that is not there yet, so that the other sheets can already be asked
TRIAL, TRIAL_LEG = "st-000000", "lg-000000"
STARTS = ("/legs", "/horizons", "/scenarios", "/pumps", "/sets")
ABSENT, NOT_IN_THIS_VERSION = "absent", "not_in_this_version"


def still_needed(assessment: Assessment, set_id: str | None) -> Mapping[str, str]:
    """Return path and reason of all that a set's duty waits for; empty once it is solved."""
    station = assessment.station
    result = assessment.for_set(set_id) if set_id else None
    if isinstance(result, DutyResult):
        return {}
    waits = {path: ABSENT for path in STARTS if not getattr(station, path[1:])}
    found = result.missing if isinstance(result, NotSolved) else _without_set(station)
    return waits | {missing.path: missing.reason for missing in found}


def _without_set(station: Station) -> Iterable[Missing]:
    """Return what is missing besides the set: every pump is tried in a slot of a trial set."""
    legs = station.legs or (Leg(id=TRIAL_LEG),)
    slots = tuple(
        Slot(id=f"sl-{number:06}", pump=pump.id, leg=legs[0].id)
        for number, pump in enumerate(station.pumps)
    )
    trial = station.model_copy(update={"legs": legs, "sets": (PumpSet(id=TRIAL, slots=slots),)})
    found = lower(trial, TRIAL, limits_of(trial))
    missing = found.missing if isinstance(found, NotSolved) else ()
    ours = ("/sets/", f"/legs/{TRIAL_LEG}")
    return (each for each in missing if not each.path.startswith(ours))
