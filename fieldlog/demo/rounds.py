"""The tests of one system or supply as entries, with the readings the simulator gives."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date
from typing import Literal

import numpy as np

from fieldlog.demo.pen import uid_of
from fieldlog.demo.plan import GaugePlan, SitePlan, SupplyPlan, SystemPlan
from fieldlog.demo.simulator import Flowing, decimal_text, drain_open, resistance_of
from fieldlog.hydraulics.formulas import FLOW_EXPONENT
from fieldlog.procedures.any_test import AFTER_WATER_FLOWED, BEFORE_WATER_FLOWS
from fieldlog.procedures.fields import Confirmation, Duration, PressureReading, PumpState, Restoration, ValveFound
from fieldlog.procedures.flow_test import FlowPoint, FlowTest, Outlet
from fieldlog.procedures.gauge_reading import GaugeReadings, OneReading
from fieldlog.procedures.inspectors_test import InspectorsTest
from fieldlog.procedures.main_drain_test import MainDrainTest
from fieldlog.units import Diameter, Length, Pressure, pressure_in

CAUTIONS = tuple(caution.code for caution in BEFORE_WATER_FLOWS + AFTER_WATER_FLOWED)
_PUMP_PSI = 20.0
_OUTLET_FACTOR = 29.83 * 0.90 * 2.5**2


@dataclass(frozen=True, slots=True)
class Round:
    """One day at one system: what is true then, and the dice of the day."""

    site: SitePlan
    system: SystemPlan
    supply: SupplyPlan
    on: date
    is_first: bool
    is_last: bool
    noise: np.random.Generator

    @property
    def quirk(self) -> str:
        """What is odd about the last test; nothing about the others."""
        return self.system.last_quirk if self.is_last else ""


def main_drain_test(day: Round, static_psi: float) -> MainDrainTest:
    """Return the main drain test of a day."""
    flowing = _flowing(day, static_psi)
    raised_psi = _PUMP_PSI if day.quirk == "pump running" else 0.0
    back_psi = static_psi - 22.0 if day.quirk == "slow return" else static_psi + raised_psi
    read = _Reader(day)
    is_slow = day.quirk == "slow return"
    return MainDrainTest(
        performed_on=day.on,
        item="riser",
        drain="main drain",
        at="riser",
        standing="acceptance" if day.is_first else "routine",
        static_before=read(static_psi + raised_psi),
        residual=read(flowing.residual_psi + raised_psi),
        return_seconds=Duration(seconds=190 if is_slow else int(day.noise.integers(3, 9)), how="stop clock"),
        static_after=read(back_psi),
        steady=not is_slow,
        did_not_recover=is_slow,
        fully_open=day.quirk != "not fully open",
        took_full_flow=True,
        running_clear=True,
        drain_unchanged=True,
        pump_state=_pump_state(day),
        confirmed="second look" if day.quirk == "confirmed" else "no",
        valves=tuple(_valves(day)),
        tank_level=Length(value="3", unit="m") if day.supply.kind == "gravity_tank" else None,
        restored=_restored(day.on),
        cautions=CAUTIONS,
        start="09:30",
        end="10:00",
    )


def _flowing(day: Round, static_psi: float) -> Flowing:
    truth = day.system.truth
    resistance = day.supply.truth.resistance + truth.resistance_on(day.on)
    if day.quirk == "valve found partly shut":
        resistance += resistance_of(11.0, 380)
    opened = 0.55 if day.quirk == "not fully open" else 1.0
    return drain_open(static_psi, resistance, truth.drain_k_on(day.on) * opened)


def _pump_state(day: Round) -> PumpState:
    if day.supply.kind != "fire_pump":
        return "none"
    return "running" if day.quirk == "pump running" else "off"


def _valves(day: Round) -> Iterator[ValveFound]:
    partly = day.quirk == "valve found partly shut"
    yield ValveFound(id="V1", found="open", left="open")
    yield ValveFound(id="V2", found="partly" if partly else "open", left="open")


def _restored(on: date) -> Restoration:
    confirmed = Confirmation(who="Monitoring desk", at=f"{on.isoformat()}T10:05Z")
    return Restoration(valves=True, pressures=True, drain_shut=True, alarms=confirmed)


class _Reader:
    """Reads a true pressure off the system's gauge, as a person would note it."""

    def __init__(self, day: Round) -> None:
        self.day = day

    def __call__(self, pressure_psi: float) -> PressureReading:
        plan = self.day.system.gauge
        shown_psi = plan.truth.shows(pressure_psi, self.day.on, self.day.noise)
        gauge = uid_of(f"{self.day.system.key}/gauge")
        return PressureReading(value=_noted(plan, shown_psi), unit=plan.unit, gauge=gauge)  # type: ignore[arg-type]


