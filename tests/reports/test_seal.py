"""The seal: programs of others find it valid, and nothing that was touched later is called good."""

from __future__ import annotations

import random
import re
from collections.abc import Callable
from datetime import UTC, datetime
from io import BytesIO
from pathlib import Path

import pikepdf
import pypdf
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pyhanko.pdf_utils import generic
from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter

from fieldlog.errors import SigningError
from fieldlog.reports import seal

AT = datetime(2026, 10, 12, 14, 5, 37, tzinfo=UTC)
RECORDS = b'{"entries":["first entry","second entry"],"format":2}'
Run = Callable[..., object]


def signature_of(pdf: bytes) -> tuple[list[int], bytes]:
    """Return the byte range and the signature without its padding, read without any PDF program."""
    found = re.findall(rb"/ByteRange \[(\d+) (\d+) (\d+) (\d+)", pdf)
    span = [int(number) for number in found[-1]]
    content = bytes.fromhex(pdf[span[1] + 1 : span[2] - 1].decode())
    return span, content[: 4 + int.from_bytes(content[2:4])]


def test_our_own_verdict_on_an_untouched_report(sealed: bytes, trust_roots: seal.TrustRoots) -> None:
    verdict = seal.verify(sealed, trust_roots)
    assert verdict.is_good
    assert verdict.reasons == ()
    assert (verdict.is_intact, verdict.is_valid, verdict.is_trusted, verdict.covers_whole_file) == (True,) * 4
    assert verdict.modification == "none"
    assert verdict.signer_name == "Reedbank Fire Protection"
    assert verdict.sealed_at == AT
    assert verdict.records_json == RECORDS


def test_pdfsig_finds_the_signature_valid_and_the_certificate_trusted(
    sealed: bytes, identity: seal.SealingIdentity, run_program: Run, tmp_path: Path
) -> None:
    (tmp_path / "report.pdf").write_bytes(sealed)
    (tmp_path / "authority.pem").write_bytes(identity.authority_pem)
    (tmp_path / "nss").mkdir()
    store = f"sql:{tmp_path / 'nss'}"
    run_program("certutil", "-N", "-d", store, "--empty-password")
    run_program("certutil", "-A", "-d", store, "-t", "C,C,C", "-n", "root", "-i", tmp_path / "authority.pem")
    said = run_program("pdfsig", "-nssdir", store, tmp_path / "report.pdf").stdout
    assert "Signature is Valid." in said
    assert "Certificate is Trusted." in said
    assert "Total document signed" in said


def test_openssl_verifies_the_signature_over_the_bytes_it_names(
    sealed: bytes, identity: seal.SealingIdentity, run_program: Run, tmp_path: Path
) -> None:
    (start, length, resume, rest), der = signature_of(sealed)
    assert (start, resume + rest) == (0, len(sealed))
    (tmp_path / "signed.bin").write_bytes(sealed[:length] + sealed[resume:])
    (tmp_path / "signature.der").write_bytes(der)
    (tmp_path / "authority.pem").write_bytes(identity.authority_pem)
    command = (
        "openssl", "cms", "-verify", "-cades", "-inform", "DER", "-in", tmp_path / "signature.der", "-binary",
        "-content", tmp_path / "signed.bin", "-CAfile", tmp_path / "authority.pem", "-purpose", "any",
        "-attime", str(int(AT.timestamp())), "-out", tmp_path / "out.bin",
    )  # fmt: skip
    assert run_program(*command).returncode == 0
    (tmp_path / "signed.bin").write_bytes(sealed[:length] + sealed[resume:].replace(b"e", b"f", 1))
    assert run_program(*command).returncode != 0


def test_the_seal_leaves_structure_and_own_description_alone(
    sealed: bytes, archival: bytes, run_program: Run, tmp_path: Path
) -> None:
    (tmp_path / "report.pdf").write_bytes(sealed)
    assert run_program("qpdf", "--check", tmp_path / "report.pdf").returncode == 0
    assert sealed.startswith(archival)
    assert b"pyHanko" not in sealed
    with pikepdf.open(BytesIO(sealed)) as pdf:
        assert "/Info" not in pdf.trailer
        assert pdf.pdf_version == "1.7"
        assert "/Version" not in pdf.Root
    assert pypdf.PdfReader(BytesIO(sealed)).attachments["records.json"] == [RECORDS]


