"""The invented sites: every statement and its causes, in mixed units. No place, person or brand in it is real.

The noise of each day goes by names and not by dates, so that the scenario tells the same on whatever day it is made.
"""

from __future__ import annotations

from datetime import date, timedelta

from fieldlog.assessment.codes import ReasonCode
from fieldlog.demo.plan import DemandPlan, GaugePlan, Odd, SitePlan, SupplyPlan, SystemPlan
from fieldlog.demo.simulator import Change, TrueGauge, TrueSupply, TrueSystem, resistance_of
from fieldlog.records.statement import Statement
from fieldlog.services.people import Role
from fieldlog.units import Pressure, SiteUnits

ORGANISATION = "Demonstration Fire Protection Contractor"
PEOPLE: tuple[tuple[str, str, Role, str | None], ...] = (
    ("technician-a", "Technician A", "technician", "DEMO-1"),
    ("technician-b", "Technician B", "technician", "DEMO-2"),
    ("office-a", "Office A", "office", None),
    ("owner-a", "Owner's representative A", "owner", None),
)
ENGINEER = "Licensed engineer A"
_US = SiteUnits(pressure="psi", flow="gpm", length="ft")
_BAR = SiteUnits(pressure="bar", flow="L/min", length="m")
_KPA = SiteUnits(pressure="kPa", flow="L/min", length="m")


def sites(as_of: date) -> tuple[SitePlan, ...]:
    """Return the sites as they stand on a day; what happened is told in years before it."""
    return (
        _harbour(as_of),
        _mill_lane(as_of),
        _north_quay(as_of),
        _hill_farm(as_of),
        _quarry_road(as_of),
        _ferry_road(),
        _orchard_hall(),
    )


def ago(as_of: date, years: float) -> date:
    """Return the day some years before."""
    return as_of - timedelta(days=round(years * 365.25))


def _psi_gauge(name: str, division: str = "1", truth: TrueGauge | None = None, since: date | None = None) -> GaugePlan:
    full_scale, step = Pressure(value="200", unit="psi"), Pressure(value=division, unit="psi")
    return GaugePlan(name, truth or TrueGauge(), full_scale, step, since=since)


def _bar_gauge(name: str, truth: TrueGauge | None = None) -> GaugePlan:
    return GaugePlan(name, truth or TrueGauge(), Pressure(value="16", unit="bar"), Pressure(value="0.1", unit="bar"))


def _kpa_gauge(name: str) -> GaugePlan:
    return GaugePlan(name, TrueGauge(), Pressure(value="1600", unit="kPa"), Pressure(value="5", unit="kPa"))


def _losing(psi_at_600_gpm: float) -> float:
    return resistance_of(psi_at_600_gpm, 600)


def _harbour(as_of: date) -> SitePlan:
    """Return a main whose static declines; a gauge replaced, a delivery that lengthens, a reading mistyped."""
    declining = Change(ago(as_of, 6.0), -2.0, is_yearly=True)
    main = TrueSupply(84.0, _losing(14.0), season_psi=1.5, day_psi=1.0, changes=(declining,))
    finer = _psi_gauge("G-15", "1", TrueGauge(0.8), since=ago(as_of, 0.25))
    return SitePlan(
        "harbour", "Harbour Cold Store", "1 Example Quay", _US, "us_inspection_2017", 2,
        (SupplyPlan("harbour-main", "Quay main", "public_main", main, (10, 5, 1)),),
        (
            SystemPlan(
                "harbour-1", "Wet system 1", "wet", "harbour-main", TrueSystem(_losing(5.0), 36.0),
                _psi_gauge("G-11", "1", TrueGauge(0.6)), DemandPlan(380, 36),
                Statement.CHANGED, (ReasonCode.TEN_PERCENT,), (Odd("typing slip", 2),),
            ),
            SystemPlan(
                "harbour-2", "Wet system 2", "wet", "harbour-main", TrueSystem(_losing(7.0), 41.0),
                _psi_gauge("G-14", "5", TrueGauge(-1.0)), DemandPlan(420, 34),
                Statement.CHANGED, (ReasonCode.TEN_PERCENT, ReasonCode.GAUGE_REPLACED), new_gauge=finer,
            ),
            SystemPlan(
                "harbour-3", "Dry system 3", "dry", "harbour-main", TrueSystem(_losing(6.0), 38.0),
                _psi_gauge("G-17", "1", TrueGauge(0.4)), DemandPlan(400, 33),
                Statement.CHANGED, (ReasonCode.TEN_PERCENT, ReasonCode.DELIVERY_LONGER),
                alarm_s=38.0, lengthening_s=2.6,
            ),
        ),
    )  # fmt: skip


