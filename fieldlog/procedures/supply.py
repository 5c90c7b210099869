"""What feeds one or more systems; its kind decides what may be said of it."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.fields import NOT_NEGATIVE, Line, PumpState
from fieldlog.procedures.procedure import Body, Problem, Procedure
from fieldlog.units import Flow, Length, Pressure

InFeed = Literal["none", "one of several feeds", "sole feed"]


class SupplyPoint(Body, frozen=True, kw_only=True):
    """A stated point of a supply whose curve is not one of 1.85 power."""

    pump_state: Annotated[PumpState, Meta(title="Fire pump")] = "running"
    flow: Annotated[Flow, Meta(title="Flow")]
    pressure: Annotated[Pressure, Meta(title="Pressure", extra=NOT_NEGATIVE)]


class Supply(Body, frozen=True, kw_only=True):
    """A water supply of one site."""

    name: Annotated[Line, Meta(title="Name")]
    kind: Annotated[
        Literal["public_main", "gravity_tank", "pressure_tank", "fire_pump", "parallel"],
        Meta(title="Kind of supply"),
    ]
    backflow_preventer: Annotated[InFeed, Meta(title="Backflow preventer")] = "none"
    pressure_reducing_valve: Annotated[InFeed, Meta(title="Pressure-reducing valve")] = "none"
    prv_static: Annotated[Pressure, Meta(title="Reducing valve set point, static", extra=NOT_NEGATIVE)] | None = None
    prv_residual: Annotated[Pressure, Meta(title="Reducing valve set point, residual", extra=NOT_NEGATIVE)] | None = (
        None
    )
    tank_level_reference: Annotated[Length, Meta(title="Tank level the record holds at")] | None = None
    points: Annotated[tuple[SupplyPoint, ...], Meta(title="Stated points")] = ()
    note: Annotated[Line, Meta(title="Note")] | None = None


def _problems(body: Supply) -> list[Problem]:
    found = []
    if body.pressure_reducing_valve == "none" and (body.prv_static or body.prv_residual):
        found.append(Problem("pressure_reducing_valve", "set points are given; say where the valve stands"))
    for state in {point.pump_state for point in body.points}:
        flows = [point.flow.exact() for point in body.points if point.pump_state == state]
        if len(set(flows)) != len(flows):
            found.append(Problem("points", f"two points have the same flow with the pump {state}; keep one"))
    return found


PROCEDURE = Procedure(
    "supply", "Water supply", Supply, frozenset({"technician", "office"}), frozenset({"site"}), check=_problems
)
