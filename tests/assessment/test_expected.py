"""Where the next readings should fall."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from fieldlog.assessment.expected import residual_at, student_interval
from tests.assessment.made import GAUGE, acceptance, codes, drained, said, steady_years


# t at 0.995: 5.841 (3), 4.604 (4), 4.032 (5), 3.250 (9), 2.845 (20): NIST/SEMATECH e-Handbook, 1.3.6.7.2.
@pytest.mark.parametrize(("n", "t"), [(4, 5.841), (5, 4.604), (6, 4.032), (10, 3.250), (21, 2.845)])
def test_the_band_has_the_printed_t_value(n: int, t: float) -> None:
    values = [71.0, 77.0] * (n // 2) + [74.0] * (n % 2)
    spread = stats.tstd(values)
    interval = student_interval(values, 0.3)
    assert interval is not None
    assert interval.mean == pytest.approx(74.0)
    assert interval.half == pytest.approx(t * spread * (1 + 1 / n) ** 0.5, rel=2e-4)


def test_readings_that_agree_too_well_are_not_surer_than_one_reading() -> None:
    interval = student_interval([74.0, 74.0, 74.0, 74.0], 0.6)
    assert interval is not None
    assert interval.half == pytest.approx(5.841 * 0.6 * 1.25**0.5, rel=2e-4)


def test_three_tests_give_no_band() -> None:
    assert student_interval([74.0, 75.0, 73.0], 0.6) is None
    assert said(acceptance(), drained("2022-05-02", "81", "65"), drained("2023-05-02", "80", "65")).expected == ()


@given(st.floats(20, 150), st.floats(0.01, 4.0))
def test_the_residual_undoes_the_index(static_psi: float, x: float) -> None:
    residual = residual_at(static_psi, x)
    assert residual + x * residual**0.925 == pytest.approx(static_psi, rel=1e-9)


def test_the_next_readings_are_expected_around_the_earlier_ones() -> None:
    (band,) = said(*steady_years()).expected
    assert band.static_low_psi < 79 < 82.5 < band.static_high_psi
    assert band.residual_low_psi < 64.5 < 67.5 < band.residual_high_psi
    assert band.static_high_psi - band.static_low_psi < 8


def test_a_static_that_fell_takes_the_residual_s_band_with_it() -> None:
    lower = said(*steady_years(), drained("2024-05-02", "71", "57", confirmed="second look"))
    assert "static_outside_band" in codes(lower)
    assert "residual_outside_band" not in codes(lower)


def test_a_residual_that_fell_with_the_static_unmoved_is_outside_its_band() -> None:
    restricted = said(*steady_years(), drained("2024-05-02", "81", "60", confirmed="second look"))
    assert {"residual_outside_band"} == codes(restricted) & {"static_outside_band", "residual_outside_band"}


def test_a_replaced_gauge_widens_the_bands_it_is_held_against() -> None:
    newer = replace(GAUGE, uid="gauge-9", name="new gauge")
    shifted = drained("2024-05-02", "85", "69", gauge="gauge-9", confirmed="second gauge")
    same = replace(shifted, static_before=replace(shifted.static_before, gauge="gauge-3"),  # type: ignore[type-var]
                   residual=replace(shifted.residual, gauge="gauge-3"), static_after=None)  # type: ignore[type-var]  # fmt: skip
    assert "static_outside_band" in codes(said(*steady_years(), same))
    statement = said(*steady_years(), shifted, gauges=(GAUGE, newer))
    assert "static_outside_band" not in codes(statement)
    assert "gauge_replaced" in codes(statement)
