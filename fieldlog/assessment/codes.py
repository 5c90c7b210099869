"""Every code a statement can carry; wording.py has a sentence for each.

Beside each reason stand the names of its numbers. Shares are of one (0.1 is ten percent).
"""

from __future__ import annotations

from enum import StrEnum


class ReasonCode(StrEnum):
    """Why a statement is what it is, or what stands beside it."""

    # suspected impairment
    RESIDUAL_NEAR_ZERO = "residual_near_zero"  # residual_psi, limit_psi
    NOT_RECOVERED = "not_recovered"  # static_before_psi, static_after_psi?, return_s?
    VALVE_FOUND_NOT_OPEN = "valve_found_not_open"  # valve, found
    VALVE_LEFT_NOT_OPEN = "valve_left_not_open"  # valve, left
    VALVE_SHUT_LONG = "valve_shut_long"  # valve, hours, limit_hours
    RESIDUAL_FELL_QUARTER = "residual_fell_quarter"  # reduction, residual_psi, reference_psi, against
    IMPAIRMENT_OPEN = "impairment_open"  # began_at
    STANDS_FROM = "stands_from"  # performed_on: signs of that day that no later comparable test has answered

    # below demand, margin
    BELOW_DEMAND = "below_demand"  # margin_psi, available_psi, required_psi, demand_flow_gpm
    FORWARD_FLOW_SHORT = "forward_flow_short"  # riser_psi, required_psi, flow_gpm, performed_on
    # margin_psi, low_psi, high_psi, rule_margin_psi, available_psi, required_psi, demand_flow_gpm,
    # hose_outside_gpm, basis, performed_on?
    MARGIN_MEASURED = "margin_measured"
    MARGIN_LOW_BOUND = "margin_low_bound"  # low_psi, rule_margin_psi
    EXTRAPOLATED = "extrapolated"  # tested_gpm, demand_gpm
    INSIDE_HOSE_UNKNOWN = "inside_hose_unknown"  # margin_without_psi, margin_with_psi, hose_inside_gpm
    HOSE_THROUGH_ALL = "hose_through_all"  # hose_outside_gpm
    ELEVATION_MISSING = "elevation_missing"  # of, sigma_psi
    TANK_LEVEL_CORRECTED = "tank_level_corrected"  # correction_psi

    # changed
    TEN_PERCENT = "ten_percent"  # against, reduction, residual_psi, reference_psi
    STATIC_OUTSIDE_BAND = "static_outside_band"  # static_psi, low_psi, high_psi, is_confirmed
    RESIDUAL_OUTSIDE_BAND = "residual_outside_band"  # residual_psi, low_psi, high_psi, is_confirmed

    # not comparable
    NOT_FULLY_OPEN = "not_fully_open"
    NOT_FULL_FLOW = "not_full_flow"
    NOT_SETTLED = "not_settled"
    PUMP_STATE_DIFFERS = "pump_state_differs"  # now, earlier
    PUMP_STARTED = "pump_started"  # static_state, residual_state: differs within one test
    VALVE_STATE_DIFFERS = "valve_state_differs"
    DRAIN_DIFFERS = "drain_differs"  # now, earlier
    DRAIN_ALTERED = "drain_altered"  # altered since the earlier test
    FEED_DIFFERS = "feed_differs"  # changed_on
    SYSTEM_SIDE_GAUGE = "system_side_gauge"  # gauge
    TAP_DIFFERS = "tap_differs"  # now, earlier
    KIND_WITHOUT_OWN_TEST = "kind_without_own_test"  # kind
    BEHIND_REDUCING_VALVE = "behind_reducing_valve"  # place
    NEWEST_NOT_COMPARABLE = "newest_not_comparable"  # performed_on

    # unproven
    NO_DRAIN_TEST = "no_drain_test"
    NO_DEMAND = "no_demand"
    NO_FLOW_TEST = "no_flow_test"
    FLOW_TEST_OLD = "flow_test_old"  # performed_on, months
    FLOW_TEST_DROP_SMALL = "flow_test_drop_small"  # drop, tested_gpm
    DESIGN_CURVE_ONLY = "design_curve_only"
    FEED_NOT_RECORDED = "feed_not_recorded"  # at
    DEMAND_BEYOND_POINTS = "demand_beyond_points"  # demand_gpm
    FEW_COMPARABLE = "few_comparable"  # tests
    CONDITIONS_NOT_STATED = "conditions_not_stated"  # conditions
    BLIND_LOSS_ABOVE_MARGIN = "blind_loss_above_margin"  # loss_psi?, left_psi
    BLIND_LOSS_UNKNOWN = "blind_loss_unknown"
    DRAIN_SIZE_UNKNOWN = "drain_size_unknown"
    FIGURES_UNUSABLE = "figures_unusable"  # of: feed, flow test, design supply, stated points
    NO_MARGIN_OF_KIND = "no_margin_of_kind"  # kind: a test of its own is on file, still no margin is given
    NO_PROFILE = "no_profile"

    # stands beside
    NO_REFERENCE = "no_reference"
    NEW_REFERENCE = "new_reference"  # performed_on, because
    STATIC_BEFORE_ONLY = "static_before_only"
    TRAPPED_PRESSURE = "trapped_pressure"  # static_before_psi, static_after_psi
    DIVISION_UNKNOWN = "division_unknown"  # gauge?, assumed_psi
    HEAPED_READINGS = "heaped_readings"  # step_psi
    OLDER_TESTS_LEFT_OUT = "older_tests_left_out"  # tests: beyond the newest 200 and the acceptance tests
    GAUGE_REPLACED = "gauge_replaced"  # sigma_psi: a new gauge may read differently by so much
    INDEX_SMALLER_THAN_READ = "index_smaller_than_read"  # drop_psi, limit_psi
    RESIDUAL_ABOVE_STATIC = "residual_above_static"  # residual_psi, static_psi
    DRAIN_INDEX = "drain_index"  # index, sigma, earlier?
    PUMP_INDEX_ONLY = "pump_index_only"
    LOW_DAY_NOT_JUDGED = "low_day_not_judged"  # the profile asks for a low day; the day of the test is judged
    FLOW_TEST_AGE_NOT_RULED = "flow_test_age_not_ruled"  # performed_on
    SET_POINT_DIFFERS = "set_point_differs"  # of, read_psi, set_psi
    HOLDING = "holding"

    # findings beside the statement
    GAUGE_OUTSIDE_RANGE = "gauge_outside_range"  # gauge, read_psi, low_psi?, high_psi?
    GAUGE_ABOVE_SCALE = "gauge_above_scale"  # gauge, read_psi, full_scale_psi
    GAUGE_UNLIKE_PAST = "gauge_unlike_past"  # gauge, read_psi, low_psi, high_psi
    GAUGE_OUT_OF_ACCURACY = "gauge_out_of_accuracy"  # gauge, error_psi, share, limit_share
    ALARM_LATE = "alarm_late"  # which, seconds, limit_s
    ALARM_DID_NOT_COME = "alarm_did_not_come"
    ALARM_LENGTHENING = "alarm_lengthening"  # which, seconds, earlier_s, tests
    DELIVERY_LONGER = "delivery_longer"  # seconds, acceptance_s, increase
    DELIVERY_LATE = "delivery_late"  # seconds, limit_s


