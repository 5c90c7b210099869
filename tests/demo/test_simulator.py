"""What the simulator's gauges show follows from the supply, the drain and the dice that are named."""

from __future__ import annotations

import math
from datetime import date, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.demo.simulator import (
    Change,
    TrueGauge,
    TrueSupply,
    TrueSystem,
    dice,
    drain_open,
    left_at,
    resistance_of,
)
from fieldlog.hydraulics.supply import SupplyCurve

DAY = date(2023, 5, 17)
STEADY = TrueSupply(81.0, resistance_of(13.0, 600), season_psi=0.0, day_psi=0.0)


def index_of(static_psi: float, residual_psi: float) -> float:
    """The drain index, computed apart: DEVELOPERS.md, Method §4."""
    return float((static_psi - residual_psi) / residual_psi**0.925)


def days_of_a_year() -> list[date]:
    return [date(2023, 1, 1) + timedelta(days=count) for count in range(365)]


def test_a_flowing_drain_lies_on_the_supply_curve_and_on_the_orifice() -> None:
    resistance = resistance_of(17.0, 600)
    flowing = drain_open(81.0, resistance, 38.0, outlet_rise_ft=7.0)
    curve = SupplyCurve(81.0, resistance, 0.0, ())
    assert flowing.residual_psi == pytest.approx(float(curve.pressure_at(flowing.flow_gpm)), abs=1e-6)
    # 0.433 psi/ft: common practice of the trade.
    assert flowing.flow_gpm == pytest.approx(38.0 * math.sqrt(flowing.residual_psi - 0.433 * 7.0), rel=1e-9)


@given(st.floats(20, 200), st.floats(0.5, 90), st.floats(5, 60), st.floats(-20, 20))
def test_a_drain_flows_and_leaves_less_than_the_static(
    static_psi: float, loss_psi: float, k: float, rise_ft: float
) -> None:
    flowing = drain_open(static_psi, resistance_of(loss_psi, 600), k, rise_ft)
    assert flowing.flow_gpm > 0
    assert 0.433 * rise_ft < flowing.residual_psi < static_psi


@pytest.mark.parametrize("times", [4.0, 7.0, 10.0])
def test_a_restricted_feed_raises_the_index_by_what_it_adds_to_the_resistance(times: float) -> None:
    half_shut = Change(DAY, times)
    system = TrueSystem(resistance_of(6.0, 600), 42.0, (half_shut,))
    indexes = []
    for day in (DAY - timedelta(days=3), DAY + timedelta(days=3)):
        resistance = STEADY.resistance + system.feed_on(day)
        flowing = drain_open(81.0, resistance, system.drain_k_on(day))
        indexes.append(index_of(81.0, flowing.residual_psi))
    assert indexes[1] / indexes[0] == pytest.approx((13.0 + 6.0 * times) / (13.0 + 6.0), rel=1e-6)


def test_a_lower_static_leaves_the_index_as_it_is() -> None:
    resistance = resistance_of(19.0, 600)
    indexes = [
        index_of(static_psi, drain_open(static_psi, resistance, 38.0).residual_psi) for static_psi in (91.0, 64.0)
    ]
    assert indexes[0] == pytest.approx(indexes[1], rel=1e-6)


def test_an_altered_drain_changes_flow_and_index_but_not_the_static() -> None:
    rebuilt = TrueSystem(resistance_of(5.0, 600), 40.0, alterations=(Change(DAY, 0.8),))
    before, after = (
        drain_open(81.0, STEADY.resistance, rebuilt.drain_k_on(day)) for day in (DAY - timedelta(days=2), DAY)
    )
    assert after.flow_gpm < before.flow_gpm
    assert index_of(81.0, after.residual_psi) / index_of(81.0, before.residual_psi) == pytest.approx(
        0.8**1.85, rel=1e-6
    )


