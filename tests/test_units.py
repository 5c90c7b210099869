"""Quantities keep what was entered and convert exactly."""

from __future__ import annotations

from fractions import Fraction

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import constants

from fieldlog.units import (
    Area,
    Density,
    Diameter,
    Discharge,
    Flow,
    Length,
    Pressure,
    Temperature,
    flow_in,
    length_in,
    pressure_in,
)

decimals = st.decimals(min_value=-9999, max_value=9999, places=3, allow_nan=False).map(lambda d: f"{d:f}")


def test_sizes_agree_with_the_constants_of_scipy() -> None:
    assert float(Pressure.sizes["bar"]) == pytest.approx(constants.bar / constants.psi, rel=1e-14)
    assert float(Pressure.sizes["kPa"]) == pytest.approx(constants.kilo / constants.psi, rel=1e-14)
    assert float(Flow.sizes["L/min"]) == pytest.approx(constants.liter / constants.gallon, rel=1e-14)
    assert float(Length.sizes["m"]) == pytest.approx(1 / constants.foot, rel=1e-14)
    assert float(Diameter.sizes["mm"]) == pytest.approx(constants.milli / constants.inch, rel=1e-14)
    assert float(Area.sizes["m2"]) == pytest.approx(1 / constants.foot**2, rel=1e-14)


def test_density_of_one_gallon_a_minute_and_square_foot_is_about_forty_millimetres_a_minute() -> None:
    # NFPA 13 prints 0.10 gpm/ft2 as 4.1 mm/min (soft-converted).
    assert float(Fraction("0.10") / Density.sizes["mm/min"]) == pytest.approx(4.1, abs=0.05)


def test_metric_k_factor_is_about_fourteen_times_the_customary_one() -> None:
    assert Discharge(value="14.416", unit="L/min/bar^0.5").k == pytest.approx(1.0, abs=1e-4)


def test_temperature_has_its_own_zero() -> None:
    assert Temperature(value="-40", unit="C").fahrenheit == -40.0
    assert Temperature(value="21.5", unit="C").fahrenheit == pytest.approx(70.7)


def test_resolution_is_the_last_digit_as_entered() -> None:
    assert Pressure(value="72.50", unit="psi").resolution() == Fraction(1, 100)
    assert float(Pressure(value="4.5", unit="bar").resolution()) == pytest.approx(1.450377, abs=1e-6)


@given(decimals, decimals)
def test_order_of_two_pressures_is_the_order_of_their_digits(first: str, second: str) -> None:
    one, other = Pressure(value=first, unit="bar"), Pressure(value=second, unit="bar")
    assert (one.exact() < other.exact()) == (Fraction(first) < Fraction(second))


@pytest.mark.parametrize("text", ["", "1,5", " 7", "7 psi", "+7", "07", "1e3", "NaN", "1234567890", "7."])
def test_a_text_that_is_no_plain_decimal_is_refused(text: str) -> None:
    with pytest.raises(msgspec.ValidationError):
        msgspec.convert({"value": text, "unit": "psi"}, Pressure)


def test_an_unknown_unit_is_refused() -> None:
    with pytest.raises(msgspec.ValidationError):
        msgspec.convert({"value": "72", "unit": "mmHg"}, Pressure)


def test_back_to_the_readers_unit() -> None:
    assert pressure_in(Pressure(value="4.5", unit="bar").psi, "bar") == pytest.approx(4.5)
    assert flow_in(Flow(value="950", unit="L/min").gpm, "L/min") == pytest.approx(950)
    assert length_in(Length(value="3.2", unit="m").ft, "m") == pytest.approx(3.2)
