"""The margin at the recorded demand: two segments, kinds of supply, and when there is none."""

from __future__ import annotations

import math
from dataclasses import replace
from datetime import date
from typing import Any

import pytest

from fieldlog.assessment.curve_at_base import through_feed
from fieldlog.assessment.measured_supply import Measured, measured_supply
from fieldlog.hydraulics.supply import SupplyCurve
from fieldlog.records.criteria import MarginRule, ValidFor
from fieldlog.records.history import Design, FlowTest, ForwardFlowTest, PipeRun, StatedLoss, SupplyHistory
from fieldlog.records.rules import Rule
from fieldlog.units import Pressure
from tests.assessment.made import (
    AS_OF,
    BELOW,
    DESIGN,
    FLOW_TEST,
    MAIN,
    NOT_COMPARABLE,
    PROFILE,
    UNPROVEN,
    codes,
    drained,
    history,
    profile,
    read,
    said_of,
    steady_years,
    system,
)

MORE_TESTS = (*steady_years(), drained("2024-05-08", "81", "65"))


def measured(given: SupplyHistory, by: Any = PROFILE) -> Measured:
    return measured_supply(given, given.systems[0], by, AS_OF)


def names(found: Measured) -> set[str]:
    return {str(reason.code) for reason in (*found.below, *found.unproven, *found.not_comparable, *found.notes)}


def design(**changes: Any) -> Design:
    return replace(DESIGN, **changes)


# Main 4 psi and lead-in 3 psi at 600 gpm, 250 gpm hose at the street, lead-in resistance times five: by hand,
# 4 (850/600)^1.85 + 15 = 22.6; all flow through everything 36.2; hose ignored 19.0.
def test_two_segments_lose_what_each_flow_loses_in_its_own() -> None:
    one = 600**1.85
    assert 80 - SupplyCurve(80.0, 4 / one, 15 / one).available(600.0, 250.0) == pytest.approx(22.6, abs=0.05)
    assert 80 - SupplyCurve(80.0, 19 / one).available(600.0, 250.0) == pytest.approx(36.2, abs=0.05)
    assert 80 - SupplyCurve(80.0, 4 / one, 15 / one).pressure_at(600.0) == pytest.approx(19.0)


def test_a_street_test_is_brought_through_the_feed_to_the_base_of_riser() -> None:
    found = measured(history(system()))
    # By hand: 82 - 21 (670/1310)^1.85, less the feed (4.52 420^1.85 / (120^1.85 6.09^4.87) a foot), less 1 ft of rise.
    at_street = 82 - 21 * (670 / 1310) ** 1.85
    feed = 120 * 4.52 * 420**1.85 / (120**1.85 * 6.09**4.87)
    assert found.margin is not None
    assert found.margin.median_psi == pytest.approx(at_street - feed - 0.433 - 38, abs=1e-9)
    assert (found.margin.high_psi - found.margin.low_psi, found.margin.basis) == (10.0, "flow test")


def test_a_test_at_the_base_of_riser_is_split_at_the_hose_point_by_the_feed_on_record() -> None:
    at_base = replace(FLOW_TEST, at="base_of_riser", points=((900.0, 70.0),))
    long_feed = (PipeRun(20.0, 4.026, 120.0),)
    split = measured(history(system(feed=long_feed), flow_tests=(at_base,)))
    whole = measured(history(system(feed=()), flow_tests=(at_base,)))
    assert split.margin is not None
    assert whole.margin is not None
    path = through_feed(SupplyCurve(82.0, 0.0), system(feed=long_feed)).a_path
    source = 12.0 / 900**1.85 - path
    assert split.margin.median_psi == pytest.approx(82 - source * 670**1.85 - path * 420**1.85 - 0.433 - 38)
    assert whole.margin.median_psi < split.margin.median_psi
    assert "hose_through_all" in names(whole)


def test_a_listed_loss_counts_and_beyond_its_points_nothing_is_said() -> None:
    assembly = StatedLoss(((300.0, 6.0), (600.0, 9.0)), "backflow preventer")
    plain, lossy = measured(history(system())), measured(history(system(feed=(*system().feed, assembly))))
    assert plain.margin is not None
    assert lossy.margin is not None
    assert plain.margin.median_psi - lossy.margin.median_psi == pytest.approx(7.2)
    short = measured(history(system(feed=(StatedLoss(((300.0, 6.0),), "meter"),))))
    assert short.margin is None
    assert "demand_beyond_points" in names(short)


def test_a_street_test_without_a_feed_on_record_is_not_called_base_of_riser() -> None:
    found = measured(history(system(feed=())))
    assert found.margin is None
    assert names(found) == {"feed_not_recorded"}


def test_what_is_short_before_the_feed_is_short_behind_it() -> None:
    given = history(system(*MORE_TESTS, feed=(), design=design(demand_pressure_psi=79.0)))
    assert said_of(given).statement == BELOW


def test_a_missing_elevation_is_named_and_widens_the_band() -> None:
    found = measured(history(system(base_elevation_ft=None)))
    assert found.margin is not None
    assert found.margin.high_psi - found.margin.median_psi == pytest.approx(math.hypot(5, 1.645 * 2.5))
    assert "elevation_missing" in names(found)


