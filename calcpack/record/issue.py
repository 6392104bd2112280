"""Issuing: a signed pack and all that belongs to it put into the record."""

from __future__ import annotations

import datetime
from dataclasses import dataclass
from pathlib import Path

from calcpack.files import OutputFolder, digest
from calcpack.job.errors import CalcpackError, Problem
from calcpack.record.additions import built_length
from calcpack.record.folder import MANIFEST, PACK
from calcpack.record.numbers import audited
from calcpack.record.pdf_update import open_pdf
from calcpack.record.register import Entry, EntrySignature, Register, last_of
from calcpack.record.revisions import backwards
from calcpack.record.roles import ROLES, needed_roles
from calcpack.record.sign import as_built_or_signed, page_signatures, signature_file
from calcpack.record.signatures import SignatureReport, Trust, of_role, pdf_signatures, signed_from
from calcpack.record.statement import Statement, read_statement

RECORD = "record"


@dataclass(frozen=True)
class Issued:
    """What was entered; ``again`` where it was in the register already."""

    entry: Entry
    register: Register
    again: bool
    notes: tuple[str, ...]


@dataclass(frozen=True)
class _Ready:
    statement: Statement
    signatures: tuple[SignatureReport, ...]
    built: str
    files: dict[str, bytes]


def issue(out: Path, purpose: str, now: datetime.datetime, record: Path | None = None) -> Issued:
    """Put the signed pack of an output folder, with all its files, into the record.

    Parameters
    ----------
    out : Path
        The output folder.
    purpose : str
        "for permit".
    now : datetime
        The time of issue, with its time zone.
    record : Path or None
        ``record`` beside the output folder.

    Returns
    -------
    Issued

    Raises
    ------
    CalcpackError
        It is not signed as its level of checking asks for, is not what was built and signed, does not pass
        its audit, or its revision was issued before.
    """
    if not purpose.strip():
        raise CalcpackError("an issue needs a purpose", remedy='say --purpose "for permit"')
    register = Register(record or out.absolute().parent / RECORD)
    ready = _ready(out, now)
    numbers = audited(out / PACK)
    if numbers.passes is False:
        raise CalcpackError(f"'{out}' is not issued: {numbers.says}", remedy="see 'calcpack audit'")
    notes = [] if numbers.passes else [numbers.says]
    notes += [
        f"{each.name} signed with a test identity, which has no legal force"
        for each in ready.signatures
        if each.certificate and each.certificate.test
    ]
    with register.held():
        entries = register.entries()
        pack = digest(ready.files[PACK])
        for entry in entries:
            same = (entry.job, entry.revision) == (ready.statement.number, ready.statement.revision)
            if same and (entry.pack, entry.purpose) == (pack, purpose):
                return Issued(entry, register, True, tuple(notes))
        _may_follow(register, entries, ready)
        listed = {name: register.store(name, data) for name, data in ready.files.items()}
        manifest = "".join(f"{value}  {name}\n" for name, value in sorted(listed.items()))
        entry = Entry(
            no=len(entries) + 1,
            time=f"{now.astimezone(datetime.UTC):%Y-%m-%dT%H:%M:%SZ}",
            job=ready.statement.number,
            title=ready.statement.title,
            revision=ready.statement.revision,
            purpose=purpose,
            pack=pack,
            built=ready.built,
            manifest=register.store(MANIFEST, manifest.encode()),
            unmet=ready.statement.unmet,
            signatures=tuple(map(_entered, ready.signatures)),
            before=entries[-1].hash if entries else "0" * 64,
        )
        register.append(entries, entry)
    return Issued(entry, register, False, tuple(notes))


def _entered(signature: SignatureReport) -> EntrySignature:
    certificate, time = signature.certificate, signature.stamped or signature.claimed
    assert certificate is not None  # an unreadable signature is not issued
    return EntrySignature(
        role=signature.role,
        name=certificate.name,
        certificate=certificate.sha256,
        time="" if time is None else f"{time.astimezone(datetime.UTC):%Y-%m-%dT%H:%M:%SZ}",
        test=certificate.test,
        despite=signature.despite,
    )


def _ready(out: Path, now: datetime.datetime) -> _Ready:
    """All files of a folder, everything about them seen to be right."""
    if not out.is_dir():
        raise CalcpackError(f"there is no folder '{out}'", remedy="name the output folder of a build")
    built = OutputFolder(out).written_before()
    if PACK not in built or not (out / PACK).is_file():
        raise CalcpackError(f"'{out}' holds no pack that was built there", remedy="build it, then sign it")
    trust = Trust((), now)
    data = (out / PACK).read_bytes()
    reader = open_pdf(data, PACK)
    statement = read_statement(reader, PACK)
    signatures = pdf_signatures(data, reader, trust)
    own = data[: built_length(data, signed_from(reader))]
    as_built_or_signed(out / PACK, own, signatures)
    problems = [
        Problem(f"nobody has signed the pack as {role}", f"level of checking: {statement.check_level}")
        for role in needed_roles(statement.check_level, statement.approved.name)
        if of_role(signatures, role) is None
    ]
    files = {PACK: data}
    for name, sha256 in built.items():
        path = out / name
        if name == PACK:
            continue
        if not path.is_file():
            problems.append(Problem(f"'{name}' is missing", "build the job again"))
            continue
        files[name] = path.read_bytes()
        if digest(files[name]) != sha256:
            problems.append(Problem(f"'{name}' is not what was built", "build the job again"))
        for each in page_signatures(path, files[name], trust):
            beside = signature_file(path, each.role)
            files[beside.relative_to(out).as_posix()] = beside.read_bytes()
            if each.damage:
                problems.append(Problem(f"'{beside.name}' does not hold: {each.damage[0]}"))
    if problems:
        raise CalcpackError(*problems)
    return _Ready(statement, tuple(sorted(signatures, key=_rank)), digest(own), files)


def _rank(signature: SignatureReport) -> int:
    return next((number for number, role in enumerate(ROLES) if role == signature.role), len(ROLES))


def _may_follow(register: Register, entries: tuple[Entry, ...], ready: _Ready) -> None:
    """Refuse a revision that was issued with other content, or that goes backwards."""
    job, revision = ready.statement.number, ready.statement.revision
    last = last_of(entries, job)
    if last is None:
        return
    if last.revision == revision:
        before = register.stored(PACK, last.pack).read_bytes()
        if last.built == ready.built and ready.files[PACK].startswith(before):
            return  # the same pack, for another purpose or with a further signature
        raise CalcpackError(
            f"revision {revision} of job {job} was issued on {last.time[:10]} with other content",
            remedy="give the changed job a new revision",
        )
    issued = list(dict.fromkeys(entry.revision for entry in entries if entry.job == job))
    if why := backwards(revision, issued):
        raise CalcpackError(
            f"revision {revision} of job {job} cannot be issued any more: {why}",
            remedy="give the job the next revision",
        )
