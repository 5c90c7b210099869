"""Quantities are noted to a division, in the site's units."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.demo import noted
from fieldlog.units import SiteUnits

BAR = SiteUnits(pressure="bar", flow="L/min", length="m")


@pytest.mark.parametrize(
    ("value", "division", "text"),
    [(72.4, "1", "72"), (72.6, "5", "75"), (4.96, "0.1", "5.0"), (4.96, "0.05", "4.95"), (3.3, "0.25", "3.25"),
     (503.0, "10", "500"), (0.2, "5", "0")],
)  # fmt: skip
def test_a_value_is_noted_with_the_decimals_of_its_division(value: float, division: str, text: str) -> None:
    assert noted.decimal_text(value, division) == text


@given(st.floats(0, 3000), st.sampled_from(["0.05", "0.1", "0.25", "0.5", "1", "5", "10"]))
def test_what_is_noted_is_a_multiple_of_the_division_next_to_the_value(value: float, division: str) -> None:
    text = Fraction(noted.decimal_text(value, division))
    assert (text / Fraction(division)).denominator == 1
    assert abs(float(text) - value) <= float(division) / 2 + 1e-9


def test_quantities_are_noted_in_the_units_of_the_site() -> None:
    written = (noted.pressure(58.0, BAR), noted.flow(350.0, BAR), noted.height(4.0, BAR))
    assert [(one.value, one.unit) for one in written] == [("4.00", "bar"), ("1320", "L/min"), ("1.2", "m")]
    in_kpa = noted.pressure(58.0, SiteUnits(pressure="kPa", flow="L/min", length="m"))
    assert (in_kpa.value, in_kpa.unit) == ("400", "kPa")
    assert noted.pressure(58.7, SiteUnits(pressure="kPa")).value == "405"
