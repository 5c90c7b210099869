"""Rules as data, and the rule profile: the values of one adopted standard as they were approved for a site.

The accessors of a profile read its rows and know nothing by themselves: what no row says is None. Where several
rows give the same limit, the strictest counts.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from datetime import date
from fractions import Fraction
from typing import Annotated, Any, Literal, TypeVar

import msgspec

from fieldlog.records.criteria import (
    CompareAccuracy,
    Criterion,
    MarginRule,
    Positive,
    RelativeTimeIncrease,
    RelativeToBaseline,
    TimeLimit,
    ValidFor,
)
from fieldlog.units import DecimalText

Basis = Literal["read", "from memory"]
Mark = Literal["read", "from memory", "approved"]
RuleId = Annotated[str, msgspec.Meta(pattern=r"^[a-z][a-z0-9_]*(\.[a-z0-9_]+)*(?!\n)$")]
# Texts are printed on terminals and pages: nothing in them may steer either.
Words = Annotated[
    str, msgspec.Meta(min_length=1, max_length=2000, pattern=r"^[^\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f]*$")
]
Month = Annotated[int, msgspec.Meta(ge=1, le=12)]
SystemType = Literal["wet", "dry", "preaction", "deluge", "standpipe"]
SatisfiedBy = Literal[
    "main_drain_test", "gauge_reading", "inspectors_test", "flow_test", "forward_flow_test", "valve_status_test",
    "gauge_comparison",
]  # fmt: skip
FeedDevice = Literal["backflow_preventer", "pressure_reducing_valve"]
TriggerEvent = Literal["valve reopened", "repair", "feed changed", "drain changed", "extension", "impairment ended"]

_MONTHS_OF_UNIT = {"month": 1, "year": 12}
_DAYS_OF_UNIT = {"day": 1, "week": 7}
_AnyCriterion = TypeVar("_AnyCriterion", bound=Criterion)


class _Part(msgspec.Struct, frozen=True, forbid_unknown_fields=True, omit_defaults=True, kw_only=True):
    pass


class AppliesWhen(_Part, frozen=True, kw_only=True):
    """The facts a rule rests on; every one stated must hold, an empty one asks nothing."""

    system_types: tuple[SystemType, ...] = ()
    supply_kinds: tuple[Literal["public_main", "gravity_tank", "pressure_tank", "fire_pump", "parallel"], ...] = ()
    feed_through: tuple[FeedDevice, ...] = ()  # any of these stands in a feed
    sole_feed_through: tuple[FeedDevice, ...] = ()  # any of these stands in the only feed
    alarms: tuple[Literal["vane", "pressure switch", "water motor"], ...] = ()
    gauge_sides: tuple[Literal["supply", "system", "air"], ...] = ()
    occupancies: tuple[str, ...] = ()
    air_supervised: bool | None = None
    heated: bool | None = None
    on_header: bool | None = None
    installed_from: date | None = None
    installed_before: date | None = None
    also: str | None = None  # a condition no record holds, for a person to decide


class Trigger(_Part, frozen=True, kw_only=True):
    """An event after which the rule's activity is due."""

    event: TriggerEvent
    within_days: Positive | None = None


class Season(_Part, frozen=True, kw_only=True):
    """The months of the year in which a frequency counts; without months they are for a person to fill in."""

    name: str
    first_month: Month | None = None
    last_month: Month | None = None


class Frequency(_Part, frozen=True, kw_only=True):
    """How often, and how near together and far apart two of them may be."""

    every: Positive
    unit: Literal["day", "week", "month", "year"]
    anchor: Literal["calendar", "last done", "baseline"]
    least: Positive | None = None  # smallest gap, in gap_unit
    most: Positive | None = None  # largest gap, in gap_unit
    gap_unit: Literal["day", "month"] | None = None
    grace_days: Positive | None = None
    season: Season | None = None

    def __post_init__(self) -> None:
        """Refuse gaps without a unit, and an interval that is not within its gaps."""
        if (self.least is not None or self.most is not None) != (self.gap_unit is not None):
            raise ValueError("least or most and gap_unit come together")
        if self.gap_unit is None:
            return
        if (self.gap_unit == "month") != (self.unit in _MONTHS_OF_UNIT):
            raise ValueError(f"gaps in {self.gap_unit}s don't go with {self.unit}s; months with years, days with weeks")
        interval = self.every * (_MONTHS_OF_UNIT | _DAYS_OF_UNIT)[self.unit]
        if not (self.least or 0) <= interval <= (self.most or interval):
            raise ValueError(f"the interval of {interval} {self.gap_unit}s is not within its gaps")

    def months(self) -> int | None:
        """Return the interval in months; None where it is counted in days or weeks."""
        size = _MONTHS_OF_UNIT.get(self.unit)
        return None if size is None else self.every * size


