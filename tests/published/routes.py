"""Ways from a published case to the functions of fieldlog, where the case is not one plain call."""

from __future__ import annotations

from fieldlog.hydraulics.formulas import (
    PITOT_CONSTANT,
    FrictionLaw,
    density_flow,
    drain_flow,
    drain_k,
    elevation_pressure,
    friction_loss,
    pitot_flow,
    pumper_outlet_factor,
)
from fieldlog.hydraulics.supply import SupplyCurve, drop_fraction
from fieldlog.units import Discharge, flow_in

SMOOTH_BORE_CONSTANT = 29.7  # common practice: tables of smooth-bore tips
METRIC_FORM = FrictionLaw(coefficient=6.05e5)  # bar/m from L/min and mm, from memory
MM_PER_INCH = 25.4


def smooth_bore_flow(tip_in: float, tip_psi: float) -> float:
    return pitot_flow(SMOOTH_BORE_CONSTANT / PITOT_CONSTANT, tip_in, tip_psi)


def pumper_outlet_flow(coefficient: float, diameter_in: float, pitot_psi: float) -> float:
    return pitot_flow(coefficient, diameter_in, pitot_psi, pumper_outlet_factor(pitot_psi))


def flow_left_at(static_psi: float, residual_psi: float, flow_gpm: float, pressure_psi: float) -> float:
    return SupplyCurve.from_flow_test(static_psi, residual_psi, flow_gpm).flow_at(pressure_psi)


def pressure_left_at(static_psi: float, residual_psi: float, flow_gpm: float, at_gpm: float) -> float:
    return SupplyCurve.from_flow_test(static_psi, residual_psi, flow_gpm).pressure_at(at_gpm)


def drop_percent(static_psi: float, residual_psi: float) -> float:
    return 100 * drop_fraction(static_psi, residual_psi)


def number_of_sprinklers(density_gpm_per_ft2: float, area_ft2: float, each_ft2: float) -> float:
    return density_flow(density_gpm_per_ft2, area_ft2) / density_flow(density_gpm_per_ft2, each_ft2)


def friction_per_100_ft(flow_gpm: float, c: float, diameter_in: float) -> float:
    return 100 * friction_loss(flow_gpm, c, diameter_in)


def column_of_water(pressure_psi: float) -> float:
    return pressure_psi / elevation_pressure(1.0)


def litres_per_second(gpm: float) -> float:
    return flow_in(gpm, "L/min") / 60


def metric_k(k: float) -> float:
    return k / Discharge(value="1", unit="L/min/bar^0.5").k


def metric_friction_loss(flow_gpm: float, c: float, diameter_in: float) -> float:
    return friction_loss(flow_in(flow_gpm, "L/min"), c, MM_PER_INCH * diameter_in, law=METRIC_FORM)


def estimated_drain_flow(diameter_in: float, length_ft: float, residual_psi: float) -> float:
    return drain_flow(drain_k(diameter_in, length_ft, residual_psi), residual_psi)
