"""The limits that the studies need while they solve, as SI floats; they judge nothing."""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.operating_region import preferred_ends
from server.station.station import Station
from server.studies.findings.criteria import Criterion, criteria_of


@dataclass(frozen=True, slots=True)
class StudyLimits:
    """Limits by name: pressures gauge [Pa], heads [m], ratios of 1."""

    preferred_low: float
    preferred_high: float
    preferred_low_high_specific_speed: float
    preferred_high_high_specific_speed: float
    high_specific_speed: float  # metric ns
    minimum_flow: float  # ratio of best-efficiency flow, where the maker states none
    suction_main: float
    suction_gauge: float
    npsh_ratio: float
    npsh_margin: float  # [m]
    npsh_margin_outside: float  # [m]
    service_pressure: float
    fire_pressure: float
    hydrant_residual: float
    speed_lowest: float
    speed_highest: float
    highest_pressure: float
    highest_pressure_abnormal: float
    station_off_pressure: float
    gap_narrow: float  # ratio of the gap's flow
    tank_hours: float  # in which the maximum day is pumped into a tank on the zone [s]
    stage_dead_band: float  # ratio of the switch-up flow

    def preferred_region(self, specific_speed: float | None) -> tuple[float, float]:
        """Return the preferred region at a metric specific speed, as ratios of BEP flow."""
        low, high = preferred_ends(
            np.nan if specific_speed is None else specific_speed,
            ordinary=(self.preferred_low, self.preferred_high),
            narrow=(
                self.preferred_low_high_specific_speed,
                self.preferred_high_high_specific_speed,
            ),
            narrow_above=self.high_specific_speed,
        )
        return float(low), float(high)


def limits_of(station: Station) -> StudyLimits:
    """Return the limits of the station's criteria."""
    return limits_by(criteria_of(station))


def limits_by(criteria: dict[str, Criterion]) -> StudyLimits:
    """Return the limits of criteria that are at hand."""

    def si(key: str) -> float:
        value = criteria[key].si
        assert value is not None, key  # every rule named below has a number in both profiles
        return value

    return StudyLimits(
        preferred_low=si("preferred-region-low"),
        preferred_high=si("preferred-region-high"),
        preferred_low_high_specific_speed=si("preferred-region-low-high-specific-speed"),
        preferred_high_high_specific_speed=si("preferred-region-high-high-specific-speed"),
        high_specific_speed=si("high-specific-speed"),
        minimum_flow=si("minimum-flow"),
        suction_main=si("suction-main-minimum"),
        suction_gauge=si("suction-gauge-minimum"),
        npsh_ratio=si("npsh-ratio-min"),
        npsh_margin=si("npsh-margin-min"),
        npsh_margin_outside=si("npsh-margin-outside-min"),
        service_pressure=si("service-pressure-min"),
        fire_pressure=si("fire-pressure-min"),
        hydrant_residual=si("hydrant-residual-min"),
        speed_lowest=si("speed-lowest"),
        speed_highest=si("speed-highest"),
        highest_pressure=si("service-pressure-max"),
        highest_pressure_abnormal=si("service-pressure-max-abnormal"),
        station_off_pressure=si("station-off-pressure-min"),
        gap_narrow=si("gap-narrow"),
        tank_hours=si("firm-tank-hours"),
        stage_dead_band=si("stage-dead-band"),
    )
