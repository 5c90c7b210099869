"""Signs in a test that ask for the valves to be looked at before anybody leaves."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from datetime import date

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.comparable import Comparisons, Conditions, pair_differences
from fieldlog.assessment.drain_index import residual_of
from fieldlog.assessment.expected import Expected
from fieldlog.assessment.reading_error import Instruments
from fieldlog.assessment.statics import is_not_recovered, static_of
from fieldlog.assessment.valve_states import ShutSpell, shut_spells
from fieldlog.records.history import DrainTest, System
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import Number, Reason

_SECTION = "8"


def signs_of(compared: Comparisons, conditions: Conditions, bands: Expected | None) -> tuple[Reason, ...]:
    """Return the signs of an impairment in the newest test itself; empty where there are none.

    Parameters
    ----------
    compared : Comparisons
        The newest test and what it is held against [-].
    conditions : Conditions
        Its system and gauges [-].
    bands : Expected | None
        Expected bands by the earlier tests [psi].

    Returns
    -------
    tuple[Reason, ...]
        Signs [-].

    References
    ----------
    DEVELOPERS.md, Method §8, first row.
    """
    newest = compared.newest
    return (*shows_by_itself(newest, conditions), *_of_fall(compared, conditions.instruments, bands))


def shows_by_itself(test: DrainTest, conditions: Conditions) -> tuple[Reason, ...]:
    """Return the signs of an impairment that a test shows without another to compare with.

    Parameters
    ----------
    test : DrainTest
        The test; its residual may be missing [-].
    conditions : Conditions
        Its system and gauges [-].

    Returns
    -------
    tuple[Reason, ...]
        Signs [-].

    References
    ----------
    DEVELOPERS.md, Method §8, first row.
    """
    return (*_of_readings(test, conditions.instruments), *_found_not_open(test, conditions.system))


def answers(compared: Comparisons, signs: Sequence[Reason], conditions: Conditions) -> bool:
    """Return whether a test without signs of its own answers those of an earlier one.

    Parameters
    ----------
    compared : Comparisons
        The later test and what it is held against [-].
    signs : Sequence[Reason]
        Signs that stand [-].
    conditions : Conditions
        Its system and gauges [-].

    Returns
    -------
    bool
        False where it can't be compared, or its residual is still down against the test it fell from [-].

    References
    ----------
    DEVELOPERS.md, Method §8: stands until a later test without it.
    """
    if compared.differs:
        return False
    bases = {reason.entries[-1] for reason in signs if reason.code == ReasonCode.RESIDUAL_FELL_QUARTER}
    return not any(
        _fell(compared.newest, test)
        for test in conditions.system.drain_tests
        if test.entry in bases and not pair_differences(compared.newest, test, conditions)
    )


def on_record(system: System, profile: RuleProfile | None, as_of: date) -> tuple[Reason, ...]:
    """Return what is on record beside readings: valves left shut or shut for long, impairments not ended.

    Parameters
    ----------
    system : System
        The system [-].
    profile : RuleProfile | None
        The rules: hours a valve may be shut [-].
    as_of : date
        The day judged [-].

    Returns
    -------
    tuple[Reason, ...]
        One each [-].

    References
    ----------
    NFPA 25, chapter 15 (impairments); DEVELOPERS.md, Method §8, first row.
    """
    limit_hours = None if profile is None else profile.valve_shut_limit_hours()
    newest = max(((test.performed_on, test.entry) for test in system.drain_tests), default=(date.min, 0))
    found = [
        reason
        for valve, spell in sorted(shut_spells(system).items())
        if spell.left is not None or (spell.on, spell.entry) >= newest  # a later test answers one that ended
        for reason in _of_spell(valve, spell, limit_hours, as_of)
    ]
    return (*found, *open_impairments(system))


def open_impairments(system: System) -> tuple[Reason, ...]:
    """Return the impairments on record that have begun and not ended.

    Parameters
    ----------
    system : System
        The system [-].

    Returns
    -------
    tuple[Reason, ...]
        One each [-].

    References
    ----------
    NFPA 25, chapter 15 (impairments).
    """
    return tuple(
        Reason(ReasonCode.IMPAIRMENT_OPEN, {"began_at": one.began_at}, (one.entry,), _SECTION)
        for one in system.impairments
    )


def _of_readings(test: DrainTest, instruments: Instruments) -> Iterator[Reason]:
    if test.residual is not None:
        residual_psi = residual_of(test.residual)
        static = static_of(test, instruments)
        static_psi = static.psi if static is not None else (test.static_before.psi if test.static_before else 0.0)
        limit_psi = max(constants.NEAR_ZERO_PSI, constants.NEAR_ZERO_SHARE * static_psi)
        if residual_psi <= limit_psi + constants.EVEN_PSI:
            numbers: dict[str, Number] = {"residual_psi": residual_psi, "limit_psi": limit_psi}
            yield Reason(ReasonCode.RESIDUAL_NEAR_ZERO, numbers, (test.entry,), _SECTION)
    if is_not_recovered(test, instruments):
        yield Reason(ReasonCode.NOT_RECOVERED, _return_numbers(test), (test.entry,), _SECTION)


def _return_numbers(test: DrainTest) -> dict[str, Number]:
    numbers: dict[str, Number] = {}
    if test.static_before is not None:
        numbers["static_before_psi"] = test.static_before.psi
    if test.static_after is not None:
        numbers["static_after_psi"] = test.static_after.psi
    if test.return_s is not None:
        numbers["return_s"] = test.return_s
    return numbers


def _found_not_open(test: DrainTest, system: System) -> Iterator[Reason]:
    for valve in test.valves:
        if valve.found in {"partly", "shut"} and valve.id not in system.normally_shut:
            numbers: dict[str, Number] = {"valve": valve.id, "found": valve.found}
            yield Reason(ReasonCode.VALVE_FOUND_NOT_OPEN, numbers, (test.entry,), _SECTION)


def _of_spell(valve: str, spell: ShutSpell, limit_hours: float | None, as_of: date) -> Iterator[Reason]:
    if spell.left is not None:
        yield Reason(ReasonCode.VALVE_LEFT_NOT_OPEN, {"valve": valve, "left": spell.left}, (spell.entry,), _SECTION)
    hours = spell.hours(as_of)
    if limit_hours is not None and hours is not None and hours > limit_hours:
        numbers: dict[str, Number] = {"valve": valve, "hours": hours, "limit_hours": limit_hours}
        yield Reason(ReasonCode.VALVE_SHUT_LONG, numbers, (spell.entry,), _SECTION)


def _of_fall(compared: Comparisons, instruments: Instruments, bands: Expected | None) -> Iterator[Reason]:
    newest = compared.newest
    static = static_of(newest, instruments)
    if newest.residual is None or static is None or compared.differs:
        return
    for against, other in (("reference", compared.reference), ("previous", compared.previous)):
        if other is None or other.residual is None or not _fell(newest, other):
            continue
        if _static_is_as_before(static.psi, other, instruments, bands):
            numbers: dict[str, Number] = {
                "reduction": 1 - newest.residual.psi / other.residual.psi,
                "residual_psi": newest.residual.psi,
                "reference_psi": other.residual.psi,
                "against": against,
            }
            yield Reason(ReasonCode.RESIDUAL_FELL_QUARTER, numbers, (newest.entry, other.entry), _SECTION)
            return


def _fell(newest: DrainTest, other: DrainTest) -> bool:
    if newest.residual is None or other.residual is None or not other.residual.exact_psi > 0:
        return False
    left = 100 - constants.QUARTER_PERCENT
    return 100 * newest.residual.exact_psi <= left * other.residual.exact_psi


def _static_is_as_before(static_psi: float, other: DrainTest, instruments: Instruments, bands: Expected | None) -> bool:
    if bands is not None:
        return bands.static.holds(static_psi)
    then = static_of(other, instruments)
    limit_psi = constants.STATIC_WITHOUT_BAND_PSI + constants.EVEN_PSI
    return then is None or abs(static_psi - then.psi) <= limit_psi
