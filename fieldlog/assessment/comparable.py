"""Which tests may be compared, with what each is compared, and which conditions nobody stated."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import date

from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.drain_index import pump_started
from fieldlog.assessment.reading_error import Instruments
from fieldlog.records.history import DrainTest, PumpState, Reading, Supply, System
from fieldlog.records.statement import Reason

_SECTION = "1"
_NO_PUMP = {None, "none", "off"}
_BEGINS_ANEW = {
    str(ReasonCode.DRAIN_DIFFERS): "drain",
    str(ReasonCode.DRAIN_ALTERED): "drain",
    str(ReasonCode.TAP_DIFFERS): "gauge tap",
    str(ReasonCode.FEED_DIFFERS): "feed",
}


@dataclass(frozen=True, slots=True)
class Comparisons:
    """What the newest test is held against."""

    newest: DrainTest
    reference: DrainTest | None
    is_new_reference: bool
    previous: DrainTest | None
    best: DrainTest | None
    earlier: tuple[DrainTest, ...]  # all comparable ones, oldest first
    differs: tuple[Reason, ...]  # why the newest can't be compared; empty where it can
    unstated: tuple[str, ...]  # conditions nobody stated, in the pair that is most fully stated
    notes: tuple[Reason, ...]


@dataclass(frozen=True, slots=True)
class Conditions:
    """What the tests of one system are compared under; `altered` are the tests that found the drain altered."""

    supply: Supply
    system: System
    instruments: Instruments
    altered: tuple[tuple[date, int], ...] = ()


def conditions_of(supply: Supply, system: System, instruments: Instruments) -> Conditions:
    """Return what the tests of a system are compared under.

    Parameters
    ----------
    supply : Supply
        Its supply [-].
    system : System
        The system with its tests [-].
    instruments : Instruments
        The gauges [-].

    Returns
    -------
    Conditions
        The same, with the tests after which nothing earlier can be compared [-].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    altered = tuple(_when(test) for test in system.drain_tests if test.drain_unchanged is False)
    return Conditions(supply, system, instruments, altered)


def comparisons(tests: Sequence[DrainTest], conditions: Conditions) -> Comparisons:
    """Return what the last of the tests is compared with.

    Parameters
    ----------
    tests : Sequence[DrainTest]
        Tests with a residual, oldest first, at least one [-].
    conditions : Conditions
        Supply, system and gauges [-].

    Returns
    -------
    Comparisons
        Reference, previous and best, and why there is none [-].

    References
    ----------
    DEVELOPERS.md, Method §1 and "Comparable, reference".
    """
    newest = tests[-1]
    own = own_faults(newest, conditions.instruments)
    pairs = [
        (test, pair_differences(newest, test, conditions))
        for test in tests[:-1]
        if not own_faults(test, conditions.instruments)
    ]
    earlier = () if own else tuple(test for test, differences in pairs if not differences)
    changes = [reason for _, differences in pairs for reason in differences if reason.code in _BEGINS_ANEW]
    reference, is_new = _reference(newest, earlier, is_anew=bool(changes))
    return Comparisons(
        newest=newest,
        reference=reference,
        is_new_reference=is_new,
        previous=earlier[-1] if earlier else None,
        best=max(earlier, key=lambda test: _residual(test).exact_psi, default=None),
        earlier=earlier,
        differs=own or (pairs[-1][1] if pairs and not earlier else ()),
        unstated=_unstated(newest, reference, earlier, conditions),
        notes=_reference_notes(newest, reference, changes if is_new else ()),
    )


def own_faults(test: DrainTest, instruments: Instruments) -> tuple[Reason, ...]:
    """Return why a test can be compared with none: not fully open, not full flow, not settled, the wrong gauge.

    Parameters
    ----------
    test : DrainTest
        The test [-].
    instruments : Instruments
        The gauges [-].

    Returns
    -------
    tuple[Reason, ...]
        Empty where it can be [-].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    faults = (
        (ReasonCode.NOT_FULLY_OPEN, test.fully_open is False),
        (ReasonCode.NOT_FULL_FLOW, test.took_full_flow is False),
        (ReasonCode.NOT_SETTLED, test.steady is False),
    )
    found = [Reason(code, {}, (test.entry,), _SECTION) for code, is_so in faults if is_so]
    gauge = None if test.residual is None else instruments.gauge(test.residual)
    if gauge is not None and gauge.side in {"system", "air"}:
        found.append(Reason(ReasonCode.SYSTEM_SIDE_GAUGE, {"gauge": gauge.name}, (test.entry,), _SECTION))
    started = pump_started(test)
    return tuple(found if started is None else [*found, started])


def pair_differences(newer: DrainTest, older: DrainTest, conditions: Conditions) -> tuple[Reason, ...]:
    """Return by what two tests differ so that they can't be compared.

    Parameters
    ----------
    newer : DrainTest
        The later test [-].
    older : DrainTest
        The earlier test [-].
    conditions : Conditions
        Supply, system and gauges [-].

    Returns
    -------
    tuple[Reason, ...]
        Empty where they can be compared [-].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    return tuple(_differences(newer, older, conditions))