def test_a_demand_that_holds_higher_up_needs_more_at_the_base() -> None:
    base, upper = (measured(history(system(design=design(elevation_ft=ft)))).margin for ft in (3.0, 26.1))
    assert base is not None
    assert upper is not None
    assert upper.required_psi - base.required_psi == pytest.approx(10.0, abs=0.01)


def test_where_it_is_unknown_whether_inside_hose_is_in_the_figure_both_are_shown_and_the_lower_decides() -> None:
    found = measured(history(system(design=design(includes_inside_hose=None))))
    note = next(reason for reason in found.notes if reason.code == "inside_hose_unknown")
    assert found.margin is not None
    assert found.margin.demand_flow_gpm == 470.0
    assert found.margin.median_psi == note.numbers["margin_with_psi"] < note.numbers["margin_without_psi"]  # type: ignore[operator]


def test_the_rule_margin_is_that_of_the_profile() -> None:
    ten = MarginRule(absolute=Pressure(value="10", unit="psi"))
    rule = Rule(
        id="margin.local", item="Margin", activity="test", mark="from memory", source="a local rule", criteria=(ten,)
    )
    found = measured(history(system()), profile(rules=(*PROFILE.rules, rule)))
    assert found.margin is not None
    assert found.margin.rule_margin_psi == 10.0


def test_demand_beyond_the_tested_flow_is_named() -> None:
    low = replace(FLOW_TEST, points=((500.0, 70.0),))
    assert "extrapolated" in names(measured(history(system(), flow_tests=(low,))))


def test_a_small_drop_is_never_drawn_beyond_the_tested_flow() -> None:
    # 90/85 psi at 1140 gpm, a published report: projected to 20 psi it would mean 4740 gpm.
    flat = replace(FLOW_TEST, static_psi=90.0, points=((1140.0, 85.0),))
    inside = measured(history(system(), flow_tests=(flat,)))
    assert inside.margin is not None
    beyond = measured(history(system(design=design(demand_flow_gpm=1200.0)), flow_tests=(flat,)))
    assert beyond.margin is None
    assert "flow_test_drop_small" in names(beyond)


def test_the_newest_flow_test_counts_and_one_past_its_age_proves_nothing() -> None:
    older = replace(FLOW_TEST, entry=20, performed_on=date(2015, 4, 2), points=((900.0, 70.0),))
    given = history(system(*MORE_TESTS), flow_tests=(FLOW_TEST, older))
    assert measured(given).flow_test is FLOW_TEST
    aged = history(system(*MORE_TESTS), flow_tests=(older,))
    statement = said_of(aged)
    assert statement.statement == UNPROVEN
    assert statement.margin_on_day is not None
    assert statement.reasons[0].code == "flow_test_old"


def test_where_no_rule_says_how_old_a_flow_test_may_be_that_is_said() -> None:
    def without_age(rule: Rule) -> bool:
        return not any(isinstance(one, ValidFor) for one in rule.criteria)

    silent = profile(rules=tuple(filter(without_age, PROFILE.rules)))
    found = measured(history(system(), flow_tests=(replace(FLOW_TEST, performed_on=date(1999, 4, 2)),)), silent)
    assert "flow_test_age_not_ruled" in names(found)
    assert not found.unproven


def test_without_a_flow_test_the_design_curve_is_used_and_says_so() -> None:
    stated = design(supply_static_psi=84.0, supply_residual_psi=66.0, supply_flow_gpm=1000.0, supply_elevation_ft=2.0)
    given = history(system(*MORE_TESTS, design=stated), flow_tests=())
    statement = said_of(given)
    assert statement.margin_on_day is not None
    assert statement.margin_on_day.basis == "design supply curve"
    assert statement.statement == UNPROVEN
    assert {"no_flow_test", "design_curve_only"} <= codes(statement)


@pytest.mark.parametrize(
    ("changes", "of"),
    [
        ({"feed": (PipeRun(40.0, 0.0, 120.0),)}, "feed"),
        ({"feed": (PipeRun(40.0, 4.026, 120.0, (("a fitting of nobody", 2),)),)}, "feed"),
        ({"feed": (StatedLoss(((-30.0, 5.0),), "meter"),)}, "feed"),
    ],
)
def test_figures_that_can_not_be_are_named_and_not_computed_with(changes: dict[str, Any], of: str) -> None:
    found = measured(history(system(**changes)))
    assert found.margin is None
    assert [reason.numbers["of"] for reason in found.unproven if reason.code == "figures_unusable"] == [of]


@pytest.mark.parametrize("points", [((900.0, 84.0),), ((0.0, 60.0),), ()])
def test_a_flow_test_whose_residual_does_not_fall_is_unusable(points: tuple[tuple[float, float], ...]) -> None:
    found = measured(history(system(), flow_tests=(replace(FLOW_TEST, points=points),)))
    assert found.margin is None
    assert "figures_unusable" in names(found)


