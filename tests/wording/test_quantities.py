"""Printed numbers: in the reader's units, rounded to the safe side, agreeing with what was decided."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.units import SiteUnits, pressure_in
from fieldlog.wording import quantities
from fieldlog.wording.quantities import Reader, percent, rounded

PSI = Reader(SiteUnits())
BAR = Reader(SiteUnits(pressure="bar", flow="L/min", length="m"))
KPA = Reader(SiteUnits(pressure="kPa", flow="L/min", length="m"))
READERS = (PSI, BAR, KPA)
pressures = st.floats(-150, 250)


def number(text: str) -> float:
    return float(text.replace("−", "-").split()[0])


@given(pressures, st.sampled_from(READERS))
def test_a_margin_is_never_rounded_up_nor_a_loss_down(psi: float, reader: Reader) -> None:
    shown = pressure_in(psi, reader.units.pressure)
    assert number(reader.estimate(psi, "down")) <= shown + 1e-6
    assert number(reader.estimate(psi, "up")) >= shown - 1e-6


@given(pressures, pressures, st.sampled_from(READERS))
def test_two_compared_pressures_are_printed_in_their_order(one: float, other: float, reader: Reader) -> None:
    smaller, larger = sorted((one, other))
    finer = reader.digits_to_agree((smaller,), larger)
    if finer < 3:
        up, down = reader.estimate(smaller, "up", finer=finer), reader.estimate(larger, "down", finer=finer)
        assert number(up) <= number(down)
    else:
        assert pressure_in(larger - smaller, reader.units.pressure) < 0.21


@pytest.mark.parametrize(
    ("share", "reaches", "printed"),
    [
        (0.1555, True, "15.6 %"),
        (0.0996, False, "9.96 %"),
        (0.09996, False, "9.996 %"),
        (0.0999999, False, "just under 10 %"),
        (0.1, True, "10.0 %"),
        (0.1, None, "10.0 %"),
        (0.09999999999999998, True, "10.0 %"),
        (-0.034, False, "−3.4 %"),
        (0.104, None, "10.4 %"),
    ],
)
def test_a_reduction_prints_as_it_was_flagged(share: float, reaches: bool | None, printed: str) -> None:
    assert percent(share, reaches=reaches) == printed


@given(st.floats(-0.5, 0.99))
def test_a_printed_percentage_is_on_the_side_of_ten_that_was_decided(share: float) -> None:
    text = percent(share, reaches=share >= 0.1)
    if text.startswith("just under"):
        assert share < 0.1
    else:
        assert (Decimal(text.removesuffix(" %").replace("−", "-")) >= 10) == (share >= 0.1)


@pytest.mark.parametrize(
    ("value", "decimals", "rounding", "printed"),
    [
        (11.9, 0, "down", "11"),
        (-0.3, 0, "down", "−1"),
        (-0.3, 0, "up", "0"),
        (0.1 + 0.2, 1, "up", "0.3"),
        (137.0, -1, "down", "130"),
        (float("nan"), 0, "down", "not a number"),
        (float("-inf"), 0, "down", "−∞"),
    ],
)
def test_rounding_goes_the_way_that_was_asked(
    value: float, decimals: int, rounding: quantities.Rounding, printed: str
) -> None:
    assert rounded(value, decimals, rounding) == printed


def test_each_site_reads_its_own_units() -> None:
    assert [reader.estimate(11.7, "down") for reader in READERS] == ["11 psi", "0.8 bar", "80 kPa"]
    assert [reader.pressure(46.5) for reader in READERS] == ["46.5 psi", "3.21 bar", "321 kPa"]
    assert [reader.flow(620) for reader in READERS] == ["620 gpm", "2347 L/min", "2347 L/min"]
    assert [reader.length(12.5) for reader in READERS] == ["12.5 ft", "3.8 m", "3.8 m"]


def test_words_around_numbers() -> None:
    assert quantities.day(date(2019, 3, 12)) == "12 March 2019"
    assert [quantities.seconds(s) for s in (4.5, 120, 185, 240)] == ["4.5 s", "120 s", "3 min 5 s", "4 min"]
    assert [quantities.counted(n, "entry", "entries") for n in (1, 3)] == ["1 entry", "3 entries"]
    assert [quantities.listed(w) for w in ([], ["a"], ["a", "b"], ["a", "b", "c"])] == [
        "",
        "a",
        "a and b",
        "a, b and c",
    ]
