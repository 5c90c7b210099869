"""Labels of every chart: none touches another, all stay on the paper, whatever the numbers."""

from __future__ import annotations

from datetime import date, timedelta
from itertools import combinations, pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.charts.frame import PAPER, SCREEN, Size
from fieldlog.charts.history import ExpectedRange, HistoryChart, Reading, ReferenceLine, Series, history_chart
from fieldlog.charts.labels import Box, EndLabel, end_column, label_boxes
from fieldlog.charts.margin import MarginChart, MarginEstimate, margin_chart
from fieldlog.charts.scene import Band, Dot, Line, Poly, Scene, Text
from fieldlog.charts.supply import Curve, FlowPoint, SupplyChart, supply_chart

SIZES = st.sampled_from([PAPER, SCREEN, Size(320.0, 150.0, 11.0)])
WORDS = st.text(st.sampled_from("abcdefgh 0123456789.,ÄßЖ−"), max_size=60)
PRESSURES = st.floats(0.3, 900)
FLOWS = st.floats(5, 9000)
DATES = st.dates(date(1975, 3, 2), date(2060, 7, 9))


def points_of(scene: Scene) -> list[tuple[float, float]]:
    found: list[tuple[float, float]] = []
    for shape in scene.shapes:
        match shape:
            case Line():
                found += [shape.start, shape.end]
            case Poly() | Band():
                found += shape.points
            case Dot():
                found.append(shape.centre)
            case Text():
                found.append(shape.at)
    return found


def assert_clean(scene: Scene) -> None:
    boxes = label_boxes(scene)
    assert not [(a, b) for a, b in combinations(boxes, 2) if a.touches(b)]
    paper = Box(-0.01, -0.01, scene.w + 0.01, scene.h + 0.01)
    assert all(box.within(paper) for box in boxes)
    # A half stroke may lie over the edge.
    assert all(-5 <= x <= scene.w + 5 and -5 <= y <= scene.h + 5 for x, y in points_of(scene))


@st.composite
def curves(draw: st.DrawFn) -> Curve:
    flows = sorted(draw(st.lists(FLOWS, max_size=6)))
    points = tuple((flow, draw(PRESSURES)) for flow in flows)
    lower = tuple((flow, pressure * 0.7) for flow, pressure in points)
    band = draw(st.sampled_from([((), ()), (lower, points)]))
    return Curve(draw(WORDS), points, draw(st.none() | FLOWS), draw(st.booleans()), band)


FLOW_POINTS = st.builds(FlowPoint, FLOWS, PRESSURES, WORDS)


@given(st.lists(curves(), max_size=6), st.lists(FLOW_POINTS, max_size=5), st.none() | FLOW_POINTS, SIZES)
def test_labels_of_any_supply_chart_stay_apart(
    drawn: list[Curve], tests: list[FlowPoint], demand: FlowPoint | None, size: Size
) -> None:
    chart = SupplyChart("T", "D", tuple(drawn), "gpm", "psi", tuple(tests), demand)
    assert_clean(supply_chart(chart, size))


@st.composite
def series(draw: st.DrawFn) -> Series:
    days = sorted(draw(st.lists(DATES, max_size=30)))
    readings = tuple(Reading(day, draw(PRESSURES), draw(st.booleans())) for day in days)
    return Series(draw(WORDS), readings, draw(st.booleans()))


LINES = st.builds(ReferenceLine, WORDS, PRESSURES, st.none() | DATES, st.booleans())


@st.composite
def ranges(draw: st.DrawFn) -> ExpectedRange:
    low, begin = draw(PRESSURES), draw(DATES)
    return ExpectedRange(low, low + draw(PRESSURES), begin, begin + timedelta(draw(st.integers(2, 900))), draw(WORDS))


@given(st.lists(series(), max_size=3), st.lists(LINES, max_size=7), st.lists(ranges(), max_size=2), SIZES)
def test_labels_of_any_history_stay_apart(
    kinds: list[Series], lines: list[ReferenceLine], expected: list[ExpectedRange], size: Size
) -> None:
    chart = HistoryChart("T", "D", "bar", tuple(kinds), tuple(lines), tuple(expected))
    assert_clean(history_chart(chart, size))


@st.composite
def estimates(draw: st.DrawFn) -> tuple[MarginEstimate, ...]:
    days = sorted(draw(st.lists(DATES, max_size=20, unique=True)))
    middles = [draw(st.floats(-80, 120)) for _ in days]
    return tuple(MarginEstimate(day, m, m - 9.5, m + 7.25) for day, m in zip(days, middles, strict=True))


@given(estimates(), st.integers(0, 20), st.none() | st.floats(0.5, 60), WORDS, SIZES)
def test_labels_of_any_margin_chart_stay_apart(
    run: tuple[MarginEstimate, ...], ahead: int, wanted: float | None, words: str, size: Size
) -> None:
    chart = MarginChart("T", "D", "psi", run[ahead:], words, forecast=run[:0], wanted=wanted)
    assert_clean(margin_chart(chart, size))
    forecast = MarginChart("T", "D", "psi", run[:ahead], words, forecast=run[ahead:], wanted=wanted)
    assert_clean(margin_chart(forecast, size))


def test_end_labels_of_nearly_equal_lines_are_spread_in_their_order() -> None:
    labels = [EndLabel((50.0, y), f"line {n}") for n, y in enumerate((40.0, 41.0, 39.5, 90.0))]
    shapes = end_column(labels, 60.0, Box(60.0, 0.0, 160.0, 120.0), 8.0)
    texts = [shape for shape in shapes if isinstance(shape, Text)]
    assert [text.text for text in texts] == ["line 2", "line 0", "line 1", "line 3"]
    assert min(b.at[1] - a.at[1] for a, b in pairwise(texts)) >= 8.0 * 1.2


def test_a_column_without_room_leaves_out_the_last_labels() -> None:
    labels = [EndLabel((50.0, 20.0), f"line {n}") for n in range(9)]
    shapes = end_column(labels, 60.0, Box(60.0, 0.0, 160.0, 55.0), 8.0)
    assert [shape.text for shape in shapes if isinstance(shape, Text)] == [f"line {n}" for n in range(5)]


@pytest.mark.parametrize("words", ["demand 620 gpm, 46.5 psi"])
def test_the_check_of_this_file_sees_a_collision(words: str) -> None:
    text = Text((30.0, 40.0), words, 9.0)
    scene = Scene(300.0, 100.0, "T", "D", (text, Text((60.0, 44.0), words, 9.0)))
    with pytest.raises(AssertionError):
        assert_clean(scene)
