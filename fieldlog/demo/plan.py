"""The shapes in which the scenario's sites are written down."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from fieldlog.demo.simulator import TrueGauge, TrueSupply, TrueSystem
from fieldlog.records.statement import Statement

Quirk = Literal[
    "", "not fully open", "pump running", "valve found partly shut", "near zero", "slow return", "trapped", "confirmed",
]  # fmt: skip


@dataclass(frozen=True, slots=True)
class GaugePlan:
    """A gauge as recorded, and as it is."""

    name: str
    truth: TrueGauge
    range_value: str
    division: str
    unit: str
    grade: str | None = "B"
    taps: str = "riser"
    behind: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class DemandPlan:
    """The recorded demand, in psi and gpm."""

    flow_gpm: int
    pressure_psi: int
    hose_outside_gpm: int = 100


@dataclass(frozen=True, slots=True)
class SystemPlan:
    """A system: what is recorded, what is true, and what its statement should be."""

    key: str
    name: str
    type: str
    supply: str
    truth: TrueSystem
    gauge: GaugePlan
    demand: DemandPlan | None
    expected: Statement
    feed_ft: int = 90
    last_quirk: Quirk = ""
    tests_a_year: int = 1
    first_test_years_ago: int = 10
    drain_changed_years_ago: int | None = None
    alarm_seconds: int = 34
    lengthening: float = 0.0  # seconds a year, of alarm or delivery


@dataclass(frozen=True, slots=True)
class SupplyPlan:
    """A supply: what is recorded and what is true; years ago of its flow tests."""

    key: str
    name: str
    kind: str
    truth: TrueSupply
    flow_tests_years_ago: tuple[int, ...] = ()
    flow_test_gpm: int = 1100
    reducing_valve: bool = False
    set_points_psi: tuple[int, int] | None = None
    pump_points: tuple[tuple[int, int], ...] = ()


@dataclass(frozen=True, slots=True)
class SitePlan:
    """A site with everything on it."""

    key: str
    name: str
    address: str
    pressure: str
    flow: str
    length: str
    catalogue: str | None
    weeks_ago: int  # the last annual visit
    supplies: tuple[SupplyPlan, ...]
    systems: tuple[SystemPlan, ...]
