"""For the finding codes of tanks, drives, trims and valves: how each appears and goes."""

from functools import cache

from server.station import paths
from server.station.reader import read_station
from server.station.station import Station
from tests.studies.findings.code_cases import CodeCase, limit, only
from tests.studies.findings.demo import SET as CLOSED
from tests.studies.findings.demo import TOP, Step, demo, put, q, remove
from tests.studies.tank_demo import BASE, CURVE, DEMO, T1, T2, T3

CONTROL, TRIPS = f"{BASE}/control", f"{BASE}/trips"
LEAD = f"{CONTROL}/stages/ls-a1w6kz"
ASSIST = f"{CONTROL}/stages/ls-b2y8nr"
FIRE = "/fires/fr-b8s3kp"
TABLE = f"{CURVE}/table"
MAINS = tuple(f"{CLOSED}/slots/sl-{name}" for name in ("p1d4fg", "p2e5gh", "p3f6hj", "p4g7jk"))
JOCKEY_SLOT = f"{CLOSED}/slots/sl-j5h8kq"


@cache
def tank_demo() -> Station:
    """Return the demo that fills a tank, as it is delivered."""
    return read_station(DEMO.read_bytes())


def rows(*, head: float = 1.0, shutoff: float | None = None) -> object:
    """Return the demo pump's rows with heads scaled, or another shut-off head."""
    given = paths.get_json(tank_demo(), TABLE)
    scaled = [[row[0], row[1] * head, *row[2:]] for row in given["rows"]]  # type: ignore
    if shutoff is not None:
        scaled[0][1] = shutoff
    return {**given, "rows": scaled}  # type: ignore[dict-item]


def case(code: str, mend: str, value: object, *steps: Step, subject: str | None = None,
         base: object = tank_demo) -> CodeCase:  # fmt: skip
    """Make a case on the demo that fills a tank, else on another one."""
    return CodeCase(code, steps, mend, value, subject, base)  # type: ignore[arg-type]


DRIVES = tuple(put(f"{slot}/drive", "variable") for slot in (T1, T2, T3))
TANK_CASES = (
    case("static_head_not_reached", TABLE, rows(head=1.3),
         put("/zone/tank/top", q(209.5, "m"))),
    case("fire_tank_draws_down", "/zone/tank/normal", q(150, "m"),
         put("/zone/kind", "both"), put("/zone/tank/use", "fire_only"),
         put("/zone/tank/normal", q(200, "m")), base=demo),
    case("submergence_short", "/supply/tank/cut_out", q(121.2, "m"),
         put("/supply/tank/cut_out", q(120.6, "m"))),
    case("firm_refill_short", TABLE, rows(head=1.1), limit("firm-tank-hours", 20, "h")),
    case("held_flow_not_reached", f"{CONTROL}/flow", q(60, "L/s"), *DRIVES,
         put(f"{CONTROL}/kind", "held_flow"), put(f"{CONTROL}/flow", q(120, "L/s"))),
    case("stage_level_wrong", f"{ASSIST}/stop", q(182.2, "m"),
         put(f"{ASSIST}/stop", q(180.9, "m"))),
    case("fire_storage_short", "/zone/tank/area", q(3000, "m2"),
         put(f"{FIRE}/flow", q(200, "L/s"))),
    case("fire_storage_not_checked", f"{FIRE}/carried_by", "pumps"),
    case("standby_power_missing", f"{BASE}/standby_power/kind", "none"),
    case("fixed_unit_exceeds", f"{MAINS[0]}/drive", "variable", remove(JOCKEY_SLOT),
         only("sc-n1gh7a"), *(put(f"{slot}/drive", "fixed") for slot in MAINS), base=demo),
    case("trim_deep", f"{T1}/diameter", q(215, "mm"), put(f"{T1}/diameter", q(200, "mm"))),
    case("operating_point_not_unique", TABLE, rows(head=1.2),
         put(TABLE, rows(shutoff=85)), put("/zone/tank/top", q(207.2, "m"))),
    case("valve_wastes_head", f"{CLOSED}/control/kind", "zone_point_pressure",
         put(f"{CLOSED}/control/kind", "reducing_valve"),
         put(f"{CLOSED}/control/point", TOP.rpartition("/")[2]),
         put(f"{CLOSED}/control/valve_loss", q(2, "m")),
         put(f"{CLOSED}/control/valve_loss_at", q(40, "L/s")), base=demo),
)  # fmt: skip
STAGES = (
    ("starts-rise", f"{ASSIST}/start", q(181.8, "m"), q(181, "m")),
    ("outside", f"{LEAD}/stop", q(182.9, "m"), q(182.5, "m")),
    ("below", f"{ASSIST}/start", q(179.5, "m"), q(181, "m")),
    ("trip", f"{TRIPS}/high_level_trip", q(182.3, "m"), q(182.65, "m")),
)
