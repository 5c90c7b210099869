"""Which tests may be compared, with what each is compared, and which conditions nobody stated."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import date

from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.reading_error import Instruments
from fieldlog.records.history import DrainTest, PumpState, Reading, Supply, System
from fieldlog.records.statement import Reason

_SECTION = "1"
_NO_PUMP = {None, "none", "off"}


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
    """What the tests of one system are compared under."""

    supply: Supply
    system: System
    instruments: Instruments


def comparisons(tests: Sequence[DrainTest], conditions: Conditions) -> Comparisons:
    """Return what the last of the tests is compared with.

    Parameters
    ----------
    tests : sequence of DrainTest
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
    newest, before = tests[-1], tests[:-1]
    own = own_faults(newest)
    usable = [test for test in before if not own_faults(test)]
    earlier = () if own else tuple(test for test in usable if not pair_differences(newest, test, conditions))
    since = _era_start(newest, tests, conditions.system)
    reference, is_new = _reference(newest, earlier, since)
    differs = own or _all_differ(newest, usable, earlier, conditions)
    return Comparisons(
        newest=newest,
        reference=reference,
        is_new_reference=is_new,
        previous=earlier[-1] if earlier else None,
        best=max(earlier, key=lambda test: _residual(test).exact_psi, default=None),
        earlier=earlier,
        differs=differs,
        unstated=_unstated(newest, reference, earlier, conditions),
        notes=_reference_notes(newest, reference, is_new=is_new),
    )


def own_faults(test: DrainTest) -> tuple[Reason, ...]:
    """Return why a test can be compared with none: not fully open, not full flow, or not settled.

    Parameters
    ----------
    test : DrainTest
        The test [-].

    Returns
    -------
    tuple of Reason
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
    return tuple(Reason(code, {}, (test.entry,), _SECTION) for code, is_so in faults if is_so)


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
    tuple of Reason
        Empty where they can be compared [-].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    return tuple(_differences(newer, older, conditions))


def _differences(newer: DrainTest, older: DrainTest, conditions: Conditions) -> Iterator[Reason]:
    entries = (newer.entry, older.entry)
    if _drain_of(newer, conditions.system) != _drain_of(older, conditions.system):
        numbers = {"now": newer.drain or "", "earlier": older.drain or ""}
        yield Reason(ReasonCode.DRAIN_DIFFERS, numbers, entries, _SECTION)
    taps = [_tap(test, conditions.instruments) for test in (newer, older)]
    if None not in taps and taps[0] != taps[1]:
        yield Reason(ReasonCode.TAP_DIFFERS, {"now": taps[0], "earlier": taps[1]}, entries, _SECTION)
    pumps = [pump_state(test) for test in (newer, older)]
    if _runs(pumps[0]) != _runs(pumps[1]) and None not in pumps:
        numbers = {"now": str(pumps[0]), "earlier": str(pumps[1])}
        yield Reason(ReasonCode.PUMP_STATE_DIFFERS, numbers, entries, _SECTION)
    if _not_open(newer, conditions.system) != _not_open(older, conditions.system):
        yield Reason(ReasonCode.VALVE_STATE_DIFFERS, {}, entries, _SECTION)
    changed_on = conditions.system.feed_changed_on
    if changed_on is not None and older.performed_on < changed_on <= newer.performed_on:
        yield Reason(ReasonCode.DRAIN_DIFFERS, {"now": "feed altered", "earlier": ""}, entries, _SECTION)


def pump_state(test: DrainTest) -> PumpState | None:
    """Return the state of the pump at the residual; None where nobody stated it.

    Parameters
    ----------
    test : DrainTest
        The test [-].

    Returns
    -------
    str or None
        none, off, jockey or running [-].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    own = test.residual.pump_state if test.residual is not None else None
    return own or test.pump_state


def _runs(state: PumpState | None) -> str:
    return "no pump" if state in _NO_PUMP else str(state)


def _drain_of(test: DrainTest, system: System) -> tuple[str, bool]:
    """Return which drain was opened: its id, and whether it was the one before its alteration."""
    own = system.drain
    name = test.drain or (own.id if own is not None else "")
    is_former = own is not None and own.since is not None and test.performed_on < own.since
    return name, is_former


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


def _era_start(newest: DrainTest, tests: Sequence[DrainTest], system: System) -> date | None:
    """Return the day of the last change of drain or feed that is not after the newest test."""
    days = [system.feed_changed_on, None if system.drain is None else system.drain.since]
    days += [test.performed_on for test in tests if test.drain_unchanged is False]
    return max((day for day in days if day is not None and day <= newest.performed_on), default=None)


def _reference(
    newest: DrainTest, earlier: Sequence[DrainTest], since: date | None
) -> tuple[DrainTest | None, bool]:
    in_era = [test for test in earlier if since is None or test.performed_on >= since]
    accepted = [test for test in in_era if test.standing == "acceptance"]
    if newest.standing == "acceptance":
        return None, False
    if accepted:
        return accepted[-1], False
    if since is not None and in_era:
        return in_era[0], True
    return None, False


def _all_differ(
    newest: DrainTest, usable: Sequence[DrainTest], earlier: Sequence[DrainTest], conditions: Conditions
) -> tuple[Reason, ...]:
    """Return why none of the earlier tests can be compared, unless a new reference begins with the newest."""
    if earlier or not usable:
        return ()
    found = pair_differences(newest, usable[-1], conditions)
    begins_anew = {ReasonCode.DRAIN_DIFFERS, ReasonCode.TAP_DIFFERS}
    return () if any(reason.code in begins_anew for reason in found) else found


def _unstated(
    newest: DrainTest, reference: DrainTest | None, earlier: Sequence[DrainTest], conditions: Conditions
) -> tuple[str, ...]:
    others = [test for test in (reference, earlier[-1] if earlier else None) if test is not None]
    pairs = [sorted({*_silent(newest, conditions), *_silent(other, conditions)}) for other in others]
    pairs.sort(key=len)
    return tuple(pairs[0]) if pairs else ()


def _silent(test: DrainTest, conditions: Conditions) -> Iterator[str]:
    if test.fully_open is None:
        yield "fully_open"
    if test.took_full_flow is None:
        yield "took_full_flow"
    if _tap(test, conditions.instruments) is None:
        yield "gauge_tap"
    if pump_state(test) is None and conditions.supply.kind in {"fire_pump", "parallel"}:
        yield "pump_state"


def _reference_notes(newest: DrainTest, reference: DrainTest | None, *, is_new: bool) -> tuple[Reason, ...]:
    if reference is None:
        if newest.standing == "acceptance":
            return ()
        return (Reason(ReasonCode.NO_REFERENCE, {}, (newest.entry,), "3"),)
    if is_new:
        numbers = {"performed_on": reference.performed_on.isoformat()}
        return (Reason(ReasonCode.NEW_REFERENCE, numbers, (reference.entry,), "1"),)
    return ()


def _residual(test: DrainTest) -> Reading:
    if test.residual is None:
        raise ValueError("only tests with a residual are compared")
    return test.residual
