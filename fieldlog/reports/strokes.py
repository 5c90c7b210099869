"""A drawn signature as vectors: the strokes of an SVG path (M, L and C only), fitted into a box."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus.flowables import Flowable

from fieldlog.charts.scene import Point
from fieldlog.errors import InputError

_TOKEN = re.compile(r"[MLC]|[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d{1,3})?")
_FARTHEST = 1e5
_NUMBERS = {"M": 2, "L": 2, "C": 6}


@dataclass(frozen=True, slots=True)
class Segment:
    """A move, a line or a curve: its letter and its points."""

    letter: str
    points: tuple[Point, ...]


def segments(path: str) -> tuple[Segment, ...]:
    """Return the segments of a path.

    Raises
    ------
    InputError
        If it holds anything but M, L and C with numbers within bounds, or does not begin with M.
    """
    rest = _TOKEN.sub("", path)
    if rest.strip(" ,\n\t"):
        raise InputError("a drawn signature holds M, L and C with numbers only; let the person sign again")
    found = tuple(_segments(_TOKEN.findall(path)))
    if not found or found[0].letter != "M":
        raise InputError("a drawn signature begins with M; let the person sign again")
    return found


def _segments(tokens: list[str]) -> Iterator[Segment]:
    letter, place = "", 0
    while place < len(tokens):
        if tokens[place] in _NUMBERS:
            letter, place = tokens[place], place + 1
        count = _NUMBERS.get(letter, 0)
        numbers = tokens[place : place + count]
        if not count or len(numbers) < count or not _NUMBERS.keys().isdisjoint(numbers):
            raise InputError(f"a drawn signature breaks off after {letter or 'nothing'}; let the person sign again")
        values = [float(number) for number in numbers]
        if not all(abs(value) <= _FARTHEST for value in values):
            raise InputError("a drawn signature holds a number out of all bounds; let the person sign again")
        yield Segment(letter, tuple(zip(values[::2], values[1::2], strict=True)))
        # Further pairs after a move are lines (SVG 2, 9.3.3).
        letter, place = ("L" if letter == "M" else letter), place + count


class Strokes(Flowable):
    """A drawn signature, as large as `width` and `height` allow, its proportions kept."""

    def __init__(self, drawn: tuple[Segment, ...], width: float, height: float) -> None:
        super().__init__()
        self.drawn, self.width, self.height = drawn, width, height

    def wrap(self, aW: float, aH: float) -> tuple[float, float]:  # noqa: ARG002, N803  reportlab's names
        """Return width and height."""
        return self.width, self.height

    def draw(self) -> None:
        """Put the strokes on the canvas with round ends, y turned up."""
        canvas: Canvas = self.canv
        points = [point for segment in self.drawn for point in segment.points]
        left, right = min(x for x, _ in points), max(x for x, _ in points)
        top, bottom = min(y for _, y in points), max(y for _, y in points)
        scale = min(self.width / max(right - left, 1e-9), (self.height - 4) / max(bottom - top, 1e-9), 1e6)
        canvas.saveState()
        canvas.setLineCap(1)
        canvas.setLineJoin(1)
        canvas.setLineWidth(1.1)
        canvas.setStrokeColorRGB(0x16 / 255, 0x18 / 255, 0x1B / 255)
        path = canvas.beginPath()
        for segment in self.drawn:
            flat = [number for x, y in segment.points for number in ((x - left) * scale, 2 + (bottom - y) * scale)]
            if segment.letter == "C":
                path.curveTo(*flat)
            elif segment.letter == "L":
                path.lineTo(*flat)
            else:
                path.moveTo(*flat)
        canvas.drawPath(path, stroke=1, fill=0)
        canvas.restoreState()
