"""The scenario's particulars as entries: people, sites, supplies, systems, gauges, design records, rule profiles."""

from __future__ import annotations

from datetime import date

import msgspec

from fieldlog.demo import scenario
from fieldlog.demo.pen import Pen, uid_of
from fieldlog.demo.plan import SitePlan, SupplyPlan, SystemPlan
from fieldlog.demo.scenario import ago
from fieldlog.procedures.design_record import Demand, DesignRecord, DesignSupply
from fieldlog.procedures.gauge import Gauge
from fieldlog.procedures.person import Person
from fieldlog.procedures.rule_profile import RuleProfileBody
from fieldlog.procedures.site import Site
from fieldlog.procedures.supply import Supply, SupplyPoint
from fieldlog.procedures.system import Drain, FeedPart, LossPoint, System, SystemValve
from fieldlog.rules import loader
from fieldlog.units import Diameter, Discharge, Flow, Length, Pressure, SiteUnits

_VALVES = (
    SystemValve(id="V1", name="Street valve", place="at the boundary"),
    SystemValve(id="V2", name="Riser control valve", place="at the riser"),
)


def write_people(pen: Pen, on: date) -> None:
    """Write the people of the organisation and its clients."""
    for key, name, _, licence in scenario.PEOPLE:
        pen.write("person", key, Person(name=name, licence=licence), on)


def write_site(pen: Pen, site: SitePlan, as_of: date) -> None:
    """Write a site with all that is on record about it before its first test."""
    on = ago(as_of, 10.2)
    units = SiteUnits(pressure=site.pressure, flow=site.flow, length=site.length)  # type: ignore[arg-type]
    body = Site(
        name=site.name, address=site.address, owner=f"Owner of {site.name}", zone="Etc/UTC", units=units,
        height_mark="floor of the valve room",
    )  # fmt: skip
    pen.write("site", site.key, body, on)
    place = {"site": uid_of(site.key)}
    for supply in site.supplies:
        pen.write("supply", supply.key, _supply(supply), on, **place)
    for system in site.systems:
        pen.write("system", system.key, _system(system, site), on, **place)
        here = place | {"system": uid_of(system.key)}
        pen.write("gauge", f"{system.key}/gauge", _gauge(system, as_of), on, **here)
        if system.demand is not None:
            pen.write("design_record", f"{system.key}/design", _design(system, as_of), on, **here)
    if site.catalogue is not None:
        pen.write("rule_profile", f"{site.key}/profile", _profile(site.catalogue, as_of), on, **place)


def _supply(plan: SupplyPlan) -> Supply:
    points = tuple(SupplyPoint(flow=_gpm(flow), pressure=_psi(pressure)) for flow, pressure in plan.pump_points)
    static, residual = plan.set_points_psi or (None, None)
    return Supply(
        name=plan.name,
        kind=plan.kind,  # type: ignore[arg-type]
        pressure_reducing_valve="sole feed" if plan.reducing_valve else "none",
        prv_static=None if static is None else _psi(static),
        prv_residual=None if residual is None else _psi(residual),
        tank_level_reference=Length(value="3", unit="m") if plan.kind == "gravity_tank" else None,
        points=points,
    )


def _system(plan: SystemPlan, site: SitePlan) -> System:
    pipe = FeedPart(
        length=Length(value=str(plan.feed_ft), unit="ft"), inside_diameter=Diameter(value="6.065", unit="in"), c=120,
        nominal="6", fittings={"90 standard elbow": 2, "gate valve": 2},
    )  # fmt: skip
    losses = tuple(LossPoint(flow=_gpm(flow), loss=_psi(loss)) for flow, loss in ((300, 4), (600, 5), (1600, 12)))
    return System(
        name=plan.name,
        type=plan.type,  # type: ignore[arg-type]
        supply=uid_of(plan.supply),
        riser="valve room",
        base_elevation=Length(value="1", unit="ft"),
        drain=Drain(
            id="main drain", size=Diameter(value="2", unit="in"), outlet="outside wall",
            outlet_elevation=Length(value="2", unit="ft"),
        ),
        feed=(pipe, FeedPart(of="check assembly", stated_loss=losses)),
        hose_point="street",
        valves=_VALVES,
        alarm="pressure switch",
        heated=plan.type == "wet",
        air_supervised=plan.type in {"dry", "preaction"} or None,
        header=f"{site.key} header" if len(site.systems) > 3 else None,
    )  # fmt: skip


def _gauge(plan: SystemPlan, as_of: date) -> Gauge:
    gauge = plan.gauge
    return Gauge(
        name=gauge.name,
        of="system",
        side="supply",
        taps=gauge.taps,  # type: ignore[arg-type]
        behind=gauge.behind,  # type: ignore[arg-type]
        range=Pressure(value=gauge.range_value, unit=gauge.unit),  # type: ignore[arg-type]
        division=Pressure(value=gauge.division, unit=gauge.unit),  # type: ignore[arg-type]
        grade=gauge.grade,  # type: ignore[arg-type]
        elevation=Length(value="4", unit="ft"),
        installed_on=ago(as_of, 10.2),
    )


def _design(plan: SystemPlan, as_of: date) -> DesignRecord:
    demand = plan.demand
    if demand is None:
        raise ValueError(f"{plan.key} has no demand on record")
    return DesignRecord(
        demand=Demand(flow=_gpm(demand.flow_gpm), pressure=_psi(demand.pressure_psi)),
        includes_inside_hose="yes",
        hose_outside=_gpm(demand.hose_outside_gpm),
        hose_point="street",
        supply=DesignSupply(static=_psi(80), residual=_psi(60), flow=_gpm(1200)),
        by="Designer A",
        made_on=ago(as_of, 10.2),
        read_from="information sign",
    )


def _profile(catalogue_id: str, as_of: date) -> RuleProfileBody:
    catalogue = loader.load(catalogue_id)
    on = ago(as_of, 10.2)
    adoption = loader.Adoption(
        approved_by=scenario.ENGINEER, approved_on=on, in_force_from=on, judged_on="on_the_day",
        approved_rows=tuple(catalogue.row_ids()),
    )  # fmt: skip
    return msgspec.convert(msgspec.to_builtins(loader.resolve(catalogue, adoption)), RuleProfileBody)


def altered_drain(plan: SystemPlan, site: SitePlan, on: date) -> System:
    """Return the system with its drain as rebuilt on a day."""
    body = _system(plan, site)
    drain = Drain(
        id="main drain", size=Diameter(value="2", unit="in"), outlet="new sump, longer pipe",
        outlet_elevation=Length(value="1", unit="ft"), k=Discharge(value="32", unit="gpm/psi^0.5"),
    )  # fmt: skip
    return msgspec.structs.replace(body, drain=drain, drain_changed_on=on)


def _psi(value: int) -> Pressure:
    return Pressure(value=str(value), unit="psi")


def _gpm(value: int) -> Flow:
    return Flow(value=str(value), unit="gpm")
