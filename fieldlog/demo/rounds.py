"""The tests of one system or supply as entries, with the readings the simulator gives."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import date
from typing import Literal

import msgspec
import numpy as np

from fieldlog.demo import noted, simulator
from fieldlog.demo.pen import uid_of
from fieldlog.demo.plan import BASE_FT, GAUGE_FT, OUTLET_FT, YEARS, Quirk, SitePlan, SupplyPlan, SystemPlan
from fieldlog.demo.simulator import Flowing, SupplyState, drain_open, left_at, resistance_of
from fieldlog.hydraulics.formulas import elevation_pressure, pitot_flow
from fieldlog.procedures.any_test import AFTER_WATER_FLOWED, BEFORE_WATER_FLOWS
from fieldlog.procedures.fields import Confirmation, Duration, PressureReading, PumpState, Restoration, ValveFound
from fieldlog.procedures.flow_test import FlowPoint, FlowTest, Outlet
from fieldlog.procedures.forward_flow_test import ForwardFlowTest
from fieldlog.procedures.gauge_reading import GaugeReadings, OneReading
from fieldlog.procedures.inspectors_test import InspectorsTest
from fieldlog.procedures.main_drain_test import MainDrainTest
from fieldlog.units import Diameter, Length, Pressure, SiteUnits, pressure_in

CAUTIONS = tuple(caution.code for caution in BEFORE_WATER_FLOWS + AFTER_WATER_FLOWED)
_PUMP_PSI = 20.0  # a running pump adds to the main behind it
_TRAPPED_PSI = 15.0  # a check valve holds in the riser
_MISREAD_PSI = 10.0  # a wrong graduation
_NOT_BACK_PSI = 22.0
_AIR_PSI, _AIR_AT_TRIP_PSI = 38.0, 18.0
_OUTLET_IN, _COEFFICIENT = "2.5", "0.90"

Standing = Literal["routine", "acceptance", "after repair"]


@dataclass(frozen=True, slots=True)
class Round:
    """One day at one system: what is true then; `occasion` names the noise of the day."""

    site: SitePlan
    system: SystemPlan
    supply: SupplyPlan
    on: date
    occasion: str
    back: int | None  # visits before the last; None outside visits
    state: SupplyState

    def is_odd(self, what: Quirk) -> bool:
        """Return whether the main drain test of this visit went otherwise in that way."""
        return any(
            odd.what == what and round(odd.years_ago * self.site.visits_a_year) == self.back for odd in self.system.odd
        )

    def dice(self, what: str) -> np.random.Generator:
        """Return the noise of one test of the day."""
        return simulator.dice(self.occasion, self.system.key, what)

    @property
    def resistance(self) -> float:
        """Resistance between source and gauge, in psi/gpm^1.85."""
        return self.supply.truth.resistance + self.system.truth.feed_on(self.on)

    @property
    def pump_state(self) -> PumpState:
        """State of the fire pump, if there is one."""
        if self.supply.kind != "fire_pump":
            return "none"
        return "running" if self.is_odd("pump running") else "off"

    @property
    def tank_level(self) -> Length | None:
        """Level as read at the tank, if there is one."""
        level_m = self.state.tank_level_m
        return None if level_m is None else Length(value=noted.decimal_text(level_m, "0.1"), unit="m")


def round_of(site: SitePlan, system: SystemPlan, on: date, occasion: str, back: int | None = None) -> Round:
    """Return one day at one system."""
    supply = site.supply_of(system)
    return Round(site, system, supply, on, occasion, back, state_of(supply, on, occasion))


def state_of(supply: SupplyPlan, on: date, occasion: str) -> SupplyState:
    """Return a supply as it is on a day."""
    return supply.truth.on(on, simulator.dice(occasion, supply.key))


class _Reader:
    """Reads true pressures at the base of riser off the system's gauge, as a person would note them."""

    def __init__(self, day: Round, what: str) -> None:
        self.day = day
        self.plan = day.system.gauge_on(day.on)
        self.noise = day.dice(what)

    def __call__(self, base_psi: float) -> PressureReading:
        """Return the reading: to the division, in the gauge's unit."""
        at_gauge_psi = base_psi - float(elevation_pressure(GAUGE_FT - BASE_FT))
        shown_psi = self.plan.truth.shows(at_gauge_psi, self.day.on, self.noise)
        unit, division = self.plan.division.unit, self.plan.division.value
        value = noted.decimal_text(pressure_in(shown_psi, unit), division)
        return PressureReading(value=value, unit=unit, gauge=uid_of(self.day.system.gauge_key(self.plan)))


