"""What to do next, where to look, and what the tests could not show."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from fieldlog.assessment.codes import CannotShow, CheckCode, NextCode
from fieldlog.wording.quantities import capital

STEPS: Mapping[str, str] = {
    NextCode.CHECK_VALVES_NOW: "check every valve on the feed before you leave",
    NextCode.TELL_OWNER_NOW: "tell the owner and the person in charge now",
    NextCode.FIND_CAUSE: "find the cause of the lower residual",
    NextCode.FLOW_TEST: "a flow test of this supply, up to the recorded demand if it can be had",
    NextCode.FORWARD_FLOW_TEST: "a forward-flow test at the recorded demand",
    NextCode.PUMP_TEST: "a pump test",
    NextCode.REPEAT_FULLY_OPEN: (
        "repeat the main drain test with the drain fully open and an outlet that takes full flow"
    ),
    NextCode.REPEAT_SAME_STATE: (
        "repeat the main drain test in the same pump and valve state, and wait until static after is steady"
    ),
    NextCode.SECOND_GAUGE: "read a second gauge beside this one",
    NextCode.FINER_GAUGE: "read the next main drain test on a test gauge with finer divisions",
    NextCode.PITOT_DRAIN: "take one pitot reading at the drain's outlet with the next main drain test",
    NextCode.ENTER_DEMAND: "enter the design demand from the calculation or the hydraulic design information sign",
    NextCode.ENTER_FEED: "enter the feed from the flow test's place to the base of riser",
    NextCode.ENTER_ELEVATIONS: "enter the elevations of gauge, drain outlet and base of riser",
    NextCode.ENTER_DRAIN_SIZE: "enter the size of the drain",
    NextCode.MEND_FIGURES: "mend the figures on record that can't be used",
    NextCode.ENTER_PROFILE: "enter the adopted standard and edition, and have the rule profile approved",
    NextCode.STATE_CONDITIONS: (
        "state with the next test whether the drain was fully open, took full flow, where the gauge taps, and the "
        "pump's state"
    ),
    NextCode.NEXT_TEST: "the next main drain test when it is due",
    NextCode.COMPARE_GAUGE: "compare the gauge with a certified test gauge",
    NextCode.CHECK_REDUCING_VALVE: "check the pressure-reducing valve against its set points",
    NextCode.ENGINEER_REVIEWS: "have a licensed engineer review the supply against the design record",
}
NOT_SHOWN: Mapping[str, str] = {
    CannotShow.CAPACITY: (
        "A main drain test measures no flow: what is available at the design demand stays an estimate until a "
        "flow "
        "test measures it."
    ),
    CannotShow.VALVE_POSITIONS: "These tests do not tell the position of any valve.",
    CannotShow.PUBLIC_SUPPLY: "Nothing follows from the static of one system about the public supply.",
    CannotShow.DURATION: "Nothing is said on how long the supply lasts.",
    CannotShow.OCCUPANCY: "The building's present use and storage were not held against the recorded demand.",
    CannotShow.LOW_SEASON: "All tests lie within six weeks of the year: the low season has not been seen.",
    CannotShow.PIPING_BEYOND_RISER: "The piping beyond the riser and its sprinklers did not flow in these tests.",
    CannotShow.SMALLER_LOSSES: "A loss smaller than the blind loss, itself an estimate, would not have shown.",
    CannotShow.ALARM_IS_NOT_CAPACITY: "An inspector's test tests the alarm or the valve, never capacity.",
}
CHECKS: Mapping[str, str] = {
    CheckCode.CONTROL_VALVES: "control valves from the street to the riser, by operating them",
    CheckCode.OBSTRUCTION: "an obstruction in the feed",
    CheckCode.TUBERCULATION: "tuberculation of the pipe",
    CheckCode.BACKFLOW_ASSEMBLY: "the loss of the backflow assembly",
    CheckCode.STRAINER: "the strainer",
    CheckCode.CHECK_VALVE: "a stuck check valve",
    CheckCode.DROPPED_GATE: "a gate dropped from its stem",
    CheckCode.DRAIN_ALTERED: "an altered drain that flows more",
    CheckCode.PUBLIC_STATIC: "the static of the public main: ask the water company",
    CheckCode.SEASON: "the season",
    CheckCode.ZONE_CHANGE: "a change of pressure zone",
    CheckCode.TANK_LEVEL: "the level of the tank",
    CheckCode.REDUCING_VALVE_SETTING: "the setting of a pressure-reducing valve",
    CheckCode.PUMP_OFF: "a pump that did not run",
    CheckCode.PEAK_DEMAND: "a time of peak demand",
    CheckCode.NEW_USERS: "new users on the main",
    CheckCode.TRAPPED_PRESSURE: "trapped pressure read as static",
    CheckCode.WRONG_GAUGE: "whether the supply-side gauge was read",
    CheckCode.SUPPLY_IMPROVED: "an improved supply",
    CheckCode.PUMP_RUNNING: "a pump that ran",
    CheckCode.DRAIN_NOT_OPEN: "a drain that was not fully open",
    CheckCode.OUTLET_BLOCKED: "a blocked outlet of the drain",
    CheckCode.GAUGE_UPSTREAM: "a gauge upstream of what was tested",
    CheckCode.SLOW_RECOVERY: "slow recovery: wait longer and read again",
    CheckCode.VALVE_CLOSED: "every valve on the feed: treat it as an impairment until the cause is known",
    CheckCode.GAUGE_FAULT: "the gauge, against a test gauge",
}
_REFUSALS: Mapping[str, str] = {
    "conflict": "Already saved with another text; correct it instead.",
    "not_allowed": "This person may not make such an entry here; ask the office.",
    "waiting": "Waits for an entry that it names and that has not arrived.",
    "storage_full": "The server's disk is full; nothing was lost here, send it again later.",
    "storage_busy": "The server is busy; send it again.",
}


def next_sentence(code: str) -> str:
    """Return a next step in words, without a capital or a full stop, to stand after "Next step:"."""
    return STEPS[code]


def cannot_show_sentence(code: str) -> str:
    """Return what the tests could not show."""
    return NOT_SHOWN[code]


def check_sentence(code: str) -> str:
    """Return a likely place to look, for a qualified person; never a diagnosis."""
    return capital(CHECKS[code])


def what_to_check(codes: Iterable[str]) -> tuple[str, ...]:
    """Return likely places to look, most likely first."""
    return tuple(check_sentence(code) for code in codes)


def refusal_sentence(code: str, field: str, message: str) -> str:
    """Return why an entry was not taken and what to do: the field and the mend, or what stands in the way."""
    if known := _REFUSALS.get(code):
        return f"{known} {capital(message)}." if message else known
    text = message if message.startswith(field) else f"{field}: {message}"
    return f"{capital(text).rstrip('.')}."
