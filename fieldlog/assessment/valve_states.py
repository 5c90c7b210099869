"""What is on record about valves: which was last left shut, and for how long."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import UTC, date, datetime, time, timedelta

from fieldlog.records.history import DrainTest, System, ValveFound, ValveStatusTest


@dataclass(frozen=True, slots=True)
class ShutSpell:
    """The last time a valve was not open: `left` is its state while nothing says that it was opened again."""

    on: date
    entry: int
    left: str | None
    shut_at: str | None = None
    opened_at: str | None = None

    @property
    def moment_shut(self) -> datetime | None:
        """When it was shut; None where not timed."""
        return _moment(self.shut_at)

    def hours(self, as_of: date) -> float | None:
        """Return for how long it was shut, to the end of `as_of` where it still is; None where not timed."""
        shut, opened = _moment(self.shut_at), _moment(self.opened_at)
        if opened is None and self.left is not None:
            opened = datetime.combine(as_of + timedelta(days=1), time(), UTC)
        if shut is None or opened is None:
            return None
        return max((opened - shut).total_seconds() / 3600, 0.0)


def shut_spells(system: System) -> dict[str, ShutSpell]:
    """Return the last spell of each valve that is not normally shut, by drain and valve status tests.

    Parameters
    ----------
    system : System
        The system with its tests [-].

    Returns
    -------
    dict[str, ShutSpell]
        By valve; one that a later test found open without a spell of its own is left out [-].

    References
    ----------
    DEVELOPERS.md, Method §8, first row.
    """
    spells: dict[str, ShutSpell] = {}
    for valve, spell in _all_in_order(system):
        if valve in system.normally_shut:
            continue
        if spell is None:
            spells.pop(valve, None)
        else:
            spells[valve] = spell
    return spells


def _all_in_order(system: System) -> Iterator[tuple[str, ShutSpell | None]]:
    tests: list[DrainTest | ValveStatusTest] = [*system.drain_tests, *system.valve_status_tests]
    for test in sorted(tests, key=lambda one: (one.performed_on, one.entry)):
        if isinstance(test, DrainTest):
            for valve in test.valves:
                yield from _of_drain_test(test, valve)
        else:
            left = None if test.opened_at or test.flow_seen or not test.shut_at else "shut"
            yield test.valve, _spell(test, left, test.shut_at, test.opened_at)


def _of_drain_test(test: DrainTest, valve: ValveFound) -> Iterator[tuple[str, ShutSpell | None]]:
    state = valve.left or ("open" if valve.opened_at else None)
    if state is None and valve.shut_at:
        state = "shut"
    if state is None and valve.found == "open":
        state = "open"
    if state is not None:
        left = None if state == "open" else state
        yield valve.id, _spell(test, left, valve.shut_at, valve.opened_at)


def _spell(
    test: DrainTest | ValveStatusTest, left: str | None, shut_at: str | None, opened_at: str | None
) -> ShutSpell | None:
    if left is None and not (shut_at and opened_at):
        return None
    return ShutSpell(test.performed_on, test.entry, left, shut_at, opened_at)


def _moment(text: str | None) -> datetime | None:
    """Return a time with its offset; None for one that no calendar has: the spell then counts as not timed."""
    try:
        moment = None if text is None else datetime.fromisoformat(text)
    except ValueError:
        return None
    return None if moment is None or moment.tzinfo is None else moment
