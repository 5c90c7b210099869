"""What a sealed report costs, against the same words and drawings by bare reportlab and pyHanko with the same key.

Run: python tests/bench/report.py [--quick] [--json]

The bare version is written the shortest way reportlab offers: a SimpleDocTemplate of paragraphs,
tables and the same
drawings, a foot on each page, and one plain pyHanko signature by the same key, kept loaded. It has no
archival form,
no attached records, no repeated layout rules. Times are CPU time of this process, medians of alternating runs.
"""

from __future__ import annotations

import argparse
import json
import statistics
import sys
import tempfile
import time
from collections.abc import Callable, Iterator
from io import BytesIO
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parent.parent.parent))

import pypdf
from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter
from pyhanko.sign import signers
from reportlab.lib.pagesizes import A4
from reportlab.lib.styles import ParagraphStyle
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import Flowable, Paragraph, SimpleDocTemplate, Spacer, Table

from fieldlog.charts.pdf import Drawing
from fieldlog.charts.shapes import statement_shape
from fieldlog.reports import blocks, content, fonts, seal
from fieldlog.reports.pages import drawn_pages, report_pdf
from fieldlog.reports.qr import QrCode
from fieldlog.reports.strokes import Strokes, segments
from fieldlog.reports.styles import TYPEFACES
from tests.reports import sample

BODY = ParagraphStyle("b", fontName=fonts.REGULAR, bulletFontName=fonts.REGULAR, fontSize=9, leading=12.2)
BIG = ParagraphStyle("g", BODY, fontName=fonts.BOLD, fontSize=13, leading=17)
FACE = ("FONT", (0, 0), (-1, -1), fonts.REGULAR, 8.4, 11.4)


def bare_pages(report: content.VisitReport) -> bytes:
    output = BytesIO()
    document = SimpleDocTemplate(
        output, pagesize=A4, leftMargin=51, rightMargin=51, topMargin=58, bottomMargin=58, pageCompression=1,
        initialFontName=fonts.REGULAR, lang="en", title=report.name,
    )  # fmt: skip

    def foot(canvas: Canvas, _document: object) -> None:
        canvas.setFont(fonts.REGULAR, 7.8)
        canvas.drawString(51, 34, report.name)
        canvas.drawString(51, 24, f"head of the log {report.head}")
        canvas.drawRightString(A4[0] - 51, 34, f"page {canvas.getPageNumber()}")

    document.build(list(_bare_story(report)), onFirstPage=foot, onLaterPages=foot)
    return output.getvalue()


def _bare_story(report: content.VisitReport) -> Iterator[Flowable]:
    yield Paragraph(report.organisation.name, BIG)
    yield from (Paragraph(line, BODY) for line in (*report.organisation.lines, *report.site.lines, report.heading))
    yield Paragraph(report.site.name, BIG)
    yield QrCode(report.verify_address, 66)
    for stated in report.statements:
        yield Drawing(statement_shape(stated.statement), TYPEFACES)
        yield Paragraph(stated.sentence, BIG)
        yield from (Paragraph(text, BODY) for text in (stated.system, *stated.reasons, *stated.cannot_show))
    yield _bare_facts(report.summary)
    for section in report.sections:
        yield Paragraph(section.title, BIG)
        for block in section.blocks:
            yield from _bare_block(block)
    for text in (*report.cautions, *report.standards, *report.cannot_show, *report.limits, report.signed_text):
        yield Paragraph(text, BODY)
    for signature in report.signatures:
        if signature.strokes:
            yield Strokes(segments(signature.strokes), 220, 46)
        yield from (Paragraph(text, BODY) for text in (signature.name, signature.role, *signature.lines))
    yield _bare_facts((*report.log, content.Row("Head", report.head), content.Row("Address", report.verify_address)))


def _bare_facts(rows: tuple[content.Row, ...]) -> Table:
    cells = [[row.label, Paragraph(f"{row.value} {row.unit} {row.note}", BODY)] for row in rows]
    return Table(cells, colWidths=[90, 400], style=[FACE])


