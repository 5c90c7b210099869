"""How sure a reading is: division, heap, bias of the gauge."""

from __future__ import annotations

import math
from dataclasses import replace
from datetime import date

import pytest

from fieldlog.assessment.reading_error import gauge_bias, heap_psi, instruments, reading_sigma
from fieldlog.records.history import GaugeComparison, GaugeReading
from tests.assessment.made import AS_OF, GAUGE, acceptance, drained, history, read, steady_years, system


# JCGM 100:2008, 4.3.7: a rectangle of width d has the standard deviation d / sqrt(12).
@pytest.mark.parametrize(
    ("division", "by_division"), [(1.0, 0.288675), (2.0, 0.57735), (5.0, 1.443376), (10.0, 2.886751)]
)
def test_a_division_counts_as_a_rectangle_beside_half_a_psi(division: float, by_division: float) -> None:
    assert reading_sigma(division) == pytest.approx(math.hypot(by_division, 0.5), abs=1e-6)


def test_a_noted_swing_takes_the_place_of_half_a_psi_and_a_dial_is_never_surer_than_a_quarter() -> None:
    assert reading_sigma(2.0, 4.0) == pytest.approx(math.hypot(0.57735, 4.0), abs=1e-5)
    assert reading_sigma(0.2, 0.05) == 0.25


@pytest.mark.parametrize(
    ("unit", "values", "step"),
    [
        ("psi", ["60", "75", "65", "80", "55", "70"], 5.0),
        ("psi", ["60", "70", "80", "90", "50", "100"], 10.0),
        ("psi", ["62", "74", "66", "80", "58", "72"], 2.0),
        ("psi", ["61", "74", "66", "80", "58", "72"], None),
        ("bar", ["4.5", "5.0", "6.5", "3.5", "5.5", "4.0"], 7.2519),
        ("bar", ["4.2", "5.0", "6.4", "3.6", "5.4", "4.0"], 2.9008),
        ("bar", ["4.1", "5.0", "6.3", "3.7", "5.4", "4.0"], 1.4504),
        ("kPa", ["410", "500", "630", "370", "540", "400"], 1.4504),
        ("kPa", ["420", "500", "640", "360", "540", "400"], 2.9008),
        ("kPa", ["450", "500", "650", "350", "550", "400"], 7.2519),
    ],
)  # fmt: skip
def test_the_heap_is_the_largest_step_that_all_of_the_newest_six_are_multiples_of(
    unit: str, values: list[str], step: float | None
) -> None:
    found = heap_psi([read(value, unit) for value in values])
    assert found == (None if step is None else pytest.approx(step, abs=1e-4))


def test_five_readings_tell_no_heap() -> None:
    assert heap_psi([read(value) for value in ("60", "75", "65", "80", "55")]) is None


def test_a_psi_reading_that_was_a_round_bar_is_heaped_after_exact_conversion() -> None:
    # 72.5 psi is 4.9987 bar, within one percent of a step of 0.5 bar.
    assert heap_psi([read(value) for value in ("72.5", "65.3", "58.0", "79.8", "87.0", "94.3")]) == pytest.approx(
        7.2519, abs=1e-4
    )


def test_the_heap_applies_from_the_first_reading_of_its_run_and_not_before() -> None:
    tests = (
        drained("2019-05-02", "81", "63"), drained("2020-05-02", "80", "65"), drained("2021-05-02", "85", "65"),
        drained("2022-05-02", "80", "60"),
    )  # fmt: skip
    given = history(system(*tests))
    found = instruments(given, AS_OF)
    first, second = given.systems[0].drain_tests[:2]
    assert found.division_psi(first.residual) == 1.0  # type: ignore[arg-type]
    assert found.division_psi(second.static_before) == 5.0  # type: ignore[arg-type]


