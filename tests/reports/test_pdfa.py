"""The archival form, judged by programs of others."""

from __future__ import annotations

import hashlib
import re
import subprocess
import sys
from collections.abc import Callable
from datetime import UTC, datetime
from io import BytesIO
from pathlib import Path

import pikepdf
import pypdf
import pytest
from PIL import Image, ImageCms

from fieldlog.reports import pdfa
from fieldlog.reports.colour_profile import srgb_profile

Run = Callable[..., "subprocess.CompletedProcess[str]"]
RECORDS = b'{"entries":["first entry","second entry"],"format":2}'
FACTS = pdfa.DocumentFacts("A title", "An organisation", datetime(2026, 10, 12, 14, 5, 37, tzinfo=UTC))


def test_every_font_is_embedded(archival: bytes, run_program: Run, tmp_path: Path) -> None:
    (tmp_path / "report.pdf").write_bytes(archival)
    rows = run_program("pdffonts", tmp_path / "report.pdf").stdout.splitlines()[2:]
    assert rows
    assert all(row.split()[-5:-2] == ["yes", "yes", "yes"] for row in rows), rows


def test_another_program_finds_no_fault_in_the_files_structure(
    archival: bytes, run_program: Run, tmp_path: Path
) -> None:
    (tmp_path / "report.pdf").write_bytes(archival)
    assert run_program("qpdf", "--check", tmp_path / "report.pdf").returncode == 0


def test_the_records_come_out_as_they_went_in(archival: bytes, run_program: Run, tmp_path: Path) -> None:
    (tmp_path / "report.pdf").write_bytes(archival)
    run_program("pdfdetach", "-save", "1", "-o", tmp_path / "out.json", tmp_path / "report.pdf")
    assert (tmp_path / "out.json").read_bytes() == RECORDS
    assert pypdf.PdfReader(BytesIO(archival)).attachments["records.json"] == [RECORDS]


def test_preflight_finds_the_older_twin_valid(drawn: bytes, preflight: Run, tmp_path: Path) -> None:
    twin = pdfa.archival_pdf(drawn, FACTS, RECORDS, part=1)
    (tmp_path / "twin.pdf").write_bytes(twin)
    result = preflight(tmp_path / "twin.pdf")
    assert result.returncode == 0, result.stdout + result.stderr
    assert "valid PDF/A-1b" in result.stdout


def test_preflight_objects_only_to_what_the_newer_part_allows(archival: bytes, preflight: Run, tmp_path: Path) -> None:
    (tmp_path / "report.pdf").write_bytes(archival)
    result = preflight(tmp_path / "report.pdf")
    assert set(re.findall(r"^\d[\d.]* : (.*)$", result.stdout, re.MULTILINE)) == {
        "Trailer Syntax error, EmbeddedFile entry is present in the Names dictionary",
        "Body Syntax error, EmbeddedFile entry is present in a FileSpecification dictionary",
        "Trailer Syntax error, /XRef cross reference streams are not allowed",
        "Error on MetaData, part must be 1",
    }


def test_preflight_sees_a_spoilt_twin(drawn: bytes, preflight: Run, tmp_path: Path) -> None:
    with pikepdf.open(BytesIO(pdfa.archival_pdf(drawn, FACTS, RECORDS, part=1))) as pdf:
        del pdf.Root.OutputIntents
        pdf.save(tmp_path / "spoilt.pdf", object_stream_mode=pikepdf.ObjectStreamMode.disable)
    assert preflight(tmp_path / "spoilt.pdf").returncode != 0


def test_the_attachment_is_declared_as_the_standard_asks(archival: bytes) -> None:
    with pikepdf.open(BytesIO(archival)) as pdf:
        file = pdf.Root.AF[0]
        assert file == pdf.Root.Names.EmbeddedFiles.Names[1]
        assert file.AFRelationship == pikepdf.Name.Data
        assert (str(file.F), str(file.UF)) == ("records.json", "records.json")
        assert file.EF.F.Subtype == pikepdf.Name("/application/json")
        assert int(file.EF.F.Params.Size) == len(RECORDS)
        assert bytes(file.EF.F.Params.CheckSum) == hashlib.md5(RECORDS).digest()  # noqa: S324  the form's checksum


def test_the_file_speaks_of_itself_in_one_place_only(archival: bytes) -> None:
    with pikepdf.open(BytesIO(archival)) as pdf:
        assert "/Info" not in pdf.trailer
        with pdf.open_metadata() as metadata:
            assert metadata["dc:title"] == "Visit of 12 October <2026> & report"
            assert metadata["pdfaid:part"] == "3"
            assert metadata["xmp:CreateDate"] == "2026-10-12T14:05:37Z"
        assert str(pdf.Root.Lang) == "en"


def test_a_title_that_xml_cannot_hold_is_mended(drawn: bytes) -> None:
    facts = pdfa.DocumentFacts("bell \x07 \ufffe 火", "half \ud800 pair", FACTS.made_at)
    with pikepdf.open(BytesIO(pdfa.archival_pdf(drawn, facts, RECORDS))) as pdf, pdf.open_metadata() as metadata:
        assert metadata["dc:title"] == "bell \ufffd \ufffd 火"
        assert metadata["dc:creator"] == ["half \ufffd pair"]


def test_two_processes_make_the_same_bytes() -> None:
    program = (
        "import hashlib\nfrom datetime import UTC, datetime\nfrom io import BytesIO\n"
        "from reportlab.pdfgen.canvas import Canvas\nfrom fieldlog.reports import fonts, pdfa\n"
        "output = BytesIO()\ncanvas = Canvas(output, pageCompression=1, initialFontName=fonts.REGULAR)\n"
        "canvas.drawString(72, 700, 'residual 54 psi')\ncanvas.save()\n"
        "facts = pdfa.DocumentFacts('T', 'O', datetime(2026, 10, 12, tzinfo=UTC))\n"
        "print(hashlib.sha256(pdfa.archival_pdf(output.getvalue(), facts, b'{}')).hexdigest())"
    )
    command = [sys.executable, "-c", program]
    made = [subprocess.run(command, capture_output=True, text=True, check=True).stdout for _ in range(2)]
    assert made[0] == made[1]


@pytest.mark.parametrize("colour", [(22, 24, 27), (13, 79, 92), (220, 235, 237), (253, 252, 249), (3, 200, 90)])
def test_another_colour_engine_reads_the_profile_as_srgb(colour: tuple[int, int, int]) -> None:
    ours = ImageCms.getOpenProfile(BytesIO(srgb_profile()))
    seen = ImageCms.profileToProfile(Image.new("RGB", (2, 2), colour), ours, ImageCms.createProfile("sRGB"))
    assert seen is not None
    pixel = seen.getpixel((1, 1))
    assert isinstance(pixel, tuple)
    assert max(abs(a - b) for a, b in zip(pixel, colour, strict=True)) <= 1
