"""The six statements, each by a small history, and the cases that mislead."""

from __future__ import annotations

from dataclasses import replace
from datetime import date, timedelta
from typing import Any

import pytest

from fieldlog.records.criteria import MarginRule
from fieldlog.records.history import SupplyHistory, ValveFound
from fieldlog.records.rules import Rule
from fieldlog.records.statement import Statement
from fieldlog.units import Pressure
from tests.assessment.made import (
    AS_OF,
    BELOW,
    CHANGED,
    DESIGN,
    DRAIN,
    FLOW_TEST,
    GAUGE,
    HOLDING,
    IMPAIRED,
    MAIN,
    NOT_COMPARABLE,
    PROFILE,
    UNPROVEN,
    acceptance,
    codes,
    drained,
    history,
    judge,
    profile,
    read,
    said,
    said_of,
    steady_years,
    system,
)

YEARS = steady_years()
NOW = drained("2024-05-08", "81", "65")


def with_demand(psi: float) -> Any:
    return replace(DESIGN, demand_pressure_psi=psi)


def test_holding() -> None:
    statement = said(*YEARS, NOW)
    assert statement.statement == HOLDING
    assert statement.reasons[0].code == "holding"
    assert statement.next == ("next_test",)
    assert {"capacity", "valve_positions", "duration", "occupancy", "public_supply"} <= set(statement.cannot_show)


def test_suspected_impairment_comes_before_all_else() -> None:
    statement = said(*YEARS, drained("2024-05-08", "81", "6"), design=with_demand(79.0))
    assert statement.statement == IMPAIRED
    assert {"below_demand", "ten_percent"} <= codes(statement)


def test_below_demand() -> None:
    statement = said(*YEARS, drained("2024-05-08", "81", "55"), design=with_demand(77.0))
    assert statement.statement == BELOW
    assert (statement.reasons[0].code, statement.next[0]) == ("below_demand", "engineer_reviews")


def test_changed_by_the_ten_percent_criterion() -> None:
    statement = said(*YEARS, drained("2024-05-08", "81", "58"))
    assert statement.statement == CHANGED
    assert (statement.reasons[0].code, statement.next[0]) == ("ten_percent", "find_cause")


def test_changed_by_a_confirmed_reading_outside_its_band() -> None:
    fallen = drained("2024-05-08", "76", "62", confirmed="second gauge")
    assert said(*YEARS, fallen).statement == CHANGED


def test_a_reading_outside_its_band_that_nobody_confirmed_is_not_called_changed_nor_holding() -> None:
    statement = said(*YEARS, drained("2024-05-08", "76", "62"))
    assert statement.statement == UNPROVEN
    assert (statement.reasons[0].code, statement.next[0]) == ("static_outside_band", "second_gauge")


def test_not_comparable() -> None:
    statement = said(*YEARS, replace(NOW, fully_open=False))
    assert (statement.statement, statement.earlier) == (NOT_COMPARABLE, None)
    assert statement.ten_percent == ()
    assert statement.next[0] == "repeat_fully_open"


def test_not_comparable_keeps_the_worse_statement_before_it() -> None:
    changed = drained("2024-05-08", "81", "58")
    odd = [drained(f"2024-0{month}-08", "81", "66", took_full_flow=False) for month in (6, 7)]
    for tests in ((changed, odd[0]), (changed, *odd)):
        statement = said(*YEARS, *tests)
        assert (statement.statement, statement.earlier, statement.worst) == (NOT_COMPARABLE, CHANGED, CHANGED)
    assert said(*YEARS, changed, odd[0], drained("2024-08-08", "81", "66")).worst == HOLDING


def test_a_flag_that_later_tests_answered_does_not_stand_behind_a_reducing_valve() -> None:
    behind = replace(MAIN, pressure_reducing_valve="sole feed")
    tests = (
        acceptance(),
        drained("2019-05-08", "81", "58"),
        drained("2020-05-08", "81", "66"),
        drained("2021-05-08", "81", "65"),
    )
    statement = said_of(history(system(*tests), supply=behind))
    assert (statement.statement, statement.earlier) == (NOT_COMPARABLE, None)


UNPROVEN_BY = [
    ("no_demand", {"design": None}),
    ("drain_size_unknown", {"drain": replace(DRAIN, size_in=None)}),
    ("feed_not_recorded", {"feed": ()}),
    ("margin_low_bound", {"design": with_demand(72.0)}),
    ("blind_loss_above_margin", {"gauges": (replace(GAUGE, division_psi=10.0),), "design": with_demand(62.0)}),
]


@pytest.mark.parametrize(("code", "changes"), UNPROVEN_BY, ids=[code for code, _ in UNPROVEN_BY])
def test_unproven(code: str, changes: dict[str, Any]) -> None:
    statement = said(*YEARS, NOW, **changes)
    assert statement.statement == UNPROVEN
    assert code in codes(statement)


