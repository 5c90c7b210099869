"""Dates as offices type them: ISO always, numbers in a stated order, months by English name; never guessed."""

from __future__ import annotations

import re
from datetime import date
from typing import Literal

from fieldlog.errors import InputError

Order = Literal["iso", "dmy", "mdy"]

_LONGEST = 60  # characters; the patterns below are quick on short text only
_MONTHS = ("jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec")
_LONG_MONTHS = (
    "january", "february", "march", "april", "may", "june", "july", "august", "september", "october", "november",
    "december",
)  # fmt: skip
_ISO = re.compile(r"([0-9]{4})([-/.])([0-9]{1,2})\2([0-9]{1,2})")
_NUMBERS = re.compile(r"([0-9]{1,2})([-/. ])\s*([0-9]{1,2})\2\s*([0-9]{4})")
_SHORT_YEAR = re.compile(r"[0-9]{1,2}[-/. ]+[0-9]{1,2}[-/. ]+[0-9]{2}")
_DAY_NAME = re.compile(r"([0-9]{1,2})\.?[-/ ]+([A-Za-z]{3,9})\.?[-/, ]+([0-9]{4})")
_NAME_DAY = re.compile(r"([A-Za-z]{3,9})\.?[-/ ]+([0-9]{1,2})[-/, ]+([0-9]{4})")
# Spreadsheets write a date that has no time as midnight.
_MIDNIGHT = re.compile(r"[T ]+(?:12:00(?::00)? ?AM|0{1,2}:00(?::00(?:\.0+)?)?Z?)$", re.IGNORECASE)
_DAY_NUMBER = re.compile(r"[0-9]{5}(?:[.,][0-9]+)?")


def typed_date(typed: str, order: Order) -> date:
    """Return the date typed.

    Raises
    ------
    InputError
        If it is none, or could be read in two ways; says what to write.
    """
    if len(typed) > _LONGEST:
        raise InputError(f"{typed[:_LONGEST]!r}… is no date; write it as year-month-day, such as 2019-03-12")
    text = _MIDNIGHT.sub("", typed.strip())
    if found := _ISO.fullmatch(text):
        return _date(typed, int(found[1]), int(found[3]), int(found[4]))
    if found := _DAY_NAME.fullmatch(text):
        return _date(typed, int(found[3]), _month(typed, found[2]), int(found[1]))
    if found := _NAME_DAY.fullmatch(text):
        return _date(typed, int(found[3]), _month(typed, found[1]), int(found[2]))
    if found := _NUMBERS.fullmatch(text):
        return _in_order(typed, order, (int(found[1]), int(found[3]), int(found[4])))
    raise InputError(_mend(typed, text))


def _mend(typed: str, text: str) -> str:
    if _SHORT_YEAR.fullmatch(text):
        return f"{typed!r}: write the year with four digits"
    if _DAY_NUMBER.fullmatch(text):
        return f"{typed!r} looks like a spreadsheet's day number; format the column as a date, year first"
    return f"{typed!r} is no date; write it as year-month-day, such as 2019-03-12"


def _in_order(typed: str, order: Order, parts: tuple[int, int, int]) -> date:
    first, second, year = parts
    if order == "iso":
        raise InputError(
            f"{typed!r}: day or month first? Say --dates dmy or --dates mdy for the whole file, or write year-month-day"
        )
    day, month = (first, second) if order == "dmy" else (second, first)
    if month > 12 >= day:
        other = "mdy" if order == "dmy" else "dmy"
        raise InputError(f"{typed!r}: there is no month {month} in the order {order}; is the file {other}?")
    return _date(typed, year, month, day)


def _month(typed: str, name: str) -> int:
    lowered = name.lower()
    if lowered in _LONG_MONTHS:
        return _LONG_MONTHS.index(lowered) + 1
    if lowered in _MONTHS:
        return _MONTHS.index(lowered) + 1
    if lowered == "sept":
        return 9
    raise InputError(f"{typed!r}: {name!r} is no English month; write year-month-day, such as 2019-03-12")


def _date(typed: str, year: int, month: int, day: int) -> date:
    try:
        return date(year, month, day)
    except ValueError as error:
        raise InputError(f"{typed!r} is not in the calendar; write the day the test was made") from error