def _differences(newer: DrainTest, older: DrainTest, conditions: Conditions) -> Iterator[Reason]:
    entries = (newer.entry, older.entry)
    yield from _drain_differences(newer, older, conditions)
    taps = [_tap(test, conditions.instruments) for test in (newer, older)]
    if None not in taps and taps[0] != taps[1]:
        yield Reason(ReasonCode.TAP_DIFFERS, {"now": taps[0], "earlier": taps[1]}, entries, _SECTION)
    pumps = [pump_state(test) for test in (newer, older)]
    if _runs(pumps[0]) != _runs(pumps[1]) and None not in pumps:
        numbers = {"now": str(pumps[0]), "earlier": str(pumps[1])}
        yield Reason(ReasonCode.PUMP_STATE_DIFFERS, numbers, entries, _SECTION)
    if _not_open(newer, conditions.system) != _not_open(older, conditions.system):
        yield Reason(ReasonCode.VALVE_STATE_DIFFERS, {}, entries, _SECTION)


def _drain_differences(newer: DrainTest, older: DrainTest, conditions: Conditions) -> Iterator[Reason]:
    entries, system = (newer.entry, older.entry), conditions.system
    names = [_drain_name(test, system) for test in (newer, older)]
    if None not in names and names[0] != names[1]:
        yield Reason(ReasonCode.DRAIN_DIFFERS, {"now": names[0], "earlier": names[1]}, entries, _SECTION)
    since = None if system.drain is None else system.drain.since
    is_altered = any(_when(older) < altered <= _when(newer) for altered in conditions.altered)
    if is_altered or _lies_between(since, newer, older):
        yield Reason(ReasonCode.DRAIN_ALTERED, {}, entries, _SECTION)
    changed_on = system.feed_changed_on
    if changed_on is not None and _lies_between(changed_on, newer, older):
        numbers = {"changed_on": changed_on.isoformat()}
        yield Reason(ReasonCode.FEED_DIFFERS, numbers, entries, _SECTION)


def _lies_between(day: date | None, newer: DrainTest, older: DrainTest) -> bool:
    return day is not None and older.performed_on < day <= newer.performed_on


def _when(test: DrainTest) -> tuple[date, int]:
    return test.performed_on, test.entry


def pump_state(test: DrainTest) -> PumpState | None:
    """Return the state of the pump at the residual; None where nobody stated it.

    Parameters
    ----------
    test : DrainTest
        The test [-].

    Returns
    -------
    PumpState | None
        none, off, jockey or running [-].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    own = test.residual.pump_state if test.residual is not None else None
    return own or test.pump_state


def _runs(state: PumpState | None) -> str:
    return "no pump" if state in _NO_PUMP else str(state)


def _drain_name(test: DrainTest, system: System) -> str | None:
    return test.drain or (None if system.drain is None else system.drain.id)


def _tap(test: DrainTest, instruments: Instruments) -> str | None:
    gauge = None if test.residual is None else instruments.gauge(test.residual)
    return None if gauge is None or gauge.tap == "unknown" else gauge.tap


def _not_open(test: DrainTest, system: System) -> frozenset[str]:
    """Return the valves that were not open in flow, of those that normally are."""
    return frozenset(
        valve.id
        for valve in test.valves
        if valve.found in {"partly", "shut"} and valve.left != "open" and valve.id not in system.normally_shut
    )


def _reference(newest: DrainTest, earlier: Sequence[DrainTest], *, is_anew: bool) -> tuple[DrainTest | None, bool]:
    """Return the newest acceptance; after a change without one, the first test since, named a new reference."""
    if newest.standing == "acceptance":
        return None, False
    accepted = [test for test in earlier if test.standing == "acceptance"]
    if accepted:
        return accepted[-1], False
    return (earlier[0], True) if is_anew and earlier else (None, False)


def _unstated(
    newest: DrainTest, reference: DrainTest | None, earlier: Sequence[DrainTest], conditions: Conditions
) -> tuple[str, ...]:
    """Return what nobody stated of the pair that is most fully stated."""
    others = [test for test in (reference, earlier[-1] if earlier else None) if test is not None]
    lists: list[list[str]] = []
    for other in others:
        since = [test for test in (*earlier, newest) if _when(test) > _when(other)]
        silent = {*_silent(newest, conditions), *_silent(other, conditions)}
        if any(test.drain_unchanged is None for test in since):
            silent.add("drain_unchanged")
        lists.append(sorted(silent))
    return tuple(sorted(lists, key=lambda names: (len(names), names))[0]) if lists else ()


def _silent(test: DrainTest, conditions: Conditions) -> Iterator[str]:
    if test.fully_open is None:
        yield "fully_open"
    if test.took_full_flow is None:
        yield "took_full_flow"
    if _tap(test, conditions.instruments) is None:
        yield "gauge_tap"
    if test.static_after is not None and test.steady is None:
        yield "steady"
    if pump_state(test) is None and conditions.supply.kind in {"fire_pump", "parallel"}:
        yield "pump_state"
    if test.tank_level_ft is None and conditions.supply.kind == "gravity_tank":
        yield "tank_level"


def _reference_notes(newest: DrainTest, reference: DrainTest | None, changes: Sequence[Reason]) -> tuple[Reason, ...]:
    if reference is None:
        if newest.standing == "acceptance":
            return ()
        return (Reason(ReasonCode.NO_REFERENCE, {}, (newest.entry,), "3"),)
    if changes:
        numbers = {
            "performed_on": reference.performed_on.isoformat(),
            "because": _BEGINS_ANEW[changes[-1].code],
        }
        return (Reason(ReasonCode.NEW_REFERENCE, numbers, (reference.entry,), "1"),)
    return ()


def _residual(test: DrainTest) -> Reading:
    if test.residual is None:
        raise ValueError("only tests with a residual are compared")
    return test.residual
