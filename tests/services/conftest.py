"""A small instance: an organisation, a technician, one site with a supply, a system and its gauge."""

from __future__ import annotations

from collections.abc import Callable
from datetime import UTC, date, datetime
from pathlib import Path
from uuid import UUID

import msgspec
import pytest

from fieldlog.procedures.compose import compose
from fieldlog.procedures.design_record import Demand, DesignRecord
from fieldlog.procedures.fields import PressureReading
from fieldlog.procedures.flow_test import FlowPoint, FlowTest
from fieldlog.procedures.gauge import Gauge
from fieldlog.procedures.main_drain_test import MainDrainTest
from fieldlog.procedures.organisation import Organisation
from fieldlog.procedures.person import Person
from fieldlog.procedures.site import Site
from fieldlog.procedures.supply import Supply
from fieldlog.procedures.system import Drain, System
from fieldlog.records.entries import Arrival, IntakeResult
from fieldlog.services import instance as instances
from fieldlog.services import intake
from fieldlog.services.instance import Instance
from fieldlog.settings import Settings
from fieldlog.units import Diameter, Flow, Pressure

AT = datetime(2026, 5, 6, 9, 30, tzinfo=UTC)
DRAIN = Drain(id="main drain", size=Diameter(value="2", unit="in"))
WHEN = "2026-05-06T09:30:00Z"


def uid(number: int) -> str:
    return str(UUID(int=0x5EED << 96 | number, version=4))


ORGANISATION, PERSON, SITE, SUPPLY, SYSTEM, GAUGE = (uid(number) for number in range(11, 17))


def psi(value: str, gauge: str | None = GAUGE) -> PressureReading:
    return PressureReading(value=value, unit="psi", gauge=gauge)


def drain_test(on: date, static: str, residual: str, **more: object) -> MainDrainTest:
    return msgspec.structs.replace(
        MainDrainTest(
            performed_on=on, static_before=psi(static), residual=psi(residual), static_after=psi(static), steady=True,
            fully_open=True, took_full_flow=True, drain_unchanged=True, pump_state="none",
        ),
        **more,
    )  # fmt: skip


class Office:
    """Composes and takes in entries, as the office of the small instance would."""

    def __init__(self, instance: Instance) -> None:
        self.instance = instance
        self.number = 100

    def text(self, kind: str, body: msgspec.Struct, **more: object) -> str:
        self.number += 1
        given = {"uid": uid(self.number), "author": ORGANISATION, "made_at": WHEN, "site": SITE, **more}
        return compose(kind, body, **given)  # type: ignore[arg-type]

    def take(self, *texts: str, authority: intake.Authority = intake.OFFICE) -> IntakeResult:
        arrivals = [Arrival(text) for text in texts]
        return intake.take_in(self.instance.connection, arrivals, "import", WHEN, authority)

    def enter(self, kind: str, body: msgspec.Struct, **more: object) -> str:
        text = self.text(kind, body, **more)
        result = self.take(text)
        assert not result.refused, result.refused
        return result.receipts[0].uid


@pytest.fixture
def office(tmp_path: Path) -> Office:
    made = instances.create_instance(Settings(tmp_path / "instance"))
    instances.found_organisation(made, Organisation(name="Contractor"), uid=ORGANISATION, at=AT)
    office = Office(made)
    office.enter("person", Person(name="Technician A"), uid=PERSON, site=None)
    office.enter("site", Site(name="Harbour Cold Store"), uid=SITE, site=None)
    office.enter("supply", Supply(name="Quay main", kind="public_main"), uid=SUPPLY)
    office.enter("system", System(name="Wet system 2", type="wet", supply=SUPPLY, drain=DRAIN), uid=SYSTEM)
    gauge = Gauge(
        name="G-14", of="system", side="supply", taps="riser", range=Pressure(value="200", unit="psi"),
        division=Pressure(value="1", unit="psi"), grade="B",
    )  # fmt: skip
    office.enter("gauge", gauge, uid=GAUGE, system=SYSTEM)
    return office


@pytest.fixture
def history(office: Office) -> Callable[[], None]:
    """Enter a demand, a flow test at the riser and six annual drain tests."""

    def enter() -> None:
        demand = Demand(flow=Flow(value="300", unit="gpm"), pressure=Pressure(value="35", unit="psi"))
        office.enter("design_record", DesignRecord(demand=demand, includes_inside_hose="yes"), system=SYSTEM)
        point = FlowPoint(residual=psi("61"), flow=Flow(value="900", unit="gpm"))
        test = FlowTest(
            performed_on=date(2025, 4, 3), supply=SUPPLY, at="base_of_riser", static=psi("81"), points=(point,)
        )
        office.enter("flow_test", test)
        for year, residual in zip(range(2020, 2026), ("66", "67", "65", "66", "67", "66"), strict=True):
            body = drain_test(date(year, 4, 3), "81", residual, standing="acceptance" if year == 2020 else "routine")
            office.enter("main_drain_test", body, system=SYSTEM)

    return enter
