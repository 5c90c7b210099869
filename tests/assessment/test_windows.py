"""Windows by the frequency words of NFPA 25 3.7, with dates worked by hand, and over 200 years."""

from __future__ import annotations

from datetime import date, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.assessment.windows import Window, add_months, next_window
from fieldlog.records.rules import Frequency, Season

# NFPA 25 3.7: monthly once in the calendar month; annual 9 to 15 months apart (2011, in a secondary source);
# quarterly 2 to 4, semiannual 4 to 8, three years 30 to 40, five years 54 to 66 months from memory.
DAILY = Frequency(every=1, unit="day", anchor="calendar")
WEEKLY = Frequency(every=1, unit="week", anchor="calendar")
MONTHLY = Frequency(every=1, unit="month", anchor="calendar")
QUARTERLY = Frequency(every=3, unit="month", anchor="last done", least=2, most=4, gap_unit="month")
SEMIANNUAL = Frequency(every=6, unit="month", anchor="last done", least=4, most=8, gap_unit="month")
ANNUAL = Frequency(every=1, unit="year", anchor="last done", least=9, most=15, gap_unit="month")
THREE_YEARS = Frequency(every=3, unit="year", anchor="last done", least=30, most=40, gap_unit="month")
FIVE_YEARS = Frequency(every=5, unit="year", anchor="last done", least=54, most=66, gap_unit="month")
SEVEN_DAYS = Frequency(every=7, unit="day", anchor="last done", most=7, gap_unit="day")
BARE_QUARTER = Frequency(every=3, unit="month", anchor="last done")
FROM_START = Frequency(every=5, unit="year", anchor="baseline", least=54, most=66, gap_unit="month")
BARE_FROM_START = Frequency(every=15, unit="year", anchor="baseline")
ALL = [DAILY, WEEKLY, MONTHLY, QUARTERLY, SEMIANNUAL, ANNUAL, THREE_YEARS, FIVE_YEARS, SEVEN_DAYS, BARE_QUARTER]

DAYS = st.dates(min_value=date(1900, 1, 1), max_value=date(2100, 12, 31))


def window(frequency: Frequency, last: date | None, as_of: date, baseline: date | None = None) -> tuple[str, ...]:
    found = next_window(frequency, last, baseline, as_of)
    assert found is not None
    return tuple("-" if day is None else day.isoformat() for day in (found.earliest, found.due, found.latest))


@pytest.mark.parametrize(
    ("frequency", "last", "expected"),
    [
        (DAILY, date(2023, 12, 31), ("2024-01-01", "2024-01-01", "2024-01-01")),
        # Wednesday 2024-05-15; the next week runs from Monday the 20th to Sunday the 26th.
        (WEEKLY, date(2024, 5, 15), ("2024-05-20", "2024-05-20", "2024-05-26")),
        (MONTHLY, date(2024, 1, 31), ("2024-02-01", "2024-02-01", "2024-02-29")),
        (MONTHLY, date(2023, 12, 4), ("2024-01-01", "2024-01-01", "2024-01-31")),
        (QUARTERLY, date(2023, 11, 30), ("2024-01-30", "2024-02-29", "2024-03-30")),
        (QUARTERLY, date(2024, 12, 31), ("2025-02-28", "2025-03-31", "2025-04-30")),
        (SEMIANNUAL, date(2024, 8, 31), ("2024-12-31", "2025-02-28", "2025-04-30")),
        (ANNUAL, date(2024, 3, 15), ("2024-12-15", "2025-03-15", "2025-06-15")),
        (ANNUAL, date(2024, 2, 29), ("2024-11-29", "2025-02-28", "2025-05-29")),
        (THREE_YEARS, date(2020, 2, 29), ("2022-08-29", "2023-02-28", "2023-06-29")),
        (FIVE_YEARS, date(2019, 7, 31), ("2024-01-31", "2024-07-31", "2025-01-31")),
        (SEVEN_DAYS, date(2024, 2, 25), ("-", "2024-03-03", "2024-03-03")),
        (BARE_QUARTER, date(2024, 11, 30), ("-", "2025-02-28", "2025-02-28")),
    ],
)
def test_windows_worked_by_hand(frequency: Frequency, last: date, expected: tuple[str, ...]) -> None:
    assert window(frequency, last, as_of=date(2025, 7, 4)) == expected


