"""The duty table: columns, and a row a scenario with the worst of its three supply states."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from server.figures.band import BandMark, farthest
from server.figures.duty_rows import DutyRow, ScenarioDuty, worst
from server.pages.sheet import SheetView
from server.pages.strip_view import SEVERITY_CSS
from server.studies.findings import words
from server.studies.findings.judged_set import JudgedSet
from server.studies.shapes import Finding
from server.units import Dimension as D
from server.units import display_unit, shown

CRITERION_COLUMNS = {
    "suction-main-minimum": "connection",
    "suction-gauge-minimum": "suction",
    "suction-trip": "suction",
    "npsh-ratio-min": "npsh",
    "npsh-margin-min": "npsh",
    "npsh-margin-outside-min": "npsh",
}


@dataclass(frozen=True, slots=True)
class ColumnView:
    """Head of a column; `group` is what the chooser hides, empty for what always stands."""

    key: str
    title: str
    unit: str
    group: str
    numeric: bool


@dataclass(frozen=True, slots=True)
class CellView:
    """One cell: the value in the row's own state, the worst of the three where it differs."""

    column: ColumnView
    text: str
    css: str = ""
    mark: BandMark | None = None
    worst: str = ""
    worst_css: str = ""
    lines: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, slots=True)
class RowView:
    """One scenario, or one of its states."""

    scenario: str
    title: str
    href: str
    state: str
    current: bool
    reason: str
    cells: tuple[CellView, ...]


def columns_of(sheet: SheetView, judged: JudgedSet) -> tuple[ColumnView, ...]:
    """Return the columns of a solved set, in their order."""

    def unit(dimension: D) -> str:
        return display_unit(dimension, sheet.view).printed

    head, pressure = unit(D.HEAD), unit(D.PRESSURE)
    points = tuple(
        ColumnView(f"point-{p}", point.title or "Point", pressure, "points", True)
        for p, point in enumerate(judged.points)
    )
    return (
        ColumnView("flow", "Flow", unit(D.FLOW), "", True),
        ColumnView("required", "Head asked", head, "heads", True),
        ColumnView("head", "Head given", head, "", True),
        ColumnView("running", "Running", "", "running", False),
        ColumnView("speed", "Speed", "%", "running", True),
        ColumnView("held", "Set point held", "", "heads", False),
        ColumnView("region", "Of best-efficiency flow", _preferred_words(judged), "", False),
        ColumnView("npsh", "NPSH margin", head, "suction", True),
        ColumnView("connection", "Supplying main", pressure, "suction", True),
        ColumnView("suction", "Suction gauge", pressure, "suction", True),
        *points,
        ColumnView("shaft", "Shaft power", unit(D.POWER), "power", True),
        ColumnView("wire", "Wire power", unit(D.POWER), "power", True),
        ColumnView("energy", "Energy", unit(D.SPECIFIC_ENERGY), "power", True),
        ColumnView("findings", "Findings", "", "findings", False),
    )


def _preferred_words(judged: JudgedSet) -> str:
    regions = {judged.preferred(n) for n in range(len(judged.slots))}
    if len(regions) != 1:
        return "preferred region by pump"
    low, high = regions.pop()
    return f"preferred {shown(low, D.RATIO, 'si', 0)} to {shown(high, D.RATIO, 'si', 0)} %"


def scenario_row(
    sheet: SheetView, judged: JudgedSet, duty: ScenarioDuty, columns: Sequence[ColumnView]
) -> RowView:
    """Return a scenario in its own state, with the worst of the three beside."""
    row = state_row(sheet, judged, duty.own, columns)
    worsts = _worsts(sheet, judged, duty)
    cells = tuple(
        CellView(
            cell.column,
            cell.text,
            cell.css,
            cell.mark,
            *worsts.get(cell.column.key, ("", "")),
            lines=_finding_lines(sheet, judged, duty) if cell.column.key == "findings" else (),
        )
        for cell in row.cells
    )
    return RowView(
        row.scenario,
        row.title,
        row.href,
        row.state,
        row.scenario == sheet.scenario_id,
        row.reason,
        cells,
    )


def state_row(
    sheet: SheetView, judged: JudgedSet, row: DutyRow, columns: Sequence[ColumnView]
) -> RowView:
    """Return one case: a scenario in one supply state."""
    bad = _failing(sheet, judged, row)
    texts = _texts(sheet, row)
    cells = tuple(
        CellView(
            column,
            texts.get(column.key, ""),
            "bad" if column.key in bad else "",
            row.mark if column.key == "region" else None,
            lines=_finding_lines_of(sheet, judged, (row,)) if column.key == "findings" else (),
        )
        for column in columns
    )
    return RowView(
        row.of.scenario,
        row.title,
        sheet.case_href(row.of.scenario),
        row.state,
        row.own,
        row.reason,
        cells,
    )


