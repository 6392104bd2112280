"""Verifying: what holds of a signed file and what does not, in plain words and as data."""

from __future__ import annotations

import datetime
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calcpack.files import digest
from calcpack.job.errors import CalcpackError
from calcpack.record.additions import built_length
from calcpack.record.appearance import shown_time
from calcpack.record.numbers import NumbersResult, audited
from calcpack.record.pdf_update import open_pdf
from calcpack.record.register import FILES, REGISTER, Register, last_of
from calcpack.record.roles import PERSON, Role, needed_roles
from calcpack.record.rules import same_name
from calcpack.record.sign import page_signatures
from calcpack.record.signatures import (
    SignatureReport,
    Trust,
    known_role,
    of_role,
    pdf_signatures,
    same_person,
    signed_from,
    stamps_damage,
)
from calcpack.record.statement import Statement, read_statement


@dataclass(frozen=True)
class Finding:
    """One sentence of a report; ``holds`` is None for what is only to be known."""

    about: str
    holds: bool | None
    says: str


@dataclass(frozen=True)
class FileReport:
    """What there is to say of a file.

    Parameters
    ----------
    file : str
    sha256 : str
    statement : Statement or None
        What a pack says of itself.
    signatures : tuple of SignatureReport
    findings : tuple of Finding
    """

    file: str
    sha256: str
    statement: Statement | None
    signatures: tuple[SignatureReport, ...]
    findings: tuple[Finding, ...]

    @property
    def passes(self) -> bool:
        """Whether everything looked at holds."""
        return all(finding.holds is not False for finding in self.findings)

    def as_data(self) -> dict[str, Any]:
        """The report as plain data for ``--json``."""
        said = self.statement
        return {
            "file": self.file,
            "sha256": self.sha256,
            "passes": self.passes,
            "job": said.number if said else None,
            "revision": said.revision if said else None,
            "check_level": said.check_level if said else None,
            "unmet": list(said.unmet) if said else [],
            "signatures": [_as_data(each) for each in self.signatures],
            "findings": [
                {"about": finding.about, "holds": finding.holds, "says": finding.says}
                for finding in self.findings
            ],
        }

    def as_text(self) -> str:
        """The report in plain words, a line a finding."""
        signs = {True: "yes ", False: "NO  ", None: "    "}
        lines = [f"  {signs[finding.holds]}{finding.about}: {finding.says}" for finding in self.findings]
        verdict = "everything looked at holds" if self.passes else "NOT everything holds"
        return "\n".join([f"{self.file}: {verdict}", *lines])


def _as_data(signature: SignatureReport) -> dict[str, Any]:
    certificate = signature.certificate
    return {
        "role": signature.role,
        "name": signature.name,
        "organisation": certificate.organisation if certificate else "",
        "certificate": certificate.sha256 if certificate else None,
        "issuer": certificate.issuer if certificate else None,
        "test_identity": certificate.test if certificate else None,
        "claimed_time": signature.claimed.isoformat() if signature.claimed else None,
        "stamped_time": signature.stamped.isoformat() if signature.stamped else None,
        "reason": signature.reason,
        "despite": signature.despite,
        "intact": not signature.damage,
        "damage": list(signature.damage),
        "trusted": not signature.damage and not signature.doubt,
        "doubt": signature.doubt,
        "comments": list(signature.comments),
    }


def verify_file(
    path: Path, trust: Trust, *, record: Path | None = None, with_audit: bool = True
) -> FileReport:
    """Verify a signed file.

    Parameters
    ----------
    path : Path
        A pack, a sheet for the screen with its signatures beside it, or one of these signatures.
    trust : Trust
    record : Path or None
        The register to look it up in; None looks beside and around the file.
    with_audit : bool
        Audit the numbers, too.

    Raises
    ------
    CalcpackError
        There is no such file, or it is of no kind that is signed.
    """
    page = Path(str(path).rsplit(".", 2)[0]) if path.suffix == ".p7s" else path
    try:
        data = page.read_bytes()
    except OSError as error:
        raise CalcpackError(f"'{page}' cannot be read: {error.strerror}") from None
    if data.startswith(b"%PDF") or page.suffix.lower() == ".pdf":
        return _pack_report(page, data, trust, record, with_audit)
    if page.suffix.lower() in (".html", ".htm"):
        signatures = page_signatures(page, data, trust)
        findings = list(_integrity(signatures, ()))
        findings += _people(None, signatures)
        if with_audit and all(finding.holds is not False for finding in findings):
            findings.append(_numbers(audited(page)))
        return FileReport(str(path), digest(data), None, signatures, tuple(findings))
    raise CalcpackError(f"'{path}' is nothing that calcpack signs", remedy="name a .pdf, .html or .p7s")


def _pack_report(path: Path, data: bytes, trust: Trust, record: Path | None, with_audit: bool) -> FileReport:
    try:
        reader = open_pdf(data, path.name)
        statement = read_statement(reader, path.name)
        first = signed_from(reader)
        signatures = pdf_signatures(data, reader, trust)
        stamps = stamps_damage(reader, trust)
        built = data[: built_length(data, first)]
    except CalcpackError as error:
        return _damaged(path, data, str(error))
    except Exception as error:  # whatever a damaged file makes pyhanko raise
        return _damaged(path, data, f"it cannot be read: {error or type(error).__name__}")
    findings = list(_integrity(signatures, stamps))
    findings += _people(statement, signatures)
    if statement.unmet:
        findings.append(Finding("requirements", None, f"not satisfied: {'; '.join(statement.unmet)}"))
    if with_audit and all(finding.holds is not False for finding in findings if finding.about == "integrity"):
        findings.append(_numbers(audited(path)))
    findings.append(_registered(path, data, built, statement, record))
    return FileReport(str(path), digest(data), statement, signatures, tuple(findings))


