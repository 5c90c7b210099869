"""The largest loss at the design demand that these tests could have missed."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from statistics import fmean

from fieldlog.assessment import constants
from fieldlog.assessment.drain_index import Index
from fieldlog.assessment.reading_error import reading_sigma
from fieldlog.hydraulics.formulas import INDEX_EXPONENT
from fieldlog.records.statement import BlindLoss


@dataclass(frozen=True, slots=True)
class Look:
    """What the smallest restriction that would show depends on."""

    static_psi: float
    residual_psi: float
    outlet_residual_psi: float  # at the drain's outlet, where its height is known
    static_sigma_psi: float
    residual_sigma_psi: float
    drain_k: float
    demand_flow_gpm: float
    tests: int  # comparable ones before the newest, since the reference
    gauge_sigma_psi: float = 0.0  # of a gauge replaced since


def blind_loss(
    earlier: Sequence[Index], newest: Index, drain_k: float, demand_flow_gpm: float, gauge_sigma_psi: float = 0.0
) -> BlindLoss | None:
    """Return the blind loss of a system's tests, and what a gauge read to 0.5 psi would make of it.

    Parameters
    ----------
    earlier : Sequence[Index]
        Comparable tests before the newest, since the reference, at least one [-].
    newest : Index
        The newest test [-].
    drain_k : float
        K of the drain [gpm/psi^0.5].
    demand_flow_gpm : float
        Flow in the riser at the recorded demand, above 0 [gpm].
    gauge_sigma_psi : float
        1 sigma by which a replaced gauge may read differently [psi].

    Returns
    -------
    BlindLoss | None
        Losses [psi]; None without an earlier test.

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    if not earlier or not demand_flow_gpm > 0:
        return None
    look = Look(
        static_psi=fmean(one.static.psi for one in earlier),
        residual_psi=fmean(one.residual_psi for one in earlier),
        outlet_residual_psi=fmean(one.outlet_residual_psi for one in earlier),
        static_sigma_psi=newest.static.sigma_psi,
        residual_sigma_psi=newest.residual_sigma_psi,
        drain_k=drain_k,
        demand_flow_gpm=demand_flow_gpm,
        tests=len(earlier),
        gauge_sigma_psi=gauge_sigma_psi,
    )
    fine_psi = min(reading_sigma(constants.FINE_GAUGE_DIVISION_PSI), look.residual_sigma_psi)
    finer = fine_psi / look.residual_sigma_psi
    fine = replace(look, static_sigma_psi=look.static_sigma_psi * finer, residual_sigma_psi=fine_psi)
    return BlindLoss(smallest_loss(look), smallest_loss(fine), demand_flow_gpm, look.tests)


def smallest_loss(look: Look) -> float | None:
    r"""Return the smallest restriction found with 90 percent probability at 5 percent false alarms.

    Iterates :math:`d = L (Q_d/Q_D)^2`, :math:`R' = R - d/(1 + d/R)`, :math:`D' = D + R - R'`,
    :math:`s^2 = s_S^2 + s_R^2 (1 + 0.925 D'/R')^2 + (s_S^2 + s_R^2 (1 + 0.925 D/R)^2)/m + (0.06 D)^2 (1 + 1/m)`,
    :math:`L = 2.93\, s\, (Q_D/Q_d)^2 (1 + 0.35 d/R)`.

    Parameters
    ----------
    look : Look
        Means of the earlier tests, errors, drain, demand [psi, gpm].

    Returns
    -------
    float | None
        Loss at the demand; None where no loss short of a shut valve would surely have shown [psi].

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    residual, drop = look.residual_psi, look.static_psi - look.residual_psi
    head = look.outlet_residual_psi - residual
    if not (residual > 0 and look.outlet_residual_psi > 0):
        return None
    drain_flow_gpm = look.drain_k * math.sqrt(look.outlet_residual_psi)
    share = (drain_flow_gpm / look.demand_flow_gpm) ** 2
    constant = (constants.BLIND_MODEL * drop) ** 2 * (1 + 1 / look.tests)
    constant += _variance(look, drop, residual + head) / look.tests
    constant += (INDEX_EXPONENT * look.gauge_sigma_psi * drop / (residual + head)) ** 2
    loss = 0.0
    for _ in range(constants.BLIND_ROUNDS):
        at_drain = loss * share
        lowered = residual - at_drain / (1 + at_drain / residual)
        if not (lowered >= residual / 4 and lowered + head > 0):
            return None
        spread = math.sqrt(constant + _variance(look, drop + residual - lowered, lowered + head))
        following = constants.BLIND_FACTOR * spread / share * (1 + constants.BLIND_NONLINEAR * at_drain / residual)
        if abs(following - loss) <= constants.BLIND_TOLERANCE_PSI:
            return following
        loss = following
    return None


def _variance(look: Look, drop_psi: float, outlet_residual_psi: float) -> float:
    slope = 1 + INDEX_EXPONENT * drop_psi / outlet_residual_psi
    return look.static_sigma_psi**2 + (look.residual_sigma_psi * slope) ** 2
