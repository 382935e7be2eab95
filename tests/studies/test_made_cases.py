"""One pump alone, and what is left by a trip: defined, computed, judged.

Sources: the demo's rows and hydrant test; heads and losses by hand in the tests. NPSH available
is the balance of the Hydraulic Institute's Engineering Data Library, section 1.
"""

import numpy as np
import pytest

from server.hydraulics import water
from server.studies.assess import assess
from server.studies.duty_result import OnePumpAlone
from server.studies.findings import words
from server.studies.shapes import Severity
from tests.studies.demo import SET, document, quantity, solved, station_with

POINTS = {
    "/zone/points/pt-t3r8nw": 156.0, "/zone/points/pt-h7f2cs": 150.0,
    "/zone/points/pt-g4h9ka": 130.0,
}  # fmt: skip
LOW = "/supply/states/low"


def alone(**fields: object) -> OnePumpAlone:
    made = solved(station_with(**fields)).made.one_pump_alone
    assert made is not None
    return made


def test_one_pump_alone_runs_out_to_its_last_row_where_the_zone_takes_it() -> None:
    made = alone()
    assert made.slots == ("sl-p1d4fg", "sl-j5h8kq")
    assert made.pipes == "new"
    assert made.to_last_row.all()
    assert made.flow * 1e3 == pytest.approx([25.2, 11.2], rel=1e-9)
    assert made.npsh_required == pytest.approx([5.05, 3.68], rel=1e-9)
    assert made.best_efficiency_share == pytest.approx([25.2 / 17.66, 11.2 / 7.86], rel=2e-3)


def test_npsh_of_one_pump_alone_is_the_balance_at_its_own_flow() -> None:
    made = alone()
    rho = float(water.density(14))
    weight = rho * water.GRAVITY
    flow = 0.0252
    main = 112 + (350e3 - 40e3 - 90e3 * (flow / 0.040) ** (1 / 0.54)) / weight
    velocity = flow / (np.pi / 4 * 0.25**2)
    branch = flow / (np.pi / 4 * 0.15**2)
    # friction of 24 m of DN 250 at 0.1 mm is some centimetres: fittings are most of the loss
    lost = (0.0175 * 24 / 0.25 + 3.2) * velocity**2 / (2 * water.GRAVITY)
    lost += 1.1 * branch**2 / (2 * water.GRAVITY)
    air = float(water.atmospheric_pressure(110)) - float(water.vapour_pressure(20))
    assert made.npsh_available[0] == pytest.approx(air / weight + main - lost - 110.6, abs=0.01)


def test_a_high_zone_ends_the_flow_before_the_last_row_does() -> None:
    fields = {f"{path}/elevation": quantity(z + 70, "m") for path, z in POINTS.items()}
    made = alone(**fields)
    assert not made.to_last_row[0]
    assert 5.0 < made.flow[0] * 1e3 < 25.2
    higher = {f"{path}/elevation": quantity(z + 75, "m") for path, z in POINTS.items()}
    assert alone(**higher).flow[0] < made.flow[0]
    # above the shut-off head nothing reaches the zone: there is nothing to judge
    far = {f"{path}/elevation": quantity(z + 200, "m") for path, z in POINTS.items()}
    assert np.isnan(alone(**far).flow).all()
    assert np.isnan(alone(**far).npsh_required).all()


def test_without_low_supply_there_is_no_pump_alone() -> None:
    result = solved(station_with(**{LOW: None}))
    assert result.made.one_pump_alone is None


def test_npsh_of_one_pump_alone_is_judged() -> None:
    # only the run-out needs more NPSH than is there: in every scenario the pumps run slower
    table = document()["pumps"][0]["curves"][0]["table"]
    table["rows"][-1][4] = 45.0
    path = "/pumps/pu-m5x8qd/curves/cu-m1a2bc/table"
    station = station_with(**{path: table, f"/sets/{SET}/trips/low_suction_trip": None})
    (finding,) = [f for f in assess(station).findings if f.code == "npsh_broken"]
    assert finding.governing is not None
    assert finding.governing.scenario == "made:alone"
    assert finding.governing.pipes == "new"
    said = words.sentence(finding, station, "si")
    assert "in one pump alone at top speed, low supply" in said


def test_a_trip_is_read_at_npsh_and_pressure_of_what_is_left() -> None:
    after = solved(station_with()).made.after_trip
    assert after is not None
    i = next(
        i for i, c in enumerate(after.cases) if (c.scenario, c.supply) == ("sc-f1re9j", "low")
    )
    assert after.npsh_required[i] == pytest.approx(4.97, abs=0.02)
    assert after.npsh_available[i] == pytest.approx(28.8, abs=0.05)
    assert after.point_pressure[i, 0] == pytest.approx(158e3, rel=0.005)
    assert not after.point_without_water[i].any()


def test_pressure_after_a_trip_is_a_caution_until_the_standby_runs() -> None:
    station = station_with(**{"/zone/points/pt-t3r8nw/fire_pressure": quantity(170, "kPa")})
    (finding,) = [f for f in assess(station).findings if f.code == "after_trip_pressure_low"]
    assert finding.severity is Severity.CAUTION
    said = words.sentence(finding, station, "si")
    assert "Top Row 31 has 158\u00a0kPa until P4 has started" in said


def test_what_is_left_is_held_against_its_own_region() -> None:
    # a pump of high specific speed has the narrow region
    fast = station_with(**{"/pumps/pu-m5x8qd/speed": quantity(17000, "rpm")})
    after = solved(fast).made.after_trip
    assert after is not None
    left = np.isfinite(after.best_efficiency_share)
    assert after.region_end[left] == pytest.approx(1.15)
