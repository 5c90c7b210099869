"""The pages: everything is on them, long and hostile content as well, and the same content gives the same file."""

from __future__ import annotations

import dataclasses
import hashlib
import subprocess
import sys
from collections.abc import Callable
from io import BytesIO
from pathlib import Path
from unicodedata import normalize

import pypdf
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from fieldlog.reports import content, seal
from fieldlog.reports.pages import Paper, drawn_pages, report_pdf
from tests.reports import sample

Run = Callable[..., "subprocess.CompletedProcess[str]"]
ROOT = str(Path(__file__).resolve().parent.parent.parent)


def texts(pdf: bytes) -> list[str]:
    pages = [page.extract_text() for page in pypdf.PdfReader(BytesIO(pdf)).pages]
    return [" ".join(normalize("NFKC", page).split()) for page in pages]


def strings_of(value: object) -> list[str]:
    """Return every text in a content, without charts and strokes."""
    if isinstance(value, str):
        return [value]
    if isinstance(value, content.Picture):
        return [value.heading, value.caption]
    if isinstance(value, tuple):
        return [text for item in value for text in strings_of(item)]
    if dataclasses.is_dataclass(value):
        fields = [f.name for f in dataclasses.fields(value) if f.name not in {"strokes", "statement", "language"}]
        return [text for name in fields for text in strings_of(getattr(value, name))]
    return []


def test_everything_that_is_said_stands_on_the_pages() -> None:
    report = sample.sample_report()
    page_text = "".join("".join(texts(report_pdf(report))).split())
    missing = [text for text in strings_of(report) if "".join(normalize("NFKC", text).split()) not in page_text]
    assert missing == []


def test_the_statement_comes_before_the_numbers() -> None:
    first = texts(report_pdf(sample.sample_report()))[0]
    places = [first.index(words) for words in ("Reedbank Fire", "Revision 2", "Changed.", "Unproven.", "Findings")]
    assert places == sorted(places)


def test_every_page_bears_its_number_the_reports_name_and_the_head_of_the_log() -> None:
    pages = texts(report_pdf(sample.sample_report()))
    for number, page in enumerate(pages, 1):
        assert f"page {number} of {len(pages)}" in page
        assert "Harbour Cold Store, 12 October 2026, revision 2" in page
        assert sample.HEAD in page


def test_a_draft_says_so_on_every_page() -> None:
    pages = texts(drawn_pages(sample.sample_report(draft="Draft, not sealed")))
    assert all("Draft, not sealed" in page for page in pages)


def test_a_standard_that_nobody_recorded_is_said_to_be_missing() -> None:
    assert "Adopted standard not recorded." in " ".join(texts(drawn_pages(sample.sample_report(standards=()))))


def test_an_empty_report_is_still_a_report() -> None:
    bare = content.VisitReport(
        "Name", "Visit", content.Party("Organisation"), content.Party("Site"), sample.MADE_AT, sample.HEAD, b"{}"
    )
    (page,) = texts(report_pdf(bare))
    assert "page 1 of 1" in page


@pytest.mark.parametrize("paper", Paper)
def test_a_long_table_repeats_its_headings_on_every_page(paper: Paper) -> None:
    table = sample.every_test(years=20)
    report = sample.sample_report(sections=(content.Section("Wet system 2", (table,)),))
    pages = [page for page in texts(drawn_pages(report, paper)) if "old record" in page]
    assert len(pages) > 5
    for page in pages:
        assert page.index("Date") < page.index("old record")
        assert page.index("Drain index") < page.index("old record")
    assert sum(page.count("old record") for page in pages) == 240


def test_nothing_is_drawn_outside_the_sheet(run_program: Run, tmp_path: Path) -> None:
    for paper, (width, height) in ((Paper.A4, (595.28, 841.89)), (Paper.LETTER, (612.0, 792.0))):
        (tmp_path / "report.pdf").write_bytes(drawn_pages(sample.sample_report(), paper))
        listing = run_program("pdftotext", "-bbox", tmp_path / "report.pdf", "-").stdout
        words = [line.split('"') for line in listing.splitlines() if "<word" in line]
        assert len(words) > 500
        assert min(float(word[1]) for word in words) >= 50
        assert max(float(word[5]) for word in words) <= width - 50
        assert max(float(word[7]) for word in words) <= height - 15


LONG = "word " * 300 + "x" * 900 + "\nline" * 40
HOSTILE = (
    "<b>bold</b> <font size=90>& &amp; </para><para> <img src='file:///etc/passwd'/> <a href='javascript:x'>",
    "\x00\x07\x1b[31m \x85 \u202e gnp.exe \ufeff",
    "火災 🔥 \U0001f9ef \ud800 \uffff ܐ",
    "%s %(name)s {0} $x ${jndi} \\n \\( ) ( /Type endobj stream",
    "=1+1, -2, @x; ' OR 1=1 --",
    LONG,
    "",
    " ",
)


def everywhere(value: object, words: str) -> object:
    """Return a content with every text replaced."""
    if isinstance(value, str):
        return words
    if isinstance(value, tuple):
        return tuple(everywhere(item, words) for item in value)
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        keep = {"statement", "language", "verify_address", "begin"}
        changes = {
            f.name: everywhere(getattr(value, f.name), words)
            for f in dataclasses.fields(value)
            if f.name not in keep and not isinstance(getattr(value, f.name), bytes)
        }
        return dataclasses.replace(value, **changes)
    return value


