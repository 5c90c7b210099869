"""Pipe with fittings: worked by hand, and in parts."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import OutOfRangeError
from fieldlog.hydraulics.formulas import friction_loss
from fieldlog.hydraulics.pipe import Pipe

FITTED = (("90 standard elbow", 3), ("gate valve", 2))  # 4 in.: 3 x 10 + 2 x 2 = 34 ft at C 120


def test_fittings_of_schedule_40_at_c_120_count_as_printed() -> None:
    pipe = Pipe(length_ft=87.0, diameter_in=4.026, c=120.0, fittings=FITTED)
    assert pipe.equivalent_length() == pytest.approx(87 + 34, rel=1e-12)


def test_fittings_of_a_rough_pipe_count_for_less() -> None:
    pipe = Pipe(length_ft=87.0, diameter_in=4.026, c=100.0, fittings=FITTED)
    # NFPA 13-2016, Table 23.4.3.2.1: 0.713 at C 100.
    assert pipe.equivalent_length() == pytest.approx(87 + 34 * 0.713, abs=0.05)


def test_fittings_of_a_wider_pipe_count_for_more() -> None:
    pipe = Pipe(length_ft=87.0, diameter_in=4.260, c=120.0, fittings=FITTED)
    # (4.260 / 4.026)^4.87 is 1.317: rule from memory.
    assert pipe.equivalent_length() == pytest.approx(87 + 34 * 1.317, abs=0.05)


def test_both_multipliers_hold_together() -> None:
    pipe = Pipe(length_ft=12.0, diameter_in=2.157, c=140.0, fittings=(("swing check", 1), ("45 elbow", 2)))
    # 2 in.: 11 + 2 x 2 = 15 ft; 1.33 at C 140 (NFPA 13-2016, Table 23.4.3.2.1) and 1.231 for Schedule 10.
    assert pipe.equivalent_length() == pytest.approx(12 + 15 * 1.33 * 1.231, abs=0.02)


def test_a_stated_nominal_size_goes_before_the_nearest_one() -> None:
    nearest = Pipe(length_ft=45.0, diameter_in=4.5, c=120.0, fittings=FITTED)
    stated = replace(nearest, nominal_in="5")
    # 4.5 in. lies nearer to 4.026 than to 5.047; 5 in. fittings: 3 x 12 + 2 x 2 = 40 ft.
    assert nearest.equivalent_length() == pytest.approx(45 + 34 * (4.5 / 4.026) ** 4.87, rel=1e-9)
    assert stated.equivalent_length() == pytest.approx(45 + 40 * (4.5 / 5.047) ** 4.87, rel=1e-9)


def test_pipe_without_fittings_is_as_long_as_it_is() -> None:
    assert Pipe(length_ft=87.0, diameter_in=4.5, c=110.0).equivalent_length() == 87.0


@pytest.mark.parametrize("count", [-2, math.nan])
def test_fewer_fittings_than_none_are_refused(count: float) -> None:
    with pytest.raises(OutOfRangeError, match="fittings"):
        Pipe(length_ft=45.0, diameter_in=4.026, c=120.0, fittings=(("gate valve", 3), ("45 elbow", count)))  # type: ignore[arg-type]


@pytest.mark.parametrize("length_ft", [-0.5, math.nan, math.inf])
def test_what_is_no_length_is_refused(length_ft: float) -> None:
    with pytest.raises(OutOfRangeError, match="length_ft"):
        Pipe(length_ft=length_ft, diameter_in=4.026, c=120.0)


@pytest.mark.parametrize(("field", "name"), [("diameter_in", "diameter_in"), ("c", "c: ")])
def test_a_diameter_or_c_of_nothing_is_refused_when_used(field: str, name: str) -> None:
    pipe = replace(Pipe(length_ft=45.0, diameter_in=4.026, c=120.0), **{field: math.nan})
    with pytest.raises(OutOfRangeError, match=name):
        pipe.resistance()


def test_a_fitting_that_no_table_has_is_refused_with_what_is_known() -> None:
    pipe = Pipe(length_ft=45.0, diameter_in=1.049, c=120.0, fittings=(("gate valve", 2),))
    with pytest.raises(OutOfRangeError, match="no value for '1'; known: 2, 2-1/2"):
        pipe.equivalent_length()


@given(
    length_ft=st.floats(1, 900), share=st.floats(0.05, 0.95), diameter_in=st.floats(0.9, 12), c=st.floats(60, 150),
    flow_gpm=st.floats(5, 2500),
)  # fmt: skip
def test_a_pipe_in_two_parts_loses_what_the_whole_loses(
    length_ft: float, share: float, diameter_in: float, c: float, flow_gpm: float
) -> None:
    whole = Pipe(length_ft=length_ft, diameter_in=diameter_in, c=c, fittings=(("90 standard elbow", 4),))
    first = replace(whole, length_ft=share * length_ft, fittings=(("90 standard elbow", 1),))
    second = replace(whole, length_ft=(1 - share) * length_ft, fittings=(("90 standard elbow", 3),))
    assert first.loss(flow_gpm) + second.loss(flow_gpm) == pytest.approx(whole.loss(flow_gpm), rel=1e-9)
    assert first.resistance() + second.resistance() == pytest.approx(whole.resistance(), rel=1e-9)


@given(flows=st.lists(st.floats(5, 2500), min_size=2, max_size=5))
def test_the_loss_is_the_resistance_by_the_1_85_power_for_numbers_and_arrays(flows: list[float]) -> None:
    pipe = Pipe(length_ft=145.0, diameter_in=6.357, c=140.0, fittings=FITTED)
    np.testing.assert_allclose(pipe.loss(np.array(flows)), [pipe.loss(flow) for flow in flows], rtol=1e-12)
    np.testing.assert_allclose(pipe.loss(np.array(flows)), pipe.resistance() * np.array(flows) ** 1.85, rtol=1e-12)


def test_the_loss_is_the_loss_a_foot_by_the_equivalent_length() -> None:
    pipe = Pipe(length_ft=87.0, diameter_in=4.026, c=120.0, fittings=FITTED)
    assert pipe.loss(430.0) == pytest.approx(121 * friction_loss(430.0, 120.0, 4.026), rel=1e-12)
