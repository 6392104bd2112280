"""The signatures of a file: whose, when, whether what they cover is unchanged, and who vouches for them."""

from __future__ import annotations

import asyncio
import datetime
import gc
import logging
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, replace
from typing import Any

from asn1crypto import cms, x509
from pyhanko.pdf_utils.reader import PdfFileReader
from pyhanko.sign.diff_analysis import DiffResult, ModificationLevel
from pyhanko.sign.general import extract_certificate_info
from pyhanko.sign.validation import EmbeddedPdfSignature
from pyhanko.sign.validation.generic_cms import async_validate_detached_cms
from pyhanko.sign.validation.pdf_embedded import async_validate_pdf_signature, async_validate_pdf_timestamp
from pyhanko.sign.validation.settings import KeyUsageConstraints
from pyhanko.sign.validation.status import SignatureCoverageLevel
from pyhanko_certvalidator import ValidationContext

from calcpack.export.text import shown_date
from calcpack.record.certificates import Certificate
from calcpack.record.container import ALTERED, container_flaw, padding_flaw
from calcpack.record.declaration import declared
from calcpack.record.markup import POLICY, comments_since
from calcpack.record.roles import ROLES, Role

# What pyhanko tells its log is said by the reports below; without a handler it would land on the terminal.
for _name in ("pyhanko", "pyhanko_certvalidator"):
    logging.getLogger(_name).addHandler(logging.NullHandler())

APPLICATION = "calcpack"
DESPITE = " Despite: "
_CHANGED_AFTER = "the file was changed after it in a way it does not allow"
_USAGE = KeyUsageConstraints(key_usage={"non_repudiation", "digital_signature"})
_WHOLE = (SignatureCoverageLevel.ENTIRE_FILE, SignatureCoverageLevel.ENTIRE_REVISION)


@dataclass(frozen=True)
class Trust:
    """Whom and what time to go by.

    Parameters
    ----------
    roots : tuple of certificates
        Those trusted.
    now : datetime
        With its time zone.
    online : bool
        Ask the network whether certificates were revoked.
    """

    roots: tuple[x509.Certificate, ...]
    now: datetime.datetime
    online: bool = False

    def context(self, moment: datetime.datetime) -> ValidationContext:
        """What pyhanko validates with at a moment."""
        # A moment other than now makes pyhanko refuse to fetch: it would learn of today's revocations only.
        when = None if self.online and moment == self.now else moment
        return ValidationContext(
            trust_roots=list(self.roots), moment=when, allow_fetching=when is None, retroactive_revinfo=True
        )


@dataclass(frozen=True)
class SignatureReport:
    """What there is to say of one signature.

    Parameters
    ----------
    role : str
        "prepared", "checked", "approved", or what its field is called.
    certificate : Certificate or None
        None where it cannot be read.
    claimed, stamped : datetime or None
        When the signer says it was made; when a trusted authority's time stamp says it was there.
    reason, despite : str
        What was declared with it.
    damage : tuple of str
        What was changed; nothing where it is intact.
    doubt : str
        Why it is not established that the person is who the certificate says; "" where it is.
    comments : tuple of str
        Comments put into the file since, which this signature allows.
    """

    role: str
    certificate: Certificate | None
    claimed: datetime.datetime | None
    stamped: datetime.datetime | None
    reason: str
    despite: str
    damage: tuple[str, ...]
    doubt: str
    comments: tuple[str, ...] = ()

    @property
    def name(self) -> str:
        """Who signed."""
        return self.certificate.name if self.certificate else "unknown"


def known_role(text: str) -> Role | None:
    """A role by its name, None where there is no such role."""
    return next((role for role in ROLES if role == text), None)


def signed_from(reader: PdfFileReader) -> int | None:
    """Where the container of the first signature begins; None where nothing is signed."""
    starts = [int(each.byte_range[1]) for each in reader.embedded_signatures]
    return min(starts, default=None)