def _mill_lane(as_of: date) -> SitePlan:
    """Return a steady main; one feed half shut, one coarse gauge, one gauge that slipped, one reading misread."""
    main = TrueSupply(92.0, _losing(14.0), season_psi=1.5, day_psi=1.0)
    slipped = TrueGauge(shifts=(Change(ago(as_of, 0.9), 11.0),))
    half_shut = Change(ago(as_of, 0.9), 7.0)
    return SitePlan(
        "mill", "Mill Lane Workshops", "2 Example Lane", _US, "us_inspection_2020", 20,
        (SupplyPlan("mill-main", "Lane main", "public_main", main, (10, 5, 1)),),
        (
            SystemPlan(
                "mill-1", "Wet system 1", "wet", "mill-main", TrueSystem(_losing(4.0), 40.0),
                _psi_gauge("G-21"), DemandPlan(330, 40),
                Statement.HOLDING, (ReasonCode.HOLDING,), (Odd("misread", 4.5),), tests_a_year=2,
            ),
            SystemPlan(
                "mill-2", "Wet system 2", "wet", "mill-main", TrueSystem(_losing(6.0), 42.0, (half_shut,)),
                _psi_gauge("G-22"), DemandPlan(360, 40),
                Statement.CHANGED, (ReasonCode.TEN_PERCENT, ReasonCode.RESIDUAL_OUTSIDE_BAND),
            ),
            SystemPlan(
                "mill-3", "Wet system 3", "wet", "mill-main", TrueSystem(_losing(5.0), 38.0),
                _psi_gauge("G-23", "5"), DemandPlan(640, 53),
                Statement.UNPROVEN, (ReasonCode.BLIND_LOSS_ABOVE_MARGIN,),
            ),
            SystemPlan(
                "mill-4", "Preaction system 4", "preaction", "mill-main", TrueSystem(_losing(5.0), 39.0),
                _psi_gauge("G-24", "1", slipped), DemandPlan(330, 38),
                Statement.CHANGED, (ReasonCode.STATIC_OUTSIDE_BAND,), (Odd("confirmed"),),
            ),
        ),
    )  # fmt: skip


def _north_quay(as_of: date) -> SitePlan:
    """Return a main that stepped down, so that the greater demand on it is not met; another with a drain rebuilt."""
    main = TrueSupply(88.0, _losing(13.0), changes=(Change(ago(as_of, 3.2), -14.0),))
    yard = TrueSupply(70.0, _losing(11.0), season_psi=1.0, day_psi=1.0)
    rebuilt_on = ago(as_of, 2.1)
    sump = TrueSystem(_losing(14.0), 40.0, alterations=(Change(rebuilt_on, 0.8),))
    return SitePlan(
        "north", "North Quay Warehouse", "3 Example Quay", _BAR, "european_insurers", 9,
        (
            SupplyPlan("north-main", "North main", "public_main", main, (10, 5, 2)),
            SupplyPlan("north-yard", "Yard main", "public_main", yard, (9, 4), has_backflow_preventer=True),
        ),
        (
            SystemPlan(
                "north-1", "Wet system 1", "wet", "north-main", TrueSystem(_losing(5.0), 40.0),
                _bar_gauge("G-31"), DemandPlan(350, 36),
                Statement.CHANGED, (ReasonCode.TEN_PERCENT,),
            ),
            SystemPlan(
                "north-2", "Wet system 2", "wet", "north-yard", sump,
                _bar_gauge("G-32"), DemandPlan(300, 20),
                Statement.HOLDING, (ReasonCode.NEW_REFERENCE,), tests_a_year=4, drain_rebuilt_on=rebuilt_on,
            ),
            SystemPlan(
                "north-3", "Dry system 3", "dry", "north-main", TrueSystem(_losing(8.0), 36.0),
                _bar_gauge("G-33", TrueGauge(-0.5)), DemandPlan(620, 48, 250),
                Statement.BELOW_DEMAND, (ReasonCode.BELOW_DEMAND,),
            ),
        ),
    )  # fmt: skip


