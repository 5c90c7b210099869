"""Every kind of criterion and every part of a rule goes through canonical text and comes back the same."""

from __future__ import annotations

from datetime import date

import msgspec
import pytest

from fieldlog.canonical import canonical_text
from fieldlog.records import criteria as c
from fieldlog.records import rules as r
from fieldlog.units import Flow, Pressure, Temperature

POINT = c.FlowPoint(
    flow=Flow(value="1375", unit="L/min"),
    pressure=Pressure(value="4.5", unit="bar"),
    hose=Flow(value="950", unit="L/min"),
    duration_minutes=60,
)
ONE_OF_EACH: list[c.Criterion] = [
    c.RelativeToBaseline(percent="12.5", quantity="static", comparison=">", against=("acceptance", "best")),
    c.AbsolutePoints(at="gauge C", of="stated points", points=(POINT,)),
    c.AbsoluteRange(quantity="air", low=Pressure(value="7", unit="psi"), high=Pressure(value="11", unit="psi")),
    c.TemperatureRange(quantity="valve room", low=Temperature(value="4.4", unit="C")),
    c.ScheduleRange(schedule=(c.GaugeRange(gauge="B2", low=POINT.pressure, cut_in=Pressure(value="3", unit="bar")),)),
    c.PressureAbove(quantity="air", above="trip", by=Pressure(value="20", unit="psi")),
    c.TimeLimit(quantity="alarm_device", limit_s=90),
    c.RelativeTimeIncrease(quantity="delivery", percent="50", comparison=">=", against=("acceptance",)),
    c.CompareAccuracy(percent_of_full_scale="3"),
    c.DurationAtLeast(quantity="water motor alarm", at_least_s=30),
    c.RateOfLoss(start=Pressure(value="40", unit="psi"), loss=Pressure(value="1.5", unit="psi"), hours="24"),
    c.StateMustBe(of="control valve", states=("open", "sealed")),
    c.PresentAndLegible(what="hydraulic design information sign"),
    c.CurveAtLeast(of="stated points", percent="95", points=(POINT,)),
    c.Ratio(numerator="water", denominator="air", low="5.5", high="6"),
    c.Sample(count=2, of="drains on a header", extend_to=8),
    c.Instrument(what="test gauge", percent_of_full_scale="1", range_times_working="2", certificate_months=12),
    c.MarginRule(absolute=Pressure(value="5", unit="psi")),
    c.ValidFor(purpose="judging", months=66),
]


def test_the_list_holds_one_of_each_kind() -> None:
    assert {type(one) for one in ONE_OF_EACH} == set(c.Criterion.__args__)


@pytest.mark.parametrize("criterion", ONE_OF_EACH, ids=lambda one: type(one).__name__)
def test_a_criterion_comes_back_from_its_text(criterion: c.Criterion) -> None:
    text = canonical_text(msgspec.to_builtins(criterion))
    assert msgspec.json.decode(text, type=c.Criterion) == criterion


def test_a_rule_with_all_its_parts_comes_back_from_its_text() -> None:
    rule = r.Rule(
        id="local.all_parts",
        item="Everything a rule can say",
        activity="test",
        mark="approved",
        source="invented",
        per="valve",
        satisfied_by="valve_status_test",
        clause="Invented 7 (2031) 5.6",
        applies_when=r.AppliesWhen(system_types=("wet",), heated=False, installed_from=date(1987, 2, 28)),
        triggers=(r.Trigger(event="valve reopened", within_days=3),),
        frequency=r.Frequency(
            every=7, unit="day", anchor="last done", most=9, gap_unit="day", grace_days=2,
            season=r.Season(name="frost", first_month=11, last_month=3),
        ),
        criteria=tuple(ONE_OF_EACH),
        classification=(r.Classification(result="shut", proposed="impairment", family_word="critical defect"),),
        clock=r.Clock(starts="valve shut", hours="2.5", notify=("insurer",), then="fire watch"),
        who_may=r.WhoMay(qualification="licence", witness="owner's representative"),
        record=r.RecordRule(keep="years", keep_years=3, filing_business_days=5, wording="as adopted"),
        deviation=r.Deviation(
            alternative="two inspections a year", document="letter 17", approver="authority having jurisdiction",
            in_force_from=date(2021, 3, 9), in_force_until=date(2026, 3, 9),
        ),
        approval=r.Approval(by="A. Licensed", on=date(2021, 3, 11), before="read"),
    )  # fmt: skip
    text = canonical_text(msgspec.to_builtins(rule))
    assert msgspec.json.decode(text, type=r.Rule) == rule


@pytest.mark.parametrize(
    "frequency",
    [
        {"every": 3, "unit": "month", "anchor": "last done", "least": 2},  # in what?
        {"every": 3, "unit": "month", "anchor": "last done", "most": 2, "gap_unit": "month"},
        {"every": 7, "unit": "day", "anchor": "last done", "most": 4, "gap_unit": "month"},
        {"every": 2, "unit": "hour", "anchor": "last done"},
    ],
)
def test_a_frequency_that_contradicts_itself_is_refused(frequency: dict[str, object]) -> None:
    with pytest.raises(msgspec.ValidationError):
        msgspec.convert(frequency, r.Frequency)