def test_unproven_without_a_flow_test_and_with_one_test_alone() -> None:
    assert said_of(history(system(*YEARS, NOW), flow_tests=())).reasons[0].code == "no_flow_test"
    alone = said(acceptance())
    assert (alone.statement, "few_comparable" in codes(alone)) == (UNPROVEN, True)
    assert "no_drain_test" in codes(said())


def test_the_rule_margin_decides_between_unproven_and_holding() -> None:
    ten = Rule(
        id="margin.local", item="Margin", activity="test", mark="from memory", source="a local rule",
        criteria=(MarginRule(absolute=Pressure(value="10", unit="psi")),),
    )  # fmt: skip
    given = history(system(*YEARS, NOW, design=with_demand(62.0)))
    assert said_of(given).statement == HOLDING  # about 12.7 psi left, 7.7 at the low end
    strict = said_of(given, by=profile(rules=(*PROFILE.rules, ten)))
    assert strict.statement == UNPROVEN
    assert {"margin_low_bound", "blind_loss_above_margin"} <= codes(strict)


def test_pairs_with_conditions_nobody_stated_never_hold() -> None:
    imported = [replace(test, fully_open=None, took_full_flow=None, drain_unchanged=None) for test in (*YEARS, NOW)]
    statement = said(*imported)
    assert statement.statement == UNPROVEN
    reason = next(one for one in statement.reasons if one.code == "conditions_not_stated")
    assert reason.numbers["conditions"] == "drain_unchanged, fully_open, took_full_flow"


def test_without_a_profile_nothing_holds_and_rules_are_not_made_up() -> None:
    statement = said_of(history(system(*YEARS, NOW), profiles=()), by=None)
    assert (statement.statement, statement.profile) == (UNPROVEN, None)
    assert {reason.code for reason in statement.reasons if reason.section == "8"} >= {"no_profile"}
    assert statement.margin_on_day is not None
    assert statement.margin_on_day.rule_margin_psi == 0.0
    assert "enter_profile" in statement.next


def test_a_profile_that_asks_for_a_low_day_is_told_which_day_was_judged() -> None:
    statement = said_of(history(system(*YEARS, NOW)), by=profile(judged_on="low_day"))
    assert "low_day_not_judged" in codes(statement)
    assert (statement.margin_low_day, statement.margin_on_day is None) == (None, False)


# What misleads


def test_one_misread_static_changes_nothing_and_asks_for_a_second_look() -> None:
    misread = drained("2024-05-08", "71", "65", "71")
    statement = said(*YEARS, misread)
    assert statement.statement == UNPROVEN
    assert statement.next[0] == "second_gauge"
    assert said(*YEARS, misread, drained("2024-05-20", "81", "65")).statement == HOLDING


def test_heaped_readings_are_named_and_raise_the_blind_loss() -> None:
    round_tests = [acceptance("2019-04-12", "80", "65")]
    round_tests += [drained(f"202{n}-05-08", "80", "65") for n in range(5)]
    fine = said(*YEARS, NOW)
    statement = said(*round_tests)
    heap = next(reason for reason in statement.reasons if reason.code == "heaped_readings")
    assert heap.numbers["step_psi"] == 5.0
    assert statement.blind_loss is not None
    assert fine.blind_loss is not None
    assert statement.blind_loss.loss_psi > 1.5 * fine.blind_loss.loss_psi  # type: ignore[operator]


def test_an_eight_year_gap_is_compared_over_it() -> None:
    statement = said(acceptance("2015-05-02"), drained("2016-05-02", "80", "65"), drained("2024-05-02", "80", "58"))
    assert statement.statement == CHANGED
    assert {row.against: row.flagged for row in statement.ten_percent}["previous"] is True


def test_a_pump_that_started_in_the_test_is_asked_about_and_holds_nothing() -> None:
    started = drained(
        "2024-05-08", "81", "95", static_before=read("81", pump_state="off"), residual=read("95", pump_state="running")
    )
    statement = said(*YEARS, started)
    assert statement.statement == NOT_COMPARABLE
    assert statement.reasons[1].code == "pump_started"
    unsaid = said(*YEARS, drained("2024-05-08", "81", "95", pump_state=None))
    assert unsaid.statement == UNPROVEN
    assert {"residual_above_static", "blind_loss_unknown"} <= codes(unsaid)


