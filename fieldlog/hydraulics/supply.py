"""Supply curves: what pressure is left at a flow.

A `SupplyCurve` follows the 1.85 power in two segments: from the source to the point where outside hose is drawn,
and from there to the base of riser. A `PointCurve` is given by stated points, as of a fire pump, and says nothing
beyond them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from fieldlog.errors import OutOfRangeError
from fieldlog.hydraulics.formulas import FLOW_EXPONENT, elevation_pressure
from fieldlog.hydraulics.pipe import Pipe
from fieldlog.hydraulics.ranges import Amount, as_given, finite, not_negative

_INVERSE = 1 / FLOW_EXPONENT  # never 0.54, so that flow_at undoes pressure_at


@dataclass(frozen=True, slots=True)
class LossCurve:
    """A listed loss by points (gpm, psi), interpolated; unknown beyond the last point.

    Without a point at no flow it begins at no loss there.
    """

    points: tuple[tuple[float, float], ...]

    def __post_init__(self) -> None:
        """Refuse no points, two at one flow, or one that is no amount."""
        flows, is_amount = {flow for flow, _ in self.points}, np.isfinite(self.points) & (np.asarray(self.points) >= 0)
        if not (flows and np.all(is_amount) and len(flows) == len(set(self.points))):
            raise OutOfRangeError(
                f"listed loss: {self.points}; give one point or more, one at each flow, in finite numbers from 0 up"
            )

    @property
    def last_gpm(self) -> float:
        """The flow beyond which the loss is unknown, in gpm."""
        return max(flow for flow, _ in self.points)

    def loss(self, flow_gpm: Amount) -> Amount:
        """Return the loss at a flow, in psi; not a number beyond the last point."""
        by_flow = {0.0: 0.0} | dict(self.points)
        flows = sorted(by_flow)
        losses = [by_flow[flow] for flow in flows]
        return as_given(np.interp(not_negative(flow_gpm=flow_gpm), flows, losses, right=np.nan))


@dataclass(frozen=True, slots=True)
class SupplyCurve:
    """Pressure available at a flow.

    `available(Q, outside_hose) = static - a_source (Q + hose)^1.85 - a_path Q^1.85 - loss(Q)`

    Parameters
    ----------
    static_psi : float
        Pressure at no flow [psi].
    a_source : float
        Resistance from the source to the hose point [psi/gpm^1.85].
    a_path : float
        Resistance from the hose point to where the pressure is wanted [psi/gpm^1.85].
    losses : tuple of LossCurve
        Listed losses of devices on that path [psi].

    References
    ----------
    NFPA 291 and the straight line on 1.85-power paper; DEVELOPERS.md, Method §2.
    """

    static_psi: float
    a_source: float
    a_path: float = 0.0
    losses: tuple[LossCurve, ...] = ()

    def __post_init__(self) -> None:
        """Refuse what is no curve."""
        are_finite = np.all(np.isfinite((self.static_psi, self.a_source, self.a_path)))
        if not (are_finite and self.a_source >= 0 and self.a_path >= 0):
            raise OutOfRangeError(
                f"supply curve: static {self.static_psi} psi, resistances {self.a_source} and {self.a_path}; "
                "give a finite static and finite resistances that are not negative"
            )

    @classmethod
    def from_flow_test(cls, static_psi: float, residual_psi: float, flow_gpm: float) -> SupplyCurve:
        """Return the curve through one flow test.

        Parameters
        ----------
        static_psi : float
            Static [psi].
        residual_psi : float
            Residual, below the static [psi].
        flow_gpm : float
            Flow measured, above 0 [gpm].

        Returns
        -------
        SupplyCurve
            Curve at the gauge, all of it in the first segment [psi, gpm].

        Raises
        ------
        OutOfRangeError
            If the residual is not below the static, or the flow is not above 0.
        """
        return cls.from_points(static_psi, [(flow_gpm, residual_psi)])

    @classmethod
    def from_points(cls, static_psi: float, points: Sequence[tuple[float, float]]) -> SupplyCurve:
        """Return the curve through the static that is nearest to several flow-test points (gpm, residual psi).

        Least squares of the drop on the flow to the 1.85.

        Parameters
        ----------
        static_psi : float
            Static [psi].
        points : Sequence[tuple[float, float]]
            Flow, above 0, and residual, below the static, of each point [gpm, psi].

        Returns
        -------
        SupplyCurve
            Curve at the gauge, all of it in the first segment [psi, gpm].

        Raises
        ------
        OutOfRangeError
            If there is no point, a residual is not below the static, or a flow is not above 0.
        """
        for flow_gpm, residual_psi in points:
            if not (0 < flow_gpm < np.inf and -np.inf < residual_psi < static_psi):
                raise OutOfRangeError(
                    f"flow test: residual {residual_psi} psi at {flow_gpm} gpm with static {static_psi} psi; "
                    "give a residual below the static and a flow above 0, all finite"
                )
        if not points:
            raise OutOfRangeError("flow test: no point; give a residual at a measured flow")
        flows, residuals = np.array(points, dtype=float).T
        x = flows**FLOW_EXPONENT
        return cls(float(static_psi), float(x @ (static_psi - residuals) / (x @ x)))

    def available(self, flow_gpm: Amount, outside_hose_gpm: Amount) -> Amount:
        """Return the pressure at a system flow while hose draws upstream, in psi.

        Not a number where a listed loss is unknown.
        """
        flow, hose = not_negative(flow_gpm=flow_gpm), not_negative(outside_hose_gpm=outside_hose_gpm)
        pressure = self.static_psi - self.a_source * (flow + hose) ** FLOW_EXPONENT
        pressure = pressure - self.a_path * flow**FLOW_EXPONENT - sum(curve.loss(flow) for curve in self.losses)
        return as_given(pressure)

    def pressure_at(self, flow_gpm: Amount) -> Amount:
        """Return the pressure at a flow without hose, in psi."""
        return self.available(flow_gpm, 0.0)

    def flow_at(self, pressure_psi: Amount) -> Amount:
        """Return the flow at which a pressure is left, in gpm; 0 at or above what is there at no flow.

        The largest such flow, since a listed loss may fall before it rises. Not a number where a listed loss ends
        before it; without end where nothing resists.
        """
        pressure = finite(pressure_psi=pressure_psi)
        if self.losses:
            return as_given(np.vectorize(self._flow_behind_losses, otypes=[float])(pressure))
        drop = np.maximum(self.static_psi - pressure, 0.0)
        with np.errstate(divide="ignore", invalid="ignore"):
            flow = (drop / (self.a_source + self.a_path)) ** _INVERSE
        return as_given(np.where(drop > 0, flow, 0.0))

    def at_elevation(self, rise_ft: float) -> SupplyCurve:
        """Return the curve at a point higher by `rise_ft`: up lowers."""
        return replace(self, static_psi=self.static_psi - float(elevation_pressure(rise_ft)))

    def through(self, pipe: Pipe) -> SupplyCurve:
        """Return the curve at the far end of a pipe that only the system's flow passes."""
        return replace(self, a_path=self.a_path + pipe.resistance())

    def with_loss(self, curve: LossCurve) -> SupplyCurve:
        """Return the curve behind a device with a listed loss."""
        return replace(self, losses=(*self.losses, curve))

    def _flow_behind_losses(self, pressure_psi: float) -> float:
        turns = self._turns_gpm()
        has_it = np.flatnonzero(self.pressure_at(turns) >= pressure_psi)
        if not has_it.size:
            return 0.0
        last = has_it[-1]
        if last == turns.size - 1:
            return float(turns[last]) if self.pressure_at(turns[last]) == pressure_psi else float("nan")
        ends = turns[last], turns[last + 1]
        return float(brentq(lambda flow: self.pressure_at(flow) - pressure_psi, *ends, xtol=1e-10, rtol=1e-14))

    def _turns_gpm(self) -> NDArray[np.float64]:
        """Return the known flows between which the pressure only rises or only falls, the last one included."""
        last_gpm = min(curve.last_gpm for curve in self.losses)
        listed = {flow for curve in self.losses for flow, _ in curve.points if flow < last_gpm}
        flows = np.array(sorted({0.0, last_gpm} | listed))
        falls = np.maximum(-np.diff(sum(curve.loss(flows) for curve in self.losses)) / np.diff(flows), 0.0)
        with np.errstate(divide="ignore", invalid="ignore"):  # no resistance, no peak between two listed points
            peaks = (falls / (FLOW_EXPONENT * (self.a_source + self.a_path))) ** (1 / (FLOW_EXPONENT - 1))
        return np.unique(np.concatenate([flows, peaks[(flows[:-1] < peaks) & (peaks < flows[1:])]]))


