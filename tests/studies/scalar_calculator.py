"""A second calculator of the demo: one root at a time, friction and water by other libraries.

It shares no code with the program: scipy brentq and PCHIP, fluids for Colebrook-White, CoolProp
for water, atmosphere left out. Numbers are typed here again from the demo's page.
"""

import math
from dataclasses import dataclass

import CoolProp.CoolProp as coolprop
import fluids
from scipy.interpolate import PchipInterpolator
from scipy.optimize import brentq

G = 9.80665
KELVIN = 273.15 + 14.0
RHO = coolprop.PropsSI("D", "T", KELVIN, "P", 1.0e5, "Water")
NU = coolprop.PropsSI("V", "T", KELVIN, "P", 1.0e5, "Water") / RHO
SHIFT = {"low": -40e3, "normal": 0.0, "high": 40e3}
REACHES = (  # length, bore, roughness aged, K
    (24.0, 0.250, 0.5e-3, 3.2),
    (820.0, 0.300, 0.6e-3, 6.0),
    (330.0, 0.246, 0.1e-3, 4.0),
)
MAIN_FLOW = (0, 4.5, 8.1, 11.7, 15.3, 18.0, 20.7, 23.4, 25.2)
MAIN_HEAD = (85.0, 83.9, 81.6, 77.8, 72.7, 68.0, 62.5, 56.3, 51.7)
MAIN_EFFICIENCY = (0, 34.8, 53.8, 65.6, 71.1, 72.0, 70.5, 65.3, 59.4)
JOCKEY_FLOW = (0, 2.0, 3.6, 5.2, 6.8, 8.0, 9.2, 10.4, 11.2)
JOCKEY_HEAD = (55.0, 54.3, 52.8, 50.4, 47.1, 44.0, 40.5, 36.4, 33.4)
JOCKEY_EFFICIENCY = (0, 30.5, 47.1, 57.4, 62.2, 63.0, 61.7, 57.2, 52.0)


@dataclass(frozen=True)
class Kind:
    """A pump in its leg."""

    head: PchipInterpolator  # m against L/s
    efficiency: PchipInterpolator  # % against L/s
    best_flow: float  # L/s
    leg: float  # loss over flow squared, m/(m3/s)2


def _leg(suction: float, discharge: float) -> float:
    area = math.pi / 4
    return (1.1 / (area * suction**2) ** 2 + 4.6 / (area * discharge**2) ** 2) / (2 * G)


def _vertex(flow: tuple[float, ...], efficiency: tuple[float, ...]) -> float:
    """Return the top of the parabola through the highest row and its neighbours."""
    i = max(range(len(efficiency)), key=efficiency.__getitem__)
    (x0, x1, x2), (y0, y1, y2) = flow[i - 1 : i + 2], efficiency[i - 1 : i + 2]
    top = (x1 - x0) ** 2 * (y1 - y2) - (x1 - x2) ** 2 * (y1 - y0)
    return x1 - 0.5 * top / ((x1 - x0) * (y1 - y2) - (x1 - x2) * (y1 - y0))


MAIN = Kind(
    PchipInterpolator(MAIN_FLOW, MAIN_HEAD),
    PchipInterpolator(MAIN_FLOW, MAIN_EFFICIENCY),
    _vertex(MAIN_FLOW, MAIN_EFFICIENCY),
    _leg(0.150, 0.125),
)
JOCKEY = Kind(
    PchipInterpolator(JOCKEY_FLOW, JOCKEY_HEAD),
    PchipInterpolator(JOCKEY_FLOW, JOCKEY_EFFICIENCY),
    _vertex(JOCKEY_FLOW, JOCKEY_EFFICIENCY),
    _leg(0.100, 0.080),
)


def reach_loss(flow: float, length: float, bore: float, roughness: float, k: float) -> float:
    """Return friction and fittings of one reach [m]."""
    speed = flow / (math.pi / 4 * bore**2)
    factor = fluids.friction_factor(Re=speed * bore / NU, eD=roughness / bore)
    return (factor * length / bore + k) * speed**2 / (2 * G)


def state(flow: float, kind: Kind, count: int, supply: str) -> dict[str, float]:
    """Return the state in which `count` pumps serve a flow [m3/s], as the table prints it."""
    losses = [reach_loss(flow, *reach) for reach in REACHES]
    drop = 90e3 * (flow / 0.040) ** (1 / 0.54)
    suction = 112.0 + (350e3 + SHIFT[supply] - drop) / (RHO * G) - losses[0]
    zone = (flow / 0.040) ** 1.852
    required = 156.0 + 250e3 / (RHO * G) + 3.5 * zone + losses[1] + losses[2] - suction
    each = flow / count

    def head(speed: float) -> float:
        return float(speed**2 * kind.head(each / speed * 1e3) - kind.leg * each**2)

    speed = 1.0
    if head(1.0) > required:
        least = each * 1e3 / kind.head.x[-1] + 1e-9
        speed = brentq(lambda s: head(s) - required, max(least, 0.55), 1.0, xtol=1e-13)
    reached = head(speed)
    similar = each / speed * 1e3
    efficiency = float(kind.efficiency(similar)) / 100
    end = suction + reached - losses[1] - losses[2]
    shaft = RHO * G * each * speed**2 * float(kind.head(similar)) / efficiency
    return {
        "speed": speed,
        "head": reached,
        "share": 100 * similar / kind.best_flow,
        "power": count * shaft / 1e3,
        "suction": RHO * G * (suction - 110.60) / 1e3,
        "critical": RHO * G * (end - 3.5 * zone - 156.0) / 1e3,
        "lowest": RHO * G * (end - 0.6 * zone - 130.0) / 1e3,
    }