def main_drain_test(day: Round, standing: Standing = "routine") -> MainDrainTest:
    """Return the main drain test of a day."""
    flowing = _flowing(day)
    static_psi = day.state.static_psi + (_PUMP_PSI if day.is_odd("pump running") else 0.0)
    is_back = not day.is_odd("slow return")
    read = _Reader(day, "main drain")
    return MainDrainTest(
        performed_on=day.on,
        item="riser",
        drain="main drain",
        at="riser",
        standing=standing,
        static_before=read(static_psi + (_TRAPPED_PSI if day.is_odd("trapped") else 0.0)),
        residual=read(flowing.residual_psi - (_MISREAD_PSI if day.is_odd("misread") else 0.0)),
        return_seconds=Duration(seconds=_return_s(day), how="stop clock"),
        static_after=read(static_psi if is_back else static_psi - _NOT_BACK_PSI),
        steady=is_back,
        did_not_recover=not is_back,
        fully_open=not day.is_odd("not fully open"),
        took_full_flow=True,
        running_clear=True,
        drain_unchanged=True,
        pump_state=day.pump_state,
        confirmed="second look" if day.is_odd("confirmed") else "no",
        valves=tuple(_valves(day)),
        tank_level=day.tank_level,
        restored=restored(day.on),
        cautions=CAUTIONS,
        start="09:30",
        end="10:00",
    )


def with_typing_slip(test: MainDrainTest) -> MainDrainTest:
    """Return the test with the first digit of its residual one key off."""
    residual = test.residual
    if residual is None:
        raise ValueError("only a test with a residual can have it mistyped")
    digit = str(int(residual.value[0]) + 1)[-1]
    return msgspec.structs.replace(
        test, residual=msgspec.structs.replace(residual, value=f"{digit}{residual.value[1:]}")
    )


def _flowing(day: Round) -> Flowing:
    static_psi, resistance = day.state.static_psi, day.resistance
    if day.is_odd("pump running"):
        static_psi += _PUMP_PSI
    if day.is_odd("valve found partly shut"):
        resistance += resistance_of(11.0, 380)
    if day.is_odd("near zero"):
        resistance += resistance_of(75.0, 70)
    opened = 0.55 if day.is_odd("not fully open") else 1.0
    return drain_open(static_psi, resistance, day.system.truth.drain_k_on(day.on) * opened, OUTLET_FT - BASE_FT)


def _return_s(day: Round) -> int:
    if day.is_odd("slow return"):
        return 190
    return 75 if day.is_odd("near zero") else int(day.dice("return").integers(3, 9))


def _valves(day: Round) -> Iterator[ValveFound]:
    yield ValveFound(id="V1", found="open", left="open")
    yield ValveFound(id="V2", found="partly" if day.is_odd("valve found partly shut") else "open", left="open")


def restored(on: date) -> Restoration:
    """Return that everything was brought back to normal."""
    confirmed = Confirmation(who="Monitoring desk", at=f"{on.isoformat()}T10:05Z")
    return Restoration(valves=True, pressures=True, drain_shut=True, alarms=confirmed)


def gauge_readings(days: Sequence[Round]) -> GaugeReadings:
    """Return the routine readings of all gauges of a site on a day."""
    readings = tuple(
        OneReading(pressure=_Reader(day, "gauge")(day.state.static_psi), good_condition=True, cock_open=True)
        for day in days
    )
    return GaugeReadings(performed_on=days[0].on, readings=readings)


