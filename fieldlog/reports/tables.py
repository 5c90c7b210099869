"""Tables on paper: widths by what stands in them, headings on every page, no row taller than a page."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace
from itertools import zip_longest
from typing import Any

from fieldlog.reports import fonts  # first: it sets reportlab's defaults  # isort: skip
from reportlab.platypus import Flowable, KeepTogether, Table, TableStyle

from fieldlog.charts.scene import Ink
from fieldlog.reports import content
from fieldlog.reports.prose import Prose, Style, width
from fieldlog.reports.styles import (
    CELL,
    CELL_HEAD,
    CELL_HEAD_NUMBER,
    CELL_NUMBER,
    CELL_SOFT,
    PAINTS,
    brief,
    paragraph,
    span,
)

Cell = str | Flowable
# reportlab's commands of a table's look: name, first cell, last cell, and what the name wants.
Look = list[tuple[Any, ...]]
_GAP = 4.0  # of white on each side of a cell's text
# A text column is never made narrower than this, however much the others want.
_LEAST_WIDTH = 34.0
_EASE = 16.0
# No line on any paper holds more characters.
_LONGEST_LINE = 400
# One row never takes more lines than this; what is longer goes on in rows of its own, so that pages can break.
_MOST_LINES = 24

# Room for the headings and three rows: less of a table is not begun at the foot of a page.
_LEAST_BEGUN = 88.0


class KeptStart(KeepTogether):
    """Titles kept with what follows; of a table or a long text that is its beginning, not the whole of it."""

    def __init__(self, flowables: Sequence[Flowable]) -> None:
        super().__init__(list(flowables))
        self._kept = tuple(flowables)

    def split(self, aW: float, aH: float) -> list[Flowable]:  # noqa: N803  reportlab's names
        """Return what goes on this page and what goes on the next."""
        *titles, last = self._kept
        if isinstance(last, (Table, Prose)):
            heights = [flowable.wrapOn(self.canv, aW, aH)[1] + flowable.getSpaceAfter() for flowable in titles]
            whole = last.wrapOn(self.canv, aW, aH)[1]
            if sum(heights) + min(whole, _LEAST_BEGUN) <= aH:
                return [*titles, last]
        return list(super().split(aW, aH))


# Of every table, even one of paragraphs only: an empty cell sets its font as well.
FACE: Look = [("FONT", (0, 0), (-1, -1), fonts.REGULAR, CELL.size, CELL.leading)]
GRID: Look = [
    *FACE,
    ("TEXTCOLOR", (0, 0), (-1, -1), PAINTS[Ink.INK]),
    ("VALIGN", (0, 0), (-1, -1), "TOP"),
    ("LEFTPADDING", (0, 0), (-1, -1), _GAP),
    ("RIGHTPADDING", (0, 0), (-1, -1), _GAP),
    ("TOPPADDING", (0, 0), (-1, -1), 2.2),
    ("BOTTOMPADDING", (0, 0), (-1, -1), 2.6),
]


def pieces(text: str, room: float, style: Style = CELL) -> list[str]:
    """Return `text` in pieces of at most so many lines of `room`, broken at spaces where there are any."""
    most = max(int(room / (0.62 * style.size)), 1) * _MOST_LINES
    rest, found = text, []
    while len(rest) > most or rest.count("\n") > _MOST_LINES:
        cut = min(most, _nth_break(rest) or most)
        space = rest.rfind(" ", cut // 2, cut)
        cut = space if space > 0 else cut
        found.append(rest[:cut])
        rest = rest[cut:].lstrip(" ")
    return [*found, rest]


def _nth_break(text: str) -> int:
    """Return the place after as many typed breaks as a row may hold, or 0 where there are fewer."""
    place = 0
    for _ in range(_MOST_LINES):
        place = text.find("\n", place) + 1
        if not place:
            return 0
    return place


def cell(text: str, room: float, style: Style = CELL) -> Cell:
    """Return a cell: the bare text where it fits on a line, which is much cheaper, else a paragraph."""
    printed = fonts.printable(text)
    return printed if fits(printed, room, style) else paragraph(text, style)


def fits(printed: str, room: float, style: Style) -> bool:
    """Return whether a printable text stands on one line of `room`."""
    return "\n" not in printed and width(printed[:_LONGEST_LINE], style.font) * style.size <= room


def cell_rows(texts: Sequence[str], rooms: Sequence[float], styles: Sequence[Style]) -> list[list[Cell]]:
    """Return one row of cells, or several where a text is too long for one."""
    columns = [pieces(text, room, style) for text, room, style in zip(texts, rooms, styles, strict=True)]
    return [
        [cell(text, room, style) for text, room, style in zip(row, rooms, styles, strict=True)]
        for row in zip_longest(*columns, fillvalue="")
    ]


def table(block: content.Table, whole: float) -> Table:
    """Return a table of the content; every row has as many cells as there are columns."""
    widths = _widths(block, whole)
    rooms = [wide - 2 * _GAP for wide in widths]
    styles = [CELL_NUMBER if column.is_number else CELL for column in block.columns]
    rows: list[list[Cell]] = [_head(block.columns)]
    ends = []
    for texts in block.rows:
        fitted = (*texts, *[""] * len(widths))[: len(widths)]
        rows += cell_rows(fitted, rooms, styles)
        ends.append(len(rows) - 1)
    look: Look = [
        *GRID,
        ("VALIGN", (0, 0), (-1, 0), "BOTTOM"),
        ("LINEBELOW", (0, 0), (-1, 0), 1.0, PAINTS[Ink.INK]),
        *(("LINEBELOW", (0, end), (-1, end), 0.4, PAINTS[Ink.RULE]) for end in ends),
        *(("ALIGN", (place, 1), (place, -1), "RIGHT") for place, c in enumerate(block.columns) if c.is_number),
    ]
    return Table(rows, colWidths=widths, repeatRows=1, style=TableStyle(look), hAlign="LEFT")


def _head(columns: Iterable[content.Column]) -> list[Cell]:
    cells: list[Cell] = []
    for column in columns:
        style = CELL_HEAD_NUMBER if column.is_number else CELL_HEAD
        unit = [span("\n" + brief(column.unit, 20), replace(CELL_SOFT, size=style.size))] if column.unit else []
        cells.append(Prose((span(brief(column.heading, 60), style), *unit), style))
    return cells


def _widths(block: content.Table, whole: float) -> list[float]:
    """Return the column widths: each what its longest text wants, the long ones sharing what is left."""
    wanted = [
        _wanted(column, [row[place] for row in block.rows if place < len(row)])
        for place, column in enumerate(block.columns)
    ]
    if sum(wanted) <= whole:
        return _widened(wanted, whole, [not column.is_number for column in block.columns])
    return _squeezed(wanted, whole)


def _widened(wanted: Sequence[float], whole: float, is_text: Sequence[bool]) -> list[float]:
    """Return widths that sum to `whole`: a little more for every column, the rest for those of text."""
    spare = whole - sum(wanted)
    each = min(spare / len(wanted), _EASE) if any(is_text) else spare / len(wanted)
    rest = spare - each * len(wanted)
    text = sum(want for want, is_it in zip(wanted, is_text, strict=True) if is_it) or 1.0
    return [want + each + (rest * want / text if is_it else 0.0) for want, is_it in zip(wanted, is_text, strict=True)]


def _squeezed(wanted: Sequence[float], whole: float) -> list[float]:
    """Return widths that sum to `whole`: who wants less than an even share gets it, the others share alike."""
    fixed: dict[int, float] = {}
    while True:
        left = [place for place in range(len(wanted)) if place not in fixed]
        share = (whole - sum(fixed.values())) / max(len(left), 1)
        small = {place: wanted[place] for place in left if wanted[place] <= share}
        if not small:
            return [fixed.get(place, max(share, 1.0)) for place in range(len(wanted))]
        fixed |= small


def _wanted(column: content.Column, texts: Iterable[str]) -> float:
    words = [*column.heading.split(), column.unit]
    head = max((width(fonts.printable(word[:60]), fonts.BOLD) for word in words), default=0.0)
    # Only the beginning of a very long text is measured: it is wrapped in any case.
    lines = (line for text in texts for line in fonts.printable(text[:_LONGEST_LINE]).split("\n"))
    body = max((width(line, CELL.font) for line in lines), default=0.0)
    return max(head * CELL_HEAD.size, body * CELL.size, _LEAST_WIDTH - 2 * _GAP) + 2 * _GAP + 0.5
