"""What a rule may ask, one type a kind of criterion; the tag stands in the stored text as `kind`.

Numbers are whole or decimal text, so that a rule has one canonical text; percents are read as exact fractions.
"""

from __future__ import annotations

from typing import Annotated, Literal

import msgspec

from fieldlog.units import DecimalText, Flow, Pressure, Temperature

Positive = Annotated[int, msgspec.Meta(ge=1)]
Percent = Annotated[str, msgspec.Meta(pattern=r"^(0|[1-9][0-9]{0,3})(\.[0-9]{1,6})?(?!\n)$", title="percent as text")]
AtLeastOrMore = Literal[">=", ">"]
AtMostOrLess = Literal["<=", "<"]
Reference = Literal["acceptance", "previous", "best"]
Timed = Literal[
    "alarm_device", "alarm_bell", "alarm_panel", "alarm_monitoring", "alarm_total",
    "trip", "delivery", "return", "refill",
]  # fmt: skip


def _tag(name: str) -> str:
    return "".join(f"_{letter.lower()}" if letter.isupper() else letter for letter in name).lstrip("_")


class _Part(msgspec.Struct, frozen=True, forbid_unknown_fields=True, omit_defaults=True, kw_only=True):
    pass


class _Tagged(_Part, frozen=True, kw_only=True, tag_field="kind", tag=_tag):
    pass


class FlowPoint(_Part, frozen=True, kw_only=True):
    """A flow with the pressure wanted at it, the hose stream counted in and how long it must last."""

    flow: Flow
    pressure: Pressure
    hose: Flow | None = None
    duration_minutes: Positive | None = None


class GaugeRange(_Part, frozen=True, kw_only=True):
    """The standing pressures of one gauge on a site's schedule, and where what feeds it cuts in and out."""

    gauge: str
    low: Pressure | None = None
    high: Pressure | None = None
    cut_in: Pressure | None = None
    cut_out: Pressure | None = None


class RelativeToBaseline(_Tagged, frozen=True, kw_only=True):
    """A fall of a quantity by so many percent of the same quantity in an earlier test."""

    percent: Percent
    quantity: Literal["residual", "static", "flow"]
    comparison: AtLeastOrMore
    against: tuple[Reference, ...]


class AbsolutePoints(_Tagged, frozen=True, kw_only=True):
    """Flows with wanted pressures at a named measuring point; `design demand` takes the recorded demand."""

    at: str
    of: Literal["stated points", "design demand"]
    points: tuple[FlowPoint, ...] = ()


class AbsoluteRange(_Tagged, frozen=True, kw_only=True):
    """A pressure must stand between two limits."""

    quantity: str
    low: Pressure | None = None
    high: Pressure | None = None


class TemperatureRange(_Tagged, frozen=True, kw_only=True):
    """A temperature must stand between two limits."""

    quantity: str
    low: Temperature | None = None
    high: Temperature | None = None


class ScheduleRange(_Tagged, frozen=True, kw_only=True):
    """Each gauge must stand within its own range; without a schedule here, the range noted with the gauge."""

    schedule: tuple[GaugeRange, ...] = ()


class PressureAbove(_Tagged, frozen=True, kw_only=True):
    """A pressure must stand so far above another one, and not under `at_least` where that is stated."""

    quantity: str
    above: str
    by: Pressure
    at_least: Pressure | None = None


class TimeLimit(_Tagged, frozen=True, kw_only=True):
    """A timed step must end within so many seconds, for a hazard or a volume of piping where stated."""

    quantity: Timed
    limit_s: Positive
    comparison: AtMostOrLess = "<="
    hazard: str | None = None
    sprinklers: Positive | None = None
    over_gal: Positive | None = None
    up_to_gal: Positive | None = None


class RelativeTimeIncrease(_Tagged, frozen=True, kw_only=True):
    """A timed step took so many percent longer than in an earlier test."""

    quantity: Timed
    percent: Percent
    comparison: AtLeastOrMore
    against: tuple[Reference, ...]


class CompareAccuracy(_Tagged, frozen=True, kw_only=True):
    """A gauge may differ from the reference gauge by so many percent of its full scale."""

    percent_of_full_scale: Percent
    comparison: AtMostOrLess = "<="


class DurationAtLeast(_Tagged, frozen=True, kw_only=True):
    """Something must last so many seconds."""

    quantity: str
    at_least_s: Positive


class RateOfLoss(_Tagged, frozen=True, kw_only=True):
    """A standing pressure may fall by so much in so many hours."""

    start: Pressure
    loss: Pressure
    hours: DecimalText
    comparison: AtMostOrLess = "<="


class StateMustBe(_Tagged, frozen=True, kw_only=True):
    """A part must be found in one of the named states."""

    of: str
    states: tuple[str, ...]


class PresentAndLegible(_Tagged, frozen=True, kw_only=True):
    """A sign or document must be there and can be read."""

    what: str


class CurveAtLeast(_Tagged, frozen=True, kw_only=True):
    """A pump's points must reach so many percent of a stated curve."""

    of: Literal["nameplate", "acceptance", "stated points"]
    percent: Percent
    points: tuple[FlowPoint, ...] = ()


class Ratio(_Tagged, frozen=True, kw_only=True):
    """The ratio of two readings must stand between two limits."""

    numerator: str
    denominator: str
    low: DecimalText | None = None
    high: DecimalText | None = None


class Sample(_Tagged, frozen=True, kw_only=True):
    """So many of a kind are enough; a finding extends the sample to so many (absent: to all)."""

    count: Positive
    of: str
    extend_to: Positive | None = None


class Instrument(_Tagged, frozen=True, kw_only=True):
    """What an instrument must be: accuracy, range against the working pressure, age of its certificate."""

    what: str
    percent_of_full_scale: Percent | None = None
    range_times_working: DecimalText | None = None
    certificate_months: Positive | None = None


class MarginRule(_Tagged, frozen=True, kw_only=True):
    """What must be left above the required pressure; with neither part stated, nothing need be left."""

    absolute: Pressure | None = None
    percent: Percent | None = None
    percent_of: Literal["required", "available"] | None = None
    which_wins: Literal["greater", "lesser", "sum"] | None = None

    def __post_init__(self) -> None:
        """Refuse a rule that leaves open what its percent is of, or which of its two parts counts."""
        if (self.percent is None) != (self.percent_of is None):
            raise ValueError("percent and percent_of come together")
        if self.absolute is not None and self.percent is not None and self.which_wins is None:
            raise ValueError("which_wins is missing: say greater, lesser or sum")


class ValidFor(_Tagged, frozen=True, kw_only=True):
    """A result may be used for so many months for the named purpose."""

    purpose: Literal["judging", "design"]
    months: Positive


Criterion = (
    RelativeToBaseline | AbsolutePoints | AbsoluteRange | TemperatureRange | ScheduleRange | PressureAbove
    | TimeLimit | RelativeTimeIncrease | CompareAccuracy | DurationAtLeast | RateOfLoss | StateMustBe
    | PresentAndLegible | CurveAtLeast | Ratio | Sample | Instrument | MarginRule | ValidFor
)  # fmt: skip
