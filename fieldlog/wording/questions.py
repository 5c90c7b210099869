"""Questions about an odd reading, asked once while it is entered; the answer is kept and nothing is blocked."""

from __future__ import annotations

from collections.abc import Mapping

from fieldlog.procedures.questions import Question
from fieldlog.units import SiteUnits
from fieldlog.wording.templates import filled

_SENTENCES: Mapping[str, str] = {
    "above_range": "{field} is above the gauge's range of {range_psi:read}. Was another gauge read?",
    "below_zero": "{field} is below zero. Is the sign meant, or is the gauge off its zero?",
    "unit_slip": "{field} and the earlier {earlier_psi:read} differ as {between} do. Is the unit right?",
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
    numbers["field"] = question.field.replace("_", " ")
    return filled(_SENTENCES[question.code], numbers, units, {})


def _number(shown: str) -> float | str:
    try:
        return float(shown)
    except ValueError:
        return shown
