"""Slopes and their significance, against scipy and by hand."""

from __future__ import annotations

import random

import pytest
from scipy import stats

from fieldlog.assessment.trend import mann_kendall, theil_sen
from tests.assessment.made import drained, said, steady_years


def drawn(seed: int) -> tuple[list[float], list[float]]:
    """Six to forty dates, some of them twice, with values that are tied more often the fewer digits they have."""
    rng = random.Random(seed)
    count = rng.randint(6, 40)
    days = rng.sample(range(4000), count) if rng.random() < 0.6 else [0, 31, *rng.choices(range(30), k=count - 2)]
    digits = rng.choice([0, 1, 5])
    return [day / 365.25 for day in sorted(days)], [round(rng.gauss(80, 3), digits) for _ in range(count)]


@pytest.mark.parametrize("seed", range(60))
def test_slope_band_and_probability_are_those_of_scipy(seed: int) -> None:
    years, values = drawn(seed)
    slope = stats.theilslopes(values, years, alpha=0.95)
    assert theil_sen(years, values) == pytest.approx((slope.slope, slope.low_slope, slope.high_slope), abs=1e-12)
    assert mann_kendall(years, values) == pytest.approx(stats.kendalltau(years, values).pvalue, abs=1e-12)


# Of n! orders one rises throughout and one falls: 2/720 for six, 2/24 for four (never under 0.05), by hand.
@pytest.mark.parametrize(("n", "p"), [(4, 2 / 24), (5, 2 / 120), (6, 2 / 720)])
def test_a_straight_fall_has_the_probability_of_one_order_in_all(n: int, p: float) -> None:
    assert mann_kendall(list(range(n)), [90.0 - 1.5 * k for k in range(n)]) == pytest.approx(p)


def test_the_slope_is_not_moved_by_one_misread_value() -> None:
    years = [float(n) for n in range(9)]
    values = [80.0 - 1.25 * year for year in years]
    values[4] = 15.0
    assert theil_sen(years, values)[0] == pytest.approx(-1.25)


def test_values_that_are_all_the_same_show_no_trend() -> None:
    assert mann_kendall([0.0, 1.0, 2.0, 3.5, 4.0, 5.0], [66.0] * 6) == 1.0
    assert theil_sen([0.0, 1.0, 2.0, 3.5, 4.0, 5.0], [66.0] * 6) == (0.0, 0.0, 0.0)


def test_values_that_differ_by_rounding_alone_are_tied() -> None:
    years = [float(n) for n in range(7)]
    exact, noisy = (
        [66.0 + n // 2 + k for n, k in enumerate(noise)] for noise in ([0.0] * 7, [0, 1e-9, 0, -1e-9, 0, 2e-9, 0])
    )
    assert mann_kendall(years, noisy) == mann_kendall(years, exact)


def test_trends_come_from_six_dates_on() -> None:
    assert said(*steady_years()[:5]).trends == ()
    assert [trend.quantity for trend in said(*steady_years()[:6]).trends] == ["static_psi", "drain_index"]
    twice = drained("2020-05-12", "80", "66", entry=99)
    assert said(*steady_years()[:5], twice).trends == ()


def test_tests_that_can_not_be_compared_never_enter_a_trend() -> None:
    odd = drained("2022-09-02", "95", "90", fully_open=False)
    plain, with_odd = said(*steady_years()), said(*steady_years()[:-1], odd, steady_years()[-1])
    assert with_odd.trends == plain.trends
