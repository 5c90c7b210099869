"""One wet, dry, preaction, deluge or standpipe system with its riser."""

from __future__ import annotations

from typing import Annotated, Literal

import msgspec
from msgspec import Meta

from fieldlog.procedures.envelope import Uid
from fieldlog.procedures.fields import NOT_NEGATIVE, Day, Line, ValveState
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


class FeedPart(Body, frozen=True, kw_only=True):
    """One part of the way from the hose point to the base of riser: a run of pipe, or a device with listed loss."""

    length: Annotated[Length, Meta(title="Length", extra=NOT_NEGATIVE)] | None = None
    inside_diameter: Annotated[Diameter, Meta(title="Inside diameter")] | None = None
    c: Annotated[int, Meta(title="C-factor", ge=20, le=160)] | None = None
    nominal: (
        Annotated[Line, Meta(title="Nominal size", description="decides the fittings' equivalent lengths")] | None
    ) = None
    fittings: Annotated[dict[str, Annotated[int, Meta(ge=1, le=99)]], Meta(title="Fittings")] = msgspec.field(
        default_factory=dict
    )
    of: Annotated[Line, Meta(title="Device")] | None = None
    stated_loss: Annotated[tuple[LossPoint, ...], Meta(title="Listed loss")] = ()


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
    found = [problem for index, part in enumerate(body.feed) for problem in _part_problems(part, f"feed[{index}]")]
    ids = [valve.id for valve in body.valves]
    if len(set(ids)) != len(ids):
        found.append(Problem("valves", "two valves have the same id; give each its own"))
    return found


def _part_problems(part: FeedPart, where: str) -> list[Problem]:
    of_pipe = {"length": part.length, "inside_diameter": part.inside_diameter, "c": part.c}
    is_pipe = any(value is not None for value in of_pipe.values()) or part.nominal is not None or bool(part.fittings)
    is_device = part.of is not None or bool(part.stated_loss)
    if is_pipe == is_device:
        return [Problem(where, "give either a run of pipe or a device with its listed loss")]
    needed = of_pipe if is_pipe else {"of": part.of, "stated_loss": part.stated_loss or None}
    return [Problem(f"{where}.{name}", "is needed; add it") for name, value in needed.items() if value is None]


PROCEDURE = Procedure(
    "system", "System", System, frozenset({"technician", "office"}), frozenset({"site"}), check=_problems
)
