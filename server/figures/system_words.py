"""What the zone asks of the station, in words: to hold a set point, or to reach a tank."""

from server.studies.duty_curves import DutyCurves
from server.studies.duty_result import DutyResult


def asked_words(result: DutyResult) -> str:
    """Return what a head asked is: "head that holds the set point"."""
    if result.zone_kind == "floating_tank":
        return "head that the tank asks"
    if result.set_point is None:
        return "head that the requirements ask"
    return "head that holds the set point"


def end_words(result: DutyResult) -> tuple[str, str]:
    """Return the names of the two system curves of a figure, the harder one first."""
    if result.zone_kind == "floating_tank":
        return "asked: full tank, low supply", "asked: low tank, high supply"
    return "asked at low supply", "asked at high supply"


def band_words(curves: DutyCurves, result: DutyResult) -> str:
    """Return what lies between them: "the head that holds the set point from ... "."""
    asked = asked_words(result)
    if result.zone_kind == "floating_tank":
        return (
            f"the {asked}, from a full tank at low supply on {curves.pipes} pipes to a low "
            f"tank at high supply on {curves.easiest_pipes} pipes"
        )
    return (
        f"the {asked} from low to high supply, {curves.pipes} pipes, all flow as demand of the "
        "zone"
    )


def along_words(result: DutyResult) -> str:
    """Return along what the small curves run."""
    return "at full speed" if result.set_point is None else "along the held set point"
