"""Whether a rule applies to a system, supply or gauge: yes, no, or only if a fact holds that is not on record."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

from fieldlog.records.history import Gauge, Supply, System
from fieldlog.records.rules import AppliesWhen


@dataclass(frozen=True, slots=True)
class Facts:
    """What a rule's conditions are held against."""

    supply: Supply
    system: System | None = None
    gauge: Gauge | None = None


# Each condition answers True, False, or None where the fact is not on record.
_Condition = Callable[[AppliesWhen, Facts], bool | None]


def unstated_facts(when: AppliesWhen, facts: Facts) -> tuple[str, ...] | None:
    """Return the facts the rule waits for and that are not on record; None where the rule does not apply."""
    answers = {name: condition(when, facts) for name, condition in _CONDITIONS.items()}
    if any(answer is False for answer in answers.values()):
        return None
    return tuple(name for name, answer in answers.items() if answer is None)


def _among(wanted: tuple[str, ...], found: str | None) -> bool | None:
    if not wanted:
        return True
    return None if found is None else found in wanted


def _same(*, wanted: bool | None, found: bool | None) -> bool | None:
    if wanted is None:
        return True
    return None if found is None else found == wanted


def _devices(facts: Facts) -> Iterator[tuple[str, str]]:
    yield "backflow_preventer", facts.supply.backflow_preventer
    yield "pressure_reducing_valve", facts.supply.pressure_reducing_valve


def _system_type(when: AppliesWhen, facts: Facts) -> bool | None:
    return _among(when.system_types, None if facts.system is None else facts.system.type)


def _supply_kind(when: AppliesWhen, facts: Facts) -> bool | None:
    return _among(when.supply_kinds, facts.supply.kind)


def _feed(when: AppliesWhen, facts: Facts) -> bool | None:
    return not when.feed_through or any(
        name in when.feed_through and place != "none" for name, place in _devices(facts)
    )


def _sole_feed(when: AppliesWhen, facts: Facts) -> bool | None:
    return not when.sole_feed_through or any(
        name in when.sole_feed_through and place == "sole feed" for name, place in _devices(facts)
    )


def _alarm(when: AppliesWhen, facts: Facts) -> bool | None:
    return _among(when.alarms, None if facts.system is None else facts.system.alarm)


def _gauge_side(when: AppliesWhen, facts: Facts) -> bool | None:
    return _among(when.gauge_sides, None if facts.gauge is None else facts.gauge.side)


def _occupancy(when: AppliesWhen, facts: Facts) -> bool | None:
    return _among(when.occupancies, None if facts.system is None else facts.system.occupancy)


def _air_supervised(when: AppliesWhen, facts: Facts) -> bool | None:
    return _same(wanted=when.air_supervised, found=None if facts.system is None else facts.system.air_supervised)


def _heated(when: AppliesWhen, facts: Facts) -> bool | None:
    return _same(wanted=when.heated, found=None if facts.system is None else facts.system.heated)


def _header(when: AppliesWhen, facts: Facts) -> bool | None:
    return _same(wanted=when.on_header, found=None if facts.system is None else facts.system.header is not None)


def _installed(when: AppliesWhen, facts: Facts) -> bool | None:
    if when.installed_from is None and when.installed_before is None:
        return True
    installed_on = None if facts.system is None else facts.system.installed_on
    if installed_on is None:
        return None
    is_late_enough = when.installed_from is None or installed_on >= when.installed_from
    return is_late_enough and (when.installed_before is None or installed_on < when.installed_before)


_CONDITIONS: dict[str, _Condition] = {
    "system type": _system_type,
    "supply kind": _supply_kind,
    "device in a feed": _feed,
    "device in the only feed": _sole_feed,
    "alarm kind": _alarm,
    "gauge side": _gauge_side,
    "occupancy": _occupancy,
    "air supervised": _air_supervised,
    "heated": _heated,
    "header": _header,
    "installed on": _installed,
}