def _bare_block(block: content.Block) -> Iterator[Flowable]:
    match block:
        case content.Facts():
            yield _bare_facts(block.rows)
        case content.Table():
            head = [[f"{column.heading} {column.unit}" for column in block.columns]]
            yield Paragraph(block.title, BIG)
            yield Table(
                [*head, *map(list, block.rows)],
                repeatRows=1,
                style=[FACE, ("LINEBELOW", (0, 0), (-1, -1), 0.4, "grey")],
            )
        case content.Picture():
            scene = blocks._scene(block.chart, blocks.Size(493.0, 186.0, 8.2))
            yield from (Paragraph(block.heading, BIG), Drawing(scene, TYPEFACES), Paragraph(block.caption, BODY))
        case content.TestRecord():
            yield from (Paragraph(block.title, BIG), Paragraph(block.subtitle, BODY))
            texts = [
                [reading.label, f"{reading.value} {reading.unit}", reading.gauge, reading.remark]
                for reading in block.readings
            ]
            yield Table([[Paragraph(text, BODY) for text in row] for row in zip(*texts, strict=True)], style=[FACE])
            yield _bare_facts(block.facts)
            yield from (Paragraph(text, BODY) for text in (*block.remarks, block.entry))
        case content.Finding():
            yield from (Paragraph(block.heading, BIG), Paragraph(block.text, BODY), _bare_facts(block.facts))
        case _:
            yield Spacer(0, 1)


def bare_sealed(pages: bytes, signer: seal.Signer) -> bytes:
    metadata = signers.PdfSignatureMetadata(field_name="Seal", md_algorithm="sha256")
    plain = signers.PdfSigner(metadata, seal._KeptKeySigner(signer))
    return plain.sign_pdf(IncrementalPdfFileWriter(BytesIO(pages)), bytes_reserved=seal._room(signer)).getvalue()


def spent_ms(work: Callable[[], object]) -> float:
    begin = time.process_time()
    work()
    return (time.process_time() - begin) * 1000


def measured(runs: int) -> dict[str, object]:
    report = sample.sample_report()
    with tempfile.TemporaryDirectory() as folder:
        seal.write_identity(Path(folder), seal.make_sealing_identity("Reedbank Fire Protection", sample.MADE_AT))
        signer = seal.load_signer(Path(folder))
    archival = report_pdf(report)

    def ours() -> bytes:
        return seal.seal(report_pdf(report), signer, sample.MADE_AT, reason="Report of a visit")

    def bare() -> bytes:
        return bare_sealed(bare_pages(report), signer)

    def bare_with_our_pages() -> bytes:
        return bare_sealed(drawn_pages(report), signer)

    parts: dict[str, Callable[[], object]] = {
        "ours_ms": ours,
        "bare_ms": bare,
        "bare_with_our_pages_ms": bare_with_our_pages,
        "pages_ms": lambda: drawn_pages(report),
        "pages_and_archival_form_ms": lambda: report_pdf(report),
        "seal_ms": lambda: seal.seal(archival, signer, sample.MADE_AT, reason="Report of a visit"),
    }
    for work in parts.values():
        work()
    times: dict[str, list[float]] = {name: [] for name in parts}
    for _ in range(runs):
        for name, work in parts.items():
            times[name].append(spent_ms(work))
    medians = {name: round(statistics.median(values), 1) for name, values in times.items()}
    sealed, plain = ours(), bare()
    return {
        **medians,
        "ratio_to_bare": round(medians["ours_ms"] / medians["bare_ms"], 2),
        "ratio_to_bare_with_our_pages": round(medians["ours_ms"] / medians["bare_with_our_pages_ms"], 2),
        "pages_ours": len(pypdf.PdfReader(BytesIO(sealed)).pages),
        "pages_bare": len(pypdf.PdfReader(BytesIO(plain)).pages),
        "bytes_ours": len(sealed),
        "bytes_bare": len(plain),
        "runs": runs,
    }


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__.partition("\n")[0])
    parser.add_argument("--quick", action="store_true", help="fewer runs, under 50 s")
    parser.add_argument("--json", action="store_true", help="print one JSON object")
    options = parser.parse_args()
    result = measured(20 if options.quick else 100)
    if options.json:
        print(json.dumps(result))
        return
    print(__doc__.partition("\n")[0])
    for name, value in result.items():
        print(f"  {name:32} {value}")
    print("  bar: ratio at most 1.3; wish: about 50 ms a report")


if __name__ == "__main__":
    main()
