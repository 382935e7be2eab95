"""What a study needs of the document: absent fields are gathered, never guessed."""

from dataclasses import dataclass, field

from server.station.entry import Quantity
from server.studies.duty_result import Missing

ABSENT = "absent"
DEFAULT_USED = "default_used"  # the field is empty and its documented default stands in
NOT_IN_THIS_VERSION = "not_in_this_version"
NAN = float("nan")


@dataclass(slots=True)
class Needs:
    """Gathers absent fields: those that stop the study, those that leave a part out."""

    stops: list[Missing] = field(default_factory=list)
    leaves_out: list[Missing] = field(default_factory=list)

    def must(self, path: str, quantity: Quantity | None) -> float:
        """Return a quantity in SI that the study cannot do without; nan when absent."""
        if quantity is None:
            self.stop(path)
            return NAN
        return quantity.si

    def part(self, path: str, quantity: Quantity | None) -> float:
        """Return a quantity in SI that a part of the result needs; nan when absent."""
        if quantity is None:
            self.leave_out(path)
            return NAN
        return quantity.si

    def default(self, path: str, quantity: Quantity | None, value: float) -> float:
        """Return a quantity in SI, or its documented default, which is then told."""
        if quantity is None:
            self.leave_out(path, DEFAULT_USED)
            return value
        return quantity.si

    def stop(self, path: str, reason: str = ABSENT) -> None:
        """Say that `path` stands in the way of the whole study."""
        missing = Missing(path, reason)
        if missing not in self.stops:
            self.stops.append(missing)

    def leave_out(self, path: str, reason: str = ABSENT) -> None:
        """Say that a part of the result cannot be had for want of `path`."""
        missing = Missing(path, reason)
        if missing not in self.leaves_out:
            self.leaves_out.append(missing)


def si_or_none(quantity: Quantity | None) -> float | None:
    """Return a quantity in SI, None when absent and nothing hangs on it."""
    return None if quantity is None else quantity.si
