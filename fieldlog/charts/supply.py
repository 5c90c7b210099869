"""The supply curve against the demand, on an axis of flow to the power 1.85, where such a curve is straight."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import pairwise

from fieldlog.charts.axes import (
    FLOW_POWER,
    Scale,
    number_label,
    round_numbers,
    round_up,
    spaced_labels,
)
from fieldlog.charts.frame import PAPER, Frame, Size, frame, grid
from fieldlog.charts.labels import EndLabel, beside, surroundings
from fieldlog.charts.scene import Band, Dot, Ink, Line, Point, Poly, Scene, Shape, Text

# Upright lines are thin, and crowd only where the power axis is narrow, where those that collide are left out.
_MOST_FLOWS = 8


@dataclass(frozen=True, slots=True)
class Curve:
    """A supply curve as (flow, pressure) points of rising flow; beyond `measured_to_flow` it is drawn dashed.

    `band` holds the points of its lower and of its upper edge, where it is an estimate.
    """

    label: str
    points: tuple[Point, ...]
    measured_to_flow: float | None = None
    is_newest: bool = False
    band: tuple[tuple[Point, ...], tuple[Point, ...]] = ((), ())


@dataclass(frozen=True, slots=True)
class FlowPoint:
    """One measured flow and the pressure at it."""

    flow: float
    pressure: float
    label: str = ""


@dataclass(frozen=True, slots=True)
class SupplyChart:
    """Everything of the chart, in the reader's units; the first curve is drawn last, on top."""

    title: str
    desc: str
    curves: tuple[Curve, ...]
    flow_unit: str
    pressure_unit: str
    tests: tuple[FlowPoint, ...] = ()
    demand: FlowPoint | None = None


def supply_chart(chart: SupplyChart, size: Size = PAPER) -> Scene:
    """Return the drawing; nothing in it lies outside, and no two labels touch."""
    chart = replace(chart, curves=tuple(curve for curve in chart.curves if curve.points))
    points = list(_all_points(chart))
    top = round_up(max((pressure for _, pressure in points), default=0.0))
    widest = max((flow for flow, _ in points), default=0.0) or 1.0
    values = round_numbers(0.0, top)
    area = frame(size, values, [curve.label for curve in chart.curves], lines_below=2)
    across, up = area.across(0.0, widest, FLOW_POWER), area.up(0.0, top)
    shapes = [*grid(area, up, values, chart.pressure_unit), *_flow_axis(area, across, chart.flow_unit)]
    for curve in reversed(chart.curves):
        shapes += _curve(curve, across, up)
    shapes += _marks(chart, across, up)
    shapes += area.end_labels([_end(curve, across, up) for curve in chart.curves])
    for point in _labelled(chart):
        at = (across.at(point.flow), up.at(point.pressure))
        is_demand = point is chart.demand
        shapes += beside(at, point.label, size.text, surroundings(area.plot, shapes), is_bold=is_demand)
    return Scene(size.width, size.height, chart.title, chart.desc, tuple(shapes))


def _all_points(chart: SupplyChart) -> Iterator[Point]:
    for curve in chart.curves:
        yield from curve.points
        for edge in curve.band:
            yield from edge
    for point in (*chart.tests, *((chart.demand,) if chart.demand else ())):
        yield point.flow, point.pressure


def _labelled(chart: SupplyChart) -> list[FlowPoint]:
    demand = [chart.demand] if chart.demand else []
    return [point for point in (*demand, *chart.tests) if point.label]


def _flow_axis(area: Frame, across: Scale, unit: str) -> Iterator[Shape]:
    text, plot = area.size.text, area.plot
    flows = round_numbers(0.0, across.high, _MOST_FLOWS)
    labelled = spaced_labels(across, flows, [number_label(flow) for flow in flows], text)
    for flow, label in labelled:
        x = across.at(flow)
        yield Line((x, plot.top), (x, plot.bottom), Ink.RULE, 0.4)
        yield Text((x, plot.bottom + 1.4 * text), label, text, "middle", Ink.SOFT)
    yield Line((plot.left, plot.bottom), (plot.right, plot.bottom), Ink.INK, 1.1)
    middle = (plot.left + plot.right) / 2
    yield Text((middle, plot.bottom + 2.7 * text), f"flow, {unit} (1.85-power scale)", text, "middle", Ink.SOFT)


def _curve(curve: Curve, across: Scale, up: Scale) -> Iterator[Shape]:
    ink, width = (Ink.ACCENT, 2.0) if curve.is_newest else (Ink.INK, 0.9)
    lower, upper = (_placed(edge, across, up) for edge in curve.band)
    if lower and upper:
        yield Band((*lower, *reversed(upper)))
        # Thin edges keep the band to be seen on a copy without colour.
        yield Poly(lower, Ink.ACCENT, 0.4)
        yield Poly(upper, Ink.ACCENT, 0.4)
    measured, beyond = _parted(curve, across)
    if len(measured) > 1:
        yield Poly(_placed(measured, across, up), ink, width)
    if len(beyond) > 1:
        yield Poly(_placed(beyond, across, up), ink, width, (4.0, 3.0))


def _placed(points: Sequence[Point], across: Scale, up: Scale) -> tuple[Point, ...]:
    return tuple((across.at(flow), up.at(pressure)) for flow, pressure in points)


def _parted(curve: Curve, across: Scale) -> tuple[Sequence[Point], Sequence[Point]]:
    """Return the points up to where the curve was measured, and those from there on."""
    end = curve.measured_to_flow
    if end is None or not curve.points or end >= curve.points[-1][0]:
        return curve.points, ()
    pressure = _pressure_at(curve, end, across)
    if pressure is None:
        return (), curve.points
    here = (end, pressure)
    return (
        [*(point for point in curve.points if point[0] < end), here],
        [here, *(point for point in curve.points if point[0] > end)],
    )


def _pressure_at(curve: Curve, flow: float, across: Scale) -> float | None:
    """Return the pressure of the drawn line at a flow, or None beyond its ends."""
    for (flow_a, pressure_a), (flow_b, pressure_b) in pairwise(curve.points):
        if flow_a <= flow <= flow_b and flow_a < flow_b:
            share = (across.at(flow) - across.at(flow_a)) / (across.at(flow_b) - across.at(flow_a))
            return pressure_a + share * (pressure_b - pressure_a)
    return None


def _end(curve: Curve, across: Scale, up: Scale) -> EndLabel:
    flow, pressure = curve.points[-1]
    ink = Ink.ACCENT if curve.is_newest else Ink.INK
    return EndLabel((across.at(flow), up.at(pressure)), curve.label, ink, curve.is_newest)


def _marks(chart: SupplyChart, across: Scale, up: Scale) -> Iterator[Shape]:
    for test in chart.tests:
        yield Dot((across.at(test.flow), up.at(test.pressure)), 2.6, Ink.INK, is_open=True)
    if chart.demand is None:
        return
    x, y = across.at(chart.demand.flow), up.at(chart.demand.pressure)
    newest = next((curve for curve in chart.curves if curve.is_newest), None)
    available = _pressure_at(newest, chart.demand.flow, across) if newest else None
    if available is not None:
        yield Line((x, y), (x, up.at(available)), Ink.INK, 0.9)
    yield Line((x - 4.5, y), (x + 4.5, y), Ink.INK, 2.0)
    yield Line((x, y - 4.5), (x, y + 4.5), Ink.INK, 2.0)
