"""The organisation's sealing identity: key, certificate, the authority that vouches for it, and their files.

In the keys folder: `sealing-key.pem` (readable by its owner only), `sealing-certificate.pem`, and `trusted/*.pem`,
one file for every authority this organisation ever sealed under. An old authority stays there, so that old reports
can still be verified.
"""

from __future__ import annotations

import hashlib
import os
from dataclasses import dataclass
from datetime import datetime, timedelta
from pathlib import Path

from asn1crypto import pem
from asn1crypto import x509 as asn1_x509
from cryptography import x509
from cryptography.hazmat.primitives import hashes, serialization
from cryptography.hazmat.primitives.asymmetric import rsa
from cryptography.hazmat.primitives.serialization import pkcs12
from cryptography.x509.oid import NameOID

from fieldlog.errors import ConfigError, InputError, SigningError

KEY_FILE = "sealing-key.pem"
CERTIFICATE_FILE = "sealing-certificate.pem"
TRUSTED_FOLDER = "trusted"

# 128 bits of strength, recommended beyond 2030 (NIST SP 800-57 part 1, table 2).
_KEY_BITS = 3072
_SIGNER_LIFE = timedelta(days=10 * 365)
_AUTHORITY_LIFE = timedelta(days=20 * 365)
# The longest name that a certificate may carry (X.520, ub-common-name); cryptography counts it in bytes.
_LONGEST_NAME = 64

TrustRoots = tuple[asn1_x509.Certificate, ...]


@dataclass(frozen=True, slots=True)
class SealingIdentity:
    """A private key, its certificate, and the certificates above it, all as PEM."""

    key_pem: bytes
    certificate_pem: bytes
    authority_pem: bytes

    def __repr__(self) -> str:
        return "SealingIdentity(key not shown)"


def make_sealing_identity(organisation_name: str, at: datetime) -> SealingIdentity:
    """Return a new key with a certificate under an authority of the organisation's own.

    The authority's own key is forgotten: it vouches for this one certificate and can never make another.
    """
    name = " ".join(organisation_name.split()) or "organisation"
    authority_key, key = (rsa.generate_private_key(public_exponent=65537, key_size=_KEY_BITS) for _ in range(2))
    authority_name = _distinguished("Sealing authority of " + name, name)
    authority = (
        _builder(authority_name, authority_key.public_key(), authority_name, authority_key, at, _AUTHORITY_LIFE)
        .add_extension(x509.BasicConstraints(ca=True, path_length=0), critical=True)
        .add_extension(_usage(key_cert_sign=True, crl_sign=True), critical=True)
        .sign(authority_key, hashes.SHA256())
    )
    certificate = (
        _builder(_distinguished(name, name), key.public_key(), authority_name, authority_key, at, _SIGNER_LIFE)
        .add_extension(x509.BasicConstraints(ca=False, path_length=None), critical=True)
        .add_extension(_usage(digital_signature=True, content_commitment=True), critical=True)
        .sign(authority_key, hashes.SHA256())
    )
    return SealingIdentity(_key_pem(key), _pem(certificate), _pem(authority))


def identity_from_pkcs12(content: bytes, passphrase: bytes | None) -> SealingIdentity:
    """Return the identity of a PKCS#12 file, for an organisation with a certificate of its own.

    Raises
    ------
    InputError
        If the file or the passphrase is wrong, or it holds no RSA key with its certificate.
    """
    try:
        key, certificate, others = pkcs12.load_key_and_certificates(content, passphrase)
    except ValueError as error:
        raise InputError("the PKCS#12 file can't be opened: wrong file or wrong passphrase") from error
    if certificate is None or not isinstance(key, rsa.RSAPrivateKey):
        raise InputError("the PKCS#12 file holds no RSA key with its certificate; sealing wants one")
    above = b"".join(map(_pem, others)) or _pem(certificate)
    return SealingIdentity(_key_pem(key), _pem(certificate), above)


def has_identity(folder: Path) -> bool:
    """Return whether a sealing key and certificate stand in the keys folder."""
    return (folder / KEY_FILE).is_file() and (folder / CERTIFICATE_FILE).is_file()


