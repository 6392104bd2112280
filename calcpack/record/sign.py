"""Signing: PAdES signatures in a pack, detached signatures beside a page for the screen."""

from __future__ import annotations

import asyncio
import datetime
import io
import json
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from asn1crypto import x509
from pyhanko.pdf_utils.misc import PdfError
from pyhanko.sign.fields import MDPPerm, SigSeedSubFilter
from pyhanko.sign.general import SigningError
from pyhanko.sign.signers import PdfSignatureMetadata, PdfSigner
from pyhanko.sign.signers.pdf_byterange import BuildProps
from pyhanko.sign.signers.pdf_cms import PdfCMSSignedAttributes
from pyhanko.sign.timestamps import HTTPTimeStamper, TimeStamper, TimestampRequestError
from pyhanko_certvalidator import ValidationContext
from pyhanko_certvalidator.errors import PathError

import calcpack
from calcpack.files import write_file
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Header, Submission
from calcpack.record.additions import built_length
from calcpack.record.appearance import appearance
from calcpack.record.declaration import Declaring
from calcpack.record.folder import as_built, output_folder
from calcpack.record.identity import Identity, token_errors
from calcpack.record.locking import locked, sync_folder
from calcpack.record.numbers import audited
from calcpack.record.pdf_update import Update, open_pdf
from calcpack.record.roles import ROLES, Role
from calcpack.record.rules import hindrances, same_name
from calcpack.record.signatures import (
    APPLICATION,
    DESPITE,
    SignatureReport,
    Trust,
    detached_signature,
    pdf_signatures,
    signed_from,
)
from calcpack.record.statement import Statement, read_statement, statement_of

DIGEST = "sha256"
_FAILURES: tuple[type[Exception], ...] = (
    SigningError,
    TimestampRequestError,
    PathError,
    PdfError,
    OSError,
    *token_errors(),
)
REASONS: dict[Role, str] = {
    "prepared": "I prepared this calculation.",
    "checked": "I checked this calculation.",
    "approved": "I approve this calculation.",
}


@dataclass(frozen=True)
class Signing:
    """How somebody signs.

    Parameters
    ----------
    role : Role
    identity : Identity
    now : datetime
        The time of signing, with its time zone.
    reason : str
        "" for the role's usual words.
    despite : str
        Why it is signed although something stands against it.
    timestamp_url : str
        A time-stamping authority (RFC 3161); "" for none.
    long_term : bool
        Put what a later validation needs into the file, under a time stamp of its own.
    trusted : tuple of certificates
        Whom the long-term data may end at.
    """

    role: Role
    identity: Identity
    now: datetime.datetime
    reason: str = ""
    despite: str = ""
    timestamp_url: str = ""
    long_term: bool = False
    trusted: tuple[x509.Certificate, ...] = ()

    @property
    def said(self) -> str:
        """The reason as it is written into the signature."""
        return self.reason or REASONS[self.role]


@dataclass(frozen=True)
class Signed:
    """What was signed: the file written, what it was signed despite, and what there is to note."""

    file: Path
    despite: tuple[str, ...]
    notes: tuple[str, ...]


def sign_file(path: Path, signing: Signing) -> Signed:
    """Sign a pack in its place on the cover, or a page for the screen by a file beside it.

    Parameters
    ----------
    path : Path
        ``pack.pdf`` is signed in place; ``NAME.html`` gets ``NAME.html.ROLE.p7s``.
    signing : Signing

    Returns
    -------
    Signed

    Raises
    ------
    CalcpackError
        It may not be signed, with every reason; the file is as it was.
    """
    if said := signing.identity.certificate.against(signing.now):
        raise CalcpackError(said)
    if signing.long_term and not (signing.timestamp_url and signing.trusted):
        raise CalcpackError(
            "long-term data need a time stamp over them and somebody they can end at",
            remedy="give --timestamp-url and --trust as well",
        )
    if path.suffix.lower() == ".pdf":
        with locked(path, "r+b"):
            return _sign_pack(path, signing)
    if path.suffix.lower() in (".html", ".htm"):
        with locked(path, "r+b"):
            return _sign_page(path, signing)
    raise CalcpackError(
        f"'{path}' is neither a pack nor a sheet for the screen", remedy="name a .pdf or .html"
    )


