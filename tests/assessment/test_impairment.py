"""Suspected impairment: each sign, and that it stands until a later test without it."""

from __future__ import annotations

from dataclasses import replace
from datetime import date
from typing import Any

import pytest

from fieldlog.records.history import OpenImpairment, ValveFound, ValveStatusTest
from fieldlog.records.statement import SystemStatement
from tests.assessment.made import (
    CHANGED,
    GAUGE,
    HOLDING,
    IMPAIRED,
    NOT_COMPARABLE,
    acceptance,
    codes,
    drained,
    history,
    said,
    said_of,
    steady_years,
    system,
)

YEARS = steady_years()
GOOD = drained("2024-06-03", "81", "66")


def after(*tests: Any, **changes: Any) -> SystemStatement:
    return said(*YEARS, *tests, **changes)


# The stop rule: 5 psi or a tenth of the static, no return in 180 s, a quarter down with the static unmoved.
@pytest.mark.parametrize(
    ("now", "code"),
    [
        (drained("2024-05-08", "81", "8"), "residual_near_zero"),
        (drained("2024-05-08", "45", "5", "45"), "residual_near_zero"),
        (drained("2024-05-08", "81", "60", None, did_not_recover=True), "not_recovered"),
        (drained("2024-05-08", "81", "62", "70", return_s=185.0), "not_recovered"),
        (drained("2024-05-08", "81", "49"), "residual_fell_quarter"),
        (drained("2024-05-08", "81", "66", valves=(ValveFound("post", "shut", "open"),)), "valve_found_not_open"),
        (drained("2024-05-08", "81", "66", valves=(ValveFound("post", "partly", "open"),)), "valve_found_not_open"),
        (drained("2024-05-08", "81", "66", valves=(ValveFound("post", "open", "shut"),)), "valve_left_not_open"),
    ],
)
def test_each_sign_makes_an_impairment_suspected(now: Any, code: str) -> None:
    statement = after(now)
    assert statement.statement == IMPAIRED
    assert code in codes(statement)
    assert statement.next[:2] == ("check_valves_now", "tell_owner_now")


@pytest.mark.parametrize(
    "now",
    [
        drained("2024-05-08", "81", "8.2"),  # a tenth of 81 is 8.1; far down all the same, but see below
        drained("2024-05-08", "55", "44"),  # down a third, and so is the static
        drained("2024-05-08", "81", "50"),  # 24.2 percent
    ],
)
def test_the_signs_have_edges(now: Any) -> None:
    assert not codes(after(now)) & {"residual_near_zero", "not_recovered"}
    assert ("residual_fell_quarter" in codes(after(now))) is (now.residual.psi < 20)


def test_exactly_a_quarter_down_is_a_quarter_in_every_unit() -> None:
    bar = drained("2024-05-08", "5.6", "3.3", unit="bar")
    reference = acceptance(before="5.6", residual="4.4", unit="bar")
    assert "residual_fell_quarter" in codes(said(reference, bar))


def test_with_fewer_than_four_tests_the_static_may_differ_by_six_psi() -> None:
    near, far = (said(acceptance(), drained("2024-05-08", before, "48")) for before in ("75", "74"))
    assert near.statement == IMPAIRED
    assert far.statement == CHANGED


def test_a_normally_shut_valve_that_was_found_shut_is_no_sign() -> None:
    bypass = drained("2024-05-08", "81", "66", valves=(ValveFound("bypass", "shut", "shut"),))
    assert after(bypass, normally_shut=("bypass",)).statement == HOLDING
    assert after(bypass).statement == IMPAIRED


def test_an_unsettled_static_is_no_impairment_by_itself() -> None:
    assert after(drained("2024-05-08", "81", "66", "74", steady=False, return_s=20.0)).statement == NOT_COMPARABLE


LOW = drained("2024-05-08", "81", "40")


