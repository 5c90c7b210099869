"""The invented sites: every statement and its causes, in mixed units. No place, person or brand in it is real."""

from __future__ import annotations

from datetime import date, timedelta

from fieldlog.demo.plan import DemandPlan, GaugePlan, SitePlan, SupplyPlan, SystemPlan
from fieldlog.demo.simulator import Change, TrueGauge, TrueSupply, TrueSystem, resistance_of
from fieldlog.records.statement import Statement
from fieldlog.services.people import Role

ORGANISATION = "Demonstration Fire Protection Contractor"
PEOPLE: tuple[tuple[str, str, Role, str | None], ...] = (
    ("technician-a", "Technician A", "technician", "DEMO-1"),
    ("technician-b", "Technician B", "technician", "DEMO-2"),
    ("office-a", "Office A", "office", None),
    ("owner-a", "Owner's representative A", "owner", None),
)
ENGINEER = "Licensed engineer A"
_PSI_IN_BAR = 14.503773773
_PSI_IN_KPA = 0.14503773773


def sites(as_of: date) -> tuple[SitePlan, ...]:
    """Return the sites as they stand on a day; what happened is told in years before it."""
    return (
        _harbour(as_of),
        _mill_lane(as_of),
        _north_quay(as_of),
        _hill_farm(),
        _quarry_road(as_of),
        _orchard_hall(),
    )


def ago(as_of: date, years: float) -> date:
    """Return the day some years before."""
    return as_of - timedelta(days=round(years * 365.25))


def _psi_gauge(name: str, division: str = "1", bias: float = 0.0, shifts: tuple[Change, ...] = ()) -> GaugePlan:
    return GaugePlan(name, TrueGauge(float(division), bias, shifts=shifts), "200", division, "psi")


def _bar_gauge(name: str, bias: float = 0.0) -> GaugePlan:
    return GaugePlan(name, TrueGauge(0.1 * _PSI_IN_BAR, bias), "16", "0.1", "bar")


def _kpa_gauge(name: str, bias: float = 0.0) -> GaugePlan:
    return GaugePlan(name, TrueGauge(5 * _PSI_IN_KPA, bias), "1600", "5", "kPa")


def _feed(loss_psi: float) -> float:
    return resistance_of(loss_psi, 600)


def _harbour(as_of: date) -> SitePlan:
    main = TrueSupply(84.0, _feed(14.0), changes=(Change(ago(as_of, 6.0), -2.0, is_yearly=True),))
    return SitePlan(
        "harbour", "Harbour Cold Store", "1 Example Quay", "psi", "gpm", "ft", "us_inspection_2017", 2,
        (SupplyPlan("harbour-main", "Quay main", "public_main", main, (10, 5, 1)),),
        (
            SystemPlan(
                "harbour-1", "Wet system 1", "wet", "harbour-main", TrueSystem(_feed(5.0), 36.0),
                _psi_gauge("G-11", bias=0.6), DemandPlan(380, 36), Statement.CHANGED,
            ),
            SystemPlan(
                "harbour-2", "Wet system 2", "wet", "harbour-main", TrueSystem(_feed(7.0), 41.0),
                _psi_gauge("G-14", "5", -1.0), DemandPlan(420, 34), Statement.CHANGED,
            ),
            SystemPlan(
                "harbour-3", "Dry system 3", "dry", "harbour-main", TrueSystem(_feed(6.0), 38.0),
                _psi_gauge("G-17", "1", 0.4), DemandPlan(400, 33), Statement.CHANGED,
                alarm_seconds=38, lengthening=2.4,
            ),
        ),
    )  # fmt: skip


def _mill_lane(as_of: date) -> SitePlan:
    main = TrueSupply(92.0, _feed(14.0))
    slipped = Change(ago(as_of, 0.9), 9.0)
    half_shut = Change(ago(as_of, 0.9), 6.0)
    return SitePlan(
        "mill", "Mill Lane Workshops", "2 Example Lane", "psi", "gpm", "ft", "us_inspection_2020", 20,
        (SupplyPlan("mill-main", "Lane main", "public_main", main, (10, 5, 1)),),
        (
            SystemPlan(
                "mill-1", "Wet system 1", "wet", "mill-main", TrueSystem(_feed(4.0), 40.0),
                _psi_gauge("G-21"), DemandPlan(330, 40), Statement.HOLDING, tests_a_year=2,
            ),
            SystemPlan(
                "mill-2", "Wet system 2", "wet", "mill-main", TrueSystem(_feed(6.0), 42.0, (half_shut,)),
                _psi_gauge("G-22"), DemandPlan(360, 40), Statement.CHANGED,
            ),
            SystemPlan(
                "mill-3", "Wet system 3", "wet", "mill-main", TrueSystem(_feed(5.0), 38.0),
                _psi_gauge("G-23", "5"), DemandPlan(600, 52), Statement.UNPROVEN,
            ),
            SystemPlan(
                "mill-4", "Preaction system 4", "preaction", "mill-main", TrueSystem(_feed(5.0), 39.0),
                _psi_gauge("G-24", shifts=(slipped,)), DemandPlan(330, 38), Statement.CHANGED, last_quirk="confirmed",
            ),
        ),
    )  # fmt: skip