def _sign_pack(path: Path, signing: Signing) -> Signed:
    data = path.read_bytes()
    reader = open_pdf(data, path.name)
    statement = read_statement(reader, path.name)
    signatures = pdf_signatures(data, reader, Trust((), signing.now))
    as_built_or_signed(path, data[: built_length(data, signed_from(reader))], signatures)
    found, notes = _cleared(path, statement, signing, signatures)
    signed = asyncio.run(_pack_signed(data, statement, signing, found))
    after = open_pdf(signed, path.name)
    if any(each.damage for each in pdf_signatures(signed, after, Trust((), signing.now), later=False)):
        raise CalcpackError(f"'{path}' would not be valid once signed; it was left as it was")
    write_file(path, signed)
    sync_folder(path.parent)
    return Signed(path, found, notes)


def as_built_or_signed(path: Path, built: bytes, signatures: tuple[SignatureReport, ...]) -> None:
    """See that a pack is what was built; one that is signed proves itself where no manifest stands beside it.

    Raises
    ------
    CalcpackError
        It is not, or a signature in it is damaged.
    """
    for each in signatures:
        if each.damage:
            raise CalcpackError(f"the signature of {each.name} ({each.role}) does not hold: {each.damage[0]}")
    if not signatures or output_folder(path) is not None:
        as_built(path, built)


def _cleared(
    path: Path, statement: Statement, signing: Signing, signatures: tuple[SignatureReport, ...]
) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """What it is signed despite, and notes; refused where something stands against it."""
    found = hindrances(statement, signing.role, signing.identity.certificate, signatures)
    numbers = audited(path)
    if numbers.passes is False:
        raise CalcpackError(f"'{path}' is not signed: {numbers.says}", remedy="see 'calcpack audit'")
    if found and not signing.despite:
        raise CalcpackError(
            *(f"'{path.name}' is not signed: {text}" for text in found),
            remedy='sign --despite "REASON" if you answer for it',
        )
    notes = () if numbers.passes else (numbers.says,)
    return found, notes


def _visible(statement: Statement, signing: Signing, found: tuple[str, ...]) -> list[str]:
    notes = [signing.said]
    if found:
        count = f"{len(found)} points" if len(found) > 1 else found[0].partition(":")[0]
        notes.append(f"Despite {count}: {signing.despite}")
    if signing.identity.certificate.test:
        notes.append("TEST IDENTITY, without legal force")
    return notes


def _licence(statement: Statement, signing: Signing) -> str:
    certificate, named = signing.identity.certificate, statement.person(signing.role)
    if named.licence and named.name and same_name(named.name, certificate.name):
        return named.licence
    return certificate.licence


async def _pack_signed(data: bytes, statement: Statement, signing: Signing, found: tuple[str, ...]) -> bytes:
    update = Update(data)
    fields = {str(each.get_object()["/T"]): each.get_object() for each in _references(update)}
    if signing.role not in fields:
        raise CalcpackError(f"the pack has no place for the signature of who {signing.role} it")
    box = tuple(float(edge) for edge in fields[signing.role]["/Rect"])
    assert len(box) == 4
    certify = not any("/V" in fields[role] for role in ROLES if role in fields)
    metadata = PdfSignatureMetadata(
        field_name=signing.role,
        md_algorithm=DIGEST,
        reason=signing.said + (DESPITE + signing.despite if found else ""),
        name=signing.identity.certificate.name,
        app_build_props=BuildProps(APPLICATION, calcpack.__version__),
        certify=certify,
        docmdp_permissions=MDPPerm.ANNOTATE if statement.allow_markup else MDPPerm.FILL_FORMS,
        subfilter=SigSeedSubFilter.PADES,
        signer_key_usage=set(),
        embed_validation_info=signing.long_term,
        use_pades_lta=signing.long_term,
        validation_context=ValidationContext(trust_roots=list(signing.trusted), allow_fetching=True)
        if signing.long_term
        else None,
    )
    style = appearance(
        box,
        signer=signing.identity.certificate.name,
        licence=_licence(statement, signing),
        role=signing.role,
        moment=signing.now,
        notes=_visible(statement, signing, found),
    )
    signer = PdfSigner(metadata, signing.identity.signer, timestamper=_stamper(signing), stamp_style=style)
    written = io.BytesIO()
    try:
        session = signer.init_signing_session(update, existing_fields_only=True)
        session.system_time = signing.now
        validation = await session.perform_presign_validation(update)
        room = await session.estimate_signature_container_size(validation)
        document = session.prepare_tbs_document(validation, room)
        digest, output = document.digest_tbs_document(output=written)
        attributes = PdfCMSSignedAttributes(signing_time=signing.now)
        after = await document.perform_signature(digest.document_digest, attributes)
        await after.post_signature_processing(output)
    except _FAILURES as error:
        raise _failed(error) from None
    return written.getvalue()


