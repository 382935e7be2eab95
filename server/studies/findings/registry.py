"""The registry of finding codes, in the order in which findings of one severity are listed."""

from server.studies.findings.finding_code import FindingCode
from server.studies.findings.input_codes import INPUT_CODES
from server.studies.findings.result_codes import RESULT_CODES
from server.studies.findings.tank_codes import TANK_CODES

CODES: dict[str, FindingCode] = {
    each.code: each for each in RESULT_CODES + TANK_CODES + INPUT_CODES
}
_ORDER = {code: index for index, code in enumerate(CODES)}

# what a memo must not leave unsaid: nothing in these words is computed, in any station
NOT_COMPUTED: tuple[str, ...] = (
    "Transients: power failure, starting and valve closure (surge). A closed zone, and any "
    "main with "
    "high points, needs a specialist's study.",
    "Energy, hours outside the preferred region and cost over the life.",
    "Vessels and starts an hour.",
    "Uncertainty of demand, roughness and pump tests.",
)


def order_of(code: str) -> int:
    """Return the place of a code among findings of one severity."""
    return _ORDER[code]
