"""Reaches, fittings and legs from the document to conduits and loss coefficients."""

from collections.abc import Callable, Iterable, Sequence
from itertools import groupby

import numpy as np

from server.hydraulics.conduit import Conduit, FrictionLaw, conduit
from server.hydraulics.fittings import (
    FULL_OPEN_VELOCITY,
    k_from_cv,
    k_from_head_loss,
    k_from_kv,
    quadratic_coefficient,
)
from server.station.conduit import Branch, Fitting, Leg, Reach
from server.station.station import Station
from server.studies.lowering.lowered import Floats, Line
from server.studies.lowering.needs import Needs
from server.studies.shapes import PipeAge

OUTSIDE_LAW = "outside_friction_law"
LAWS = {"colebrook": FrictionLaw.DARCY_WEISBACH, "hazen_williams": FrictionLaw.HAZEN_WILLIAMS}


def route(station: Station, ages: Iterable[PipeAge], needs: Needs) -> Line:
    """Return the suction line and the discharge main as one line of reaches.

    Parameters
    ----------
    station : Station
        The document.
    ages : iterable of {"new", "aged"}
        Ages that the scenarios use: what is absent at one of them stops the study.
    needs : Needs
        Gathers what is absent.
    """
    reaches: list[tuple[str, Reach]] = []
    for path, entered in (
        ("/suction_line", station.suction_line), ("/discharge_main", station.discharge_main),
    ):  # fmt: skip
        if not entered.reaches:
            needs.stop(f"{path}/reaches")
        reaches += [(f"{path}/reaches/{reach.id}", reach) for reach in entered.reaches]
    used = set(ages)
    shapes = [_shape(path, reach, needs) for path, reach in reaches]
    walls: dict[PipeAge, tuple[Conduit, ...]] = {"new": (), "aged": ()}
    for age in walls:
        # firm capacity stands on aged pipes: without them it is left out, the scenarios are not
        say = needs.stop if age in used else needs.leave_out if age == "aged" else _nothing
        resistances = [_wall(path, reach, age, say) for path, reach in reaches]
        columns = np.array([[*s, w] for s, w in zip(shapes, resistances, strict=True)])
        if not reaches or not np.all(np.isfinite(columns)):
            continue
        try:
            walls[age] = _conduits([reach for _, reach in reaches], columns)
        except ValueError:
            # the ranges of single fields were checked on entry; roughness against bore was not
            worst = int(np.argmax(columns[:, 4] / columns[:, 1]))
            needs.stop(f"{reaches[worst][0]}/roughness/{age}", OUTSIDE_LAW)
    return Line(new=walls["new"], aged=walls["aged"])


def _conduits(reaches: Sequence[Reach], columns: Floats) -> tuple[Conduit, ...]:
    """Return neighbouring reaches of one law as one conduit each."""
    parts = []
    for law, group in groupby(range(len(reaches)), key=lambda i: reaches[i].roughness.law):
        rows = columns[list(group)]
        parts.append(
            conduit(LAWS[law], length=rows[:, 0], bore=rows[:, 1], k=rows[:, 2],
                    barrels=rows[:, 3], resistance=rows[:, 4])
        )  # fmt: skip
    return tuple(parts)


def _shape(path: str, reach: Reach, needs: Needs) -> tuple[float, float, float, float]:
    """Return length, bore, sum of K and barrels of a reach."""
    length = needs.must(f"{path}/length", reach.length)
    bore = needs.must(f"{path}/bore", reach.bore)
    if reach.k is None and not reach.fittings:
        needs.stop(f"{path}/k")
    k = reach.k or 0.0
    for fitting in reach.fittings:
        more_k, more_length = _fitting(
            f"{path}/fittings/{fitting.id}/loss", fitting, bore, needs
        )
        k += fitting.count * more_k
        length += fitting.count * more_length
    return length, bore, k, float(reach.barrels)


def _fitting(path: str, fitting: Fitting, bore: float, needs: Needs) -> tuple[float, float]:
    """Return K at the reach's bore and the equivalent length of one fitting."""
    given = fitting.loss
    if given.by == "equivalent_length":
        return 0.0, needs.must(f"{path}/length", given.length)
    if given.by == "loss_at_flow":
        loss, flow = (
            needs.must(f"{path}/loss", given.loss),
            needs.must(f"{path}/at_flow", given.at_flow),
        )
        if not np.isfinite(loss + flow + bore):
            return np.nan, 0.0
        return float(k_from_head_loss(loss, flow=flow, bore=bore)), 0.0
    if given.value is None or (given.by != "k" and given.value <= 0):
        needs.stop(f"{path}/value")
        return np.nan, 0.0
    if given.by == "k" or not np.isfinite(bore):
        return given.value, 0.0
    converted = (
        k_from_kv(given.value, bore=bore)
        if given.by == "kv"
        else k_from_cv(given.value, bore=bore)
    )
    return float(converted), 0.0


def _nothing(path: str) -> None:
    """Take no notice of a new wall that no scenario asks for."""


def _wall(path: str, reach: Reach, age: PipeAge, say: Callable[[str], None]) -> float:
    """Return roughness [m] or C of a reach at an age, nan and said when absent."""
    wall = reach.roughness
    if wall.law == "hazen_williams":
        coefficient = wall.coefficient_aged if age == "aged" else wall.coefficient_new
        if coefficient is None:
            say(f"{path}/roughness/coefficient_{age}")
        return np.nan if coefficient is None else coefficient
    quantity = wall.aged if age == "aged" else wall.new
    if quantity is None:
        say(f"{path}/roughness/{age}")
    return np.nan if quantity is None else quantity.si


def branches(leg: Leg, needs: Needs) -> tuple[float, float, float, float, float, float, bool]:
    """Return a leg's coefficients and bores, suction first, and its check valve.

    Returns
    -------
    tuple
        Loss over flow squared on the suction and on the discharge side [m/(m3/s)2], their bores
        [m], cracking head [m], full-open velocity [m/s] and whether that is assumed.
    """
    path = f"/legs/{leg.id}"
    suction, suction_bore = _branch(f"{path}/suction_branch", leg.suction_branch, needs)
    discharge, discharge_bore = _branch(f"{path}/discharge_branch", leg.discharge_branch, needs)
    valve = leg.discharge_branch
    cracking = 0.0 if valve.cracking_head is None else valve.cracking_head.si
    open_at = valve.full_open_velocity
    return (
        suction, discharge, suction_bore, discharge_bore, cracking,
        FULL_OPEN_VELOCITY if open_at is None else open_at.si, open_at is None,
    )  # fmt: skip


def _branch(path: str, branch: Branch, needs: Needs) -> tuple[float, float]:
    """Return loss over flow squared and bore of a branch."""
    bore = needs.must(f"{path}/bore", branch.bore)
    if branch.k is None:
        needs.stop(f"{path}/k")
        return np.nan, bore
    return (
        float(quadratic_coefficient(branch.k, bore=bore)) if np.isfinite(bore) else np.nan
    ), bore
