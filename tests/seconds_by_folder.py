"""Print after a run how many seconds each folder of tests took."""

from collections import defaultdict

import pytest


def seconds_by_folder(reports: list[pytest.TestReport]) -> dict[str, float]:
    """Return the seconds of set-up, call and tear-down, added up by folder of the test."""
    seconds: dict[str, float] = defaultdict(float)
    for report in reports:
        seconds[report.nodeid.split("::")[0].rpartition("/")[0]] += report.duration
    return dict(sorted(seconds.items(), key=lambda item: -item[1]))


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    """Add the table of seconds to the end of pytest's own report."""
    reports = [
        report
        for group in terminalreporter.stats.values()
        for report in group
        if isinstance(report, pytest.TestReport)
    ]
    terminalreporter.section("seconds by folder")
    for folder, seconds in seconds_by_folder(reports).items():
        terminalreporter.write_line(f"{seconds:8.1f}  {folder}")
