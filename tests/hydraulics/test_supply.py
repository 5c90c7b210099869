"""Supply curves: back and forth, moved, in two segments, behind devices and pumps."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import OutOfRangeError
from fieldlog.hydraulics.pipe import Pipe
from fieldlog.hydraulics.supply import LossCurve, PointCurve, SupplyCurve, drop_fraction, is_extrapolated

TESTED = SupplyCurve.from_flow_test(static_psi=83.0, residual_psi=61.0, flow_gpm=1240.0)
LEAD_IN = Pipe(length_ft=135.0, diameter_in=6.09, c=140.0, fittings=(("90 standard elbow", 2), ("gate valve", 1)))
LISTED = LossCurve(points=((250.0, 6.0), (900.0, 9.5), (1500.0, 14.0)))
PUMP = PointCurve(points=((1500.0, 78.0), (0.0, 142.0), (1000.0, 121.0)))

STATICS, DROPS, FLOWS = st.floats(30, 150), st.floats(0.1, 0.9), st.floats(100, 4000)


@given(static_psi=STATICS, drop=DROPS, flow_gpm=FLOWS)
def test_a_curve_passes_through_its_test(static_psi: float, drop: float, flow_gpm: float) -> None:
    residual_psi = static_psi * (1 - drop)
    curve = SupplyCurve.from_flow_test(static_psi, residual_psi, flow_gpm)
    assert curve.pressure_at(0.0) == static_psi
    assert curve.pressure_at(flow_gpm) == pytest.approx(residual_psi, abs=1e-9)


@given(static_psi=STATICS, drop=DROPS, flow_gpm=FLOWS, at_gpm=st.floats(50, 6000))
def test_the_flow_at_a_pressure_undoes_the_pressure_at_a_flow(
    static_psi: float, drop: float, flow_gpm: float, at_gpm: float
) -> None:
    curve = SupplyCurve.from_flow_test(static_psi, static_psi * (1 - drop), flow_gpm)
    # Below a thousandth of the static the subtraction itself has fewer digits than 1e-9.
    if static_psi - curve.pressure_at(at_gpm) > static_psi / 1000:
        assert curve.flow_at(curve.pressure_at(at_gpm)) == pytest.approx(at_gpm, rel=1e-9)


@given(at_gpm=st.floats(50, 1450))
def test_it_does_so_behind_pipe_and_listed_losses(at_gpm: float) -> None:
    curve = TESTED.through(LEAD_IN).with_loss(LISTED)
    assert curve.flow_at(curve.pressure_at(at_gpm)) == pytest.approx(at_gpm, rel=1e-9)


@given(
    points=st.lists(st.tuples(st.floats(150, 3000), st.floats(20, 78)), min_size=2, max_size=6), order=st.randoms()
)  # fmt: skip
def test_the_order_of_the_points_of_a_flow_test_does_not_matter(
    points: list[tuple[float, float]], order: object
) -> None:
    mixed = list(points)
    order.shuffle(mixed)  # type: ignore[attr-defined]
    one, other = SupplyCurve.from_points(81.0, points), SupplyCurve.from_points(81.0, mixed)
    assert one.a_source == pytest.approx(other.a_source, rel=1e-12)


def test_several_points_give_the_least_squares_resistance() -> None:
    points = [(640.0, 74.0), (1110.0, 62.0), (1530.0, 47.0)]
    curve = SupplyCurve.from_points(81.0, points)

    def squares(a: float) -> float:
        return sum((81.0 - a * flow**1.85 - residual) ** 2 for flow, residual in points)

    assert squares(curve.a_source) < min(squares(0.999 * curve.a_source), squares(1.001 * curve.a_source))


@given(flows=st.lists(st.floats(10, 1400), min_size=2, max_size=6))
def test_an_array_of_flows_gives_what_its_numbers_give(flows: list[float]) -> None:
    for curve in (TESTED, TESTED.through(LEAD_IN).with_loss(LISTED), PUMP):
        pressures = curve.pressure_at(np.array(flows))
        np.testing.assert_allclose(pressures, [curve.pressure_at(flow) for flow in flows], rtol=1e-12)
        np.testing.assert_allclose(curve.flow_at(pressures), [curve.flow_at(one) for one in pressures], rtol=1e-9)
        np.testing.assert_allclose(curve.available(np.array(flows), 90.0), [curve.available(x, 90.0) for x in flows])
        assert type(curve.pressure_at(flows[0])) is type(curve.flow_at(52.0)) is float


def test_hose_is_drawn_through_the_main_and_not_through_the_lead_in() -> None:
    # DEVELOPERS.md, Method §2: main 4 psi and lead-in 3 psi at 600 gpm, 250 gpm hose, lead-in five times as rough.
    main, lead_in = 4 / 600**1.85, 5 * 3 / 600**1.85
    split = SupplyCurve(static_psi=90.0, a_source=main, a_path=lead_in)
    lumped = SupplyCurve(static_psi=90.0, a_source=main + lead_in)
    assert round(90 - split.available(600.0, 250.0), 1) == 22.6
    assert round(90 - lumped.available(600.0, 250.0), 1) == 36.2
    assert round(90 - split.available(600.0, 0.0), 1) == 19.0


def test_a_pipe_in_two_halves_is_one_pipe() -> None:
    half = Pipe(length_ft=67.5, diameter_in=6.09, c=140.0, fittings=(("90 standard elbow", 1),))
    whole = replace(half, length_ft=135.0, fittings=(("90 standard elbow", 2),))
    halves = TESTED.through(half).through(half)
    assert halves.pressure_at(870.0) == pytest.approx(TESTED.through(whole).pressure_at(870.0), abs=1e-9)


def test_a_pipe_takes_away_its_loss_at_the_systems_own_flow() -> None:
    lost_psi = TESTED.available(870.0, 250.0) - TESTED.through(LEAD_IN).available(870.0, 250.0)
    assert lost_psi == pytest.approx(LEAD_IN.loss(870.0), abs=1e-9)


@pytest.mark.parametrize("curve", [TESTED, PUMP], ids=["main", "pump"])
def test_a_higher_point_has_less_and_a_lower_one_more(curve: SupplyCurve | PointCurve) -> None:
    # 0.433 psi/ft: plumbing code appendix E103 (2008).
    assert curve.at_elevation(12.0).pressure_at(700.0) == pytest.approx(curve.pressure_at(700.0) - 5.196, abs=1e-9)
    assert curve.at_elevation(-12.0).pressure_at(700.0) == pytest.approx(curve.pressure_at(700.0) + 5.196, abs=1e-9)


@pytest.mark.parametrize("curve", [TESTED, PUMP], ids=["main", "pump"])
def test_a_height_that_is_no_number_is_refused(curve: SupplyCurve | PointCurve) -> None:
    with pytest.raises(OutOfRangeError, match="height_ft"):
        curve.at_elevation(math.nan)


def test_no_flow_is_left_at_the_static_or_above() -> None:
    for curve in (TESTED, TESTED.with_loss(LISTED)):
        assert curve.flow_at(83.0) == 0.0
        assert curve.flow_at(97.0) == 0.0


def test_where_nothing_resists_no_flow_is_left_above_the_static_and_any_below() -> None:
    tank = SupplyCurve(static_psi=43.0, a_source=0.0)
    assert tank.flow_at(43.0) == tank.flow_at(47.0) == 0.0
    assert math.isinf(tank.flow_at(42.0))


def test_a_device_that_takes_pressure_before_water_moves_leaves_no_flow_above_the_rest() -> None:
    # Stated from 6 psi at no flow: 77 psi are left there, under the static of 83.
    behind = TESTED.with_loss(LossCurve(points=((0.0, 6.0), (800.0, 9.0))))
    assert behind.pressure_at(0.0) == 77.0
    assert behind.flow_at(np.array([83.0, 79.5, 77.0])).tolist() == [0.0, 0.0, 0.0]
    assert behind.flow_at(behind.pressure_at(330.0)) == pytest.approx(330.0, rel=1e-9)


# As of a backflow preventer: much at little flow, then less, then more again.
DIPPING = LossCurve(points=((60.0, 12.0), (300.0, 4.0), (1100.0, 13.0)))


@given(pressure_psi=st.floats(50, 95))
def test_behind_a_loss_that_dips_the_flow_is_the_largest_with_that_pressure(pressure_psi: float) -> None:
    behind = TESTED.with_loss(DIPPING)
    flows = np.linspace(0.0, 1100.0, 4401)
    has_it = flows[behind.pressure_at(flows) >= pressure_psi]
    found = behind.flow_at(pressure_psi)
    if behind.pressure_at(1100.0) > pressure_psi:
        assert math.isnan(found)
    elif not has_it.size:
        assert found == 0.0
    else:
        assert has_it[-1] - 1e-6 <= found <= has_it[-1] + 0.25 + 1e-6


def test_a_peak_of_pressure_between_two_listed_points_is_found() -> None:
    # a Q^1.85 against a loss that falls by 0.02 psi/gpm: highest where 1.85 a Q^0.85 is 0.02.
    curve = SupplyCurve(80.0, 2e-5, 4e-5).with_loss(LossCurve(points=((0.0, 25.0), (1200.0, 1.0))))
    peak_gpm = (0.02 / (1.85 * 6e-5)) ** (1 / 0.85)
    assert 300 < peak_gpm < 1100
    top_psi = curve.pressure_at(peak_gpm)
    assert top_psi > max(curve.pressure_at(0.0), curve.pressure_at(1200.0)) + 1
    assert peak_gpm < curve.flow_at(top_psi - 0.5) < 1200
    assert curve.flow_at(top_psi + 0.5) == 0.0


def test_a_listed_loss_is_interpolated_from_nothing_and_unknown_beyond_its_last_point() -> None:
    assert LISTED.loss(125.0) == pytest.approx(3.0)
    assert LISTED.loss(900.0) == pytest.approx(9.5)
    assert LISTED.loss(1200.0) == pytest.approx(11.75)
    assert math.isnan(LISTED.loss(1500.1))
    behind = TESTED.with_loss(LISTED)
    assert behind.pressure_at(1200.0) == pytest.approx(TESTED.pressure_at(1200.0) - 11.75, abs=1e-9)
    assert math.isnan(behind.pressure_at(1600.0))
    assert behind.flow_at(behind.pressure_at(1500.0)) == 1500.0
    assert math.isnan(behind.flow_at(behind.pressure_at(1500.0) - 2.0))


def test_of_two_listed_losses_the_shorter_one_bounds_what_is_known() -> None:
    short = LossCurve(points=((700.0, 4.0),))
    both = TESTED.with_loss(LISTED).with_loss(short)
    assert math.isnan(both.pressure_at(800.0))
    assert math.isnan(both.flow_at(both.pressure_at(700.0) - 2.0))
    assert both.flow_at(both.pressure_at(650.0)) == pytest.approx(650.0, rel=1e-9)


def test_a_pump_is_interpolated_between_its_points_and_unproven_beyond_them() -> None:
    assert PUMP.pressure_at(500.0) == pytest.approx(131.5)
    assert PUMP.pressure_at(1250.0) == pytest.approx(99.5)
    assert math.isnan(PUMP.pressure_at(1500.1))
    assert math.isnan(replace(PUMP, points=((300.0, 140.0), (1000.0, 121.0))).pressure_at(200.0))
    assert PUMP.flow_at(99.5) == pytest.approx(1250.0)
    assert math.isnan(PUMP.flow_at(77.0))
    assert math.isnan(PUMP.flow_at(143.0))


def test_a_pump_whose_curve_rises_first_gives_the_larger_of_two_flows() -> None:
    humped = PointCurve(points=((0.0, 100.0), (500.0, 110.0), (700.0, 110.0), (1000.0, 90.0)))
    assert humped.flow_at(105.0) == pytest.approx(775.0)
    assert humped.flow_at(95.0) == pytest.approx(925.0)
    assert humped.flow_at(110.0) == pytest.approx(700.0)
    assert math.isnan(humped.flow_at(111.0))


def test_hose_behind_a_pump_passes_the_pump() -> None:
    assert PUMP.available(900.0, 350.0) == pytest.approx(PUMP.pressure_at(1250.0), abs=1e-9)
    assert math.isnan(PUMP.available(1300.0, 250.0))


@pytest.mark.parametrize(
    "points", [((700.0, math.nan),), (), ((-60.0, 4.0),), ((60.0, -4.0),), ((60.0, 4.0), (60.0, 5.0), (90.0, 7.0))]
)
def test_a_listed_loss_needs_points_in_numbers_from_0_up_one_at_each_flow(
    points: tuple[tuple[float, float], ...],
) -> None:
    with pytest.raises(OutOfRangeError, match="listed loss"):
        LossCurve(points=points)


@pytest.mark.parametrize(
    "points",
    [
        ((700.0, 90.0),),
        ((700.0, 90.0), (700.0, 81.0), (900.0, 66.0)),
        (),
        ((700.0, math.nan), (900.0, 66.0)),
        ((-700.0, 90.0), (900.0, 66.0)),
    ],
)
def test_stated_points_need_two_different_flows(points: tuple[tuple[float, float], ...]) -> None:
    with pytest.raises(OutOfRangeError, match="stated points"):
        PointCurve(points=points)


@pytest.mark.parametrize("residual_psi", [81.0, 84.0, math.nan, math.inf])
def test_a_residual_that_is_not_below_the_static_gives_no_curve(residual_psi: float) -> None:
    with pytest.raises(OutOfRangeError, match="flow test: residual"):
        SupplyCurve.from_flow_test(81.0, residual_psi, 1240.0)


@pytest.mark.parametrize("flow_gpm", [0.0, -340.0, math.nan, math.inf])
def test_a_test_without_a_finite_flow_gives_no_curve(flow_gpm: float) -> None:
    with pytest.raises(OutOfRangeError, match="flow test: residual 61"):
        SupplyCurve.from_flow_test(81.0, 61.0, flow_gpm)


@pytest.mark.parametrize("static_psi", [math.nan, math.inf])
def test_a_static_that_is_no_number_gives_no_curve(static_psi: float) -> None:
    with pytest.raises(OutOfRangeError, match="static"):
        SupplyCurve.from_flow_test(static_psi, 61.0, 1240.0)


def test_a_residual_of_minus_infinity_gives_no_curve() -> None:
    with pytest.raises(OutOfRangeError, match="residual -inf psi"):
        SupplyCurve.from_flow_test(81.0, -math.inf, 1240.0)


def test_a_flow_test_without_a_point_gives_no_curve() -> None:
    with pytest.raises(OutOfRangeError, match="no point"):
        SupplyCurve.from_points(81.0, [])


@pytest.mark.parametrize("wrong", [-0.002, math.nan, math.inf])
@pytest.mark.parametrize("field", ["a_source", "a_path"])
def test_a_resistance_below_nothing_gives_no_curve(field: str, wrong: float) -> None:
    with pytest.raises(OutOfRangeError, match="resistances"):
        replace(TESTED, **{field: wrong})


@pytest.mark.parametrize("wrong", [-30.0, math.nan, math.inf])
def test_a_flow_or_hose_that_is_no_amount_is_refused(wrong: float) -> None:
    for curve in (TESTED, TESTED.with_loss(LISTED), PUMP):
        with pytest.raises(OutOfRangeError, match="flow_gpm: "):
            curve.available(wrong, 250.0)
        with pytest.raises(OutOfRangeError, match="outside_hose_gpm: "):
            curve.available(400.0, wrong)
        with pytest.raises(OutOfRangeError, match="flow_gpm: "):
            curve.pressure_at(np.array([400.0, wrong]))
    with pytest.raises(OutOfRangeError, match="flow_gpm: "):
        LISTED.loss(wrong)


def test_a_flow_beyond_the_tested_one_is_extrapolated() -> None:
    assert is_extrapolated(1240.5, 1240.0) is True
    assert is_extrapolated(1240.0, 1240.0) is False
    assert is_extrapolated(np.array([900.0, 1300.0]), 1240.0).tolist() == [False, True]
    for flow_gpm, tested_gpm in ((math.nan, 1240.0), (900.0, math.nan), (-900.0, 1240.0)):
        with pytest.raises(OutOfRangeError, match="_gpm: "):
            is_extrapolated(flow_gpm, tested_gpm)


def test_a_drop_is_a_share_of_the_static() -> None:
    assert drop_fraction(80.0, 60.0) == pytest.approx(0.25)
    for static_psi in (math.nan, math.inf, -80.0):
        with pytest.raises(OutOfRangeError, match="static_psi"):
            drop_fraction(static_psi, 60.0)
    with pytest.raises(OutOfRangeError, match="residual_psi"):
        drop_fraction(80.0, math.nan)


@pytest.mark.parametrize("wrong", [math.nan, math.inf])
def test_a_pressure_that_is_no_number_is_refused(wrong: float) -> None:
    for curve in (TESTED, TESTED.with_loss(LISTED), PUMP):
        with pytest.raises(OutOfRangeError, match="pressure_psi"):
            curve.flow_at(wrong)