def _hill_farm(as_of: date) -> SitePlan:
    """Return a tank whose level is read; a strainer that was blocked and cleaned."""
    tank = TrueSupply(64.0, _losing(8.0), season_psi=0.0, day_psi=0.2, full_tank_m=3.0)
    blocked = Change(ago(as_of, 5.3), 10.0, until=ago(as_of, 4.35))
    return SitePlan(
        "hill", "Hill Farm Dairy", "4 Example Hill", _KPA, "us_inspection_2020", 26,
        (SupplyPlan("hill-tank", "Hill tank", "gravity_tank", tank, (10, 5, 1)),),
        (
            SystemPlan(
                "hill-1", "Wet system 1", "wet", "hill-tank", TrueSystem(_losing(3.0), 38.0, (blocked,)),
                _kpa_gauge("G-41"), DemandPlan(260, 22, 0),
                Statement.HOLDING, (ReasonCode.HOLDING,),
            ),
        ),
    )  # fmt: skip


def _quarry_road(as_of: date) -> SitePlan:
    """Return kinds of supply without a curve of their own: pump, reducing valve, pressure tank, parallel feeds."""
    pump = TrueSupply(110.0, _losing(14.0))
    drifting = Change(ago(as_of, 4.0), -1.2, is_yearly=True)
    reduced = TrueSupply(76.0, _losing(10.0), season_psi=0.2, day_psi=0.4, changes=(drifting,))
    vessel = TrueSupply(95.0, _losing(12.0), season_psi=0.0, day_psi=0.6)
    both = TrueSupply(86.0, _losing(9.0), season_psi=1.0, day_psi=1.0)
    return SitePlan(
        "quarry", "Quarry Road Plant", "5 Example Road", _US, "us_inspection_2017", 6,
        (
            SupplyPlan(
                "quarry-pump", "Pump house", "fire_pump", pump, (10, 1), pump_points=((0, 130), (750, 118), (1100, 95))
            ),
            SupplyPlan("quarry-reduced", "High-level riser main", "public_main", reduced, (10, 5),
                       set_points_psi=(75, 68)),
            SupplyPlan("quarry-vessel", "Pressure vessel", "pressure_tank", vessel),
            SupplyPlan("quarry-both", "Town main and yard ring", "parallel", both, (9,)),
        ),
        (
            SystemPlan(
                "quarry-1", "Wet system 1", "wet", "quarry-pump", TrueSystem(_losing(5.0), 40.0),
                _psi_gauge("G-51"), DemandPlan(450, 50, 250),
                Statement.NOT_COMPARABLE, (ReasonCode.PUMP_STATE_DIFFERS,), (Odd("pump running"),),
            ),
            SystemPlan(
                "quarry-2", "Standpipe 2", "standpipe", "quarry-reduced", TrueSystem(_losing(4.0), 40.0),
                _psi_gauge("G-52"), DemandPlan(500, 65, 0),
                Statement.NOT_COMPARABLE, (ReasonCode.BEHIND_REDUCING_VALVE, ReasonCode.SET_POINT_DIFFERS),
            ),
            SystemPlan(
                "quarry-3", "Deluge system 3", "deluge", "quarry-vessel", TrueSystem(_losing(4.0), 38.0),
                _psi_gauge("G-53"), DemandPlan(300, 50, 0),
                Statement.NOT_COMPARABLE, (ReasonCode.KIND_WITHOUT_OWN_TEST,),
            ),
            SystemPlan(
                "quarry-4", "Wet system 4", "wet", "quarry-both", TrueSystem(_losing(5.0), 40.0),
                _psi_gauge("G-54"), DemandPlan(360, 40),
                Statement.NOT_COMPARABLE, (ReasonCode.KIND_WITHOUT_OWN_TEST,),
            ),
        ),
    )  # fmt: skip