def test_trapped_pressure_is_not_taken_for_the_static() -> None:
    # 80 to 85 psi trapped over 64: the index would read 0.34 to 0.45 where 0.235 is true.
    years = [acceptance("2019-04-12", "64", "53"), *(drained(f"202{n}-05-08", "64", "53") for n in range(4))]
    trapped = drained("2024-05-08", "84", "53", "64")
    statement = said(*years, trapped)
    index = next(reason for reason in statement.reasons if reason.code == "drain_index")
    assert index.numbers["index"] == pytest.approx((64 - 53) / 53**0.925)
    assert "trapped_pressure" in codes(statement)
    assert "static_outside_band" not in codes(statement)


def test_two_tests_of_one_day_count_in_the_order_of_their_entries() -> None:
    first, second = drained("2024-05-08", "81", "40", entry=901), drained("2024-05-08", "81", "66", entry=902)
    assert said(*YEARS, second, first).statement == HOLDING


def test_a_system_behind_a_reducing_valve_is_held_against_its_set_points() -> None:
    behind = replace(MAIN, pressure_reducing_valve="sole feed", prv_static_psi=75.0, prv_residual_psi=66.0)
    statement = said_of(history(system(*YEARS, NOW), supply=behind))
    assert statement.statement == NOT_COMPARABLE
    assert [reason.numbers["of"] for reason in statement.reasons if reason.code == "set_point_differs"] == ["static"]
    assert statement.blind_loss is None


def test_the_statics_of_a_tank_are_brought_to_its_reference_level() -> None:
    tank = replace(MAIN, kind="gravity_tank", tank_level_reference_ft=30.0)
    years = [replace(test, tank_level_ft=30.0) for test in YEARS]
    low = drained("2024-05-08", "74", "60", tank_level_ft=14.0)
    assert "static_outside_band" not in codes(said_of(history(system(*years, low), supply=tank)))
    full = replace(low, tank_level_ft=30.0)
    assert "static_outside_band" in codes(said_of(history(system(*years, full), supply=tank)))


def many(*first: Any) -> tuple[Any, ...]:
    """The first tests, and 204 weekly ones after them."""
    weekly = [drained(date(2020, 1, 6) + timedelta(weeks=n), "81", "66" if n % 3 else "65") for n in range(204)]
    return (*first, *weekly)


def test_beyond_two_hundred_tests_the_older_ones_are_left_out_and_counted() -> None:
    statement = said(*many(acceptance("2015-04-12", "81", "67"), drained("2016-05-02", "82", "70")))
    left_out = next(reason for reason in statement.reasons if reason.code == "older_tests_left_out")
    assert left_out.numbers["tests"] == 5
    assert {row.against: row.entry for row in statement.ten_percent}["acceptance"] == date(2015, 4, 12).toordinal()


def test_what_an_old_test_says_of_the_drain_or_a_valve_does_not_age() -> None:
    altered = drained("2016-05-02", "82", "70", drain_unchanged=False)
    assert "acceptance" not in {row.against for row in said(*many(acceptance("2015-04-12"), altered)).ten_percent}
    left = drained("2016-05-02", "82", "70", valves=(ValveFound("post", "open", "shut"),))
    assert said(*many(acceptance("2015-04-12"), left)).statement == IMPAIRED


# As of, until when, which systems


def test_later_records_do_not_count_and_are_named_as_the_day_of_change() -> None:
    later = drained("2024-11-05", "81", "40")
    before = said_of(history(system(*YEARS, NOW, later)))
    assert (before.statement, before.valid_until) == (HOLDING, date(2024, 11, 5))
    assert said_of(history(system(*YEARS, NOW, later)), as_of=date(2024, 11, 5)).statement == IMPAIRED


def test_the_age_of_the_flow_test_is_the_day_of_change() -> None:
    # 66 months from 11 May 2022: 11 November 2027 is the last day within them.
    given = history(system(*YEARS, NOW))
    assert said_of(given).valid_until == date(2027, 11, 12)
    assert said_of(given, as_of=date(2027, 11, 11)).statement == HOLDING
    assert said_of(given, as_of=date(2027, 11, 12)).statement == UNPROVEN


def test_a_profile_s_last_day_and_the_next_one_s_first_are_days_of_change() -> None:
    ending = profile(in_force_until=date(2025, 3, 31))
    assert said_of(history(system(*YEARS, NOW), profiles=(ending,)), by=ending).valid_until == date(2025, 4, 1)
    coming = profile(in_force_from=date(2025, 1, 1), uid="next")
    assert said_of(history(system(*YEARS, NOW), profiles=(PROFILE, coming))).valid_until == date(2025, 1, 1)


def test_every_system_on_the_supply_has_a_statement_and_one_that_left_has_none() -> None:
    gone = system(*YEARS, uid="gone", on_supply_until=date(2024, 2, 1))
    given = history(system(*YEARS), system(*YEARS, uid="south"), gone)
    assert [one.system for one in judge(given, AS_OF, PROFILE, "0.1")] == ["north", "south"]
    assert len(judge(given, date(2024, 1, 31), PROFILE, "0.1")) == 3


