"""Readings over time: points at their true dates, the lines they are held against, the expected band, the gaps."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import date
from itertools import pairwise
from statistics import median

from fieldlog.charts.axes import Scale, round_numbers
from fieldlog.charts.frame import PAPER, Frame, Size, frame, grid, time_axis
from fieldlog.charts.labels import EndLabel, beside, surroundings
from fieldlog.charts.scene import Band, Dot, Ink, Line, Poly, Scene, Shape

# A pause is a gap when it is this much longer than the usual one, and longer than any test interval in use.
_GAP_FACTOR = 2.5
_GAP_DAYS = 550
_YEAR_DAYS = 365.25


@dataclass(frozen=True, slots=True)
class Reading:
    """One reading; one that is not comparable is drawn as a ring and not joined to the others."""

    on: date
    value: float
    is_comparable: bool = True


@dataclass(frozen=True, slots=True)
class Series:
    """Readings of one kind, oldest first; `label` stands at the line's end."""

    label: str
    readings: tuple[Reading, ...]
    is_main: bool = False


@dataclass(frozen=True, slots=True)
class ReferenceLine:
    """A level the readings are held against, from `begin` on if given."""

    label: str
    value: float
    begin: date | None = None
    is_dashed: bool = False


@dataclass(frozen=True, slots=True)
class ExpectedRange:
    """Where readings between two dates should fall."""

    low: float
    high: float
    begin: date
    end: date
    label: str = ""


@dataclass(frozen=True, slots=True)
class HistoryChart:
    """Everything of the chart, in the reader's unit."""

    title: str
    desc: str
    unit: str
    series: tuple[Series, ...]
    lines: tuple[ReferenceLine, ...] = ()
    expected: tuple[ExpectedRange, ...] = ()


def history_chart(chart: HistoryChart, size: Size = PAPER) -> Scene:
    """Return the drawing; nothing in it lies outside, and no two labels touch."""
    low, high = _value_range(chart)
    values = round_numbers(low, high)
    labels = [*(s.label for s in chart.series), *(line.label for line in chart.lines)]
    area = frame(size, values, labels, lines_below=1)
    across, up = area.across(*_day_range(chart)), area.up(low, high)
    shapes: list[Shape] = [shape for band in chart.expected for shape in _range(band, across, up)]
    shapes += grid(area, up, values, chart.unit)
    shapes += time_axis(area, across)
    shapes += [shape for line in chart.lines for shape in _reference(line, area, across, up)]
    gaps = _gaps(chart)
    for series in chart.series:
        shapes += _series(series, gaps, across, up)
    shapes += area.end_labels(_ends(chart, area, across, up))
    return Scene(
        size.width, size.height, chart.title, chart.desc, (*shapes, *_notes(chart, gaps, area, across, shapes))
    )


def _value_range(chart: HistoryChart) -> tuple[float, float]:
    values = [reading.value for series in chart.series for reading in series.readings]
    values += [line.value for line in chart.lines]
    values += [edge for band in chart.expected for edge in (band.low, band.high)]
    low, high = (min(values), max(values)) if values else (0.0, 1.0)
    # A level history must not look like a mountain range: a fifth of the value is the least that is shown.
    missing = max(0.2 * max(abs(low), abs(high), 1e-6) - (high - low), 0.0)
    margin = 0.06 * (high - low) + missing / 2
    padded = low - margin
    return (max(padded, 0.0) if low >= 0 else padded), high + margin


def _day_range(chart: HistoryChart) -> tuple[float, float]:
    days = [reading.on.toordinal() for series in chart.series for reading in series.readings]
    days += [day.toordinal() for band in chart.expected for day in (band.begin, band.end)]
    days += [line.begin.toordinal() for line in chart.lines if line.begin]
    first, last = (min(days), max(days)) if days else (730_000, 730_000)
    pad = max(0.02 * (last - first), 120.0 if last - first < 240 else 0.0)
    return first - pad, last + pad