def write_identity(folder: Path, identity: SealingIdentity) -> None:
    """Put the identity into the keys folder; its authority joins those already trusted there.

    Raises
    ------
    ConfigError
        If the folder can't be written.
    """
    trusted = folder / TRUSTED_FOLDER
    try:
        folder.mkdir(mode=0o700, parents=True, exist_ok=True)
        folder.chmod(0o700)
        trusted.mkdir(exist_ok=True)
        fingerprint = hashlib.sha256(identity.authority_pem).hexdigest()[:16]
        (trusted / f"{fingerprint}.pem").write_bytes(identity.authority_pem)
        (folder / CERTIFICATE_FILE).write_bytes(identity.certificate_pem)
        _write_private(folder / KEY_FILE, identity.key_pem)
    except OSError as error:
        raise ConfigError(f"the sealing key can't be written to {folder}: {error.strerror}") from error


def load_trust_roots(folder: Path) -> TrustRoots:
    """Return every certificate of `trusted/*.pem` in the keys folder; none if there is no such folder.

    Raises
    ------
    SigningError
        If a file there can't be read as certificates.
    """
    paths = sorted((folder / TRUSTED_FOLDER).glob("*.pem"))
    return tuple(certificate for path in paths for certificate in certificates_of(read_file(path), str(path)))


def certificates_of(content: bytes, name: str) -> list[asn1_x509.Certificate]:
    """Return the certificates of a PEM text; `name` is what a refusal calls it.

    Raises
    ------
    SigningError
        If it holds none, or something else.
    """
    try:
        blocks = [block for kind, _headers, block in pem.unarmor(content, multiple=True) if kind == "CERTIFICATE"]
        certificates = [asn1_x509.Certificate.load(block, strict=True) for block in blocks]
        for certificate in certificates:
            _ = certificate.native  # asn1crypto parses late; a broken one has to show here
    except (ValueError, TypeError) as error:
        raise SigningError(f"{name} is not a PEM certificate; put the right file there") from error
    if not certificates:
        raise SigningError(f"{name} holds no certificate; put the right file there")
    return certificates


def read_file(path: Path) -> bytes:
    """Return what a file of the keys folder holds.

    Raises
    ------
    SigningError
        If it is missing or can't be read.
    """
    try:
        return path.read_bytes()
    except FileNotFoundError as error:
        raise SigningError(
            f"no sealing file at {path}; restore it from the backup, or make a new key with `fieldlog init`"
        ) from error
    except OSError as error:
        raise SigningError(f"{path} can't be read: {error.strerror}; check who owns it and its mode") from error


def _write_private(path: Path, content: bytes) -> None:
    fresh = path.with_suffix(".new")
    fresh.unlink(missing_ok=True)
    with os.fdopen(os.open(fresh, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600), "wb") as file:
        file.write(content)
        file.flush()
        os.fsync(file.fileno())
    fresh.replace(path)


def _distinguished(common_name: str, organisation_name: str) -> x509.Name:
    return x509.Name(
        [
            x509.NameAttribute(NameOID.ORGANIZATION_NAME, _cut(organisation_name)),
            x509.NameAttribute(NameOID.COMMON_NAME, _cut(common_name)),
        ]
    )


def _cut(name: str) -> str:
    return name.encode(errors="replace")[:_LONGEST_NAME].decode(errors="ignore")


def _builder(
    subject: x509.Name,
    key: rsa.RSAPublicKey,
    issuer: x509.Name,
    issuer_key: rsa.RSAPrivateKey,
    at: datetime,
    life: timedelta,
) -> x509.CertificateBuilder:
    issuer_id = x509.AuthorityKeyIdentifier.from_issuer_public_key(issuer_key.public_key())
    return (
        x509.CertificateBuilder()
        .subject_name(subject)
        .issuer_name(issuer)
        .public_key(key)
        .serial_number(x509.random_serial_number())
        # A day earlier, so that a machine whose clock lags does not call it "not yet valid".
        .not_valid_before(at - timedelta(days=1))
        .not_valid_after(at + life)
        .add_extension(x509.SubjectKeyIdentifier.from_public_key(key), critical=False)
        .add_extension(issuer_id, critical=False)
    )


def _usage(**allowed: bool) -> x509.KeyUsage:
    kinds = (
        "digital_signature", "content_commitment", "key_encipherment", "data_encipherment", "key_agreement",
        "key_cert_sign", "crl_sign", "encipher_only", "decipher_only",
    )  # fmt: skip
    return x509.KeyUsage(**{kind: allowed.get(kind, False) for kind in kinds})


def _key_pem(key: rsa.RSAPrivateKey) -> bytes:
    return key.private_bytes(
        serialization.Encoding.PEM, serialization.PrivateFormat.PKCS8, serialization.NoEncryption()
    )


def _pem(certificate: x509.Certificate) -> bytes:
    return certificate.public_bytes(serialization.Encoding.PEM)