def _noted(plan: GaugePlan, shown_psi: float) -> str:
    return decimal_text(pressure_in(shown_psi, plan.unit), float(plan.division))


def gauge_readings(days: list[Round], statics_psi: dict[str, float]) -> GaugeReadings:
    """Return the routine readings of all gauges of a site on a day."""
    readings = tuple(
        OneReading(pressure=_Reader(day)(statics_psi[day.supply.key]), good_condition=True, cock_open=True)
        for day in days
    )
    return GaugeReadings(performed_on=days[0].on, readings=readings, pump_state=_pump_state(days[0]))


def inspectors_test(day: Round, static_psi: float, years: float) -> InspectorsTest:
    """Return the alarm test of a wet system, the trip test of a dry one."""
    seconds = day.system.alarm_seconds + day.system.lengthening * years
    noted = Duration(seconds=round(seconds + float(day.noise.normal(0.0, 1.0))), how="stop clock")
    standing: Literal["acceptance", "routine"] = "acceptance" if day.is_first else "routine"
    if day.system.type not in {"dry", "preaction"}:
        return InspectorsTest(
            performed_on=day.on, item="waterflow alarm", kind="alarm", to_device=noted, standing=standing,
            static=_Reader(day)(static_psi), reset=True, restored=_restored(day.on), cautions=CAUTIONS,
        )  # fmt: skip
    air = Pressure(value="38", unit="psi")
    return InspectorsTest(
        performed_on=day.on, item="dry valve", kind="trip", standing=standing, delivery=noted, full_flow=True,
        trip=Duration(seconds=12, how="stop clock"), to_device=Duration(seconds=15, how="stop clock"),
        air_at_start=PressureReading(value=air.value, unit="psi"), water_at_start=_Reader(day)(static_psi),
        air_at_trip=PressureReading(value="18", unit="psi"), restored=_restored(day.on), cautions=CAUTIONS,
    )  # fmt: skip


def flow_test(supply: SupplyPlan, on: date, noise: np.random.Generator) -> FlowTest:
    """Return the flow test of a supply: at the street, or at the test header of a pump with the pump running."""
    is_pump = supply.kind == "fire_pump"
    static_psi = supply.truth.static_on(on, noise) + (_PUMP_PSI if is_pump else 0.0)
    points = []
    for share in (0.6, 1.0):
        flow_gpm = supply.flow_test_gpm * share
        pitot_psi = round((flow_gpm / 2 / _OUTLET_FACTOR) ** 2)
        true_gpm = 2 * _OUTLET_FACTOR * pitot_psi**0.5
        residual_psi = static_psi - supply.truth.resistance * true_gpm**FLOW_EXPONENT
        outlets = tuple(
            Outlet(size=Diameter(value="2.5", unit="in"), coefficient="0.90",
                   pitot=Pressure(value=str(pitot_psi), unit="psi"), name=f"hydrant {name}")
            for name in ("A", "B")
        )  # fmt: skip
        points.append(FlowPoint(residual=PressureReading(value=str(round(residual_psi)), unit="psi"), outlets=outlets))
    return FlowTest(
        performed_on=on,
        supply=uid_of(supply.key),
        at="test_header" if is_pump else "street",
        static=PressureReading(value=str(round(static_psi)), unit="psi"),
        points=tuple(points),
        elevation=Length(value="1", unit="ft"),
        pump_state="running" if is_pump else "none",
        permission="water company desk",
        cautions=CAUTIONS,
        restored=_restored(on),
    )
