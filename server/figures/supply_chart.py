"""The supply figure: what the main gives against draw, with tests and limit."""

import numpy as np

from server.figures.chart import Axis, BehindTable, Chart, Column, Marker, Panel, Role, Series
from server.station.station import Station
from server.studies.shapes import SUPPLY_STATES
from server.studies.supply_curve import SupplyCurve
from server.units import Dimension as D
from server.units import View, shown_with_unit

ROLES = {"low": Role.SUPPLY_LOW, "normal": Role.SUPPLY_NORMAL, "high": Role.SUPPLY_HIGH}
BEHIND_ROWS = 11


def supply_chart(curve: SupplyCurve, station: Station, view: View) -> Chart:
    """Return the supply figure.

    Parameters
    ----------
    curve : SupplyCurve
        What the supply gives.
    station : Station
        Names the supply and the scenarios.
    view : {"si", "us"}
        Units of the alternative text.
    """
    names = {scenario.id: scenario.title or "Scenario" for scenario in station.scenarios}
    series = [
        Series(
            f"supply-{state}",
            f"{state} supply",
            ROLES[state],
            curve.flow,
            curve.pressure[i],
            named=True,
        )
        for i, state in enumerate(SUPPLY_STATES)
        if np.any(np.isfinite(curve.pressure[i]))
    ]
    series.append(
        Series(
            "limit",
            "least pressure of the main",
            Role.LIMIT,
            curve.flow[[0, -1]],
            np.array([curve.limit, curve.limit]),
            named=True,
        )
    )
    markers: list[Marker] = []
    for test in curve.tests:
        role = Role.TEST if test.basis else Role.TEST_COMPARED
        use = "design basis" if test.basis else "compared"
        title = test.title or "Flow test"
        markers.append(
            Marker(f"static-{test.id}", f"{title}, static", role, 0.0, test.static_pressure)
        )
        markers.append(
            Marker(
                f"test-{test.id}",
                f"{title} ({use})",
                role,
                test.flow,
                test.residual_pressure,
                named=True,
            )
        )
    worst = min(curve.demands, key=lambda d: d[3], default=None)
    for demand in curve.demands:
        scenario, _, flow, pressure = demand
        role = Role.DUTY_OUTSIDE if pressure < curve.limit else Role.DUTY_INSIDE
        markers.append(
            Marker(
                scenario,
                names.get(scenario, scenario),
                role,
                flow,
                pressure,
                named=demand is worst,
            )
        )
    shown = curve.pressure[np.isfinite(curve.pressure)]
    tested = [t.static_pressure for t in curve.tests]
    top = max([float(shown.max(initial=0.0)), *tested, curve.limit])
    low = float(shown.min(initial=0.0))
    return Chart(
        key="supply",
        title=f"What {station.supply.title or 'the supply'} gives",
        caption=(
            "Gauge pressure at the connection, at ground level, against what the station "
            "draws. Dashed in"
            " rust: the least pressure of the supplying main. Points: flow tests and what "
            "the scenarios draw,"
            " each in its own supply state."
        ),
        alt=_alt(curve, names, view),
        x=Axis("Drawn by the station", D.FLOW, 0.0, float(curve.flow[-1])),
        panels=(
            Panel(
                "supply", Axis("Pressure at the connection", D.PRESSURE, low, 1.08 * top), 0.85
            ),
        ),
        series=tuple(series),
        markers=tuple(markers),
        tables=(_states_table(curve), _tests_table(curve)),
    )


def _alt(curve: SupplyCurve, names: dict[str, str], view: View) -> str:
    said = []
    for i, state in enumerate(SUPPLY_STATES):
        at = float(curve.flow_at_limit[i])
        if np.isfinite(at):
            said.append(
                f"{state} supply falls to the limit at {shown_with_unit(at, D.FLOW, view)}"
            )
    below = [names.get(d[0], d[0]) for d in curve.demands if d[3] < curve.limit]
    if below:
        said.append(f"below the limit: {', '.join(below)}")
    return "Pressure of the supply against draw. " + ("; ".join(said) + "." if said else "")


def _states_table(curve: SupplyCurve) -> BehindTable:
    at = np.unique(np.linspace(0, curve.flow.size - 1, BEHIND_ROWS).astype(int))
    rows: list[tuple[float | str | None, ...]] = [
        (float(curve.flow[i]), *(_number(curve.pressure[s, i]) for s in range(3))) for i in at
    ]
    return BehindTable(
        "Pressure at the connection",
        (
            Column("Drawn", D.FLOW),
            *(Column(f"{s.capitalize()} supply", D.PRESSURE) for s in SUPPLY_STATES),
        ),
        tuple(rows),
    )


def _tests_table(curve: SupplyCurve) -> BehindTable:
    return BehindTable(
        "Flow tests, at the level of the connection",
        (
            Column("Test"),
            Column("Made on"),
            Column("Use"),
            Column("Flow", D.FLOW),
            Column("Static", D.PRESSURE),
            Column("Residual", D.PRESSURE),
        ),
        tuple(
            (
                t.title or "Flow test",
                t.made_at or None,
                "design basis" if t.basis else "compared",
                t.flow,
                t.static_pressure,
                t.residual_pressure,
            )
            for t in curve.tests
        ),
    )


def _number(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None
