"""The formulas refuse what is outside their range, by name, and treat arrays as they treat numbers."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import OutOfRangeError
from fieldlog.hydraulics import formulas as f

# Every formula with usual arguments; those that may be 0, and those that may be negative.
USUAL: dict[Callable[..., Any], dict[str, float]] = {
    f.friction_loss: {"flow_gpm": 340.0, "c": 120.0, "diameter_in": 4.026},
    f.sprinkler_flow: {"k": 5.6, "pressure_psi": 23.0},
    f.sprinkler_pressure: {"k": 8.0, "flow_gpm": 31.0},
    f.pitot_flow: {"coefficient": 0.9, "diameter_in": 2.5, "pitot_psi": 18.0, "outlet_factor": 0.97},
    f.pumper_outlet_factor: {"pitot_psi": 4.5},
    f.elevation_pressure: {"height_ft": 37.0},
    f.velocity: {"flow_gpm": 210.0, "diameter_in": 3.068},
    f.velocity_pressure: {"flow_gpm": 210.0, "diameter_in": 3.068},
    f.density_flow: {"density_gpm_per_ft2": 0.15, "area_ft2": 1950.0},
    f.c_multiplier: {"c": 130.0},
    f.diameter_multiplier: {"actual_in": 4.26, "schedule_40_in": 4.026},
    f.drain_index: {"static_psi": 83.0, "residual_psi": 67.0, "outlet_residual_psi": 69.0},
    f.drain_flow: {"k": 42.0, "residual_psi": 58.0},
    f.drain_k: {"diameter_in": 2.067, "length_ft": 35.0, "residual_psi": 58.0, "coefficient": 0.8},
    f.trip_pressure: {"water_psi": 95.0, "ratio": 5.5},
}
MAY_BE_ZERO = {"flow_gpm", "pressure_psi", "pitot_psi", "density_gpm_per_ft2", "area_ft2", "length_ft", "water_psi"}
# What is subtracted or is a height; elsewhere the root of a residual is taken.
MAY_BE_NEGATIVE = {(f.elevation_pressure, "height_ft"), (f.drain_index, "static_psi"), (f.drain_index, "residual_psi")}
ARGUMENTS = [(formula, name) for formula, usual in USUAL.items() for name in usual]


def label(one: Any) -> str | None:
    return getattr(one, "__name__", None)


def may_be_zero(formula: Callable[..., Any], name: str) -> bool:
    return name in MAY_BE_ZERO or (formula, name) in {*MAY_BE_NEGATIVE, (f.drain_flow, "residual_psi")}


def test_the_list_has_every_formula() -> None:
    public = {one for name, one in vars(f).items() if callable(one) and getattr(one, "__module__", "") == f.__name__}
    assert {one for one in public if not one.__name__.startswith("_")} - {f.FrictionLaw} == set(USUAL)


@pytest.mark.parametrize(("formula", "name"), ARGUMENTS, ids=label)
@pytest.mark.parametrize("wrong", [math.nan, math.inf, -math.inf])
def test_what_is_no_finite_number_is_refused_by_name(formula: Callable[..., Any], name: str, wrong: float) -> None:
    with pytest.raises(OutOfRangeError, match=name):
        formula(**USUAL[formula] | {name: wrong})


@pytest.mark.parametrize(("formula", "name"), ARGUMENTS, ids=label)
def test_a_negative_number_is_refused_by_name_where_it_means_nothing(formula: Callable[..., Any], name: str) -> None:
    given_amounts = USUAL[formula] | {name: -7.0}
    if (formula, name) in MAY_BE_NEGATIVE:
        assert math.isfinite(formula(**given_amounts))
    else:
        with pytest.raises(OutOfRangeError, match=name):
            formula(**given_amounts)


@pytest.mark.parametrize(("formula", "name"), ARGUMENTS, ids=label)
def test_zero_is_refused_only_where_it_means_nothing(formula: Callable[..., Any], name: str) -> None:
    given_amounts = USUAL[formula] | {name: 0.0}
    if may_be_zero(formula, name):
        assert math.isfinite(formula(**given_amounts))
    else:
        with pytest.raises(OutOfRangeError, match=name):
            formula(**given_amounts)


@pytest.mark.parametrize(("formula", "name"), ARGUMENTS, ids=label)
def test_one_wrong_number_in_an_array_is_refused(formula: Callable[..., Any], name: str) -> None:
    usual = USUAL[formula]
    with pytest.raises(OutOfRangeError, match=name):
        formula(**usual | {name: np.array([usual[name], math.nan])})


@pytest.mark.parametrize(("formula", "name"), ARGUMENTS, ids=label)
@given(factors=st.lists(st.floats(0.3, 3.0), min_size=2, max_size=5))
def test_an_array_gives_what_its_numbers_give(formula: Callable[..., Any], name: str, factors: list[float]) -> None:
    usual = USUAL[formula]
    amounts = [usual[name] * factor for factor in factors]
    together = formula(**usual | {name: np.array(amounts)})
    one_by_one = [formula(**usual | {name: amount}) for amount in amounts]
    assert isinstance(together, np.ndarray)
    assert all(type(one) is float for one in one_by_one)
    np.testing.assert_allclose(together, one_by_one, rtol=1e-13)


@given(k=st.floats(1.3, 29.4), pressure_psi=st.floats(0.5, 175))
def test_the_pressure_of_a_sprinkler_undoes_its_flow(k: float, pressure_psi: float) -> None:
    assert f.sprinkler_pressure(k, f.sprinkler_flow(k, pressure_psi)) == pytest.approx(pressure_psi, rel=1e-9)


@given(flow_gpm=st.floats(1, 3000), c=st.floats(60, 150), diameter_in=st.floats(0.6, 12))
def test_more_flow_loses_more_and_a_wider_or_smoother_pipe_less(flow_gpm: float, c: float, diameter_in: float) -> None:
    loss = f.friction_loss(flow_gpm, c, diameter_in)
    assert f.friction_loss(1.01 * flow_gpm, c, diameter_in) > loss
    assert f.friction_loss(flow_gpm, 1.01 * c, diameter_in) < loss
    assert f.friction_loss(flow_gpm, c, 1.01 * diameter_in) < loss


@given(length_ft=st.floats(0.1, 200), residual_psi=st.floats(5, 150))
def test_outlet_and_pipe_of_the_estimated_drain_take_up_the_residual(length_ft: float, residual_psi: float) -> None:
    flow_gpm = f.drain_k(2.067, length_ft, residual_psi) * residual_psi**0.5
    outlet_psi = (flow_gpm / (29.84 * 0.85 * 2.067**2)) ** 2
    pipe_psi = length_ft * f.friction_loss(flow_gpm, 120, 2.067)
    assert outlet_psi + pipe_psi == pytest.approx(residual_psi, rel=1e-6)


@pytest.mark.parametrize("length_ft", [0, 1e-18, 1e-13])
def test_a_drain_without_pipe_to_speak_of_is_its_outlet(length_ft: float) -> None:
    assert f.drain_k(2.067, length_ft, 58.0) == pytest.approx(29.84 * 0.85 * 2.067**2, rel=1e-12)


def test_a_pumper_outlets_factor_lies_between_its_neighbours_and_stops_at_the_ends() -> None:
    assert f.pumper_outlet_factor(4.5) == pytest.approx(0.875)
    assert f.pumper_outlet_factor(np.array([0.4, 30.0])).tolist() == [0.97, 0.83]


def test_the_velocity_is_that_of_continuity() -> None:
    # By definition: a US gallon is 231 in.3; 210 gpm in 3.068 in.
    inches_a_minute = 210 * 231 / (math.pi / 4 * 3.068**2)
    assert f.velocity(210.0, 3.068) == pytest.approx(inches_a_minute / 12 / 60, rel=1e-4)


def test_a_residual_above_the_static_gives_a_negative_index() -> None:
    assert f.drain_index(63, 66) < 0
