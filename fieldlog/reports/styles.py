"""The look on paper: styles of paragraphs, rules, and the one way from a text to a paragraph."""

from __future__ import annotations

from fieldlog.reports import fonts  # first: it sets reportlab's defaults  # isort: skip
from reportlab.lib.colors import Color, HexColor
from reportlab.platypus import HRFlowable

from fieldlog.charts.pdf import Typefaces
from fieldlog.charts.scene import COLOURS, Ink
from fieldlog.reports.prose import Prose, Span, Style

TYPEFACES = Typefaces(fonts.REGULAR, fonts.BOLD, fonts.printable)
PAINTS: dict[Ink, Color] = {ink: HexColor(colour) for ink, colour in COLOURS.items()}
_INK, _SOFT = PAINTS[Ink.INK], PAINTS[Ink.SOFT]

BODY = Style(9.0, _INK, after=4.0)
BODY_BOLD = Style(9.0, _INK, fonts.BOLD, after=4.0)
SOFT = Style(8.2, _SOFT)
SOFT_AFTER = Style(8.2, _SOFT, after=5.0)
ORGANISATION = Style(10.0, _INK, fonts.BOLD)
# The right of a report's title is left to the code that leads to its verify page.
_CODE_ROOM = 84.0
SITE = Style(21.0, _INK, fonts.BOLD, after=1.0, right=_CODE_ROOM)
HEADING = Style(10.5, _INK, after=1.0, right=_CODE_ROOM)
SITE_LINE = Style(8.2, _SOFT, right=_CODE_ROOM)
SECTION = Style(14.0, _INK, fonts.BOLD, after=2.0, keeps_with_next=True)
LESSER = Style(11.0, _INK, fonts.BOLD, after=3.0, keeps_with_next=True)
BLOCK = Style(10.0, _INK, fonts.BOLD, before=7.0, after=2.0, keeps_with_next=True)
TEST = Style(9.0, _INK, fonts.BOLD, after=1.0, keeps_with_next=True)
SUBTITLE = Style(8.2, _SOFT, after=5.0, keeps_with_next=True)
CELL = Style(8.4, _INK)
CELL_BOLD = Style(8.4, _INK, fonts.BOLD)
CELL_SOFT = Style(8.4, _SOFT)
CELL_NUMBER = Style(8.4, _INK, is_right=True)
CELL_HEAD = Style(8.0, _INK, fonts.BOLD)
CELL_HEAD_NUMBER = Style(8.0, _INK, fonts.BOLD, is_right=True)
READING_SIZE, UNIT_SIZE = 17.0, 9.0
FINE = Style(7.2, _SOFT)
ITEM = Style(9.0, _INK, after=2.5, left=11.0)

# A statement hangs beside its shape.
_SHAPE_ROOM = 64.0
SYSTEM = Style(8.6, _SOFT, fonts.BOLD, after=1.0, left=_SHAPE_ROOM, keeps_with_next=True)
SENTENCE = Style(12.4, _INK, fonts.BOLD, after=3.0, left=_SHAPE_ROOM)
REASON = Style(9.0, _SOFT, after=2.5, left=_SHAPE_ROOM)


def span(text: str, style: Style) -> Span:
    """Return a text as typed in the typeface and ink of a style."""
    return Span(fonts.printable(text), style.font, style.paint)


def paragraph(text: str, style: Style = BODY, *, bullet: str = "") -> Prose:
    """Return a paragraph of a text as typed."""
    return Prose((span(text, style),), style, bullet)


def brief(text: str, most: int = 160) -> str:
    """Return a text on one line, cut with an ellipsis; for what has to fit into a box of its own."""
    line = " ".join(text.split())
    return line if len(line) <= most else line[: most - 1] + "…"


def rule(thickness: float, *, before: float = 0.0, after: float = 0.0, keeps_with_next: bool = False) -> HRFlowable:
    """Return a line across the page; its thickness tells rank."""
    line = HRFlowable(
        width="100%",
        thickness=thickness,
        color=_INK,
        spaceBefore=before,
        spaceAfter=after,
        lineCap="butt",
    )
    line.keepWithNext = int(keeps_with_next)
    return line
