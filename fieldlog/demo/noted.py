"""Quantities as people of a site note them: rounded to a division, as decimal text in the site's units."""

from __future__ import annotations

from decimal import Decimal

from fieldlog.units import Flow, Length, Pressure, SiteUnits, flow_in, length_in, pressure_in

# How finely a pressure on paper, a flow and a height are noted.
_PRESSURE_STEPS = {"psi": "1", "bar": "0.05", "kPa": "5"}
_FLOW_STEPS = {"gpm": "5", "L/min": "10"}
_LENGTH_STEPS = {"ft": "0.5", "m": "0.1"}


def decimal_text(value: float, division: str) -> str:
    """Return the multiple of a division next to a value, with as many decimals as the division has."""
    step = Decimal(division)
    return format(round(value / float(step)) * step, "f")


def pressure(psi: float, units: SiteUnits) -> Pressure:
    """Return a pressure as it is written down."""
    unit = units.pressure
    return Pressure(value=decimal_text(pressure_in(psi, unit), _PRESSURE_STEPS[unit]), unit=unit)


def flow(gpm: float, units: SiteUnits) -> Flow:
    """Return a flow as it is written down."""
    unit = units.flow
    return Flow(value=decimal_text(flow_in(gpm, unit), _FLOW_STEPS[unit]), unit=unit)


def height(ft: float, units: SiteUnits) -> Length:
    """Return a length or height as it is written down."""
    unit = units.length
    return Length(value=decimal_text(length_in(ft, unit), _LENGTH_STEPS[unit]), unit=unit)
