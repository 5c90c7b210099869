"""Where the next readings should fall, by Student's interval from four comparable tests on."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from statistics import fmean

from scipy.special import stdtrit

from fieldlog.assessment import constants
from fieldlog.assessment.drain_index import Index
from fieldlog.hydraulics.formulas import INDEX_EXPONENT
from fieldlog.records.statement import ExpectedBand


@dataclass(frozen=True, slots=True)
class Interval:
    """A mean with the half width of the band around it."""

    mean: float
    half: float

    @property
    def low(self) -> float:
        """Lower end."""
        return self.mean - self.half

    @property
    def high(self) -> float:
        """Upper end."""
        return self.mean + self.half

    def holds(self, value: float) -> bool:
        """Return whether the value lies inside."""
        return self.low - constants.EVEN_PSI <= value <= self.high + constants.EVEN_PSI

    def widened(self, half: float) -> Interval:
        """Return the same with another half width added in quadrature."""
        return Interval(self.mean, math.hypot(self.half, half))


def student_interval(values: Sequence[float], least_sigma: float) -> Interval | None:
    r"""Return the interval in which the next value should fall; None from fewer than four.

    .. math:: \bar y \pm t_{0.995,\,n-1} \max(s, s_r) \sqrt{1 + 1/n}

    Parameters
    ----------
    values : Sequence[float]
        Earlier values [-].
    least_sigma : float
        1 sigma of reading: the spread is never taken smaller [-].

    Returns
    -------
    Interval | None
        Central 99 percent interval [-].

    References
    ----------
    Prediction interval of a normal sample; DEVELOPERS.md, Method §6.

    Examples
    --------
    >>> round(student_interval([71.0, 73.0, 72.0, 76.0], 0.5).half, 2)
    14.11
    """
    n = len(values)
    if n < constants.BAND_TESTS:
        return None
    quantile = float(stdtrit(n - 1, constants.BAND_QUANTILE))
    mean = sum(values) / n
    spread = math.sqrt(sum((value - mean) ** 2 for value in values) / (n - 1))
    return Interval(mean, quantile * max(spread, least_sigma) * math.sqrt(1 + 1 / n))


@dataclass(frozen=True, slots=True)
class Expected:
    """Bands of static and index, and the residual's that follows from both."""

    static: Interval
    index: Interval
    static_sigma_psi: float
    residual_sigma_psi: float

    def residual(self, static_psi: float | None = None) -> Interval:
        """Return the residual's band: for the static just read, or for any static of its own band."""
        read = self.static.mean if static_psi is None else static_psi
        residual_psi = residual_at(read, max(self.index.mean, 0.0))
        slope = 1 + INDEX_EXPONENT * (read - residual_psi) / max(residual_psi, 1.0)
        by_index = max(residual_psi, 0.0) ** INDEX_EXPONENT * self.index.half / slope
        static_half = self.static.half if static_psi is None else _two_sided() * self.static_sigma_psi
        return Interval(residual_psi, math.hypot(by_index, static_half / slope, _two_sided() * self.residual_sigma_psi))

    def with_new_gauge(self, gauge_sigma_psi: float) -> Expected:
        """Return the bands as widened by a gauge that may read differently by so much (1 sigma)."""
        if gauge_sigma_psi == 0:
            return self
        residual_psi = max(residual_at(self.static.mean, max(self.index.mean, 0.0)), 1.0)
        by_index = INDEX_EXPONENT * gauge_sigma_psi / residual_psi * self.index.mean
        return replace(
            self,
            static=self.static.widened(_two_sided() * gauge_sigma_psi),
            index=self.index.widened(_two_sided() * by_index),
        )

    def band(self) -> ExpectedBand:
        """Return the bands for the next visit, in psi."""
        residual = self.residual()
        return ExpectedBand(
            month=None,
            static_low_psi=self.static.low,
            static_high_psi=self.static.high,
            residual_low_psi=max(residual.low, 0.0),
            residual_high_psi=residual.high,
        )


def expected(earlier: Sequence[Index]) -> Expected | None:
    """Return what the next readings should be by the earlier comparable tests; None from fewer than four.

    Parameters
    ----------
    earlier : Sequence[Index]
        Comparable tests with static and index [-].

    Returns
    -------
    Expected | None
        Bands [psi].

    References
    ----------
    DEVELOPERS.md, Method §6, "Until" the explanations exist.
    """
    if len(earlier) < constants.BAND_TESTS:
        return None
    static_sigma = fmean(one.static.sigma_psi for one in earlier)
    static = student_interval([one.static_at_reference_psi for one in earlier], static_sigma)
    index = student_interval([one.index for one in earlier], fmean(one.sigma for one in earlier))
    if static is None or index is None:
        return None
    return Expected(static, index, static_sigma, fmean(one.residual_sigma_psi for one in earlier))


def residual_at(static_psi: float, index: float) -> float:
    r"""Return the residual that a static and a drain index give: the root of :math:`S - R = x R^{0.925}`.

    Parameters
    ----------
    static_psi : float
        Static [psi].
    index : float
        Drain index, not negative [psi^0.075].

    Returns
    -------
    float
        Residual; 0 where the static is not above 0 [psi].

    References
    ----------
    DEVELOPERS.md, Method §4; Newton's method, the function rises and is nearly straight.

    Examples
    --------
    >>> round(residual_at(80, 0.31561), 2)
    65.0
    """
    if not static_psi > 0:
        return 0.0
    residual = static_psi / (1 + index)
    for _ in range(20):
        value = residual + index * residual**INDEX_EXPONENT - static_psi
        residual -= value / (1 + INDEX_EXPONENT * index * residual ** (INDEX_EXPONENT - 1))
        residual = max(residual, 1e-9)
    return float(residual)


def _two_sided() -> float:
    return 2.5758  # normal quantile of 0.995
