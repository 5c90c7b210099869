"""What people type is understood or refused, never guessed."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import InputError
from fieldlog.procedures.typed import typed_decimal, typed_quantity, typed_seconds, typed_yes_no
from fieldlog.units import Flow, Length, Pressure


@pytest.mark.parametrize(
    ("text", "value", "unit"),
    [
        ("72", "72", "psi"),
        (" 72.50 psi", "72.50", "psi"),
        ("4,5 bar", "4.5", "bar"),
        ("4.5bar", "4.5", "bar"),
        ("450 kPa", "450", "kPa"),
        ("450 KPA", "450", "kPa"),
        ("1 200 kpa", "1200", "kPa"),
        ("1\u202f200,5\u00a0kPa", "1200.5", "kPa"),
        ("\uff17\uff12 psig", "72", "psi"),
        ("\u0667\u0662", "72", "psi"),
        ("\u22123", "-3", "psi"),
        (",5 bar", "0.5", "bar"),
        ("007", "7", "psi"),
        ("0", "0", "psi"),
        ("00", "0", "psi"),
        ("0 bar", "0", "bar"),
        ("0,0 bar", "0.0", "bar"),
        ("+7.", "7", "psi"),
    ],
)
def test_pressures_as_people_write_them(text: str, value: str, unit: str) -> None:
    typed = typed_quantity(text, Pressure, "psi", "residual")
    assert (typed.value, typed.unit) == (value, unit)


@pytest.mark.parametrize(
    "text",
    ["", "abc", "1,200", "12,345", "1.200,5", "7 2", "7..2", "5 gpm", "72 psi psi", "--3", "1e3", "9" * 12, "½", "7-2"],
)
def test_what_could_be_read_two_ways_or_none_is_refused(text: str) -> None:
    with pytest.raises(InputError) as refused:
        typed_quantity(text, Pressure, "psi", "residual")
    assert refused.value.field == "residual"
    assert refused.value.message.startswith("residual: ")


def test_a_value_without_unit_is_refused_where_there_is_no_usual_one() -> None:
    with pytest.raises(InputError, match="add one of psi, bar, kPa"):
        typed_quantity("72", Pressure, None, "static_before")


@pytest.mark.parametrize(("text", "unit"), [("950 l/min", "L/min"), ("950 LPM", "L/min"), ("250 GPM", "gpm")])
def test_flows(text: str, unit: str) -> None:
    assert typed_quantity(text, Flow, None, "flow").unit == unit


@pytest.mark.parametrize(("text", "unit"), [("12'", "ft"), ("12 feet", "ft"), ("3.2 metres", "m")])
def test_lengths(text: str, unit: str) -> None:
    assert typed_quantity(text, Length, None, "height").unit == unit


@given(st.text(max_size=20))
def test_any_text_gives_a_value_or_a_refusal(text: str) -> None:
    reads = (
        typed_decimal,
        typed_seconds,
        typed_yes_no,
        lambda typed, name: typed_quantity(typed, Pressure, "psi", name),
    )
    assert {field_refused(read, text) for read in reads} <= {None, "field"}


def typed_pressure(text: str, field: str) -> Pressure:
    return typed_quantity(text, Pressure, "psi", field)


def field_refused(read: Callable[[str, str], object], text: str) -> str | None:
    try:
        read(text, "field")
    except InputError as refused:
        return refused.field
    return None


@given(st.decimals(-9999, 9999, places=2, allow_nan=False))
def test_comma_and_point_say_the_same(value: object) -> None:
    text = f"{value:f}"
    assert typed_decimal(text.replace(".", ","), "x") == typed_decimal(text, "x")


@pytest.mark.parametrize(
    ("text", "seconds"),
    [
        ("6", 6),
        ("6 s", 6),
        ("6 sec", 6),
        ("0:06", 6),
        ("1:10", 70),
        ("2 min", 120),
        ("1 min 10 s", 70),
        ("1 min 10", 70),
        ("95", 95),
    ],
)
def test_durations(text: str, seconds: int) -> None:
    assert typed_seconds(text, "return") == seconds


@pytest.mark.parametrize("text", ["", "x", "1:10:10", "-3", "6 hours", "1:75", "2 min 60 s"])
def test_no_duration(text: str) -> None:
    with pytest.raises(InputError):
        typed_seconds(text, "return")


@pytest.mark.parametrize(("text", "said"), [("Yes", True), (" y", True), ("NO", False), ("0", False)])
def test_yes_and_no(text: str, said: bool) -> None:
    assert typed_yes_no(text, "fully_open") is said
