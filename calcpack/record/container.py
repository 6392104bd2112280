"""Whether the container of a signature is exactly as it was written.

A signature proves the document; parts of its own container (RFC 5652) are not under it: padding, the
spelling of the hexadecimal digits, versions, lists of algorithms, unsigned attributes. Nobody can change the
document there, but a changed byte would go unnoticed. Containers that calcpack wrote have one form only, so
it is asked for.
"""

from __future__ import annotations

import hashlib
from collections.abc import Sequence

from asn1crypto import cms, core, x509
from cryptography.exceptions import InvalidSignature
from cryptography.x509 import load_der_x509_certificate

ALTERED = "the signature's container was altered"


def padding_flaw(gap: bytes, container: bytes) -> str:
    """What is wrong with the place of a container in a PDF; "" where nothing is.

    Parameters
    ----------
    gap : bytes
        All that the signature does not cover: the string with its brackets.
    container : bytes
        The container itself, without padding.

    Examples
    --------
    >>> padding_flaw(b"<0A000000>", bytes([10])), padding_flaw(b"<0a000000>", bytes([10]))
    ('', "the signature's container was altered: its digits are not as written")
    """
    digits = container.hex().upper().encode()
    if gap != b"<" + digits.ljust(len(gap) - 2, b"0") + b">":
        return f"{ALTERED}: its digits are not as written"
    return ""


def container_flaw(container: bytes, trusted: Sequence[x509.Certificate] = ()) -> str:
    """What is wrong with the form of a signature's container; "" where nothing is.

    Parameters
    ----------
    container : bytes
        DER.
    trusted : sequence of certificates
        May have issued certificates that the container carries.
    """
    info = cms.ContentInfo.load(container, strict=True)
    signed = info["content"]
    signer = signed["signer_infos"][0]
    carried = [choice.chosen for choice in signed["certificates"] if choice.name == "certificate"]
    own = [each for each in carried if _named(signer, each)]
    if len(own) != 1 or not _bound(signer, own[0]):
        return f"{ALTERED}: it does not hold the certificate that signed"
    for other in carried:
        issuers = [by for by in (*carried, *trusted) if by.subject.dump() == other.issuer.dump()]
        if other is not own[0] and issuers and not any(_issued(other, by) for by in issuers):
            return f"{ALTERED}: it carries a certificate that its issuer did not sign"
    unsigned = signer["unsigned_attrs"]
    for attribute in unsigned or ():
        if attribute["type"].native != "signature_time_stamp_token" or len(attribute["values"]) != 1:
            return f"{ALTERED}: it carries something that calcpack does not write"
        token = attribute["values"][0]
        if cms.ContentInfo.load(token.dump(), strict=True).dump(force=True) != token.dump():
            return f"{ALTERED}: its time stamp is not as written"
    if not any(container == _rebuilt(signed, signer, own[0], null) for null in (False, True)):
        return f"{ALTERED}: its form is not as written"
    return ""


def _named(signer: cms.SignerInfo, certificate: x509.Certificate) -> bool:
    number = signer["sid"].chosen
    return bool(
        number["issuer"].dump() == certificate.issuer.dump()
        and number["serial_number"].native == certificate.serial_number
    )


def _bound(signer: cms.SignerInfo, certificate: x509.Certificate) -> bool:
    """Whether the certificate is the one whose hash was signed (RFC 5035, SHA-256)."""
    for attribute in signer["signed_attrs"]:
        if attribute["type"].native == "signing_certificate_v2":
            identifier = attribute["values"][0]["certs"][0]
            digest = identifier["hash_algorithm"]["algorithm"].native
            expected = hashlib.new(digest, certificate.dump()).digest()
            return bool(identifier["cert_hash"].native == expected)
    return False


def _issued(certificate: x509.Certificate, issuer: x509.Certificate) -> bool:
    try:
        load_der_x509_certificate(certificate.dump()).verify_directly_issued_by(
            load_der_x509_certificate(issuer.dump())
        )
    except (ValueError, TypeError, InvalidSignature):
        return False
    return True


def _rebuilt(signed: cms.SignedData, signer: cms.SignerInfo, own: x509.Certificate, null: bool) -> bytes:
    """The container made anew from what is in it; ``null`` writes the empty parameters of RSA algorithms."""
    digest: dict[str, object] = {"algorithm": signer["digest_algorithm"]["algorithm"].native}
    signature: dict[str, object] = {"algorithm": signer["signature_algorithm"]["algorithm"].native}
    if signature["algorithm"] == "rsassa_pss":
        signature["parameters"] = signer["signature_algorithm"]["parameters"]
    elif null:
        signature["parameters"] = core.Null()
    parts: dict[str, object] = {
        "version": "v1",
        "sid": cms.SignerIdentifier(
            "issuer_and_serial_number",
            {"issuer": own.issuer, "serial_number": own.serial_number},
        ),
        "digest_algorithm": digest,
        "signed_attrs": signer["signed_attrs"],
        "signature_algorithm": signature,
        "signature": signer["signature"].native,
    }
    if signer["unsigned_attrs"]:
        parts["unsigned_attrs"] = signer["unsigned_attrs"]
    rebuilt = cms.ContentInfo(
        {
            "content_type": "signed_data",
            "content": cms.SignedData(
                {
                    "version": "v1",
                    "digest_algorithms": [digest],
                    "encap_content_info": {"content_type": "data"},
                    "certificates": signed["certificates"],
                    "signer_infos": [cms.SignerInfo(parts)],
                }
            ),
        }
    )
    return bytes(rebuilt.dump())