def test_it_stands_until_a_later_test_without_it() -> None:
    assert after(LOW, GOOD).statement == HOLDING
    partly_open = replace(GOOD, fully_open=False)
    standing = after(LOW, partly_open)
    assert standing.statement == IMPAIRED
    assert {"residual_fell_quarter", "stands_from", "not_fully_open"} <= codes(standing)


def test_a_second_low_test_is_no_answer_although_the_one_before_was_as_low() -> None:
    without_acceptance = YEARS[1:]
    again = drained("2024-06-03", "81", "40")
    assert said(*without_acceptance, LOW, again).statement == IMPAIRED
    assert said(*without_acceptance, LOW, again, drained("2024-07-03", "81", "65")).statement == HOLDING


def test_a_test_of_another_drain_is_no_answer_and_the_second_on_it_is() -> None:
    others = [drained(f"2024-0{month}-03", "81", "60", drain="drain-8") for month in (6, 7)]
    assert after(LOW, others[0]).statement == IMPAIRED
    assert after(LOW, *others).statement != IMPAIRED


def test_a_test_given_up_when_a_valve_was_found_shut_counts() -> None:
    given_up = replace(LOW, residual=None, static_after=None, valves=(ValveFound("post", "shut", "open"),))
    assert after(given_up).statement == IMPAIRED
    assert after(given_up, GOOD).statement == HOLDING


def test_a_valve_left_shut_stands_until_something_says_that_it_was_opened() -> None:
    left = drained("2024-05-08", "81", "66", valves=(ValveFound("post", "open", "shut"),))
    assert after(left, GOOD).statement == IMPAIRED
    seen_open = replace(GOOD, valves=(ValveFound("post", "open", "open"),))
    assert after(left, seen_open).statement == HOLDING
    status = ValveStatusTest(91, date(2024, 6, 5), "post", opened_at="2024-06-05T09:10:00-05:00", flow_seen=True)
    assert after(left, GOOD, valve_status_tests=(status,)).statement == HOLDING


def test_a_valve_shut_for_work_and_not_reopened_is_on_record() -> None:
    shut = ValveStatusTest(91, date(2024, 9, 16), "post", shut_at="2024-09-16T09:10:00-05:00")
    statement = after(GOOD, valve_status_tests=(shut,))
    assert statement.statement == IMPAIRED
    assert {"valve_left_not_open", "valve_shut_long"} <= codes(statement)
    no_rule = said_of(history(system(*YEARS, GOOD, valve_status_tests=(shut,))), by=None)
    assert "valve_shut_long" not in codes(no_rule)


def test_a_valve_shut_for_longer_than_the_rule_allows_stands_until_a_later_test() -> None:
    spell = ValveFound("post", "open", "open", "2024-05-07T08:00:00-05:00", "2024-05-08T07:00:00-05:00")
    long = drained("2024-05-08", "81", "66", valves=(spell,))
    assert codes(after(long)) >= {"valve_shut_long"}
    assert after(long).statement == IMPAIRED
    short = replace(long, valves=(replace(spell, opened_at="2024-05-07T17:30:00-05:00"),))
    assert after(short).statement == HOLDING
    assert after(long, GOOD).statement == HOLDING


def test_a_time_no_calendar_has_leaves_the_spell_untimed() -> None:
    odd = ValveFound("post", "open", "shut", "2024-13-41T08:00:00Z")
    assert codes(after(replace(GOOD, valves=(odd,)))) >= {"valve_left_not_open"}


def test_an_impairment_on_record_that_has_not_ended_stands() -> None:
    known = OpenImpairment(95, "north", "2024-08-02T10:00:00-05:00", "post indicator valve")
    assert after(GOOD, impairments=(known,)).statement == IMPAIRED
    later = replace(known, began_at="2024-10-02T10:00:00-05:00")
    assert after(GOOD, impairments=(later,)).statement == HOLDING
    assert said(impairments=(known,), gauges=(GAUGE,)).statement == IMPAIRED
