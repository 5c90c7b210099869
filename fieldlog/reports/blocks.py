"""Each kind of block as flowables."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from typing import cast

from fieldlog.reports import fonts  # noqa: F401  first: it sets reportlab's defaults  # isort: skip
from reportlab.platypus import Flowable, Spacer, Table, TableStyle

from fieldlog.charts.frame import PAPER, Size
from fieldlog.charts.history import HistoryChart, history_chart
from fieldlog.charts.margin import MarginChart, margin_chart
from fieldlog.charts.pdf import Drawing
from fieldlog.charts.scene import Ink, Scene
from fieldlog.charts.supply import SupplyChart, supply_chart
from fieldlog.reports import content
from fieldlog.reports.facts import fact_grid
from fieldlog.reports.prose import Figure
from fieldlog.reports.styles import (
    BLOCK,
    BODY,
    BODY_BOLD,
    CELL,
    CELL_BOLD,
    FINE,
    ITEM,
    PAINTS,
    READING_SIZE,
    SOFT,
    SOFT_AFTER,
    SUBTITLE,
    TEST,
    TYPEFACES,
    UNIT_SIZE,
    brief,
    paragraph,
    rule,
    span,
)
from fieldlog.reports.tables import FACE, Cell, Look, pieces, table

_READINGS_IN_A_ROW = 5
# A value of more characters is a sentence and not printed large.
_LARGE = 12


def flowables(block: content.Block, width: float) -> list[Flowable]:
    """Return a block as flowables of `width`."""
    build = cast("Callable[[content.Block, float], list[Flowable]]", _BUILDERS[type(block)])
    return build(block, width)


def _facts(block: content.Facts, width: float) -> list[Flowable]:
    return [*_title(block.title), *fact_grid(block.rows, width)]


def _table(block: content.Table, width: float) -> list[Flowable]:
    note = [paragraph(block.note, SUBTITLE)] if block.note else []
    return [*_title(block.title), *note, table(block, width), Spacer(0, 6)]


def _picture(block: content.Picture, width: float) -> list[Flowable]:
    drawing = Drawing(_scene(block.chart, Size(width, PAPER.height, PAPER.text)), TYPEFACES)
    caption = paragraph(block.caption, SOFT_AFTER)
    # Not kept together by a box of its own: with what stands above it, it has to form one.
    drawing.keepWithNext = 1
    return [*_title(block.heading), drawing, caption]


def _scene(chart: content.Chart, size: Size) -> Scene:
    match chart:
        case SupplyChart():
            return supply_chart(chart, size)
        case HistoryChart():
            return history_chart(chart, size)
        case MarginChart():
            return margin_chart(chart, size)


def _test_record(block: content.TestRecord, width: float) -> list[Flowable]:
    top = [
        rule(1.0, before=8, after=3, keeps_with_next=True),
        paragraph(block.title, TEST),
        paragraph(block.subtitle, SUBTITLE),
    ]
    remarks = [paragraph(remark, BODY) for remark in (*_long_remarks(block.readings), *block.remarks)]
    entry = [paragraph(block.entry, FINE)] if block.entry else []
    return [*top, *_readings(block.readings, width), *fact_grid(block.facts, width), *remarks, *entry]


def _long_remarks(readings: Sequence[content.Reading]) -> list[str]:
    """Return what is too long to stand under its reading, each with the reading's name."""
    texts = ((reading.label, text) for reading in readings for text in (reading.value, reading.gauge, reading.remark))
    return [f"{label}: {text}" for label, text in texts if brief(text) != text and text.strip()]


