"""The margin at the design demand over time: estimates with their band, the bold zero line, a dashed forecast."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date

from fieldlog.charts.axes import Scale, round_numbers
from fieldlog.charts.frame import PAPER, Frame, Size, frame, grid, time_axis
from fieldlog.charts.labels import EndLabel
from fieldlog.charts.scene import Band, Dot, Ink, Line, Point, Poly, Scene, Shape


@dataclass(frozen=True, slots=True)
class MarginEstimate:
    """The margin at one date with the band around it."""

    on: date
    median: float
    low: float
    high: float


@dataclass(frozen=True, slots=True)
class MarginChart:
    """Everything of the chart, in the reader's unit; `forecast` goes on from the last estimate."""

    title: str
    desc: str
    unit: str
    estimates: tuple[MarginEstimate, ...]
    label: str
    zero_label: str = "design demand"
    forecast: tuple[MarginEstimate, ...] = ()
    forecast_label: str = "if it goes on"
    wanted: float | None = None  # the rule margin
    wanted_label: str = "rule margin"


def margin_chart(chart: MarginChart, size: Size = PAPER) -> Scene:
    """Return the drawing; zero is always in it, nothing lies outside, and no two labels touch."""
    low, high = _value_range(chart)
    values = round_numbers(low, high)
    area = frame(size, values, [end for end, _, _ in _levels(chart)], lines_below=1)
    across, up = area.across(*_day_range(chart)), area.up(low, high)
    shapes: list[Shape] = []
    for run in (chart.estimates, chart.forecast and (*chart.estimates[-1:], *chart.forecast)):
        shapes += _band(run, across, up)
    shapes += grid(area, up, values, chart.unit)
    shapes += time_axis(area, across)
    shapes += _level_lines(chart, area, up)
    shapes += _lines(chart, across, up)
    shapes += area.end_labels(_ends(chart, area, across, up))
    return Scene(size.width, size.height, chart.title, chart.desc, tuple(shapes))


def _value_range(chart: MarginChart) -> tuple[float, float]:
    values = [0.0, chart.wanted or 0.0]
    values += [edge for estimate in (*chart.estimates, *chart.forecast) for edge in (estimate.low, estimate.high)]
    low, high = min(values), max(values)
    margin = 0.06 * max(high - low, 1e-6)
    return low - margin, high + margin


def _day_range(chart: MarginChart) -> tuple[float, float]:
    days = [estimate.on.toordinal() for estimate in (*chart.estimates, *chart.forecast)] or [730_000]
    pad = max(0.02 * (days[-1] - days[0]), 120.0 if days[-1] - days[0] < 240 else 0.0)
    return days[0] - pad, days[-1] + pad


def _band(run: tuple[MarginEstimate, ...], across: Scale, up: Scale) -> Iterator[Shape]:
    if len(run) > 1:
        lower = tuple((across.at(estimate.on.toordinal()), up.at(estimate.low)) for estimate in run)
        upper = tuple((across.at(estimate.on.toordinal()), up.at(estimate.high)) for estimate in run)
        yield Band((*lower, *reversed(upper)))
        # Thin edges keep the band to be seen on a copy without colour.
        yield Poly(lower, Ink.ACCENT, 0.4)
        yield Poly(upper, Ink.ACCENT, 0.4)
    for estimate in run[: 1 if len(run) == 1 else 0]:
        x = across.at(estimate.on.toordinal())
        yield Line((x, up.at(estimate.low)), (x, up.at(estimate.high)), Ink.ACCENT, 0.9)


def _level_lines(chart: MarginChart, area: Frame, up: Scale) -> Iterator[Shape]:
    zero = up.at(0.0)
    yield Line((area.plot.left, zero), (area.plot.right, zero), Ink.INK, 2.0)
    if chart.wanted:
        level = up.at(chart.wanted)
        yield Line((area.plot.left, level), (area.plot.right, level), Ink.INK, 0.9, (4.0, 2.5))


def _lines(chart: MarginChart, across: Scale, up: Scale) -> Iterator[Shape]:
    points = [_place(estimate, across, up) for estimate in chart.estimates]
    if len(points) > 1:
        yield Poly(tuple(points), Ink.ACCENT, 1.8)
    if chart.forecast:
        ahead = (*points[-1:], *(_place(estimate, across, up) for estimate in chart.forecast))
        yield Poly(ahead, Ink.ACCENT, 1.8, (4.0, 3.0))
    yield from (Dot(point, 2.9, Ink.ACCENT) for point in points)


def _place(estimate: MarginEstimate, across: Scale, up: Scale) -> Point:
    return across.at(estimate.on.toordinal()), up.at(estimate.median)


def _levels(chart: MarginChart) -> list[tuple[str, float, bool]]:
    """Return label, level and whether it belongs to the estimate, for every line that ends at the right."""
    ends = [(chart.zero_label, 0.0, False)]
    if chart.wanted:
        ends.append((chart.wanted_label, chart.wanted, False))
    if chart.estimates and not chart.forecast:
        ends.append((chart.label, chart.estimates[-1].median, True))
    if chart.forecast:
        ends.append((chart.forecast_label, chart.forecast[-1].median, True))
    return ends


def _ends(chart: MarginChart, area: Frame, across: Scale, up: Scale) -> list[EndLabel]:
    last = (*chart.estimates, *chart.forecast)[-1:]
    right = across.at(last[0].on.toordinal()) if last else area.plot.right
    return [
        EndLabel(
            (right if is_estimate else area.plot.right, up.at(level)),
            label,
            Ink.ACCENT if is_estimate else Ink.INK,
            is_estimate,
        )
        for label, level, is_estimate in _levels(chart)
    ]