def test_the_season_comes_back_every_year_with_its_highest_in_february_and_its_lowest_in_august() -> None:
    supply = TrueSupply(81.0, 0.01, season_psi=2.0, day_psi=0.0)
    by_day = {day: supply.on(day, dice("any")).static_psi for day in days_of_a_year()}
    highest, lowest = max(by_day, key=by_day.__getitem__), min(by_day, key=by_day.__getitem__)
    assert (highest.month, lowest.month) == (2, 8)
    assert (by_day[highest] - 81.0, by_day[lowest] - 81.0) == pytest.approx((2.0, -2.0), abs=1e-3)
    later = supply.on(highest.replace(year=2031), dice("any")).static_psi
    assert later == pytest.approx(by_day[highest], abs=0.01)


def test_days_differ_by_their_stated_spread() -> None:
    supply = TrueSupply(81.0, 0.01, season_psi=0.0, day_psi=2.5)
    statics = [supply.on(DAY, dice("day", number)).static_psi for number in range(3000)]
    mean = sum(statics) / len(statics)
    spread = math.sqrt(sum((one - mean) ** 2 for one in statics) / (len(statics) - 1))
    assert mean == pytest.approx(81.0, abs=0.2)  # four standard errors of the mean
    assert spread == pytest.approx(2.5, rel=0.06)


def test_a_static_declines_a_little_each_day_and_steps_on_one() -> None:
    declining = TrueSupply(81.0, 0.01, 0.0, 0.0, (Change(DAY, -2.0, is_yearly=True),))
    stepped = TrueSupply(81.0, 0.01, 0.0, 0.0, (Change(DAY, -13.0),))
    after = DAY + timedelta(days=1461)  # four years
    assert declining.on(after, dice("x")).static_psi == pytest.approx(73.0)
    assert stepped.on(DAY - timedelta(days=1), dice("x")).static_psi == pytest.approx(81.0)
    assert stepped.on(after, dice("x")).static_psi == pytest.approx(68.0)


def test_what_was_repaired_is_as_before() -> None:
    blocked = Change(DAY, 10.0, until=DAY + timedelta(days=300))
    system = TrueSystem(0.02, 38.0, (blocked,))
    days = (DAY - timedelta(days=1), DAY, DAY + timedelta(days=299), DAY + timedelta(days=300))
    assert [system.feed_on(day) for day in days] == pytest.approx([0.02, 0.2, 0.2, 0.02])


def test_a_tank_stands_lower_and_its_static_with_it() -> None:
    tank = TrueSupply(64.0, 0.01, season_psi=0.0, day_psi=0.0, full_tank_m=3.0)
    states = [tank.on(DAY, dice("tank", number)) for number in range(40)]
    levels = {state.tank_level_m for state in states}
    assert len(levels) > 3
    for state in states:
        assert state.tank_level_m is not None
        assert 2.4 <= state.tank_level_m <= 3.0
        # 0.433 psi/ft, 0.3048 m/ft
        assert state.static_psi == pytest.approx(64.0 - 0.433 / 0.3048 * (3.0 - state.tank_level_m))


def test_a_gauge_that_slipped_shows_more_from_that_day_on() -> None:
    gauge = TrueGauge(bias_psi=-1.5, shifts=(Change(DAY, 11.0),), reader_psi=0.0)
    assert gauge.shows(72.0, DAY - timedelta(days=1), dice("x")) == pytest.approx(70.5)
    assert gauge.shows(72.0, DAY, dice("x")) == pytest.approx(81.5)


def test_a_needle_never_falls_below_its_stop() -> None:
    assert TrueGauge(bias_psi=-9.0).shows(2.0, DAY, dice("x")) == 0.0


def test_the_same_words_throw_the_same_dice_and_other_words_others() -> None:
    throws = {words: tuple(dice(*words).normal(size=4)) for words in (("mill", 3), ("mill", 4), ("mill3",))}
    assert tuple(dice("mill", 3).normal(size=4)) == throws["mill", 3]
    assert len(set(throws.values())) == 3


def test_a_loss_grows_by_the_power_of_the_flow() -> None:
    resistance = resistance_of(13.0, 600)
    assert left_at(81.0, resistance, 600) == pytest.approx(68.0)
    # Hazen-Williams exponent 1.85: doubled flow, 2^1.85 = 3.605 times the loss.
    assert left_at(81.0, resistance, 1200) == pytest.approx(81.0 - 13.0 * 3.605, abs=0.01)
