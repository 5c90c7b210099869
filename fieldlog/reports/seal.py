"""The seal on a report: a PAdES baseline signature by the organisation over the whole file.

A time-stamp service is not asked yet: the time in the seal is this machine's, and the log's head on the page is
what others can hold against it. When one is set, it belongs into `seal` as pyHanko's `timestamper`; a report must
then never be sealed silently without the stamp.
"""

from __future__ import annotations

import logging
import stat
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime
from io import BytesIO
from pathlib import Path

from asn1crypto import x509 as asn1_x509
from asn1crypto.algos import SignedDigestAlgorithm
from cryptography.hazmat.primitives import hashes, serialization
from cryptography.hazmat.primitives.asymmetric.padding import PKCS1v15
from cryptography.hazmat.primitives.asymmetric.rsa import RSAPrivateKey
from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter
from pyhanko.pdf_utils.misc import PdfError
from pyhanko.pdf_utils.writer import BasePdfFileWriter
from pyhanko.sign import signers
from pyhanko.sign.fields import MDPPerm, SigFieldSpec, SigSeedSubFilter
from pyhanko.sign.general import SigningError as PyHankoSigningError
from pyhanko.sign.signers.pdf_signer import PdfSigningSession
from pyhanko_certvalidator.registry import SimpleCertificateStore

from fieldlog.errors import SigningError
from fieldlog.reports.identity import (
    CERTIFICATE_FILE,
    KEY_FILE,
    TRUSTED_FOLDER,
    SealingIdentity,
    TrustRoots,
    certificates_of,
    has_identity,
    identity_from_pkcs12,
    load_trust_roots,
    make_sealing_identity,
    read_file,
    write_identity,
)
from fieldlog.reports.verdict import SealVerdict, verify

__all__ = [
    "CERTIFICATE_FILE", "KEY_FILE", "TRUSTED_FOLDER", "SealVerdict", "SealingIdentity", "Signer", "TrustRoots",
    "certificates_of", "has_identity", "identity_from_pkcs12", "load_signer", "load_trust_roots",
    "make_sealing_identity", "seal", "verify", "write_identity",
]  # fmt: skip

FIELD_NAME = "Seal"

# pyHanko logs each check in passing; what matters comes back as a value or an error.
logging.getLogger("pyhanko").setLevel(logging.CRITICAL)
logging.getLogger("pyhanko_certvalidator").setLevel(logging.CRITICAL)


@dataclass(frozen=True, slots=True, eq=False)
class Signer:
    """The organisation's key, kept loaded: loading and checking it anew costs more than a whole report."""

    key: RSAPrivateKey
    certificate: asn1_x509.Certificate
    authorities: TrustRoots

    @property
    def name(self) -> str:
        """Who seals, by the certificate."""
        return str(self.certificate.subject.native.get("common_name", ""))

    @property
    def valid_until(self) -> datetime:
        """When the certificate ends."""
        until: datetime = self.certificate.not_valid_after
        return until


def load_signer(folder: Path) -> Signer:
    """Return the signer of a keys folder, with its key loaded.

    Raises
    ------
    SigningError
        If a file is missing, unreadable or readable by others, or key and certificate do not belong together.
    """
    key = _private_key(folder / KEY_FILE)
    certificate = certificates_of(read_file(folder / CERTIFICATE_FILE), str(folder / CERTIFICATE_FILE))[0]
    public = serialization.load_der_public_key(certificate.public_key.dump())
    if public != key.public_key():
        raise SigningError(
            f"{KEY_FILE} and {CERTIFICATE_FILE} in {folder} do not belong together; restore both from a backup"
        )
    return Signer(key, certificate, load_trust_roots(folder))


def _private_key(path: Path) -> RSAPrivateKey:
    content = read_file(path)
    mode = stat.S_IMODE(path.stat().st_mode)
    if mode & 0o077:
        raise SigningError(f"{path} can be read by others (mode {mode:04o}); run: chmod 600 {path}", mode=mode)
    try:
        key = serialization.load_pem_private_key(content, password=None)
    except (ValueError, TypeError) as error:
        raise SigningError(f"{path} is not a private key without passphrase; restore it") from error
    if not isinstance(key, RSAPrivateKey):
        raise SigningError(f"{path} is no RSA key; sealing wants RSA, so that the file stays plain PDF 1.7")
    return key


