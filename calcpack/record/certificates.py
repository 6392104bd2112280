"""A certificate in the words of the trade: whose it is, for how long, for what."""

from __future__ import annotations

import datetime
from dataclasses import dataclass
from pathlib import Path

from asn1crypto import pem, x509

from calcpack.export.text import shown_date
from calcpack.job.errors import CalcpackError

TEST_UNIT = "calcpack test identity, not issued by any authority"
_SIGNING = {"digital_signature", "non_repudiation"}
# Extended purposes that are about machines or about other signatures than a person's under a document.
_OTHER_PURPOSES = {
    "server_auth": "naming a server",
    "code_signing": "signing programs",
    "time_stamping": "time stamps",
    "ocsp_signing": "certificate status",
}
_OTHER_USES = {
    "key_encipherment": "encrypting keys",
    "data_encipherment": "encrypting data",
    "key_agreement": "agreeing on keys",
    "key_cert_sign": "issuing certificates",
    "crl_sign": "revocation lists",
}


@dataclass(frozen=True)
class Certificate:
    """What a person's certificate says.

    Parameters
    ----------
    name, organisation, licence : str
        Of the person; the licence where the certificate carries one (its serial number attribute).
    issuer : str
        Who issued it.
    sha256, key_sha256 : str
        Of the certificate and of its public key.
    begins, ends : datetime
        Its time of validity, in UTC.
    other_purpose : str
        What it is for, if it is not for signing documents.
    test : bool
        Made by calcpack for trying things out.
    """

    name: str
    organisation: str
    licence: str
    issuer: str
    sha256: str
    key_sha256: str
    begins: datetime.datetime
    ends: datetime.datetime
    other_purpose: str = ""
    test: bool = False

    @classmethod
    def of(cls, certificate: x509.Certificate) -> Certificate:
        """Read a certificate."""
        subject = certificate.subject.native
        validity = certificate["tbs_certificate"]["validity"]
        return cls(
            name=_text(subject.get("common_name")) or certificate.subject.human_friendly,
            organisation=_text(subject.get("organization_name")),
            licence=_text(subject.get("serial_number")),
            issuer=_text(certificate.issuer.native.get("common_name")) or certificate.issuer.human_friendly,
            sha256=certificate.sha256.hex(),
            key_sha256=certificate.public_key.sha256.hex(),
            begins=validity["not_before"].native,
            ends=validity["not_after"].native,
            other_purpose=_other_purpose(certificate),
            test=TEST_UNIT in _text(subject.get("organizational_unit_name")),
        )

    def against(self, moment: datetime.datetime, doing: str = "") -> str:
        """Why it could not sign at a moment, in a sentence; "" where it could.

        Parameters
        ----------
        moment : datetime
            With its time zone.
        doing : str
            What was done then: "the signature was made".
        """
        then = f"; {doing} on {shown_date(moment.date())}" if doing else ""
        if moment < self.begins:
            return (
                f"the certificate of {self.name} is not valid yet: it begins on"
                f" {shown_date(self.begins.date())}{then}"
            )
        if moment > self.ends:
            return f"the certificate of {self.name} expired on {shown_date(self.ends.date())}{then}"
        if self.other_purpose:
            return (
                f"the certificate of {self.name} is not made for signing documents:"
                f" it was issued for {self.other_purpose}"
            )
        return ""


def _text(value: object) -> str:
    if isinstance(value, list):
        return ", ".join(map(str, value))
    return "" if value is None else str(value)


def _other_purpose(certificate: x509.Certificate) -> str:
    usage = certificate.key_usage_value
    uses = usage.native if usage is not None else _SIGNING
    if not uses & _SIGNING:
        return ", ".join(_OTHER_USES[use] for use in sorted(uses) if use in _OTHER_USES) or "something else"
    extended = certificate.extended_key_usage_value
    purposes = set(extended.native) if extended is not None else set()
    if purposes and purposes <= _OTHER_PURPOSES.keys():
        return ", ".join(_OTHER_PURPOSES[purpose] for purpose in sorted(purposes))
    return ""


def read_certificate_file(path: Path) -> list[x509.Certificate]:
    """Certificates of a file on disk.

    Raises
    ------
    CalcpackError
        It cannot be read, or holds none.
    """
    try:
        data = path.read_bytes()
    except OSError as error:
        raise CalcpackError(f"'{path}' cannot be read: {error.strerror}") from None
    return read_certificates(data, str(path))


def read_certificates(data: bytes, file: str) -> list[x509.Certificate]:
    """Certificates of a PEM or DER file.

    Raises
    ------
    CalcpackError
        It holds none.
    """
    try:
        parts = [part for _, _, part in pem.unarmor(data, multiple=True)] if pem.detect(data) else [data]
        found = [x509.Certificate.load(part, strict=True) for part in parts]
        for certificate in found:
            _ = certificate.subject.native, certificate.public_key.sha256
    except (ValueError, TypeError, KeyError) as error:
        raise CalcpackError(
            f"'{file}' holds no certificate: {error}", remedy="give a PEM or DER file"
        ) from None
    return found
