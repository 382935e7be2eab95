"""Rules on velocities, capacity, fire, the flow test and standby."""

from server.studies.findings.rule import Rule, rule
from server.units import Dimension as D

V = D.SPEED
SYSTEM_RULES: tuple[Rule, ...] = (
    rule("firm-units-out", "Units out when firm capacity is judged, the largest first", D.NUMBER, "setting",
         (1, "1"), (1, "1"), "published",
         "closed zone: the larger of peak hour and maximum day with fire. Utah R309-540-6(2); "
         "35 Ill. Adm. Code 604.1350; WAC 246-293-660; codes differ", "sets", 0),
    rule("firm-tank-hours", "Hours in which the maximum day is pumped to a tank on the zone", D.TIME,
         "setting", (20, "h"), (24, "h"), "common_practice",
         "US 24 h is published: SC R.61-58.4, Washington", "sets"),
    rule("suction-line-velocity-max", "Velocity in suction line and manifold", V, "at_most",
         (1.5, "m/s"), (5, "ft/s"), "published", "trade guides: 1.5 m/s, 2.0 m/s on short lengths", "supply"),
    rule("suction-branch-velocity-max", "Velocity in a suction branch", V, "at_most",
         (1.5, "m/s"), (5, "ft/s"), "published", "trade guides: 1.5 m/s, 2.0 m/s on short lengths", "sets"),
    rule("discharge-branch-velocity-max", "Velocity in a discharge branch", V, "at_most",
         (2.5, "m/s"), (8, "ft/s"), "common_practice", "", "sets"),
    rule("main-velocity-max", "Velocity in the discharge main, peak and normal", V, "at_most",
         (1.5, "m/s"), (5, "ft/s"), "common_practice", "2.4 m/s (8 ft/s) is in print as an upper value",
         "main-and-zone"),
    rule("main-velocity-fire-max", "Velocity in the discharge main, fire", V, "at_most",
         (3.0, "m/s"), (10, "ft/s"), "common_practice", "", "main-and-zone"),
    rule("main-velocity-min", "Velocity in the discharge main reached once a day", V, "at_least",
         (0.3, "m/s"), (1, "ft/s"), "common_practice", "information only", "main-and-zone"),
    rule("vessel-connections-max", "Connections served by a hydropneumatic vessel", D.NUMBER, "at_most",
         None, (150, "1"), "published",
         "IDAPA 58.01.08.547; 35 Ill. Adm. Code 604.1345; never counted as storage or fire", "sets", 0),
    rule("submergence", "Submergence of a tank outlet", D.LENGTH, "stated", None, None, "memory",
         "S = D (1 + 2.3 Fr), ANSI/HI 9.8", "supply"),
    rule("standby-power", "Standby power", D.NUMBER, "stated", None, None, "published",
         "pumps for the average day of the maximum month; a closed zone that pumps fire: maximum day and "
         "fire. TM 5-813-9 paragraph 3-7; 30 TAC 290.45; OAC 252:626-15-3(6); codes differ", "sets"),
    rule("transient-max", "Highest transient pressure", D.PRESSURE, "stated", None, None, "common_practice",
         "the rating of the main", "main-and-zone"),
    rule("fire-duration-min", "Duration of the design fire", D.TIME, "at_least",
         (2, "h"), (2, "h"), "common_practice", "US: 2 h to 2500 gpm", "demand"),
    rule("fire-duration-above-2500-gpm-min", "Duration of a fire above 2500 gpm", D.TIME, "at_least",
         None, (3, "h"), "common_practice", "3 h to 3500 gpm", "demand"),
    rule("fire-duration-above-3500-gpm-min", "Duration of a fire above 3500 gpm", D.TIME, "at_least",
         None, (4, "h"), "common_practice", "", "demand"),
    rule("flow-test-age-max", "Age of a hydrant flow test, years", D.NUMBER, "at_most",
         (5, "1"), (5, "1"), "common_practice", "", "supply", 0),
    rule("flow-test-drop-min", "Pressure drop of a flow test, of its static pressure", D.RATIO, "at_least",
         (25, "%"), (25, "%"), "published", "NFPA 291", "supply", 0),
    rule("flow-test-extrapolation-max", "Design flow over test flow", D.NUMBER, "at_most",
         (1.25, "1"), (1.25, "1"), "common_practice", "", "supply", 2),
    rule("flow-test-scatter-max", "Distance of a compared flow test from the basis", D.PRESSURE, "at_most",
         (10, "kPa"), (1.5, "psi"), "common_practice", "", "supply", 1),
    rule("flood-level", "Level of the station floor", D.LEVEL, "stated", None, None, "published",
         "above the 100-year flood: 1 ft SC R.61-58.4; 3 ft Utah R309-540-5(1), Wyoming 12-12(b); "
         "0.3 to 1.0 m common practice", "supply"),
)  # fmt: skip
