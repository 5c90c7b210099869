"""Tests of a day: in physical order, to the gauge's division, and odd only where the plan says so."""

from __future__ import annotations

from datetime import date
from fractions import Fraction
from typing import Any

import pytest

from fieldlog.demo import rounds, scenario
from fieldlog.demo.plan import Quirk, SitePlan, SystemPlan
from fieldlog.demo.rounds import Round
from fieldlog.demo.visits import attendances
from fieldlog.procedures.fields import PressureReading

AS_OF = date(2027, 4, 9)
SITES = {site.key: site for site in scenario.sites(AS_OF)}


def days(site: SitePlan, key: str) -> list[Round]:
    """The days at one system on which its main drain was due, oldest first."""
    return [
        day
        for visit in attendances(site, AS_OF)
        for day in visit.rounds
        if day.system.key == key and visit.is_due(day.system.tests_a_year)
    ]


def plans() -> list[tuple[SitePlan, SystemPlan]]:
    return [(site, system) for site in SITES.values() for system in site.systems]


def psi(reading: PressureReading | None) -> float:
    assert reading is not None
    return reading.psi


def readings_of(test: Any) -> tuple[float, float, float]:
    return psi(test.static_before), psi(test.residual), psi(test.static_after)


@pytest.mark.parametrize(("site", "system"), plans(), ids=lambda plan: plan.key)
def test_readings_of_ordinary_days_are_in_physical_order(site: SitePlan, system: SystemPlan) -> None:
    ordinary = [day for day in days(site, system.key) if not any(day.is_odd(odd.what) for odd in system.odd)]
    assert len(ordinary) >= 8
    for day in ordinary:
        before, residual, after = readings_of(rounds.main_drain_test(day))
        division_psi = system.gauge_on(day.on).division.psi
        assert 20 < residual < before < 160
        assert abs(before - after) <= 2 * division_psi + 2


@pytest.mark.parametrize(("site", "system"), plans(), ids=lambda plan: plan.key)
def test_every_reading_stands_on_a_division_of_its_gauge(site: SitePlan, system: SystemPlan) -> None:
    for day in days(site, system.key):
        test = rounds.main_drain_test(day)
        division = system.gauge_on(day.on).division
        for reading in (test.static_before, test.residual, test.static_after):
            assert reading is not None
            assert reading.unit == division.unit
            assert (Fraction(reading.value) / Fraction(division.value)).denominator == 1


def test_a_residual_follows_from_the_drain_and_the_supply_within_the_errors_of_reading() -> None:
    site = SITES["mill"]
    for day in days(site, "mill-2"):
        residual_psi = psi(rounds.main_drain_test(day).residual)
        flow_gpm = 42.0 * (residual_psi + 0.433 * 2.0) ** 0.5  # the gauge stands 2 ft above the outlet
        left_psi = day.state.static_psi - day.resistance * flow_gpm**1.85 - 0.433 * 3.0  # and 3 ft above the base
        assert residual_psi == pytest.approx(left_psi, abs=2.5)


def newest(key: str) -> Any:
    site = SITES[key.partition("-")[0]]
    return rounds.main_drain_test(days(site, key)[-1])


def test_a_drain_half_opened_leaves_a_higher_residual_and_says_so() -> None:
    before, residual, _ = readings_of(newest("orchard-3"))
    usual = [readings_of(rounds.main_drain_test(day)) for day in days(SITES["orchard"], "orchard-3")[:-1]]
    assert newest("orchard-3").fully_open is False
    assert before - residual < min(one[0] - one[1] for one in usual)


def test_a_running_pump_raises_both_readings_and_is_named() -> None:
    site = SITES["quarry"]
    earlier, last = (rounds.main_drain_test(day) for day in days(site, "quarry-1")[-2:])
    assert (earlier.pump_state, last.pump_state) == ("off", "running")
    assert psi(last.static_before) > psi(earlier.static_before) + 8


def test_a_valve_found_partly_shut_is_recorded_and_costs_residual() -> None:
    earlier, last = (rounds.main_drain_test(day) for day in days(SITES["orchard"], "orchard-1")[-2:])
    assert [valve.found for valve in last.valves] == ["open", "partly"]
    assert psi(last.residual) < psi(earlier.residual) - 3


def test_a_slow_return_is_not_steady_and_did_not_recover() -> None:
    test = newest("orchard-4")
    assert test.did_not_recover
    assert test.steady is False
    assert test.return_seconds.seconds >= 180
    assert psi(test.static_after) < psi(test.static_before) - 15


def test_next_to_nothing_is_left_behind_a_nearly_shut_valve() -> None:
    assert psi(newest("ferry-2").residual) < 5.0


def test_a_check_valve_holds_a_static_that_is_gone_afterwards() -> None:
    before, _, after = readings_of(newest("ferry-3"))
    assert before - after > 10


def odd_day(key: str, what: Quirk) -> Round:
    found = [day for day in days(SITES[key.partition("-")[0]], key) if day.is_odd(what)]
    assert len(found) == 1
    return found[0]


def test_a_misread_residual_is_the_only_low_one() -> None:
    misread = odd_day("mill-1", "misread")
    by_day = {day.back: psi(rounds.main_drain_test(day).residual) for day in days(SITES["mill"], "mill-1")}
    low = by_day.pop(misread.back)
    assert low < min(by_day.values()) - 2


def test_a_typing_slip_is_one_digit_off() -> None:
    right = rounds.main_drain_test(odd_day("harbour-1", "typing slip"))
    wrong = rounds.with_typing_slip(right)
    assert right.residual is not None
    assert wrong.residual is not None
    assert sum(a != b for a, b in zip(right.residual.value, wrong.residual.value, strict=True)) == 1
    assert wrong.static_before == right.static_before


def test_seconds_to_water_lengthen_by_more_than_half_over_ten_years() -> None:
    site = SITES["harbour"]
    taken = [rounds.inspectors_test(day).delivery for day in days(site, "harbour-3")]
    assert taken[0] is not None
    assert taken[-1] is not None
    assert taken[-1].seconds > 1.5 * taken[0].seconds


def test_flow_tests_are_written_in_the_units_of_the_site() -> None:
    bar, gallons = SITES["north"], SITES["mill"]
    metric = rounds.flow_test(bar.supplies[0], bar.units, date(2025, 5, 6), "north/x")
    customary = rounds.flow_test(gallons.supplies[0], gallons.units, date(2025, 5, 6), "mill/x")
    assert [point.flow.unit for point in metric.points if point.flow] == ["L/min", "L/min"]
    assert [len(point.outlets) for point in customary.points] == [2, 2]
    for test in (metric, customary):
        lower, upper = (psi(point.residual) for point in test.points)
        assert psi(test.static) > lower > upper > 20


def test_a_forward_flow_test_loses_pressure_on_its_way() -> None:
    site = SITES["north"]
    test = rounds.forward_flow_test(days(site, "north-2")[-1], 300)
    assert psi(test.upstream) > psi(test.downstream) > psi(test.at_riser) > 30
    assert test.flow is not None
    assert test.flow.gpm == pytest.approx(300, rel=0.01)