def _north_quay(as_of: date) -> SitePlan:
    main = TrueSupply(88.0, _feed(13.0), changes=(Change(ago(as_of, 3.2), -13.0),))
    other = TrueSupply(70.0, _feed(11.0))
    new_drain = Change(ago(as_of, 30.0), 1.0, until=ago(as_of, 2.1)), Change(ago(as_of, 2.1), 0.8)
    return SitePlan(
        "north", "North Quay Warehouse", "3 Example Quay", "bar", "L/min", "m", "european_insurers", 9,
        (
            SupplyPlan("north-main", "North main", "public_main", main, (10, 5, 2)),
            SupplyPlan("north-yard", "Yard main", "public_main", other, (9, 4, 1)),
        ),
        (
            SystemPlan(
                "north-1", "Wet system 1", "wet", "north-main", TrueSystem(_feed(5.0), 40.0),
                _bar_gauge("G-31"), DemandPlan(350, 36), Statement.CHANGED,
            ),
            SystemPlan(
                "north-2", "Wet system 2", "wet", "north-yard",
                TrueSystem(_feed(5.0), 40.0, drain_changes=new_drain),
                _bar_gauge("G-32"), DemandPlan(300, 20), Statement.HOLDING, drain_changed_years_ago=2,
                tests_a_year=4,
            ),
            SystemPlan(
                "north-3", "Dry system 3", "dry", "north-yard", TrueSystem(_feed(8.0), 36.0),
                _bar_gauge("G-33"), DemandPlan(620, 58, 250), Statement.BELOW_DEMAND,
            ),
        ),
    )  # fmt: skip


def _hill_farm() -> SitePlan:
    tank = TrueSupply(64.0, _feed(8.0), season_psi=0.2, day_psi=0.3)
    return SitePlan(
        "hill", "Hill Farm Dairy", "4 Example Hill", "kPa", "L/min", "m", "us_inspection_2020", 26,
        (SupplyPlan("hill-tank", "Hill tank", "gravity_tank", tank, (10, 5, 1)),),
        (
            SystemPlan(
                "hill-1", "Wet system 1", "wet", "hill-tank", TrueSystem(_feed(3.0), 38.0),
                _kpa_gauge("G-41"), DemandPlan(260, 22, 0), Statement.HOLDING,
            ),
        ),
    )  # fmt: skip


def _quarry_road(as_of: date) -> SitePlan:
    pump = TrueSupply(110.0, _feed(14.0))
    reduced = TrueSupply(75.0, _feed(10.0), season_psi=0.2, changes=(Change(ago(as_of, 4.0), -1.5, is_yearly=True),))
    vessel = TrueSupply(95.0, _feed(12.0), season_psi=0.2)
    return SitePlan(
        "quarry", "Quarry Road Plant", "5 Example Road", "psi", "gpm", "ft", "us_inspection_2017", 6,
        (
            SupplyPlan(
                "quarry-pump", "Pump house", "fire_pump", pump, (10, 1),
                pump_points=((0, 130), (750, 118), (1100, 95)),
            ),
            SupplyPlan(
                "quarry-reduced", "High-level riser main", "public_main", reduced, (10, 5), reducing_valve=True,
                set_points_psi=(75, 68),
            ),
            SupplyPlan("quarry-vessel", "Pressure vessel", "pressure_tank", vessel),
        ),
        (
            SystemPlan(
                "quarry-1", "Wet system 1", "wet", "quarry-pump", TrueSystem(_feed(5.0), 40.0),
                _psi_gauge("G-51"), DemandPlan(450, 50, 250), Statement.NOT_COMPARABLE, last_quirk="pump running",
            ),
            SystemPlan(
                "quarry-2", "Standpipe 2", "standpipe", "quarry-reduced", TrueSystem(_feed(4.0), 40.0),
                _psi_gauge("G-52"), DemandPlan(500, 65, 0), Statement.NOT_COMPARABLE,
            ),
            SystemPlan(
                "quarry-3", "Deluge system 3", "deluge", "quarry-vessel", TrueSystem(_feed(4.0), 38.0),
                _psi_gauge("G-53"), DemandPlan(300, 50, 0), Statement.NOT_COMPARABLE,
            ),
        ),
    )  # fmt: skip


def _orchard_hall() -> SitePlan:
    main = TrueSupply(78.0, _feed(14.0))
    old = TrueSupply(80.0, _feed(12.0))
    return SitePlan(
        "orchard", "Orchard Hall", "6 Example Street", "psi", "gpm", "ft", None, 3,
        (
            SupplyPlan("orchard-main", "Street main", "public_main", main, (9, 2)),
            SupplyPlan("orchard-old", "Garden main", "public_main", old, ()),
        ),
        (
            SystemPlan(
                "orchard-1", "Wet system 1", "wet", "orchard-main", TrueSystem(_feed(5.0), 40.0),
                _psi_gauge("G-61"), DemandPlan(340, 34), Statement.SUSPECTED_IMPAIRMENT,
                last_quirk="valve found partly shut",
            ),
            SystemPlan(
                "orchard-2", "Wet system 2", "wet", "orchard-main", TrueSystem(_feed(5.0), 40.0),
                _psi_gauge("G-62"), None, Statement.UNPROVEN,
            ),
            SystemPlan(
                "orchard-3", "Wet system 3", "wet", "orchard-old", TrueSystem(_feed(5.0), 39.0),
                _psi_gauge("G-63"), DemandPlan(320, 30), Statement.NOT_COMPARABLE, last_quirk="not fully open",
            ),
            SystemPlan(
                "orchard-4", "Wet system 4", "wet", "orchard-old", TrueSystem(_feed(5.0), 39.0),
                _psi_gauge("G-64"), DemandPlan(320, 30), Statement.SUSPECTED_IMPAIRMENT, last_quirk="slow return",
            ),
        ),
    )  # fmt: skip
