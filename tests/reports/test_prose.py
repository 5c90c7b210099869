"""Paragraphs: lines within their room, numbers with their units, nothing lost, no line alone on a page."""

from __future__ import annotations

from io import BytesIO

from hypothesis import given
from hypothesis import strategies as st
from reportlab.lib.colors import black
from reportlab.pdfgen.canvas import Canvas

from fieldlog.reports import fonts
from fieldlog.reports.prose import Prose, Span, Style, width

STYLE = Style(9.0, black, left=14.0, right=6.0)


def prose(text: str, style: Style = STYLE) -> Prose:
    return Prose((Span(fonts.printable(text), style.font, style.paint),), style)


def lines(paragraph: Prose, room: float) -> list[str]:
    paragraph.wrap(room, 1e6)
    return ["".join(span.text for span in spans) for spans, _ in paragraph._lines]


@given(st.text(max_size=200), st.floats(40, 500))
def test_every_line_fits_and_no_character_is_lost(text: str, room: float) -> None:
    paragraph = prose(text)
    found = lines(paragraph, room)
    assert all(width(line, STYLE.font) * STYLE.size <= room - 20 + 0.01 for line in found)
    kept = fonts.printable(text).replace("\u00a0", " ")
    assert "".join(found).replace("\u00a0", "").replace(" ", "") == kept.replace(" ", "").replace("\n", "")


def test_typed_breaks_are_kept_and_an_empty_line_stays() -> None:
    assert lines(prose("first\n\nthird"), 300.0) == ["first", "", "third"]


def test_a_number_is_not_parted_from_its_unit_nor_a_day_from_its_month() -> None:
    found = lines(prose("residual of 54 psi on 12 October at 620 gpm"), 75.0)
    assert [line.replace("\u00a0", " ") for line in found] == ["residual of", "54 psi on", "12 October", "at 620 gpm"]


def test_a_word_wider_than_the_line_is_cut() -> None:
    found = lines(prose("x" * 90), 120.0)
    assert len(found) > 3
    assert "".join(found) == "x" * 90


def test_a_paragraph_is_split_without_a_line_alone() -> None:
    paragraph = prose("word " * 60)
    _, height = paragraph.wrap(200.0, 1e6)
    count = len(lines(paragraph, 200.0))
    top, rest = paragraph.split(200.0, height - 2 * STYLE.leading + 1)
    assert isinstance(top, Prose)
    assert isinstance(rest, Prose)
    assert (len(top._lines), len(rest._lines)) == (count - 2, 2)
    assert paragraph.split(200.0, STYLE.leading * 1.5) == []
    assert paragraph.split(200.0, height + 1) == [paragraph]


def test_the_bullet_stands_at_the_first_part_only() -> None:
    paragraph = Prose((Span("word " * 60, STYLE.font, STYLE.paint),), STYLE, "–")
    top, rest = paragraph.split(200.0, STYLE.leading * 4)
    assert isinstance(top, Prose)
    assert isinstance(rest, Prose)
    assert (top.bullet, rest.bullet) == ("–", "")


def test_right_aligned_lines_end_at_the_right() -> None:
    output = BytesIO()
    canvas = Canvas(output, pagesize=(300, 100), pageCompression=0, initialFontName=fonts.REGULAR)
    right = Style(9.0, black, is_right=True)
    paragraph = prose("54.5", right)
    paragraph.wrapOn(canvas, 200.0, 100.0)
    paragraph.drawOn(canvas, 0.0, 40.0)
    canvas.save()
    at = f"1 0 0 1 {200 - width('54.5', right.font) * 9:.2f}".rstrip("0")
    assert at[:-1].encode() in output.getvalue()
