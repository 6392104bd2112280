"""Who signs: a PKCS#12 file, a PKCS#11 token, or an identity made for trying things out."""

from __future__ import annotations

import datetime
import os
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from urllib.parse import parse_qs, unquote

from cryptography import x509
from cryptography.hazmat.primitives import hashes
from cryptography.hazmat.primitives.asymmetric import ec
from cryptography.hazmat.primitives.serialization import BestAvailableEncryption, Encoding, pkcs12
from cryptography.x509.oid import NameOID
from pyhanko.sign.signers import Signer, SimpleSigner

from calcpack.files import write_file
from calcpack.job.errors import CalcpackError
from calcpack.record.certificates import TEST_UNIT, Certificate

VARIABLE = "CALCPACK_PASSPHRASE"
Passphrase = Callable[[str], str]  # what it is for -> the passphrase


@dataclass(frozen=True)
class Identity:
    """Somebody who can sign: pyhanko's signer and what the certificate says."""

    signer: Signer
    certificate: Certificate


def read_passphrase(descriptor: int | None) -> str | None:
    """A passphrase from a file descriptor, else from the environment; None where neither has one.

    Parameters
    ----------
    descriptor : int or None
        Its first line is read.

    Raises
    ------
    CalcpackError
        The descriptor cannot be read.
    """
    if descriptor is None:
        return os.environ.get(VARIABLE)
    try:
        with open(descriptor, encoding="utf-8", closefd=False) as file:
            return file.readline().rstrip("\r\n")
    except (OSError, ValueError) as error:
        raise CalcpackError(f"file descriptor {descriptor} cannot be read: {error}") from None


def token_errors() -> tuple[type[Exception], ...]:
    """What a token may raise while it signs."""
    try:
        from pkcs11.exceptions import PKCS11Error
    except ImportError:
        return ()
    return (PKCS11Error,)


def load_identity(source: str, passphrase: Passphrase) -> Identity:
    """The identity of a PKCS#12 file or of a token.

    Parameters
    ----------
    source : str
        A file, or a PKCS#11 URI (RFC 7512): ``pkcs11:token=NAME;object=LABEL?module-path=LIBRARY``.
    passphrase : callable
        Asked for the file's passphrase or the token's PIN.

    Raises
    ------
    CalcpackError
        There is none, the passphrase is wrong, or it holds no key with its certificate.
    """
    if source.startswith("pkcs11:"):
        return _token(source, passphrase)
    path = Path(source)
    try:
        data = path.read_bytes()
    except OSError as error:
        raise CalcpackError(f"the identity '{source}' cannot be read: {error.strerror}") from None
    secret = passphrase(f"Passphrase of {path.name}")
    try:
        key, certificate, _ = pkcs12.load_key_and_certificates(data, secret.encode() or None)
    except (ValueError, TypeError) as error:
        if "password" in str(error).lower():
            raise CalcpackError(f"the passphrase does not open '{source}'") from None
        raise CalcpackError(f"'{source}' is no PKCS#12 file: {error}") from None
    if key is None or certificate is None:
        raise CalcpackError(f"'{source}' holds no key with its certificate")
    signer = SimpleSigner.load_pkcs12_data(data, (), secret.encode() or None)
    return Identity(signer, Certificate.of(signer.signing_cert))


def _token(uri: str, passphrase: Passphrase) -> Identity:
    """A token through pyhanko's own support; it needs the package python-pkcs11."""
    path, _, query = uri.removeprefix("pkcs11:").partition("?")
    named = dict(part.partition("=")[::2] for part in path.split(";") if part)
    token, label = (unquote(named.get(key, "")) for key in ("token", "object"))
    module = parse_qs(query).get("module-path", [""])[0]
    if not label or not module:
        raise CalcpackError(
            f"'{uri}' does not say which key of which module",
            remedy="write pkcs11:token=NAME;object=LABEL?module-path=LIBRARY",
        )
    try:
        from pyhanko.config.pkcs11 import TokenCriteria
        from pyhanko.sign.pkcs11 import PKCS11Signer, open_pkcs11_session
    except ImportError:
        raise CalcpackError(
            "tokens need the package python-pkcs11", remedy="install calcpack with its extra 'token'"
        ) from None
    criteria = TokenCriteria(label=token) if token else None
    pin = passphrase(f"PIN of the token {token}".strip())
    try:
        session = open_pkcs11_session(module, token_criteria=criteria, user_pin=pin or None)
        signer = PKCS11Signer(session, cert_label=label)
        certificate = signer.signing_cert
        # Tokens that sign a hash with an elliptic curve are more than those that hash themselves.
        signer.use_raw_mechanism = certificate is not None and certificate.public_key.algorithm == "ec"
    except Exception as error:  # what a vendor's module may raise is not to be foreseen
        said = str(error) or type(error).__name__
        raise CalcpackError(f"the token '{token}' cannot be used: {said}") from None
    if certificate is None:
        raise CalcpackError(f"the token '{token}' holds no certificate '{label}'")
    return Identity(signer, Certificate.of(certificate))


