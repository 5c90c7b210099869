"""Which static a main drain test tells, and how sure it is."""

from __future__ import annotations

import math
from dataclasses import dataclass

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.reading_error import Instruments
from fieldlog.records.history import DrainTest, Gauge, Reading
from fieldlog.records.statement import Reason

_SECTION = "1"
_HOLDS_PRESSURE = frozenset({"check", "alarm", "backflow"})


@dataclass(frozen=True, slots=True)
class Static:
    """The static at the gauge, its 1 sigma, and what was noticed."""

    psi: float
    sigma_psi: float
    notes: tuple[Reason, ...] = ()


def static_of(test: DrainTest, instruments: Instruments) -> Static | None:
    """Return the static of a test; None where none was settled.

    Parameters
    ----------
    test : DrainTest
        The test [-].
    instruments : Instruments
        Its gauges [-].

    Returns
    -------
    Static | None
        Static and 1 sigma [psi].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    before, after = test.static_before, test.static_after
    if is_not_recovered(test, instruments) or (after is not None and test.steady is False):
        return None
    if after is None:
        return None if before is None else _before_only(test, before, instruments)
    if before is None:
        return Static(after.psi, instruments.sigma_psi(after))
    return _from_both(test, before, after, instruments)


def is_not_recovered(test: DrainTest, instruments: Instruments) -> bool:
    """Return whether the pressure had not come back after three minutes, or was ticked so.

    Parameters
    ----------
    test : DrainTest
        The test [-].
    instruments : Instruments
        Its gauges [-].

    Returns
    -------
    bool
        True where it did not recover [-].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    if test.did_not_recover:
        return True
    before, after = test.static_before, test.static_after
    if before is None or after is None:
        return False
    if test.steady is True and _stands_behind_a_valve(instruments.gauge(after)):
        return False  # what stood above it before was held by the valve
    limit_psi = max(2 * math.sqrt(2) * instruments.sigma_psi(before), constants.RECOVERY_LEAST_PSI)
    waited = test.return_s is not None and test.return_s >= constants.RECOVERY_S
    return waited and before.psi - after.psi > limit_psi


def _before_only(test: DrainTest, before: Reading, instruments: Instruments) -> Static:
    note = Reason(ReasonCode.STATIC_BEFORE_ONLY, {}, (test.entry,), _SECTION)
    sigma = math.hypot(instruments.sigma_psi(before), constants.STATIC_BEFORE_ONLY_PSI)
    return Static(before.psi, sigma, (note,))


def _from_both(test: DrainTest, before: Reading, after: Reading, instruments: Instruments) -> Static:
    sigma = instruments.sigma_psi(after)
    is_trapped = before.psi - after.psi > 2 * math.sqrt(2) * sigma
    notes: tuple[Reason, ...] = ()
    if is_trapped:
        numbers = {"static_before_psi": before.psi, "static_after_psi": after.psi}
        notes = (Reason(ReasonCode.TRAPPED_PRESSURE, numbers, (test.entry,), _SECTION),)
    if is_trapped or _stands_behind_a_valve(instruments.gauge(after)):
        return Static(after.psi, sigma, notes)
    return Static((before.psi + after.psi) / 2, sigma / math.sqrt(2), notes)


def _stands_behind_a_valve(gauge: Gauge | None) -> bool:
    return gauge is not None and bool(_HOLDS_PRESSURE.intersection(gauge.behind))