@dataclass(frozen=True, slots=True)
class PointCurve:
    """Pressure by stated points (gpm, psi) in one state of the pump; interpolated, unproven beyond them."""

    points: tuple[tuple[float, float], ...]

    def __post_init__(self) -> None:
        """Refuse fewer than two points, two at one flow, a negative flow, or a point that is no number."""
        flows = [flow for flow, _ in self.points]
        if len(flows) < 2 or len(set(flows)) < len(flows) or not (np.all(np.isfinite(self.points)) and min(flows) >= 0):
            raise OutOfRangeError(
                f"stated points: {self.points}; give two or more in finite numbers, each at its own flow from 0 up"
            )

    def pressure_at(self, flow_gpm: Amount) -> Amount:
        """Return the pressure at a flow, in psi; not a number (unproven) outside the stated flows."""
        flows, pressures = self._sorted()
        return as_given(np.interp(not_negative(flow_gpm=flow_gpm), flows, pressures, left=np.nan, right=np.nan))

    def available(self, flow_gpm: Amount, outside_hose_gpm: Amount) -> Amount:
        """Return the pressure at system flow and hose together, in psi: all of it passes the pump."""
        return self.pressure_at(not_negative(flow_gpm=flow_gpm) + not_negative(outside_hose_gpm=outside_hose_gpm))

    def flow_at(self, pressure_psi: Amount) -> Amount:
        """Return the flow at which the pressure is left, in gpm; not a number where none is stated.

        The largest one: a pump's curve may rise before it falls.
        """
        return as_given(np.vectorize(self._largest_flow, otypes=[float])(finite(pressure_psi=pressure_psi)))

    def at_elevation(self, rise_ft: float) -> PointCurve:
        """Return the curve at a point higher by `rise_ft`: up lowers."""
        lower_psi = float(elevation_pressure(rise_ft))
        return PointCurve(tuple((flow, pressure - lower_psi) for flow, pressure in self.points))

    def _largest_flow(self, pressure_psi: float) -> float:
        flows, pressures = self._sorted()
        for last in range(len(flows) - 1, 0, -1):
            ends = pressures[last - 1 : last + 1]
            if min(ends) <= pressure_psi <= max(ends):
                if ends[0] == ends[1]:
                    return float(flows[last])
                share = (pressure_psi - ends[1]) / (ends[0] - ends[1])
                return float(flows[last] - share * (flows[last] - flows[last - 1]))
        return float("nan")

    def _sorted(self) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        flows, pressures = np.array(sorted(self.points), dtype=float).T
        return flows, pressures


