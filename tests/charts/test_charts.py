"""What the charts show: true positions, dashes where nothing was measured, gaps, few grid lines; grey copies."""

from __future__ import annotations

from datetime import date
from itertools import pairwise

import pytest

from fieldlog.charts.axes import Scale, number_label, round_numbers, round_up
from fieldlog.charts.history import ExpectedRange, HistoryChart, Reading, ReferenceLine, Series, history_chart
from fieldlog.charts.margin import MarginChart, MarginEstimate, margin_chart
from fieldlog.charts.scene import COLOURS, Band, Dot, Ink, Line, Poly, Scene, Text
from fieldlog.charts.shapes import STATEMENT_NAMES, Sparkline, sparkline, statement_shape
from fieldlog.charts.supply import Curve, FlowPoint, SupplyChart, supply_chart
from fieldlog.records.statement import Statement


def texts(scene: Scene) -> list[str]:
    return [shape.text for shape in scene.shapes if isinstance(shape, Text)]


def polys(scene: Scene, ink: Ink, width: float) -> list[Poly]:
    return [s for s in scene.shapes if isinstance(s, Poly) and s.ink is ink and s.width == width]


def supply_scene() -> Scene:
    # static 78 psi, residual 53 psi at 1200 gpm: the 1.85 line through both.
    flows = (0.0, 150.0, 400.0, 700.0, 900.0, 1200.0)
    line = tuple((flow, 78 - 25 * (flow / 1200) ** 1.85) for flow in flows)
    curve = Curve("flow test 2019", line, 800.0, is_newest=True)
    demand = FlowPoint(620.0, 46.5, "demand 620 gpm, 46.5 psi")
    return supply_chart(SupplyChart("T", "D", (curve,), "gpm", "psi", (FlowPoint(800.0, 66.2, "tested"),), demand))


def test_a_supply_curve_is_straight_on_this_paper() -> None:
    (measured, beyond) = polys(supply_scene(), Ink.ACCENT, 2.0)
    points = [*measured.points, *beyond.points[1:]]
    slopes = [(b[1] - a[1]) / (b[0] - a[0]) for a, b in pairwise(points)]
    assert max(slopes) - min(slopes) < 1e-9


def test_what_lies_beyond_the_measured_flow_is_dashed() -> None:
    (measured, beyond) = polys(supply_scene(), Ink.ACCENT, 2.0)
    assert (measured.dash, beyond.dash != ()) == ((), True)
    assert measured.points[-1] == beyond.points[0]
    (tested,) = [shape for shape in supply_scene().shapes if isinstance(shape, Dot)]
    assert measured.points[-1][0] == pytest.approx(tested.centre[0])


def test_an_upright_stroke_joins_demand_and_newest_curve() -> None:
    uprights = [
        shape
        for shape in supply_scene().shapes
        if isinstance(shape, Line) and shape.ink is Ink.INK and shape.width == 0.9 and not shape.dash
    ]
    (stroke,) = uprights
    assert stroke.start[0] == stroke.end[0]
    share = (620 / 1200) ** 1.85
    (measured, beyond) = polys(supply_scene(), Ink.ACCENT, 2.0)
    (left, top), (right, bottom) = measured.points[0], beyond.points[-1]
    assert stroke.end[1] == pytest.approx(top + share * (bottom - top))
    assert stroke.start[0] == pytest.approx(left + share * (right - left))


def test_the_supply_chart_names_its_power_scale_and_its_demand() -> None:
    said = texts(supply_scene())
    assert "flow, gpm (1.85-power scale)" in said
    assert "demand 620 gpm, 46.5 psi" in said
    assert "flow test 2019" in said


DATES = (date(2011, 10, 4), date(2012, 10, 9), date(2013, 10, 2), date(2019, 10, 8), date(2020, 10, 6))


def history_scene() -> Scene:
    residual = tuple(Reading(day, value) for day, value in zip(DATES, (64.0, 63.0, 62.0, 58.0, 57.0), strict=True))
    series = (Series("residual 57", residual, is_main=True),)
    lines = (
        ReferenceLine("acceptance 64", 64.0, DATES[0]),
        ReferenceLine("ten percent line 57.6", 57.6, None, True),
    )
    expected = (ExpectedRange(54.0, 61.0, DATES[-1], date(2021, 12, 24), "expected"),)
    return history_chart(HistoryChart("T", "D", "psi", series, lines, expected))


def test_points_stand_at_their_true_time() -> None:
    dots = [shape.centre[0] for shape in history_scene().shapes if isinstance(shape, Dot)]
    days = [day.toordinal() for day in DATES]
    whole = (dots[-1] - dots[0]) / (days[-1] - days[0])
    assert [dot - dots[0] for dot in dots] == pytest.approx([whole * (day - days[0]) for day in days])


def test_a_gap_is_left_open_and_named() -> None:
    runs = polys(history_scene(), Ink.ACCENT, 1.8)
    assert [len(run.points) for run in runs] == [3, 2]
    assert "no test for 6.0 years" in texts(history_scene())


