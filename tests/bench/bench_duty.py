"""The whole duty study of the demo: all cases and made cases, after a warm-up."""

from time import process_time

from server.studies.duty import duty
from server.studies.limits import limits_of
from tests.bench.registry import Measurement, bench
from tests.studies.demo import SET, station_with

REPEATS = 40
BUDGET = 30.0  # processor time of one study [ms]


@bench("duty of the demo")
def duty_of_the_demo() -> list[Measurement]:
    """Measure processor time, because other work on the machine is no fault of ours."""
    station = station_with()
    limits = limits_of(station)
    spent = []
    for _ in range(REPEATS):
        start = process_time()
        duty(station, SET, limits)
        spent.append(1e3 * (process_time() - start))
    spent.sort()
    return [
        Measurement(
            name="duty study of the demo, whole",
            value=spent[REPEATS // 2],
            unit="ms",
            budget=BUDGET,
            note=f"median of {REPEATS}, least {spent[0]:.1f} ms",
        )
    ]
