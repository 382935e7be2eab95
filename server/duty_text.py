"""What `firmhead solve` prints for a person: the duty table of every set, then the findings."""

import textwrap
from collections.abc import Sequence

from server.figures.case_words import judged_set
from server.figures.duty_rows import DutyRow, scenario_duties
from server.station import paths
from server.studies.assess import Assessment
from server.studies.duty_result import DutyResult, NotSolved
from server.studies.findings.judged_set import JudgedSet
from server.studies.findings.words import SEVERITY_WORDS, sentence
from server.units import Dimension, View, display_unit, shown

WIDTH = 100


def solved_text(assessment: Assessment) -> str:
    """Return the results of a station as plain text, in the station's own units."""
    station = assessment.station
    view = station.display.units
    parts = [
        station.identity.title or "Station without a name",
        _wrapped(assessment.lead(view)),
    ]
    parts.extend(_set_text(assessment, each.id, view) for each in station.sets)
    parts.append(_findings_text(assessment, view))
    parts.append(
        _wrapped(
            "Local codes, the supplying utility and the licensed engineer in charge decide; "
            "what could not be checked is listed as not checked."
        )
    )
    return "\n\n".join(parts)


def _set_text(assessment: Assessment, set_id: str, view: View) -> str:
    result = assessment.for_set(set_id)
    title = paths.item_title(assessment.station, f"/sets/{set_id}")
    if not isinstance(result, DutyResult):
        return f"{title}: not solved\n" + _missing_text(assessment, result)
    judged = judged_set(assessment, set_id)
    if judged is None:
        raise ValueError(f"the set {set_id} is solved but not in the station")
    rows = [duty.own for duty in scenario_duties(judged)]
    if not rows:
        return f"{title}: no scenario is used, so there is no duty."
    lines = [title, *_table(_head(judged, view), [_cells(row, view) for row in rows])]
    lines.extend(f"  {row.title}: {row.reason}" for row in rows if row.reason)
    lines.append(f"Each row is the scenario's own supply state. {_key(judged, view)}")
    return "\n".join(lines)


def _missing_text(assessment: Assessment, answer: NotSolved | None) -> str:
    missing = () if answer is None else answer.missing
    return "\n".join(
        f"  {_field(assessment, each.path)}: {each.reason.replace('_', ' ')} ({each.path})"
        for each in missing
    )


def _field(assessment: Assessment, path: str) -> str:
    return paths.words(assessment.station, path)


def _head(judged: JudgedSet, view: View) -> list[tuple[str, str]]:
    pressure = display_unit(Dimension.PRESSURE, view).printed
    head = display_unit(Dimension.HEAD, view).printed
    return [
        ("Scenario", ""),
        ("State", ""),
        ("Flow", display_unit(Dimension.FLOW, view).printed),
        ("Head", head),
        ("Running", ""),
        ("Speed", "%"),
        ("Held", ""),
        ("BEP", "%"),
        ("Region", ""),
        ("NPSH margin", head),
        ("Main", pressure),
        ("Suction", pressure),
        *((f"({letter})", pressure) for letter, _ in _points(judged)),
        ("Wire power", display_unit(Dimension.POWER, view).printed),
    ]


def _points(judged: JudgedSet) -> list[tuple[str, str]]:
    """Return each named point by a letter, since its title is longer than its column."""
    titles = [point.title or "point" for point in judged.result.points]
    return [(f"p{number}", title) for number, title in enumerate(titles, 1)]


def _key(judged: JudgedSet, view: View) -> str:
    named = ", ".join(f"({letter}) {title}" for letter, title in _points(judged))
    return f"Pressures at {named}." if named else ""


def _cells(row: DutyRow, view: View) -> list[str]:
    def number(value: float | None, dimension: Dimension, decimals: int | None = None) -> str:
        return shown(value, dimension, view, decimals)

    def wet(place: str, value: float | None, dimension: Dimension) -> str:
        return "no water" if place in row.dry else number(value, dimension)

    held = {True: "yes", False: "no", None: "–"}[row.held]
    return [
        row.title,
        row.state,
        number(row.flow, Dimension.FLOW),
        number(row.head, Dimension.HEAD),
        row.running,
        number(row.speed, Dimension.RATIO),
        held,
        row.mark.percent if row.mark is not None else "–",
        row.mark.word if row.mark is not None else "–",
        wet("npsh", row.npsh_margin, Dimension.HEAD),
        wet("connection", row.connection_pressure, Dimension.PRESSURE),
        wet("suction", row.suction_pressure, Dimension.PRESSURE),
        *(
            wet(f"point-{p}", pressure, Dimension.PRESSURE)
            for p, pressure in enumerate(row.point_pressures)
        ),
        number(row.wire_power, Dimension.POWER),
    ]


def _table(head: Sequence[tuple[str, str]], rows: Sequence[Sequence[str]]) -> list[str]:
    """Return a table in plain text: heads, units under them, words left and numbers right."""
    titles, units = [title for title, _ in head], [unit for _, unit in head]
    columns = list(zip(titles, units, *rows, strict=True))
    widths = [max(map(len, column)) for column in columns]
    numbers = [bool(unit) for unit in units]

    def line(cells: Sequence[str]) -> str:
        padded = (
            cell.rjust(width) if number else cell.ljust(width)
            for cell, width, number in zip(cells, widths, numbers, strict=True)
        )
        return "  ".join(padded).rstrip()

    rule = "  ".join("-" * width for width in widths)
    return [line(titles), line(units), rule, *(line(row) for row in rows)]


def _findings_text(assessment: Assessment, view: View) -> str:
    if not assessment.findings:
        return "No findings."
    lines = ["Findings, worst first"]
    for finding in assessment.findings:
        words = sentence(finding, assessment.station, view)
        lines.append(_wrapped(f"{SEVERITY_WORDS[finding.severity]}: {words}", indent="  "))
    return "\n".join(lines)


def _wrapped(text: str, indent: str = "") -> str:
    # a number is not torn from its unit: the space between them is a hard one
    return textwrap.fill(
        text.replace("\u00a0", "\u2007"),
        WIDTH,
        subsequent_indent=indent,
        break_long_words=False,
        break_on_hyphens=False,
    ).replace("\u2007", " ")
