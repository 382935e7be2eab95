"""The two profiles of criteria: every rule with its SI and US limit, in sheet order.

US limits are the customary numbers, not conversions of the SI ones.
"""

from typing import Literal

from server.station.entry import Quantity
from server.studies.findings.pressure_rules import PRESSURE_RULES
from server.studies.findings.pump_rules import PUMP_RULES
from server.studies.findings.rule import Rule
from server.studies.findings.system_rules import SYSTEM_RULES

ProfileName = Literal["si_municipal", "us_municipal"]
RULES: dict[str, Rule] = {rule.key: rule for rule in PRESSURE_RULES + PUMP_RULES + SYSTEM_RULES}


def limit_in(rule: Rule, profile: ProfileName) -> Quantity | None:
    """Return the limit of `rule` in a profile; None where the profile has no number."""
    return rule.si if profile == "si_municipal" else rule.us