def pdf_signatures(
    data: bytes, reader: PdfFileReader, trust: Trust, *, later: bool = True
) -> tuple[SignatureReport, ...]:
    """Reports on all signatures of a PDF, in the order they were made.

    Parameters
    ----------
    data : bytes
    reader : PdfFileReader
        On the same data.
    trust : Trust
    later : bool
        Look into what was appended after each signature, too; that takes seconds for a large pack.
    """
    signatures = [each for each in reader.embedded_signatures if _kind(each) == "/Sig"]
    reports = tuple(_pdf_signature(data, each, trust) for each in signatures)
    if not later or any(report.damage for report in reports):
        return reports
    looked_into = []
    with _without_collection():
        for signature, report in zip(signatures, reports, strict=True):
            damage, comments = _since(reader, signature)
            looked_into.append(replace(report, damage=damage, comments=comments))
    return tuple(looked_into)


@contextmanager
def _without_collection() -> Iterator[None]:
    """No search for garbage while pyhanko reads every object of a file: it takes a quarter of the time."""
    was = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was:
            gc.enable()


def stamps_damage(reader: PdfFileReader, trust: Trust) -> tuple[str, ...]:
    """What is wrong with time stamps that stand over the whole file."""
    found = []
    for each in reader.embedded_signatures:
        if _kind(each) == "/Sig":
            continue
        try:
            status = asyncio.run(async_validate_pdf_timestamp(each, trust.context(trust.now)))
            sound = status.intact and status.valid and each.coverage in _WHOLE
            sound = sound and status.modification_level is not ModificationLevel.OTHER
        except Exception:  # whatever a damaged file makes pyhanko raise
            sound = False
        if not sound:
            found.append("the time stamp over the file does not match it")
    return tuple(found)


def _kind(signature: EmbeddedPdfSignature) -> str:
    return str(signature.sig_object_type)


def _pdf_signature(data: bytes, signature: EmbeddedPdfSignature, trust: Trust) -> SignatureReport:
    entries = signature.sig_object
    reason, _, despite = str(entries.get("/Reason", "")).partition(DESPITE)
    try:
        own = str(entries["/Prop_Build"]["/App"]["/Name"]) == f"/{APPLICATION}"
    except (KeyError, TypeError):
        own = False

    async def validate(context: ValidationContext) -> Any:
        return await async_validate_pdf_signature(
            signature, context, key_usage_settings=_USAGE, skip_diff=True
        )

    try:
        status, stamped = _validated(validate, trust)
        damage = _damage(status)
        if signature.coverage not in _WHOLE:
            damage.append("it covers a part of the file only")
        if own and not damage:
            first, length, rest, _ = (int(part) for part in signature.byte_range)
            container = cms.ContentInfo.load(signature.pkcs7_content).dump()
            flaw = padding_flaw(data[first + length : rest], container)
            damage += [text for text in (flaw or container_flaw(container, trust.roots),) if text]
        certificate = Certificate.of(signature.signer_cert)
        claimed = signature.self_reported_timestamp
    except Exception as error:  # whatever a damaged file makes pyhanko and asn1crypto raise
        return _unreadable(signature.field_name, error)
    doubt = _doubt(status, certificate, claimed, stamped, trust)
    return SignatureReport(
        signature.field_name, certificate, claimed, stamped, reason, despite, tuple(damage), doubt
    )


def detached_signature(content: bytes, container: bytes, role: str, trust: Trust) -> SignatureReport:
    """The report on a signature that stands in a file of its own (.p7s).

    Parameters
    ----------
    content : bytes
        What was signed.
    container : bytes
        The signature, DER.
    role : str
        As the signature's file is named; the role that was signed decides.
    trust : Trust
    """
    try:
        signed = cms.ContentInfo.load(container, strict=True)["content"]

        async def validate(context: ValidationContext) -> Any:
            return await async_validate_detached_cms(content, signed, context, key_usage_settings=_USAGE)

        status, stamped = _validated(validate, trust)
        damage = _damage(status)
        if not damage and (flaw := container_flaw(container, trust.roots)):
            damage.append(flaw)
        certificate = Certificate.of(extract_certificate_info(signed).signer_cert)
        claimed = status.signer_reported_dt
        says = _declared(signed)
    except Exception as error:  # whatever a damaged file makes pyhanko and asn1crypto raise
        return _unreadable(role, error)
    if says[0] != role:
        damage.append(f"it was signed as {says[0] or 'nothing'}, not as {role}")
    doubt = _doubt(status, certificate, claimed, stamped, trust)
    return SignatureReport(role, certificate, claimed, stamped, *says[1:], tuple(damage), doubt)