@pytest.mark.slow
@pytest.mark.parametrize("words", HOSTILE)
def test_any_words_anywhere_are_printed_as_typed_or_as_boxes(words: str) -> None:
    report = everywhere(sample.sample_report(), words)
    assert isinstance(report, content.VisitReport)
    pdf = report_pdf(report)
    reader = pypdf.PdfReader(BytesIO(pdf))
    assert len(reader.pages) >= 1
    assert "/Annots" not in reader.pages[0]
    if words.startswith("<b>"):
        assert "<b>bold</b>" in "".join(texts(pdf))
    if "火" in words:
        assert "□" in "".join(texts(pdf))


@given(st.text(st.characters(codec=None), max_size=300))
@settings(max_examples=25, suppress_health_check=[HealthCheck.too_slow])
def test_any_text_of_an_entry_can_be_printed(words: str) -> None:
    blocks = (
        content.Facts((content.Row(words, words, words, words), content.Row("a", "b"))),
        content.Table(words, (content.Column(words), content.Column(words, words, is_number=True)), ((words, words),)),
        content.TestRecord(words, words, (content.Reading(words, words, words, words, words),), (), (words,), words),
        content.Finding(words, words, (content.Row(words, words),)),
        content.Items((words,), words),
        content.Words((words,), words),
    )
    report = sample.sample_report(sections=(content.Section(words, blocks, words),), statements=())
    assert texts(drawn_pages(report))


def test_a_table_row_with_too_few_or_too_many_cells_is_printed_in_its_columns() -> None:
    table = content.Table("T", (content.Column("One"), content.Column("Two")), (("a",), ("b", "c", "surplus")))
    text = " ".join(texts(drawn_pages(sample.sample_report(sections=(content.Section("S", (table,)),)))))
    assert "surplus" not in text


def test_a_number_stays_with_its_unit() -> None:
    words = ("w " * 57) + "54 psi"
    report = sample.sample_report(sections=(content.Section("S", (content.Words((words,)),)),), statements=())
    pages = [page.extract_text() for page in pypdf.PdfReader(BytesIO(drawn_pages(report))).pages]
    assert any("54\u00a0psi" in page or "54 psi" in page for page in pages)
    assert not any("54\npsi" in page for page in pages)


def test_two_processes_make_the_same_unsigned_bytes() -> None:
    program = (
        f"import sys; sys.path.insert(0, {ROOT!r})\n"
        "import hashlib\nfrom tests.reports import sample\nfrom fieldlog.reports.pages import report_pdf\n"
        "print(hashlib.sha256(report_pdf(sample.sample_report())).hexdigest())"
    )
    command = [sys.executable, "-c", program]
    made = [subprocess.run(command, capture_output=True, text=True, check=True).stdout.strip() for _ in range(2)]
    assert made[0] == made[1] == hashlib.sha256(report_pdf(sample.sample_report())).hexdigest()


def test_charts_imported_first_leave_no_font_that_is_not_embedded(run_program: Run, tmp_path: Path) -> None:
    program = (
        f"import sys; sys.path.insert(0, {ROOT!r})\nimport fieldlog.charts.pdf\nfrom tests.reports import sample\n"
        "from fieldlog.reports.pages import report_pdf\n"
        f"open({str(tmp_path / 'report.pdf')!r}, 'wb').write(report_pdf(sample.sample_report()))"
    )
    subprocess.run([sys.executable, "-c", program], check=True)
    rows = run_program("pdffonts", tmp_path / "report.pdf").stdout.splitlines()[2:]
    assert rows
    assert all(row.split()[-5:-2] == ["yes", "yes", "yes"] for row in rows), rows


def test_the_whole_report_holds_before_programs_of_others(
    signer: seal.Signer, trust_roots: seal.TrustRoots, run_program: Run, preflight: Run, tmp_path: Path
) -> None:
    report = sample.sample_report()
    sealed = seal.seal(report_pdf(report), signer, sample.MADE_AT, reason="Report of a visit")
    verdict = seal.verify(sealed, trust_roots)
    assert verdict.is_good
    assert verdict.records_json == sample.RECORDS
    (tmp_path / "sealed.pdf").write_bytes(sealed)
    (tmp_path / "twin.pdf").write_bytes(report_pdf(report, part=1))
    assert "Signature is Valid." in run_program("pdfsig", tmp_path / "sealed.pdf").stdout
    assert run_program("qpdf", "--check", tmp_path / "sealed.pdf").returncode == 0
    rows = run_program("pdffonts", tmp_path / "sealed.pdf").stdout.splitlines()[2:]
    assert all(row.split()[-5:-2] == ["yes", "yes", "yes"] for row in rows), rows
    result = preflight(tmp_path / "twin.pdf")
    assert result.returncode == 0, result.stdout


def test_nothing_is_told_by_colour_alone(run_program: Run, tmp_path: Path) -> None:
    """In grey, the darkest and the palest ink of a chart stay far apart."""
    (tmp_path / "report.pdf").write_bytes(drawn_pages(sample.sample_report()))
    run_program("pdftoppm", "-r", "60", "-gray", "-f", "2", "-l", "2", tmp_path / "report.pdf", tmp_path / "page")
    (picture,) = tmp_path.glob("page*.pgm")
    pixels = picture.read_bytes()[-496 * 700 :]
    assert min(pixels) < 40
    assert max(pixels) > 250
