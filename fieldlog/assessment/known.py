"""A history as it was known on a day: later records left out, the others in the order of their days."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace
from datetime import date
from typing import Any, TypeVar

from fieldlog.records.history import Gauge, SupplyHistory, System

_Record = TypeVar("_Record", bound=Any)


def known_on(history: SupplyHistory, as_of: date) -> SupplyHistory:
    """Return the history up to a day, each kind of record by its day and entry.

    Parameters
    ----------
    history : SupplyHistory
        Everything on record about one supply, in any order [-].
    as_of : date
        The last day whose records count [-].

    Returns
    -------
    SupplyHistory
        The same supply; systems keep their order, those on another supply that day are left out [-].

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    return replace(
        history,
        systems=tuple(_system(one, as_of) for one in history.systems if _stands(one, as_of)),
        flow_tests=_done(history.flow_tests, as_of),
        supply_gauges=_gauges(history.supply_gauges, as_of),
        organisation_gauges=_gauges(history.organisation_gauges, as_of),
        gauge_readings=_done(history.gauge_readings, as_of),
    )


def next_record_after(history: SupplyHistory, as_of: date) -> date | None:
    """Return the first day after `as_of` of which something is on record already; None where nothing is.

    Parameters
    ----------
    history : SupplyHistory
        Everything on record about one supply [-].
    as_of : date
        The day judged [-].

    Returns
    -------
    date | None
        From that day on the record counts [-].

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    return min((day for day in _days(history) if day > as_of), default=None)


def _system(system: System, as_of: date) -> System:
    return replace(
        system,
        gauges=_gauges(system.gauges, as_of),
        drain_tests=_done(system.drain_tests, as_of),
        gauge_readings=_done(system.gauge_readings, as_of),
        alarm_tests=_done(system.alarm_tests, as_of),
        forward_flow_tests=_done(system.forward_flow_tests, as_of),
        valve_status_tests=_done(system.valve_status_tests, as_of),
        impairments=tuple(
            sorted(
                (one for one in system.impairments if one.began_at[:10] <= as_of.isoformat()),
                key=lambda one: (one.began_at, one.entry),
            )
        ),
    )


def _stands(system: System, as_of: date) -> bool:
    return system.on_supply_until is None or as_of < system.on_supply_until


def _gauges(gauges: Iterable[Gauge], as_of: date) -> tuple[Gauge, ...]:
    kept = (replace(gauge, comparisons=_done(gauge.comparisons, as_of)) for gauge in gauges)
    return tuple(sorted(kept, key=lambda gauge: (gauge.name, gauge.uid)))


def _done(records: Iterable[_Record], as_of: date) -> tuple[_Record, ...]:
    kept = (one for one in records if one.performed_on <= as_of)
    return tuple(sorted(kept, key=lambda one: (one.performed_on, one.entry)))


def _days(history: SupplyHistory) -> Iterator[date]:
    yield from (one.performed_on for one in history.flow_tests)
    yield from (one.performed_on for one in history.gauge_readings)
    for system in history.systems:
        if system.on_supply_until is not None:
            yield system.on_supply_until
        kinds: tuple[tuple[Any, ...], ...] = (
            system.drain_tests, system.gauge_readings, system.alarm_tests, system.forward_flow_tests,
            system.valve_status_tests,
        )  # fmt: skip
        for tests in kinds:
            yield from (test.performed_on for test in tests)
