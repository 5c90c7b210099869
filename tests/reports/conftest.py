"""A sealing identity of an invented organisation, drawn pages, and the programs of others that read them."""

from __future__ import annotations

import os
import shutil
import subprocess
from collections.abc import Callable
from datetime import UTC, datetime
from io import BytesIO
from pathlib import Path

import pytest
from reportlab.pdfgen.canvas import Canvas

from fieldlog.reports import fonts, pdfa, seal

SEALED_AT = datetime(2026, 10, 12, 14, 5, 37, tzinfo=UTC)
RECORDS = b'{"entries":["first entry","second entry"],"format":2}'
FACTS = pdfa.DocumentFacts("Visit of 12 October <2026> & report", "Reedbank Fire Protection", SEALED_AT)

Run = Callable[..., subprocess.CompletedProcess[str]]


@pytest.fixture(scope="session")
def run_program() -> Run:
    """Run a program of others; where it is missing, skip, but fail in CI, which has to have it."""

    def run(*command: str | Path) -> subprocess.CompletedProcess[str]:
        if shutil.which(str(command[0])) is None:
            missing = f"{command[0]} is not installed"
            if os.environ.get("CI") == "true":
                pytest.fail(missing)
            pytest.skip(missing)
        return subprocess.run(command, capture_output=True, text=True, check=False, timeout=60)

    return run


@pytest.fixture(scope="session")
def preflight(run_program: Run) -> Run:
    """Run PDFBox Preflight, which judges PDF/A-1b, on a file."""
    folder = Path("/usr/share/java")
    names = (
        "preflight", "xmpbox", "pdfbox2", "fontbox2", "commons-logging", "commons-io",
        "javax.activation", "jaxb-api",
    )  # fmt: skip
    jars = [folder / f"{name}.jar" for name in names]

    def run(path: Path) -> subprocess.CompletedProcess[str]:
        if not all(jar.is_file() for jar in jars) and os.environ.get("CI") != "true":
            pytest.skip("PDFBox Preflight is not installed")
        class_path = ":".join(map(str, jars))
        return run_program("java", "-cp", class_path, "org.apache.pdfbox.preflight.Validator_A1b", path)

    return run


@pytest.fixture(scope="session")
def identity() -> seal.SealingIdentity:
    return seal.make_sealing_identity("Reedbank Fire Protection", SEALED_AT)


@pytest.fixture(scope="session")
def keys(identity: seal.SealingIdentity, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("instance") / "keys"
    seal.write_identity(folder, identity)
    return folder


@pytest.fixture(scope="session")
def signer(keys: Path) -> seal.Signer:
    return seal.load_signer(keys)


@pytest.fixture(scope="session")
def trust_roots(keys: Path) -> seal.TrustRoots:
    return seal.load_trust_roots(keys)


@pytest.fixture(scope="session")
def drawn() -> bytes:
    """Two drawn pages, not yet archival."""
    output = BytesIO()
    canvas = Canvas(output, pageCompression=1, initialFontName=fonts.REGULAR, lang="en")
    for number in (2, 3):
        canvas.setFont(fonts.BOLD, 14)
        canvas.drawString(72, 700, f"Sheet {number}: residual ≥ 54 psi, Δ −6 psi")
        canvas.setFillColorRGB(0.05, 0.31, 0.36)
        canvas.rect(72, 500, 200, 120, stroke=0, fill=1)
        canvas.showPage()
    canvas.save()
    return output.getvalue()


@pytest.fixture(scope="session")
def archival(drawn: bytes) -> bytes:
    return pdfa.archival_pdf(drawn, FACTS, RECORDS)


@pytest.fixture(scope="session")
def sealed(archival: bytes, signer: seal.Signer) -> bytes:
    return seal.seal(archival, signer, SEALED_AT, reason="Report of a visit")
