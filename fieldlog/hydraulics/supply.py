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
from fieldlog.hydraulics.formulas import FLOW_EXPONENT, Amount, elevation_pressure
from fieldlog.hydraulics.pipe import Pipe

_INVERSE = 1 / FLOW_EXPONENT  # never 0.54, so that flow_at undoes pressure_at


@dataclass(frozen=True, slots=True)
class LossCurve:
    """A listed loss by points (gpm, psi), interpolated from 0 at no flow; unknown beyond the last point."""

    points: tuple[tuple[float, float], ...]

    def __post_init__(self) -> None:
        """Refuse no points, or one that is no number."""
        if not (self.points and np.all(np.isfinite(self.points))):
            raise OutOfRangeError(f"listed loss: {self.points}; give one point or more in finite numbers")

    def loss(self, flow_gpm: Amount) -> Amount:
        """Return the loss at a flow, in psi; not a number beyond the last point."""
        flows, losses = np.array(sorted({(0.0, 0.0), *self.points})).T
        return _as_given(np.interp(np.asarray(flow_gpm, dtype=float), flows, losses, right=np.nan))


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
        """Return the pressure at a system flow while hose draws upstream, in psi."""
        flow, hose = np.asarray(flow_gpm, dtype=float), np.asarray(outside_hose_gpm, dtype=float)
        if not all(np.all((amount >= 0) & (amount < np.inf)) for amount in (flow, hose)):
            raise OutOfRangeError(
                f"flow: {flow_gpm} gpm and hose {outside_hose_gpm} gpm; give finite numbers that are not negative"
            )
        pressure = self.static_psi - self.a_source * (flow + hose) ** FLOW_EXPONENT
        pressure = pressure - self.a_path * flow**FLOW_EXPONENT - sum(curve.loss(flow) for curve in self.losses)
        return _as_given(pressure)

    def pressure_at(self, flow_gpm: Amount) -> Amount:
        """Return the pressure at a flow without hose, in psi."""
        return self.available(flow_gpm, 0.0)

    def flow_at(self, pressure_psi: Amount) -> Amount:
        """Return the flow at which a pressure is left, in gpm; 0 at or above the static.

        Not a number where a listed loss ends before that flow.
        """
        pressure = _finite_pressure(pressure_psi)
        if not self.losses:
            drop = np.maximum(self.static_psi - pressure, 0.0)
            with np.errstate(divide="ignore", invalid="ignore"):
                return _as_given((drop / (self.a_source + self.a_path)) ** _INVERSE)
        return _as_given(np.vectorize(self._flow_with_losses, otypes=[float])(pressure))

    def at_elevation(self, rise_ft: float) -> SupplyCurve:
        """Return the curve at a point higher by `rise_ft`: up lowers."""
        return replace(self, static_psi=self.static_psi - float(elevation_pressure(rise_ft)))

    def through(self, pipe: Pipe) -> SupplyCurve:
        """Return the curve at the far end of a pipe that only the system's flow passes."""
        return replace(self, a_path=self.a_path + pipe.resistance())

    def with_loss(self, curve: LossCurve) -> SupplyCurve:
        """Return the curve behind a device with a listed loss."""
        return replace(self, losses=(*self.losses, curve))

    def _flow_with_losses(self, pressure_psi: float) -> float:
        if pressure_psi >= self.static_psi:
            return 0.0
        last_gpm = min(max(flow for flow, _ in curve.points) for curve in self.losses)
        if not self.pressure_at(last_gpm) <= pressure_psi:
            return float("nan")
        return float(brentq(lambda flow: self.pressure_at(flow) - pressure_psi, 0.0, last_gpm, xtol=1e-10, rtol=1e-14))


@dataclass(frozen=True, slots=True)
class PointCurve:
    """Pressure by stated points (gpm, psi) in one state of the pump; interpolated, unproven beyond them."""

    points: tuple[tuple[float, float], ...]

    def __post_init__(self) -> None:
        """Refuse fewer than two points, two at one flow, or one that is no number."""
        flows = [flow for flow, _ in self.points]
        if len(flows) < 2 or len(set(flows)) < len(flows) or not np.all(np.isfinite(self.points)):
            raise OutOfRangeError(
                f"stated points: {self.points}; give two or more in finite numbers, each at its own flow"
            )

    def pressure_at(self, flow_gpm: Amount) -> Amount:
        """Return the pressure at a flow, in psi; not a number (unproven) outside the stated flows."""
        flows, pressures = self._sorted()
        return _as_given(np.interp(np.asarray(flow_gpm, dtype=float), flows, pressures, left=np.nan, right=np.nan))

    def available(self, flow_gpm: Amount, outside_hose_gpm: Amount) -> Amount:
        """Return the pressure at system flow and hose together, in psi: all of it passes the pump."""
        return self.pressure_at(np.asarray(flow_gpm, dtype=float) + np.asarray(outside_hose_gpm, dtype=float))

    def flow_at(self, pressure_psi: Amount) -> Amount:
        """Return the flow at which the pressure is left, in gpm; not a number where none is stated.

        The largest one: a pump's curve may rise before it falls.
        """
        return _as_given(np.vectorize(self._largest_flow, otypes=[float])(_finite_pressure(pressure_psi)))

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


def _as_given(value: NDArray[np.float64]) -> Amount:
    return float(value) if np.ndim(value) == 0 else value


def _finite_pressure(pressure_psi: Amount) -> NDArray[np.float64]:
    pressure = np.asarray(pressure_psi, dtype=np.float64)
    if not np.all(np.isfinite(pressure)):
        raise OutOfRangeError(f"pressure_psi: {pressure_psi} is no finite number; give a pressure", name="pressure_psi")
    return pressure
