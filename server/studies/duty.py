"""The duty of one set in all its cases: what runs, at which speed, flow, pressure and power."""

from hashlib import sha256

from server import __version__
from server.hydraulics.errors import SolutionNotFound
from server.station.station import Station
from server.studies.assembly import Solved, assembled
from server.studies.cases import cases_of
from server.studies.combinations import as_flags, combinations_of
from server.studies.duty_result import DutyResult, Missing, NotSolved
from server.studies.limits import StudyLimits
from server.studies.lowering import lower
from server.studies.lowering.lowered import LoweredSet
from server.studies.made_cases import made_cases
from server.studies.running import running_of
from server.studies.shapes import Stamp
from server.studies.zone_states import zone_states

NAME, VERSION = "duty", 1
NO_SOLUTION = "no_solution_found"
READ = (
    "site",
    "supply",
    "suction_line",
    "legs",
    "discharge_main",
    "zone",
    "horizons",
    "fires",
    "scenarios",
    "pumps",
    "sets",
)


def duty(
    station: Station, pump_set_id: str, limits: StudyLimits, *, document_hash: str = ""
) -> DutyResult | NotSolved:
    """Return the duty of a set, or what stands in its way.

    Parameters
    ----------
    station : Station
        The document.
    pump_set_id : str
        Id of one of its sets.
    limits : StudyLimits
        Limits by the station's criteria.
    document_hash : str
        Of the document's canonical bytes, for the stamp.

    Raises
    ------
    KeyError
        If the station has no such set.
    """
    lowered = lower(station, pump_set_id, limits)
    if isinstance(lowered, NotSolved):
        return lowered
    stamp = Stamp(
        study=NAME,
        study_version=VERSION,
        program=__version__,
        document=document_hash,
        inputs=_inputs_hash(station, limits),
    )
    try:
        return duty_of(lowered, limits, stamp)
    except SolutionNotFound:
        # a solve that does not reach its tolerance states nothing, and says so
        return NotSolved(pump_set_id, (Missing(f"/sets/{pump_set_id}/slots", NO_SOLUTION),))


def _inputs_hash(station: Station, limits: StudyLimits) -> str:
    """Return the hash of the parts of the document that the study reads, and of its limits."""
    read = station.model_dump_json(include=set(READ))
    return sha256(f"{read}{limits}".encode()).hexdigest()


def duty_of(of: LoweredSet, limits: StudyLimits, stamp: Stamp) -> DutyResult:
    """Return the duty of a lowered set: every case and combination in one pass."""
    cases = cases_of(of)
    masks, available = combinations_of(of.slots, cases.running, cases.jockeys)
    combinations = as_flags(masks, len(of.slots))
    zone = zone_states(of, cases, combinations)
    solved = Solved.of_zone(of, cases, available, combinations, zone)
    running = running_of(of, cases, masks, solved)
    made = made_cases(of, limits, cases, masks, solved, running)
    return assembled(of, stamp, solved, running, made)