@pytest.mark.parametrize(
    "changes",
    [{"demand_flow_gpm": None}, {"demand_pressure_psi": None}, {"demand_flow_gpm": -5.0}, {"hose_outside_gpm": -20.0}],
)
def test_without_a_demand_that_can_be_there_is_no_margin(changes: dict[str, Any]) -> None:
    assert names(measured(history(system(design=design(**changes))))) == {"no_demand"}


FORWARD = ForwardFlowTest(entry=55, performed_on=date(2024, 3, 6), item="assembly", flow_gpm=450.0, riser_psi=61.0)


def test_a_newer_forward_flow_test_at_demand_takes_the_place_of_the_flow_test() -> None:
    found = measured(history(system(forward_flow_tests=(FORWARD,))))
    assert found.margin is not None
    assert (found.margin.basis, found.margin.median_psi) == ("forward-flow test", 23.0)
    for other in (
        replace(FORWARD, flow_gpm=400.0),
        replace(FORWARD, performed_on=date(2021, 3, 6)),
        replace(FORWARD, riser_psi=None),
    ):
        older = measured(history(system(forward_flow_tests=(other,))))
        assert older.margin is not None
        assert older.margin.basis == "flow test"


BARRED = [
    {"kind": "pressure_tank"},
    {"kind": "parallel"},
    {"kind": "fire_pump"},
    {"pressure_reducing_valve": "sole feed"},
    {"pressure_reducing_valve": "one of several feeds"},
]


@pytest.mark.parametrize("kind", BARRED)
def test_no_margin_behind_a_reducing_valve_with_tank_pump_or_parallel_feeds_without_a_test_of_their_own(
    kind: dict[str, str],
) -> None:
    statement = said_of(history(system(*MORE_TESTS), supply=replace(MAIN, **kind)))  # type: ignore[arg-type]
    assert statement.margin_on_day is None
    assert statement.margin_low_day is None
    assert statement.statement == NOT_COMPARABLE
    assert "margin_measured" not in codes(statement)


@pytest.mark.parametrize("kind", BARRED)
def test_a_forward_flow_test_at_demand_is_such_a_test_and_still_gives_no_margin(kind: dict[str, str]) -> None:
    given = history(system(*MORE_TESTS, forward_flow_tests=(FORWARD,)), supply=replace(MAIN, **kind))  # type: ignore[arg-type]
    enough = said_of(given)
    assert (enough.statement, enough.margin_on_day) == (UNPROVEN, None)
    short = said_of(
        replace(given, systems=(system(*MORE_TESTS, forward_flow_tests=(replace(FORWARD, riser_psi=31.0),)),))
    )
    assert (short.statement, short.margin_on_day) == (BELOW, None)


PUMP = replace(MAIN, kind="fire_pump")
PUMP_TEST = FlowTest(
    entry=22, performed_on=date(2023, 8, 9), at="test_header", static_psi=140.0, points=((500.0, 125.0), (750.0, 95.0)),
    elevation_ft=2.0, pump_state="running",
)  # fmt: skip


def running(*tests: Any) -> tuple[Any, ...]:
    return tuple(replace(test, pump_state="running") for test in tests)


def test_a_fire_pump_is_judged_by_the_points_of_its_own_test_and_not_beyond_them() -> None:
    given = history(system(*running(*MORE_TESTS)), supply=PUMP, flow_tests=(FLOW_TEST, PUMP_TEST))
    found = measured(given)
    assert found.margin is not None
    assert found.margin.median_psi == pytest.approx(125 - 30 * 170 / 250 - 0.433 - 38)
    assert found.margin.basis == "pump test"
    beyond = measured(history(system(design=design(demand_flow_gpm=620.0)), supply=PUMP, flow_tests=(PUMP_TEST,)))
    assert beyond.margin is None
    twice = replace(PUMP_TEST, points=((500.0, 125.0), (500.0, 123.0), (750.0, 95.0)))
    assert measured(history(system(), supply=PUMP, flow_tests=(twice,))).margin is not None


def test_stated_points_of_a_pump_give_a_margin_that_no_test_has_proven() -> None:
    stated = replace(PUMP, points=(("running", 900.0, 90.0), ("running", 300.0, 135.0), ("off", 500.0, 60.0)))
    statement = said_of(history(system(*running(*MORE_TESTS)), supply=stated, flow_tests=()))
    assert statement.margin_on_day is not None
    assert statement.margin_on_day.basis == "stated points"
    assert statement.statement == UNPROVEN


def test_a_drain_test_in_another_state_of_the_pump_leaves_no_margin() -> None:
    unequal = (*running(*MORE_TESTS[:-1]), replace(MORE_TESTS[-1], pump_state="off"))
    statement = said_of(history(system(*unequal), supply=PUMP, flow_tests=(PUMP_TEST,)))
    assert (statement.statement, statement.margin_on_day) == (NOT_COMPARABLE, None)
    started = drained(
        "2024-05-08", "81", "95", static_before=read("81", pump_state="off"), residual=read("95", pump_state="running")
    )
    statement = said_of(history(system(*running(*MORE_TESTS[:-1]), started), supply=PUMP, flow_tests=(PUMP_TEST,)))
    assert (statement.statement, statement.margin_on_day) == (NOT_COMPARABLE, None)