def _damaged(path: Path, data: bytes, says: str) -> FileReport:
    return FileReport(str(path), digest(data), None, (), (Finding("integrity", False, says),))


def _numbers(result: NumbersResult) -> Finding:
    return Finding("audit", result.passes, result.says)


def _integrity(signatures: tuple[SignatureReport, ...], stamps: tuple[str, ...]) -> list[Finding]:
    if not signatures:
        return [Finding("integrity", False, "it is not signed")]
    broken = [
        f"signature of {each.name} ({each.role}): {text}" for each in signatures for text in each.damage
    ]
    broken += stamps
    if broken:
        return [Finding("integrity", False, text) for text in broken]
    comments = dict.fromkeys(text for each in signatures for text in each.comments)
    says = (
        "nothing but comments was added since it was signed" if comments else "unchanged since it was signed"
    )
    return [
        Finding("integrity", True, says),
        *(Finding("comment", None, f"not part of what was signed: {text}") for text in comments),
    ]


def _people(statement: Statement | None, signatures: tuple[SignatureReport, ...]) -> list[Finding]:
    findings = []
    for each in signatures:
        if each.certificate is None:
            continue
        by = each.name + (f", {each.certificate.organisation}" if each.certificate.organisation else "")
        time = (
            f"time-stamped {shown_time(each.stamped)}"
            if each.stamped
            else f"at {shown_time(each.claimed)} by the signer's own clock"
            if each.claimed
            else "at an unknown time"
        )
        despite = f"; despite: {each.despite}" if each.despite else ""
        findings.append(Finding(each.role, None, f"{by}, {time}; {each.reason}{despite}"))
        if each.certificate.test:
            findings.append(
                Finding("identity", None, f"{each.name} signed with a test identity, no legal force")
            )
        if not each.damage:
            says = each.doubt or f"vouched for: the certificate of {each.name} leads to one that is trusted"
            findings.append(Finding("trust", not each.doubt, says))
    if statement is not None:
        findings += _agreed(statement, signatures)
    return findings


def _agreed(statement: Statement, signatures: tuple[SignatureReport, ...]) -> list[Finding]:
    """Whether those who signed are those who were to, as far as the level of checking asks for it."""
    findings = []
    for each in signatures:
        role = known_role(each.role)
        named = statement.person(role).name if role else ""
        if role and named and each.certificate and not same_name(named, each.certificate.name):
            says = f"the pack names {named} as {PERSON[role]}; {each.name} signed"
            findings.append(Finding("persons", None if each.despite else False, says))
    preparer, checker = of_role(signatures, "prepared"), of_role(signatures, "checked")
    if statement.check_level != "self" and preparer and checker:
        one, other = preparer.certificate, checker.certificate
        if one and other and same_person(one, other):
            says = f"{one.name} prepared and checked it; agreed is checking by a {statement.check_level}"
            findings.append(Finding("persons", False, says))
    missing: list[Role] = [
        role
        for role in needed_roles(statement.check_level, statement.approved.name)
        if signatures and of_role(signatures, role) is None
    ]
    if missing:
        says = f"not {' and not '.join(missing)} yet (level of checking: {statement.check_level})"
        findings.append(Finding("roles", None, says))
    return findings


def _registered(path: Path, data: bytes, built: bytes, statement: Statement, record: Path | None) -> Finding:
    """Whether it is what the register holds for its revision, and whether that is the one issued last."""
    folder = _record_around(path) if record is None else record
    if folder is None or not (folder / REGISTER).is_file():
        return Finding("register", None if record is None else False, "no register at hand to look it up in")
    register = Register(folder)
    try:
        entries = register.entries()
    except CalcpackError as error:
        return Finding("register", False, str(error))
    job, revision = statement.number, statement.revision
    mine = [entry for entry in entries if (entry.job, entry.revision) == (job, revision)]
    if not mine:
        return Finding("register", None, f"revision {revision} of job {job} has not been issued")
    exact = [entry for entry in mine if entry.pack == digest(data)]
    if not exact:
        if mine[-1].built == digest(built):
            return Finding("register", None, f"the register holds revision {revision} with other signatures")
        return Finding(
            "register", False, f"the register holds another file as revision {revision} of job {job}"
        )
    entry, last = exact[-1], last_of(entries, job)
    assert last is not None
    says = f"entry {entry.no}: revision {revision}, issued {entry.time[:10]} {entry.purpose}"
    if last.revision != revision:
        return Finding(
            "register", None, f"{says}; SUPERSEDED by revision {last.revision} of {last.time[:10]}"
        )
    return Finding("register", True, f"{says}; the one issued last")


def _record_around(path: Path) -> Path | None:
    """The register a file belongs to: the one that holds it, or the one beside its output folder."""
    folder = path.absolute().parent
    candidates = [folder.parent] if folder.name == FILES else []
    candidates += [folder.parent / "record", folder / "record", folder]
    return next((each for each in candidates if (each / REGISTER).is_file()), None)


def clock() -> datetime.datetime:
    """The time now, in the zone of this machine; signing, issuing and verifying alone ask for it."""
    return datetime.datetime.now().astimezone().replace(microsecond=0)
