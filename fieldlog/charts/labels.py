"""Where labels go, so that no two ever touch: a column at the lines' ends, and free places beside points."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass

from fieldlog.charts.scene import Ink, Line, Point, Poly, Scene, Shape, Text
from fieldlog.charts.text_width import text_width, wrapped

LINE_HEIGHT = 1.2
_LEADER_DASH = (0.8, 1.8)
# Thinner strokes, such as the edges of a band, may run under a label.
_THIN = 0.6
_STROKE_COST = 9.0
_ASCENT, _DESCENT = 0.80, 0.24  # of the size; a line's ink with its accents stays within


@dataclass(frozen=True, slots=True)
class Box:
    """An upright rectangle."""

    left: float
    top: float
    right: float
    bottom: float

    def touches(self, other: Box) -> bool:
        """Return whether the two share any area."""
        return (
            self.left < other.right and other.left < self.right and self.top < other.bottom and other.top < self.bottom
        )

    def within(self, other: Box) -> bool:
        """Return whether this one lies inside the other."""
        return (
            self.left >= other.left
            and self.top >= other.top
            and self.right <= other.right
            and self.bottom <= other.bottom
        )


@dataclass(frozen=True, slots=True)
class EndLabel:
    """What is written beside the end of a line."""

    at: Point
    text: str
    ink: Ink = Ink.INK
    is_bold: bool = False


def text_box(text: Text) -> Box:
    """Return the room a text takes."""
    width = text_width(text.text, text.size, is_bold=text.is_bold)
    left = text.at[0] - {"start": 0.0, "middle": width / 2, "end": width}[text.anchor]
    return Box(left, text.at[1] - _ASCENT * text.size, left + width, text.at[1] + _DESCENT * text.size)


def label_boxes(scene: Scene) -> tuple[Box, ...]:
    """Return the room of every text of a drawing, in order."""
    return tuple(text_box(shape) for shape in scene.shapes if isinstance(shape, Text))


def column_width(texts: Iterable[str], size: float, most: float) -> float:
    """Return how wide a column of labels has to be, wrapped to lines not wider than `most`."""
    lines = (line for text in texts for line in wrapped(text, size, most, is_bold=True))
    return max((text_width(line, size, is_bold=True) for line in lines), default=0.0)


def end_column(labels: Sequence[EndLabel], left: float, room: Box, size: float) -> list[Shape]:
    """Return the labels in a column from `left` on, each as near to its line's end as the others allow.

    A label that had to move, or whose line ends earlier, gets a thin leader. Labels for which the column has no
    room are left out, the last ones first.
    """
    blocks = [(label, wrapped(label.text, size, room.right - left, is_bold=True)) for label in labels]
    while blocks and sum(_height(lines, size) for _, lines in blocks) > room.bottom - room.top:
        blocks.pop()
    blocks.sort(key=lambda block: block[0].at[1])
    middles = _spread([b[0].at[1] for b in blocks], [_height(b[1], size) for b in blocks], room.top, room.bottom)
    return [
        shape
        for (label, lines), middle in zip(blocks, middles, strict=True)
        for shape in _block(label, lines, (left, middle), size)
    ]


def _height(lines: Sequence[str], size: float) -> float:
    return (len(lines) * LINE_HEIGHT + 0.1) * size


def _spread(wanted: Sequence[float], heights: Sequence[float], top: float, bottom: float) -> list[float]:
    """Return middles in the same order, as near as may be to those wanted, that do not overlap.

    First each is pushed down by the one above it, then each up by the one below it and the bottom.
    """
    middles: list[float] = []
    for want, height in zip(wanted, heights, strict=True):
        least = middles[-1] + (heights[len(middles) - 1] + height) / 2 if middles else top + height / 2
        middles.append(max(want, least))
    limit = bottom
    for place in reversed(range(len(middles))):
        middles[place] = min(middles[place], limit - heights[place] / 2)
        limit = middles[place] - heights[place] / 2
    return middles


def _block(label: EndLabel, lines: Sequence[str], at: Point, size: float) -> Iterator[Shape]:
    left, middle = at
    if abs(middle - label.at[1]) > 0.5 * size or left - label.at[0] > 2.0 * size:
        yield Line((label.at[0] + 2, label.at[1]), (left - 2, middle), Ink.SOFT, 0.6, _LEADER_DASH)
    first = middle - (len(lines) - 1) * LINE_HEIGHT * size / 2 + 0.32 * size
    for place, line in enumerate(lines):
        baseline = first + place * LINE_HEIGHT * size
        yield Text((left, baseline), line, size, ink=label.ink, is_bold=label.is_bold)


@dataclass(frozen=True, slots=True)
class Surroundings:
    """What a free label keeps clear of: it must be in `room` and off `taken`, and should be off `strokes`."""

    room: Box
    taken: tuple[Box, ...]
    strokes: tuple[tuple[Point, Point], ...]

    def cost(self, point: Point, box: Box, size: float) -> float | None:
        """Return how bad a place for the label of `point` is, or None where it may not stand.

        Far is bad, by text sizes; a stroke under the label is as bad as being this much farther away.
        """
        leader = (point, _nearest(point, box))
        roomy = _grown(box, 0.25 * size)
        if not roomy.within(self.room) or any(roomy.touches(other) or _crosses(other, *leader) for other in self.taken):
            return None
        under = sum(_crosses(roomy, *stroke) for stroke in self.strokes)
        return _length(*leader) / size + _STROKE_COST * under


def surroundings(room: Box, shapes: Iterable[Shape]) -> Surroundings:
    """Return what the shapes drawn so far leave free."""
    drawn = list(shapes)
    taken = tuple(text_box(shape) for shape in drawn if isinstance(shape, Text))
    return Surroundings(room, taken, tuple(stroke for shape in drawn for stroke in _strokes(shape)))


def beside(point: Point, text: str, size: float, around: Surroundings, *, is_bold: bool = False) -> list[Shape]:
    """Return a label near `point`, with a leader if it is not next to it; nothing if there is no place at all."""
    width = text_width(text, size, is_bold=is_bold)
    best: tuple[float, Text] | None = None
    for place in _places(point, width, size, around.room):
        label = Text(place, text, size, is_bold=is_bold, has_halo=True)
        box = Box(place[0], place[1] - _ASCENT * size, place[0] + width, place[1] + _DESCENT * size)
        if best is not None and _length(point, _nearest(point, box)) / size >= best[0]:
            continue
        cost = around.cost(point, box, size)
        if cost is not None and (best is None or cost < best[0]):
            best = (cost, label)
    return [*_leader(point, text_box(best[1]), size), best[1]] if best else []


def _places(point: Point, width: float, size: float, room: Box) -> Iterator[Point]:
    x, y = point
    gap = 0.9 * size
    for drop in (0.35, 1.5, -0.9, 2.7, -2.1, 4.0, -3.4):
        yield x + gap, y + drop * size
        yield x - gap - width, y + drop * size
    for drop in (-0.9, 1.6):
        yield x - width / 2, y + drop * size
    for step in range(1, 12):
        for x_step in range(10):
            left = room.left + x_step / 9 * max(room.right - room.left - width, 0)
            yield left, room.bottom - step / 12 * (room.bottom - room.top)


def _leader(point: Point, box: Box, size: float) -> list[Shape]:
    nearest = _nearest(point, box)
    return [Line(point, nearest, Ink.SOFT, 0.6)] if _length(point, nearest) > 1.6 * size else []


def _nearest(point: Point, box: Box) -> Point:
    return min(max(point[0], box.left), box.right), min(max(point[1], box.top), box.bottom)


def _length(start: Point, end: Point) -> float:
    return math.hypot(end[0] - start[0], end[1] - start[1])


def _grown(box: Box, by: float) -> Box:
    return Box(box.left - by, box.top - by, box.right + by, box.bottom + by)


def _strokes(shape: Shape) -> list[tuple[Point, Point]]:
    if isinstance(shape, Line) and shape.ink is not Ink.RULE:
        return [(shape.start, shape.end)]
    if isinstance(shape, Poly) and shape.width > _THIN:
        return list(zip(shape.points[:-1], shape.points[1:], strict=True))
    return []


def _crosses(box: Box, start: Point, end: Point) -> bool:
    """Return whether a stroke passes through a box (Liang and Barsky's clipping, 1984)."""
    if min(start[0], end[0]) > box.right or max(start[0], end[0]) < box.left:
        return False
    enter, leave = 0.0, 1.0
    run, rise = end[0] - start[0], end[1] - start[1]
    edges = (
        (-run, start[0] - box.left), (run, box.right - start[0]),
        (-rise, start[1] - box.top), (rise, box.bottom - start[1]),
    )  # fmt: skip
    for slope, distance in edges:
        if slope == 0:
            if distance < 0:
                return False
        elif slope < 0:
            enter = max(enter, distance / slope)
        else:
            leave = min(leave, distance / slope)
    return enter <= leave
