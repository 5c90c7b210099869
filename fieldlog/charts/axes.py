"""Scales from numbers, flows and dates to places on a drawing, and the few round numbers worth a grid line."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date

from fieldlog.charts.text_width import text_width

MOST_GRID_LINES = 5
# Friction loss goes with flow to this power (Hazen-Williams as the installation standards print it), so on an
# axis of it a supply curve is a straight line.
FLOW_POWER = 1.85

_MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")
_MONTH_STEPS = (1, 2, 3, 6, 12, 24, 60, 120, 240, 600, 1200, 2400)


@dataclass(frozen=True, slots=True)
class Scale:
    """Maps `low`..`high` evenly onto `start`..`end`; with a power, evenly in that power of the number."""

    low: float
    high: float
    start: float
    end: float
    power: float = 1.0

    def at(self, value: float) -> float:
        """Return the place of `value`."""
        share = (value - self.low) / (self.high - self.low)
        return self.start + (self.end - self.start) * math.copysign(abs(share) ** self.power, share)


def round_numbers(low: float, high: float, most: int = MOST_GRID_LINES) -> list[float]:
    """Return at most `most` evenly spaced round numbers within `low` and `high`, two of them at least."""
    raw = max(high - low, 1e-9) / most
    magnitude = 10.0 ** math.floor(math.log10(raw))
    for factor in (1, 2, 5, 10, 20, 50):
        step = factor * magnitude
        count = math.floor(high / step + 1e-9) - math.ceil(low / step - 1e-9) + 1
        if count <= most:
            return [round((math.ceil(low / step - 1e-9) + place) * step, 9) for place in range(count)]
    return [low, high]


def round_up(value: float, most: int = MOST_GRID_LINES) -> float:
    """Return a round number not below `value`, a whole number of the grid's steps from zero."""
    if not value > 0:
        return 1.0
    numbers = round_numbers(0.0, value, most)
    step = numbers[1] - numbers[0]
    return step * math.ceil(value / step - 1e-9)


def number_label(value: float) -> str:
    """Return a grid number as it is printed: no trailing zeros, a true minus sign."""
    text = f"{value:.6f}".rstrip("0").rstrip(".")
    return "0" if text in {"-0", ""} else text.replace("-", "−")


def spaced_labels(scale: Scale, values: Sequence[float], labels: Sequence[str], size: float) -> list[tuple[float, str]]:
    """Return those (value, label) whose centred labels keep a distance; the ends are kept before the middle."""
    kept: list[tuple[float, float, str]] = []
    pairs = list(zip(values, labels, strict=True))
    for value, label in [*pairs[-1:], *pairs[:-1]]:
        place, half = scale.at(value), text_width(label, size) / 2 + 0.6 * size
        if all(abs(place - other) >= half + other_half for other, other_half, _ in kept):
            kept.append((place, half, label))
    chosen = {label for _, _, label in kept}
    return [(value, label) for value, label in pairs if label in chosen]


def date_ticks(scale: Scale, size: float) -> list[tuple[float, str]]:
    """Return (ordinal day, label) of the years or months that fit between the ends of a scale of ordinal days."""
    room = abs(scale.end - scale.start)
    for step in _MONTH_STEPS:
        ticks = _month_starts(scale.low, scale.high, step)
        widest = max((text_width(label, size) for _, label in ticks), default=0.0)
        if len(ticks) * (widest + 1.4 * size) <= room:
            return ticks
    return []


def _month_starts(low: float, high: float, step: int) -> list[tuple[float, str]]:
    first, last = date.fromordinal(math.floor(low)), date.fromordinal(math.floor(high))
    month = -(-(first.year * 12 + first.month - 1) // step) * step
    ticks = []
    while month <= last.year * 12 + last.month - 1:
        year, place = divmod(month, 12)
        day = date(max(year, 1), place + 1, 1).toordinal()
        label = str(year) if step % 12 == 0 else f"{_MONTHS[place]} {year}"
        if low <= day <= high:
            ticks.append((float(day), label))
        month += step
    return ticks
