"""Finding codes of results: what the solved sets show, worst kinds first."""

from server.studies.findings.finding_code import FindingCode, code

RELIEF = " The relief valve at {protection} opens before; this rests on it."
TRIP = (
    " The high-discharge trip at {protection}{after_delay} acts before; this rests on the trip."
)

RESULT_CODES: tuple[FindingCode, ...] = (
    code("end_of_curve", "past the end of the curve", "sets",
         "{set} reaches the end of its pump curves in {case}: {required} is asked, the curves "
         "end at "
         "{provided} at {speed} speed. No duty is stated{also}.",
         tank="{set} runs past the end of its pump curves in {case}: with {provided} flowing "
              "the tank asks for {surplus} less head than they give. No duty is "
              "stated{also}."),
    code("held_shut", "held shut", "sets",
         "{set} has no duty in {case}: in every combination that may run the others, or its "
         "own cracking "
         "head, hold a check valve shut{also}."),
    code("no_unit", "no unit can run", "sets",
         "{set} has no unit that may run in {case}{also}."),
    code("no_water_at_point", "no water at a point", "main-and-zone",
         "No water at {point} in {case}: the grade line falls so far below it that the main "
         "drains or "
         "the column breaks{also}."),
    code("no_water_at_suction", "no water at the suction", "supply",
         "No water at {place} in {case}: the grade line falls so far below it that the column "
         "breaks and "
         "nothing can be pumped{also}."),
    code("npsh_broken", "NPSH under what is required", "supply",
         "{slot} {has} {provided} of NPSH available in {case}, where {required} is required: "
         "cavitation{also}."),
    code("trip_reached", "a trip acts in a scenario", "sets",
         "The {side} pressure reaches {provided} in {case}; the trip at {required} stops the "
         "pumps{also}."),
    code("rating_exceeded", "rating exceeded at shut-off", "sets",
         "Against a shut zone at top speed {part} sees {provided} ({case}); it is rated "
         "{required}. No "
         "trip or relief acts before.",
         trip="Against a shut zone at top speed {part} would see {provided} ({case}); it is "
              "rated "
              "{required}." + TRIP,
         relief="Against a shut zone at top speed {part} would see {provided} ({case}); it is "
                "rated "
                "{required}." + RELIEF),
    code("station_off", "no water with the station off", "sets",
         "With the station off, at {point} {water_words} ({case}), and no standby power is "
         "named."),
    code("suction_main_low", "supplying main too low", "supply",
         "{supply} falls to {provided} at the connection in {case}; at least {required} is "
         "required{also}.",
         gauge="{supply} falls to {provided} at the connection in {case} and the suction gauge "
               "to "
               "{gauge}; at least {required} and {gauge_required} are required{also}.",
         gauge_firm="{supply} falls to {provided} at the connection in {case} and the suction "
                    "gauge to "
                    "{gauge}; at least {required} and {gauge_required} are required{also}. So "
                    "firm "
                    "capacity ends at {firm}, {short} short of {firm_required}.",
         _firm="{supply} falls to {provided} at the connection in {case}; at least {required} "
               "is "
               "required{also}. So firm capacity ends at {firm}, {short} short of "
               "{firm_required}."),
    code("suction_gauge_low", "suction gauge too low", "supply",
         "The suction gauge falls to {provided} in {case}; at least {required} is "
         "required{also}.",
         firm="The suction gauge falls to {provided} in {case}; at least {required} is "
              "required{also}. "
              "So firm capacity ends at {firm}, {short} short of {firm_required}."),
    code("below_atmosphere", "below atmosphere", "main-and-zone",
         "The pressure at {place} falls to {provided} in {case}: below atmosphere, where dirty "
         "water can be "
         "drawn in{also}."),
    code("supplying_zone_low", "supplying zone too low", "supply",
         "The zone that {supply} belongs to falls to {provided} at its highest ground, "
         "{check_words}, at "
         "{flow} in all; at least {required} is required."),
    code("pressure_low", "pressure too low", "main-and-zone",
         "{point} has {provided} in {case}; at least {required} is required{also}."),
    code("fire_pressure_low", "pressure too low in a fire", "main-and-zone",
         "{point} has {provided} during the fire of {case}; at least {required} is "
         "required{also}."),
    code("hydrant_residual_low", "residual too low", "main-and-zone",
         "{point} has a residual of {provided} in {case}; at least {required} is "
         "required{also}."),
    code("pressure_high", "pressure too high", "main-and-zone",
         "{point} has {provided} in {case}; at most {required} is allowed{also}."),
    code("pressure_high_in_fire", "pressure too high in a fire", "main-and-zone",
         "{point} has {provided} during the fire of {case}; at most {required} is "
         "allowed{also}."),
    code("shutoff_pressure_high", "pressure too high at shut-off", "sets",
         "Against a shut zone at top speed {point} sees {provided} ({case}); at most "
         "{required} is "
         "allowed. No trip or relief acts before{also}.",
         trip="Against a shut zone at top speed {point} would see {provided} ({case}) against "
              "{required} allowed, the discharge gauge {gauge}." + TRIP,
         relief="Against a shut zone at top speed {point} would see {provided} ({case}) "
                "against "
                "{required} allowed, the discharge gauge {gauge}." + RELIEF),
    code("firm_peak_hour_short", "firm capacity short for peak hour", "sets",
         "With {out} out {set} delivers {provided} in {horizon}, limited by {limit}; peak hour "
         "is "
         "{required}, {short} more."),
    code("firm_fire_short", "firm capacity short for fire", "sets",
         "With {out} out {set} delivers {provided} in {horizon}, limited by {limit}; maximum "
         "day with "
         "fire is {required}, {short} more."),
    code("units_few", "too few pumps", "sets",
         "{set} has {provided} pump; at least {required} are required."),
    code("npsh_short", "NPSH margin short", "supply",
         "{slot} {has} {provided} of NPSH in {case}; {required} is asked for {npsh_required} "
         "required{also}."),
    code("suction_lift_long", "suction lift too long", "supply",
         "The pumps lift by {provided} on the suction side in {case}; at most {required} is "
         "allowed{also}."),
    code("allowable_region_outside", "outside the allowable region", "pumps",
         "{slot} {run} at {provided} of its best-efficiency flow in {case}; the maker's "
         "allowable region "
         "{end_words} {required}{also}."),
    code("minimum_flow_broken", "below minimum flow", "pumps",
         "{slot} {run} at {provided} of its best-efficiency flow in {case}, below its minimum "
         "continuous "
         "flow of {required}{also}.",
         assumed="{slot} {run} at {provided} of its best-efficiency flow in {case}, below the "
                 "{required} "
                 "assumed as its minimum continuous flow{also}."),
    code("region_outside", "outside the preferred region", "pumps",
         "{slot} {run} at {provided} of its best-efficiency flow ({flow}) in {case}: outside, "
         "{side} of its "
         "preferred region of {low} to {high}{also}."),
    code("motor_overloaded", "motor too small", "pumps",
         "{pump} needs {provided} at its shaft at top speed up to its last row; its motor "
         "gives {required}."),
    code("handover_gap", "a gap between numbers of units", "sets",
         "Between {fewer} and {more} a gap of {provided} is served outside the preferred "
         "region: {from} to "
         "{to} ({case}).",
         scenario="Between {fewer} and {more} flows from {from} to {to} are outside the "
                  "preferred region "
                  "whichever runs, and {case} lies there{also}."),
    code("fire_duration_short", "fire too short", "demand",
         "{fire} lasts {provided}; at least {required} is required."),
    code("region_outside_in_fire", "outside the preferred region in a fire", "pumps",
         "{slot} {run} at {provided} of its best-efficiency flow during the fire of {case}: "
         "outside, {side} of "
         "its preferred region of {low} to {high}{also}. A fire is short."),
    code("region_edge", "at the edge of the preferred region", "pumps",
         "{slot} {run} at {provided} of its best-efficiency flow in {case}: at the edge of its "
         "preferred "
         "region of {low} to {high}{also}."),
    code("set_point_not_held", "set point not held", "sets",
         "{set} cannot hold {required} at {held} in {case}: {provided} at {speed} speed; the "
         "requirements "
         "are met{also}."),
    code("low_speed_limit", "at the lowest speed", "sets",
         "{set} stands at its lowest speed, {speed}, in {case}: {provided} at {held} instead "
         "of "
         "{required}{also}."),
    code("lowest_speed_low", "lowest speed under the range", "sets",
         "The lowest speed of {set} is {provided}; the criteria go down to {required}."),
    code("highest_speed_high", "highest speed over the range", "sets",
         "The highest speed of {set} is {provided}; the criteria go up to {required}. Power "
         "grows with its "
         "cube."),
    code("speed_cannot_tell_night", "speed cannot tell night from no flow", "sets",
         "{slot} runs at {speed} for {flow} in {case}, and no flow needs {zero}: {provided} "
         "apart; under "
         "{required} it is no signal. Stop it by flow or power, not by speed{also}."),
    code("pressure_steep_in_speed", "pressure steep in speed", "sets",
         "1 % of speed moves the pressure at {held} by {provided} in {case}; at most "
         "{required} is "
         "wanted{also}."),
    code("station_off_relies_on_standby", "station off relies on standby power", "sets",
         "With the station off, at {point} {water_words} ({case}). This rests on "
         "{standby_words}."),
    code("after_trip_end_of_curve", "past the curve after a trip", "sets",
         "If {lost} trips in {case}, the {left} left would run past the end of their curve "
         "({required} asked, "
         "the curves end at {provided}) until {standby} has started{also}.",
         beside="If {lost} trips in {case}, the {left} left would run past the end of their "
                "curve ({required} "
                "asked, the curves end at {provided}) until {standby} has started{also}. In "
                "{share_case} they "
                "stay on it, at {share} of best-efficiency flow.",
         no_standby="If {lost} trips in {case}, the {left} left would run past the end of "
                    "their curve "
                    "({required} asked, the curves end at {provided}), and the set has no "
                    "standby{also}."),
    code("after_trip_pressure_low", "pressure too low after a trip", "sets",
         "If {lost} trips in {case}, {point} has {provided} until {standby} has started; "
         "{required} is "
         "required{also}.",
         dry="If {lost} trips in {case}, {point} has no water until a standby has "
             "started{also}.",
         no_standby="If {lost} trips in {case}, {point} has {provided}, and the set has no "
                    "standby; {required} is required{also}."),
    code("after_trip_npsh_broken", "NPSH too low after a trip", "sets",
         "If {lost} trips in {case}, a unit left has {provided} of NPSH until {standby} has "
         "started, where "
         "{required} is required: cavitation{also}.",
         no_standby="If {lost} trips in {case}, a unit left has {provided} of NPSH, where "
                    "{required} is required: cavitation; the set has no standby{also}."),
    code("run_out_stopped_by_trip", "run-out stopped by the suction trip", "supply",
         "{slot} alone, run out as far as its rows go, would lack NPSH or water at low supply. "
         "The "
         "low-suction trip at {trip} acts before; this rests on the trip."),
    code("handover_by_share", "no single flow to hand over at", "sets",
         "{fewer} leaves its preferred region at {provided} in {ends_in} supply and {more} "
         "enters at "
         "{required} in {starts_in} supply: no single flow suits all. Hand over by per cent of "
         "best-efficiency flow, flow over speed; each state then has an overlap of {overlap} "
         "or more."),
    code("suction_lift", "suction lift", "supply",
         "The pumps lift by {provided} on the suction side in {case}: they must be primed "
         "before they "
         "start{also}."),
    code("suction_line_fast", "suction line fast", "supply",
         "{part} runs at {provided} in {case}; at most {required} is wanted{also}."),
    code("suction_branch_fast", "suction branch fast", "sets",
         "The suction branch of {part} runs at {provided} in {case}; at most {required} is "
         "wanted{also}."),
    code("discharge_branch_fast", "discharge branch fast", "sets",
         "The discharge branch of {part} runs at {provided} in {case}; at most {required} is "
         "wanted{also}."),
    code("main_fast", "main fast", "main-and-zone",
         "{part} runs at {provided} in {case}; at most {required} is wanted{also}."),
    code("main_fast_in_fire", "main fast in a fire", "main-and-zone",
         "{part} runs at {provided} during the fire of {case}; at most {required} is "
         "wanted{also}."),
    code("friction_law_out_of_range", "friction law out of its range", "main-and-zone",
         "Hazen-Williams is used for {part} outside its range.",
         bore="Hazen-Williams is used for {part} with a bore of {required}, outside 50 to 1850 "
              "mm.",
         velocity="Hazen-Williams is used for {part} at {provided}, above 3 m/s.",
         coefficient="Hazen-Williams is used for {part} with C under 100, where it is not to "
                     "be trusted."),
    code("shutoff_rise_small", "flat curve", "pumps",
         "The head of {pump} rises by {provided} to shut-off; under {required} units share "
         "load badly."),
    code("shutoff_rise_large", "steep curve", "pumps",
         "The head of {pump} rises by {provided} to shut-off; above {required} shut-off "
         "pressures grow high."),
    code("head_not_falling", "head not falling throughout", "pumps",
         "The head of {pump} is {required} at its first row and {peak} at {provided}: it does "
         "not fall "
         "throughout, so units in parallel may share load in more than one way."),
    code("curve_rows_few", "few rows", "pumps",
         "The curve of {pump} has {provided} rows; {required} or more draw it safely."),
    code("last_row_short", "curve ends early", "pumps",
         "The last row of {pump} stands at {provided} of its best-efficiency flow; {required} "
         "or more lets "
         "run-out be judged."),
    code("power_disagrees", "power and efficiency disagree", "pumps",
         "Tabled power of {pump} differs from the power by its efficiency by {provided}; at "
         "most {required} "
         "is allowed. One of the columns is wrong."),
    code("best_efficiency_disagrees", "stated best-efficiency flow is not that of the rows",
         "pumps",
         "The best-efficiency flow stated for {pump} lies {provided} from the {by_rows} of its "
         "rows; at most {required} is wanted. Regions are judged by the stated one."),
    code("rating_level_not_given", "level of the main not given", "main-and-zone",
         "The level at the end of {part} is not given: its rating is judged at the lowest "
         "level known, and lower down the pressure is higher."),
    code("handover_gap_narrow", "narrow gap between numbers of units", "sets",
         "Between {fewer} and {more} a narrow gap is outside the preferred region whichever "
         "runs: {from} to "
         "{to} ({case}). Equal pumps always leave one."),
    code("set_point_not_held_in_fire", "set point not held, requirements met", "sets",
         "{set} stands at its top speed in {case}: {provided} at {held} instead of the set "
         "point of "
         "{required}. The fire requirements are met{also}."),
    code("pressure_by_speed", "pressure moves with speed", "sets",
         "1 % of speed moves the pressure at {held} by {provided} in {case}; the limit is "
         "{limit}{also}."),
    code("main_slow", "main slow", "main-and-zone",
         "{part} reaches {provided} at most on the fastest day in {horizon}; {required} once a "
         "day keeps it "
         "clean{also}."),
    code("check_valve_not_fully_open", "check valve not fully open", "sets",
         "The check valves of {part} see {provided} in {case} and are fully open above "
         "{required}: below "
         "it they lose more than stated{also}.",
         assumed="The check valves of {part} see {provided} in {case} and are assumed fully "
                 "open above "
                 "{required}: below it they lose more than stated{also}."),
)  # fmt: skip
