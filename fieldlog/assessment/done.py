"""What counts as having done what a rule asks, and the events that ask for it anew."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date

from fieldlog.records.history import AlarmTest, Gauge, GaugeReading, SupplyHistory, System
from fieldlog.records.rules import Rule, TriggerEvent


@dataclass(frozen=True, slots=True)
class Done:
    """A day on which it was done, and the entry that says so."""

    on: date
    entry: int


@dataclass(frozen=True, slots=True)
class Event:
    """A day on which something happened that a rule answers to; `valve` where it was a valve."""

    on: date
    entry: int
    valve: str | None = None


@dataclass(frozen=True, slots=True)
class Part:
    """What a rule's activity is done to: systems, one gauge or one valve of theirs, or the supply."""

    systems: tuple[System, ...]
    gauge: Gauge | None = None
    valve: str | None = None
    unstated: tuple[str, ...] = ()


def last_done(rule: Rule, part: Part, history: SupplyHistory, as_of: date) -> Done | None:
    """Return the newest time it was done, not after `as_of`; of one day the later entry."""
    times = [done for done in _all_done(rule, part, history) if done.on <= as_of]
    return max(times, key=lambda done: (done.on, done.entry), default=None)


def events(event: TriggerEvent, system: System, as_of: date) -> list[Event]:
    """Return when that happened to the system, as far as entries tell, not after `as_of`."""
    found = _EVENTS[event](system) if event in _EVENTS else iter(())
    return [happened for happened in found if happened.on <= as_of]


def is_kept(event: TriggerEvent) -> bool:
    """Return whether events of that kind can be read from entries."""
    return event in _EVENTS


def _all_done(rule: Rule, part: Part, history: SupplyHistory) -> Iterator[Done]:
    match rule.satisfied_by:
        case "flow_test":
            yield from _flow_tests(rule, history)
        case "gauge_comparison":
            yield from _comparisons(part)
        case "gauge_reading":
            yield from _gauge_readings(part, history)
        case _:
            for system in part.systems:
                yield from _system_tests(rule, part, system)


def _system_tests(rule: Rule, part: Part, system: System) -> Iterator[Done]:
    match rule.satisfied_by:
        case "main_drain_test":
            tests = [test for test in system.drain_tests if test.not_done is None and test.residual is not None]
            yield from (Done(test.performed_on, test.entry) for test in tests)
        case "inspectors_test":
            alarms = [test for test in system.alarm_tests if _is_as(rule.done_as, test)]
            yield from (Done(test.performed_on, test.entry) for test in alarms)
        case "forward_flow_test":
            yield from (Done(test.performed_on, test.entry) for test in system.forward_flow_tests)
        case "valve_status_test":
            looks = [test for test in system.valve_status_tests if part.valve in (None, test.valve)]
            yield from (Done(look.performed_on, look.entry) for look in looks)


def _is_as(done_as: str | None, test: AlarmTest) -> bool:
    match done_as:
        case "trip test":
            return test.is_dry
        case "full-flow trip test":
            return test.is_dry and test.is_full_flow is True
        case "alarm test":
            times = (test.alarm_s, test.bell_s, test.panel_s, test.monitoring_s)
            return not test.is_dry or any(seconds is not None for seconds in times)
        case _:
            return True


def _flow_tests(rule: Rule, history: SupplyHistory) -> Iterator[Done]:
    for test in history.flow_tests:
        if rule.done_as != "pump test" or test.at == "test_header":
            yield Done(test.performed_on, test.entry)


def _comparisons(part: Part) -> Iterator[Done]:
    # A gauge put in new has been replaced on that day, which the rule takes as well as a comparison.
    if part.gauge is None:
        return
    if part.gauge.installed_on is not None and part.gauge.of != "organisation":
        yield Done(part.gauge.installed_on, part.gauge.entry)
    yield from (Done(comparison.performed_on, comparison.entry) for comparison in part.gauge.comparisons)


def _gauge_readings(part: Part, history: SupplyHistory) -> Iterator[Done]:
    for reading in history.gauge_readings:
        if part.gauge is not None and reading.reading.gauge == part.gauge.uid:
            yield Done(reading.performed_on, reading.entry)
    for system in history.systems if part.gauge is not None else part.systems:
        for reading in system.gauge_readings:
            if _is_of(part.gauge, system, reading):
                yield Done(reading.performed_on, reading.entry)


def _is_of(gauge: Gauge | None, system: System, reading: GaugeReading) -> bool:
    named = reading.reading.gauge
    if gauge is None:
        # Of a gauge that is not on file; those on file have their own readings.
        return all(named != known.uid for known in system.gauges)
    if named is None:
        # A reading that names no gauge can only be of the system's one gauge.
        there = [known for known in system.gauges if stood(known, reading.performed_on)]
        return [known.uid for known in there] == [gauge.uid]
    return named == gauge.uid


def stood(gauge: Gauge, on: date) -> bool:
    """Return whether the gauge was in place on that day."""
    begun = gauge.installed_on is None or gauge.installed_on <= on
    return begun and (gauge.ended_on is None or gauge.ended_on > on)


def _valves_reopened(system: System) -> Iterator[Event]:
    for test in system.drain_tests:
        for valve in test.valves:
            if valve.opened_at is not None:
                yield Event(date.fromisoformat(valve.opened_at[:10]), test.entry, valve.id)
            elif valve.found == "shut" and valve.left == "open":
                yield Event(test.performed_on, test.entry, valve.id)
    for look in system.valve_status_tests:
        if look.opened_at is not None:
            yield Event(date.fromisoformat(look.opened_at[:10]), look.entry, look.valve)


def _repairs(system: System) -> Iterator[Event]:
    yield from (Event(repair.done_on, repair.entry) for repair in system.repairs)


def _feed_changes(system: System) -> Iterator[Event]:
    if system.feed_changed_on is not None:
        yield Event(system.feed_changed_on, system.entry)


def _drain_changes(system: System) -> Iterator[Event]:
    if system.drain is not None and system.drain.since is not None:
        yield Event(system.drain.since, system.entry)


_EVENTS = {
    "valve reopened": _valves_reopened,
    "repair": _repairs,
    "feed changed": _feed_changes,
    "drain changed": _drain_changes,
}