def inspectors_test(day: Round, standing: Standing = "routine") -> InspectorsTest:
    """Return the alarm test of a wet system, the trip test of a dry one."""
    years = YEARS if day.back is None else YEARS - day.back / day.site.visits_a_year
    seconds = day.system.alarm_s + day.system.lengthening_s * years + float(day.dice("alarm").normal(0.0, 1.0))
    taken = Duration(seconds=round(seconds), how="stop clock")
    water = _Reader(day, "water at alarm")(day.state.static_psi)
    if day.system.type == "wet":
        return InspectorsTest(
            performed_on=day.on, item="waterflow alarm", kind="alarm", to_device=taken, standing=standing,
            static=water, reset=True, restored=restored(day.on), cautions=CAUTIONS,
        )  # fmt: skip
    return InspectorsTest(
        performed_on=day.on, item="dry valve", kind="trip", standing=standing, delivery=taken, full_flow=True,
        trip=Duration(seconds=12, how="stop clock"), to_device=Duration(seconds=15, how="stop clock"),
        air_at_start=_on_paper(_AIR_PSI, day.site.units), water_at_start=water,
        air_at_trip=_on_paper(_AIR_AT_TRIP_PSI, day.site.units), restored=restored(day.on), cautions=CAUTIONS,
    )  # fmt: skip


def flow_test(supply: SupplyPlan, units: SiteUnits, on: date, occasion: str) -> FlowTest:
    """Return the flow test of a supply: at the street, or at the test header of a pump with the pump running."""
    is_pump = supply.kind == "fire_pump"
    static_psi = state_of(supply, on, occasion).static_psi + (_PUMP_PSI if is_pump else 0.0)
    points = [_flow_point(supply, static_psi, share, units) for share in (0.6, 1.0)]
    return FlowTest(
        performed_on=on,
        supply=uid_of(supply.key),
        at="test_header" if is_pump else "street",
        static=_on_paper(static_psi, units),
        points=tuple(points),
        elevation=noted.height(BASE_FT, units),
        pump_state="running" if is_pump else "none",
        permission="water company desk",
        cautions=CAUTIONS,
        restored=restored(on),
    )


def _flow_point(supply: SupplyPlan, static_psi: float, share: float, units: SiteUnits) -> FlowPoint:
    """Return a point with two outlets by pitot; where litres are read, by a flow meter."""
    gpm = supply.flow_test_gpm * share
    if units.flow == "L/min":
        flow = noted.flow(gpm, units)
        return FlowPoint(residual=_left(supply, static_psi, flow.gpm, units), flow=flow)
    pitot_psi = round((gpm / 2 / _outlet_gpm(1.0)) ** 2)
    outlets = tuple(
        Outlet(size=Diameter(value=_OUTLET_IN, unit="in"), coefficient=_COEFFICIENT,
               pitot=Pressure(value=str(pitot_psi), unit="psi"), name=f"hydrant {name}")
        for name in ("A", "B")
    )  # fmt: skip
    return FlowPoint(residual=_left(supply, static_psi, 2 * _outlet_gpm(pitot_psi), units), outlets=outlets)


def _outlet_gpm(pitot_psi: float) -> float:
    return float(pitot_flow(float(_COEFFICIENT), float(_OUTLET_IN), pitot_psi))


def _left(supply: SupplyPlan, static_psi: float, gpm: float, units: SiteUnits) -> PressureReading:
    return _on_paper(left_at(static_psi, supply.truth.resistance, gpm), units)


def _on_paper(psi: float, units: SiteUnits) -> PressureReading:
    written = noted.pressure(psi, units)
    return PressureReading(value=written.value, unit=written.unit)


def forward_flow_test(day: Round, flow_gpm: float) -> ForwardFlowTest:
    """Return the forward-flow test of the backflow preventer in the feed of a system."""
    units, static_psi = day.site.units, day.state.static_psi
    flow = noted.flow(flow_gpm, units)
    upstream_psi = left_at(static_psi, day.supply.truth.resistance, flow.gpm)
    at_riser_psi = left_at(static_psi, day.resistance, flow.gpm)
    return ForwardFlowTest(
        performed_on=day.on,
        item="backflow preventer",
        flow=flow,
        measured_by="flow meter",
        upstream=_on_paper(upstream_psi, units),
        downstream=_on_paper(at_riser_psi + 0.3 * (upstream_psi - at_riser_psi), units),
        at_riser=_on_paper(at_riser_psi, units),
        target=flow,
        restored=restored(day.on),
        cautions=CAUTIONS,
    )