class Classification(_Part, frozen=True, kw_only=True):
    """The class a result is proposed for: fieldlog's own, and the word of that family of standards."""

    result: str
    proposed: Literal["noncritical", "critical", "impairment"] | None = None
    family_word: str | None = None


class Clock(_Part, frozen=True, kw_only=True):
    """Hours that run from an event, whom to tell, and what is wanted when they are over."""

    starts: Literal["valve shut", "impairment began", "finding"]
    hours: DecimalText | None = None  # absent: at once
    notify: tuple[str, ...] = ()
    then: str | None = None


class WhoMay(_Part, frozen=True, kw_only=True):
    """Who may do it and who must see it."""

    qualification: str | None = None
    witness: str | None = None


class RecordRule(_Part, frozen=True, kw_only=True):
    """How long its record is kept, when it is filed, and what it must say."""

    keep: Literal["life of the system", "until after the next", "years"] | None = None
    keep_years: Positive | None = None
    filing_business_days: Positive | None = None
    wording: str | None = None


class Deviation(_Part, frozen=True, kw_only=True):
    """An alternative that was approved instead, with its document."""

    alternative: Words
    document: Words
    approver: Words
    in_force_from: date
    in_force_until: date | None = None


class Approval(_Part, frozen=True, kw_only=True):
    """Who checked a row against the adopted edition, when, and the mark it had before."""

    by: Words
    on: date
    before: Basis


class Rule(_Part, frozen=True, kw_only=True):
    """One row: what is to be done or what must hold, when, and how surely it is known."""

    id: RuleId
    item: Words
    activity: Literal["inspection", "test", "maintenance"]
    mark: Mark
    source: Words
    from_memory: tuple[str, ...] = ()  # fields of a row marked read that were not read
    per: Literal["system", "header", "supply", "gauge", "valve", "test gauge"] = "system"
    satisfied_by: SatisfiedBy | None = None  # absent: no kind of entry records it
    done_as: Literal["alarm test", "trip test", "full-flow trip test", "pump test"] | None = None
    clause: str | None = None  # with its standard and edition
    applies_when: AppliesWhen = AppliesWhen()
    triggers: tuple[Trigger, ...] = ()
    frequency: Frequency | None = None
    criteria: tuple[Criterion, ...] = ()
    classification: tuple[Classification, ...] = ()
    clock: Clock | None = None
    who_may: WhoMay | None = None
    record: RecordRule | None = None
    deviation: Deviation | None = None
    approval: Approval | None = None
    note: str | None = None

    def __post_init__(self) -> None:
        """Refuse a row called approved that names nobody, and the reverse."""
        if (self.mark == "approved") != (self.approval is not None):
            raise ValueError("the mark approved and an approval by name and date come together")


class Override(_Part, frozen=True, kw_only=True):
    """One field of one row as a locality has it, and why."""

    rule: RuleId
    field: Words
    value: Any
    reason: Words


class ProfileValues(_Part, frozen=True, kw_only=True):
    """The resolved values of a profile, as they are stored."""

    standard: Words
    edition: Words
    catalogue_id: Words
    catalogue_sha256: Annotated[str, msgspec.Meta(pattern=r"^[0-9a-f]{64}(?!\n)$")]
    approved_by: Words
    approved_on: date
    in_force_from: date
    judged_on: Literal["low_day", "on_the_day"]
    rules: Annotated[tuple[Rule, ...], msgspec.Meta(min_length=1)]
    amendment: Words | None = None
    jurisdiction: Words | None = None
    in_force_until: date | None = None
    overrides: tuple[Override, ...] = ()


