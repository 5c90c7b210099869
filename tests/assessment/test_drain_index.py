"""The drain index: values derived by hand (no published source), and when there is none."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import pytest

from fieldlog.assessment.drain_index import Index, drain_k, index_of, index_sigma, pump_started
from fieldlog.assessment.reading_error import instruments, reading_sigma
from fieldlog.records.history import DrainTest
from tests.assessment.made import AS_OF, DRAIN, GAUGE, codes, drained, history, read, said, steady_years, system


def index(test: DrainTest, **changes: Any) -> Index | None:
    given = system(test, **changes)
    return index_of(test, given, instruments(history(given), AS_OF))


# 80/65, 72/58, 80/58: pinned at 0.31561, 0.32731, 0.51434.
@pytest.mark.parametrize(
    ("static", "residual", "x"), [("80", "65", 0.31561), ("72", "58", 0.32731), ("80", "58", 0.51434)]
)
def test_the_index_tells_a_lower_static_from_a_grown_resistance(static: str, residual: str, x: float) -> None:
    found = index(drained("2023-05-02", static, residual))
    assert found is not None
    assert found.index == pytest.approx(x, abs=5e-6)


def test_its_sigma_is_that_of_many_drawn_readings() -> None:
    import numpy as np

    draws = np.random.default_rng(7).normal((80.0, 62.0), (0.4, 0.9), (200_000, 2))
    drawn = (draws[:, 0] - draws[:, 1]) / draws[:, 1] ** 0.925
    assert index_sigma(18.0, 62.0, 0.4, 0.9) == pytest.approx(float(drawn.std()), rel=0.02)


def test_the_height_of_the_outlet_counts_in_the_drain_s_flow_and_not_in_the_drop() -> None:
    low = replace(DRAIN, outlet_elevation_ft=-6.0)  # the gauge stands at 4 ft: 4.33 psi more at the outlet
    found = index(drained("2023-05-02", "80", "60"), drain=low)
    assert found is not None
    assert found.index == pytest.approx(20.0 / 64.33**0.925)
    assert found.drop_psi == 20.0


def test_of_a_swinging_needle_the_mean_counts_and_half_the_swing_in_the_residual_s_error() -> None:
    swinging = drained("2023-05-02", "80", "61", residual=read("61", low_psi=58.0, high_psi=66.0))
    found = index(swinging)
    assert found is not None
    assert found.residual_psi == 62.0
    assert found.residual_sigma_psi == pytest.approx(math.hypot(1 / math.sqrt(12), 4.0))
    assert found.static.sigma_psi == pytest.approx(reading_sigma(1.0) / math.sqrt(2))


def test_a_drop_smaller_than_can_be_read_is_named() -> None:
    found = index(drained("2023-05-02", "80", "79"))
    assert found is not None
    assert [str(note.code) for note in found.notes] == ["index_smaller_than_read"]


def test_a_residual_above_the_static_has_no_index() -> None:
    assert index(drained("2023-05-02", "80", "84")) is None
    statement = said(*steady_years(), drained("2024-05-02", "80", "84"))
    assert "residual_above_static" in codes(statement)


def test_a_pump_that_started_within_the_test_leaves_no_index() -> None:
    started = drained(
        "2023-05-02", "80", "70", static_before=read("80", pump_state="off"), residual=read("70", pump_state="running")
    )
    assert index(started) is None
    assert pump_started(started) is not None
    assert pump_started(drained("2023-05-02", "80", "70", pump_state="running")) is None


@pytest.mark.parametrize(("size_in", "k"), [(2.0, 42.0), (2.5, 42.0), (1.97, 42.0), (1.25, 19.0), (0.75, 6.5)])
def test_k_is_that_of_the_size_class(size_in: float, k: float) -> None:
    assert drain_k(replace(DRAIN, size_in=size_in)) == k


def test_a_measured_k_goes_before_a_pitot_reading_and_that_before_length_and_size() -> None:
    pitoted = drained("2023-05-02", "80", "60", drain_pitot_psi=21.0)
    assert drain_k(replace(DRAIN, k=36.5), [pitoted]) == 36.5
    # 29.83 x 0.85 x 2.067^2 x sqrt(21) over sqrt(60), by hand.
    assert drain_k(DRAIN, [pitoted]) == pytest.approx(64.09, abs=0.01)
    # 20 ft of 2 in. pipe with an open end: 508 gpm at 60 psi (derived).
    assert drain_k(replace(DRAIN, length_ft=20.0)) == pytest.approx(508 / math.sqrt(60), abs=0.1)


def test_without_a_size_there_is_no_k() -> None:
    assert drain_k(None) is None
    assert drain_k(replace(DRAIN, size_in=None)) is None


def test_a_static_at_a_tank_is_brought_to_its_reference_level() -> None:
    low = drained("2023-05-02", "50", "38", tank_level_ft=12.0)
    given = system(low, gauges=(GAUGE,))
    found = index_of(low, given, instruments(history(given), AS_OF), 22.0)
    assert found is not None
    assert found.static_at_reference_psi == pytest.approx(54.33)
    assert found.static.psi == 50.0
