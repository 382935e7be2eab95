"""Named duty-point problems with their answers, which every way of solving is run over.

Each problem says where its answer comes from:

closed form  the algebra that stands beside it;
published    a printed example, with its source; tolerances are those of its printed digits;
made         flows and heads are chosen first and the system is made to ask just that.

Sources
    EDL      Hydraulic Institute, Engineering Data Library, sections 1.A and 1.C: pump
             380 - 0.06 Q - 0.0018 Q^2 (ft, US gal/min) on 265 or 275 ft + 7.75e-4 Q^2.
    CE3305   open course notes CE 3305, lesson 27: pump table on 10 ft + 6.577e-6 Q^2.
    COURSE-A open course notebook "Pump Control": 150 - 20 Q^2 (m, m3/s) on 35 m + 52.71 Q^2;
             at half the flow its friction factor is a little larger.
    Exercise published series and parallel exercise: 365 - 20 Q^2 (ft, ft3/s), lift 290 ft,
             pipe 26.351 ft/(ft3/s)^2; answers computed.
    Demo     demo/tank_filling.md section 2, by an independent scalar calculator.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from server.hydraulics.leg_curve import LegCurve, leg_curve
from server.hydraulics.operating_points import Answer
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.smoothed_curve import smoothed
from server.hydraulics.supply import FlowTestSupply
from server.hydraulics.system_curve import FunctionSystem, PowerSystem, SystemCurve
from tests.hydraulics.demo_pumps import jockey_pump, main_pump
from tests.hydraulics.demo_tank import leg_t, tank_station

LEG_T = leg_t()
GPM, FOOT, CUBIC_FOOT = 231.0 * 0.0254**3 / 60.0, 0.3048, 0.3048**3
LITRE = 1e-3


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """A set on one case of a system, and its answer in SI."""

    name: str
    source: str
    legs: tuple[LegCurve, ...]
    system: SystemCurve
    flow: float  # of the answer with the largest flow that can be started; 0 where none
    head: float  # between the manifolds there
    speeds: tuple[float, ...] = ()
    leg_flow: tuple[float, ...] | None = None
    answer: Answer = Answer.ONE
    others: tuple[float, ...] = ()  # flows of the other states that fit, largest first
    rel: float = 1e-9
    head_rel: float = field(default=0.0)  # rel where it is 0

    @property
    def ratios(self) -> tuple[float, ...]:
        """Speeds of all legs."""
        return self.speeds or (1.0,) * len(self.legs)


def formula(
    h0: float,
    linear: float,
    square: float,
    last: float,
    *,
    flow: float = 1.0,
    head: float = 1.0,
) -> LegCurve:
    """Make a leg of h0 + linear Q + square Q^2: rows smoothed by that very parabola."""
    q = np.linspace(0.0, last, 9)
    rows = pump_curve(
        q * flow, head=(h0 + linear * q + square * q * q) * head, tested_speed=1450.0
    )
    return leg_curve(smoothed(rows, degree=2), loss=0.0)


def on(static: float, coefficient: float, exponent: float = 2.0) -> PowerSystem:
    """Make a system of one case."""
    return PowerSystem(
        static_head=np.array([static]), coefficient=np.array([coefficient]), exponent=exponent
    )


def us(static: float, coefficient: float, flow: float) -> PowerSystem:
    """Make a system from feet and a unit of flow."""
    return on(static * FOOT, coefficient * FOOT / flow**2)


def closed(
    name: str,
    legs: Sequence[LegCurve],
    system: SystemCurve,
    flow: float,
    head: float,
    **more: object,
) -> Problem:
    """Make a problem of a closed form."""
    return Problem(
        name=name, source="closed form", legs=tuple(legs), system=system, flow=flow, head=head,
        **more,
    )  # fmt: skip


def identical() -> list[Problem]:
    """H0 80 m, a 0.004, static 50 m, k 0.001 (m, L/s): Q = sqrt(30 / (a/n^2 + k))."""
    leg = formula(80.0, 0.0, -0.004 / LITRE**2, 0.085)
    many = []
    for n in (1, 2, 3, 6):
        flow = np.sqrt(30.0 / (0.004 / n**2 + 0.001)) * LITRE
        many.append(
            closed(
                f"{n} identical parabolas",
                [leg] * n,
                on(50.0, 1000.0),
                flow,
                50.0 + 1000.0 * flow**2,
                leg_flow=(flow / n,) * n,
            )  # fmt: skip
        )
    return many


def held_shut() -> list[Problem]:
    """Return A 60 - 0.001 Q^2 beside B 50 - 0.004 Q^2 (m, L/s): shut above 50 m."""
    a = formula(60.0, 0.0, -1000.0, 0.13)
    b = formula(50.0, 0.0, -4000.0, 0.10)
    steep, flat = np.sqrt(15.0 / 3000.0), np.sqrt(10.0 / 1500.0)
    qa, qb = np.sqrt(16.0 / 1000.0), np.sqrt(6.0 / 4000.0)
    return [
        closed("weak pump shut by a steep system", [a, b], on(45.0, 2000.0), steep,
               45.0 + 10.0, leg_flow=(steep, 0.0)),
        closed("weak pump shut by a flat system", [a, b], on(50.0, 500.0), flat,
               50.0 + 500.0 * flat**2, leg_flow=(flat, 0.0)),
        closed("weak pump at the point of opening", [a, b], on(40.0, 1000.0), 0.1, 50.0,
               leg_flow=(0.1, 0.0), rel=1e-6),
        closed("both unlike pumps open", [a, b], on(20.0, 24.0 / (qa + qb) ** 2), qa + qb, 44.0,
               leg_flow=(qa, qb)),
    ]  # fmt: skip


def speeds_and_shapes() -> list[Problem]:
    """Return closed forms of speed, losses, straight lines and kinds of system."""
    a = 4000.0
    leg = formula(80.0, 0.0, -a, 0.12)
    slow = np.sqrt((0.64 * 80 - 40) / (a / 4 + 1000))
    lossy = leg_curve(leg.pump, loss=2000.0)
    line, branch = formula(60.0, -500.0, 0.0, 0.11), np.sqrt(30.0 / (6000.0 / 4 + 1000.0))
    unlike = [formula(80.0, 0.0, -a, 0.12), formula(80.0, 0.0, -16000.0, 0.06)]
    together = 1.0 / (1.0 / np.sqrt(4000.0) + 1.0 / np.sqrt(16000.0)) ** 2
    joint = np.sqrt(30.0 / (together + 1000.0))
    two_speeds = [np.sqrt((s * s * 80 - 45) / a) for s in (1.0, 0.9)]
    straight = (60.0 - 20.0) / (500.0 / 2 + 150.0)
    return [
        closed("speed 0.8", [leg] * 2, on(40.0, 1000.0), slow, 40 + 1000 * slow**2,
               speeds=(0.8, 0.8)),
        closed("losses of the branches belong to the pump", [lossy] * 2, on(50.0, 1000.0),
               branch, 50 + 1000 * branch**2),
        closed("flat system", [leg], on(50.0, 0.0), np.sqrt(30 / a), 50.0),
        closed("all friction, no static head", [leg], on(0.0, 6000.0), np.sqrt(80 / 1e4), 48.0),
        closed("supply above the zone", [leg], on(-10.0, 20000.0), np.sqrt(90 / 24000),
               -10 + 20000 * 90 / 24000),
        closed("unlike pumps of one shut-off head", unlike, on(50.0, 1000.0), joint,
               50 + 1000 * joint**2,
               leg_flow=tuple(joint * np.sqrt(together / k) for k in (4000.0, 16000.0))),
        closed("one pump at two speeds on a flat system", [leg] * 2, on(45.0, 0.0),
               sum(two_speeds), 45.0, speeds=(1.0, 0.9), leg_flow=tuple(two_speeds)),
        closed("straight lines", [line] * 2, on(20.0, 150.0, 1.0), straight,
               20 + 150 * straight),
    ]  # fmt: skip


def no_or_many() -> list[Problem]:
    """Return what has no operating point, or several: 50 + 400 q - 20000 q^2 is humped."""
    leg = formula(80.0, 0.0, -4000.0, 0.12)
    humped = formula(50.0, 400.0, -20000.0, 0.045)
    lift, k = 51.0, 4000.0
    root = np.sqrt(400.0**2 - 4 * (20000.0 + k) * (lift - 50.0))
    far, near = (400 + root) / (2 * (20000 + k)), (400 - root) / (2 * (20000 + k))
    once = (400 + np.sqrt(400.0**2 + 4 * (20000 + k) * 10)) / (2 * (20000 + k))
    return [
        closed("humped, static under shut-off", [humped], on(40.0, k), once, 40 + k * once**2),
        closed("humped, static over shut-off: two flows and none", [humped], on(lift, k), 0.0,
               lift, answer=Answer.SEVERAL, others=(far, near, 0.0)),
        closed("humped, static over the peak", [humped], on(53.0, k), 0.0, 53.0,
               answer=Answer.BELOW_STATIC, others=(0.0,)),
        closed("static at shut-off", [leg], on(leg.peak_head, 1000.0), 0.0, 80.0,
               answer=Answer.BELOW_STATIC, others=(0.0,)),
        closed("static over shut-off", [leg] * 2, on(81.0, 1000.0), 0.0, 81.0,
               answer=Answer.BELOW_STATIC, others=(0.0,)),
        closed("run-out on a flat system", [leg], on(10.0, 100.0), 0.0, np.nan,
               answer=Answer.RUN_OUT),
        closed("run-out of one, not of three", [leg] * 3, on(10.0, 500.0),
               np.sqrt(70 / (4000 / 9 + 500)), 10 + 500 * 70 / (4000 / 9 + 500)),
    ]  # fmt: skip


def published() -> list[Problem]:
    """Return the printed examples."""
    edl = formula(380.0, -0.06, -0.0018, 320.0, flow=GPM, head=FOOT)
    gpm = [0, 500, 1000, 1500, 2000, 2500, 3000, 3500, 4000, 4500, 4900]
    feet = [76, 75, 74, 73, 72, 70, 67, 59, 50, 22, 0]
    table = leg_curve(
        pump_curve(np.array(gpm) * GPM, head=np.array(feet) * FOOT, tested_speed=1450), loss=0.0
    )
    course = formula(150.0, 0.0, -20.0, 2.4)
    cusec = formula(365.0, 0.0, -20.0, 3.5, flow=CUBIC_FOOT, head=FOOT)
    valve = 8.0 / (2 * 9.80665 * (np.pi / 4 * 0.42846**2) ** 2)
    book, notes, lift = "data book, ", "course table, ", "exercise, "
    warm, cold = us(265, 7.75e-4, GPM), us(275, 7.75e-4, GPM)
    pools, main = us(10, 6.577e-6, GPM), us(290, 26.351, CUBIC_FOOT)
    foot, cusecs = FOOT, CUBIC_FOOT
    free, shut = on(35.0, 52.71), on(35.0, 52.71 + valve)
    rows = [
        (book + "one pump", "EDL", [edl], warm, 200.0 * GPM, 296.0 * FOOT, 1e-4),
        (book + "275 ft", "EDL", [edl], cold, 190.6 * GPM, 303.16 * FOOT, 3e-4),
        (book + "two pumps", "EDL", [edl] * 2, warm, 294.394 * GPM, 332.168 * FOOT, 1e-5),
        (book + "three pumps", "EDL", [edl] * 3, warm, 333.333 * GPM, 351.111 * FOOT, 1e-5),
        (notes + "one pump", "CE3305", [table], pools, 2951.0 * GPM, 67.3 * FOOT, 5e-3),
        (notes + "two pumps", "CE3305", [table] * 2, pools, 3092.6 * GPM, 72.91 * FOOT, 1e-3),
        ("course, free", "COURSE-A", [course], free, 1.2576, 118.4, 1e-3),
        ("course, valve throttled", "COURSE-A", [course], shut, 1.1159, 125.1, 1e-3),
        ("course, two pumps", "COURSE-A", [course] * 2, free, 1.4119, 140.03, 1e-3),
        (lift + "one pump", "Exercise", [cusec], main, 1.2720 * cusecs, 332.64 * foot, 1e-4),
        (lift + "two", "Exercise", [cusec] * 2, main, 1.5467 * cusecs, 353.04 * foot, 1e-4),
    ]  # fmt: skip
    many = [
        Problem(name=n, source=s, legs=tuple(p), system=y, flow=q, head=h, rel=r)
        for n, s, p, y, q, h, r in rows
    ]
    slow = Problem(
        name="course, half the flow by speed", source="COURSE-A", legs=(course,),
        system=on(35.0, 52.71), speeds=(763.20 / 1170,), flow=0.6288, head=55.9, rel=2e-3,
    )  # fmt: skip
    return [*many, slow]


def demo() -> list[Problem]:
    """Return the tank filling at its hardest: curved friction, PCHIP curves."""
    hardest = tank_station([121.6], [182.6], ["aged"]).system
    part_way = tank_station([121.6], [182.6], ["aged"], draw=0.130, after_reach=1).system
    rows = [(1, hardest, 52.17, 65.02), (2, hardest, 86.47, 71.90), (3, hardest, 105.28, 77.09)]
    many = [
        Problem(
            name=f"tank filling, {n} running",
            source="Demo",
            legs=(LEG_T,) * n,
            system=y,
            flow=q * LITRE,
            head=h,
            rel=1.2e-4,
        )  # fmt: skip
        for n, y, q, h in rows
    ]
    feeding = Problem(
        name="tank feeding a part-way demand", source="Demo", legs=(LEG_T,) * 2,
        system=part_way,
        flow=95.3 * LITRE, head=float("nan"), rel=6e-4,
    )  # fmt: skip
    return [*many, feeding]


def made() -> list[Problem]:
    """Return systems made to ask just what chosen flows give: legs of the demo's pumps."""
    big, small = leg_curve(main_pump(), loss=1700.0), leg_curve(jockey_pump(), loss=10000.0)
    head = 47.0
    running = ((big, 0.9), (big, 0.93), (small, 1.05))
    flows = tuple(s * float(leg.largest_flow(head / s**2)) for leg, s in running)
    total = sum(flows)
    test = FlowTestSupply(
        gauge_level=0.0, static_pressure=350e3, residual_pressure=260e3, test_flow=0.04
    )
    supply = test.grade(total, density=1000.0)
    rise = (head - 50.0 + float(supply)) / total**1.852

    def asked(flow: np.ndarray, case: np.ndarray) -> np.ndarray:
        return 50.0 + rise * flow**1.852 - test.grade(flow, density=1000.0)

    exact = {
        "source": "made", "legs": (big, big, small), "speeds": (0.9, 0.93, 1.05),
        "leg_flow": flows,
    }  # fmt: skip
    return [
        Problem(name="three unlike, losses to the power 1.852", flow=total, head=head,
                system=on(20.0, (head - 20.0) / total**1.852, 1.852), **exact),
        Problem(name="three unlike, all static", flow=total, head=head, system=on(head, 0.0),
                **exact),
        Problem(name="three unlike from a street main", flow=total, head=head,
                system=FunctionSystem(function=asked, case_count=1), **exact),
        Problem(name="jockey held shut beside a main at one speed", source="made",
                legs=(big, small), speeds=(0.9, 0.9), flow=flows[0], head=head,
                leg_flow=(flows[0], 0.0),
                system=on(20.0, (head - 20.0) / flows[0] ** 2)),
    ]  # fmt: skip


PROBLEMS = (
    *identical(), *held_shut(), *speeds_and_shapes(), *no_or_many(), *published(), *demo(),
    *made(),
)  # fmt: skip
