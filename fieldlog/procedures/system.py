"""One wet, dry, preaction, deluge or standpipe system with its riser."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import Uid
from fieldlog.procedures.fields import NOT_NEGATIVE, Day, Line, PipeRun, ValveState
from fieldlog.procedures.procedure import Body, Problem, Procedure
from fieldlog.units import Diameter, Discharge, Flow, Length, Pressure


class Drain(Body, frozen=True, kw_only=True):
    """The main drain connection."""

    id: Annotated[Line, Meta(title="Drain")]
    size: Annotated[Diameter, Meta(title="Drain size")] | None = None
    outlet: Annotated[Line, Meta(title="Outlet", description="where it discharges")] | None = None
    outlet_elevation: Annotated[Length, Meta(title="Outlet elevation")] | None = None
    length: Annotated[Length, Meta(title="Length of drain pipe, equivalent", extra=NOT_NEGATIVE)] | None = None
    k: Annotated[Discharge, Meta(title="Measured K")] | None = None


class LossPoint(Body, frozen=True, kw_only=True):
    """One point of a listed loss."""

    flow: Annotated[Flow, Meta(title="Flow")]
    loss: Annotated[Pressure, Meta(title="Loss", extra=NOT_NEGATIVE)]


class StatedLoss(Body, frozen=True, kw_only=True):
    """A device whose loss is listed by its maker."""

    of: Annotated[Line, Meta(title="Device")]
    stated_loss: Annotated[tuple[LossPoint, ...], Meta(title="Listed loss", min_length=1)]


class FeedPart(Body, frozen=True, kw_only=True):
    """One part of the way from the hose point to the base of riser: a run of pipe or a listed loss."""

    pipe: Annotated[PipeRun, Meta(title="Pipe")] | None = None
    device: Annotated[StatedLoss, Meta(title="Device with listed loss")] | None = None


class SystemValve(Body, frozen=True, kw_only=True):
    """A valve the water passes."""

    id: Annotated[Line, Meta(title="Valve")]
    name: Annotated[Line, Meta(title="Name")] | None = None
    place: Annotated[Line, Meta(title="Place")] | None = None
    normal: Annotated[ValveState, Meta(title="Normal position")] = "open"


class System(Body, frozen=True, kw_only=True):
    """One system and the one supply it is on."""

    name: Annotated[Line, Meta(title="Name")]
    type: Annotated[Literal["wet", "dry", "preaction", "deluge", "standpipe"], Meta(title="Type")]
    supply: Annotated[Uid, Meta(title="Water supply")]
    on_supply_since: Annotated[Day, Meta(title="On this supply since")] | None = None
    riser: Annotated[Line, Meta(title="Riser", description="where it stands")] | None = None
    base_elevation: Annotated[Length, Meta(title="Elevation of the base of riser")] | None = None
    drain: Annotated[Drain, Meta(title="Main drain")] | None = None
    drain_changed_on: Annotated[Day, Meta(title="Drain altered on")] | None = None
    feed: Annotated[tuple[FeedPart, ...], Meta(title="Feed from hose point to base of riser")] = ()
    feed_changed_on: Annotated[Day, Meta(title="Feed altered on")] | None = None
    hose_point: Annotated[Line, Meta(title="Where outside hose is drawn")] | None = None
    valves: Annotated[tuple[SystemValve, ...], Meta(title="Valves")] = ()
    alarm: (
        Annotated[Literal["vane", "pressure switch", "water motor", "none"], Meta(title="Waterflow alarm")] | None
    ) = None
    installed_on: Annotated[Day, Meta(title="Installed on")] | None = None
    occupancy: Annotated[Line, Meta(title="Occupancy as recorded")] | None = None
    heated: Annotated[bool, Meta(title="Heated")] | None = None
    air_supervised: Annotated[bool, Meta(title="Air pressure supervised")] | None = None
    header: Annotated[Line, Meta(title="Header shared with other systems")] | None = None


def _problems(body: System) -> list[Problem]:
    found = []
    for index, part in enumerate(body.feed):
        if (part.pipe is None) == (part.device is None):
            found.append(Problem(f"feed[{index}]", "give either a pipe or a device with its listed loss"))
    ids = [valve.id for valve in body.valves]
    if len(set(ids)) != len(ids):
        found.append(Problem("valves", "two valves have the same id; give each its own"))
    return found


PROCEDURE = Procedure(
    "system", "System", System, frozenset({"technician", "office"}), frozenset({"site"}), check=_problems
)
