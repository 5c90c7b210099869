"""Routine gauge readings against the gauge's range and its own past; comparisons against the accuracy asked."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from datetime import date

from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.expected import student_interval
from fieldlog.assessment.reading_error import Instruments
from fieldlog.records.history import Gauge, GaugeReading
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import Number, Reason

_SECTION = "1"


def gauge_findings(
    gauges: Iterable[Gauge],
    readings: Sequence[GaugeReading],
    instruments: Instruments,
    profile: RuleProfile | None,
    as_of: date,
) -> tuple[Reason, ...]:
    """Return what the newest reading and the newest comparison of each gauge show.

    Parameters
    ----------
    gauges : Iterable[Gauge]
        The gauges in question [-].
    readings : Sequence[GaugeReading]
        Their routine readings, oldest first [-].
    instruments : Instruments
        For the error of a reading [-].
    profile : RuleProfile | None
        The rules: accuracy asked of a gauge [-].
    as_of : date
        The day judged [-].

    Returns
    -------
    tuple[Reason, ...]
        Findings [psi].

    References
    ----------
    NFPA 25, 5.3.2 (numbering differs by edition): within 3 percent of full scale.
    """
    found: list[Reason] = []
    for gauge in gauges:
        own = [one for one in readings if one.reading.gauge == gauge.uid and one.performed_on <= as_of]
        if own:
            found += _of_newest(gauge, own, instruments)
        found += _of_comparison(gauge, profile, as_of)
    return tuple(found)


def is_out_of_accuracy(error_psi: float, full_scale_psi: float, percent: float) -> bool:
    """Return whether a gauge errs by more than the percentage of its full scale.

    Parameters
    ----------
    error_psi : float
        Shown less reference [psi].
    full_scale_psi : float
        Full scale [psi].
    percent : float
        Accuracy asked [%].

    Returns
    -------
    bool
        False at the percentage exactly [-].

    References
    ----------
    NFPA 25, 5.3.2: accurate within 3 percent of full scale.

    Examples
    --------
    >>> is_out_of_accuracy(9.0, 300, 3), is_out_of_accuracy(9.1, 300, 3)
    (False, True)
    """
    return 100 * abs(error_psi) > percent * full_scale_psi + 1e-9


def _of_newest(gauge: Gauge, own: Sequence[GaugeReading], instruments: Instruments) -> Iterator[Reason]:
    newest = own[-1]
    read_psi = newest.reading.psi
    base: dict[str, Number] = {"gauge": gauge.name, "read_psi": read_psi}
    entries = (newest.entry,)
    if gauge.full_scale_psi is not None and read_psi > gauge.full_scale_psi:
        numbers = base | {"full_scale_psi": gauge.full_scale_psi}
        yield Reason(ReasonCode.GAUGE_ABOVE_SCALE, numbers, entries, _SECTION)
    low, high = gauge.normal_low_psi, gauge.normal_high_psi
    if (low is not None and read_psi < low) or (high is not None and read_psi > high):
        yield Reason(ReasonCode.GAUGE_OUTSIDE_RANGE, base | {"low_psi": low, "high_psi": high}, entries, _SECTION)
    same = [one.reading for one in own[:-1] if one.pump_state == newest.pump_state]
    usual = student_interval([one.psi for one in same], instruments.sigma_psi(newest.reading))
    if usual is not None and not usual.holds(read_psi):
        numbers = base | {"low_psi": usual.low, "high_psi": usual.high}
        yield Reason(ReasonCode.GAUGE_UNLIKE_PAST, numbers, entries, _SECTION)


def _of_comparison(gauge: Gauge, profile: RuleProfile | None, as_of: date) -> Iterator[Reason]:
    percent = None if profile is None else profile.gauge_accuracy_percent_full_scale()
    done = [one for one in gauge.comparisons if one.performed_on <= as_of and one.outcome in {"kept", None}]
    if percent is None or not done or gauge.full_scale_psi is None or not gauge.full_scale_psi > 0:
        return
    worst_psi = max((shown - reference for reference, shown in done[-1].points_psi), key=abs, default=0.0)
    if is_out_of_accuracy(worst_psi, gauge.full_scale_psi, float(percent)):
        numbers: dict[str, Number] = {
            "gauge": gauge.name,
            "error_psi": worst_psi,
            "share": abs(worst_psi) / gauge.full_scale_psi,
            "limit_share": float(percent) / 100,
        }
        yield Reason(ReasonCode.GAUGE_OUT_OF_ACCURACY, numbers, (done[-1].entry,), _SECTION)