def _readings(readings: Sequence[content.Reading], width: float) -> Iterable[Flowable]:
    lines = math.ceil(len(readings) / _READINGS_IN_A_ROW)
    # Never narrower than a quarter for few, so that readings of several tests stand in line.
    abreast = max(math.ceil(len(readings) / max(lines, 1)), 4)
    look: Look = [
        *FACE,
        ("VALIGN", (0, 0), (-1, -1), "TOP"),
        ("TOPPADDING", (0, 0), (-1, -1), 1.0),
        ("BOTTOMPADDING", (0, 0), (-1, -1), 1.0),
        ("LEFTPADDING", (0, 0), (-1, -1), 7.0),
        ("RIGHTPADDING", (0, 0), (-1, -1), 5.0),
        ("LINEBEFORE", (0, 0), (-1, -1), 1.0, PAINTS[Ink.RULE], "butt"),
        ("NOSPLIT", (0, 0), (-1, -1)),
    ]
    for start in range(0, len(readings), abreast):
        group = readings[start : start + abreast]
        rows: list[list[Cell]] = [
            [paragraph(brief(reading.label), SOFT) for reading in group],
            [_large(reading) for reading in group],
            [paragraph(brief(reading.gauge), FINE) if reading.gauge else "" for reading in group],
            [paragraph(brief(reading.remark), CELL) if reading.remark else "" for reading in group],
        ]
        rows = [row for row in rows if any(row)]
        widths = [width / abreast] * len(group)
        yield Table(rows, colWidths=widths, style=TableStyle(look), hAlign="LEFT", spaceAfter=6)


def _large(reading: content.Reading) -> Flowable:
    value, unit = brief(reading.value), brief(reading.unit, 20)
    if len(value) > _LARGE:
        return paragraph(f"{value} {unit}", CELL_BOLD)
    return Figure(span(value, BODY_BOLD), span(unit, BODY), READING_SIZE, UNIT_SIZE)


def _finding(block: content.Finding, width: float) -> list[Flowable]:
    return [
        *barred([block.heading, block.text], width, is_headed=True),
        *fact_grid(block.facts, width),
        Spacer(0, 4),
    ]


def barred(texts: Sequence[str], width: float, *, is_headed: bool = False, is_list: bool = False) -> list[Flowable]:
    """Return texts on a wash with a heavy bar at their left; the first in bold if headed, or each as a list item."""
    rows: list[list[Cell]] = []
    for place, text in enumerate(text for text in texts if text):
        for part, piece in enumerate(pieces(text, width - 24, BODY)):
            style = ITEM if is_list else BODY_BOLD if is_headed and not place else BODY
            rows.append([paragraph(piece, style, bullet="–" if is_list and not part else "")])
    if not rows:
        return []
    look: Look = [
        *FACE,
        ("BACKGROUND", (0, 0), (-1, -1), PAINTS[Ink.CAUTION]),
        ("LINEBEFORE", (0, 0), (0, -1), 3.0, PAINTS[Ink.INK], "butt"),
        ("LEFTPADDING", (0, 0), (-1, -1), 12.0),
        ("RIGHTPADDING", (0, 0), (-1, -1), 10.0),
        ("TOPPADDING", (0, 0), (-1, -1), 1.5),
        ("BOTTOMPADDING", (0, 0), (-1, -1), 1.5),
        ("TOPPADDING", (0, 0), (-1, 0), 6.0),
        ("BOTTOMPADDING", (0, -1), (-1, -1), 7.0),
    ]
    return [Table(rows, colWidths=[width], style=TableStyle(look), spaceBefore=3, spaceAfter=5)]


def _words(block: content.Words, width: float) -> list[Flowable]:  # noqa: ARG001  every builder is called alike
    return [*_title(block.title), *(paragraph(text) for text in block.paragraphs)]


def _items(block: content.Items, width: float) -> list[Flowable]:  # noqa: ARG001  every builder is called alike
    return [*_title(block.title), *items(block.items)]


def items(texts: Iterable[str]) -> list[Flowable]:
    """Return short sentences as a list."""
    return [paragraph(text, ITEM, bullet="–") for text in texts]


def _title(text: str) -> list[Flowable]:
    return [paragraph(text, BLOCK)] if text else []


_BUILDERS: dict[type, object] = {
    content.Facts: _facts,
    content.Table: _table,
    content.Picture: _picture,
    content.TestRecord: _test_record,
    content.Finding: _finding,
    content.Words: _words,
    content.Items: _items,
}