# Nothing but the readings matters


def in_unit(given: SupplyHistory, unit: str) -> SupplyHistory:
    """The same readings as they would be typed in another unit, to nine decimals."""
    size = Pressure(value="1", unit=unit).exact()  # type: ignore[arg-type]

    def typed(reading: Any) -> Any:
        if reading is None:
            return None
        scaled = round(reading.exact_psi / size * 10**9)
        whole, part = divmod(scaled, 10**9)
        text = f"{whole}.{part:09d}".rstrip("0").rstrip(".")
        return read(text, unit, reading.gauge)

    def test_in(test: Any) -> Any:
        names = ("static_before", "residual", "static_after")
        return replace(test, **{name: typed(getattr(test, name)) for name in names})

    def system_in(one: Any) -> Any:
        tests = tuple(test_in(test) for test in one.drain_tests)
        return replace(one, drain_tests=tests)

    return replace(given, systems=tuple(map(system_in, given.systems)))


def numbers_of(value: Any) -> Any:
    """A statement as plain values, for a comparison within 1e-6."""
    import msgspec

    return msgspec.to_builtins(value)


def assert_equal(one: Any, other: Any, place: str = "") -> None:
    if isinstance(one, dict):
        assert one.keys() == other.keys(), place
        for key in one:
            assert_equal(one[key], other[key], f"{place}.{key}")
    elif isinstance(one, list | tuple):
        assert len(one) == len(other), place
        for count, (a, b) in enumerate(zip(one, other, strict=True)):
            assert_equal(a, b, f"{place}[{count}]")
    elif isinstance(one, float):
        assert other == pytest.approx(one, rel=1e-7, abs=1e-7), place
    else:
        assert one == other, place


HISTORIES = {
    "steady": (*YEARS, NOW),
    "flag": (*YEARS, drained("2024-05-08", "81", "58")),
    "restricted": (*YEARS, drained("2024-05-08", "81", "60", confirmed="second look")),
    "low": (*YEARS, drained("2024-05-08", "81", "40")),
    "trapped": (*YEARS, drained("2024-05-08", "92", "66", "80")),
    "heaped": tuple(drained(f"202{n}-05-08", "80", "65") for n in range(5)),
}


@pytest.mark.parametrize("name", HISTORIES)
@pytest.mark.parametrize("unit", ["bar", "kPa"])
def test_the_unit_of_entry_changes_nothing(name: str, unit: str) -> None:
    given = history(system(*HISTORIES[name]))
    assert_equal(numbers_of(said_of(given)), numbers_of(said_of(in_unit(given, unit))))


@pytest.mark.parametrize("name", HISTORIES)
def test_the_order_of_input_changes_nothing(name: str) -> None:
    older = replace(FLOW_TEST, entry=20, performed_on=date(2015, 4, 2), points=((900.0, 70.0),))
    given = history(
        system(*HISTORIES[name], gauges=(GAUGE, replace(GAUGE, uid="gauge-1", name="a"))), flow_tests=(older, FLOW_TEST)
    )
    turned = replace(
        given,
        systems=tuple(
            replace(one, drain_tests=one.drain_tests[::-1], gauges=one.gauges[::-1]) for one in given.systems
        ),
        flow_tests=given.flow_tests[::-1],
    )
    assert numbers_of(said_of(given)) == numbers_of(said_of(turned))


def test_a_statement_survives_json_to_the_last_digit() -> None:
    import msgspec

    from fieldlog.records.statement import SystemStatement

    for tests in HISTORIES.values():
        statement = said(*tests)
        assert msgspec.json.decode(msgspec.json.encode(statement), type=SystemStatement) == statement


def test_statements_never_use_words_of_approval() -> None:
    forbidden = {"pass", "fail", "safe", "adequate", "compliant"}
    assert not {word for one in Statement for word in one.value.split()} & forbidden
    assert not {word for code in all_codes() for word in code.split("_")} & forbidden


def all_codes() -> list[str]:
    from fieldlog.assessment.codes import CannotShow, CheckCode, NextCode, ReasonCode

    return [str(code) for kind in (ReasonCode, NextCode, CannotShow, CheckCode) for code in kind]


def test_every_gauge_of_a_reading_may_be_unknown() -> None:
    statement = said(*YEARS, NOW, gauges=())
    assert statement.statement == UNPROVEN
    assert {"division_unknown", "conditions_not_stated"} <= codes(statement)


def test_a_day_later_says_the_same() -> None:
    one, other = (said_of(history(system(*YEARS, NOW)), as_of=AS_OF + timedelta(days=n)) for n in (0, 1))
    assert replace(one, as_of=other.as_of) == other
