"""Finding codes of tanks, of pumps without a drive, of trimmed pumps and of valves."""

from server.studies.findings.finding_code import FindingCode, code

TANK_CODES: tuple[FindingCode, ...] = (
    code("static_head_not_reached", "no pump lifts the water", "pumps",
         "{set} moves no water in {case}: at no flow {provided} more head is asked than its "
         "pumps give{also}."),
    code("fire_tank_draws_down", "fire tank feeds in normal service", "main-and-zone",
         "The tank, at {required}, stands above the grade of {provided} that the set point "
         "gives at its node in {case}: it would feed before the station does{also}."),
    code("submergence_short", "outlet too near the surface", "supply",
         "With the supply tank at its cut-out {provided} of water stands over the outlet in "
         "{case}; {required} keeps vortices from drawing air at {flow}{also}."),
    code("firm_refill_short", "firm capacity short for the tank", "sets",
         "With {out} out {set} delivers {provided} in {horizon}, limited by {limit}; the "
         "maximum day in {hours} is {required}, {short} more."),
    code("held_flow_not_reached", "held flow not reached", "sets",
         "{set} passes {provided} in {case} at its highest speed; {required} is to be "
         "held{also}."),
    code("stage_level_wrong", "level of a stage out of order", "sets",
         "Stage {number} of {set} has its stop level, {provided}, not above its start level, "
         "{required}.",
         starts_rise="Stage {number} of {set} starts at {provided}, above the {required} of "
                     "the stage before: it would run first.",
         outside="Stage {number} of {set} stops at {provided}, above the top level of the "
                 "tank, {required}: it never stops by level.",
         below="Stage {number} of {set} starts at {provided}, below the low level of the "
               "tank, {required}.",
         trip="Stage {number} of {set} stops at {provided}, above the high-level trip at "
              "{required}: the trip acts first."),
    code("fire_storage_short", "fire storage short", "main-and-zone",
         "{fire} takes {required} from the tank; between the level at which the last stage "
         "starts and its low level it holds {provided}."),
    code("fire_storage_not_checked", "fire storage not checked over the day", "main-and-zone",
         "{fire} takes {volume} from the tank. How low the tank stands when it breaks out is "
         "not checked: the run of its level over a day is not computed in this version.",
         absent="{fire} takes {volume} from the tank. Whether the tank holds it is not "
                "checked, because {absent_words}."),
    code("standby_power_missing", "standby power not given", "sets",
         "Standby power of {set} is not given; how long the tank must feed alone is not "
         "checked."),
    code("fixed_unit_exceeds", "pumps without a drive exceed the set point", "sets",
         "The pumps of {set} without a drive pass more than {demand} at the set point in "
         "{case}: the pressure at {held} rises to {provided} instead of {required}{also}."),
    code("trim_deep", "impeller cut deep", "sets",
         "The impeller in {slot} is cut to {provided} of the tested diameter; under "
         "{required} the rule by which its curve is drawn grows doubtful. Ask the maker."),
    code("operating_point_not_unique", "more than one operating point", "pumps",
         "{set} could stand at {number} flows in {case}, from {required} to {provided}: which "
         "one comes depends on what runs already, and it cannot be started into the largest."),
    code("valve_wastes_head", "head wasted in the reducing valve", "sets",
         "The reducing valve of {set} takes away {provided} of head in {case}, {power} of "
         "water power{also}."),
)  # fmt: skip
