"""Dates as typed are understood where they can be read in one way only."""

from __future__ import annotations

import contextlib
from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import InputError
from fieldlog.exchange.typed_dates import Order, typed_date

ORDERS: tuple[Order, ...] = ("iso", "dmy", "mdy")
MEANT = date(2019, 3, 12)


@pytest.mark.parametrize("order", ORDERS)
@pytest.mark.parametrize(
    "typed",
    [
        "2019-03-12", "2019/3/12", "2019.03.12", " 2019-03-12 ", "2019-03-12 00:00:00", "2019-03-12T00:00:00Z",
        "12 Mar 2019", "12-Mar-2019", "12. March 2019", "March 12, 2019", "mar 12 2019",
    ],
)  # fmt: skip
def test_a_date_that_reads_in_one_way_is_understood_in_every_order(typed: str, order: Order) -> None:
    assert typed_date(typed, order) == MEANT


@pytest.mark.parametrize(
    ("typed", "order"),
    [
        ("12/03/2019", "dmy"), ("12.3.2019", "dmy"), ("12-03-2019", "dmy"), ("12. 3. 2019", "dmy"),
        ("3/12/2019", "mdy"), ("03-12-2019 12:00 AM", "mdy"),
    ],
)  # fmt: skip
def test_numbers_are_read_in_the_order_that_was_said(typed: str, order: Order) -> None:
    assert typed_date(typed, order) == MEANT


@pytest.mark.parametrize(
    ("typed", "order", "says"),
    [
        ("12/03/2019", "iso", "--dates dmy"),
        ("25/12/2019", "iso", "--dates dmy"),
        ("25/12/2019", "mdy", "no month 25"),
        ("12/25/2019", "dmy", "is the file mdy"),
        ("30/02/2019", "dmy", "not in the calendar"),
        ("2019-13-01", "iso", "not in the calendar"),
        ("12/03/19", "dmy", "four digits"),
        ("43536", "iso", "day number"),
        ("12 Brumaire 2019", "iso", "no English month"),
        ("2019-03-12 14:30", "iso", "no date"),
        ("spring", "dmy", "no date"),
        ("", "dmy", "no date"),
        ("1" + " " * 60_000, "dmy", "no date"),
        ("0000-03-12", "iso", "not in the calendar"),
    ],
)
def test_a_date_that_is_none_or_ambiguous_is_refused_with_its_mend(typed: str, order: Order, says: str) -> None:
    with pytest.raises(InputError, match=says):
        typed_date(typed, order)


almost_dates = st.text(max_size=20) | st.from_regex(r"[0-9]{1,5}[-/. ][0-9]{1,3}[-/. ][0-9]{1,5}")


@given(almost_dates, st.sampled_from(ORDERS))
def test_any_text_gives_a_date_or_a_refusal(typed: str, order: Order) -> None:
    with contextlib.suppress(InputError):
        assert isinstance(typed_date(typed, order), date)


@given(st.dates(date(1850, 2, 3), date(2199, 11, 5)))
def test_the_three_orders_agree_on_every_day(day: date) -> None:
    assert typed_date(day.strftime("%d/%m/%Y"), "dmy") == day
    assert typed_date(day.strftime("%m/%d/%Y"), "mdy") == day
    assert typed_date(day.isoformat(), "iso") == day
