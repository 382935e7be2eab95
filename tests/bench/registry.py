"""The list of benches: each file `bench_*.py` here adds to it with `@bench`."""

import importlib
import os
import pkgutil
import platform
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path


@dataclass(frozen=True, slots=True, kw_only=True)
class Measurement:
    """One measured value and the budget that it has to keep."""

    name: str
    value: float
    unit: str
    budget: float
    at_least: bool = False  # the budget is a least value, not a most
    note: str = ""

    @property
    def holds(self) -> bool:
        """Whether the value keeps the budget."""
        return self.value >= self.budget if self.at_least else self.value <= self.budget

    def line(self) -> str:
        """Return name, value, budget and verdict in columns."""
        rule = "at least" if self.at_least else "at most"
        verdict = "ok" if self.holds else "OVER BUDGET"
        text = f"{self.name:<46} {self.value:>10.4g} {self.unit:<6}"
        return (
            f"{text} {rule} {self.budget:g} {self.unit:<6} {verdict:<12} {self.note}".rstrip()
        )


Bench = Callable[[], list[Measurement]]
_BENCHES: dict[str, Bench] = {}


def bench(name: str) -> Callable[[Bench], Bench]:
    """Register a function that measures one thing and returns its measurements."""

    def keep(function: Bench) -> Bench:
        if name in _BENCHES:
            raise ValueError(f"two benches are called {name}")
        _BENCHES[name] = function
        return function

    return keep


def benches() -> dict[str, Bench]:
    """Return all benches by name, after importing every `bench_*.py` beside this file."""
    for module in pkgutil.iter_modules([str(Path(__file__).parent)]):
        if module.name.startswith("bench_"):
            importlib.import_module(f"tests.bench.{module.name}")
    return dict(sorted(_BENCHES.items()))


def machine() -> str:
    """Return what the figures were measured on."""
    cores = os.cpu_count() or 0
    load = f"{os.getloadavg()[0]:.1f}" if hasattr(os, "getloadavg") else "not known"
    return (
        f"{platform.system()} {platform.machine()}, {cores} cores, load {load},"
        f" Python {platform.python_version()}"
    )