def new_identity(
    name: str,
    passphrase: str,
    now: datetime.datetime,
    *,
    organisation: str = "",
    licence: str = "",
    days: int = 365,
) -> tuple[bytes, bytes]:
    """A self-signed identity for trying things out, clearly marked as such in its certificate.

    Parameters
    ----------
    name : str
        Of the person.
    passphrase : str
    now : datetime
        When its validity begins, with time zone.
    organisation, licence : str
    days : int
        How long it is valid.

    Returns
    -------
    bytes, bytes
        The PKCS#12 file, and the certificate in PEM for those who are to trust it.

    Raises
    ------
    CalcpackError
        The name is empty or too long, or there is no passphrase.
    """
    for what, text in (("name", name), ("organisation", organisation), ("licence", licence)):
        if len(text) > 64:
            raise CalcpackError(f"the {what} is longer than the 64 characters a certificate holds")
    if not name.strip():
        raise CalcpackError("an identity needs a name")
    if not passphrase:
        raise CalcpackError("an identity is kept under a passphrase; none was given")
    attributes = [
        x509.NameAttribute(oid, text)
        for oid, text in (
            (NameOID.COMMON_NAME, name),
            (NameOID.ORGANIZATION_NAME, organisation),
            (NameOID.ORGANIZATIONAL_UNIT_NAME, TEST_UNIT),
            (NameOID.SERIAL_NUMBER, licence),
        )
        if text
    ]
    key = ec.generate_private_key(ec.SECP256R1())
    subject = x509.Name(attributes)
    begins = now.astimezone(datetime.UTC).replace(microsecond=0)
    usage = dict.fromkeys(
        ("key_encipherment", "data_encipherment", "key_agreement", "key_cert_sign", "crl_sign",
         "encipher_only", "decipher_only"), False,
    )  # fmt: skip
    certificate = (
        x509.CertificateBuilder()
        .subject_name(subject)
        .issuer_name(subject)
        .public_key(key.public_key())
        .serial_number(x509.random_serial_number())
        .not_valid_before(begins)
        .not_valid_after(begins + datetime.timedelta(days=days))
        .add_extension(x509.BasicConstraints(ca=False, path_length=None), critical=True)
        .add_extension(x509.KeyUsage(digital_signature=True, content_commitment=True, **usage), critical=True)
        .add_extension(x509.SubjectKeyIdentifier.from_public_key(key.public_key()), critical=False)
        .sign(key, hashes.SHA256())
    )
    stored = pkcs12.serialize_key_and_certificates(
        name.encode(), key, certificate, None, BestAvailableEncryption(passphrase.encode())
    )
    return stored, certificate.public_bytes(Encoding.PEM)


def write_identity(
    out: Path,
    name: str,
    passphrase: str,
    now: datetime.datetime,
    *,
    organisation: str = "",
    licence: str = "",
    days: int = 365,
) -> Path:
    """Write a new test identity and, beside it, its certificate; both must be new.

    Parameters
    ----------
    out : Path
    name, passphrase, now, organisation, licence, days
        As ``new_identity`` takes them.

    Returns
    -------
    Path
        Of the certificate, for those who are to trust it.

    Raises
    ------
    CalcpackError
        One of the files is there already or cannot be written, or ``new_identity`` refuses.
    """
    beside = out.with_suffix(".pem")
    for path in (out, beside):
        if path.exists():
            raise CalcpackError(f"'{path}' is there already", remedy="name a new file")
    stored, certificate = new_identity(
        name, passphrase, now, organisation=organisation, licence=licence, days=days
    )
    write_file(out, stored)
    os.chmod(out, 0o600)
    write_file(beside, certificate)
    return beside
