"""The scenario's particulars as entries: people, sites, supplies, systems, gauges, design records, rule profiles."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import date

import msgspec

from fieldlog.demo import noted, scenario
from fieldlog.demo.pen import Pen, uid_of
from fieldlog.demo.plan import BASE_FT, GAUGE_FT, OUTLET_FT, DemandPlan, GaugePlan, SitePlan, SupplyPlan, SystemPlan
from fieldlog.demo.scenario import ago
from fieldlog.demo.simulator import left_at
from fieldlog.procedures.design_record import Demand, DesignRecord, DesignSupply
from fieldlog.procedures.gauge import Gauge
from fieldlog.procedures.person import Person
from fieldlog.procedures.rule_profile import RuleProfileBody
from fieldlog.procedures.site import Site
from fieldlog.procedures.supply import Supply, SupplyPoint
from fieldlog.procedures.system import Drain, FeedPart, LossPoint, System, SystemValve
from fieldlog.rules import loader
from fieldlog.units import Diameter, Discharge, Length, Pressure, SiteUnits

TEST_GAUGE = "test-gauge"
_DESIGN_GPM = 1200
_FEED_FT = 90
_LOSSES = ((300, 4), (600, 5), (1600, 12))  # gpm, psi: of an invented check assembly
_VALVES = (
    SystemValve(id="V1", name="Street valve", place="at the boundary"),
    SystemValve(id="V2", name="Riser control valve", place="at the riser"),
)


def write_people(pen: Pen, on: date) -> None:
    """Write the people of the organisation and its clients, and the organisation's test gauge."""
    for key, name, _, licence in scenario.PEOPLE:
        pen.write("person", key, Person(name=name, licence=licence), on)
    body = Gauge(
        name="T-1", of="organisation", range=Pressure(value="200", unit="psi"),
        division=Pressure(value="0.5", unit="psi"), grade="2A", certificate="DEMO-C1", certificate_on=on,
    )  # fmt: skip
    pen.write("gauge", TEST_GAUGE, body, on)


def write_site(pen: Pen, site: SitePlan, as_of: date) -> None:
    """Write a site with all that is on record about it before its first test, and what was altered since."""
    on = _first_day(as_of)
    place = {"site": uid_of(site.key)}
    pen.write("site", site.key, _site(site), on)
    for supply in site.supplies:
        pen.write("supply", supply.key, _supply(supply, site.units), on, **place)
    for system in site.systems:
        here = place | {"system": uid_of(system.key)}
        pen.write("system", system.key, _system(system, site), on, **place)
        pen.write("gauge", system.gauge_key(system.gauge), _gauge(system.gauge, site, on), on, **here)
        if system.demand is not None:
            design = _design(system.demand, site.supply_of(system), site.units, on)
            pen.write("design_record", f"{system.key}/design", design, on, **here)
        _write_alterations(pen, site, system)
    if site.catalogue is not None:
        pen.write("rule_profile", f"{site.key}/profile", _profile(site.catalogue, on), on, **place)


def _write_alterations(pen: Pen, site: SitePlan, system: SystemPlan) -> None:
    place, gauge = {"site": uid_of(site.key)}, system.new_gauge
    if gauge is not None and gauge.since is not None:
        body = msgspec.structs.replace(
            _gauge(gauge, site, gauge.since), replaces=uid_of(system.gauge_key(system.gauge))
        )
        here = place | {"system": uid_of(system.key)}
        pen.write("gauge", system.gauge_key(gauge), body, gauge.since, author="technician-a", **here)
    if system.drain_rebuilt_on is not None:
        pen.write(
            "system", f"{system.key}/new-drain", _with_new_drain(system, site, system.drain_rebuilt_on),
            system.drain_rebuilt_on, author="office-a", **place, subject=uid_of(system.key),
            based_on=uid_of(system.key), reason="main drain rebuilt to a new sump",
        )  # fmt: skip


def _first_day(as_of: date) -> date:
    return ago(as_of, 10.8)


def _site(plan: SitePlan) -> Site:
    return Site(
        name=plan.name,
        address=plan.address,
        owner=f"Owner of {plan.name}",
        zone="Etc/UTC",
        units=plan.units,
        height_mark="floor of the valve room",
    )


