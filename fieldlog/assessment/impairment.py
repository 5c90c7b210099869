"""Signs in a test that ask for the valves to be looked at before anybody leaves."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import UTC, date, datetime, time, timedelta

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.comparable import Comparisons
from fieldlog.assessment.drain_index import residual_of
from fieldlog.assessment.expected import Expected
from fieldlog.assessment.reading_error import Instruments
from fieldlog.assessment.statics import is_not_recovered, static_of
from fieldlog.records.history import DrainTest, System, ValveFound
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import Number, Reason

_SECTION = "8"


def suspected_impairment(
    compared: Comparisons,
    system: System,
    instruments: Instruments,
    bands: Expected | None,
    profile: RuleProfile | None,
    as_of: date,
) -> tuple[Reason, ...]:
    """Return the signs of an impairment in the newest test and on record; empty where there are none.

    Parameters
    ----------
    compared : Comparisons
        The newest test and what it is held against [-].
    system : System
        Its system: impairments on record, valves that are normally shut [-].
    instruments : Instruments
        The gauges [-].
    bands : Expected or None
        Expected bands by the earlier tests [psi].
    profile : RuleProfile or None
        The rules: hours a valve may be shut [-].
    as_of : date
        The day judged [-].

    Returns
    -------
    tuple of Reason
        Signs [-].

    References
    ----------
    DEVELOPERS.md, Method §8, first row.
    """
    newest = compared.newest
    return (
        *_of_readings(newest, instruments),
        *_of_valves(newest, system, profile, as_of),
        *_of_fall(compared, instruments, bands),
        *open_impairments(system),
    )


def open_impairments(system: System) -> tuple[Reason, ...]:
    """Return the impairments on record that have begun and not ended.

    Parameters
    ----------
    system : System
        The system [-].

    Returns
    -------
    tuple of Reason
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
        if residual_psi <= limit_psi:
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


def _of_valves(test: DrainTest, system: System, profile: RuleProfile | None, as_of: date) -> Iterator[Reason]:
    limit_hours = None if profile is None else profile.valve_shut_limit_hours()
    for valve in test.valves:
        if valve.id in system.normally_shut:
            continue
        if valve.found in {"partly", "shut"}:
            numbers: dict[str, Number] = {"valve": valve.id, "found": valve.found}
            yield Reason(ReasonCode.VALVE_FOUND_NOT_OPEN, numbers, (test.entry,), _SECTION)
        if valve.left in {"partly", "shut"}:
            yield Reason(
                ReasonCode.VALVE_LEFT_NOT_OPEN, {"valve": valve.id, "left": valve.left}, (test.entry,), _SECTION
            )
        hours = _hours_shut(valve, as_of)
        if limit_hours is not None and hours is not None and hours > limit_hours:
            numbers = {"valve": valve.id, "hours": hours, "limit_hours": limit_hours}
            yield Reason(ReasonCode.VALVE_SHUT_LONG, numbers, (test.entry,), _SECTION)


def _hours_shut(valve: ValveFound, as_of: date) -> float | None:
    if valve.shut_at is None:
        return None
    until = datetime.combine(as_of + timedelta(days=1), time(), UTC)
    opened = until if valve.opened_at is None else datetime.fromisoformat(valve.opened_at)
    return max((opened - datetime.fromisoformat(valve.shut_at)).total_seconds() / 3600, 0.0)


def _of_fall(compared: Comparisons, instruments: Instruments, bands: Expected | None) -> Iterator[Reason]:
    newest = compared.newest
    static = static_of(newest, instruments)
    if newest.residual is None or static is None:
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
    if newest.residual is None or other.residual is None:
        return False
    left = 100 - constants.QUARTER_PERCENT
    return 100 * newest.residual.exact_psi <= left * other.residual.exact_psi


def _static_is_as_before(
    static_psi: float, other: DrainTest, instruments: Instruments, bands: Expected | None
) -> bool:
    if bands is not None:
        return bands.static.holds(static_psi)
    then = static_of(other, instruments)
    return then is not None and abs(static_psi - then.psi) <= constants.STATIC_WITHOUT_BAND_PSI
