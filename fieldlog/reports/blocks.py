"""Each kind of block as flowables."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from typing import cast

from fieldlog.reports import fonts  # first: it sets reportlab's defaults  # isort: skip
from reportlab.pdfbase.pdfmetrics import stringWidth
from reportlab.platypus import Flowable, Paragraph, Spacer, Table, TableStyle

from fieldlog.charts.frame import PAPER, Size
from fieldlog.charts.history import HistoryChart, history_chart
from fieldlog.charts.margin import MarginChart, margin_chart
from fieldlog.charts.pdf import Drawing
from fieldlog.charts.scene import Ink, Scene
from fieldlog.charts.supply import SupplyChart, supply_chart
from fieldlog.reports import content
from fieldlog.reports.styles import (
    BLOCK,
    BODY,
    CELL,
    CELL_SOFT,
    FINE,
    ITEM,
    PAINTS,
    READING,
    SOFT,
    SOFT_AFTER,
    TYPEFACES,
    brief,
    markup,
    paragraph,
    rule,
    soft,
)
from fieldlog.reports.tables import FACE, GRID, Cell, Look, pieces, table

_READINGS_IN_A_ROW = 5
_LABEL_SHARE = 0.32
_FACT_GAP = 10.0
# A value of more characters is a sentence and not printed large.
_LARGE = 12


def flowables(block: content.Block, width: float) -> list[Flowable]:
    """Return a block as flowables of `width`."""
    build = cast("Callable[[content.Block, float], list[Flowable]]", _BUILDERS[type(block)])
    return build(block, width)


def _facts(block: content.Facts, width: float) -> list[Flowable]:
    return [*_title(block.title), *fact_grid(block.rows, width)]


def fact_grid(rows: Sequence[content.Row], width: float) -> list[Flowable]:
    """Return facts two abreast where they are short, over the whole width where they are not."""
    half = width / 2
    label, value = half * _LABEL_SHARE, half * (1 - _LABEL_SHARE)
    cells: list[list[Cell]] = []
    wide: list[int] = []
    waiting: list[Cell] = []
    for row in rows:
        if not _is_short(row, label, value):
            if waiting:
                cells.append([*waiting, "", ""])
                waiting = []
            long_rows = _long_fact(row, width - label)
            wide += range(len(cells), len(cells) + len(long_rows))
            cells += long_rows
            continue
        waiting += [_label(row, label), _value(row)]
        if len(waiting) == 4:
            cells.append(waiting)
            waiting = []
    if waiting:
        cells.append([*waiting, "", ""])
    if not cells:
        return []
    look: Look = [
        *GRID,
        ("LEFTPADDING", (0, 0), (-1, -1), 0),
        ("RIGHTPADDING", (0, 0), (-1, -1), _FACT_GAP),
        ("TEXTCOLOR", (0, 0), (0, -1), PAINTS[Ink.SOFT]),
        ("TEXTCOLOR", (2, 0), (2, -1), PAINTS[Ink.SOFT]),
        ("LINEBELOW", (0, 0), (-1, -1), 0.4, PAINTS[Ink.RULE]),
        *(("SPAN", (1, place), (3, place)) for place in wide),
    ]
    return [Table(cells, colWidths=[label, value, label, value], style=TableStyle(look)), Spacer(0, 4)]


def _is_short(row: content.Row, label: float, value: float) -> bool:
    text = " ".join(filter(None, (row.value, row.unit, row.note)))
    longest = max(text.split(), key=len, default="")
    return (
        "\n" not in text
        and stringWidth(fonts.printable(longest), fonts.REGULAR, CELL.fontSize) <= value - _FACT_GAP
        and stringWidth(fonts.printable(text), fonts.REGULAR, CELL.fontSize) <= 2 * (value - _FACT_GAP) - 8
        and stringWidth(fonts.printable(row.label), fonts.REGULAR, CELL.fontSize) <= 2 * (label - _FACT_GAP)
    )


def _label(row: content.Row, width: float) -> Cell:
    fits = stringWidth(fonts.printable(row.label), fonts.REGULAR, CELL.fontSize) <= width - _FACT_GAP
    return fonts.printable(row.label) if fits else Paragraph(markup(row.label), CELL_SOFT)


def _value(row: content.Row) -> Paragraph:
    # The point stays at the end of the line when the note goes to the next one.
    note = soft(f"\u00a0· {row.note}") if row.note else ""
    return Paragraph(markup(f"{row.value} {row.unit}".strip()) + note, CELL)


def _long_fact(row: content.Row, width: float) -> list[list[Cell]]:
    text = "\n".join(filter(None, (f"{row.value} {row.unit}".strip(), row.note)))
    rows: list[list[Cell]] = [["", Paragraph(markup(piece), CELL), "", ""] for piece in pieces(text, width)]
    rows[0][0] = Paragraph(markup(brief(row.label)), CELL_SOFT)
    return rows


def _table(block: content.Table, width: float) -> list[Flowable]:
    note = [paragraph(block.note, SOFT_AFTER)] if block.note else []
    for flowable in note:
        flowable.keepWithNext = 1
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
    top: list[Flowable] = [
        rule(1.0, before=8, after=3),
        Paragraph(f"<b>{markup(block.title)}</b>", BODY),
        paragraph(block.subtitle, SOFT_AFTER),
    ]
    for flowable in top:
        flowable.keepWithNext = 1
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
            [Paragraph(_large(reading), READING) for reading in group],
            [paragraph(brief(reading.gauge), FINE) if reading.gauge else "" for reading in group],
            [paragraph(brief(reading.remark), CELL) if reading.remark else "" for reading in group],
        ]
        rows = [row for row in rows if any(row)]
        widths = [width / abreast] * len(group)
        yield Table(rows, colWidths=widths, style=TableStyle(look), hAlign="LEFT", spaceAfter=6)


def _large(reading: content.Reading) -> str:
    value = brief(reading.value)
    size = READING.fontSize if len(value) <= _LARGE else CELL.fontSize
    unit = f' <font name="{fonts.REGULAR}" size="9">{markup(brief(reading.unit, 20))}</font>' if reading.unit else ""
    return f'<font size="{size}">{markup(value)}</font>{unit}'


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
            words = f"<b>{markup(piece)}</b>" if is_headed and not place else markup(piece)
            bullet = "–" if is_list and not part else None
            rows.append([Paragraph(words, ITEM if is_list else BODY, bulletText=bullet)])
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
    return [Paragraph(markup(text), ITEM, bulletText="–") for text in texts]


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
