"""The look on paper: paragraph styles, rules and the one way from a text to a paragraph."""

from __future__ import annotations

import re
from typing import Any
from xml.sax.saxutils import escape

from fieldlog.reports import fonts  # first: it sets reportlab's defaults  # isort: skip
from reportlab.lib.colors import Color, HexColor
from reportlab.lib.styles import ParagraphStyle
from reportlab.platypus import HRFlowable, Paragraph

from fieldlog.charts.pdf import Typefaces
from fieldlog.charts.scene import COLOURS, Ink

TYPEFACES = Typefaces(fonts.REGULAR, fonts.BOLD, fonts.printable)
PAINTS: dict[Ink, Color] = {ink: HexColor(colour) for ink, colour in COLOURS.items()}
_SOFT_TAG = f'<font color="{COLOURS[Ink.SOFT]}">'


def _style(
    name: str,
    size: float,
    *,
    is_bold: bool = False,
    ink: Ink = Ink.INK,
    after: float = 0.0,
    **more: Any,  # noqa: ANN401  reportlab's own
) -> ParagraphStyle:
    face = fonts.BOLD if is_bold else fonts.REGULAR
    return ParagraphStyle(
        name,
        fontName=face,
        bulletFontName=face,
        fontSize=size,
        leading=size * 1.36,
        textColor=PAINTS[ink],
        spaceAfter=after,
        splitLongWords=1,
        **more,
    )


BODY = _style("body", 9.0, after=4.0)
SOFT = _style("soft", 8.2, ink=Ink.SOFT)
SOFT_AFTER = _style("soft after", 8.2, ink=Ink.SOFT, after=5.0)
ORGANISATION = _style("organisation", 10.0, is_bold=True)
# The right of a report's title is left to the code that leads to its verify page.
_CODE_ROOM = 84.0
SITE = _style("site", 21.0, is_bold=True, after=1.0, rightIndent=_CODE_ROOM)
HEADING = _style("heading", 10.5, after=1.0, rightIndent=_CODE_ROOM)
SITE_LINE = _style("site line", 8.2, ink=Ink.SOFT, rightIndent=_CODE_ROOM)
SECTION = _style("section", 14.0, is_bold=True, after=2.0, keepWithNext=1)
LESSER = _style("lesser section", 11.0, is_bold=True, after=3.0, keepWithNext=1)
BLOCK = _style("block", 10.0, is_bold=True, after=2.0, spaceBefore=7.0, keepWithNext=1)
CELL = _style("cell", 8.4)
CELL_SOFT = _style("soft cell", 8.4, ink=Ink.SOFT)
CELL_NUMBER = _style("number cell", 8.4, alignment=2)
CELL_HEAD = _style("head cell", 8.0, is_bold=True)
CELL_HEAD_NUMBER = _style("number head cell", 8.0, is_bold=True, alignment=2)
SUBTITLE = _style("subtitle", 8.2, ink=Ink.SOFT, after=5.0, keepWithNext=1)
READING = _style("reading", 17.0, is_bold=True)
FINE = _style("fine", 7.2, ink=Ink.SOFT)
ITEM = _style("item", 9.0, after=2.5, leftIndent=11.0, bulletIndent=1.0)

# A statement hangs beside its shape.
STATEMENT_INDENT = 64.0
SYSTEM = _style("system", 8.6, is_bold=True, ink=Ink.SOFT, after=1.0, leftIndent=STATEMENT_INDENT, keepWithNext=1)
SENTENCE = _style("sentence", 12.4, is_bold=True, after=3.0, leftIndent=STATEMENT_INDENT)
REASON = _style("reason", 9.0, ink=Ink.SOFT, after=2.5, leftIndent=STATEMENT_INDENT)


# A number stays on one line with its unit, a day with its month.
_BELONGS_TO_NUMBER = re.compile(
    r"(?<=\d) (?=(?:psi|bar|kPa|gpm|L/min|ft|m|in\.|mm|s|min|h|%|°[FC]|years?"
    r"|Jan|Feb|Mar|Apr|May|Jun|Jul|Aug|Sep|Oct|Nov|Dec)\w*)"
)


def markup(text: str) -> str:
    """Return a text as it is typed, for a paragraph: nothing in it is read as markup."""
    return escape(_BELONGS_TO_NUMBER.sub("\u00a0", fonts.printable(text))).replace("\n", "<br/>")


def soft(text: str) -> str:
    """Return a text in softer ink, as markup."""
    return f"{_SOFT_TAG}{markup(text)}</font>"


def brief(text: str, most: int = 160) -> str:
    """Return a text on one line, cut with an ellipsis; for what has to fit into a box of its own."""
    line = " ".join(text.split())
    return line if len(line) <= most else line[: most - 1] + "…"


def paragraph(text: str, style: ParagraphStyle = BODY) -> Paragraph:
    """Return a paragraph of a text as typed."""
    return Paragraph(markup(text), style)


def rule(thickness: float, *, before: float = 0.0, after: float = 0.0, keeps_with_next: bool = False) -> HRFlowable:
    """Return a line across the page; its thickness tells rank."""
    line = HRFlowable(
        width="100%",
        thickness=thickness,
        color=PAINTS[Ink.INK],
        spaceBefore=before,
        spaceAfter=after,
        lineCap="butt",
    )
    line.keepWithNext = int(keeps_with_next)
    return line