def _gaps(chart: HistoryChart) -> list[tuple[int, int]]:
    days = sorted({reading.on.toordinal() for series in chart.series for reading in series.readings})
    pauses = [(begin, end) for begin, end in pairwise(days)]
    if len(pauses) < 2:
        return []
    usual = median(end - begin for begin, end in pauses)
    return [(begin, end) for begin, end in pauses if end - begin > max(_GAP_FACTOR * usual, _GAP_DAYS)]


def _range(band: ExpectedRange, across: Scale, up: Scale) -> Iterator[Shape]:
    left, right = across.at(band.begin.toordinal()), across.at(band.end.toordinal())
    top, bottom = up.at(band.high), up.at(band.low)
    yield Band(((left, top), (right, top), (right, bottom), (left, bottom)))
    # Thin edges keep the band to be seen on a copy without colour.
    yield Line((left, top), (right, top), Ink.ACCENT, 0.4)
    yield Line((left, bottom), (right, bottom), Ink.ACCENT, 0.4)


def _reference(line: ReferenceLine, area: Frame, across: Scale, up: Scale) -> Iterator[Shape]:
    left = across.at(line.begin.toordinal()) if line.begin else area.plot.left
    dash = (4.0, 2.5) if line.is_dashed else ()
    yield Line((left, up.at(line.value)), (area.plot.right, up.at(line.value)), Ink.INK, 0.9, dash)


def _series(series: Series, gaps: Sequence[tuple[int, int]], across: Scale, up: Scale) -> Iterator[Shape]:
    ink, width, radius = (Ink.ACCENT, 1.8, 2.9) if series.is_main else (Ink.INK, 0.9, 2.2)
    for run in _runs(series, gaps):
        if len(run) > 1:
            yield Poly(tuple(_place(reading, across, up) for reading in run), ink, width)
    for reading in series.readings:
        yield Dot(_place(reading, across, up), radius, ink, is_open=not reading.is_comparable)


def _runs(series: Series, gaps: Sequence[tuple[int, int]]) -> list[list[Reading]]:
    """Return the comparable readings in runs that no gap interrupts."""
    runs: list[list[Reading]] = []
    for reading in series.readings:
        if not reading.is_comparable:
            continue
        day = reading.on.toordinal()
        is_joined = runs and not any(runs[-1][-1].on.toordinal() <= begin and end <= day for begin, end in gaps)
        if is_joined:
            runs[-1].append(reading)
        else:
            runs.append([reading])
    return runs


def _place(reading: Reading, across: Scale, up: Scale) -> tuple[float, float]:
    return across.at(reading.on.toordinal()), up.at(reading.value)


def _ends(chart: HistoryChart, area: Frame, across: Scale, up: Scale) -> list[EndLabel]:
    ends = [
        EndLabel(_place(s.readings[-1], across, up), s.label, Ink.ACCENT if s.is_main else Ink.INK, s.is_main)
        for s in chart.series
        if s.readings
    ]
    return ends + [EndLabel((area.plot.right, up.at(line.value)), line.label) for line in chart.lines]


def _notes(
    chart: HistoryChart, gaps: Sequence[tuple[int, int]], area: Frame, across: Scale, shapes: Sequence[Shape]
) -> Iterator[Shape]:
    """Yield what is written into the plot: each gap by its length, each expected range by its name."""
    drawn = list(shapes)
    text = area.size.text
    notes = [
        (
            (across.at((begin + end) / 2), area.plot.bottom - text),
            f"no test for {(end - begin) / _YEAR_DAYS:.1f} years",
        )
        for begin, end in gaps
    ]
    up = area.up(*_value_range(chart))
    notes += [
        ((across.at((band.begin.toordinal() + band.end.toordinal()) / 2), up.at(band.high)), band.label)
        for band in chart.expected
        if band.label
    ]
    for at, words in notes:
        added = beside(at, words, text, surroundings(area.plot, drawn))
        drawn += added
        yield from added
