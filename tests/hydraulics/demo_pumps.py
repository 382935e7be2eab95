"""The two pumps of the invented closed-zone station of the demonstration."""

import numpy as np

from server.hydraulics.pump_curve import PumpCurve, pump_curve


def main_pump() -> PumpCurve:
    """Pump M: 2950 rev/min, 212 mm."""
    return pump_curve(
        np.array([0, 4.5, 8.1, 11.7, 15.3, 18.0, 20.7, 23.4, 25.2]) / 1000,
        head=[85.0, 83.9, 81.6, 77.8, 72.7, 68.0, 62.5, 56.3, 51.7],
        efficiency=np.array([0, 34.8, 53.8, 65.6, 71.1, 72.0, 70.5, 65.3, 59.4]) / 100,
        shaft_power=[9000.0] + [None] * 8,
        npsh_required=[2.05, 2.08, 2.20, 2.46, 2.87, 3.30, 3.85, 4.53, 5.05],
        tested_speed=2950,
    )


def jockey_pump() -> PumpCurve:
    """Pump J: 2950 rev/min, 174 mm."""
    return pump_curve(
        np.array([0, 2.0, 3.6, 5.2, 6.8, 8.0, 9.2, 10.4, 11.2]) / 1000,
        head=[55.0, 54.3, 52.8, 50.4, 47.1, 44.0, 40.5, 36.4, 33.4],
        efficiency=np.array([0, 30.5, 47.1, 57.4, 62.2, 63.0, 61.7, 57.2, 52.0]) / 100,
        shaft_power=[2900.0] + [None] * 8,
        npsh_required=[1.49, 1.51, 1.60, 1.79, 2.09, 2.40, 2.80, 3.29, 3.68],
        tested_speed=2950,
    )
