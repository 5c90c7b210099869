"""Entries of supplies, systems and design records, read into records in psi, gpm, ft and in."""

from __future__ import annotations

from datetime import date

from fieldlog.procedures.design_record import DesignRecord
from fieldlog.procedures.supply import Supply as SupplyBody
from fieldlog.procedures.system import FeedPart
from fieldlog.procedures.system import System as SystemBody
from fieldlog.records.entries import Entry
from fieldlog.records.history import Design, Drain, PipeRun, StatedLoss, Supply

_INSIDE_HOSE = {"yes": True, "no": False, "unknown": None}


def supply_record(entry: Entry, body: SupplyBody) -> Supply:
    """Return the supply."""
    level = body.tank_level_reference
    return Supply(
        uid=entry.subject,
        entry=entry.number,
        name=body.name,
        kind=body.kind,
        backflow_preventer=body.backflow_preventer,
        pressure_reducing_valve=body.pressure_reducing_valve,
        prv_static_psi=None if body.prv_static is None else body.prv_static.psi,
        prv_residual_psi=None if body.prv_residual is None else body.prv_residual.psi,
        tank_level_reference_ft=None if level is None else level.ft,
        points=tuple((point.pump_state, point.flow.gpm, point.pressure.psi) for point in body.points),
    )


def drain(body: SystemBody, since: date | None) -> Drain | None:
    """Return the main drain, as it is `since` a day."""
    if body.drain is None:
        return None
    stated = body.drain
    return Drain(
        id=stated.id,
        size_in=None if stated.size is None else stated.size.inches,
        outlet=stated.outlet or "",
        outlet_elevation_ft=None if stated.outlet_elevation is None else stated.outlet_elevation.ft,
        length_ft=None if stated.length is None else stated.length.ft,
        k=None if stated.k is None else stated.k.k,
        since=since,
    )


def feed(body: SystemBody) -> tuple[PipeRun | StatedLoss, ...]:
    """Return the way from the hose point to the base of riser, part by part."""
    return tuple(_feed_part(part) for part in body.feed)


def _feed_part(part: FeedPart) -> PipeRun | StatedLoss:
    if part.length is None or part.inside_diameter is None or part.c is None:
        points = tuple(sorted((point.flow.gpm, point.loss.psi) for point in part.stated_loss))
        return StatedLoss(points, part.of or "")
    fittings = tuple(sorted(part.fittings.items()))
    return PipeRun(part.length.ft, part.inside_diameter.inches, part.c, fittings, part.nominal)


def design(entry: Entry, body: DesignRecord) -> Design:
    """Return the design record as recorded; what it leaves open stays open."""
    supply, demand = body.supply, body.demand
    return Design(
        entry=entry.number,
        demand_flow_gpm=None if demand is None else demand.flow.gpm,
        demand_pressure_psi=None if demand is None else demand.pressure.psi,
        includes_inside_hose=_INSIDE_HOSE[body.includes_inside_hose],
        hose_inside_gpm=0.0 if body.hose_inside is None else body.hose_inside.gpm,
        hose_outside_gpm=0.0 if body.hose_outside is None else body.hose_outside.gpm,
        hose_point=body.hose_point,
        supply_static_psi=None if supply is None else supply.static.psi,
        supply_residual_psi=None if supply is None else supply.residual.psi,
        supply_flow_gpm=None if supply is None else supply.flow.gpm,
        supply_elevation_ft=None if supply is None or supply.elevation is None else supply.elevation.ft,
        elevation_ft=None if body.elevation is None else body.elevation.ft,
        made_on=body.made_on,
    )