def test_grace_lengthens_the_window_and_nothing_else() -> None:
    lenient = Frequency(every=1, unit="year", anchor="last done", least=9, most=15, gap_unit="month", grace_days=20)
    assert window(lenient, date(2024, 3, 15), date(2025, 7, 4)) == ("2024-12-15", "2025-03-15", "2025-07-05")


def test_a_calendar_quarter_begins_with_the_year() -> None:
    by_quarter = Frequency(every=3, unit="month", anchor="calendar")
    assert window(by_quarter, date(2024, 2, 11), date(2024, 2, 12)) == ("2024-04-01", "2024-04-01", "2024-06-30")


def test_what_was_never_done_is_counted_in_this_calendar_period() -> None:
    assert window(MONTHLY, None, date(2024, 2, 17)) == ("2024-02-01", "2024-02-01", "2024-02-29")


def test_what_was_never_done_is_counted_from_the_installation() -> None:
    assert window(ANNUAL, None, date(2031, 8, 9), date(2024, 3, 15)) == ("2024-12-15", "2025-03-15", "2025-06-15")


@pytest.mark.parametrize("frequency", [ANNUAL, FROM_START])
def test_without_a_day_to_count_from_there_is_no_window(frequency: Frequency) -> None:
    assert next_window(frequency, None, None, date(2024, 2, 17)) is None


@pytest.mark.parametrize(
    ("last", "expected"),
    [
        (None, ("2009-12-30", "2010-06-30", "2010-12-30")),
        (date(2009, 12, 29), ("2009-12-30", "2010-06-30", "2010-12-30")),  # a day too early to count
        (date(2009, 12, 30), ("2014-12-30", "2015-06-30", "2015-12-30")),
        (date(2012, 4, 17), ("2014-12-30", "2015-06-30", "2015-12-30")),  # late, and yet the next keeps its day
    ],
)
def test_a_frequency_anchored_to_the_baseline_does_not_drift(last: date | None, expected: tuple[str, ...]) -> None:
    assert window(FROM_START, last, date(2024, 2, 17), baseline=date(2005, 6, 30)) == expected


@pytest.mark.parametrize(
    ("last", "due"),
    [
        # 5478 days from 2004-03-08 to 2019-03-08; 2739 of them end on 2011-09-07.
        (date(2011, 9, 6), date(2019, 3, 8)),  # nearer to 2004: the one of 2019 is still open
        (date(2011, 9, 7), date(2034, 3, 8)),  # nearer to 2019: done early, counted for it
    ],
)
def test_without_gaps_a_test_counts_for_the_nearest_day_from_the_baseline(last: date, due: date) -> None:
    found = next_window(BARE_FROM_START, last, date(1989, 3, 8), date(2024, 2, 17))
    assert found == Window(earliest=None, due=due, latest=due)


COLD = Frequency(
    every=1, unit="week", anchor="calendar", season=Season(name="cold weather", first_month=11, last_month=3)
)


@pytest.mark.parametrize(
    ("last", "as_of", "expected"),
    [
        (date(2024, 1, 17), date(2024, 1, 18), ("2024-01-22", "2024-01-22", "2024-01-28")),
        # After the last week of March nothing is due until Friday 1 November, in the week that ends on the 3rd.
        (date(2024, 3, 27), date(2024, 3, 28), ("2024-11-01", "2024-11-01", "2024-11-03")),
        (date(2024, 3, 6), date(2024, 7, 9), ("2024-11-01", "2024-11-01", "2024-11-03")),
        (date(2024, 3, 6), date(2024, 12, 9), ("2024-11-01", "2024-11-01", "2024-11-03")),
        (None, date(2024, 2, 7), ("2024-02-05", "2024-02-05", "2024-02-11")),
        (None, date(2024, 8, 7), ("2024-11-01", "2024-11-01", "2024-11-03")),
    ],
)
def test_a_season_over_the_year_s_end_rests_in_between(
    last: date | None, as_of: date, expected: tuple[str, ...]
) -> None:
    assert window(COLD, last, as_of) == expected


def test_a_season_moves_what_is_counted_from_the_last_time() -> None:
    spring = Frequency(
        every=1, unit="year", anchor="last done", season=Season(name="spring", first_month=4, last_month=6)
    )
    assert window(spring, date(2023, 9, 14), date(2024, 5, 2)) == ("-", "2025-04-01", "2025-04-01")
    assert window(spring, date(2023, 5, 14), date(2024, 5, 2)) == ("-", "2024-05-14", "2024-05-14")


