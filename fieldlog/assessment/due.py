"""What is due when, by each rule profile of a site: a list for each, nothing merged."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from datetime import date, timedelta
from typing import Literal

from fieldlog.assessment.applies import Facts, unstated_facts
from fieldlog.assessment.done import Done, Event, Part, events, is_kept, last_done, stood
from fieldlog.assessment.windows import Window, next_window
from fieldlog.records.history import Gauge, SupplyHistory, System
from fieldlog.records.rules import Mark, Rule, RuleProfile, Trigger, TriggerEvent, is_required

State = Literal["overdue", "no record", "due", "not yet"]
_WORST_FIRST: tuple[State, ...] = ("overdue", "no record", "due", "not yet")


@dataclass(frozen=True, slots=True)
class DueItem:
    """One activity of one rule on one system, gauge, valve or supply, and when it is due.

    `earliest` is the first day on which it counts and `latest` the last before it is overdue; both and `due` are
    None where nothing is on record to count from. `unstated` names facts that are not on record and on which the
    rule rests; `also` is a condition of the rule that a person decides.
    """

    rule: str
    item: str
    supply: str
    systems: tuple[str, ...]
    state: State
    required: bool
    mark: Mark
    clause: str | None = None  # only where approved
    gauge: str | None = None
    valve: str | None = None
    earliest: date | None = None
    due: date | None = None
    latest: date | None = None
    last_done: date | None = None
    last_entry: int | None = None
    event: TriggerEvent | None = None
    event_on: date | None = None
    event_entry: int | None = None
    unstated: tuple[str, ...] = ()
    also: str | None = None


@dataclass(frozen=True, slots=True)
class DueList:
    """What one profile asks of one supply: `items` worst first; `untracked`, rows that no entry records wholly."""

    profile: str  # uid of the profile's version
    standard: str
    edition: str
    items: tuple[DueItem, ...]
    untracked: tuple[str, ...]


def profiles_in_force(profiles: tuple[RuleProfile, ...], on: date) -> tuple[RuleProfile, ...]:
    """Return the profiles that hold on that day: an old test is judged by those of its own day."""
    return tuple(profile for profile in profiles if profile.is_in_force(on))


def due_lists(history: SupplyHistory, as_of: date) -> tuple[DueList, ...]:
    """Return what is due on a supply by each profile in force.

    Parameters
    ----------
    history : SupplyHistory
        The supply with its systems, gauges, tests and profiles [-].
    as_of : date
        The day asked about; entries of later days are left out [-].

    Returns
    -------
    tuple[DueList, ...]
        One list for each profile. Empty where no adopted standard is recorded for that day: then nothing is due
        [-].

    References
    ----------
    NFPA 25 3.7, definitions of the frequencies.
    """
    return tuple(
        DueList(
            profile=profile.uid,
            standard=profile.standard,
            edition=profile.edition,
            items=tuple(sorted(_items(profile, history, as_of), key=_worst_first)),
            untracked=tuple(rule.id for rule in profile.rules if _is_untracked(rule, history, as_of)),
        )
        for profile in profiles_in_force(history.profiles, as_of)
    )


def _worst_first(item: DueItem) -> tuple[int, date, str, tuple[str, ...], str, str]:
    # The gauge and the valve make the order whole, so that it does not rest on the order of the input.
    return (
        _WORST_FIRST.index(item.state),
        item.due or date.min,
        item.rule,
        item.systems,
        item.gauge or "",
        item.valve or "",
    )


def _items(profile: RuleProfile, history: SupplyHistory, as_of: date) -> Iterator[DueItem]:
    for rule in profile.rules:
        if rule.satisfied_by is None:
            continue
        for part in _parts(rule, history, as_of):
            yield from _by_frequency(rule, part, history, as_of)
            for trigger in rule.triggers:
                yield from _by_trigger(rule, trigger, part, history, as_of)


def _is_untracked(rule: Rule, history: SupplyHistory, as_of: date) -> bool:
    is_asked = rule.frequency is not None or bool(rule.triggers)
    is_kept_whole = rule.satisfied_by is not None and all(is_kept(trigger.event) for trigger in rule.triggers)
    if not is_asked or is_kept_whole:
        return False
    standing = [Facts(history.supply, system) for system in _standing(history, as_of)]
    return any(unstated_facts(rule.applies_when, facts) is not None for facts in standing or [Facts(history.supply)])


def _parts(rule: Rule, history: SupplyHistory, as_of: date) -> list[Part]:
    fitting = [part for system in _standing(history, as_of) for part in _system_part(rule, history, system)]
    match rule.per:
        case "header":
            return _by_header(fitting)
        case "supply":
            return _supply_part(fitting)
        case "gauge":
            return _gauge_parts(rule, history, as_of)
        case "test gauge":
            return [Part((), gauge) for gauge in history.organisation_gauges if stood(gauge, as_of)]
        case "valve":
            return [replace(part, valve=valve) for part in fitting for valve in part.systems[0].valves]
        case _:
            return fitting


def _standing(history: SupplyHistory, as_of: date) -> list[System]:
    return [system for system in history.systems if _stands(system, as_of)]


def _stands(system: System, as_of: date) -> bool:
    if system.on_supply_until is not None:
        return as_of < system.on_supply_until
    return all(day is None or day <= as_of for day in (system.installed_on, system.on_supply_since))


def _system_part(rule: Rule, history: SupplyHistory, system: System) -> list[Part]:
    unstated = unstated_facts(rule.applies_when, Facts(history.supply, system))
    return [] if unstated is None else [Part((system,), unstated=unstated)]


def _by_header(parts: list[Part]) -> list[Part]:
    groups: dict[str, list[Part]] = {}
    for part in parts:
        system = part.systems[0]
        groups.setdefault(f"of {system.uid}" if system.header is None else f"on {system.header}", []).append(part)
    return [_joined(group) for group in groups.values()]


def _supply_part(parts: list[Part]) -> list[Part]:
    return [_joined(parts)] if parts else []


def _joined(parts: list[Part]) -> Part:
    # What one of them leaves open is open for all only where none is sure.
    least = min((part.unstated for part in parts), key=len)
    return Part(tuple(system for part in parts for system in part.systems), unstated=least)


def _gauge_parts(rule: Rule, history: SupplyHistory, as_of: date) -> list[Part]:
    supply_gauges = [part for gauge in history.supply_gauges for part in _supply_gauge(rule, history, gauge, as_of)]
    covered = {system.uid for part in supply_gauges for system in part.systems}
    found: list[Part] = []
    for system in _standing(history, as_of):
        own = [part for gauge in system.gauges if stood(gauge, as_of) for part in _one(rule, history, system, gauge)]
        # A system without such a gauge on record is named all the same: its gauge is there but not on file.
        found += own or ([] if system.uid in covered else _one(rule, history, system, None))
    return found + supply_gauges


def _one(rule: Rule, history: SupplyHistory, system: System, gauge: Gauge | None) -> list[Part]:
    unstated = unstated_facts(rule.applies_when, Facts(history.supply, system, gauge))
    return [] if unstated is None else [Part((system,), gauge, unstated=unstated)]


def _supply_gauge(rule: Rule, history: SupplyHistory, gauge: Gauge, as_of: date) -> list[Part]:
    if not stood(gauge, as_of):
        return []
    fitting = [part for system in _standing(history, as_of) for part in _one(rule, history, system, gauge)]
    return [replace(_joined(fitting), gauge=gauge)] if fitting else []


def _by_frequency(rule: Rule, part: Part, history: SupplyHistory, as_of: date) -> Iterator[DueItem]:
    if rule.frequency is None:
        return
    done = last_done(rule, part, history, as_of)
    window = next_window(rule.frequency, None if done is None else done.on, _baseline(part), as_of)
    item = replace(_item(rule, part, history, done), state=_state(window, done, as_of))
    season = rule.frequency.season
    if season is not None and season.first_month is None:
        item = replace(item, unstated=(*item.unstated, "months of the season"))
    if window is not None:
        item = replace(item, earliest=window.earliest, due=window.due, latest=window.latest)
    yield item


def _by_trigger(rule: Rule, trigger: Trigger, part: Part, history: SupplyHistory, as_of: date) -> Iterator[DueItem]:
    done = last_done(rule, part, history, as_of)
    first: dict[str | None, Event] = {}
    for event in sorted(
        (event for system in part.systems for event in events(trigger.event, system, as_of)), key=_when
    ):
        if done is None or done.on < event.on:
            first.setdefault(event.valve, event)
    for event in first.values():
        latest = event.on + timedelta(days=trigger.within_days or 0)
        yield replace(
            _item(rule, part, history, done),
            state="overdue" if as_of > latest else "due",
            valve=event.valve,
            earliest=event.on,
            due=event.on,
            latest=latest,
            event=trigger.event,
            event_on=event.on,
            event_entry=event.entry,
        )


def _when(event: Event) -> tuple[date, int]:
    return event.on, event.entry


def _item(rule: Rule, part: Part, history: SupplyHistory, done: Done | None) -> DueItem:
    return DueItem(
        rule=rule.id,
        item=rule.item,
        supply=history.supply.uid,
        systems=tuple(system.uid for system in part.systems),
        state="no record",
        required=is_required(rule),
        mark=rule.mark,
        clause=rule.clause if is_required(rule) else None,
        gauge=None if part.gauge is None else part.gauge.uid,
        valve=part.valve,
        last_done=None if done is None else done.on,
        last_entry=None if done is None else done.entry,
        unstated=part.unstated,
        also=rule.applies_when.also,
    )


def _baseline(part: Part) -> date | None:
    if part.gauge is not None and part.gauge.installed_on is not None:
        return part.gauge.installed_on
    return min((system.installed_on for system in part.systems if system.installed_on is not None), default=None)


def _state(window: Window | None, done: Done | None, as_of: date) -> State:
    if window is None:
        return "no record"
    if as_of < window.due:
        return "not yet"
    if done is None:
        return "no record"
    return "overdue" if as_of > window.latest else "due"
