"""The hydraulic design record: demand and supply as designed, from calculation or information sign."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import Words
from fieldlog.procedures.fields import NOT_NEGATIVE, Day, Line
from fieldlog.procedures.procedure import Body, Problem, Procedure
from fieldlog.units import Area, Density, Flow, Length, Pressure


class Demand(Body, frozen=True, kw_only=True):
    """Flow and pressure required at the base of riser."""

    flow: Annotated[Flow, Meta(title="Demand flow")]
    pressure: Annotated[Pressure, Meta(title="Required pressure", extra=NOT_NEGATIVE)]


class DesignSupply(Body, frozen=True, kw_only=True):
    """The supply as the design took it."""

    static: Annotated[Pressure, Meta(title="Static")]
    residual: Annotated[Pressure, Meta(title="Residual")]
    flow: Annotated[Flow, Meta(title="Flow")]
    elevation: Annotated[Length, Meta(title="Elevation these hold at")] | None = None


class DesignRecord(Body, frozen=True, kw_only=True):
    """The record as it stands; hazard and occupancy are not checked."""

    demand: Annotated[Demand, Meta(title="Demand at base of riser")] | None = None
    includes_inside_hose: Annotated[Literal["yes", "no", "unknown"], Meta(title="Demand flow includes inside hose")] = (
        "unknown"
    )
    hose_inside: Annotated[Flow, Meta(title="Hose allowance inside")] | None = None
    hose_outside: Annotated[Flow, Meta(title="Hose allowance outside")] | None = None
    hose_point: Annotated[Line, Meta(title="Where outside hose is drawn")] | None = None
    supply: Annotated[DesignSupply, Meta(title="Supply as designed")] | None = None
    density: Annotated[Density, Meta(title="Density")] | None = None
    area: Annotated[Area, Meta(title="Design area")] | None = None
    c: Annotated[int, Meta(title="C-factor", ge=20, le=160)] | None = None
    elevation: Annotated[Length, Meta(title="Elevation the demand holds at")] | None = None
    occupancy: Annotated[Line, Meta(title="Occupancy or commodity as recorded")] | None = None
    by: Annotated[Line, Meta(title="Made by")] | None = None
    made_on: Annotated[Day, Meta(title="Made on")] | None = None
    read_from: Annotated[Literal["calculation", "information sign", "other"], Meta(title="Read from")] = (
        "information sign"
    )
    note: Annotated[Words, Meta(title="Note")] | None = None


def _problems(body: DesignRecord) -> list[Problem]:
    supply = body.supply
    if supply is not None and supply.residual.exact() >= supply.static.exact():
        return [Problem("supply.residual", "the residual is not below the static; mend one of them")]
    return []


PROCEDURE = Procedure(
    "design_record", "Hydraulic design record", DesignRecord, frozenset({"office"}), frozenset({"site", "system"}),
    check=_problems,
)  # fmt: skip
