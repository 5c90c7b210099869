"""What a seal is worth: the verdict on a file that claims to be a sealed report.

The bottom line is pyHanko's, which compares what was added after the seal with what the seal allows; looking at
the signature alone would call a page that was painted over later "valid".
"""

from __future__ import annotations

import struct
import zlib
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from io import BytesIO

from asn1crypto import parser, x509
from pyhanko.pdf_utils.misc import PdfError
from pyhanko.pdf_utils.reader import PdfFileReader
from pyhanko.sign.validation import EmbeddedPdfSignature, PdfSignatureStatus, validate_pdf_signature
from pyhanko.sign.validation.status import SignatureCoverageLevel
from pyhanko_certvalidator import ValidationContext
from pyhanko_certvalidator.errors import CRLValidationError, OCSPValidationError, PathError, ValidationError

from fieldlog.reports.pdfa import RECORDS_NAME

# A file from outside may be broken in any way, and the programs that read it say so in as many: all they are
# known to raise becomes one reason of the verdict.
_UNREADABLE = (
    PdfError, ValidationError, PathError, CRLValidationError, OCSPValidationError,
    ValueError, TypeError, LookupError, AttributeError, AssertionError, ArithmeticError, NotImplementedError,
    RecursionError, EOFError, struct.error, zlib.error,
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class SealVerdict:
    """What was found, one question each, and every reason against the seal in words.

    `records_json` is what the file carries, whether or not the seal is good: believe it only if `is_good`.
    """

    reasons: tuple[str, ...]
    is_sealed: bool = False
    is_intact: bool = False  # the signed bytes are those that were sealed
    is_valid: bool = False  # the signature was made with the certificate's key
    is_trusted: bool = False  # the certificate comes from an authority that is trusted here
    covers_whole_file: bool = False
    modification: str = "unknown"  # none, time stamps, form filling, other, unknown
    signer_name: str = ""
    sealed_at: datetime | None = None  # by the sealing machine's clock
    certificate_until: datetime | None = None
    records_json: bytes | None = None

    @property
    def is_good(self) -> bool:
        """Whether the seal holds, covers the whole file, and comes from a trusted authority."""
        return not self.reasons


def verify(pdf: bytes, trust_roots: Sequence[x509.Certificate]) -> SealVerdict:
    """Return the verdict on `pdf`; the certificate is judged at the time the seal states."""
    try:
        reader = PdfFileReader(BytesIO(pdf))
        seals = list(reader.embedded_signatures)
        if not seals:
            return SealVerdict(("The file carries no seal.",))
        return _verdict(pdf, reader, seals, trust_roots)
    except _UNREADABLE as error:
        return SealVerdict((f"The file can't be read as a sealed report ({type(error).__name__}).",))


def _verdict(
    pdf: bytes, reader: PdfFileReader, seals: list[EmbeddedPdfSignature], trust_roots: Sequence[x509.Certificate]
) -> SealVerdict:
    seal = seals[0]
    sealed_at = seal.self_reported_timestamp
    context = ValidationContext(trust_roots=list(trust_roots), allow_fetching=False, moment=sealed_at)
    status = validate_pdf_signature(seal, context)
    return SealVerdict(
        reasons=tuple(_reasons(pdf, seals, status)),
        is_sealed=True,
        is_intact=status.intact,
        is_valid=status.valid,
        is_trusted=status.trusted,
        covers_whole_file=_covers_whole_file(pdf, seal, status),
        modification=_modification(status),
        signer_name=str(seal.signer_cert.subject.native.get("common_name", "")),
        sealed_at=sealed_at.astimezone(UTC) if sealed_at else None,
        certificate_until=seal.signer_cert.not_valid_after,
        records_json=_records(reader),
    )


def _reasons(pdf: bytes, seals: list[EmbeddedPdfSignature], status: PdfSignatureStatus) -> list[str]:
    checks = (
        (status.intact, "The sealed content was changed."),
        (status.valid, "The signature does not belong to the content and the certificate."),
        (status.trusted, "The certificate comes from no authority that is trusted here, or was not valid then."),
        (len(seals) == 1, f"The file carries {len(seals)} signatures; a report carries one seal."),
        (_covers_whole_file(pdf, seals[0], status), "The seal does not cover the whole file."),
        (_modification(status) == "none", "Something was added to the file after it was sealed."),
    )
    reasons = [reason for holds, reason in checks if not holds]
    if not status.bottom_line and not reasons:
        reasons.append("The signature breaks a rule of its own form.")
    return reasons


def _modification(status: PdfSignatureStatus) -> str:
    level = status.modification_level
    if level is None:
        return "unknown"
    return {"NONE": "none", "LTA_UPDATES": "time stamps", "FORM_FILLING": "form filling"}.get(level.name, "other")


def _covers_whole_file(pdf: bytes, seal: EmbeddedPdfSignature, status: PdfSignatureStatus) -> bool:
    """Return whether nothing but the signature itself is outside the signed bytes.

    The room reserved for the signature is larger than the signature; what fills it up is not signed, so it has to
    be zeros, or something could hide there.
    """
    if status.coverage != SignatureCoverageLevel.ENTIRE_FILE:
        return False
    start, length, resume, rest = (int(number) for number in seal.byte_range)
    signature = b"".join(parser.parse(seal.pkcs7_content)[3:])
    gap = b"<" + signature.hex().upper().encode().ljust(resume - length - 2, b"0") + b">"
    return start == 0 and resume + rest == len(pdf) and pdf[length:resume] == gap


def _records(reader: PdfFileReader) -> bytes | None:
    names = list(reader.root.get("/Names", {}).get("/EmbeddedFiles", {}).get("/Names", []))
    for name, file in zip(names[::2], names[1::2], strict=True):
        if name == RECORDS_NAME:
            content: bytes = file.get_object()["/EF"]["/F"].data
            return content
    return None
