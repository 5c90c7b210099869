"""Routine reading of one or more gauges."""

from __future__ import annotations

from typing import Annotated

from msgspec import Meta

from fieldlog.procedures.any_test import AnyTest, common_problems, missing
from fieldlog.procedures.fields import ABOVE_ZERO, Line, PressureReading
from fieldlog.procedures.procedure import Body, Problem, Procedure
from fieldlog.units import Pressure, Temperature


class OneReading(Body, frozen=True, kw_only=True):
    """One gauge as read, with its state."""

    pressure: Annotated[PressureReading, Meta(title="Pressure")]
    cock_open: Annotated[bool, Meta(title="Isolating cock open")] | None = None
    returns_to_zero: Annotated[bool, Meta(title="Returns to zero when vented")] | None = None
    relief_setting: Annotated[Pressure, Meta(title="Relief valve setting", extra=ABOVE_ZERO)] | None = None
    good_condition: Annotated[bool, Meta(title="In good condition")] | None = None
    note: Annotated[Line, Meta(title="Note")] | None = None


class GaugeReadings(AnyTest, frozen=True, kw_only=True):
    """Readings of one round."""

    readings: Annotated[tuple[OneReading, ...], Meta(title="Readings")] = ()
    room_temperature: Annotated[Temperature, Meta(title="Room temperature")] | None = None


def _problems(body: GaugeReadings) -> list[Problem]:
    found = common_problems(body) + missing(body, "readings")
    return found + [
        Problem(f"readings[{index}].pressure.gauge", "say which gauge was read")
        for index, one in enumerate(body.readings)
        if one.pressure.gauge is None
    ]


PROCEDURE = Procedure(
    "gauge_reading", "Gauge reading", GaugeReadings, frozenset({"technician", "office"}), frozenset({"site"}),
    is_test=True,
    steps=(
        "Look at each gauge from the front; tap it lightly",
        "Read water and air gauges; note whether a pump runs",
    ),
    check=_problems,
)  # fmt: skip