def _failed(error: Exception) -> CalcpackError:
    said = str(error) or type(error).__name__
    if isinstance(error, TimestampRequestError):
        return CalcpackError(f"the time-stamping authority gave no time stamp: {said}")
    return CalcpackError(f"the signature could not be made: {said}")


def _references(update: Update) -> list[Any]:
    if "/AcroForm" not in update.root:
        return []
    fields = update.root["/AcroForm"]["/Fields"]
    return [fields.raw_get(index) for index in range(len(fields))]


def _stamper(signing: Signing) -> TimeStamper | None:
    return HTTPTimeStamper(signing.timestamp_url) if signing.timestamp_url else None


def signature_file(page: Path, role: str) -> Path:
    """Where the detached signature of a page stands.

    Examples
    --------
    >>> signature_file(Path("B1.html"), "checked").name
    'B1.html.checked.p7s'
    """
    return page.with_name(f"{page.name}.{role}.p7s")


def page_signatures(page: Path, content: bytes, trust: Trust) -> tuple[SignatureReport, ...]:
    """Reports on the detached signatures of a page, in the order of the roles."""
    return tuple(
        detached_signature(content, signature_file(page, role).read_bytes(), role, trust)
        for role in ROLES
        if signature_file(page, role).is_file()
    )


def _sign_page(path: Path, signing: Signing) -> Signed:
    content = path.read_bytes()
    as_built(path, content)
    signatures = page_signatures(path, content, Trust((), signing.now))
    as_built_or_signed(path, content, signatures)
    statement = page_statement(path)
    found, notes = _cleared(path, statement, signing, signatures)
    text = f"{signing.role}: {signing.said}" + (DESPITE + signing.despite if found else "")
    signer = signing.identity.signer
    signer.signed_attr_prov_spec = Declaring(signer, signing.now, text)
    try:
        container = asyncio.run(
            signer.async_sign_general_data(content, DIGEST, use_cades=True, timestamper=_stamper(signing))
        )
    except _FAILURES as error:
        raise _failed(error) from None
    finally:
        signer.signed_attr_prov_spec = None
    target = signature_file(path, signing.role)
    write_file(target, container.dump())
    sync_folder(target.parent)
    return Signed(target, found, notes)


def page_statement(page: Path) -> Statement:
    """The statement of a page for the screen, from the output folder it stands in.

    Raises
    ------
    CalcpackError
        The folder is not complete, or not as built.
    """
    folder = output_folder(page)
    assert folder is not None  # as_built has found it
    single = page.absolute().parent != folder
    records = [page.with_suffix(".json")] if single else sorted((folder / "sheets").glob("*.json"))
    try:
        job_file = folder / "job.json"
        job = json.loads(job_file.read_bytes())
        as_built(job_file, job_file.read_bytes())
        read = []
        for record in records:
            if record.is_file():
                as_built(record, record.read_bytes())
                read.append(json.loads(record.read_bytes()))
        return statement_of(
            Header.model_validate(job["job"]), Submission.model_validate(job["submission"]), read
        )
    except (OSError, ValueError, KeyError, TypeError) as error:
        raise CalcpackError(f"the folder of '{page}' is not complete: {error}") from None
