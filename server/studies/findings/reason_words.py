"""Why an input cannot be used, in words that go on after a colon or "because"."""

REASONS: dict[str, str] = {
    "absent": "it is not given",
    "no_npsh_rows": "its rows have no NPSH required",
    "no_efficiency_rows": "its rows have neither efficiency nor shaft power",
    "best_efficiency_unknown": (
        "the best-efficiency flow is not bracketed by its rows, so the preferred region "
        "cannot be judged"
    ),
    "no_shutoff_row": "it has no row at zero flow, so shut-off head is not given",
    "outside_friction_law": "the roughness is too large for the bore",
    "residual_not_below_static": "the residual pressure must be below the static pressure",
    "test_flow_not_positive": "the test flow must be above zero",
    "lowest_speed_above_highest": "the lowest speed lies above the highest",
    "too_few_rows": "its rows are too few to draw a curve",
    "bep_outside_rows": "the stated best-efficiency flow lies outside the rows",
    "only_standby_units": "all its slots stand by, and none has duty",
    "too_many_unlike_units": "its units are so unlike that there are too many numbers running",
    "no_solution_found": "no state was found within the tolerance, so none is stated",
    "single_barrel": "the reach has one barrel, so none can be out",
    "past_the_main": "the place lies past the end of the main",
    "draw_not_beside_fire_tank": (
        "a place of the demand is not used beside a tank for fire only"
    ),
    "pressure_held_at_floating_tank": (
        "a tank floats on the zone and fixes the grade, so no pressure can be held; use "
        "fixed speed, levels or a held flow"
    ),
    "control_without_tank": (
        "the zone has no tank that floats; hold a pressure, or use fixed speed or a "
        "reducing valve"
    ),
    "set_point_falls_with_flow": "the set point at no flow lies above the one at full flow",
    "trim_ratio_above_one": (
        "it is larger than the tested diameter, and an impeller is cut, not grown"
    ),
    "trim_below_least": (
        "it is cut under the maker's least diameter, or under 75 % of the tested one"
    ),
    "diameter_outside_tested": "it lies above the largest tested diameter",
    "diameters_uneven": "two tested curves have the same diameter",
    "best_efficiency_unknown_between_diameters": (
        "the best-efficiency flow of both tested curves must be known to read between them"
    ),
    "too_few_rows_to_smooth": "its rows are too few to smooth",
    "smoothed_rises": "the smoothed curve would rise where the rows fall",
    "tank_levels_out_of_order": "the levels of the tank are out of order",
    "tank_level_not_above_outlet": "the outlet lies above the water",
    "low_state_not_of_a_tank": (
        "a tank's low level stands with the supply and holds in every year"
    ),
}
