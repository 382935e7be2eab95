"""Finding codes of inputs: absent, estimated, departing or out of order."""

from server.studies.findings.finding_code import FindingCode, code

INPUT_CODES: tuple[FindingCode, ...] = (
    code("supply_states_out_of_order", "supply states out of order", "supply",
         "The {lower_state} state of the supply, {provided}, lies above the {upper_state} "
         "state, {required}."),
    code("limiter_not_computed", "slow-down limiter acts", "sets",
         "The slow-down limiter at {required} acts in {case}, where the suction falls to "
         "{provided}: what "
         "flow is then left is not computed in this version{also}."),
    code("firm_not_checked", "firm capacity not checked", "supply",
         "Firm capacity of {set} is not checked against every limit of the suction side, "
         "because "
         "{absent_words}."),
    code("station_off_not_checked", "station off not checked", "sets",
         "With the station off, at {point} {water_words} ({case}). Not checked further, "
         "because {standby_words}."),
    code("input_missing", "input missing", "summary",
         "{field} is not given; without it {part_words}."),
    code("input_refused", "input refused", "summary",
         "{field} cannot be used: {reason_words}."),
    code("input_lacks", "input incomplete", "summary",
         "{field}: {reason_words}; what hangs on it is not checked."),
    code("kind_not_computed", "not computed in this version", "summary",
         "{field} is of a kind that is not computed in this version."),
    code("supplying_zone_not_checked", "supplying zone not checked", "supply",
         "The zone that {supply} belongs to is not checked, because {absent_words}."),
    code("flow_test_draw_unknown", "draw in the test not given", "supply",
         "{test} does not say what this station drew during the test; whether it ran is not "
         "checked."),
    code("flow_test_date_unknown", "date of the test not given", "supply",
         "{test} has no date; its age is not checked."),
    code("horizon_without_year", "horizon without a year", "demand",
         "{horizon} has no year; when firm capacity runs out is not checked."),
    code("scenario_missing", "demand not judged", "demand",
         "No scenario in use judges the {demand} of {horizon}."),
    code("fire_scenario_missing", "fire not judged", "demand",
         "No scenario in use judges a fire in {horizon}."),
    code("proposed_set_missing", "no set proposed", "sets",
         "No set is named as the proposed one; the memo cannot say what holds."),
    code("no_critical_point", "no critical customer", "main-and-zone",
         "No point is named as the critical customer; the least service pressure is not "
         "checked."),
    code("no_lowest_point", "no lowest customer", "main-and-zone",
         "No point is named as the lowest customer; the highest service pressure is not "
         "checked there."),
    code("protection_missing", "protection not given", "sets",
         "{field} of {set} is not given; what it does in a scenario is not checked."),
    code("rating_missing", "rating not given", "pumps",
         "The pressure rating of {part} is not given; shut-off is not checked against it."),
    code("flow_test_old", "flow test old", "supply",
         "{test} is {provided} years old in {year}; at most {required} is wanted. Repeat it on "
         "a peak day."),
    code("flow_test_small_drop", "flow test draws too little", "supply",
         "{test} lowered the main by {provided} of its static pressure; at least {required} "
         "makes a sound curve."),
    code("flow_test_extrapolated", "flow test extrapolated", "supply",
         "The largest design flow, {design}, is {provided} times the {tested} of {test}; up to "
         "{required} times "
         "is within reach of a test."),
    code("flow_tests_disagree", "flow tests disagree", "supply",
         "{test} lies {provided} from the basis test: {read} against {expected} at its flow; "
         "at most {required} "
         "is wanted."),
    code("minimum_night_zero", "minimum night is zero", "demand",
         "The minimum night of {horizon} is zero; leakage alone never lets it be."),
    code("demands_out_of_order", "demands out of order", "demand",
         "In {horizon} the {lower} of {provided} is larger than the {upper} of {required}."),
    code("point_asks_less", "a point asks less than the criteria", "main-and-zone",
         "{point} is judged by {provided}; the criterion “{rule}” asks {required}."),
    code("departure_without_reason", "departure without a reason", "criteria",
         "“{rule}” is {provided} instead of {required}, and no reason is given."),
    code("criterion_departs", "departure from a criterion", "criteria",
         "“{rule}” is {provided} instead of {required}: {reason}"),
    code("low_state_estimated", "low state is an estimate", "supply",
         "The low state of {supply}, {provided} against the test, is the office's estimate "
         "({said}), not a record."),
    code("default_used", "default used", "summary",
         "{field}: a default stands in{said_words}."),
)  # fmt: skip
