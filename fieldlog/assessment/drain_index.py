"""The drain index of a test: the resistance between source and gauge, whatever the static does."""

from __future__ import annotations

import math
from dataclasses import dataclass

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.reading_error import Instruments
from fieldlog.assessment.statics import Static, static_of
from fieldlog.hydraulics import formulas
from fieldlog.records.history import Drain, DrainTest, Reading, System
from fieldlog.records.statement import Reason

_SECTION = "4"


@dataclass(frozen=True, slots=True)
class Index:
    """Static, residual and index of one test, each with its 1 sigma."""

    test: DrainTest
    static: Static
    residual_psi: float
    outlet_residual_psi: float  # at the drain's outlet, where its height is known
    residual_sigma_psi: float
    index: float
    sigma: float
    notes: tuple[Reason, ...] = ()

    @property
    def drop_psi(self) -> float:
        """Static less residual."""
        return self.static.psi - self.residual_psi


def index_of(test: DrainTest, system: System, instruments: Instruments) -> Index | None:
    """Return the drain index of a test; None where it has none: no static, no residual, or R above S.

    Parameters
    ----------
    test : DrainTest
        The test [-].
    system : System
        Its system: the drain's outlet [-].
    instruments : Instruments
        Its gauges [-].

    Returns
    -------
    Index or None
        Index and 1 sigma [psi^0.075].

    References
    ----------
    DEVELOPERS.md, Method §4.
    """
    static = static_of(test, instruments)
    if static is None or test.residual is None:
        return None
    residual_psi = residual_of(test.residual)
    outlet_psi = residual_psi + _outlet_head_psi(system.drain, instruments, test.residual)
    drop_psi = static.psi - residual_psi
    if not (outlet_psi > 0 and drop_psi >= 0):
        return None
    sigma_psi = instruments.sigma_psi(test.residual)
    index = float(formulas.drain_index(static.psi, residual_psi, outlet_psi))
    sigma = index_sigma(drop_psi, outlet_psi, static.sigma_psi, sigma_psi)
    return Index(
        test, static, residual_psi, outlet_psi, sigma_psi, index, sigma, _notes(test, drop_psi, sigma_psi)
    )


def index_sigma(drop_psi: float, residual_psi: float, static_sigma_psi: float, residual_sigma_psi: float) -> float:
    r"""Return the 1 sigma of a drain index.

    .. math:: \sigma_x = \sqrt{s_S^2 + s_R^2 (1 + 0.925 D/R)^2} / R^{0.925}

    Parameters
    ----------
    drop_psi : float
        Static less residual [psi].
    residual_psi : float
        Residual at the outlet, above 0 [psi].
    static_sigma_psi : float
        1 sigma of the static [psi].
    residual_sigma_psi : float
        1 sigma of the residual [psi].

    Returns
    -------
    float
        1 sigma of the index [psi^0.075].

    References
    ----------
    DEVELOPERS.md, Method §4; first-order propagation, JCGM 100:2008, 5.1.2.

    Examples
    --------
    >>> round(index_sigma(15, 65, 0.5, 0.8), 4)
    0.0231
    """
    slope = 1 + formulas.INDEX_EXPONENT * drop_psi / residual_psi
    return float(math.hypot(static_sigma_psi, residual_sigma_psi * slope) / residual_psi**formulas.INDEX_EXPONENT)


def residual_of(reading: Reading) -> float:
    """Return the residual; of a swinging needle the mean of its extremes.

    Parameters
    ----------
    reading : Reading
        The reading at full flow [psi].

    Returns
    -------
    float
        Residual [psi].

    References
    ----------
    DEVELOPERS.md, Method §4.
    """
    if reading.low_psi is None or reading.high_psi is None:
        return reading.psi
    return (reading.low_psi + reading.high_psi) / 2


def _outlet_head_psi(drain: Drain | None, instruments: Instruments, reading: Reading) -> float:
    gauge = instruments.gauge(reading)
    if drain is None or drain.outlet_elevation_ft is None or gauge is None or gauge.elevation_ft is None:
        return 0.0
    return float(formulas.elevation_pressure(gauge.elevation_ft - drain.outlet_elevation_ft))


def _notes(test: DrainTest, drop_psi: float, sigma_psi: float) -> tuple[Reason, ...]:
    if drop_psi >= 2 * sigma_psi:
        return ()
    numbers = {"drop_psi": drop_psi, "limit_psi": 2 * sigma_psi}
    return (Reason(ReasonCode.INDEX_SMALLER_THAN_READ, numbers, (test.entry,), _SECTION),)


def drain_k(drain: Drain | None) -> float:
    """Return the median K of a drain: once measured, else of its size class.

    Parameters
    ----------
    drain : Drain or None
        The drain [-].

    Returns
    -------
    float
        K [gpm/psi^0.5].

    References
    ----------
    DEVELOPERS.md, Method §5.
    """
    if drain is None:
        return constants.UNKNOWN_DRAIN_K
    if drain.k is not None:
        return drain.k
    if drain.size_in is None:
        return constants.UNKNOWN_DRAIN_K
    return next(k for size_in, k in constants.DRAIN_K_BY_SIZE if drain.size_in >= size_in)
