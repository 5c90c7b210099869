"""A statement about one system: free of units of the reader and of sentences (contracts: Statement)."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import date
from enum import StrEnum


class Statement(StrEnum):
    """The six statements, the most worrying first."""

    SUSPECTED_IMPAIRMENT = "suspected impairment"
    BELOW_DEMAND = "below demand (estimate)"
    CHANGED = "changed"
    NOT_COMPARABLE = "not comparable"
    UNPROVEN = "unproven"
    HOLDING = "holding"

    @property
    def rank(self) -> int:
        """0 for the most worrying."""
        return list(Statement).index(self)


Number = float | int | str | bool | None


@dataclass(frozen=True, slots=True)
class Reason:
    """Why: a stable code, its numbers (units in their names), the entries it rests on, the method's section."""

    code: str
    numbers: Mapping[str, Number] = field(default_factory=dict)
    entries: tuple[int, ...] = ()
    section: str = ""


@dataclass(frozen=True, slots=True)
class TenPercent:
    """The ten percent criterion against one earlier test; `reduction` as a share (0.1 is ten percent)."""

    against: str  # acceptance, new reference, previous, best
    reduction: float
    flagged: bool | None  # None: shown without a flag
    entry: int
    sigma: float | None = None  # 1 sigma of the reduction from both readings' errors


@dataclass(frozen=True, slots=True)
class Margin:
    """Available less required pressure at the demand flow, with its band, psi; and what it rests on."""

    median_psi: float
    low_psi: float
    high_psi: float
    rule_margin_psi: float
    demand_flow_gpm: float
    required_psi: float
    basis: str  # flow test, design supply curve, forward-flow test, stated points
    entries: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True)
class ExpectedBand:
    """Where the next readings should fall, psi; None where too few tests tell."""

    month: int | None
    static_low_psi: float
    static_high_psi: float
    residual_low_psi: float
    residual_high_psi: float


@dataclass(frozen=True, slots=True)
class BlindLoss:
    """The largest loss at the design demand that these tests could have missed, psi; None: no finite loss."""

    loss_psi: float | None
    with_half_psi_gauge_psi: float | None
    demand_flow_gpm: float
    tests: int


@dataclass(frozen=True, slots=True)
class Trend:
    """Theil-Sen slope and Mann-Kendall p of one quantity, from six dates on; no words are drawn from it alone."""

    quantity: str  # static_psi, drain_index
    slope_per_year: float
    slope_low_per_year: float
    slope_high_per_year: float
    mann_kendall_p: float
    dates: int


@dataclass(frozen=True, slots=True)
class SystemStatement:
    """What is said of one system under one rule profile."""

    system: str
    profile: str | None  # uid of the rule_profile version; None: adopted standard not recorded
    statement: Statement
    reasons: tuple[Reason, ...]
    next: tuple[str, ...]  # codes of the next steps, most useful first
    ten_percent: tuple[TenPercent, ...]
    through_number: int
    as_of: date
    valid_until: date | None
    version: str
    earlier: Statement | None = None  # a worse earlier statement that "not comparable" does not replace
    margin_on_day: Margin | None = None
    margin_low_day: Margin | None = None
    expected: tuple[ExpectedBand, ...] = ()
    trends: tuple[Trend, ...] = ()
    blind_loss: BlindLoss | None = None
    cannot_show: tuple[str, ...] = ()  # codes
    findings: tuple[Reason, ...] = ()  # gauges, alarm and delivery times: beside the statement
    checks: tuple[str, ...] = ()  # codes of likely places to look, for a qualified person
    misread: tuple[int, ...] = ()

    @property
    def worst(self) -> Statement:
        """The worse of what is said now and what still stands from earlier."""
        return min((said for said in (self.statement, self.earlier) if said is not None), key=lambda said: said.rank)
