"""Why a statement is what it is, and what was found beside it, one sentence a code."""

from __future__ import annotations

from collections.abc import Mapping

from fieldlog.assessment.codes import ReasonCode as Code
from fieldlog.records.statement import Reason
from fieldlog.units import SiteUnits
from fieldlog.wording.templates import filled

SENTENCES: Mapping[str, tuple[str, ...]] = {
    # suspected impairment
    Code.RESIDUAL_NEAR_ZERO: (
        "Residual was {residual_psi:read} at full flow; {limit_psi:read-up} or less counts as nearly none",
    ),
    Code.NOT_RECOVERED: (
        "Pressure did not come back after the drain was shut",
        ", static before {static_before_psi:read}",
        ", static after {static_after_psi:read}",
        ", {return_s} waited",
    ),
    Code.VALVE_FOUND_NOT_OPEN: ("Valve {valve} was found {found}",),
    Code.VALVE_LEFT_NOT_OPEN: ("Valve {valve} was left {left}",),
    Code.VALVE_SHUT_LONG: ("Valve {valve} is on record as shut for {hours:up}; the rule profile allows {limit_hours}",),
    Code.RESIDUAL_FELL_QUARTER: (
        "Residual fell by {reduction:25} against {against}, from {reference_psi:read} to {residual_psi:read}, "
        "with "
        "the static about as before",
    ),
    Code.IMPAIRMENT_OPEN: ("The impairment on record since {began_at} has not been ended",),
    Code.STANDS_FROM: ("The signs seen on {performed_on} stand, because no later comparable test has answered them",),
    # below demand, margin
    Code.BELOW_DEMAND: (
        "At the recorded design demand of {demand_flow_gpm} an estimated {available_psi:down} is available where "
        "{required_psi:read-up} is required; the margin is {margin_psi:down}",
    ),
    Code.FORWARD_FLOW_SHORT: (
        "In the forward-flow test of {performed_on} the riser read {riser_psi:read-down} at {flow_gpm}, less "
        "than the "
        "{required_psi:read-up} required",
    ),
    Code.MARGIN_MEASURED: (
        "Margin at the recorded design demand of {demand_flow_gpm}: {margin_psi:down} (estimated band "
        "{low_psi:down} "
        "to {high_psi:down}), {available_psi:down} available less {required_psi:read-up} required, by {basis}",
        " of {performed_on}",
        "; outside hose counted, {hose_outside_gpm}",
        "; rule margin {rule_margin_psi:read}",
    ),
    Code.MARGIN_LOW_BOUND: (
        "The lower end of the estimated margin, {low_psi:down}, is under the rule margin of {rule_margin_psi:read-up}",
    ),
    Code.EXTRAPOLATED: (
        "The flow test reached {tested_gpm}; from there to {demand_gpm} the curve is drawn on, an estimate",
    ),
    Code.INSIDE_HOSE_UNKNOWN: (
        "The record does not say whether the demand includes the inside hose of {hose_inside_gpm}: the estimated "
        "margin is {margin_without_psi:down} without it and {margin_with_psi:down} with it",
    ),
    Code.HOSE_THROUGH_ALL: (
        "The outside hose of {hose_outside_gpm} is counted through the whole supply, because the pipe from the "
        "hose "
        "point is not on record; the estimate is lower for it",
    ),
    Code.ELEVATION_MISSING: (
        "The elevation of the {of} is not on record; {sigma_psi:read} (one standard deviation) stands for it in "
        "the "
        "estimate",
    ),
    Code.TANK_LEVEL_CORRECTED: ("The tank's level corrects the pressures by {correction_psi:read}",),
    # changed
    Code.TEN_PERCENT: (
        "Residual is {reduction:10} below {against}, {residual_psi:read} where it was {reference_psi:read}. The "
        "ten "
        "percent criterion asks for the cause",
    ),
    Code.STATIC_OUTSIDE_BAND: (
        "Static {static_psi:read} is outside its expected band, an estimate of {low_psi:read-up} to "
        "{high_psi:read-down}, {is_confirmed}",
    ),
    Code.RESIDUAL_OUTSIDE_BAND: (
        "Residual {residual_psi:read} is outside its expected band, an estimate of {low_psi:read-up} to "
        "{high_psi:read-down}, {is_confirmed}",
    ),
    # not comparable
    Code.NOT_FULLY_OPEN: ("The drain was not fully open",),
    Code.NOT_FULL_FLOW: ("The drain's outlet did not take full flow",),
    Code.NOT_SETTLED: ("Static after was not steady, so that the return is not settled",),
    Code.PUMP_STATE_DIFFERS: ("The pump was in another state: {now} now, {earlier} at the earlier test",),
    Code.PUMP_STARTED: (
        "The pump was in two states within the test: {static_state} at static, {residual_state} at residual",
    ),
    Code.VALVE_STATE_DIFFERS: ("Valves on the way are on record in other positions than at the earlier test",),
    Code.DRAIN_DIFFERS: ("Not the drain of the earlier test", ": {now:typed} now", ", {earlier:typed} then"),
    Code.DRAIN_ALTERED: ("The drain was altered since the earlier test",),
    Code.FEED_DIFFERS: ("The feed was altered on {changed_on}, after the earlier test",),
    Code.SYSTEM_SIDE_GAUGE: ("Gauge {gauge} is on the system side, where pressure can be trapped",),
    Code.TAP_DIFFERS: ("The gauge taps another place: {now} now, {earlier} at the earlier test",),
    Code.KIND_WITHOUT_OWN_TEST: (
        "This supply is {kind}: only a test of its own speaks of the demand, so that no margin is given",
    ),
    Code.BEHIND_REDUCING_VALVE: (
        "A pressure-reducing valve stands in {place} and hides what is behind it, so that no margin is given",
    ),
    Code.NEWEST_NOT_COMPARABLE: ("The test of {performed_on} can't be compared with the earlier ones",),
    # unproven
    Code.NO_DRAIN_TEST: ("No main drain test is on record",),
    Code.NO_DEMAND: ("The design demand is not on record",),
    Code.NO_FLOW_TEST: ("No flow test that measures this supply is on record",),
    Code.FLOW_TEST_OLD: ("The newest flow test is of {performed_on}; the rule profile takes none older than {months}",),
    Code.FLOW_TEST_DROP_SMALL: (
        "In the flow test the pressure fell by {drop} at {tested_gpm}, too little to draw the curve on to the demand",
    ),
    Code.DESIGN_CURVE_ONLY: (
        "The supply curve is that of the design record, an estimate that no flow test on file measured",
    ),
    Code.FEED_NOT_RECORDED: (
        "The flow test was made at {at}, and the feed from there to the base of riser is not on record",
    ),
    Code.DEMAND_BEYOND_POINTS: (
        "The demand of {demand_gpm} lies beyond the points on record, and nothing is drawn on past them",
    ),
    Code.FEW_COMPARABLE: ("Comparable main drain tests on record: {tests}; two are needed",),
    Code.CONDITIONS_NOT_STATED: ("Not stated, and taken as unchanged: {conditions}",),
    Code.BLIND_LOSS_ABOVE_MARGIN: (
        "These tests could have missed a loss of {loss_psi:up} at the design demand, and the margin leaves "
        "{left_psi:down}, both estimates",
    ),
    Code.BLIND_LOSS_UNKNOWN: ("The blind loss can't be told from what is on record",),
    Code.DRAIN_SIZE_UNKNOWN: ("The size of the drain is not on record",),
    Code.FIGURES_UNUSABLE: ("The figures on record for the {of} can't be used",),
    Code.NO_MARGIN_OF_KIND: ("This supply is {kind}: even with a test of its own no margin is given",),
    Code.NO_PROFILE: ("Adopted standard not recorded",),
    # stands beside
    Code.NO_REFERENCE: ("No acceptance test is on record to compare with",),
    Code.NEW_REFERENCE: ("The test of {performed_on} is the new reference", ", because {because}"),
    Code.STATIC_BEFORE_ONLY: ("Static after is not on record; static before only, with more error counted",),
    Code.TRAPPED_PRESSURE: (
        "Static before was {static_before_psi:read} and static after {static_after_psi:read}: trapped or surge "
        "pressure bled off; static after is used",
    ),
    Code.DIVISION_UNKNOWN: (
        "The smallest division of the gauge is not on record",
        " (gauge {gauge})",
        "; {assumed_psi:read} is assumed",
    ),
    Code.HEAPED_READINGS: (
        "The newest readings of the gauge are all multiples of {step_psi:read}; the reading error is counted by "
        "that "
        "step",
    ),
    Code.OLDER_TESTS_LEFT_OUT: (
        "Judged by the newest 200 main drain tests and every acceptance test; older ones on file: {tests}",
    ),
    Code.GAUGE_REPLACED: (
        "The gauge was replaced; by an estimate the new one may read differently by {sigma_psi:read} (one "
        "standard "
        "deviation)",
    ),
    Code.INDEX_SMALLER_THAN_READ: (
        "Static and residual differ by {drop_psi:read-down}, less than the {limit_psi:read-up} that can be told "
        "apart: "
        "the drain index is smaller than can be read",
    ),
    Code.RESIDUAL_ABOVE_STATIC: (
        "Residual {residual_psi:read} is above static {static_psi:read}: there is no drain index. Did a pump start?",
    ),
    Code.DRAIN_INDEX: ("Drain index {index}, one standard deviation {sigma}", "; {earlier} at the earlier test"),
    Code.PUMP_INDEX_ONLY: (
        "Drain tests on this pump are compared within one pump state; only a pump test speaks of the demand",
    ),
    Code.LOW_DAY_NOT_JUDGED: ("The rule profile asks for a low day; what is judged is the day of the test",),
    Code.FLOW_TEST_AGE_NOT_RULED: ("The flow test is of {performed_on}; the rule profile sets no age for it",),
    Code.SET_POINT_DIFFERS: ("The {of} behind the reducing valve was {read_psi:read}; it is set to {set_psi:read}",),
    Code.HOLDING: ("No change that shows",),
    # findings beside the statement
    Code.GAUGE_OUTSIDE_RANGE: (
        "Gauge {gauge} read {read_psi:read}, outside its normal range",
        " from {low_psi:read}",
        " up to {high_psi:read}",
    ),
    Code.GAUGE_ABOVE_SCALE: ("Gauge {gauge} read {read_psi:read}, above its full scale of {full_scale_psi:read}",),
    Code.GAUGE_UNLIKE_PAST: (
        "Gauge {gauge} read {read_psi:read}, outside the band estimated from its earlier readings, "
        "{low_psi:read-up} "
        "to {high_psi:read-down}",
    ),
    Code.GAUGE_OUT_OF_ACCURACY: (
        "Gauge {gauge} was off by {error_psi:read}, {share:up} of full scale; the rule profile allows {limit_share}",
    ),
    Code.ALARM_LATE: ("The signal at the {which} came after {seconds}; the rule profile allows {limit_s}",),
    Code.ALARM_DID_NOT_COME: ("The waterflow alarm did not come when water flowed",),
    Code.ALARM_LENGTHENING: (
        "The signal at the {which} came after {seconds}, later than in earlier tests ({tests}, middle value "
        "{earlier_s})",
    ),
    Code.DELIVERY_LONGER: (
        "Water took {seconds} to the test connection, {increase:50} longer than the {acceptance_s} at acceptance: "
        "reason for an obstruction investigation",
    ),
    Code.DELIVERY_LATE: ("Water took {seconds} to the test connection; the rule profile allows {limit_s}",),
}
_NO_FINITE_LOSS = (
    "No loss short of a shut valve would surely have shown in these tests; the estimated margin leaves {left_psi:down}",
)


def reason_sentence(reason: Reason, units: SiteUnits, names: Mapping[str, str] | None = None) -> str:
    """Return a reason or finding in words; `names` gives what people call a uid."""
    template = SENTENCES[reason.code]
    if reason.code == Code.BLIND_LOSS_ABOVE_MARGIN and reason.numbers.get("loss_psi") is None:
        template = _NO_FINITE_LOSS
    return filled(template, reason.numbers, units, names or {})


def reason_with_entries(reason: Reason, units: SiteUnits, names: Mapping[str, str] | None = None) -> str:
    """Return a reason in words and the numbers of the entries it rests on."""
    sentence = reason_sentence(reason, units, names)
    if not reason.entries:
        return sentence
    return f"{sentence} ({', '.join(f'#{number}' for number in reason.entries)})"
