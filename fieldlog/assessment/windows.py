"""Windows of time in which something is due, by the frequency words of the inspection standards.

Daily, weekly and monthly mean once in the calendar day, week or month; longer ones have a smallest and a largest
gap from the last time (NFPA 25 3.7; annual: not less than 9 and not more than 15 months apart). A week begins on
Monday (ISO 8601). A month added to the 31st ends on the last day of a shorter month.
"""

from __future__ import annotations

import calendar
from collections.abc import Iterator
from dataclasses import dataclass, replace
from datetime import date, timedelta
from itertools import count

from fieldlog.records.rules import Frequency, Season

_MONTHS = {"month": 1, "year": 12}
_DAYS = {"day": 1, "week": 7}


@dataclass(frozen=True, slots=True)
class Window:
    """When something is due: not counted before `earliest`, late after `latest`; None where no rule says."""

    earliest: date | None
    due: date
    latest: date


def add_months(day: date, months: int) -> date:
    """Return the day so many months on, at most the last of its month."""
    index = day.year * 12 + day.month - 1 + months
    year, month = index // 12, index % 12 + 1
    return date(year, month, min(day.day, calendar.monthrange(year, month)[1]))


def add(day: date, number: int, unit: str) -> date:
    """Return the day so many days, weeks, months or years on."""
    if unit in _MONTHS:
        return add_months(day, number * _MONTHS[unit])
    return day + timedelta(days=number * _DAYS[unit])


def next_window(frequency: Frequency, last: date | None, baseline: date | None, as_of: date) -> Window | None:
    """Return the window in which the activity is next due.

    Parameters
    ----------
    frequency : Frequency
        How often, counted from what [-].
    last : date | None
        The day it was last done [-].
    baseline : date | None
        The day the part was installed: counted from where nothing was done, and always by a frequency so anchored
        [-].
    as_of : date
        The day asked about [-].

    Returns
    -------
    Window | None
        Days; None where there is no day to count from [-].

    References
    ----------
    NFPA 25, 3.7, definitions of the frequencies.
    """
    window = _unseasoned(frequency, last, baseline, as_of)
    if window is None:
        return None
    if frequency.grace_days is not None:
        window = replace(window, latest=window.latest + timedelta(days=frequency.grace_days))
    return _in_season(window, frequency, as_of)


def _unseasoned(frequency: Frequency, last: date | None, baseline: date | None, as_of: date) -> Window | None:
    if frequency.anchor == "calendar":
        return _calendar_window(frequency, last, as_of)
    if frequency.anchor == "last done":
        start = last or baseline
        return None if start is None else _gap_window(frequency, start)
    return None if baseline is None else _baseline_window(frequency, last, baseline)


def _calendar_window(frequency: Frequency, last: date | None, as_of: date) -> Window:
    start = _period_start(frequency, as_of if last is None else last)
    if last is not None:
        start = add(start, frequency.every, frequency.unit)
    return Window(earliest=start, due=start, latest=add(start, frequency.every, frequency.unit) - timedelta(days=1))


def _period_start(frequency: Frequency, day: date) -> date:
    if frequency.unit in _MONTHS:
        size = frequency.every * _MONTHS[frequency.unit]
        index = (day.year * 12 + day.month - 1) // size * size
        return date(index // 12, index % 12 + 1, 1)
    size = frequency.every * _DAYS[frequency.unit]
    # Day 1 of Python's calendar is a Monday.
    return date.fromordinal((day.toordinal() - 1) // size * size + 1)


def _gap_window(frequency: Frequency, start: date) -> Window:
    due = add(start, frequency.every, frequency.unit)
    unit = frequency.gap_unit or frequency.unit
    return Window(
        earliest=None if frequency.least is None else add(start, frequency.least, unit),
        due=due,
        latest=due if frequency.most is None else add(start, frequency.most, unit),
    )


def _baseline_window(frequency: Frequency, last: date | None, baseline: date) -> Window:
    return next(window for window in _occurrences(frequency, baseline, last) if _is_open(window, frequency, last))


def _occurrences(frequency: Frequency, baseline: date, last: date | None) -> Iterator[Window]:
    for occurrence in count(1 if last is None else max(1, _elapsed(frequency, baseline, last) - 1)):
        # Every occurrence is counted from the baseline itself, so that the 31st comes back after a short month.
        before = add(baseline, (occurrence - 1) * frequency.every, frequency.unit)
        due = add(baseline, occurrence * frequency.every, frequency.unit)
        gaps = _gap_window(frequency, before)
        earliest = None if gaps.earliest is None else min(gaps.earliest, due)
        yield Window(earliest=earliest, due=due, latest=max(gaps.latest, due))


def _elapsed(frequency: Frequency, baseline: date, last: date) -> int:
    if frequency.unit in _MONTHS:
        months = (last.year - baseline.year) * 12 + last.month - baseline.month
        return months // (frequency.every * _MONTHS[frequency.unit])
    return (last - baseline).days // (frequency.every * _DAYS[frequency.unit])


def _is_open(window: Window, frequency: Frequency, last: date | None) -> bool:
    # A test counts for the occurrence in whose window it falls; without gaps, for the nearest.
    if last is None:
        return True
    if window.earliest is not None:
        return last < window.earliest
    half = (add(window.due, frequency.every, frequency.unit) - window.due) // 2
    return last < window.due - half


def _in_season(window: Window, frequency: Frequency, as_of: date) -> Window:
    season = frequency.season
    if season is None or season.first_month is None or season.last_month is None:
        return window
    begins = _season_at(season, season.first_month, as_of)
    if window.due >= begins:
        if is_in_season(season, window.due):
            return window
        begins = _beginning_after(season.first_month, window.due)
    if frequency.anchor == "calendar":
        return Window(earliest=begins, due=begins, latest=_calendar_window(frequency, None, begins).latest)
    return Window(earliest=window.earliest, due=begins, latest=max(begins, window.latest))


def is_in_season(season: Season, day: date) -> bool:
    """Return whether the day falls in the season's months; a season may run over the year's end."""
    if season.first_month is None or season.last_month is None:
        return True
    if season.first_month <= season.last_month:
        return season.first_month <= day.month <= season.last_month
    return day.month >= season.first_month or day.month <= season.last_month


def _season_at(season: Season, first_month: int, day: date) -> date:
    # The beginning of the season that runs on that day, else of the next one.
    if not is_in_season(season, day):
        return _beginning_after(first_month, day)
    return date(day.year if day.month >= first_month else day.year - 1, first_month, 1)


def _beginning_after(first_month: int, day: date) -> date:
    this_year = date(day.year, first_month, 1)
    return this_year if this_year >= day else date(day.year + 1, first_month, 1)
