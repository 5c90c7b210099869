"""Slope and its significance, free of any distribution, from six dates on; no words are drawn from it alone."""

from __future__ import annotations

from collections.abc import Sequence

from scipy import stats

from fieldlog.assessment import constants
from fieldlog.assessment.drain_index import Index
from fieldlog.records.statement import Trend


def trends(tests: Sequence[Index]) -> tuple[Trend, ...]:
    """Return the trends of static and drain index.

    Parameters
    ----------
    tests : sequence of Index
        Comparable tests, oldest first [-].

    Returns
    -------
    tuple of Trend
        Slopes a year; empty from fewer than six dates [-].

    References
    ----------
    Theil 1950 and Sen 1968 (slope); Mann 1945 and Kendall (test), two-sided.
    """
    days = [one.test.performed_on.toordinal() for one in tests]
    if len(set(days)) < constants.TREND_DATES:
        return ()
    years = [(day - days[0]) / 365.25 for day in days]
    return (
        _trend("static_psi", years, [one.static.psi for one in tests]),
        _trend("drain_index", years, [one.index for one in tests]),
    )


def _trend(quantity: str, years: Sequence[float], values: Sequence[float]) -> Trend:
    slope = stats.theilslopes(values, years, alpha=0.95)
    moves = len(set(values)) > 1
    p_value = float(stats.kendalltau(years, values).pvalue) if moves else 1.0
    return Trend(
        quantity=quantity,
        slope_per_year=float(slope.slope),
        slope_low_per_year=float(slope.low_slope),
        slope_high_per_year=float(slope.high_slope),
        mann_kendall_p=p_value,
        dates=len(set(years)),
    )
