"""Charts of a system for its report: the supply against the demand, and its readings over the years."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import date

import numpy as np

from fieldlog.assessment.due import profiles_in_force
from fieldlog.assessment.measured_supply import Measured, demand_of, measured_supply
from fieldlog.charts.history import ExpectedRange, HistoryChart, Reading, ReferenceLine, Series
from fieldlog.charts.supply import Curve, FlowPoint, SupplyChart
from fieldlog.records.history import DrainTest, SupplyHistory, System
from fieldlog.records.statement import SystemStatement
from fieldlog.reports.content import Picture
from fieldlog.units import SiteUnits, flow_in, pressure_in
from fieldlog.wording.notices import ESTIMATE
from fieldlog.wording.quantities import Reader, day

_POINTS = 41


def pictures(history: SupplyHistory, system: System, said: SystemStatement, units: SiteUnits) -> list[Picture]:
    """Return the pictures that the record of a system gives."""
    found = [_supply_picture(history, system, said.as_of, units), _history_picture(system, said, units)]
    return [picture for picture in found if picture is not None]


def _supply_picture(history: SupplyHistory, system: System, as_of: date, units: SiteUnits) -> Picture | None:
    profiles = profiles_in_force(history.profiles, as_of)
    measured = measured_supply(history, system, profiles[0] if profiles else None, as_of)
    demand = demand_of(system)
    if measured.curve is None or demand is None:
        return None
    reader = Reader(units)
    wanted_gpm = demand.flow_gpm + demand.outside_gpm
    required = reader.pressure(demand.required_psi)
    label = f"demand {reader.flow(demand.flow_gpm)}, {required}"
    chart = SupplyChart(
        title=f"Supply and demand, {system.name}",
        desc=f"Pressure left at the base of riser over flow; {label}.",
        curves=(_curve(measured, demand.outside_gpm, wanted_gpm, units),),
        flow_unit=units.flow,
        pressure_unit=units.pressure,
        demand=FlowPoint(flow_in(demand.flow_gpm, units.flow), pressure_in(demand.required_psi, units.pressure), label),
    )
    test = measured.flow_test
    basis = (
        "the design record; no flow test measured it" if test is None else f"the flow test of {day(test.performed_on)}"
    )
    hose = f" with {reader.flow(demand.outside_gpm)} of outside hose flowing" if demand.outside_gpm > 0 else ""
    caption = f"By {basis}, brought to the base of riser{hose}. Dashed beyond the flow that was measured. {ESTIMATE}"
    return Picture("Supply against the recorded demand", chart, caption)


def _curve(measured: Measured, hose_gpm: float, wanted_gpm: float, units: SiteUnits) -> Curve:
    test = measured.flow_test
    tested_gpm = max((flow for flow, _ in test.points), default=0.0) if test is not None else 0.0
    last_gpm = max(tested_gpm, wanted_gpm) * 1.1
    flows_gpm = np.linspace(0.0, last_gpm, _POINTS)
    pressures = np.asarray(measured.curve.available(flows_gpm, hose_gpm) if measured.curve is not None else [])
    points = tuple(
        (flow_in(float(flow), units.flow), pressure_in(float(psi), units.pressure))
        for flow, psi in zip(flows_gpm, pressures, strict=True)
        if np.isfinite(psi) and psi >= 0
    )
    measured_to = flow_in(max(tested_gpm - hose_gpm, 0.0), units.flow) if test is not None else 0.0
    name = "design record" if test is None else f"flow test {test.performed_on.year}"
    return Curve(label=name, points=points, measured_to_flow=measured_to, is_newest=True)


def _history_picture(system: System, said: SystemStatement, units: SiteUnits) -> Picture | None:
    tests = [test for test in system.drain_tests if test.performed_on <= said.as_of]
    static = tuple(_readings(tests, "static_before", units))
    residual = tuple(_readings(tests, "residual", units))
    if len(residual) < 2:
        return None
    chart = HistoryChart(
        title=f"Static and residual, {system.name}",
        desc="Static before and residual at full flow of every main drain test on file, at their dates.",
        unit=units.pressure,
        series=(
            Series("residual", residual, is_main=True),
            *((Series("static", static),) if static else ()),
        ),
        lines=tuple(_lines(tests, said, units)),
        expected=tuple(_expected(tests, said, units)),
    )
    caption = "Every main drain test on file; hollow marks can't be compared (drain not fully open, or not full flow)."
    return Picture("Main drain tests over the years", chart, caption)


def _readings(tests: list[DrainTest], name: str, units: SiteUnits) -> Iterator[Reading]:
    for test in tests:
        reading = getattr(test, name)
        if reading is not None:
            is_sound = test.fully_open is not False and test.took_full_flow is not False
            yield Reading(test.performed_on, pressure_in(reading.psi, units.pressure), is_comparable=is_sound)


def _lines(tests: list[DrainTest], said: SystemStatement, units: SiteUnits) -> Iterator[ReferenceLine]:
    for row in said.ten_percent:
        if row.against not in {"acceptance", "new reference"}:
            continue
        test = next((test for test in tests if test.entry == row.entry), None)
        if test is None or test.residual is None:
            continue
        value = pressure_in(test.residual.psi, units.pressure)
        yield ReferenceLine(row.against, value, test.performed_on)
        yield ReferenceLine("ten percent below", 0.9 * value, test.performed_on, is_dashed=True)


def _expected(tests: list[DrainTest], said: SystemStatement, units: SiteUnits) -> Iterator[ExpectedRange]:
    if not said.expected or not tests:
        return
    band, newest = said.expected[0], tests[-1].performed_on
    low, high = (pressure_in(psi, units.pressure) for psi in (band.residual_low_psi, band.residual_high_psi))
    yield ExpectedRange(low, high, newest, date(newest.year + 1, newest.month, 28), "expected residual")
