"""Inspector's test: the waterflow alarm of a wet system, the trip of a dry one; never evidence of capacity."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.any_test import (
    AFTER_WATER_FLOWED,
    BEFORE_WATER_FLOWS,
    AnyTest,
    common_problems,
    missing,
)
from fieldlog.procedures.fields import Duration, Line, PressureReading
from fieldlog.procedures.procedure import Problem, Procedure
from fieldlog.units import Discharge, Length


class InspectorsTest(AnyTest, frozen=True, kw_only=True):
    """One alarm or trip test."""

    kind: Annotated[Literal["alarm", "trip"], Meta(title="Test of")] = "alarm"
    by: Annotated[Literal["test connection", "bypass"], Meta(title="Opened by")] = "test connection"
    bypass_reason: Annotated[Line, Meta(title="Why by the bypass")] | None = None
    orifice_k: Annotated[Discharge, Meta(title="Orifice K")] | None = None
    outlet_elevation: Annotated[Length, Meta(title="Outlet elevation")] | None = None
    to_device: Annotated[Duration, Meta(title="Seconds to alarm device")] | None = None
    to_bell: Annotated[Duration, Meta(title="Seconds to local bell")] | None = None
    to_panel: Annotated[Duration, Meta(title="Seconds to panel")] | None = None
    to_monitoring: Annotated[Duration, Meta(title="Seconds to monitoring")] | None = None
    did_not_sound: Annotated[bool, Meta(title="Alarm did not come")] = False
    reset: Annotated[bool, Meta(title="Alarm reset")] | None = None
    retard_setting: Annotated[Duration, Meta(title="Retard setting")] | None = None
    static: Annotated[PressureReading, Meta(title="Riser gauge, static")] | None = None
    flowing: Annotated[PressureReading, Meta(title="Riser gauge, flowing")] | None = None
    connection_flowing: Annotated[PressureReading, Meta(title="Gauge at the test connection, flowing")] | None = None
    air_at_start: Annotated[PressureReading, Meta(title="Air at start")] | None = None
    water_at_start: Annotated[PressureReading, Meta(title="Water at start")] | None = None
    air_at_trip: Annotated[PressureReading, Meta(title="Air at trip")] | None = None
    trip: Annotated[Duration, Meta(title="Seconds from opening to trip")] | None = None
    delivery: Annotated[Duration, Meta(title="Seconds from trip to water at the connection")] | None = None
    quick_opening: Annotated[Duration, Meta(title="Seconds to quick-opening device")] | None = None
    full_flow: Annotated[bool, Meta(title="Full flow")] | None = None
    refill_minutes: Annotated[int, Meta(title="Air refilled in minutes", ge=0, le=1440)] | None = None
    low_points_drained: Annotated[bool, Meta(title="Low points drained")] | None = None
    low_air_alarm: Annotated[bool, Meta(title="Low-air alarm came")] | None = None


def _problems(body: InspectorsTest) -> list[Problem]:
    found = common_problems(body)
    if body.by == "bypass" and body.bypass_reason is None:
        found.append(Problem("bypass_reason", "say why the bypass was used"))
    if body.kind == "trip":
        return found + missing(body, "trip")
    times = (body.to_device, body.to_bell, body.to_panel, body.to_monitoring)
    if body.done == "done" and not any(times) and not body.did_not_sound:
        found.append(Problem("to_device", "give the seconds to one alarm at least, or tick that it did not come"))
    return found


PROCEDURE = Procedure(
    "inspectors_test", "Inspector's test", InspectorsTest, frozenset({"technician", "office"}),
    frozenset({"site", "system"}), is_test=True,
    steps=(
        "Put the point on test; announce that a pump may start",
        "Dry: note air and water pressures before anything is opened; they can't be got back",
        "Open the test connection; take the seconds to each alarm (dry: to trip, then to water)",
        "Shut it, reset, and have the monitoring party confirm",
    ),
    cautions=BEFORE_WATER_FLOWS + AFTER_WATER_FLOWED, check=_problems,
)  # fmt: skip
