"""Which static a test tells, and what it says of the return."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import pytest

from fieldlog.assessment.reading_error import Instruments, instruments, reading_sigma
from fieldlog.assessment.statics import is_not_recovered, static_of
from fieldlog.records.history import DrainTest
from tests.assessment.made import AS_OF, GAUGE, drained, history, system

ONE_PSI = reading_sigma(1.0)


def with_gauge(test: DrainTest, **changes: Any) -> Instruments:
    return instruments(history(system(test, gauges=(replace(GAUGE, **changes),))), AS_OF)


def test_the_static_is_the_mean_of_before_and_after() -> None:
    test = drained("2023-05-02", "81", "65", "80")
    static = static_of(test, with_gauge(test))
    assert static is not None
    assert static.psi == 80.5
    assert static.sigma_psi == pytest.approx(ONE_PSI / math.sqrt(2))


@pytest.mark.parametrize(("behind", "psi"), [("check", 80.0), ("alarm", 80.0), ("backflow", 80.0), ("prv", 80.5)])
def test_behind_a_valve_that_holds_pressure_the_static_after_counts(behind: str, psi: float) -> None:
    test = drained("2023-05-02", "81", "65", "80")
    static = static_of(test, with_gauge(test, behind=(behind,)))
    assert static is not None
    assert static.psi == psi


def test_a_static_before_far_over_the_one_after_was_trapped() -> None:
    test = drained("2023-05-02", "84", "55", "64")
    static = static_of(test, with_gauge(test))
    assert static is not None
    assert (static.psi, [str(note.code) for note in static.notes]) == (64.0, ["trapped_pressure"])


@pytest.mark.parametrize(("after", "psi"), [("79.6", 80.3), ("79.3", 79.3)])
def test_trapped_begins_at_twice_the_error_of_a_difference(after: str, psi: float) -> None:
    test = drained("2023-05-02", "81", "65", after)  # 2 sqrt(2) x 0.577 = 1.63 psi
    static = static_of(test, with_gauge(test))
    assert static is not None
    assert static.psi == pytest.approx(psi)


def test_a_static_before_alone_is_less_sure_by_two_psi() -> None:
    test = drained("2023-05-02", "81", "65", None)
    static = static_of(test, with_gauge(test))
    assert static is not None
    assert static.sigma_psi == pytest.approx(math.hypot(ONE_PSI, 2.0))
    assert [str(note.code) for note in static.notes] == ["static_before_only"]


def test_a_static_after_alone_is_the_static() -> None:
    test = drained("2023-05-02", "81", "65", "79", static_before=None)
    static = static_of(test, with_gauge(test))
    assert static is not None
    assert static.psi == 79.0


def test_a_static_that_was_not_steady_is_missing_and_no_impairment() -> None:
    test = drained("2023-05-02", "81", "65", "70", steady=False, return_s=40.0)
    assert static_of(test, with_gauge(test)) is None
    assert not is_not_recovered(test, with_gauge(test))


@pytest.mark.parametrize(
    ("after", "return_s", "recovered"),
    [("76", 200.0, False), ("78.2", 200.0, True), ("76", 170.0, True), ("77.9", 180.0, False), ("76", None, True)],
)
def test_not_recovered_is_more_than_three_psi_under_after_three_minutes(
    after: str, return_s: float | None, recovered: bool
) -> None:
    test = drained("2023-05-02", "81", "65", after, return_s=return_s)
    assert is_not_recovered(test, with_gauge(test)) is not recovered


def test_a_coarse_gauge_needs_a_larger_gap_to_call_it_not_recovered() -> None:
    test = drained("2023-05-02", "81", "65", "77.5", return_s=240.0)
    assert is_not_recovered(test, with_gauge(test))
    assert not is_not_recovered(test, with_gauge(test, division_psi=5.0))  # 2 sqrt(2) x 1.53 = 4.3 psi


def test_behind_a_check_valve_a_steady_static_after_is_the_true_one() -> None:
    test = drained("2023-05-02", "84", "55", "64", return_s=240.0)
    assert not is_not_recovered(test, with_gauge(test, behind=("check",)))
    assert is_not_recovered(replace(test, steady=None), with_gauge(test, behind=("check",)))


def test_a_ticked_no_return_needs_no_seconds() -> None:
    test = drained("2023-05-02", "81", "65", None, did_not_recover=True, return_s=None)
    assert is_not_recovered(test, with_gauge(test))
    assert static_of(test, with_gauge(test)) is None
