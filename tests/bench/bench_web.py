"""What a person at the browser waits for, and what a day of edits leaves in memory."""

import contextlib
import os
import subprocess
import sys
import tempfile
import urllib.request
from collections.abc import Iterator
from pathlib import Path
from statistics import median
from time import perf_counter, process_time

from fastapi.testclient import TestClient

from server.app import create_app
from server.demo import load_demo
from server.serving import spare_collector
from server.settings import Settings
from tests.bench.registry import Measurement, bench

EDITS = 60
EDIT_BUDGET = 60.0  # median of a saved edit to its fragments [ms]
STARTS = 5
START_BUDGET = 2.0  # from the command to the first page [s]
EARLY, LATE = 200, 2_000  # edits
GROWTH_BUDGET = 10.0  # of resident memory between the two [MB]
FIELD = "/supply/states/low"


class Editor:
    """A browser that types in one field of the demo, again and again."""

    def __init__(self, client: TestClient, station_id: str) -> None:
        self.client, self.station_id, self.revision = client, station_id, 1

    def edit(self) -> str:
        """Type a new value, which moves every result; return the fragments."""
        form = {
            "op": "set",
            "path": FIELD,
            "text": f"{-40 - (self.revision % 500) / 100} kPa",
            "base": str(self.revision),
        }
        answer = self.client.post(
            f"/stations/{self.station_id}/edits",
            data=form,
            headers={"HX-Request": "true", "HX-Current-URL": self.page},
        )
        if answer.status_code != 200:
            raise RuntimeError(f"the edit was refused: {answer.text[:400]}")
        self.revision += 1
        return answer.text

    @property
    def page(self) -> str:
        """Address of the sheet that the edit is made on: the one with most to draw again."""
        return f"http://127.0.0.1/stations/{self.station_id}/supply"


@contextlib.contextmanager
def editor() -> Iterator[Editor]:
    """Open the demo in an application on a folder that is removed afterwards."""
    with tempfile.TemporaryDirectory() as folder:
        app = create_app(Settings(Path(folder)))
        headers = {"Sec-Fetch-Site": "same-origin"}
        with TestClient(app, base_url="http://127.0.0.1", headers=headers) as client:
            demo = load_demo(app.state.store)[0]
            spare_collector()  # as a served program does
            yield Editor(client, demo)


@bench("web: saved edit")
def saved_edit() -> list[Measurement]:
    """Measure from the posted form to the answer: merged, stored, solved, judged, drawn."""
    spent, worked = [], []
    with editor() as typing:
        for _ in range(5):
            typing.edit()
        for _ in range(EDITS):
            start, busy = perf_counter(), process_time()
            text = typing.edit()
            spent.append(1e3 * (perf_counter() - start))
            worked.append(1e3 * (process_time() - busy))
    return [
        Measurement(
            name="saved edit to rendered fragments",
            value=median(spent),
            unit="ms",
            budget=EDIT_BUDGET,
            note=f"median of {EDITS}, least {min(spent):.0f}, CPU {median(worked):.0f} ms, "
            f"{len(text) / 1000:.0f} kB",
        )
    ]


@bench("web: start")
def start_to_first_page() -> list[Measurement]:
    """Measure from the command to the list of stations, with the demo already loaded."""
    with tempfile.TemporaryDirectory() as folder:
        spent = sorted(_start(folder) for _ in range(STARTS + 1))
    return [
        Measurement(
            name="start to first page",
            value=median(spent[:-1]),  # the slowest is the first, which loads the demo
            unit="s",
            budget=START_BUDGET,
            note=f"median of {STARTS}, least {spent[0]:.2f} s",
        )
    ]


def _start(folder: str) -> float:
    command = [
        sys.executable,
        "-m",
        "server",
        "serve",
        "--demo",
        "--port",
        "0",
        "--data",
        folder,
    ]
    start = perf_counter()
    with subprocess.Popen(command, stdout=subprocess.PIPE, text=True) as process:
        try:
            said = process.stdout.readline() if process.stdout else ""
            with urllib.request.urlopen(said.split()[3], timeout=30) as answer:
                answer.read()
            return perf_counter() - start
        finally:
            process.terminate()


@bench("web: memory")
def memory_of_many_edits() -> list[Measurement]:
    """Measure in a process of its own, so that nothing else is counted."""
    script = "from tests.bench.bench_web import grown; print(grown())"
    done = subprocess.run(
        [sys.executable, "-c", script], capture_output=True, text=True, check=True
    )
    grown_by, late = map(float, done.stdout.split())
    return [
        Measurement(
            name=f"memory from edit {EARLY} to {LATE}",
            value=grown_by,
            unit="MB",
            budget=GROWTH_BUDGET,
            note=f"{late:.0f} MB at the end",
        )
    ]


def grown() -> str:
    """Edit on and return the growth of resident memory and its last value [MB]."""
    with editor() as typing:
        for _ in range(EARLY):
            typing.edit()
        early = _resident()
        for _ in range(LATE - EARLY):
            typing.edit()
        late = _resident()
    return f"{late - early:.3f} {late:.1f}"


def _resident() -> float:
    pages = int(Path("/proc/self/statm").read_text(encoding="ascii").split()[1])
    return pages * os.sysconf("SC_PAGE_SIZE") / 1e6