class NextCode(StrEnum):
    """What to do next, most useful first."""

    CHECK_VALVES_NOW = "check_valves_now"
    TELL_OWNER_NOW = "tell_owner_now"
    FIND_CAUSE = "find_cause"
    FLOW_TEST = "flow_test"
    FORWARD_FLOW_TEST = "forward_flow_test"
    PUMP_TEST = "pump_test"
    REPEAT_FULLY_OPEN = "repeat_fully_open"
    REPEAT_SAME_STATE = "repeat_same_state"
    SECOND_GAUGE = "second_gauge"
    FINER_GAUGE = "finer_gauge"
    PITOT_DRAIN = "pitot_drain"
    ENTER_DEMAND = "enter_demand"
    ENTER_FEED = "enter_feed"
    ENTER_ELEVATIONS = "enter_elevations"
    ENTER_DRAIN_SIZE = "enter_drain_size"
    MEND_FIGURES = "mend_figures"
    ENTER_PROFILE = "enter_profile"
    STATE_CONDITIONS = "state_conditions"
    NEXT_TEST = "next_test"
    COMPARE_GAUGE = "compare_gauge"
    CHECK_REDUCING_VALVE = "check_reducing_valve"
    ENGINEER_REVIEWS = "engineer_reviews"


class CannotShow(StrEnum):
    """What these tests can't show, however they read."""

    CAPACITY = "capacity"  # a drain test measures no flow
    VALVE_POSITIONS = "valve_positions"
    PUBLIC_SUPPLY = "public_supply"  # from one system's static
    DURATION = "duration"
    OCCUPANCY = "occupancy"
    LOW_SEASON = "low_season"
    PIPING_BEYOND_RISER = "piping_beyond_riser"
    SMALLER_LOSSES = "smaller_losses"  # blind loss
    ALARM_IS_NOT_CAPACITY = "alarm_is_not_capacity"


class CheckCode(StrEnum):
    """Likely places to look, for a qualified person; never a diagnosis."""

    CONTROL_VALVES = "control_valves"
    OBSTRUCTION = "obstruction"
    TUBERCULATION = "tuberculation"
    BACKFLOW_ASSEMBLY = "backflow_assembly"
    STRAINER = "strainer"
    CHECK_VALVE = "check_valve"
    DROPPED_GATE = "dropped_gate"
    DRAIN_ALTERED = "drain_altered"
    PUBLIC_STATIC = "public_static"
    SEASON = "season"
    ZONE_CHANGE = "zone_change"
    TANK_LEVEL = "tank_level"
    REDUCING_VALVE_SETTING = "reducing_valve_setting"
    PUMP_OFF = "pump_off"
    PEAK_DEMAND = "peak_demand"
    NEW_USERS = "new_users"
    TRAPPED_PRESSURE = "trapped_pressure"
    WRONG_GAUGE = "wrong_gauge"
    SUPPLY_IMPROVED = "supply_improved"
    PUMP_RUNNING = "pump_running"
    DRAIN_NOT_OPEN = "drain_not_open"
    OUTLET_BLOCKED = "outlet_blocked"
    GAUGE_UPSTREAM = "gauge_upstream"
    SLOW_RECOVERY = "slow_recovery"
    VALVE_CLOSED = "valve_closed"
    GAUGE_FAULT = "gauge_fault"
