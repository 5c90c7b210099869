"""What to do next, most useful first, and what the tests of a system can't show."""

from __future__ import annotations

from collections.abc import Mapping

from fieldlog.assessment.codes import CannotShow, NextCode, ReasonCode
from fieldlog.assessment.statement import Evidence, Verdict
from fieldlog.records.history import SupplyHistory, System
from fieldlog.records.statement import Statement

# What each reason asks for; the order of reasons and of steps is that of usefulness.
_STEPS: Mapping[str, tuple[NextCode, ...]] = {
    ReasonCode.BELOW_DEMAND: (NextCode.ENGINEER_REVIEWS, NextCode.FLOW_TEST),
    ReasonCode.TEN_PERCENT: (NextCode.FIND_CAUSE,),
    ReasonCode.STATIC_OUTSIDE_BAND: (NextCode.SECOND_GAUGE,),
    ReasonCode.RESIDUAL_OUTSIDE_BAND: (NextCode.SECOND_GAUGE,),
    ReasonCode.NOT_FULLY_OPEN: (NextCode.REPEAT_FULLY_OPEN,),
    ReasonCode.NOT_FULL_FLOW: (NextCode.REPEAT_FULLY_OPEN,),
    ReasonCode.NOT_SETTLED: (NextCode.REPEAT_SAME_STATE,),
    ReasonCode.PUMP_STATE_DIFFERS: (NextCode.REPEAT_SAME_STATE,),
    ReasonCode.VALVE_STATE_DIFFERS: (NextCode.REPEAT_SAME_STATE,),
    ReasonCode.BEHIND_REDUCING_VALVE: (NextCode.CHECK_REDUCING_VALVE, NextCode.FORWARD_FLOW_TEST),
    ReasonCode.SET_POINT_DIFFERS: (NextCode.CHECK_REDUCING_VALVE,),
    ReasonCode.KIND_WITHOUT_OWN_TEST: (NextCode.PUMP_TEST,),
    ReasonCode.NO_DEMAND: (NextCode.ENTER_DEMAND,),
    ReasonCode.NO_FLOW_TEST: (NextCode.FLOW_TEST,),
    ReasonCode.FLOW_TEST_OLD: (NextCode.FLOW_TEST,),
    ReasonCode.FLOW_TEST_DROP_SMALL: (NextCode.FLOW_TEST,),
    ReasonCode.FEED_NOT_RECORDED: (NextCode.ENTER_FEED,),
    ReasonCode.DEMAND_BEYOND_POINTS: (NextCode.FORWARD_FLOW_TEST,),
    ReasonCode.MARGIN_LOW_BOUND: (NextCode.FORWARD_FLOW_TEST,),
    ReasonCode.NO_DRAIN_TEST: (NextCode.NEXT_TEST,),
    ReasonCode.FEW_COMPARABLE: (NextCode.NEXT_TEST,),
    ReasonCode.CONDITIONS_NOT_STATED: (NextCode.STATE_CONDITIONS,),
    ReasonCode.BLIND_LOSS_ABOVE_MARGIN: (
        NextCode.FINER_GAUGE, NextCode.PITOT_DRAIN, NextCode.FORWARD_FLOW_TEST
    ),
    ReasonCode.BLIND_LOSS_UNKNOWN: (NextCode.NEXT_TEST,),
    ReasonCode.DRAIN_SIZE_UNKNOWN: (NextCode.ENTER_DRAIN_SIZE,),
    ReasonCode.FIGURES_UNUSABLE: (NextCode.MEND_FIGURES,),
    ReasonCode.FORWARD_FLOW_SHORT: (NextCode.ENGINEER_REVIEWS, NextCode.FLOW_TEST),
    ReasonCode.PUMP_STARTED: (NextCode.REPEAT_SAME_STATE,),
    ReasonCode.SYSTEM_SIDE_GAUGE: (NextCode.REPEAT_SAME_STATE,),
    ReasonCode.ELEVATION_MISSING: (NextCode.ENTER_ELEVATIONS,),
    ReasonCode.NO_PROFILE: (NextCode.ENTER_PROFILE,),
}  # fmt: skip
_MOST = 4


def next_steps(verdict: Verdict, evidence: Evidence) -> tuple[str, ...]:
    """Return the next steps, at most four, most useful first.

    Parameters
    ----------
    verdict : Verdict
        The statement and its reasons [-].
    evidence : Evidence
        What it rests on [-].

    Returns
    -------
    tuple[str, ...]
        NextCodes [-].

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    steps: list[NextCode] = []
    if verdict.statement == Statement.SUSPECTED_IMPAIRMENT:
        steps += [NextCode.CHECK_VALVES_NOW, NextCode.TELL_OWNER_NOW]
    for reason in verdict.reasons:
        steps += _STEPS.get(reason.code, ())
    if evidence.supply.kind in {"pressure_tank", "parallel"}:
        steps = [NextCode.FORWARD_FLOW_TEST if step == NextCode.PUMP_TEST else step for step in steps]
    # The next test when it is due is what is left where nothing else helps.
    helps = [step for step in dict.fromkeys(steps) if step != NextCode.NEXT_TEST]
    return tuple(helps[:_MOST]) or (NextCode.NEXT_TEST,)


def cannot_show(history: SupplyHistory, system: System) -> tuple[str, ...]:
    """Return what the tests of a system can't show, however they read.

    Parameters
    ----------
    history : SupplyHistory
        The supply [-].
    system : System
        The system [-].

    Returns
    -------
    tuple[str, ...]
        CannotShow codes [-].

    References
    ----------
    DEVELOPERS.md, Method §8, "Never said".
    """
    codes = [CannotShow.CAPACITY, CannotShow.SMALLER_LOSSES, CannotShow.VALVE_POSITIONS, CannotShow.DURATION]
    codes += [CannotShow.OCCUPANCY, CannotShow.PIPING_BEYOND_RISER]
    if len(history.systems) == 1:
        codes.append(CannotShow.PUBLIC_SUPPLY)
    days = sorted(test.performed_on.timetuple().tm_yday for test in system.drain_tests)
    if days and days[-1] - days[0] <= _SIX_WEEKS:
        codes.append(CannotShow.LOW_SEASON)
    if system.alarm_tests:
        codes.append(CannotShow.ALARM_IS_NOT_CAPACITY)
    return tuple(codes)


_SIX_WEEKS = 42
