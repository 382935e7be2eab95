"""Reads the data files: heading lines with the source, then one row a value."""

import csv
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

import pytest

DATA = Path(__file__).parent / "data"
HEADINGS = ("checks", "citation", "place", "printed", "provenance", "tolerance")


@dataclass(frozen=True)
class Row:
    """One row of a data file: cells by column name, read as text or as a number."""

    topic: str
    cells: dict[str, str]

    @property
    def check(self) -> str:
        """Id of the check that the row belongs to."""
        return self.cells["id"]

    def text(self, column: str) -> str:
        """Return a cell as it is written."""
        return self.cells[column]

    def has(self, column: str) -> bool:
        """Return whether a cell is filled."""
        return self.cells[column] != ""

    def __getitem__(self, column: str) -> float:
        """Return a cell as a number."""
        return float(self.cells[column])


@dataclass(frozen=True)
class Source:
    """A data file: its heading and its rows."""

    name: str
    heading: dict[str, str]
    rows: tuple[Row, ...]


@cache
def source(name: str) -> Source:
    """Return the data file `name`, without its ending."""
    lines = (DATA / f"{name}.csv").read_text(encoding="utf-8").splitlines()
    heading: dict[str, str] = {}
    for line in lines:
        if not line.startswith("# "):
            break
        key, _, value = line[2:].partition(": ")
        heading[key] = value
    table = csv.DictReader(lines[len(heading) :])
    return Source(
        name=name, heading=heading, rows=tuple(Row(heading["checks"], cells) for cells in table)
    )


def checks(name: str, **where: str) -> list[Any]:
    """Return the rows of a data file as test parameters, those whose cells equal `where`."""
    chosen = [
        row
        for row in source(name).rows
        if all(row.text(column) == value for column, value in where.items())
    ]
    if not chosen:
        raise LookupError(f"data/{name}.csv has no row with {where}")
    counted: dict[str, int] = {}
    params = []
    for row in chosen:
        number = counted[row.check] = counted.get(row.check, 0) + 1
        # a check of several rows: the first keeps the bare id, the others get a number
        params.append(
            pytest.param(row, id=row.check if number == 1 else f"{row.check}~{number}")
        )
    return params