def test_a_hundred_flipped_bits_in_the_signed_ranges_are_each_refused(
    sealed: bytes, trust_roots: seal.TrustRoots
) -> None:
    (_, length, resume, rest), _ = signature_of(sealed)
    places = random.Random(20261012)
    for _ in range(100):
        place = places.randrange(length + rest)
        at = place if place < length else place - length + resume
        touched = bytearray(sealed)
        touched[at] ^= 1 << places.randrange(8)
        assert not seal.verify(bytes(touched), trust_roots).is_good, at


@pytest.mark.parametrize("digit", [b"1", b"F", b" "])
def test_a_padding_that_is_not_zero_is_refused(sealed: bytes, trust_roots: seal.TrustRoots, digit: bytes) -> None:
    (_, _, resume, _), _ = signature_of(sealed)
    touched = sealed[: resume - 40] + digit + sealed[resume - 39 :]
    verdict = seal.verify(touched, trust_roots)
    assert verdict.reasons == ("The seal does not cover the whole file.",)


def test_a_white_box_painted_over_a_page_later_is_refused(sealed: bytes, trust_roots: seal.TrustRoots) -> None:
    writer = IncrementalPdfFileWriter(BytesIO(sealed))
    box = writer.add_object(generic.StreamObject(stream_data=b"q 1 1 1 rg 50 450 300 300 re f Q"))
    writer.add_stream_to_page(1, box)
    output = BytesIO()
    writer.write(output)
    verdict = seal.verify(output.getvalue(), trust_roots)
    assert (verdict.is_intact, verdict.is_good, verdict.modification) == (True, False, "other")
    assert "Something was added to the file after it was sealed." in verdict.reasons


def test_bytes_added_at_the_end_are_refused(sealed: bytes, trust_roots: seal.TrustRoots) -> None:
    assert not seal.verify(sealed + b"\n% and a line\n", trust_roots).is_good


def test_a_second_signature_is_refused(sealed: bytes, signer: seal.Signer) -> None:
    with pytest.raises(SigningError, match="can't be sealed"):
        seal.seal(sealed, signer, AT, reason="Report of a visit")


def test_a_report_that_another_program_saved_again_is_refused(sealed: bytes, trust_roots: seal.TrustRoots) -> None:
    output = BytesIO()
    with pikepdf.open(BytesIO(sealed)) as pdf:
        pdf.save(output)
    assert not seal.verify(output.getvalue(), trust_roots).is_good


def test_the_seal_of_another_organisation_is_not_trusted(sealed: bytes) -> None:
    other = seal.make_sealing_identity("Reedbank Fire Protection", AT)
    roots = tuple(seal.certificates_of(other.authority_pem, "other"))
    verdict = seal.verify(sealed, roots)
    assert (verdict.is_intact, verdict.is_trusted, verdict.is_good) == (True, False, False)
    assert not seal.verify(sealed, ()).is_good


def test_a_file_of_another_program_carries_no_seal(archival: bytes, trust_roots: seal.TrustRoots) -> None:
    writer = pypdf.PdfWriter()
    writer.add_blank_page(200, 300)
    output = BytesIO()
    writer.write(output)
    for pdf in (output.getvalue(), archival):
        assert seal.verify(pdf, trust_roots).reasons == ("The file carries no seal.",)


@given(st.one_of(st.binary(max_size=400), st.binary(max_size=200).map(b"%PDF-1.7\n".__add__)))
def test_garbage_gets_a_verdict(content: bytes) -> None:
    verdict = seal.verify(content, ())
    assert not verdict.is_good
    assert verdict.reasons


def test_a_report_cut_short_anywhere_gets_a_verdict(sealed: bytes, trust_roots: seal.TrustRoots) -> None:
    places = random.Random(7)
    for length in places.sample(range(len(sealed)), 40):
        assert not seal.verify(sealed[:length], trust_roots).is_good


@pytest.mark.slow
def test_damage_of_any_kind_gets_a_verdict(sealed: bytes, trust_roots: seal.TrustRoots) -> None:
    places = random.Random(11)
    tail = sealed.rindex(b"/Type /Sig") if b"/Type /Sig" in sealed else 0
    for _ in range(300):
        touched = bytearray(sealed)
        for _ in range(places.choice((2, 5, 40))):
            touched[places.randrange(places.choice((0, tail)), len(sealed))] = places.randrange(256)
        seal.verify(bytes(touched), trust_roots)


def test_what_is_no_pdf_cannot_be_sealed(signer: seal.Signer) -> None:
    with pytest.raises(SigningError, match="make it again"):
        seal.seal(b"%PDF-1.7 but nothing else", signer, AT, reason="Report of a visit")