def drop_fraction(static_psi: float, residual_psi: float) -> float:
    """Return by which share of the static a residual lies below it.

    Parameters
    ----------
    static_psi : float
        Static, above 0 [psi].
    residual_psi : float
        Residual [psi].

    Returns
    -------
    float
        Share; 0.25 (older editions of NFPA 291) or about 0.10 (newer, from memory) makes a good test [-].

    Raises
    ------
    OutOfRangeError
        If the static is not above 0, or the residual not a finite number.

    References
    ----------
    NFPA 291, 4.3.6 (2010 and earlier).

    Examples
    --------
    >>> round(drop_fraction(68, 50), 3)
    0.265
    """
    if not 0 < static_psi < np.inf:
        raise OutOfRangeError(f"static_psi: {static_psi} is not above 0; give the static")
    if not np.isfinite(residual_psi):
        raise OutOfRangeError(f"residual_psi: {residual_psi} is no finite number; give the residual")
    return (static_psi - residual_psi) / static_psi


def is_extrapolated(flow_gpm: Amount, tested_gpm: float) -> Amount:
    """Return whether a flow lies beyond the largest flow tested, where a curve is drawn and not measured.

    Parameters
    ----------
    flow_gpm : Amount
        Flow with the hose that passes the same main, not negative [gpm].
    tested_gpm : float
        Largest flow of the flow test, not negative [gpm].

    Returns
    -------
    Amount
        True or false; an array of them for an array [-].

    Raises
    ------
    OutOfRangeError
        If an argument is negative or not a number.

    References
    ----------
    Common practice; our own limit, no standard's.

    Examples
    --------
    >>> is_extrapolated(1500, 1240)
    True
    """
    beyond = not_negative(flow_gpm=flow_gpm) > not_negative(tested_gpm=tested_gpm)
    return bool(beyond) if np.ndim(beyond) == 0 else beyond
