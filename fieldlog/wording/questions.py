"""Questions about an odd reading, asked once while it is entered; the answer is kept and nothing is blocked."""

from __future__ import annotations

import re
from collections.abc import Mapping

from fieldlog.procedures.questions import Question
from fieldlog.units import SiteUnits
from fieldlog.wording.templates import filled

_SENTENCES: Mapping[str, str] = {
    "above_range": "{field} is above the gauge's range of {range_psi:read}. Was another gauge read?",
    "below_zero": "{field} is below zero. Is the sign meant, or is the gauge off its zero?",
    "unit_slip": "{field} and the earlier {earlier_psi:read} differ as {between} do. Is the unit right?",
    "flow_unit_slip": "{field} and the earlier {earlier_gpm} differ as {between} do. Is the unit right?",
    "outside_swing": "{field} lies outside of the swing noted for the needle. Which of them is right?",
    "date_ahead": "The date is ahead of today. Is it right?",
    "date_long_ago": "The date is more than a year ago. Is it right?",
    "end_before_start": "The end is before the start. Did the test run past midnight?",
    "returned_and_did_not": "A time to return is given, and that it did not recover. Which of them is right?",
    "system_side_far_above": "The system-side gauge is far above the supply. Is the pressure trapped?",
    "fitting_not_listed": (
        "The table of equivalent lengths has no {fitting:typed} of this size. Is the name right, or is its loss "
        "listed by its maker?"
    ),
    "residual_above_static": "Residual is above static before. Did a pump start, or was the valve opened late?",
    "static_after_below_before": (
        "Static after is more than ten percent below static before. Was trapped pressure bled off, or was it read "
        "before the gauge had settled?"
    ),
    "above_relief_setting": (
        "The system-side gauge is above the usual relief setting. Is the pressure trapped, and does the relief "
        "valve work?"
    ),
    "not_comparable": (
        "The drain was not fully open or its outlet did not take full flow: the test is kept, and will not be "
        "compared with others."
    ),
}


def question_sentence(question: Question, units: SiteUnits) -> str:
    """Return the question in words, with the numbers to show."""
    numbers = {name: _number(shown) for name, shown in question.shown.items()}
    numbers["field"] = _field_in_words(question.field)
    return filled(_SENTENCES[question.code], numbers, units, {})


def _field_in_words(path: str) -> str:
    """Return a dotted path as words: points[1].residual becomes "points 2, residual"."""
    counted = re.sub(r"\[([0-9]+)\]", lambda place: f" {int(place[1]) + 1}", path)
    return counted.replace(".", ", ").replace("_", " ")


def _number(shown: str) -> float | str:
    try:
        return float(shown)
    except ValueError:
        return shown