def seal(pdf: bytes, signer: Signer, at: datetime, *, reason: str) -> bytes:
    """Return `pdf` with the organisation's seal over all of it; no change is allowed after it.

    Raises
    ------
    SigningError
        If the certificate is not valid at `at`, or `pdf` can't be sealed.
    """
    _check_time(signer, at)
    metadata = signers.PdfSignatureMetadata(
        field_name=FIELD_NAME,
        md_algorithm="sha256",
        subfilter=SigSeedSubFilter.PADES,
        certify=True,
        docmdp_permissions=MDPPerm.NO_CHANGES,
        reason=reason,
        name=signer.name,
    )
    sealing = _DatedSigner(at, metadata, _KeptKeySigner(signer))
    try:
        output = sealing.sign_pdf(_QuietWriter(BytesIO(pdf)), bytes_reserved=_room(signer))
    except (PdfError, PyHankoSigningError) as error:
        raise SigningError(f"the report can't be sealed: {error}; make it again") from error
    sealed: bytes = output.getvalue()
    return sealed


def _check_time(signer: Signer, at: datetime) -> None:
    begin, end = signer.certificate.not_valid_before, signer.certificate.not_valid_after
    if not begin <= at <= end:
        raise SigningError(
            f"the sealing certificate is valid from {begin:%Y-%m-%d} to {end:%Y-%m-%d}, not on {at:%Y-%m-%d}; "
            "check the clock, or make a new key with `fieldlog init`"
        )


def _room(signer: Signer) -> int:
    """Return how many hex digits to reserve: certificates, one signature, and attributes with the names again."""
    certificates = {signer.certificate.dump(), *(authority.dump() for authority in signer.authorities)}
    return 2 * (sum(map(len, certificates)) + signer.key.key_size // 8 + 4096)


class _QuietWriter(IncrementalPdfFileWriter):
    """Adds the seal and nothing else: by itself pyHanko would also rewrite XMP and Info with its own name."""

    def _update_meta(self) -> None:
        pass


class _DatedSigner(signers.PdfSigner):
    """Seals with the time that was passed in, not with one it reads from the clock."""

    def __init__(self, at: datetime, metadata: signers.PdfSignatureMetadata, signer: signers.Signer) -> None:
        super().__init__(metadata, signer, new_field_spec=SigFieldSpec(FIELD_NAME, box=None))
        self._at = at

    def init_signing_session(
        self,
        pdf_out: BasePdfFileWriter,
        existing_fields_only: bool = False,  # noqa: FBT001, FBT002  pyHanko's
    ) -> PdfSigningSession:
        session = super().init_signing_session(pdf_out, existing_fields_only)
        session.system_time = self._at
        return session


class _KeptKeySigner(signers.Signer):
    """Signs with the loaded key."""

    def __init__(self, signer: Signer) -> None:
        # Embedded certificates are not signed: only what a path needs goes in, and no root, which a reader who
        # trusts it has already. (The signer's own is added by pyHanko; put here as well, it would stand in twice.)
        between = [authority for authority in signer.authorities if authority.self_signed == "no"]
        super().__init__(
            signing_cert=signer.certificate,
            cert_registry=_store(between),
            signature_mechanism=SignedDigestAlgorithm({"algorithm": "sha256_rsa"}),
        )
        self._key = signer.key

    async def async_sign_raw(self, data: bytes, digest_algorithm: str, dry_run: bool = False) -> bytes:  # noqa: ARG002, FBT001, FBT002  pyHanko's
        return self._key.sign(data, PKCS1v15(), hashes.SHA256())


def _store(certificates: Iterable[asn1_x509.Certificate]) -> SimpleCertificateStore:
    store = SimpleCertificateStore()  # type: ignore[no-untyped-call]
    store.register_multiple(certificates)
    return store
