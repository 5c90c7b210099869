"""Slope and its significance, free of any distribution, from six dates on; no words are drawn from it alone.

Computed here and not by scipy.stats, which gives the same numbers and takes ten times as long for a dozen tests.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import accumulate

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

from fieldlog.assessment import constants
from fieldlog.assessment.drain_index import Index
from fieldlog.records.statement import Trend

_TIE_DIGITS = 6  # ties stay ties in every unit of entry
_MOST_EXACT = 33  # numbers of pairs out of order are counted up to here, without ties
_NORMAL_95 = 1.959963984540054


def trends(tests: Sequence[Index]) -> tuple[Trend, ...]:
    """Return the trends of static and drain index.

    Parameters
    ----------
    tests : Sequence[Index]
        Comparable tests, oldest first [-].

    Returns
    -------
    tuple[Trend, ...]
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
        _trend("static_psi", years, [one.static_at_reference_psi for one in tests]),
        _trend("drain_index", years, [one.index for one in tests]),
    )


def theil_sen(years: Sequence[float], values: Sequence[float]) -> tuple[float, float, float]:
    """Return the median of the slopes between all pairs, and its 95 percent band.

    Parameters
    ----------
    years : Sequence[float]
        Times, at least two different ones [a].
    values : Sequence[float]
        Values [-].

    Returns
    -------
    tuple[float, float, float]
        Slope, lower and upper end [1/a].

    References
    ----------
    Sen 1968, J. Am. Stat. Assoc. 63:1379; band by Kendall's variance with its ties.

    Examples
    --------
    >>> theil_sen([0.0, 1.0, 2.0, 4.0], [3.0, 5.0, 7.0, 11.0])
    (2.0, 2.0, 2.0)
    """
    over, rise = _pairs(years), _pairs(values)
    slopes = np.sort((rise / np.where(over == 0, 1.0, over))[over != 0])
    n = len(years)
    variance = (n * (n - 1) * (2 * n + 5) - _tied(_ties(years)) - _tied(_ties(_rounded(values)))) / 18
    reach = _NORMAL_95 * math.sqrt(max(variance, 0.0))
    first = max(round((len(slopes) - reach) / 2) - 1, 0)
    last = min(round((len(slopes) + reach) / 2), len(slopes) - 1)
    return float(np.median(slopes)), float(slopes[first]), float(slopes[last])


def mann_kendall(years: Sequence[float], values: Sequence[float]) -> float:
    """Return the two-sided probability of so one-sided an order if there were no trend.

    Parameters
    ----------
    years : Sequence[float]
        Times [a].
    values : Sequence[float]
        Values [-].

    Returns
    -------
    float
        Probability: counted where nothing is tied, else by the normal distribution [-].

    References
    ----------
    Mann 1945, Econometrica 13:245; Kendall, Rank correlation methods (variance with ties).

    Examples
    --------
    >>> round(mann_kendall([0, 1, 2, 3, 4, 5], [9.0, 8.0, 7.0, 6.0, 5.0, 4.0]), 6)
    0.002778
    """
    n = len(years)
    order = int((np.sign(_pairs(years)) * np.sign(_pairs(_rounded(values)))).sum())
    ties = [_ties(years), _ties(_rounded(values))]
    if n in {count for tied in ties for count in tied}:
        return 1.0  # all tied
    if not any(ties) and n <= _MOST_EXACT:
        return _counted(n, (n * (n - 1) // 2 - abs(order)) // 2)
    pairs = n * (n - 1)
    variance = (pairs * (2 * n + 5) - sum(map(_tied, ties))) / 18
    variance += math.prod(sum(t * (t - 1) for t in tied) for tied in ties) / (2 * pairs)
    variance += math.prod(sum(t * (t - 1) * (t - 2) for t in tied) for tied in ties) / (9 * pairs * (n - 2))
    return float(2 * ndtr(-abs(order) / math.sqrt(variance)))


def _trend(quantity: str, years: Sequence[float], values: Sequence[float]) -> Trend:
    slope, low, high = theil_sen(years, values)
    return Trend(
        quantity=quantity,
        slope_per_year=slope,
        slope_low_per_year=low,
        slope_high_per_year=high,
        mann_kendall_p=mann_kendall(years, values),
        dates=len(set(years)),
    )


def _pairs(numbers: Sequence[float]) -> NDArray[np.float64]:
    """Return each number less each one before it."""
    all_of = np.asarray(numbers, dtype=np.float64)
    earlier, later = np.triu_indices(len(all_of), 1)
    return np.asarray(all_of[later] - all_of[earlier])


def _rounded(values: Sequence[float]) -> list[float]:
    return [round(value, _TIE_DIGITS) for value in values]


def _ties(numbers: Sequence[float]) -> list[int]:
    """Return how many there are of each number that occurs more than once."""
    return [count for count in np.unique(np.asarray(numbers), return_counts=True)[1].tolist() if count > 1]


def _tied(counts: Sequence[int]) -> int:
    return sum(count * (count - 1) * (2 * count + 5) for count in counts)


def _counted(n: int, inversions: int) -> float:
    """Return twice the share of the orders of `n` with at most so many pairs out of order, at most 1."""
    orders = [1]
    for size in range(2, n + 1):
        until = [0, *accumulate(orders)]
        longest = min(len(orders) + size - 1, inversions + 1)
        orders = [until[min(k + 1, len(orders))] - until[max(k - size + 1, 0)] for k in range(longest)]
    return min(2 * sum(orders[: inversions + 1]) / math.factorial(n), 1.0)