def _supply(plan: SupplyPlan, units: SiteUnits) -> Supply:
    static, residual = plan.set_points_psi or (None, None)
    level_m = plan.truth.full_tank_m
    return Supply(
        name=plan.name,
        kind=plan.kind,
        backflow_preventer="sole feed" if plan.has_backflow_preventer else "none",
        pressure_reducing_valve="none" if plan.set_points_psi is None else "sole feed",
        prv_static=None if static is None else noted.pressure(static, units),
        prv_residual=None if residual is None else noted.pressure(residual, units),
        tank_level_reference=None if level_m is None else Length(value=str(level_m), unit="m"),
        points=tuple(
            SupplyPoint(flow=noted.flow(gpm, units), pressure=noted.pressure(psi, units))
            for gpm, psi in plan.pump_points
        ),
    )


def _system(plan: SystemPlan, site: SitePlan) -> System:
    pipe = FeedPart(
        length=noted.height(_FEED_FT, site.units), inside_diameter=Diameter(value="6.065", unit="in"), c=120,
        nominal="6", fittings={"90 standard elbow": 2, "gate valve": 2},
    )  # fmt: skip
    device = FeedPart(of="check assembly", stated_loss=tuple(_listed_losses(site.units)))
    return System(
        name=plan.name,
        type=plan.type,
        supply=uid_of(plan.supply),
        riser="valve room",
        base_elevation=noted.height(BASE_FT, site.units),
        drain=Drain(
            id="main drain", size=Diameter(value="2", unit="in"), outlet="outside wall",
            outlet_elevation=noted.height(OUTLET_FT, site.units),
        ),
        feed=(pipe, device),
        hose_point="street",
        valves=_VALVES,
        alarm="pressure switch",
        heated=plan.type == "wet",
        air_supervised=plan.type in {"dry", "preaction"} or None,
    )  # fmt: skip


def _listed_losses(units: SiteUnits) -> Iterator[LossPoint]:
    for gpm, psi in _LOSSES:
        yield LossPoint(flow=noted.flow(gpm, units), loss=noted.pressure(psi, units))


def _with_new_drain(plan: SystemPlan, site: SitePlan, on: date) -> System:
    k = noted.decimal_text(plan.truth.drain_k_on(on), "0.5")
    drain = Drain(
        id="main drain", size=Diameter(value="2", unit="in"), outlet="new sump, longer pipe",
        outlet_elevation=noted.height(OUTLET_FT, site.units), k=Discharge(value=k, unit="gpm/psi^0.5"),
    )  # fmt: skip
    return msgspec.structs.replace(_system(plan, site), drain=drain, drain_changed_on=on)


def _gauge(plan: GaugePlan, site: SitePlan, on: date) -> Gauge:
    return Gauge(
        name=plan.name,
        of="system",
        side="supply",
        taps="riser",
        behind=plan.behind,
        range=plan.full_scale,
        division=plan.division,
        grade="B",
        elevation=noted.height(GAUGE_FT, site.units),
        installed_on=on,
    )


def _design(demand: DemandPlan, supply: SupplyPlan, units: SiteUnits, on: date) -> DesignRecord:
    static_psi = supply.truth.static_psi
    residual_psi = left_at(static_psi, supply.truth.resistance, _DESIGN_GPM)
    return DesignRecord(
        demand=Demand(flow=noted.flow(demand.flow_gpm, units), pressure=noted.pressure(demand.pressure_psi, units)),
        includes_inside_hose="yes",
        hose_outside=noted.flow(demand.hose_outside_gpm, units),
        hose_point="street",
        supply=DesignSupply(
            static=noted.pressure(static_psi, units), residual=noted.pressure(residual_psi, units),
            flow=noted.flow(_DESIGN_GPM, units),
        ),
        by="Designer A",
        made_on=on,
        read_from="information sign",
    )  # fmt: skip


def _profile(catalogue_id: str, on: date) -> RuleProfileBody:
    catalogue = loader.load(catalogue_id)
    adoption = loader.Adoption(
        approved_by=scenario.ENGINEER, approved_on=on, in_force_from=on, judged_on="on_the_day",
        approved_rows=tuple(catalogue.row_ids()),
    )  # fmt: skip
    return msgspec.convert(msgspec.to_builtins(loader.resolve(catalogue, adoption)), RuleProfileBody)
