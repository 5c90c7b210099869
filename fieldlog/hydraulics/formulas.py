"""Formulas of sprinkler hydraulics in the published psi, gpm, ft and in forms.

All take floats or arrays and broadcast; a float gives a float. What is outside a formula's range (negative, or
not a number) is refused, never computed.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.optimize import brentq

from fieldlog.hydraulics.ranges import Amount, above_zero, as_given, finite, not_negative
from fieldlog.hydraulics.tables import table

FLOW_EXPONENT = 1.85
PITOT_CONSTANT = 29.83  # sqrt(2 g) and water at about 60 F, gpm with in. and psi
PSI_PER_FOOT = 0.433
INDEX_EXPONENT = 0.925  # half of 1.85: the drain's own flow goes with the root of the residual
_OUTLET_CONSTANT = 29.84  # as newer texts print it; in the estimate of a drain's K only


@dataclass(frozen=True, slots=True)
class FrictionLaw:
    """Loss a foot as `coefficient * Q**flow_exponent / (C**flow_exponent * d**diameter_exponent)`, psi/ft."""

    coefficient: float = 4.52
    flow_exponent: float = FLOW_EXPONENT
    diameter_exponent: float = 4.87


INSTALLATION_STANDARD = FrictionLaw()


def friction_loss(flow_gpm: Amount, c: Amount, diameter_in: Amount, law: FrictionLaw = INSTALLATION_STANDARD) -> Amount:
    r"""Return the Hazen-Williams friction loss a foot of pipe.

    .. math:: p = \frac{4.52 \, Q^{1.85}}{C^{1.85} d^{4.87}}

    Parameters
    ----------
    flow_gpm : Amount
        Flow, not negative [gpm].
    c : Amount
        Hazen-Williams C-factor, above 0 [-].
    diameter_in : Amount
        Inside diameter, above 0 [in].
    law : FrictionLaw
        Constants of the form used; the installation standard's by default [-].

    Returns
    -------
    Amount
        Friction loss [psi/ft].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    Notes
    -----
    For water near 60 F in turbulent flow (from memory). Other published forms differ by 0.2 to 0.9 percent; one
    report uses one form.

    References
    ----------
    NFPA 13-2016, 23.4.2.1 (numbering differs by edition); constants as reproduced by a code
    resource library, 2010.

    Examples
    --------
    >>> round(friction_loss(100, 120, 2.067), 6)
    0.09396
    """
    flow, c_factor, diameter = not_negative(flow_gpm=flow_gpm), above_zero(c=c), above_zero(diameter_in=diameter_in)
    loss = law.coefficient * (flow / c_factor) ** law.flow_exponent / diameter**law.diameter_exponent
    return as_given(loss)


def sprinkler_flow(k: Amount, pressure_psi: Amount) -> Amount:
    r"""Return the flow of an orifice.

    .. math:: Q = K \sqrt{P}

    Parameters
    ----------
    k : Amount
        K-factor, above 0 [gpm/psi^0.5].
    pressure_psi : Amount
        Pressure at the orifice, not negative [psi].

    Returns
    -------
    Amount
        Flow [gpm].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    References
    ----------
    NFPA 13-2016, 23.4.2.5 (from memory).

    Examples
    --------
    >>> round(sprinkler_flow(5.6, 7), 3)
    14.816
    """
    return as_given(above_zero(k=k) * np.sqrt(not_negative(pressure_psi=pressure_psi)))


def sprinkler_pressure(k: Amount, flow_gpm: Amount) -> Amount:
    r"""Return the pressure at which an orifice gives a flow.

    .. math:: P = (Q / K)^2

    Parameters
    ----------
    k : Amount
        K-factor, above 0 [gpm/psi^0.5].
    flow_gpm : Amount
        Flow, not negative [gpm].

    Returns
    -------
    Amount
        Pressure at the orifice [psi].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    References
    ----------
    NFPA 13-2016, 23.4.2.5 (from memory).

    Examples
    --------
    >>> round(sprinkler_pressure(5.6, 24), 1)
    18.4
    """
    return as_given((not_negative(flow_gpm=flow_gpm) / above_zero(k=k)) ** 2)


def pitot_flow(coefficient: Amount, diameter_in: Amount, pitot_psi: Amount, outlet_factor: Amount = 1.0) -> Amount:
    r"""Return the flow of an open outlet from the velocity pressure of its stream.

    .. math:: Q = 29.83 \, c \, d^2 \sqrt{p}

    Parameters
    ----------
    coefficient : Amount
        Coefficient of the outlet: 0.90 smooth and rounded, 0.80 square and sharp, 0.70 projecting [-].
    diameter_in : Amount
        Inside diameter of the outlet, above 0 [in].
    pitot_psi : Amount
        Pitot reading, not negative [psi].
    outlet_factor : Amount
        Further factor of a large (pumper) outlet; 1 for others [-].

    Returns
    -------
    Amount
        Flow [gpm].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    Notes
    -----
    Newer texts print 29.84, which is 0.034 percent more.

    References
    ----------
    NFPA 291, chapter 4 (flow from outlets).

    Examples
    --------
    >>> round(pitot_flow(0.90, 2.5, 40))
    1061
    """
    diameter = above_zero(diameter_in=diameter_in)
    share = above_zero(coefficient=coefficient) * above_zero(outlet_factor=outlet_factor)
    return as_given(PITOT_CONSTANT * share * diameter**2 * np.sqrt(not_negative(pitot_psi=pitot_psi)))


def pumper_outlet_factor(pitot_psi: Amount) -> Amount:
    """Return the factor of a pumper outlet for its pitot reading.

    Parameters
    ----------
    pitot_psi : Amount
        Pitot reading, not negative [psi].

    Returns
    -------
    Amount
        Factor: 0.97 at 2 psi and below, 0.83 at 7 psi and above, linear between [-].

    Raises
    ------
    OutOfRangeError
        If the reading is negative or not a number.

    References
    ----------
    NFPA 291, chapter 4; data/outlets.toml says which were read.

    Examples
    --------
    >>> pumper_outlet_factor(10)
    0.83
    """
    rows = table("outlets")["pumper"]
    pitots_psi, factors = [row["pitot_psi"] for row in rows], [row["factor"] for row in rows]
    return as_given(np.interp(not_negative(pitot_psi=pitot_psi), pitots_psi, factors))


def elevation_pressure(height_ft: Amount) -> Amount:
    """Return the pressure of a column of water.

    Parameters
    ----------
    height_ft : Amount
        Height, negative downward [ft].

    Returns
    -------
    Amount
        Pressure [psi].

    Raises
    ------
    OutOfRangeError
        If the height is not a number.

    References
    ----------
    0.433 psi/ft (9.8 kPa/m): plumbing code appendix E103 (2008).

    Examples
    --------
    >>> round(elevation_pressure(23.1), 1)
    10.0
    """
    return as_given(PSI_PER_FOOT * finite(height_ft=height_ft))


def velocity(flow_gpm: Amount, diameter_in: Amount) -> Amount:
    """Return the mean velocity in a full pipe.

    Parameters
    ----------
    flow_gpm : Amount
        Flow, not negative [gpm].
    diameter_in : Amount
        Inside diameter, above 0 [in].

    Returns
    -------
    Amount
        Velocity [ft/s].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    References
    ----------
    Continuity; 0.4085 agrees with a printed friction-loss chart of 1 in. pipe (common practice).

    Examples
    --------
    >>> round(velocity(10, 1.049), 2)
    3.71
    """
    return as_given(0.4085 * not_negative(flow_gpm=flow_gpm) / above_zero(diameter_in=diameter_in) ** 2)


def velocity_pressure(flow_gpm: Amount, diameter_in: Amount) -> Amount:
    """Return the velocity pressure in a full pipe.

    Parameters
    ----------
    flow_gpm : Amount
        Flow, not negative [gpm].
    diameter_in : Amount
        Inside diameter, above 0 [in].

    Returns
    -------
    Amount
        Velocity pressure [psi].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    References
    ----------
    NFPA 13-2016, 23.4.2.2 (from memory).

    Examples
    --------
    >>> round(velocity_pressure(100, 2.067), 3)
    0.615
    """
    return as_given(0.001123 * not_negative(flow_gpm=flow_gpm) ** 2 / above_zero(diameter_in=diameter_in) ** 4)


def density_flow(density_gpm_per_ft2: Amount, area_ft2: Amount) -> Amount:
    """Return the flow that gives a density over an area.

    Parameters
    ----------
    density_gpm_per_ft2 : Amount
        Density, not negative [gpm/ft2].
    area_ft2 : Amount
        Area, not negative [ft2].

    Returns
    -------
    Amount
        Flow [gpm].

    Raises
    ------
    OutOfRangeError
        If an argument is negative or not a number.

    References
    ----------
    Definition of density.

    Examples
    --------
    >>> round(density_flow(0.20, 120), 6)
    24.0
    """
    return as_given(not_negative(density_gpm_per_ft2=density_gpm_per_ft2) * not_negative(area_ft2=area_ft2))


def c_multiplier(c: Amount) -> Amount:
    r"""Return by what an equivalent length tabulated for C = 120 is multiplied for another C.

    .. math:: (C / 120)^{1.85}

    Parameters
    ----------
    c : Amount
        Hazen-Williams C-factor, above 0 [-].

    Returns
    -------
    Amount
        Multiplier [-].

    Raises
    ------
    OutOfRangeError
        If `c` is not above 0.

    References
    ----------
    NFPA 13-2016, Table 23.4.3.2.1; CEA 4001:2009, p. 134 (0.714, 0.850, 1.000, 1.160, 1.330).

    Examples
    --------
    >>> round(c_multiplier(140), 2)
    1.33
    """
    return as_given((above_zero(c=c) / 120) ** FLOW_EXPONENT)


def diameter_multiplier(actual_in: Amount, schedule_40_in: Amount) -> Amount:
    r"""Return by what an equivalent length tabulated for Schedule 40 is multiplied for another inside diameter.

    .. math:: (d / d_{40})^{4.87}

    Parameters
    ----------
    actual_in : Amount
        Actual inside diameter, above 0 [in].
    schedule_40_in : Amount
        Inside diameter of Schedule 40 of that nominal size, above 0 [in].

    Returns
    -------
    Amount
        Multiplier [-].

    Raises
    ------
    OutOfRangeError
        If a diameter is not above 0.

    References
    ----------
    NFPA 13-2016, 23.4.3.1.3 (from memory).

    Examples
    --------
    >>> round(diameter_multiplier(2.157, 2.067), 3)
    1.231
    """
    return as_given((above_zero(actual_in=actual_in) / above_zero(schedule_40_in=schedule_40_in)) ** 4.87)


def drain_index(static_psi: Amount, residual_psi: Amount, outlet_residual_psi: Amount | None = None) -> Amount:
    r"""Return the drain index, proportional to the resistance between source and gauge.

    .. math:: x = (S - R) / R_\circ^{0.925}

    Parameters
    ----------
    static_psi : Amount
        Static [psi].
    residual_psi : Amount
        Residual at full flow [psi].
    outlet_residual_psi : Amount | None
        Residual corrected to the drain's outlet, above 0; the residual itself where its height is unknown [psi].

    Returns
    -------
    Amount
        Drain index, negative where the residual is above the static [psi^0.075].

    Raises
    ------
    OutOfRangeError
        If an argument is not a number, or the residual at the outlet is not above 0.

    References
    ----------
    DEVELOPERS.md, Method §4; the drain as an orifice of Hazen-Williams exponent 1.85.

    Examples
    --------
    >>> round(drain_index(80, 65), 5)
    0.31561
    """
    outlet = residual_psi if outlet_residual_psi is None else outlet_residual_psi
    drop = finite(static_psi=static_psi) - finite(residual_psi=residual_psi)
    return as_given(drop / above_zero(outlet_residual_psi=outlet) ** INDEX_EXPONENT)


def drain_flow(k: Amount, residual_psi: Amount) -> Amount:
    r"""Return the flow of an open main drain.

    .. math:: Q_d = K_d \sqrt{R}

    Parameters
    ----------
    k : Amount
        K of the drain, above 0 [gpm/psi^0.5].
    residual_psi : Amount
        Residual at full flow, corrected to the drain's outlet, not negative [psi].

    Returns
    -------
    Amount
        Flow [gpm].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    Notes
    -----
    An estimate unless K was measured: friction in the drain follows the power 1.85, not 2.

    References
    ----------
    DEVELOPERS.md, Method §4; the drain as an orifice.

    Examples
    --------
    >>> round(drain_flow(42, 60), 1)
    325.3
    """
    return as_given(above_zero(k=k) * np.sqrt(not_negative(residual_psi=residual_psi)))


def drain_k(diameter_in: Amount, length_ft: Amount, residual_psi: Amount, coefficient: Amount = 0.85) -> Amount:
    r"""Return the K of a drain estimated from its pipe: outlet and friction share the residual.

    .. math:: R = \left(\frac{Q}{29.84 c d^2}\right)^2 + L \frac{4.52 Q^{1.85}}{120^{1.85} d^{4.87}}

    Parameters
    ----------
    diameter_in : Amount
        Inside diameter of the drain pipe, above 0 [in].
    length_ft : Amount
        Equivalent length of the drain pipe, not negative [ft].
    residual_psi : Amount
        Residual at full flow, above 0 [psi].
    coefficient : Amount
        Coefficient of the outlet, above 0 [-].

    Returns
    -------
    Amount
        K, an estimate [gpm/psi^0.5].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    References
    ----------
    Bernoulli with the outlet formula of NFPA 291 and Hazen-Williams of NFPA 13; derived.

    Examples
    --------
    >>> round(drain_k(2.067, 20, 60) * 60**0.5)
    508
    """
    residual = above_zero(residual_psi=residual_psi)
    outlet_k = _OUTLET_CONSTANT * above_zero(coefficient=coefficient) * above_zero(diameter_in=diameter_in) ** 2
    pipe_resistance = not_negative(length_ft=length_ft) * friction_loss(1.0, 120, diameter_in)
    flow = np.vectorize(_flow_through_drain, otypes=[float])(outlet_k, pipe_resistance, residual)
    return as_given(flow / np.sqrt(residual))


def _flow_through_drain(outlet_k: float, pipe_resistance: float, residual_psi: float) -> float:
    def missing_psi(flow_gpm: float) -> float:
        return float((flow_gpm / outlet_k) ** 2 + pipe_resistance * flow_gpm**FLOW_EXPONENT - residual_psi)

    more_than_outlet_gpm = 1.001 * outlet_k * residual_psi**0.5  # so that rounding leaves the root inside
    return float(brentq(missing_psi, 0.0, more_than_outlet_gpm, xtol=1e-12, rtol=1e-14))


def trip_pressure(water_psi: Amount, ratio: Amount) -> Amount:
    """Return the air pressure at which a differential dry valve trips.

    Parameters
    ----------
    water_psi : Amount
        Highest water pressure below the valve, not negative [psi].
    ratio : Amount
        Water to air ratio of the valve, above 0 [-].

    Returns
    -------
    Amount
        Air pressure at trip [psi].

    Raises
    ------
    OutOfRangeError
        If an argument is outside its range or not a number.

    References
    ----------
    Common practice; the valve maker's data decide.

    Examples
    --------
    >>> round(trip_pressure(100, 5.5))
    18
    """
    return as_given(not_negative(water_psi=water_psi) / above_zero(ratio=ratio))
