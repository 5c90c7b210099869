"""The two writers draw the same shapes, and nothing a text holds becomes more than text."""

from __future__ import annotations

import re
from io import BytesIO
from xml.etree import ElementTree as ET

import pypdf
import pytest
from hypothesis import given
from hypothesis import strategies as st
from reportlab.pdfbase.pdfmetrics import stringWidth
from reportlab.pdfgen.canvas import Canvas

from fieldlog.charts.pdf import Drawing, Typefaces
from fieldlog.charts.scene import COLOURS, Band, Dot, Ink, Line, Poly, Scene, Text
from fieldlog.charts.svg import svg
from fieldlog.charts.text_width import text_width, wrapped
from fieldlog.errors import InputError
from fieldlog.reports import fonts

NAMESPACE = "{http://www.w3.org/2000/svg}"
TYPEFACES = Typefaces(fonts.REGULAR, fonts.BOLD, fonts.printable)


def scene(words: str = "residual 54 psi") -> Scene:
    shapes = (
        Band(((10.0, 20.0), (90.0, 24.0), (90.0, 44.0))),
        Line((10.0, 30.0), (90.0, 31.5), Ink.RULE, 0.7, (4.0, 2.5)),
        Poly(((10.0, 50.0), (40.0, 42.25), (90.0, 47.0)), Ink.ACCENT, 1.8),
        Dot((40.0, 42.25), 2.5, Ink.ACCENT),
        Dot((60.0, 33.5), 2.5, Ink.INK, is_open=True),
        Text((15.0, 62.0), words, 9.0, "start", Ink.INK, is_bold=True, has_halo=True),
        Text((95.0, 72.0), words, 7.5, "end", Ink.SOFT),
    )
    return Scene(120.0, 80.0, f"Title {words}", f"Description {words}", shapes)


def drawn(content: Scene, width: float | None = None) -> bytes:
    output = BytesIO()
    canvas = Canvas(output, pagesize=(300, 200), pageCompression=0, initialFontName=fonts.REGULAR)
    Drawing(content, TYPEFACES, width).drawOn(canvas, 20, 30)
    canvas.save()
    return output.getvalue()


def test_the_page_says_in_words_what_is_drawn() -> None:
    root = ET.fromstring(svg(scene(), "margin"))  # noqa: S314  our own text
    assert root.get("role") == "img"
    assert root.get("aria-labelledby") == "margin-title margin-desc"
    assert root.get("viewBox") == "0 0 120 80"
    assert root.findtext(f"{NAMESPACE}title") == "Title residual 54 psi"
    assert root.findtext(f"{NAMESPACE}desc") == "Description residual 54 psi"


def test_ids_of_two_charts_on_one_page_differ() -> None:
    ids = re.findall(r'id="([^"]+)"', svg(scene(), "first") + svg(scene(), "second"))
    assert len(ids) == len(set(ids)) == 4


@pytest.mark.parametrize("prefix", ["", "1st", 'a" onload="x', "a b", "é"])
def test_a_prefix_that_is_no_name_is_refused(prefix: str) -> None:
    with pytest.raises(InputError):
        svg(scene(), prefix)


def test_a_strict_content_policy_has_nothing_to_block() -> None:
    text = svg(scene(), "chart")
    assert "style=" not in text
    assert "<script" not in text
    assert "on" not in re.findall(r"\s(\w+)=", text)


@given(st.text())
def test_any_words_stay_words_in_both(words: str) -> None:
    root = ET.fromstring(svg(scene(words), "chart"))  # noqa: S314  our own text
    tags = {element.tag.removeprefix(NAMESPACE) for element in root.iter()}
    assert tags == {"svg", "title", "desc", "path", "circle", "text"}
    pypdf.PdfReader(BytesIO(drawn(scene(words))))


def test_both_writers_use_the_same_colours() -> None:
    used = {Ink.WASH, Ink.RULE, Ink.ACCENT, Ink.INK, Ink.SOFT, Ink.PAPER}
    page = svg(scene(), "chart")
    pdf = drawn(scene())
    for ink in used:
        assert COLOURS[ink] in page
        red = int(COLOURS[ink][1:3], 16) / 255
        assert re.search(rf"{red:.6f}".rstrip("0").lstrip("0").replace(".", r"\.")[:5].encode(), pdf), ink


def test_the_text_of_a_drawing_can_be_read_back_from_the_file() -> None:
    text = pypdf.PdfReader(BytesIO(drawn(scene()))).pages[0].extract_text()
    assert "residual 54 psi" in text


def test_a_drawing_is_scaled_to_a_width() -> None:
    drawing = Drawing(scene(), TYPEFACES, 240.0)
    assert drawing.wrap(500, 500) == (240.0, 160.0)


@pytest.mark.parametrize("words", ["demand 620 gpm, 46.5 psi", "Größe ½ · Δ−Ω", "Жёлтый", "WWWiii1.,"])
@pytest.mark.parametrize("is_bold", [True, False])
def test_the_table_of_widths_is_that_of_the_typeface(words: str, is_bold: bool) -> None:
    name = fonts.BOLD if is_bold else fonts.REGULAR
    assert text_width(words, 11.5, is_bold=is_bold) == pytest.approx(stringWidth(words, name, 11.5), abs=0.01)


def test_long_words_are_wrapped_and_at_last_cut() -> None:
    assert wrapped("flow test of 3 October", 10.0, 70.0) == ("flow test of 3", "October")
    (first, second) = wrapped("flow test of 3 October 2016 at the hydrant", 10.0, 70.0)
    assert first == "flow test of 3"
    assert second.startswith("October")
    assert second.endswith("…")
    assert text_width(second, 10.0) <= 70.0
