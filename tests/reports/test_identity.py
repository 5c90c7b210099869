"""The sealing key and its files."""

from __future__ import annotations

from datetime import UTC, datetime
from pathlib import Path

import pytest
from cryptography import x509
from cryptography.hazmat.primitives import serialization
from cryptography.hazmat.primitives.asymmetric import ec
from cryptography.hazmat.primitives.serialization import pkcs12

from fieldlog.errors import InputError, SigningError
from fieldlog.reports import seal

AT = datetime(2026, 10, 12, 14, 5, 37, tzinfo=UTC)


@pytest.fixture
def folder(tmp_path: Path, identity: seal.SealingIdentity) -> Path:
    seal.write_identity(tmp_path / "keys", identity)
    return tmp_path / "keys"


def test_only_the_owner_can_read_the_key(folder: Path) -> None:
    assert (folder / seal.KEY_FILE).stat().st_mode & 0o777 == 0o600
    assert folder.stat().st_mode & 0o777 == 0o700


def test_the_key_is_never_shown(identity: seal.SealingIdentity) -> None:
    assert "PRIVATE" not in repr(identity)


def test_the_certificate_may_sign_and_nothing_else(identity: seal.SealingIdentity) -> None:
    certificate = x509.load_pem_x509_certificate(identity.certificate_pem)
    usage = certificate.extensions.get_extension_for_class(x509.KeyUsage).value
    assert (usage.digital_signature, usage.content_commitment) == (True, True)
    assert (usage.key_cert_sign, usage.crl_sign, usage.key_encipherment) == (False, False, False)
    assert not certificate.extensions.get_extension_for_class(x509.BasicConstraints).value.ca


@pytest.mark.parametrize("name", ["Größe & Söhne", "П" * 90, "  ", "two\nlines\tof name"])
def test_any_name_of_an_organisation_makes_a_certificate(name: str, tmp_path: Path, archival: bytes) -> None:
    seal.write_identity(tmp_path, seal.make_sealing_identity(name, AT))
    signer = seal.load_signer(tmp_path)
    sealed = seal.seal(archival, signer, AT, reason="Report of a visit")
    assert seal.verify(sealed, seal.load_trust_roots(tmp_path)).is_good


def test_a_key_that_others_can_read_is_refused(folder: Path) -> None:
    (folder / seal.KEY_FILE).chmod(0o640)
    with pytest.raises(SigningError, match="chmod 600"):
        seal.load_signer(folder)


def test_a_missing_key_is_named(folder: Path) -> None:
    assert seal.has_identity(folder)
    (folder / seal.KEY_FILE).unlink()
    assert not seal.has_identity(folder)
    with pytest.raises(SigningError, match=seal.KEY_FILE):
        seal.load_signer(folder)


@pytest.mark.parametrize("name", [seal.KEY_FILE, seal.CERTIFICATE_FILE])
@pytest.mark.parametrize(
    "content", [b"", b"not a key\n", b"-----BEGIN CERTIFICATE-----\nAAAA\n-----END CERTIFICATE-----"]
)
def test_an_unreadable_file_is_named(folder: Path, name: str, content: bytes) -> None:
    (folder / name).write_bytes(content)
    with pytest.raises(SigningError, match=name):
        seal.load_signer(folder)


def test_a_key_of_another_certificate_is_refused(folder: Path) -> None:
    other = seal.make_sealing_identity("Another organisation", AT)
    (folder / seal.CERTIFICATE_FILE).write_bytes(other.certificate_pem)
    with pytest.raises(SigningError, match="restore both"):
        seal.load_signer(folder)


@pytest.mark.parametrize("year", [2024, 2037])
def test_nothing_is_sealed_outside_the_certificates_time(folder: Path, archival: bytes, year: int) -> None:
    with pytest.raises(SigningError, match="not on"):
        seal.seal(archival, seal.load_signer(folder), AT.replace(year=year), reason="Report of a visit")


def test_a_report_sealed_under_an_old_key_stays_good(folder: Path, archival: bytes) -> None:
    old = seal.seal(archival, seal.load_signer(folder), AT, reason="Report of a visit")
    seal.write_identity(folder, seal.make_sealing_identity("Reedbank Fire Protection", AT))
    new = seal.seal(archival, seal.load_signer(folder), AT, reason="Report of a visit")
    roots = seal.load_trust_roots(folder)
    assert len(roots) == 2
    assert seal.verify(old, roots).is_good
    assert seal.verify(new, roots).is_good


def test_a_report_stays_good_after_the_certificate_ended(tmp_path: Path, archival: bytes) -> None:
    seal.write_identity(tmp_path, seal.make_sealing_identity("Reedbank Fire Protection", AT.replace(year=2003)))
    sealed = seal.seal(archival, seal.load_signer(tmp_path), AT.replace(year=2005), reason="Report of a visit")
    verdict = seal.verify(sealed, seal.load_trust_roots(tmp_path))
    assert verdict.is_good
    assert verdict.certificate_until is not None
    assert verdict.certificate_until.year == 2013


def test_an_own_certificate_comes_from_a_pkcs12_file(
    identity: seal.SealingIdentity, tmp_path: Path, archival: bytes
) -> None:
    key = serialization.load_pem_private_key(identity.key_pem, password=None)
    certificate = x509.load_pem_x509_certificate(identity.certificate_pem)
    above = x509.load_pem_x509_certificate(identity.authority_pem)
    secret = serialization.BestAvailableEncryption(b"open it")
    content = pkcs12.serialize_key_and_certificates(b"seal", key, certificate, [above], secret)
    seal.write_identity(tmp_path, seal.identity_from_pkcs12(content, b"open it"))
    sealed = seal.seal(archival, seal.load_signer(tmp_path), AT, reason="Report of a visit")
    assert seal.verify(sealed, seal.load_trust_roots(tmp_path)).is_good
    with pytest.raises(InputError, match="passphrase"):
        seal.identity_from_pkcs12(content, b"wrong")


def test_a_key_that_is_not_rsa_is_refused() -> None:
    secret = serialization.BestAvailableEncryption(b"open it")
    key = ec.generate_private_key(ec.SECP256R1())
    content = pkcs12.serialize_key_and_certificates(b"seal", key, None, None, secret)
    with pytest.raises(InputError, match="RSA"):
        seal.identity_from_pkcs12(content, b"open it")