class RuleProfile(ProfileValues, frozen=True, kw_only=True):
    """A profile as judged by: its values, with the uid and number of the entry that holds them."""

    uid: str
    entry: int

    def rule(self, rule_id: str) -> Rule | None:
        """Return the row of that id; None where the profile has none."""
        return next((rule for rule in self.rules if rule.id == rule_id), None)

    def is_in_force(self, on: date) -> bool:
        """Return whether the profile holds on that day, its last day included."""
        return self.in_force_from <= on and (self.in_force_until is None or on <= self.in_force_until)

    def reduction_percent(self) -> Fraction | None:
        """Return the fall of the residual, in percent of the reference, from which the cause must be found."""
        falls = self._all(RelativeToBaseline)
        return min((Fraction(fall.percent) for fall in falls if fall.quantity == "residual"), default=None)

    def margin_psi(self, required_psi: float, available_psi: float) -> float:
        """Return what must be left above the required pressure, psi; 0 where no row asks for any."""
        margins = [_margin_psi(row, required_psi, available_psi) for row in self._all(MarginRule)]
        return math.nan if any(math.isnan(margin) for margin in margins) else max(margins, default=0.0)

    def flow_test_valid_months(self) -> int | None:
        """Return for how many months a flow test may be judged by."""
        return min((row.months for row in self._all(ValidFor) if row.purpose == "judging"), default=None)

    def valve_shut_limit_hours(self) -> float | None:
        """Return after how many hours a shut valve is an impairment that needs more than a tag."""
        clocks = [rule.clock for rule in self.rules if rule.clock is not None]
        hours = [clock.hours for clock in clocks if clock.starts == "valve shut" and clock.hours is not None]
        return min(map(float, hours), default=None)

    def alarm_limit_s(self, which: Literal["device", "bell", "panel", "monitoring", "total"]) -> float | None:
        """Return the seconds within which that alarm must show after the connection is opened."""
        limits = [row.limit_s for row in self._all(TimeLimit) if row.quantity == f"alarm_{which}"]
        return min(map(float, limits), default=None)

    def delivery_increase_percent(self) -> Fraction | None:
        """Return the rise of the delivery time, in percent of acceptance, that asks for an investigation."""
        rises = [row for row in self._all(RelativeTimeIncrease) if row.quantity == "delivery"]
        return min((Fraction(row.percent) for row in rises), default=None)

    def delivery_limit_s(self, volume_gal: float | None = None, hazard: str | None = None) -> float | None:
        """Return the seconds from trip to water, for the volume of piping and the hazard where a row asks them."""
        rows = [row for row in self._all(TimeLimit) if row.quantity == "delivery"]
        fitting = [row.limit_s for row in rows if _fits(row, volume_gal, hazard)]
        return min(map(float, fitting), default=None)

    def gauge_accuracy_percent_full_scale(self) -> Fraction | None:
        """Return by how much of its full scale a gauge may differ from the reference gauge, percent."""
        rows = self._all(CompareAccuracy)
        return min((Fraction(row.percent_of_full_scale) for row in rows), default=None)

    def gauge_compare_months(self) -> int | None:
        """Return after how many months a gauge is replaced or compared."""
        rules = [rule for rule in self.rules if rule.satisfied_by == "gauge_comparison" and rule.per == "gauge"]
        months = [rule.frequency.months() for rule in rules if rule.frequency is not None]
        return min((count for count in months if count is not None), default=None)

    def _all(self, kind: type[_AnyCriterion]) -> Iterator[_AnyCriterion]:
        return (row for rule in self.rules for row in rule.criteria if isinstance(row, kind))


def is_required(rule: Rule) -> bool:
    """Return whether the row may be printed as required by its clause: only once somebody approved it."""
    return rule.mark == "approved"


def _margin_psi(row: MarginRule, required_psi: float, available_psi: float) -> float:
    parts = [] if row.absolute is None else [row.absolute.psi]
    if row.percent is not None:
        base = required_psi if row.percent_of == "required" else available_psi
        parts.append(float(Fraction(row.percent)) / 100 * base)
    if any(math.isnan(part) for part in parts):
        return math.nan
    if row.which_wins == "sum":
        return sum(parts)
    return min(parts, default=0.0) if row.which_wins == "lesser" else max(parts, default=0.0)


def _fits(row: TimeLimit, volume_gal: float | None, hazard: str | None) -> bool:
    if row.hazard is not None and row.hazard != hazard:
        return False
    if row.over_gal is not None and not (volume_gal is not None and volume_gal > row.over_gal):
        return False
    return row.up_to_gal is None or (volume_gal is not None and volume_gal <= row.up_to_gal)
