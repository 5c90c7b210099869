"""The sheets of a report: head and foot of each, once their number is known."""

from __future__ import annotations

from io import BytesIO
from typing import Any

from fieldlog.reports import fonts  # first: it sets reportlab's defaults  # isort: skip
from reportlab.pdfgen.canvas import Canvas

from fieldlog.charts.scene import Ink
from fieldlog.reports import content, prose
from fieldlog.reports.styles import PAINTS

# White at both sides of the text, points.
SIDE = 51.0
# More than fit on any line of a head or foot.
_MOST_CHARACTERS = 300


class Sheets(Canvas):
    """Keeps every sheet back until their number is known, then adds head and foot."""

    def __init__(self, report: content.VisitReport, file: BytesIO, **options: Any) -> None:  # noqa: ANN401  reportlab's
        super().__init__(file, **options)
        self._report = report
        self._size: tuple[float, float] = options["pagesize"]
        self._kept: list[dict[str, object]] = []

    def showPage(self) -> None:  # noqa: N802  reportlab's name
        """Keep the sheet."""
        self._kept.append(dict(self.__dict__))
        self._startPage()  # type: ignore[attr-defined]  # not in the stubs; what showPage itself ends with

    def save(self) -> None:
        """Finish every sheet with its number and write the file."""
        for number, sheet in enumerate(self._kept, 1):
            self.__dict__.update(sheet)
            _foot(self, self._size[0], self._report, f"page {number} of {len(self._kept)}")
            if number > 1:
                _head(self, self._size, self._report)
            if self._report.draft:
                _draft(self, self._size, self._report.draft)
            super().showPage()
        super().save()


def _foot(canvas: Canvas, width: float, report: content.VisitReport, number: str) -> None:
    right = width - SIDE
    canvas.setStrokeColor(PAINTS[Ink.INK])
    canvas.setLineWidth(0.7)
    canvas.line(SIDE, 44, right, 44)
    canvas.setFillColor(PAINTS[Ink.INK])
    canvas.setFont(fonts.BOLD, 7.8)
    canvas.drawRightString(right, 34, number)
    canvas.setFont(fonts.REGULAR, 7.8)
    canvas.drawString(SIDE, 34, _fitted(report.name, right - SIDE - 80, 7.8))
    canvas.setFillColor(PAINTS[Ink.SOFT])
    canvas.setFont(fonts.REGULAR, 6.6)
    canvas.drawString(SIDE, 24, _fitted(f"head of the log {report.head}", right - SIDE, 6.6))


def _head(canvas: Canvas, size: tuple[float, float], report: content.VisitReport) -> None:
    width, height = size
    canvas.setFillColor(PAINTS[Ink.SOFT])
    canvas.setFont(fonts.REGULAR, 7.8)
    half = width / 2 - SIDE - 10
    canvas.drawString(SIDE, height - 40, _fitted(f"{report.site.name} · {report.heading}", half, 7.8))
    canvas.drawRightString(width - SIDE, height - 40, _fitted(report.organisation.name, half, 7.8))
    canvas.setStrokeColor(PAINTS[Ink.RULE])
    canvas.setLineWidth(0.7)
    canvas.line(SIDE, height - 46, width - SIDE, height - 46)


def _draft(canvas: Canvas, size: tuple[float, float], words: str) -> None:
    width, height = size
    canvas.setFillColor(PAINTS[Ink.INK])
    canvas.setFont(fonts.BOLD, 9)
    canvas.drawCentredString(width / 2, height - 24, _fitted(words, width - 2 * SIDE, 9))


def _fitted(text: str, width: float, size: float) -> str:
    printed = fonts.printable(text[:_MOST_CHARACTERS].replace("\n", " "))
    while printed and prose.width(printed, fonts.REGULAR) * size > width:
        printed = printed[:-2].rstrip() + "…" if len(printed) > 2 else ""
    return printed
