"""Invented histories for the tests of judgement: one site, one street main, readable defaults."""

from __future__ import annotations

from dataclasses import replace
from datetime import date
from typing import Any

import msgspec

from fieldlog.assessment.judge import judge
from fieldlog.records.history import (
    Design,
    Drain,
    DrainTest,
    FlowTest,
    Gauge,
    PipeRun,
    Reading,
    Supply,
    SupplyHistory,
    System,
)
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import Statement, SystemStatement
from fieldlog.rules.loader import Adoption, load, resolve
from fieldlog.units import Pressure

AS_OF = date(2024, 9, 17)
GAUGE = Gauge(
    uid="gauge-3", entry=8, of="system", owner="north", side="supply", tap="riser", full_scale_psi=200.0,
    division_psi=1.0, grade="B", elevation_ft=4.0, name="lower gauge",
)  # fmt: skip
DRAIN = Drain(id="drain-7", size_in=2.0, outlet="outside wall")
FEED = (PipeRun(length_ft=120.0, inside_diameter_in=6.09, c=120.0),)
DESIGN = Design(
    entry=9, demand_flow_gpm=420.0, demand_pressure_psi=38.0, includes_inside_hose=True, hose_inside_gpm=50.0,
    hose_outside_gpm=250.0, hose_point="hydrant at the street", elevation_ft=3.0,
)  # fmt: skip
FLOW_TEST = FlowTest(
    entry=21, performed_on=date(2022, 5, 11), at="street", static_psi=82.0, points=((1310.0, 61.0),),
    elevation_ft=2.0,
)  # fmt: skip
MAIN = Supply(uid="main", entry=5, name="street main", kind="public_main")


def profile(**changes: Any) -> RuleProfile:
    """The 2017 rows of the shipped catalogue, adopted and unapproved."""
    adoption = Adoption(
        approved_by="A. Licensed", approved_on=date(1990, 2, 3), in_force_from=date(1990, 2, 3),
        judged_on="on_the_day",
    )  # fmt: skip
    values = msgspec.structs.asdict(resolve(load("us_inspection_2017"), adoption))
    return RuleProfile(**(values | {"uid": "profile-2017", "entry": 12} | changes))


PROFILE = profile()


def read(value: str, unit: str = "psi", gauge: str | None = "gauge-3", **changes: Any) -> Reading:
    exact = Pressure(value=value, unit=unit).exact()  # type: ignore[arg-type]
    plain = Reading(psi=float(exact), exact_psi=exact, value=value, unit=unit, gauge=gauge)
    return replace(plain, **changes)


def drained(on: date | str, before: str, residual: str, after: str | None = "", /, **changes: Any) -> DrainTest:
    """A test with every condition stated; static after is as before unless told otherwise."""
    day = date.fromisoformat(on) if isinstance(on, str) else on
    entry = changes.pop("entry", day.toordinal())
    unit, gauge = changes.pop("unit", "psi"), changes.pop("gauge", "gauge-3")
    after_read = None if after is None else read(after or before, unit, gauge)
    plain = DrainTest(
        entry=entry, subject=f"test-{entry}", performed_on=day, drain="drain-7",
        static_before=read(before, unit, gauge), residual=read(residual, unit, gauge), static_after=after_read,
        steady=True, return_s=6.0, fully_open=True, took_full_flow=True, running_clear=True, drain_unchanged=True,
        pump_state="none",
    )  # fmt: skip
    return replace(plain, **changes)


def acceptance(on: date | str = "2016-04-12", before: str = "81", residual: str = "66", **changes: Any) -> DrainTest:
    return drained(on, before, residual, standing="acceptance", **changes)


def steady_years() -> tuple[DrainTest, ...]:
    """An acceptance test and seven annual ones that differ by a psi or two."""
    return (
        acceptance(),
        drained("2017-05-03", "80", "65"),
        drained("2018-05-09", "82", "67"),
        drained("2019-04-30", "81", "65"),
        drained("2020-05-12", "80", "66"),
        drained("2021-05-06", "82", "66"),
        drained("2022-05-11", "81", "66"),
        drained("2023-05-17", "80", "65"),
    )


def system(*tests: DrainTest, **changes: Any) -> System:
    plain = System(
        uid="north", entry=7, name="north riser", type="wet", base_elevation_ft=3.0, drain=DRAIN, feed=FEED,
        hose_point="hydrant at the street", design=DESIGN, gauges=(GAUGE,), drain_tests=tests, valves=("post", "riser"),
    )  # fmt: skip
    return replace(plain, **changes)


def history(*systems: System, **changes: Any) -> SupplyHistory:
    plain = SupplyHistory(
        site="site", supply=MAIN, systems=systems, flow_tests=(FLOW_TEST,), profiles=(PROFILE,), through_number=99
    )
    return replace(plain, **changes)


def said_of(
    given: SupplyHistory, as_of: date = AS_OF, by: RuleProfile | None = PROFILE, version: str = "0.1"
) -> SystemStatement:
    """The statement on the first system."""
    return judge(given, as_of, by, version)[0]


def said(*tests: DrainTest, **changes: Any) -> SystemStatement:
    """The statement on a system with these tests and the usual supply."""
    return said_of(history(system(*tests, **changes)))


def codes(statement: SystemStatement) -> set[str]:
    return {str(reason.code) for reason in statement.reasons}


HOLDING, UNPROVEN = Statement.HOLDING, Statement.UNPROVEN
CHANGED, NOT_COMPARABLE = Statement.CHANGED, Statement.NOT_COMPARABLE
BELOW, IMPAIRED = Statement.BELOW_DEMAND, Statement.SUSPECTED_IMPAIRMENT
