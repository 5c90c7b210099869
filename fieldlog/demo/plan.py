"""The shapes in which the scenario's sites are written down."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date
from typing import Literal

from fieldlog.assessment.codes import ReasonCode
from fieldlog.demo.simulator import TrueGauge, TrueSupply, TrueSystem
from fieldlog.records.statement import Statement
from fieldlog.units import Pressure, SiteUnits

YEARS = 10  # of visits
# Heights above the sites' marks, in every valve room the same.
BASE_FT, GAUGE_FT, OUTLET_FT = 1.0, 4.0, 2.0

Quirk = Literal[
    "not fully open", "pump running", "valve found partly shut", "near zero", "slow return", "trapped", "confirmed",
    "misread", "typing slip",
]  # fmt: skip


@dataclass(frozen=True, slots=True)
class Odd:
    """Something that went otherwise in the main drain test of one visit; 0 years ago is the last."""

    what: Quirk
    years_ago: float = 0.0


@dataclass(frozen=True, slots=True)
class GaugePlan:
    """A gauge as recorded, and as it is; without `since` it hangs there from the start."""

    name: str
    truth: TrueGauge
    full_scale: Pressure
    division: Pressure
    behind: tuple[Literal["check", "alarm", "backflow", "prv"], ...] = ()
    since: date | None = None


@dataclass(frozen=True, slots=True)
class DemandPlan:
    """The recorded demand at the base of riser, in psi and gpm."""

    flow_gpm: int
    pressure_psi: int
    hose_outside_gpm: int = 100


@dataclass(frozen=True, slots=True)
class SystemPlan:
    """A system: what is recorded, what is true, and what should be said of it and because of what."""

    key: str
    name: str
    type: Literal["wet", "dry", "preaction", "deluge", "standpipe"]
    supply: str
    truth: TrueSystem
    gauge: GaugePlan
    demand: DemandPlan | None
    expected: Statement
    because: tuple[ReasonCode, ...]
    odd: tuple[Odd, ...] = ()
    new_gauge: GaugePlan | None = None
    tests_a_year: Literal[1, 2, 4] = 1
    drain_rebuilt_on: date | None = None
    alarm_s: float = 34.0  # to the alarm of a wet system, to water at the connection of a dry one
    lengthening_s: float = 0.0  # a year

    def gauge_on(self, day: date) -> GaugePlan:
        """Return the gauge that hangs there on a day."""
        new = self.new_gauge
        return new if new is not None and new.since is not None and new.since <= day else self.gauge

    def gauge_key(self, gauge: GaugePlan) -> str:
        """Return by which key the gauge goes in the scenario."""
        return f"{self.key}/gauge/{gauge.name}"


@dataclass(frozen=True, slots=True)
class SupplyPlan:
    """A supply: what is recorded and what is true; years ago of its flow tests."""

    key: str
    name: str
    kind: Literal["public_main", "gravity_tank", "pressure_tank", "fire_pump", "parallel"]
    truth: TrueSupply
    flow_tests_years_ago: tuple[int, ...] = ()
    flow_test_gpm: int = 1100
    has_backflow_preventer: bool = False
    set_points_psi: tuple[int, int] | None = None  # of a reducing valve in the only feed: static, residual
    pump_points: tuple[tuple[int, int], ...] = ()  # gpm, psi


@dataclass(frozen=True, slots=True)
class SitePlan:
    """A site with everything on it."""

    key: str
    name: str
    address: str
    units: SiteUnits
    catalogue: str | None  # of its rule profile
    weeks_ago: int  # the last visit
    supplies: tuple[SupplyPlan, ...]
    systems: tuple[SystemPlan, ...]
    left_undone: tuple[tuple[str, str], ...] = ()  # at the last visit: item, reason

    @property
    def visits_a_year(self) -> int:
        """How often the site is visited: twice a year at least."""
        return max(2, *(system.tests_a_year for system in self.systems))

    def supply_of(self, system: SystemPlan) -> SupplyPlan:
        """Return the supply a system is on."""
        return next(supply for supply in self.supplies if supply.key == system.supply)
