"""Facts on paper: label and value, two abreast where they are short, over the whole width where they are not."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from fieldlog.reports import fonts  # first: it sets reportlab's defaults  # isort: skip
from reportlab.platypus import Flowable, Spacer, Table, TableStyle

from fieldlog.charts.scene import Ink
from fieldlog.reports import content
from fieldlog.reports.prose import Prose, width
from fieldlog.reports.styles import CELL, CELL_SOFT, PAINTS, brief, paragraph, span
from fieldlog.reports.tables import GRID, Cell, Look, cell, fits, pieces

_LABEL_SHARE = 0.32
_GAP = 10.0  # of white right of a cell's text


@dataclass(slots=True)
class _Grid:
    """Rows of four cells being filled."""

    label: float
    value: float
    cells: list[list[Cell]] = field(default_factory=list)
    wide: list[int] = field(default_factory=list)
    is_half: bool = False

    def add(self, row: content.Row) -> None:
        if not _is_short(row, self.label, self.value):
            self._add_long(row)
            return
        pair = [cell(row.label, self.label, CELL_SOFT), _value(row, self.value)]
        if self.is_half:
            self.cells[-1][2:] = pair
        else:
            self.cells.append([*pair, "", ""])
        self.is_half = not self.is_half

    def _add_long(self, row: content.Row) -> None:
        text = "\n".join(filter(None, (f"{row.value} {row.unit}".strip(), row.note)))
        label: Cell = paragraph(brief(row.label), CELL_SOFT)
        for piece in pieces(text, 2 * self.value + self.label):
            self.wide.append(len(self.cells))
            self.cells.append([label, paragraph(piece, CELL), "", ""])
            label = ""
        self.is_half = False


def fact_grid(rows: Sequence[content.Row], whole: float) -> list[Flowable]:
    """Return facts as flowables of the width `whole`."""
    label, value = whole / 2 * _LABEL_SHARE, whole / 2 * (1 - _LABEL_SHARE)
    grid = _Grid(label - _GAP, value - _GAP)
    for row in rows:
        grid.add(row)
    if not grid.cells:
        return []
    look: Look = [
        *GRID,
        ("LEFTPADDING", (0, 0), (-1, -1), 0),
        ("RIGHTPADDING", (0, 0), (-1, -1), _GAP),
        ("TEXTCOLOR", (0, 0), (0, -1), PAINTS[Ink.SOFT]),
        ("TEXTCOLOR", (2, 0), (2, -1), PAINTS[Ink.SOFT]),
        ("LINEBELOW", (0, 0), (-1, -1), 0.4, PAINTS[Ink.RULE]),
        *(("SPAN", (1, place), (3, place)) for place in grid.wide),
    ]
    return [Table(grid.cells, colWidths=[label, value, label, value], style=TableStyle(look)), Spacer(0, 4)]


def _is_short(row: content.Row, label: float, value: float) -> bool:
    text = fonts.printable(" ".join(filter(None, (row.value, row.unit, row.note))))
    longest = max(text.split(), key=len, default="")
    return (
        fits(text, 2 * value - 16, CELL)
        and width(longest, CELL.font) * CELL.size <= value
        and fits(fonts.printable(row.label), 2 * label, CELL)
    )


def _value(row: content.Row, room: float) -> Cell:
    text = f"{row.value} {row.unit}".strip()
    if not row.note:
        return cell(text, room)
    # The point stays at the end of the line when the note goes to the next one.
    return Prose((span(text, CELL), span(f"\u00a0· {row.note}", CELL_SOFT)), CELL)
