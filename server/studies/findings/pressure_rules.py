"""Rules on pressure: at customers, hydrants, the suction and in the supplying zone."""

from server.studies.findings.rule import Rule, rule
from server.units import Dimension as D

P = D.PRESSURE
PRESSURE_RULES: tuple[Rule, ...] = (
    rule("service-pressure-min", "Lowest service pressure, peak hour and normal", P, "at_least",
         (200, "kPa"), (35, "psi"), "common_practice",
         "US: 30 TAC 290.45(a)(2) 35 psi; WAC 246-290-230(5) 30 psi as the other value in "
         "print",
         "main-and-zone"),
    rule("fire-pressure-min", "Lowest pressure at any customer during a fire", P, "at_least",
         (140, "kPa"), (20, "psi"), "published",
         "WAC 246-290-230(6); 30 TAC 290.45(a)(2); WAC 246-290-420(3)", "main-and-zone"),
    rule("hydrant-residual-min", "Residual at the operating hydrant", P, "at_least",
         (150, "kPa"), (20, "psi"), "memory",
         "SI: DVGW W 405, 1.5 bar. US 20 psi is published: WAC 246-290-420(3)",
         "main-and-zone"),
    rule("service-pressure-max", "Highest service pressure, normal (no flow, set point held, "
                                 "high supply)",
         P, "at_most", (600, "kPa"), (80, "psi"), "common_practice",
         "US: UPC 608.2 and IRC P2903.3.1, above 80 psi a regulator at the building",
         "main-and-zone"),
    rule("service-pressure-max-abnormal", "Highest service pressure, abnormal (shut-off at top "
                                          "speed, high supply)",
         P, "at_most", (1000, "kPa"), (150, "psi"), "common_practice", "", "main-and-zone"),
    rule("pressure-rating", "Pressure rating where none is typed (suction and shut-off head, "
                            "no surge)",
         P, "at_most", (1600, "kPa"), (250, "psi"), "common_practice", "PN 16; US typed",
         "sets"),
    rule("suction-main-minimum", "Supplying main at the connection, at ground level", P,
         "at_least",
         (140, "kPa"), (20, "psi"), "published",
         "Utah R309-540-6(3)(b); 35 Ill. Adm. Code 653.107(b); NJAC 7:10-11.9(d)3", "supply"),
    rule("suction-gauge-minimum", "Station suction gauge", P, "at_least",
         (140, "kPa"), (20, "psi"), "common_practice",
         "Lock-outs in print differ by place, 5 to 20 psi: Washington DOH 331-123 section "
         "10.2.2, city codes",
         "supply"),
    rule("suction-alarm", "Low-suction alarm at the suction gauge", P, "setting",
         (140, "kPa"), (20, "psi"), "common_practice", "", "sets"),
    rule("suction-trip", "Low-suction trip at the suction gauge", P, "setting",
         (70, "kPa"), (10, "psi"), "published",
         "US 10 psi: city codes of Ohio; differs by place. SI value is common practice",
         "sets"),
    rule("suction-trip-delay", "Delay of the low-suction trip", D.TIME, "setting",
         (10, "s"), (10, "s"), "common_practice", "", "sets"),
    rule("supplying-zone-fire-min", "Supplying zone anywhere, in a fire", P, "at_least",
         (140, "kPa"), (20, "psi"), "published",
         "Washington DOH 331-123 sections 10.2 and 10.2.2; SI value is common practice",
         "supply"),
    rule("supplying-zone-normal-min", "Supplying zone anywhere, normal", P, "at_least",
         (200, "kPa"), (30, "psi"), "published",
         "Washington DOH 331-123 section 10.2; SI value is common practice", "supply"),
    rule("station-off-pressure-min", "Services with the station off, else storage or standby "
                                     "power", P,
         "at_least", (50, "kPa"), (20, "psi"), "common_practice",
         "Duty to answer it: 35 Ill. Adm. Code 653.107(c), (d)", "main-and-zone"),
    rule("transient-pressure-min", "Lowest transient pressure", P, "at_least",
         (35, "kPa"), (5, "psi"), "common_practice", "Highest: the rating of the main",
         "main-and-zone"),
    rule("pressure-per-speed-max", "Pressure change for 1 % of speed", P, "at_most",
         (20, "kPa"), (3, "psi"), "common_practice", "", "sets"),
    rule("suction-lift-max", "Suction lift", D.HEAD, "at_most",
         (4.5, "m"), (15, "ft"), "published",
         "MIL-HDBK-1005/7A; OAC 252:626-15-3, 15 ft", "supply"),
    rule("low-state-shift", "Low state of a street main", P, "stated", None, None,
         "common_practice",
         "must be entered; often 35 to 70 kPa (5 to 10 psi) under the test", "supply"),
)  # fmt: skip