def _declared(signed: cms.SignedData) -> tuple[str, str, str]:
    """Role, reason and what it was signed despite."""
    role, _, said = declared(signed).partition(": ")
    reason, _, despite = said.partition(DESPITE)
    return role, reason, despite


def _validated(validate: Any, trust: Trust) -> tuple[Any, datetime.datetime | None]:
    """pyhanko's judgement at the time the signature is known to have been there, and that time."""
    status = asyncio.run(validate(trust.context(trust.now)))
    stamp = status.timestamp_validity
    if stamp is None or not (stamp.intact and stamp.valid and stamp.trusted):
        return status, None
    return asyncio.run(validate(trust.context(stamp.timestamp))), stamp.timestamp


def _damage(status: Any) -> list[str]:
    damage = []
    if not status.intact:
        damage.append("what was signed has been changed")
    elif not status.valid:
        damage.append("the signature does not match its certificate")
    stamp = status.timestamp_validity
    if stamp is not None and not (stamp.intact and stamp.valid):
        damage.append("its time stamp does not match it")
    return damage


def _since(reader: PdfFileReader, signature: EmbeddedPdfSignature) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """What was appended after a signature: what it does not allow, and comments that it does."""
    if signature.coverage is SignatureCoverageLevel.ENTIRE_FILE:
        return (), ()
    try:
        signature.compute_integrity_info(diff_policy=POLICY)
        found = signature.summarise_integrity_info()
        states = (
            reader.get_historical_resolver(each)
            for each in (signature.signed_revision, reader.xrefs.total_revisions - 1)
        )
        comments = comments_since(*states)
    except Exception:  # whatever a changed file makes pyhanko raise
        return (_CHANGED_AFTER,), ()
    if not isinstance(found["diff_result"], DiffResult):
        return (_CHANGED_AFTER,), ()
    if found["docmdp_ok"] is True:
        return (), comments
    if comments:
        return tuple(
            f"a comment was put into the file after it, and it allows none: {each}" for each in comments
        ), ()
    return (_CHANGED_AFTER,), ()


def _unreadable(role: str, error: Exception) -> SignatureReport:
    said = str(error) or type(error).__name__
    return SignatureReport(role, None, None, None, "", "", (f"{ALTERED} or cannot be read: {said}",), "")


def _doubt(
    status: Any,
    certificate: Certificate,
    claimed: datetime.datetime | None,
    stamped: datetime.datetime | None,
    trust: Trust,
) -> str:
    made = stamped or claimed or trust.now
    if said := certificate.against(made, "the signature was made"):
        return said
    if stamped is None and (said := certificate.against(trust.now)):
        before = ", and no trusted time stamp proves that the signature was made before"
        return said + (before if trust.now > certificate.ends else "")
    if not trust.roots:
        return f"no trusted certificate was given, so it is not established that this is {certificate.name}"
    if status.revocation_details is not None:
        return (
            f"the certificate of {certificate.name} was revoked on"
            f" {shown_date(status.revocation_details.revocation_date.date())}"
        )
    if not status.trusted:
        return (
            f"none of the trusted certificates vouches for {certificate.name}"
            f" (issued by {certificate.issuer})"
        )
    return ""


def same_person(one: Certificate, other: Certificate) -> bool:
    """Whether two certificates are one and the same, or of the same key."""
    return one.sha256 == other.sha256 or one.key_sha256 == other.key_sha256


def of_role(signatures: Sequence[SignatureReport], role: str) -> SignatureReport | None:
    """The signature of a role, None where there is none."""
    return next((each for each in signatures if each.role == role), None)
