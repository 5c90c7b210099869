"""The plot area of a chart: grid lines with their numbers, the time axis, the column of labels at the right."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from fieldlog.charts.axes import Scale, date_ticks, number_label
from fieldlog.charts.labels import Box, EndLabel, column_width, end_column
from fieldlog.charts.scene import Ink, Line, Shape, Text
from fieldlog.charts.text_width import text_width

# No label column takes more than this share of a chart's width.
_MOST_COLUMN = 0.30


@dataclass(frozen=True, slots=True)
class Size:
    """How large a chart is drawn, and the size of its text."""

    width: float
    height: float
    text: float


PAPER = Size(493.0, 186.0, 8.2)  # points, the text width of an A4 page
SCREEN = Size(760.0, 320.0, 14.0)  # pixels


@dataclass(frozen=True, slots=True)
class Frame:
    """The plot area within a chart."""

    size: Size
    plot: Box

    @property
    def label_left(self) -> float:
        """Where the column of labels begins."""
        return self.plot.right + 0.8 * self.size.text

    def up(self, low: float, high: float) -> Scale:
        """Return the vertical scale."""
        return Scale(low, high, self.plot.bottom, self.plot.top)

    def across(self, low: float, high: float, power: float = 1.0) -> Scale:
        """Return the horizontal scale."""
        return Scale(low, high, self.plot.left, self.plot.right, power)

    def end_labels(self, labels: Sequence[EndLabel]) -> list[Shape]:
        """Return the column of labels at the right."""
        room = Box(self.label_left, 0.0, self.size.width, self.plot.bottom + 0.45 * self.size.text)
        return end_column(labels, self.label_left, room, self.size.text)


def frame(size: Size, grid: Sequence[float], column: Sequence[str], lines_below: int) -> Frame:
    """Return the frame that leaves room for grid numbers, labels and `lines_below` lines of text."""
    numbers = max((text_width(number_label(value), size.text) for value in grid), default=0.0)
    labels = column_width(column, size.text, size.width * _MOST_COLUMN)
    # The last number of the axis below reaches over the plot's end by half its width.
    right = size.width - max(labels + 1.2 * size.text, 2.0 * size.text)
    top, bottom = 1.9 * size.text, size.height - (0.5 + 1.35 * lines_below) * size.text
    return Frame(size, Box(numbers + 0.7 * size.text, top, right, bottom))


def grid(frame: Frame, up: Scale, values: Sequence[float], unit: str) -> Iterator[Shape]:
    """Yield grid lines and their numbers, the unit above them."""
    text = frame.size.text
    for value in values:
        y = up.at(value)
        yield Line((frame.plot.left, y), (frame.plot.right, y), Ink.RULE, 0.7)
        at = (frame.plot.left - 0.6 * text, y + 0.34 * text)
        yield Text(at, number_label(value), text, "end", Ink.SOFT)
    yield Text((0.0, text), unit, text, "start", Ink.SOFT)


def time_axis(frame: Frame, across: Scale) -> Iterator[Shape]:
    """Yield years or months under the plot; they stand at their true places."""
    text, bottom = frame.size.text, frame.plot.bottom
    yield Line((frame.plot.left, bottom), (frame.plot.right, bottom), Ink.SOFT, 0.7)
    for day, label in date_ticks(across, text):
        x = across.at(day)
        yield Line((x, bottom), (x, bottom + 0.35 * text), Ink.SOFT, 0.7)
        half = text_width(label, text) / 2
        # A label at an end is drawn inward, so that it stays on the paper.
        middle = min(max(x, half), frame.size.width - half)
        yield Text((middle, bottom + 1.5 * text), label, text, "middle", Ink.SOFT)
