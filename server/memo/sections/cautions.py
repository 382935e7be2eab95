"""The cautions that every memo carries."""

from server.memo.blocks import Block, Heading, Items
from server.memo.source import MemoSource

CAUTIONS: tuple[str, ...] = (
    "Results rest on the inputs listed; defaults are marked; what was not checked is listed "
    "before the record.",
    "The states are steady. Transients of power failure, valves and pump starts are not "
    "computed here; a closed"
    " zone, and any main with high points, needs a specialist's study.",
    "A hydrant flow test is one moment. Repeat it at a peak day before the order, and have "
    "the supplying utility's"
    " written consent to the draw and to the lowest pressure.",
    "This is not a listed fire pump: a building's sprinkler or standpipe pump is designed to "
    "its own standard by others.",
    "Pump curves are as typed. The order needs a witnessed test to the stated grade; a "
    "published NPSH required is a"
    " 3 % head-drop value, not a value without cavitation.",
    "Low-suction trip against contamination of the supply, and whether it may act in a fire, "
    "is decided by the authority.",
    "Existing customers whose service is above the maximum pressure need regulators before "
    "the station starts.",
    "With the station off the zone can drain backwards: provide against backflow; start "
    "again only after filling and"
    " disinfection, with air released.",
    "Protection against dead-head, minimum flow and over-pressure, and the interlocks, are "
    "hardware to be tested on"
    " commissioning; the program's values are not settings until confirmed.",
    "The level and datum of every sensor are to be surveyed; a set point is valid only at "
    "that level.",
    "Electrical and structural work, ventilation, noise, flood, confined space and safe "
    "isolation are outside this memo.",
    "The result names program version, method, date and who checked it; the engineer in "
    "charge decides. Local codes"
    " and licensed practice govern.",
)


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    return (Heading("Cautions"), Items(tuple((line,) for line in CAUTIONS), numbered=True))
