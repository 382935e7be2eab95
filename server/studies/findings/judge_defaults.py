"""Defaults that stand in, and criteria that depart from their profile."""

from collections.abc import Iterator

from server.hydraulics.fittings import FULL_OPEN_VELOCITY
from server.station.entry import Quantity, Record
from server.station.station import Station
from server.studies.findings.criteria import Criterion
from server.studies.findings.judged_set import amount
from server.studies.shapes import Amount, Finding, Path, Severity
from server.units import Dimension

DEFAULT_USED = "default_used"


def default_used(path: Path, said: str = "", *others: Amount) -> Finding:
    """Return the note that a default stands in at `path`; an amount is read in its units."""
    return Finding(
        code="default_used", severity=Severity.NOTE, subject=path, pump_set=None,
        names=(("said", said),), others=others, basis="common_practice", mend=(path,),
        because=DEFAULT_USED,
    )  # fmt: skip


def _walk(record: Record, path: Path) -> Iterator[tuple[Path, Quantity]]:
    """Yield every quantity of a record with its path."""
    for name in type(record).model_fields:
        value = getattr(record, name)
        if isinstance(value, Quantity):
            yield f"{path}/{name}", value
        elif isinstance(value, Record):
            yield from _walk(value, f"{path}/{name}")
        elif isinstance(value, tuple):
            for item in value:
                if isinstance(item, Record) and hasattr(item, "id"):
                    yield from _walk(item, f"{path}/{name}/{item.id}")


def judge_defaults(station: Station) -> Iterator[Finding]:
    """Yield the defaults that stand in: typed by an action, or used for an empty field."""
    for path, quantity in _walk(station, ""):
        if quantity.source is not None and quantity.source.kind == "default":
            yield default_used(path, quantity.source.text)
    for pump in station.pumps:
        if pump.npsh_exponent is None:
            yield default_used(f"/pumps/{pump.id}/npsh_exponent", "2")
        if pump.minimum_flow is None:
            yield default_used(f"/pumps/{pump.id}/minimum_flow", "the criteria row")
    for each in station.sets:
        drives = any(slot.drive == "variable" for slot in each.slots)
        for name in ("lowest_speed", "highest_speed") if drives else ():
            if each.control.kind is not None and getattr(each.control, name) is None:
                yield default_used(f"/sets/{each.id}/control/{name}", "the criteria row")
    for leg in station.legs:
        if leg.discharge_branch.full_open_velocity is None:
            path = f"/legs/{leg.id}/discharge_branch/full_open_velocity"
            assumed = amount("assumed", FULL_OPEN_VELOCITY, Dimension.SPEED)
            yield default_used(path, "", assumed)
    if station.fires:
        for point in station.zone.points:
            if point.fire_share is None:
                yield default_used(f"/zone/points/{point.id}/fire_share", "1, on the safe side")


def judge_departures(criteria: dict[str, Criterion]) -> Iterator[Finding]:
    """Yield every criterion that departs from its profile, with or without a reason."""
    for criterion in criteria.values():
        if not criterion.departs:
            continue
        reasoned = bool(criterion.reason)
        profile = criterion.profile
        yield Finding(
            code="criterion_departs" if reasoned else "departure_without_reason",
            severity=Severity.NOTE if reasoned else Severity.CAUTION,
            subject=criterion.path, pump_set=None, criterion=criterion.path,
            provided=amount("limit", criterion.si, criterion.dimension,
                            criterion.rule.decimals),
            required=amount("profile", None if profile is None else profile.si,
                            criterion.dimension,
                            criterion.rule.decimals),
            names=(("rule", criterion.title), ("reason", criterion.reason)),
            basis=criterion.key,
            mend=(f"{criterion.path}/{'limit' if reasoned else 'reason'}",
                  f"{criterion.path}/{'reason' if reasoned else 'limit'}"),
        )  # fmt: skip