def _texts(sheet: SheetView, row: DutyRow) -> dict[str, str]:
    view = sheet.view
    texts = {
        "flow": shown(row.flow, D.FLOW, view),
        "required": shown(row.required_head, D.HEAD, view),
        "head": shown(row.head, D.HEAD, view),
        "running": row.running,
        "speed": shown(row.speed, D.RATIO, view),
        "held": "–" if row.held is None else "yes" if row.held else "no, top speed",
        "region": "no duty" if row.mark is None else "",
        "npsh": shown(row.npsh_margin, D.HEAD, view),
        "connection": shown(row.connection_pressure, D.PRESSURE, view),
        "suction": shown(row.suction_pressure, D.PRESSURE, view),
        "shaft": shown(row.shaft_power, D.POWER, view),
        "wire": shown(row.wire_power, D.POWER, view),
        "energy": shown(row.energy, D.SPECIFIC_ENERGY, view),
    }
    for p, pressure in enumerate(row.point_pressures):
        texts[f"point-{p}"] = shown(pressure, D.PRESSURE, view)
    return {key: "no water" if key in row.dry else text for key, text in texts.items()}


def _worsts(
    sheet: SheetView, judged: JudgedSet, duty: ScenarioDuty
) -> dict[str, tuple[str, str]]:
    """Return the worst of three states by column, where it differs from the own state."""
    told: dict[str, tuple[str, str]] = {}

    def tell(key: str, row: DutyRow | None) -> None:
        if row is None or row is duty.own:
            return
        text = _texts(sheet, row)[key]
        if text != _texts(sheet, duty.own)[key]:
            css = "bad" if key in _failing(sheet, judged, row) else ""
            told[key] = f"{text} at {row.of.supply}", css

    readers: tuple[tuple[str, Callable[[DutyRow], float | None]], ...] = (
        ("npsh", lambda r: r.npsh_margin),
        ("connection", lambda r: r.connection_pressure),
        ("suction", lambda r: r.suction_pressure),
    )
    for key, value in readers:
        tell(key, worst(duty.states, value, dry=key))
    for p, point in enumerate(judged.points):
        key, highest = f"point-{p}", point.role == "lowest"
        tell(key, worst(duty.states, _pressure_at(p), highest=highest, dry=key))
    not_held = [
        row.of.supply for row in duty.states if row.held is False and row is not duty.own
    ]
    if duty.own.held and not_held:
        told["held"] = f"no at {' and '.join(not_held)}", "bad"
    marks = {id(row.mark): row for row in duty.states if row.mark is not None}
    far = farthest([row.mark for row in duty.states if row.mark is not None])
    if far is not None and duty.own.mark is not None and far.text != duty.own.mark.text:
        told["region"] = f"{far.text} at {marks[id(far)].of.supply}", far.css
    lost = [row.of.supply for row in duty.states if row.reason]
    if lost and not duty.own.reason:
        told["running"] = f"no duty at {' and '.join(lost)}", "bad"
    return told


def _pressure_at(point: int) -> Callable[[DutyRow], float | None]:
    return lambda row: row.point_pressures[point]


def _failing(sheet: SheetView, judged: JudgedSet, row: DutyRow) -> set[str]:
    """Return the columns of which a stop or fail stands in this very case."""
    columns: set[str] = set()
    for finding in _of_case(sheet, judged, (row,)):
        if SEVERITY_CSS[finding.severity] != "stop":
            continue
        if finding.criterion is not None:
            key = finding.criterion.rsplit("/", 1)[-1]
            if key in CRITERION_COLUMNS:
                columns.add(CRITERION_COLUMNS[key])
        if finding.code == "suction_main_low" and any(
            a.name == "gauge" for a in finding.others
        ):
            columns.add("suction")  # one finding tells of both
        for p in range(len(judged.points)):
            if finding.subject.startswith(judged.point_path(p)):
                columns.add(f"point-{p}")
    return columns


def _of_case(sheet: SheetView, judged: JudgedSet, rows: Sequence[DutyRow]) -> list[Finding]:
    cases = {row.of for row in rows}
    return [
        finding
        for finding in sheet.assessment.findings
        if finding.pump_set in (None, judged.id) and not cases.isdisjoint(finding.cases)
    ]


def _finding_lines(
    sheet: SheetView, judged: JudgedSet, duty: ScenarioDuty
) -> tuple[tuple[str, str], ...]:
    return _finding_lines_of(sheet, judged, duty.states)


def _finding_lines_of(
    sheet: SheetView, judged: JudgedSet, rows: Sequence[DutyRow]
) -> tuple[tuple[str, str], ...]:
    found = _of_case(sheet, judged, rows)
    return tuple(dict.fromkeys((SEVERITY_CSS[f.severity], words.short(f)) for f in found))
