"""Small drawings that go with words: the shape of a statement, and a line of history.

In each statement's shape the dashed line is the recorded design demand. Shape and word carry the meaning, never a
colour.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import date

from fieldlog.charts.scene import Band, Dot, Ink, Line, Point, Poly, Scene, Shape

_W, _H = 60.0, 46.0
_BAR = 7.5
_LEFT, _RIGHT = 3.0, 57.0
_DEMAND = Line((_LEFT, 30.0), (_RIGHT, 30.0), Ink.INK, 2.2, (4.2, 3.0))


def _bar(points: Sequence[Point]) -> Shape:
    return Poly(tuple(points), Ink.INK, _BAR)


def _holding() -> list[Shape]:
    return [_DEMAND, _bar([(_LEFT, 14.0), (_RIGHT, 14.0)])]


def _changed() -> list[Shape]:
    return [_DEMAND, _bar([(_LEFT, 7.0), (27.0, 7.0), (_RIGHT, 22.0)])]


def _below_demand() -> list[Shape]:
    return [_DEMAND, _bar([(_LEFT, 40.0), (_RIGHT, 40.0)])]


def _unproven() -> list[Shape]:
    outline = ((_LEFT, 9.0), (_RIGHT, 9.0), (_RIGHT, 18.0), (_LEFT, 18.0), (_LEFT, 9.0), (_RIGHT, 9.0))
    return [_DEMAND, Poly(outline, Ink.INK, 1.6)]


def _not_comparable() -> list[Shape]:
    return [_DEMAND, _bar([(_LEFT, 7.0), (27.0, 7.0)]), _bar([(33.0, 18.0), (_RIGHT, 18.0)])]


def _suspected_impairment() -> list[Shape]:
    return [_DEMAND, Band(((21.0, 4.0), (39.0, 4.0), (39.0, 44.0), (21.0, 44.0)), Ink.INK)]


_STATEMENTS: dict[str, Callable[[], list[Shape]]] = {
    "holding": _holding,
    "changed": _changed,
    "below demand (estimate)": _below_demand,
    "unproven": _unproven,
    "not comparable": _not_comparable,
    "suspected impairment": _suspected_impairment,
}
STATEMENT_NAMES = tuple(_STATEMENTS)


def statement_shape(name: str) -> Scene:
    """Return the shape of a statement by its name; KeyError for a name that is none."""
    return Scene(_W, _H, name, f"Shape of the statement: {name}.", tuple(_STATEMENTS[name]()))


@dataclass(frozen=True, slots=True)
class Sparkline:
    """A few values over time, oldest first, and the level they are held against."""

    title: str
    desc: str
    values: tuple[tuple[date, float], ...]
    reference: float | None = None


def sparkline(line: Sparkline, width: float = 120.0, height: float = 28.0) -> Scene:
    """Return the drawing: values at their true times, the newest with a dot, the reference dashed."""
    days = [day.toordinal() for day, _ in line.values]
    levels = [value for _, value in line.values] + ([line.reference] if line.reference is not None else [])
    shapes: list[Shape] = []
    if line.reference is not None:
        y = _share(line.reference, levels, height - 4, 4.0)
        shapes.append(Line((2.0, y), (width - 2, y), Ink.INK, 1.0, (3.0, 2.0)))
    points = [
        (_share(day, days, 4.0, width - 6), _share(value, levels, height - 4, 4.0))
        for day, (_, value) in zip(days, line.values, strict=True)
    ]
    if len(points) > 1:
        shapes.append(Poly(tuple(points), Ink.ACCENT, 1.5))
    shapes += [Dot(point, 2.5, Ink.ACCENT) for point in points[-1:]]
    return Scene(width, height, line.title, line.desc, tuple(shapes))


def _share(value: float, among: Sequence[float], start: float, end: float) -> float:
    """Return the place between `start` and `end`; the middle where all values are the same."""
    low, high = min(among), max(among)
    return (start + end) / 2 if not high > low else start + (end - start) * (value - low) / (high - low)