def test_even_yearly_tests_have_no_gap() -> None:
    readings = tuple(Reading(date(year, 5, 3 + year % 7), 50.0 + year % 3) for year in range(2004, 2016))
    scene = history_chart(HistoryChart("T", "D", "psi", (Series("residual", readings, is_main=True),)))
    assert [len(run.points) for run in polys(scene, Ink.ACCENT, 1.8)] == [12]


def test_a_test_that_is_not_comparable_is_a_ring_outside_the_line() -> None:
    readings = tuple(
        Reading(date(year, 5, 7), 50.0 + year % 3, is_comparable=year != 2006) for year in range(2004, 2009)
    )
    scene = history_chart(HistoryChart("T", "D", "psi", (Series("residual", readings, is_main=True),)))
    assert [dot.is_open for dot in scene.shapes if isinstance(dot, Dot)] == [False, False, True, False, False]
    (run,) = polys(scene, Ink.ACCENT, 1.8)
    assert len(run.points) == 4


def test_the_zero_line_is_the_strongest_of_a_margin_chart() -> None:
    estimates = tuple(MarginEstimate(date(year, 6, 3), 30.0 - year % 50, 22.0, 35.0) for year in range(2012, 2019))
    forecast = (MarginEstimate(date(2021, 6, 3), 4.5, -2.5, 11.0),)
    scene = margin_chart(MarginChart("T", "D", "psi", estimates, "margin 12", forecast=forecast, wanted=5.0))
    strokes = [shape for shape in scene.shapes if isinstance(shape, Line)]
    thickest = max(strokes, key=lambda stroke: stroke.width)
    assert thickest.width >= 1.5 * sorted(stroke.width for stroke in strokes)[-2]
    assert "design demand" in texts(scene)
    assert [poly.dash != () for poly in polys(scene, Ink.ACCENT, 1.8)] == [False, True]


@pytest.mark.parametrize(("low", "high"), [(0, 80), (0, 1203), (51.3, 79.2), (-4.2, 31.5), (0, 0.73), (3.1, 3.2)])
def test_at_most_five_grid_lines_and_at_least_two(low: float, high: float) -> None:
    numbers = round_numbers(low, high)
    assert 2 <= len(numbers) <= 5
    assert all(low <= number <= high for number in numbers)


def test_grid_numbers_are_printed_short() -> None:
    assert [number_label(value) for value in (-5.0, 0.0, 0.25, 400.0, 1e-9)] == ["−5", "0", "0.25", "400", "0"]
    assert round_up(78.0) == 80.0


def test_the_power_scale_is_the_power() -> None:
    scale = Scale(0.0, 900.0, 40.0, 440.0, 1.85)
    assert scale.at(300.0) == pytest.approx(40 + 400 * (1 / 3) ** 1.85)


def luminance(ink: Ink) -> float:
    """Relative luminance (WCAG 2.2, from memory)."""
    parts = [int(COLOURS[ink][place : place + 2], 16) / 255 for place in (1, 3, 5)]
    red, green, blue = (p / 12.92 if p <= 0.03928 else ((p + 0.055) / 1.055) ** 2.4 for p in parts)
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


@pytest.mark.parametrize("ink", [Ink.INK, Ink.SOFT, Ink.ACCENT])
def test_every_ink_that_carries_meaning_is_dark_on_paper(ink: Ink) -> None:
    assert (luminance(Ink.PAPER) + 0.05) / (luminance(ink) + 0.05) > 7


def test_every_statement_has_a_shape_of_its_own() -> None:
    assert set(STATEMENT_NAMES) == {statement.value for statement in Statement}
    drawn = {statement_shape(name).shapes for name in STATEMENT_NAMES}
    assert len(drawn) == len(STATEMENT_NAMES)


def test_every_statements_shape_stands_against_the_dashed_demand() -> None:
    for name in STATEMENT_NAMES:
        (demand,) = [s for s in statement_shape(name).shapes if isinstance(s, Line)]
        assert demand.dash
        level = demand.start[1]
        heights = [y for s in statement_shape(name).shapes if isinstance(s, (Poly, Band)) for _, y in s.points]
        if name == "below demand (estimate)":
            assert min(heights) > level
        elif name == "suspected impairment":
            assert min(heights) < level < max(heights)
        else:
            assert max(heights) < level


def test_a_sparkline_keeps_true_times_and_marks_the_newest() -> None:
    values = tuple((day, level) for day, level in zip(DATES, (64.0, 63.0, 62.0, 58.0, 57.0), strict=True))
    scene = sparkline(Sparkline("T", "D", values, 57.6))
    (line,) = [shape for shape in scene.shapes if isinstance(shape, Poly)]
    (dot,) = [shape for shape in scene.shapes if isinstance(shape, Dot)]
    steps = [b[0] - a[0] for a, b in pairwise(line.points)]
    assert steps[2] == pytest.approx(steps[1] * (DATES[3] - DATES[2]).days / (DATES[2] - DATES[1]).days)
    assert dot.centre == line.points[-1]
    assert sparkline(Sparkline("T", "D", ())).shapes == ()