def test_a_season_cuts_the_early_part_of_a_window_and_leaves_its_end() -> None:
    spring = Season(name="spring", first_month=4, last_month=6)
    yearly = Frequency(every=1, unit="year", anchor="last done", least=9, most=15, gap_unit="month", season=spring)
    assert window(yearly, date(2024, 3, 20), date(2025, 2, 3)) == ("2024-12-20", "2025-04-01", "2025-06-20")


def test_a_season_without_months_rests_nowhere() -> None:
    anytime = Frequency(every=1, unit="week", anchor="calendar", season=Season(name="cold weather"))
    assert window(anytime, date(2024, 7, 10), date(2024, 7, 11)) == window(WEEKLY, date(2024, 7, 10), date(2024, 7, 11))


@given(last=DAYS, as_of=DAYS, frequency=st.sampled_from(ALL))
def test_every_window_begins_after_the_last_time_and_is_in_order(last: date, as_of: date, frequency: Frequency) -> None:
    found = next_window(frequency, last, None, as_of)
    assert found is not None
    assert last < (found.earliest or found.due) <= found.due <= found.latest


@given(last=DAYS, later=DAYS, frequency=st.sampled_from(ALL))
def test_done_later_is_never_due_sooner(last: date, later: date, frequency: Frequency) -> None:
    first, second = sorted([last, later])
    before, after = (next_window(frequency, day, None, second) for day in (first, second))
    assert before is not None
    assert after is not None
    assert before.due <= after.due
    assert before.latest <= after.latest


@given(last=DAYS, frequency=st.sampled_from([QUARTERLY, SEMIANNUAL, ANNUAL, THREE_YEARS, FIVE_YEARS]))
def test_gaps_are_those_of_the_standard_in_months(last: date, frequency: Frequency) -> None:
    found = next_window(frequency, last, None, last)
    assert found is not None
    assert found.earliest is not None
    assert months_between(last, found.earliest) == frequency.least
    assert months_between(last, found.due) == frequency.months()
    assert months_between(last, found.latest) == frequency.most
    assert found.due.day == last.day or is_last_of_month(found.due)


@given(last=DAYS)
def test_a_month_is_the_whole_next_calendar_month(last: date) -> None:
    found = next_window(MONTHLY, last, None, last)
    assert found is not None
    assert found.due.day == 1
    assert months_between(last, found.due) == 1
    assert is_last_of_month(found.latest)
    assert found.latest.month == found.due.month


@given(last=DAYS)
def test_a_week_runs_from_monday_to_sunday(last: date) -> None:
    found = next_window(WEEKLY, last, None, last)
    assert found is not None
    assert found.due.isoweekday() == 1
    assert found.latest.isoweekday() == 7
    assert timedelta(days=1) <= found.due - last <= timedelta(days=7)


@given(
    baseline=DAYS,
    last=DAYS,
    frequency=st.sampled_from(
        [
            FROM_START,
            BARE_FROM_START,
            Frequency(every=1, unit="month", anchor="baseline"),
            Frequency(every=10, unit="day", anchor="baseline", least=8, most=12, gap_unit="day"),
        ]
    ),
)
def test_an_occurrence_from_the_baseline_is_the_first_still_open(
    baseline: date, last: date, frequency: Frequency
) -> None:
    found = next_window(frequency, last, baseline, last)
    assert found is not None
    assert baseline < found.due
    assert (found.earliest or found.due) <= found.due <= found.latest
    # The slow way: from the first occurrence on, the first whose window opens after the last time.
    assert found.due == slow_due(frequency, baseline, last)


def slow_due(frequency: Frequency, baseline: date, last: date) -> date:
    occurrence = 1
    while True:
        due = on(frequency, baseline, occurrence)
        if frequency.least is None:
            opens = due - (on(frequency, due, 1) - due) // 2
        elif frequency.gap_unit == "day":
            opens = min(due, on(frequency, baseline, occurrence - 1) + timedelta(days=frequency.least))
        else:
            opens = min(due, add_months(on(frequency, baseline, occurrence - 1), frequency.least))
        if last < opens:
            return due
        occurrence += 1


def on(frequency: Frequency, start: date, occurrence: int) -> date:
    months = frequency.months()
    if months is None:
        return start + timedelta(days=frequency.every * occurrence)
    return add_months(start, months * occurrence)


def months_between(first: date, second: date) -> int:
    return (second.year - first.year) * 12 + second.month - first.month


def is_last_of_month(day: date) -> bool:
    return (day + timedelta(days=1)).day == 1
