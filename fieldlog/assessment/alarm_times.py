"""Alarm and delivery times against the rule and the same device's history."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from datetime import date
from fractions import Fraction
from statistics import median
from typing import Literal

from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.expected import student_interval
from fieldlog.records.history import AlarmTest, System
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import Number, Reason

_SECTION = "11"
_Which = Literal["device", "bell", "panel", "monitoring"]
# A stop clock in a hand, common practice.
_CLOCK_SIGMA_S = 1.0


def alarm_findings(system: System, profile: RuleProfile | None, as_of: date) -> tuple[Reason, ...]:
    """Return what the newest alarm and trip tests show; never evidence of capacity.

    Parameters
    ----------
    system : System
        The system and its inspector's tests [-].
    profile : RuleProfile | None
        The rules: limits in seconds [-].
    as_of : date
        The day judged [-].

    Returns
    -------
    tuple[Reason, ...]
        Findings [s].

    References
    ----------
    NFPA 72-2022, 17.13.2 (90 s); NFPA 25, 14.3.1(15): delivery time up by 50 percent.
    """
    items = sorted({test.item or "" for test in system.alarm_tests})
    found: list[Reason] = []
    for item in items:
        tests = [test for test in system.alarm_tests if (test.item or "") == item and test.performed_on <= as_of]
        if tests:
            found += [*_alarm(tests, profile), *_delivery(tests, profile)]
    return tuple(found)


def _alarm(tests: Sequence[AlarmTest], profile: RuleProfile | None) -> Iterator[Reason]:
    newest = tests[-1]
    if newest.did_not_come:
        yield Reason(ReasonCode.ALARM_DID_NOT_COME, {}, (newest.entry,), _SECTION)
    for which in ("device", "bell", "panel", "monitoring"):
        seconds = _seconds(newest, which)
        if seconds is None:
            continue
        limit_s = None if profile is None else profile.alarm_limit_s(which)
        if limit_s is not None and seconds > limit_s:
            numbers: dict[str, Number] = {"which": which, "seconds": seconds, "limit_s": limit_s}
            yield Reason(ReasonCode.ALARM_LATE, numbers, (newest.entry,), _SECTION)
        yield from _lengthening(which, seconds, tests)


def _lengthening(which: _Which, seconds: float, tests: Sequence[AlarmTest]) -> Iterator[Reason]:
    past = [earlier for test in tests[:-1] if (earlier := _seconds(test, which)) is not None]
    usual = student_interval(past, _CLOCK_SIGMA_S)
    if usual is not None and seconds > usual.high:
        numbers: dict[str, Number] = {
            "which": which, "seconds": seconds, "earlier_s": median(past), "tests": len(past)
        }  # fmt: skip
        yield Reason(ReasonCode.ALARM_LENGTHENING, numbers, (tests[-1].entry,), _SECTION)


def _delivery(tests: Sequence[AlarmTest], profile: RuleProfile | None) -> Iterator[Reason]:
    trips = [test for test in tests if test.is_dry and test.delivery_s is not None and test.is_full_flow is not False]
    if not trips or trips[-1].delivery_s is None:
        return
    newest, seconds = trips[-1], trips[-1].delivery_s
    accepted = [test for test in trips[:-1] if test.standing == "acceptance" and test.delivery_s]
    percent = None if profile is None else profile.delivery_increase_percent()
    if accepted and accepted[-1].delivery_s is not None and percent is not None:
        then = accepted[-1].delivery_s
        if 100 * Fraction(str(seconds)) >= (100 + percent) * Fraction(str(then)):
            numbers: dict[str, Number] = {"seconds": seconds, "acceptance_s": then, "increase": seconds / then - 1}
            yield Reason(ReasonCode.DELIVERY_LONGER, numbers, (newest.entry, accepted[-1].entry), _SECTION)
    limit_s = None if profile is None else profile.delivery_limit_s()
    if limit_s is not None and seconds > limit_s:
        yield Reason(ReasonCode.DELIVERY_LATE, {"seconds": seconds, "limit_s": limit_s}, (newest.entry,), _SECTION)


def _seconds(test: AlarmTest, which: _Which) -> float | None:
    return {
        "device": test.alarm_s, "bell": test.bell_s, "panel": test.panel_s, "monitoring": test.monitoring_s
    }[which]  # fmt: skip
