"""The last part of a report: cautions, standard, limits, signatures, and where the record can be checked."""

from __future__ import annotations

from collections.abc import Iterator

from fieldlog.reports import fonts  # noqa: F401  first: it sets reportlab's defaults  # isort: skip
from reportlab.platypus import Flowable, Spacer, Table, TableStyle

from fieldlog.errors import InputError
from fieldlog.reports import content
from fieldlog.reports.blocks import barred, items
from fieldlog.reports.facts import fact_grid
from fieldlog.reports.strokes import Strokes, segments
from fieldlog.reports.styles import BODY, CELL_BOLD, FINE, LESSER, SOFT, brief, paragraph, rule
from fieldlog.reports.tables import FACE, Look

_STROKES_HEIGHT = 46.0


def closing(report: content.VisitReport, width: float) -> Iterator[Flowable]:
    """Yield everything that stands after the sections."""
    if report.cautions:
        yield from _lesser("Cautions")
        yield from barred(report.cautions, width, is_list=True)
    lists = (
        ("Adopted standard", report.standards or ("Adopted standard not recorded.",)),
        ("What these tests do not show", report.cannot_show),
        ("How far this report goes", report.limits),
    )
    for title, texts in lists:
        if texts:
            yield from _lesser(title)
            yield from items(texts)
    yield from _signed(report, width)
    yield from _log(report, width)


def _lesser(title: str) -> Iterator[Flowable]:
    yield rule(1.0, before=10, after=3, keeps_with_next=True)
    yield paragraph(title, LESSER)


def _signed(report: content.VisitReport, width: float) -> Iterator[Flowable]:
    if not report.signatures:
        return
    column = width / 2
    boxes = [_signature(signature, column - 24) for signature in report.signatures]
    rows = [boxes[start : start + 2] for start in range(0, len(boxes), 2)]
    look: Look = [*FACE, ("VALIGN", (0, 0), (-1, -1), "TOP"), ("LEFTPADDING", (0, 0), (0, -1), 0)]
    table = Table([[*row, *[""] * (2 - len(row))] for row in rows], colWidths=[column, column], style=TableStyle(look))
    yield from _lesser("Signatures")
    if report.signed_text:
        yield paragraph(report.signed_text, BODY)
    yield table


def _signature(signature: content.Signature, width: float) -> list[Flowable]:
    lines = [paragraph(brief(line), FINE) for line in signature.lines]
    name = paragraph(brief(signature.name), CELL_BOLD)
    role = paragraph(brief(signature.role), SOFT)
    return [*_mark(signature, width), rule(0.8, after=2), name, role, *lines]


def _mark(signature: content.Signature, width: float) -> list[Flowable]:
    """Return the drawn signature, or what stands in its place, always of the same height."""
    words = "Typed, not drawn."
    if signature.strokes:
        try:
            return [Strokes(segments(signature.strokes), width, _STROKES_HEIGHT)]
        except InputError:
            # The entry is kept as it came and stands in the records; a report must not be lost over it.
            words = "The drawn signature can't be shown; it stands in the records as it was sent."
    elif signature.typed_reason:
        words = f"Typed, not drawn: {signature.typed_reason}"
    said = paragraph(brief(words, 300), SOFT)
    return [Spacer(0, max(_STROKES_HEIGHT - said.wrap(width, 400.0)[1], 0.0)), said]


def _log(report: content.VisitReport, width: float) -> Iterator[Flowable]:
    yield from _lesser("The record behind this report")
    rows = [
        *report.log,
        content.Row("Head of the log", report.head),
        content.Row("In this file", "records.json", note="every entry of this report as it stands in the log"),
    ]
    if report.verify_address:
        rows.append(content.Row("Check it at", report.verify_address))
    yield from fact_grid(rows, width)
