"""Formulas of sprinkler hydraulics in the published psi, gpm, ft and in forms.

All take floats or arrays and broadcast; a float gives a float. What is outside a formula's range (negative, or
not a number) is refused, never computed.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.optimize import brentq

from fieldlog.errors import OutOfRangeError

# A number, or an array of them; functions give back what they were given.
Amount = Any

FLOW_EXPONENT = 1.85
PITOT_CONSTANT = 29.83  # sqrt(2 g) and water at about 60 F, gpm with in. and psi
PSI_PER_FOOT = 0.433
INDEX_EXPONENT = 0.925  # half of 1.85: the drain's own flow goes with the root of the residual
_PUMPER_PITOTS_PSI = np.array([2.0, 3.0, 4.0, 5.0, 6.0, 7.0])
_PUMPER_FACTORS = np.array([0.97, 0.92, 0.89, 0.86, 0.84, 0.83])


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
    Other published forms differ by 0.2 to 0.9 percent; one report uses one form.

    References
    ----------
    NFPA 13-2016, 23.4.2.1 (numbering differs by edition); constants as reproduced by a code
    resource library, 2010.

    Examples
    --------
    >>> round(friction_loss(100, 120, 2.067), 6)
    0.09396
    """
    flow, c_factor, diameter = _amounts(flow_gpm=flow_gpm), _above_zero(c=c), _above_zero(diameter_in=diameter_in)
    loss = law.coefficient * (flow / c_factor) ** law.flow_exponent / diameter**law.diameter_exponent
    return _as_given(loss)


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
    return _as_given(_above_zero(k=k) * np.sqrt(_amounts(pressure_psi=pressure_psi)))


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
    return _as_given((_amounts(flow_gpm=flow_gpm) / _above_zero(k=k)) ** 2)


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
    diameter = _above_zero(diameter_in=diameter_in)
    share = _above_zero(coefficient=coefficient) * _above_zero(outlet_factor=outlet_factor)
    return _as_given(PITOT_CONSTANT * share * diameter**2 * np.sqrt(_amounts(pitot_psi=pitot_psi)))


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
    NFPA 291, chapter 4: 0.83; the others from memory.

    Examples
    --------
    >>> pumper_outlet_factor(10)
    0.83
    """
    return _as_given(np.interp(_amounts(pitot_psi=pitot_psi), _PUMPER_PITOTS_PSI, _PUMPER_FACTORS))


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
    return _as_given(PSI_PER_FOOT * _numbers(height_ft=height_ft))


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
    return _as_given(0.4085 * _amounts(flow_gpm=flow_gpm) / _above_zero(diameter_in=diameter_in) ** 2)


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
    return _as_given(0.001123 * _amounts(flow_gpm=flow_gpm) ** 2 / _above_zero(diameter_in=diameter_in) ** 4)


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
    return _as_given(_amounts(density_gpm_per_ft2=density_gpm_per_ft2) * _amounts(area_ft2=area_ft2))


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
    return _as_given((_above_zero(c=c) / 120) ** FLOW_EXPONENT)


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
    return _as_given((_above_zero(actual_in=actual_in) / _above_zero(schedule_40_in=schedule_40_in)) ** 4.87)


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
    drop = _numbers(static_psi=static_psi) - _numbers(residual_psi=residual_psi)
    return _as_given(drop / _above_zero(outlet_residual_psi=outlet) ** INDEX_EXPONENT)


def drain_k(diameter_in: float, length_ft: float, residual_psi: float, coefficient: float = 0.85) -> float:
    r"""Return the K of a drain estimated from its pipe: outlet and friction share the residual.

    .. math:: R = \left(\frac{Q}{29.84 c d^2}\right)^2 + L \frac{4.52 Q^{1.85}}{120^{1.85} d^{4.87}}

    Parameters
    ----------
    diameter_in : float
        Inside diameter of the drain pipe, above 0 [in].
    length_ft : float
        Equivalent length of the drain pipe, not negative [ft].
    residual_psi : float
        Residual at full flow, above 0 [psi].
    coefficient : float
        Coefficient of the outlet [-].

    Returns
    -------
    float
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
    _amounts(length_ft=length_ft)
    outlet_k = 29.84 * float(_above_zero(coefficient=coefficient)) * float(_above_zero(diameter_in=diameter_in)) ** 2
    most_gpm = outlet_k * float(_above_zero(residual_psi=residual_psi)) ** 0.5

    def missing_psi(flow_gpm: float) -> float:
        friction_psi = length_ft * float(friction_loss(flow_gpm, 120, diameter_in))
        return float((flow_gpm / outlet_k) ** 2 + friction_psi - residual_psi)

    flow_gpm = most_gpm if length_ft == 0 else brentq(missing_psi, 0.0, most_gpm, xtol=1e-9)
    return float(flow_gpm / residual_psi**0.5)


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
    return _as_given(_amounts(water_psi=water_psi) / _above_zero(ratio=ratio))


def _numbers(**named: ArrayLike) -> NDArray[np.float64]:
    return _checked(named, np.isfinite, "give a finite number")


def _amounts(**named: ArrayLike) -> NDArray[np.float64]:
    return _checked(named, lambda value: np.isfinite(value) & (value >= 0), "give a number that is not negative")


def _above_zero(**named: ArrayLike) -> NDArray[np.float64]:
    return _checked(named, lambda value: np.isfinite(value) & (value > 0), "give a number above 0")


def _checked(named: dict[str, ArrayLike], holds: Any, mend: str) -> NDArray[np.float64]:  # noqa: ANN401
    ((name, given),) = named.items()
    value = np.asarray(given, dtype=np.float64)
    if not bool(np.all(holds(value))):
        raise OutOfRangeError(f"{name}: {given!r} is outside the range of the formula; {mend}", name=name)
    return value


def _as_given(value: Any) -> Amount:  # noqa: ANN401
    """Return a float for floats, the array for arrays."""
    return float(value) if np.ndim(value) == 0 else value
