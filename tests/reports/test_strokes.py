"""Drawn signatures and codes, read back from the drawn page."""

from __future__ import annotations

import subprocess
from collections.abc import Callable
from io import BytesIO
from pathlib import Path

import pytest
import segno
from hypothesis import given
from hypothesis import strategies as st
from PIL import Image
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import Flowable

from fieldlog.errors import InputError
from fieldlog.reports import fonts
from fieldlog.reports.qr import QrCode
from fieldlog.reports.strokes import Strokes, segments

Run = Callable[..., "subprocess.CompletedProcess[str]"]


def picture(flowable: Flowable, run_program: Run, folder: Path) -> Image.Image:
    """Draw a flowable on a sheet of 200 by 100 points and return it, four pixels a point."""
    output = BytesIO()
    canvas = Canvas(output, pagesize=(200, 100), initialFontName=fonts.REGULAR)
    flowable.drawOn(canvas, 0, 0)
    canvas.save()
    (folder / "drawn.pdf").write_bytes(output.getvalue())
    run_program("pdftoppm", "-r", "288", "-gray", "-singlefile", folder / "drawn.pdf", folder / "drawn")
    with Image.open(folder / "drawn.pgm") as opened:
        return opened.copy()


def test_moves_lines_and_curves_are_read_with_commas_spaces_and_none() -> None:
    (move, line, curve) = segments("M 10,20.5L-3 .5C1 2,3-4 5e1 6")
    assert (move.letter, move.points) == ("M", ((10.0, 20.5),))
    assert (line.letter, line.points) == ("L", ((-3.0, 0.5),))
    assert (curve.letter, curve.points) == ("C", ((1.0, 2.0), (3.0, -4.0), (50.0, 6.0)))


def test_pairs_after_a_move_are_lines() -> None:
    assert [segment.letter for segment in segments("M1 2 3 4 5 6 L7 8 9 10")] == ["M", "L", "L", "L", "L"]


@pytest.mark.parametrize(
    "path",
    [
        "",
        "L1 2",
        "M1",
        "M1 2 L3",
        "M1 2 C1 2 3 4 5",
        "M1 2 A3 4",
        "m1 2",
        "M1 2z",
        "M1 2 <b>",
        "M1 2 L1e300 4",
        "M M",
        "3 4",
    ],
)
def test_what_is_no_signature_is_refused(path: str) -> None:
    with pytest.raises(InputError, match="sign again"):
        segments(path)


@given(st.text(st.sampled_from("MLC0123456789.,-+e \n"), max_size=60))
def test_any_path_is_read_or_refused(path: str) -> None:
    try:
        found = segments(path)
    except InputError:
        return
    canvas = Canvas(BytesIO(), pagesize=(200, 100), initialFontName=fonts.REGULAR)
    Strokes(found, 180.0, 46.0).drawOn(canvas, 5, 5)
    canvas.save()


def test_a_signature_is_drawn_upright_and_within_its_box(run_program: Run, tmp_path: Path) -> None:
    # A flat stroke at the top of the path, then down at its right end.
    drawn = picture(Strokes(segments("M10 10 L190 10 L190 90"), 180.0, 84.0), run_program, tmp_path)
    dark = [(x, y) for x in range(drawn.width) for y in range(drawn.height) if drawn.getpixel((x, y)) < 90]
    top = min(y for _, y in dark)
    assert {x for x, y in dark if y <= top + 2} >= set(range(20, 600))
    assert max(x for x, _ in dark) <= 184 * 4
    assert min(x for x, y in dark if y > 300) > 700


@pytest.mark.parametrize("path", ["M5 5", "M5 5 L5 5", "M5 5 L9 5", "M5 5 L5 9"])
def test_a_dot_and_a_straight_stroke_are_drawn(path: str, run_program: Run, tmp_path: Path) -> None:
    picture(Strokes(segments(path), 180.0, 46.0), run_program, tmp_path)


def test_the_code_on_paper_is_the_code(run_program: Run, tmp_path: Path) -> None:
    address = "https://log.reedbank.example/verify/7c1fe0b3a95d24c8"
    wanted = [bytes(row) for row in segno.make(address, error="m", micro=False).matrix]
    drawn = picture(QrCode(address, 90.0), run_program, tmp_path)
    square = 90.0 * 4 / len(wanted)
    bottom = drawn.height
    for down, row in enumerate(wanted):
        for across, is_dark in enumerate(row):
            at = (int((across + 0.5) * square), int(bottom - 360 + (down + 0.5) * square))
            assert (drawn.getpixel(at) < 128) == bool(is_dark), (down, across)