def test_the_heap_is_that_of_the_day_judged() -> None:
    tests = (*steady_years()[:3], drained("2021-05-02", "85", "65"), drained("2022-05-02", "80", "60"))
    given = history(system(*tests))
    newest = given.systems[0].drain_tests[-1].residual
    assert newest is not None
    assert instruments(given, date(2024, 1, 9)).division_psi(newest) == 5.0
    assert instruments(given, date(2021, 8, 9)).division_psi(newest) == 1.0


def test_a_header_test_that_serves_three_systems_counts_once_in_a_run() -> None:
    def tests() -> tuple[object, ...]:
        return (drained("2020-05-02", "81", "63"), drained("2021-05-02", "80", "65"))

    given = history(*(system(*tests(), uid=uid) for uid in ("north", "south", "east")))  # type: ignore[arg-type]
    for one in given.systems:
        residual = one.drain_tests[-1].residual
        assert residual is not None
        assert instruments(given, AS_OF).division_psi(residual) == 1.0


def test_readings_without_a_named_gauge_and_those_of_a_supply_gauge_are_heaped_too() -> None:
    unnamed = history(system(*(drained(f"202{n}-05-02", "80", "65", gauge=None) for n in range(2, 5))))
    residual = unnamed.systems[0].drain_tests[-1].residual
    assert residual is not None
    assert instruments(unnamed, AS_OF).division_psi(residual) == 5.0
    routine = tuple(
        GaugeReading(60 + n, date(2024, n, 3), read(str(60 + 5 * n), gauge="lead-in gauge")) for n in range(1, 7)
    )
    supply = history(system(), gauge_readings=routine)
    assert instruments(supply, AS_OF).division_psi(routine[-1].reading) == 5.0


# ASME B40.100: percent of span by quarter; grade B 3-2-3 from memory, grade A 2-1-2.
@pytest.mark.parametrize(
    ("grade", "mean_psi", "sigma"),
    [("B", 100.0, 2.0), ("B", 30.0, 3.0), ("B", 170.0, 3.0), ("A", 100.0, 1.0), ("1A", 30.0, 1.0), (None, 100.0, 3.0)],
)
def test_the_bias_of_a_gauge_is_half_its_permissible_error(grade: str | None, mean_psi: float, sigma: float) -> None:
    bias = gauge_bias(replace(GAUGE, grade=grade), mean_psi, AS_OF)
    assert (bias.offset_psi, bias.sigma_psi) == (0.0, pytest.approx(sigma))


def test_a_gauge_not_on_record_is_taken_as_three_percent_of_the_usual_dial() -> None:
    assert gauge_bias(None, 70.0, AS_OF).sigma_psi == pytest.approx(4.5)


def test_a_comparison_replaces_the_grade_and_ages() -> None:
    compared = GaugeComparison(
        entry=70, performed_on=date(2022, 3, 1), points_psi=((60.0, 62.0), (90.0, 94.0)), outcome="kept",
        reference_accuracy_percent=0.5, reference_full_scale_psi=160.0,
    )  # fmt: skip
    gauge = replace(GAUGE, comparisons=(compared,))
    fresh, aged = (gauge_bias(gauge, 75.0, day) for day in (date(2022, 3, 1), date(2026, 3, 1)))
    assert fresh.offset_psi == 3.0
    assert fresh.sigma_psi == pytest.approx(math.hypot(0.4, reading_sigma(1.0)))
    # 0.3 percent of 200 psi a root of a year: 1.2 psi after four years.
    assert aged.sigma_psi == pytest.approx(math.hypot(fresh.sigma_psi, 1.2), rel=1e-3)
    assert gauge_bias(gauge, 75.0, date(2022, 2, 1)).sigma_psi == 2.0


def test_an_acceptance_read_on_another_gauge_has_its_own_run() -> None:
    other = tuple(drained(f"202{n}-05-02", "80", "65", gauge="other") for n in range(1, 4))
    given = history(system(acceptance(), *other))
    residual = given.systems[0].drain_tests[0].residual
    assert residual is not None
    assert instruments(given, AS_OF).division_psi(residual) == 1.0
