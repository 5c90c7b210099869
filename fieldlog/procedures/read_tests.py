"""Entries of tests, read into records in psi, gpm, ft and seconds."""

from __future__ import annotations

from collections.abc import Iterator

from fieldlog.hydraulics import formulas
from fieldlog.procedures.fields import Duration, PressureReading
from fieldlog.procedures.flow_test import FlowPoint
from fieldlog.procedures.flow_test import FlowTest as FlowBody
from fieldlog.procedures.forward_flow_test import ForwardFlowTest as ForwardBody
from fieldlog.procedures.gauge_reading import GaugeReadings
from fieldlog.procedures.inspectors_test import InspectorsTest
from fieldlog.procedures.main_drain_test import MainDrainTest
from fieldlog.procedures.valve_status_test import ValveStatusTest as StatusBody
from fieldlog.records.entries import Entry
from fieldlog.records.history import (
    AlarmTest,
    DrainTest,
    FlowTest,
    ForwardFlowTest,
    GaugeReading,
    Reading,
    ValveFound,
    ValveStatusTest,
)
from fieldlog.units import Pressure


def reading(read: PressureReading | None) -> Reading | None:
    """Return a pressure reading in psi, with its exact value."""
    if read is None:
        return None
    return Reading(
        psi=read.psi,
        exact_psi=read.exact(),
        value=read.value,
        unit=read.unit,
        gauge=read.gauge,
        low_psi=_psi(read.low, read.unit),
        high_psi=_psi(read.high, read.unit),
        pump_state=read.pump_state,
    )


def drain_test(entry: Entry, body: MainDrainTest) -> DrainTest:
    """Return a main drain test."""
    return DrainTest(
        entry=entry.number,
        subject=entry.subject,
        performed_on=body.performed_on,
        drain=body.drain,
        static_before=reading(body.static_before),
        residual=reading(body.residual),
        static_after=reading(body.static_after),
        steady=body.steady,
        return_s=_seconds(body.return_seconds),
        did_not_recover=body.did_not_recover,
        standing=body.standing,
        source=body.source,
        at=body.at,
        fully_open=body.fully_open,
        took_full_flow=body.took_full_flow,
        running_clear=body.running_clear,
        drain_unchanged=body.drain_unchanged,
        system_side_before=reading(body.system_side_before),
        confirmed=body.confirmed,
        drain_pitot_psi=None if body.drain_pitot is None else body.drain_pitot.psi,
        pump_state=body.pump_state,
        tank_level_ft=None if body.tank_level is None else body.tank_level.ft,
        valves=tuple(
            ValveFound(valve.id, valve.found, valve.left, valve.shut_at, valve.opened_at) for valve in body.valves
        ),
        not_done=body.not_done_reason if body.done != "done" else None,
        corrected=entry.based_on is not None,
        via=entry.via,
    )


def gauge_readings(entry: Entry, body: GaugeReadings) -> Iterator[GaugeReading]:
    """Return the readings of one round, a gauge each."""
    for one in body.readings:
        read = reading(one.pressure)
        if read is not None:
            yield GaugeReading(entry.number, body.performed_on, read, one.pressure.pump_state or body.pump_state)


def alarm_test(entry: Entry, body: InspectorsTest) -> AlarmTest:
    """Return an inspector's test."""
    return AlarmTest(
        entry=entry.number,
        performed_on=body.performed_on,
        item=body.item,
        is_dry=body.kind == "trip",
        alarm_s=_seconds(body.to_device),
        bell_s=_seconds(body.to_bell),
        panel_s=_seconds(body.to_panel),
        monitoring_s=_seconds(body.to_monitoring),
        trip_s=_seconds(body.trip),
        delivery_s=_seconds(body.delivery),
        did_not_come=body.did_not_sound,
        is_full_flow=body.full_flow,
        standing=body.standing,
        air_start_psi=_reading_psi(body.air_at_start),
        air_trip_psi=_reading_psi(body.air_at_trip),
        water_start_psi=_reading_psi(body.water_at_start),
        static_psi=_reading_psi(body.static),
        flowing_psi=_reading_psi(body.flowing),
        orifice_k=None if body.orifice_k is None else body.orifice_k.k,
    )


def flow_test(entry: Entry, body: FlowBody) -> FlowTest:
    """Return a flow test that has a static and points; pitoted outlets are summed."""
    return FlowTest(
        entry=entry.number,
        performed_on=body.performed_on,
        at=body.at,
        static_psi=_reading_psi(body.static) or 0.0,
        points=tuple(sorted((_flow_gpm(point), point.residual.psi) for point in body.points)),
        elevation_ft=None if body.elevation is None else body.elevation.ft,
        pump_state=body.pump_state,
        pitots=max((len(point.outlets) for point in body.points), default=1) or 1,
        gauge=None if body.static is None else body.static.gauge,
    )


def forward_flow_test(entry: Entry, body: ForwardBody) -> ForwardFlowTest | None:
    """Return a forward-flow test; None where no flow was measured."""
    if body.flow is None:
        return None
    return ForwardFlowTest(
        entry=entry.number,
        performed_on=body.performed_on,
        item=body.item,
        flow_gpm=body.flow.gpm,
        upstream_psi=_reading_psi(body.upstream),
        downstream_psi=_reading_psi(body.downstream),
        riser_psi=_reading_psi(body.at_riser),
        target_gpm=None if body.target is None else body.target.gpm,
    )


def valve_status_test(entry: Entry, body: StatusBody) -> ValveStatusTest:
    """Return a valve status test."""
    return ValveStatusTest(
        entry=entry.number,
        performed_on=body.performed_on,
        valve=body.valve or "",
        shut_at=body.closed_at,
        opened_at=body.reopened_at,
        flow_seen=body.flow_seen,
    )


def _flow_gpm(point: FlowPoint) -> float:
    if point.flow is not None:
        return point.flow.gpm
    return sum(
        float(
            formulas.pitot_flow(
                float(outlet.coefficient), outlet.size.inches, outlet.pitot.psi, float(outlet.factor or 1)
            )
        )
        for outlet in point.outlets
    )


def _seconds(duration: Duration | None) -> float | None:
    return None if duration is None else float(duration.seconds)


def _reading_psi(read: PressureReading | None) -> float | None:
    return None if read is None else read.psi


def _psi(value: str | None, unit: str) -> float | None:
    return None if value is None else float(Pressure(value=value, unit=unit).exact())  # type: ignore[arg-type]
