"""Pipe with fittings: equivalent lengths; tables of diameters, C-factors and nominal K, each with its source."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from fieldlog.hydraulics.formulas import c_multiplier, diameter_multiplier, friction_loss
from fieldlog.hydraulics.ranges import Amount, above_zero, not_negative
from fieldlog.hydraulics.tables import cell, table


@dataclass(frozen=True, slots=True)
class Pipe:
    """A run of pipe of one inside diameter with its fittings.

    Parameters
    ----------
    length_ft : float
        Length, not negative [ft].
    diameter_in : float
        Inside diameter, above 0 [in].
    c : float
        Hazen-Williams C-factor, above 0 [-].
    fittings : tuple of (str, int)
        Names as in the table of equivalent lengths, and how many [-].
    nominal_in : str, optional
        Nominal size that the fittings have; without it the nearest Schedule 40 size [in].
    """

    length_ft: float
    diameter_in: float
    c: float
    fittings: tuple[tuple[str, int], ...] = ()
    nominal_in: str | None = None

    def __post_init__(self) -> None:
        """Refuse a length, or a count of fittings, that can't be."""
        not_negative(length_ft=self.length_ft)
        not_negative(fittings=[count for _, count in self.fittings])

    def equivalent_length(self) -> float:
        """Return the length with that of the fittings, for this C and inside diameter, in ft."""
        if not self.fittings:
            return self.length_ft
        nominal = self.nominal_in or nearest_nominal(self.diameter_in)
        factor = c_multiplier(self.c) * diameter_multiplier(self.diameter_in, inside_diameter(nominal, "40"))
        return self.length_ft + float(factor) * sum(
            count * fitting_length(name, nominal) for name, count in self.fittings
        )

    def resistance(self) -> float:
        """Return the loss at 1 gpm, in psi: loss is this times flow to the 1.85."""
        return float(friction_loss(1.0, self.c, self.diameter_in)) * self.equivalent_length()

    def loss(self, flow_gpm: Amount) -> Amount:
        """Return the loss at a flow, in psi."""
        return friction_loss(flow_gpm, self.c, self.diameter_in) * self.equivalent_length()


def inside_diameter(nominal_in: str, schedule: str) -> float:
    """Return the inside diameter of steel pipe.

    Parameters
    ----------
    nominal_in : str
        Nominal size as written in the trade, such as "1-1/4" [in].
    schedule : str
        "40", "10", "10S" or "STD" [-].

    Returns
    -------
    float
        Inside diameter [in].

    Raises
    ------
    OutOfRangeError
        If the table has no such pipe.

    References
    ----------
    data/pipe.toml names the source of each column.

    Examples
    --------
    >>> inside_diameter("2", "40")
    2.067
    """
    column = cell(table("pipe")["inside_diameter"], schedule, "inside diameter by schedule")
    return float(cell(column["inches"], nominal_in, f"schedule {schedule}"))


def nearest_nominal(diameter_in: float) -> str:
    """Return the nominal size whose Schedule 40 inside diameter is nearest.

    Parameters
    ----------
    diameter_in : float
        Inside diameter, above 0 [in].

    Returns
    -------
    str
        Nominal size [in].

    Raises
    ------
    OutOfRangeError
        If the diameter is not above 0.

    References
    ----------
    data/pipe.toml.

    Examples
    --------
    >>> nearest_nominal(4.26)
    '4'
    """
    above_zero(diameter_in=diameter_in)
    sizes: Mapping[str, float] = table("pipe")["inside_diameter"]["40"]["inches"]
    return min(sizes, key=lambda nominal: abs(sizes[nominal] - diameter_in))


def fitting_length(name: str, nominal_in: str) -> float:
    """Return the equivalent length of a fitting, Schedule 40 steel, C = 120.

    Parameters
    ----------
    name : str
        Name as in data/fittings.toml [-].
    nominal_in : str
        Nominal size [in].

    Returns
    -------
    float
        Equivalent length [ft].

    Raises
    ------
    OutOfRangeError
        If the table has no such fitting of that size; use the maker's listed loss.

    References
    ----------
    NFPA 13-2016, Table 23.4.3.1.1.

    Examples
    --------
    >>> fitting_length("90 standard elbow", "4")
    10.0
    """
    lengths = cell(table("fittings")["equivalent_length_ft"], name, "equivalent length")
    return float(cell(lengths, nominal_in, name))


def c_factor(pipe: str) -> float:
    """Return the C-factor by convention; it is no measurement of an old pipe.

    Parameters
    ----------
    pipe : str
        Kind of pipe as in data/pipe.toml [-].

    Returns
    -------
    float
        Hazen-Williams C-factor [-].

    Raises
    ------
    OutOfRangeError
        If the table has no such pipe.

    References
    ----------
    data/pipe.toml names the source of each value.

    Examples
    --------
    >>> c_factor("black steel, wet or deluge")
    120.0
    """
    return float(cell(table("pipe")["c_factor"], pipe, "C-factor")["c"])


def nominal_k(k: float) -> float | None:
    """Return the nominal K-factor in whose allowed range a K lies.

    Parameters
    ----------
    k : float
        K-factor [gpm/psi^0.5].

    Returns
    -------
    float | None
        Nominal K-factor; None where it lies in no range [gpm/psi^0.5].

    References
    ----------
    NFPA 13 (nominal K-factors and ranges); data/nominal_k.toml.

    Examples
    --------
    >>> nominal_k(5.62)
    5.6
    """
    rows = table("nominal_k")["k"]
    return next((float(row["nominal"]) for row in rows if row["least"] <= k <= row["most"]), None)


def main_drain_size(riser_in: float) -> str:
    """Return the nominal size of main drain connection for a riser.

    Parameters
    ----------
    riser_in : float
        Nominal size of riser or main, above 0 [in].

    Returns
    -------
    str
        Nominal size of the drain connection [in].

    Raises
    ------
    OutOfRangeError
        If the size is not above 0.

    References
    ----------
    NFPA 13, table of drain sizes, from memory.

    Examples
    --------
    >>> main_drain_size(3)
    '1-1/4'
    """
    above_zero(riser_in=riser_in)
    rows = table("pipe")["main_drain"]
    return str(next(row["drain"] for row in rows if riser_in <= row.get("riser_up_to", float("inf"))))
