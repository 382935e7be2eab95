"""The `firmhead` command: serve, solve, memo, schema. A run imports only what it needs."""

import argparse
import io
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from server import __version__

if TYPE_CHECKING:
    from server.station.station import Station

DONE, FOUND, BAD_INPUT = 0, 1, 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit code: 0 done, 1 found with --strict, 2 bad input."""
    parser = _parser()
    chosen = parser.parse_args(arguments)
    if chosen.command is None:
        parser.print_help()
        return BAD_INPUT
    run = {"serve": _serve, "solve": _solve, "memo": _memo, "schema": _schema}[chosen.command]
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            # a console that lacks a letter shows a question mark, not a traceback
            stream.reconfigure(errors="replace")
    try:
        code = run(chosen)
        sys.stdout.flush()
        return code
    except BrokenPipeError:
        # whoever read the output has seen enough; what is left must not raise at exit
        sys.stdout = None
        return DONE


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="firmhead",
        description="Sizes a booster pumping station for a pressure zone, checks it and writes "
        "the memo.",
    )
    parser.add_argument("--version", action="version", version=f"firmhead {__version__}")
    commands = parser.add_subparsers(dest="command", metavar="COMMAND")

    serve = commands.add_parser("serve", help="start the program and say its address")
    serve.add_argument(
        "--port", metavar="PORT", help="default 8765, or FIRMHEAD_PORT; 0: a free one"
    )
    serve.add_argument(
        "--data",
        metavar="FOLDER",
        help="where stations are kept; default FIRMHEAD_DATA, else the user's data folder",
    )
    serve.add_argument(
        "--demo", action="store_true", help="load the demo station if it is not there"
    )

    solve = commands.add_parser("solve", help="solve and judge a station file")
    solve.add_argument("station", metavar="STATION.json")
    solve.add_argument(
        "-o", dest="out", metavar="RESULTS.json", help="write all results as JSON"
    )
    solve.add_argument(
        "--strict",
        action="store_true",
        help="exit 1 when anything stops, does not meet or is not checked",
    )

    memo = commands.add_parser("memo", help="write the memo of a station file")
    memo.add_argument("station", metavar="STATION.json")
    memo.add_argument("-o", dest="out", metavar="memo.html", required=True)

    schema = commands.add_parser("schema", help="print the JSON schema of a station file")
    schema.add_argument(
        "--results", action="store_true", help="print the schema of the results instead"
    )
    return parser


def _serve(chosen: argparse.Namespace) -> int:
    from server.serving import ServingRefused, serve
    from server.settings import SettingRefused, read_settings

    try:
        settings = read_settings(port=chosen.port, data_folder=chosen.data, demo=chosen.demo)
        serve(settings, lambda line: print(line, flush=True))
    except (SettingRefused, ServingRefused) as problem:
        return _refused(str(problem))
    return DONE


def _solve(chosen: argparse.Namespace) -> int:
    station = _read(chosen.station)
    if station is None:
        return BAD_INPUT
    from server.duty_text import solved_text
    from server.studies.assess import assess
    from server.studies.shapes import Severity

    assessment = assess(station)
    if chosen.out is not None:
        from server.studies.results_json import results_bytes

        if not _written(chosen.out, results_bytes(assessment)):
            return BAD_INPUT
    print(solved_text(assessment))
    open_ones = (Severity.STOP, Severity.FAIL, Severity.NOT_CHECKED)
    found = any(finding.severity in open_ones for finding in assessment.findings)
    return FOUND if chosen.strict and found else DONE


def _memo(chosen: argparse.Namespace) -> int:
    station = _read(chosen.station)
    if station is None:
        return BAD_INPUT
    from server.memo.to_html import memo_html

    page = memo_html(station, station.display.units, station.display.paper).encode("utf-8")
    return DONE if _written(chosen.out, page) else BAD_INPUT


def _schema(chosen: argparse.Namespace) -> int:
    import json

    if chosen.results:
        from server.studies.results_schema import results_schema

        schema = results_schema()
    else:
        from server.station.schema import station_schema

        schema = station_schema()
    print(json.dumps(schema, indent=1, ensure_ascii=False))
    return DONE


def _read(name: str) -> "Station | None":
    """Return the station of a file; None when it is refused, with each fault on a line."""
    from server.station.faults import BadStation
    from server.station.reader import LARGEST_FILE, read_station

    try:
        # one byte more than is allowed tells that a file is too large without reading all of it
        with Path(name).open("rb") as file:
            data = file.read(LARGEST_FILE + 1)
    except OSError as problem:
        _refused(f"{name} cannot be read: {problem.strerror or problem}.")
        return None
    try:
        return read_station(data)
    except BadStation as bad:
        for fault in bad.faults:
            where = f" ({fault.path})" if fault.path else ""
            _refused(f"{name}: {fault.sentence}{where}")
        return None


def _written(name: str, data: bytes) -> bool:
    try:
        Path(name).write_bytes(data)
    except OSError as problem:
        _refused(f"{name} cannot be written: {problem.strerror or problem}.")
        return False
    return True


def _refused(sentence: str) -> int:
    print(f"firmhead: {sentence}", file=sys.stderr)
    return BAD_INPUT
