"""One drawing as a list of plain shapes in SVG's coordinates (x right, y down); the writers add nothing to it."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

Point = tuple[float, float]


class Ink(StrEnum):
    """What a stroke or surface stands for; the writers know its colour."""

    INK = "ink"
    SOFT = "soft"
    RULE = "rule"
    ACCENT = "accent"
    WASH = "wash"
    CAUTION = "caution"
    PAPER = "paper"


COLOURS = {
    Ink.INK: "#16181b",
    Ink.SOFT: "#4a4f55",
    Ink.RULE: "#c9c5ba",
    Ink.ACCENT: "#0d4f5c",
    Ink.WASH: "#dcebed",
    Ink.CAUTION: "#efece3",
    Ink.PAPER: "#fdfcf9",
}


@dataclass(frozen=True, slots=True)
class Line:
    """A straight stroke."""

    start: Point
    end: Point
    ink: Ink = Ink.INK
    width: float = 1.0
    dash: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Poly:
    """A stroke through several points, open at its ends."""

    points: tuple[Point, ...]
    ink: Ink = Ink.INK
    width: float = 1.0
    dash: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Band:
    """A filled outline without a stroke."""

    points: tuple[Point, ...]
    ink: Ink = Ink.WASH


@dataclass(frozen=True, slots=True)
class Dot:
    """A round mark; an open one is a ring filled with paper."""

    centre: Point
    radius: float
    ink: Ink = Ink.INK
    is_open: bool = False


@dataclass(frozen=True, slots=True)
class Text:
    """One line of text on its baseline; `anchor` is start, middle or end."""

    at: Point
    text: str
    size: float
    anchor: str = "start"
    ink: Ink = Ink.INK
    is_bold: bool = False
    has_halo: bool = False


Shape = Line | Poly | Band | Dot | Text


@dataclass(frozen=True, slots=True)
class Scene:
    """A drawing of width `w` and height `h`; `title` and `desc` say it to those who don't see it."""

    w: float
    h: float
    title: str
    desc: str
    shapes: tuple[Shape, ...]
