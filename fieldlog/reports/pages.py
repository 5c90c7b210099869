"""A report of a visit as the bytes of its file: pages drawn, made archival, records inside; not yet sealed."""

from __future__ import annotations

from collections.abc import Iterator
from enum import Enum
from functools import partial
from io import BytesIO

from fieldlog.reports import fonts  # first: it sets reportlab's defaults  # isort: skip
from reportlab.lib.pagesizes import A4, LETTER
from reportlab.platypus import (
    BaseDocTemplate,
    Flowable,
    Frame,
    NextPageTemplate,
    PageTemplate,
    Spacer,
)

from fieldlog.charts.pdf import Drawing
from fieldlog.charts.shapes import statement_shape
from fieldlog.reports import content
from fieldlog.reports.blocks import barred, flowables
from fieldlog.reports.closing import closing
from fieldlog.reports.facts import fact_grid
from fieldlog.reports.pdfa import DocumentFacts, archival_pdf
from fieldlog.reports.qr import QrCode
from fieldlog.reports.sheets import SIDE, Sheets
from fieldlog.reports.styles import (
    HEADING,
    ORGANISATION,
    REASON,
    SECTION,
    SENTENCE,
    SITE,
    SITE_LINE,
    SOFT,
    SUBTITLE,
    SYSTEM,
    TYPEFACES,
    paragraph,
    rule,
)
from fieldlog.reports.tables import KeptStart

_TOP_FIRST, _TOP, _BOTTOM = 40.0, 58.0, 58.0
_QR_SIZE = 66.0


class Paper(Enum):
    """The sheet a report is laid out for."""

    A4 = A4
    LETTER = LETTER


def report_pdf(report: content.VisitReport, paper: Paper = Paper.A4, *, part: int = 3) -> bytes:
    """Return the report as PDF/A with its records attached; the same content gives the same bytes."""
    facts = DocumentFacts(report.name, report.organisation.name, report.made_at)
    return archival_pdf(drawn_pages(report, paper), facts, report.records_json, part=part)


def drawn_pages(report: content.VisitReport, paper: Paper = Paper.A4) -> bytes:
    """Return the drawn pages alone."""
    output = BytesIO()
    width, height = paper.value
    document = BaseDocTemplate(
        output,
        pagesize=paper.value,
        lang=report.language,
        initialFontName=fonts.REGULAR,
        pageCompression=1,
        displayDocTitle=1,
        keepTogetherClass=KeptStart,
    )
    document.addPageTemplates(
        [
            _template("first", width, height - _TOP_FIRST),
            _template("later", width, height - _TOP),
        ]
    )
    document.build(
        [NextPageTemplate("later"), *_story(report, width - 2 * SIDE)],
        canvasmaker=partial(Sheets, report),
    )
    return output.getvalue()


def _template(name: str, width: float, top: float) -> PageTemplate:
    no_padding = {"leftPadding": 0, "rightPadding": 0, "topPadding": 0, "bottomPadding": 0}
    frame = Frame(SIDE, _BOTTOM, width - 2 * SIDE, top - _BOTTOM, id=name, **no_padding)
    return PageTemplate(id=name, frames=[frame])


def _story(report: content.VisitReport, width: float) -> Iterator[Flowable]:
    yield from _opening(report, width)
    for stated in report.statements:
        yield from _statement(stated)
    if report.statements:
        yield rule(2.0, before=4, after=6)
    yield from fact_grid(report.summary, width)
    for section in report.sections:
        yield from _section(section, width)
    yield from closing(report, width)


def _opening(report: content.VisitReport, width: float) -> Iterator[Flowable]:
    lines = [paragraph(" · ".join(report.organisation.lines), SOFT)] if report.organisation.lines else []
    yield paragraph(report.organisation.name, ORGANISATION)
    yield from lines
    yield rule(3.0, before=4, after=10)
    title = [
        paragraph(report.site.name, SITE),
        paragraph(report.heading, HEADING),
        *(paragraph(line, SITE_LINE) for line in report.site.lines),
    ]
    if report.verify_address:
        yield _Beside(QrCode(report.verify_address, _QR_SIZE), 0.0, width - _QR_SIZE)
    yield from title
    used = sum(line.wrap(width, 1e6)[1] for line in title)
    yield Spacer(0, max(_QR_SIZE - used, 0.0))
    yield Spacer(0, 8)
    if report.revision is not None:
        words = f"{report.revision.label}. It replaces {report.revision.replaces}."
        yield from barred([words, report.revision.reason], width, is_headed=True)
    yield Spacer(0, 2)


class _Beside(Flowable):
    """Something drawn that takes no room: what follows is indented past it."""

    def __init__(self, drawn: Drawing | QrCode, drop: float, left: float = 0.0) -> None:
        super().__init__()
        self.drawn, self.drop, self.left = drawn, drop, left
        self.keepWithNext = 1

    def wrap(self, aW: float, aH: float) -> tuple[float, float]:  # noqa: ARG002, N803  reportlab's names
        """Return no width and no height."""
        return 0.0, 0.0

    def draw(self) -> None:
        """Put the drawing below the present place."""
        self.drawn.drawOn(self.canv, self.left, -self.drawn.height - self.drop)


def _statement(stated: content.StatedSystem) -> Iterator[Flowable]:
    yield rule(2.0, before=4, after=6, keeps_with_next=True)
    yield _Beside(Drawing(statement_shape(stated.statement), TYPEFACES, 52.0), 13.0)
    yield paragraph(stated.system, SYSTEM)
    yield paragraph(stated.sentence, SENTENCE)
    yield from (paragraph(text, REASON) for text in (*stated.reasons, *stated.cannot_show))


def _section(section: content.Section, width: float) -> Iterator[Flowable]:
    yield rule(2.0, before=14, after=4, keeps_with_next=True)
    yield paragraph(section.title, SECTION)
    if section.subtitle:
        yield paragraph(section.subtitle, SUBTITLE)
    for block in section.blocks:
        yield from flowables(block, width)