def _ferry_road() -> SitePlan:
    """Return a main whose flow test is old; an impairment that is open; a static that a check valve held."""
    main = TrueSupply(82.0, _losing(13.0), season_psi=1.5, day_psi=1.0)
    trapping = GaugePlan(
        "G-73", TrueGauge(), Pressure(value="16", unit="bar"), Pressure(value="0.1", unit="bar"), ("check",)
    )
    return SitePlan(
        "ferry", "Ferry Road Depot", "6 Example Road", _BAR, "us_inspection_2020", 1,
        (SupplyPlan("ferry-main", "Ferry main", "public_main", main, (10, 7)),),
        (
            SystemPlan(
                "ferry-1", "Wet system 1", "wet", "ferry-main", TrueSystem(_losing(5.0), 40.0),
                _bar_gauge("G-71"), DemandPlan(340, 36),
                Statement.UNPROVEN, (ReasonCode.FLOW_TEST_OLD,),
            ),
            SystemPlan(
                "ferry-2", "Dry system 2", "dry", "ferry-main", TrueSystem(_losing(6.0), 38.0),
                _bar_gauge("G-72"), DemandPlan(360, 35),
                Statement.SUSPECTED_IMPAIRMENT, (ReasonCode.RESIDUAL_NEAR_ZERO, ReasonCode.IMPAIRMENT_OPEN),
                (Odd("near zero"),),
            ),
            SystemPlan(
                "ferry-3", "Wet system 3", "wet", "ferry-main", TrueSystem(_losing(5.0), 41.0), trapping,
                DemandPlan(320, 34),
                Statement.UNPROVEN, (ReasonCode.FLOW_TEST_OLD, ReasonCode.TRAPPED_PRESSURE), (Odd("trapped"),),
            ),
        ),
        left_undone=(("Flow test of the Ferry main", "permission of the water company awaited"),),
    )  # fmt: skip


def _orchard_hall() -> SitePlan:
    """Return a site whose standard is not recorded; a valve found partly shut, a slow return, no demand on record."""
    main = TrueSupply(78.0, _losing(14.0), season_psi=1.5, day_psi=1.0)
    garden = TrueSupply(80.0, _losing(12.0), season_psi=1.5, day_psi=1.0)
    return SitePlan(
        "orchard", "Orchard Hall", "7 Example Street", _US, None, 3,
        (
            SupplyPlan("orchard-main", "Street main", "public_main", main, (9, 2)),
            SupplyPlan("orchard-garden", "Garden main", "public_main", garden),
        ),
        (
            SystemPlan(
                "orchard-1", "Wet system 1", "wet", "orchard-main", TrueSystem(_losing(5.0), 40.0),
                _psi_gauge("G-61"), DemandPlan(340, 34),
                Statement.SUSPECTED_IMPAIRMENT, (ReasonCode.VALVE_FOUND_NOT_OPEN,), (Odd("valve found partly shut"),),
            ),
            SystemPlan(
                "orchard-2", "Wet system 2", "wet", "orchard-main", TrueSystem(_losing(5.0), 40.0),
                _psi_gauge("G-62"), None,
                Statement.UNPROVEN, (ReasonCode.NO_DEMAND, ReasonCode.NO_PROFILE),
            ),
            SystemPlan(
                "orchard-3", "Wet system 3", "wet", "orchard-garden", TrueSystem(_losing(5.0), 39.0),
                _psi_gauge("G-63"), DemandPlan(320, 30),
                Statement.NOT_COMPARABLE, (ReasonCode.NOT_FULLY_OPEN, ReasonCode.NO_FLOW_TEST),
                (Odd("not fully open"),),
            ),
            SystemPlan(
                "orchard-4", "Wet system 4", "wet", "orchard-garden", TrueSystem(_losing(5.0), 39.0),
                _psi_gauge("G-64"), DemandPlan(320, 30),
                Statement.SUSPECTED_IMPAIRMENT, (ReasonCode.NOT_RECOVERED,), (Odd("slow return"),),
            ),
        ),
    )  # fmt: skip
