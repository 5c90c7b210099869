"""The small types that bodies are made of: readings, valves, durations, people, photos, what was kept."""

from __future__ import annotations

from datetime import date
from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import LINE, Sha256, Uid, Words
from fieldlog.procedures.procedure import Body
from fieldlog.units import DecimalText, Pressure

Line = Annotated[str, Meta(min_length=1, max_length=200, pattern=LINE)]
Day = date
ZonedTime = Annotated[
    str,
    Meta(
        pattern=r"^[0-9]{4}-[0-9]{2}-[0-9]{2}T[0-9]{2}:[0-9]{2}(:[0-9]{2})?(Z|[+-][0-9]{2}:[0-9]{2})(?!\n)$",
        extra={"is_moment": True},
    ),
]
ClockTime = Annotated[str, Meta(pattern=r"^([01][0-9]|2[0-3]):[0-5][0-9](?!\n)$")]
NOT_NEGATIVE = {"least": "0"}
ABOVE_ZERO = {"above": "0"}
PumpState = Literal["none", "off", "jockey", "running"]
ValveState = Literal["open", "partly", "shut"]


class PressureReading(Pressure, frozen=True, kw_only=True):
    """A pressure as read: which gauge, and the extremes of a swinging needle."""

    gauge: Annotated[Uid, Meta(title="Gauge")] | None = None
    low: Annotated[DecimalText, Meta(title="Low of the swing")] | None = None
    high: Annotated[DecimalText, Meta(title="High of the swing")] | None = None
    pump_state: Annotated[PumpState, Meta(title="Pump at this reading")] | None = None


class Duration(Body, frozen=True, kw_only=True):
    """Seconds and how they were taken."""

    seconds: Annotated[int, Meta(title="Seconds", ge=0, le=86400)]
    how: Annotated[Literal["stop clock", "watch", "panel log", "not stated"], Meta(title="How taken")] = "not stated"


class ValveFound(Body, frozen=True, kw_only=True):
    """A valve as found and as left."""

    id: Annotated[Line, Meta(title="Valve")]
    found: Annotated[ValveState, Meta(title="Found")] | None = None
    left: Annotated[ValveState, Meta(title="Left")] | None = None
    shut_at: Annotated[ZonedTime, Meta(title="Shut at")] | None = None
    opened_at: Annotated[ZonedTime, Meta(title="Opened at")] | None = None


class Confirmation(Body, frozen=True, kw_only=True):
    """Who confirmed something, and when."""

    who: Annotated[Line, Meta(title="Who")]
    at: Annotated[ZonedTime, Meta(title="When")] | None = None


class Restoration(Body, frozen=True, kw_only=True):
    """Normal condition restored: each is ticked when it is so."""

    valves: Annotated[bool, Meta(title="Valves open, secured, supervised position shown")] | None = None
    pressures: Annotated[bool, Meta(title="Water and air pressures back to normal")] | None = None
    drain_shut: Annotated[bool, Meta(title="Drain shut and not weeping")] | None = None
    alarms: Annotated[Confirmation, Meta(title="Alarm points confirmed by the monitoring party")] | None = None


class Instrument(Body, frozen=True, kw_only=True):
    """An instrument used besides the gauges on record."""

    id: Annotated[Line, Meta(title="Instrument")]
    certificate: Annotated[Line, Meta(title="Certificate")] | None = None
    certificate_on: Annotated[Day, Meta(title="Certificate of")] | None = None


class Photo(Body, frozen=True, kw_only=True):
    """A photo by its SHA-256; the bytes come apart."""

    sha256: Annotated[Sha256, Meta(title="SHA-256")]
    size: Annotated[int, Meta(title="Bytes", ge=1, le=10_000_000)]
    caption: Annotated[Line, Meta(title="Caption")] | None = None


class Kept(Body, frozen=True, kw_only=True):
    """A question that was asked and the answer kept: which field, which question, what was shown."""

    field: Annotated[Line, Meta(title="Field")]
    code: Annotated[Line, Meta(title="Question")]
    shown: Annotated[Words, Meta(title="Shown")] | None = None
