"""The command line: one thin function a command."""

from __future__ import annotations

import json
import sys
from collections.abc import Callable
from enum import StrEnum
from pathlib import Path
from typing import Annotated, Any

import typer
from rich.console import Console

import calcpack
from calcpack.job.errors import CalcpackError

app = typer.Typer(
    name="calcpack",
    help="From a floor framing plan to calculation sheets for every beam.",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)

JobFile = Annotated[Path, typer.Argument(metavar="JOB", help="The job file, in TOML.", show_default=False)]


class Format(StrEnum):
    """What a sheet can be written as."""

    PDF = "pdf"
    HTML = "html"
    NOTEBOOK = "notebook"


class SigningRole(StrEnum):
    """As what somebody signs."""

    PREPARED = "prepared"
    CHECKED = "checked"
    APPROVED = "approved"


class Paper(StrEnum):
    """Size of a page."""

    A4 = "A4"
    LETTER = "Letter"


def _version(asked: bool) -> None:
    if asked:
        typer.echo(f"calcpack {calcpack.__version__}")
        raise typer.Exit


def _console() -> Console:
    """What goes to a file or a pipe is not cut to the width of a terminal."""
    console = Console(highlight=False)
    return console if console.is_terminal else Console(highlight=False, width=160)


@app.callback()
def _options(
    version: Annotated[
        bool, typer.Option("--version", callback=_version, is_eager=True, help="Print the version and stop.")
    ] = False,
) -> None:
    pass


@app.command()
def validate(
    job: JobFile,
    plan: Annotated[
        Path | None, typer.Option(metavar="FILE.svg", help="Draw the framing plan into this file.")
    ] = None,
) -> None:
    """Read a job and print what was understood of it."""
    from calcpack.framing import frame
    from calcpack.job import read_job
    from calcpack.notebook.lightest import choose_sections
    from calcpack.overview import print_overview, write_plan

    framed = choose_sections(frame(read_job(job)))
    if plan is not None:
        write_plan(framed, plan)
    print_overview(framed, _console())


@app.command()
def build(
    job: JobFile,
    out: Annotated[Path, typer.Option(metavar="OUT", help="Folder for the pack; made if need be.")],
    only: Annotated[
        list[str] | None, typer.Option(metavar="MARK", help="Only this beam; may be given several times.")
    ] = None,
    formats: Annotated[
        list[Format] | None,
        typer.Option("--format", help="Only this form of sheet; may be given several times."),
    ] = None,
    since: Annotated[
        str, typer.Option(metavar="OLD", help="An earlier folder, pack or revision: mark what changed.")
    ] = "",
    record: Annotated[Path | None, typer.Option(metavar="DIR", help="The folder of the register.")] = None,
) -> None:
    """Make the calculation sheets of a job and bind them into a pack."""
    from calcpack.build import build_job
    from calcpack.overview import print_summary, print_unmet
    from calcpack.progress import progress
    from calcpack.record.editions import read_edition

    old = read_edition(since, record) if since else None
    with progress(Console(stderr=True)) as follow:
        built = build_job(
            job,
            out,
            only=tuple(only or ()),
            formats=frozenset(map(str, formats or Format)),
            since=old,
            follow=follow,
        )
    print_summary(built, _console())
    if print_unmet(built, Console(stderr=True, highlight=False, soft_wrap=True)):
        raise typer.Exit(1)


@app.command()
def templates() -> None:
    """List the sheet templates and the keys a job may set in each."""
    from calcpack.overview import print_templates

    print_templates(_console())


@app.command()
def loads(
    job: Annotated[
        Path | None, typer.Option(metavar="JOB", help="A job file whose own occupancies come first.")
    ] = None,
) -> None:
    """List the imposed loads of occupancies, standard by standard, with their sources."""
    from calcpack.job import read_job
    from calcpack.overview import print_loads

    print_loads(_console(), read_job(job).occupancies if job else ())


identities = typer.Typer(no_args_is_help=True, help="Identities to sign with.")
app.add_typer(identities, name="identity")

PassphraseFd = Annotated[
    int | None,
    typer.Option(
        "--passphrase-fd",
        metavar="N",
        help="Read the passphrase from this file descriptor; else CALCPACK_PASSPHRASE, else it is asked for.",
    ),
]
RecordFolder = Annotated[Path | None, typer.Option(metavar="DIR", help="The folder of the register.")]
TrustFiles = Annotated[
    list[Path] | None,
    typer.Option(metavar="CERT.pem", help="A certificate to trust; may be given several times."),
]


def _passphrase(descriptor: int | None, *, confirm: bool = False) -> Callable[[str], str]:
    """Where a passphrase comes from; never from an argument, which other users of a machine can read."""
    from calcpack.record.identity import read_passphrase

    def ask(says: str) -> str:
        given = read_passphrase(descriptor)
        if given is not None:
            return given
        if not sys.stdin.isatty():
            raise CalcpackError(
                "no passphrase was given", remedy="type it, or use --passphrase-fd or CALCPACK_PASSPHRASE"
            )
        return str(typer.prompt(says, hide_input=True, confirmation_prompt=confirm, err=True))

    return ask


def _trusted(files: list[Path] | None) -> tuple[Any, ...]:
    from calcpack.record.certificates import read_certificate_file

    return tuple(each for file in files or () for each in read_certificate_file(file))


@identities.command("new")
def identity_new(
    name: Annotated[str, typer.Option(help="The person's name.")],
    out: Annotated[Path, typer.Option(metavar="ID.p12", help="Where to write it; a .pem is put beside it.")],
    organisation: Annotated[str, typer.Option(help="The person's office.")] = "",
    licence: Annotated[str, typer.Option(help="The person's licence number.")] = "",
    days: Annotated[int, typer.Option(min=1, max=3650, help="How long it is valid.")] = 365,
    passphrase_fd: PassphraseFd = None,
) -> None:
    """Make a self-signed identity for trying signing out; it has no legal force and says so."""
    from calcpack.record.identity import write_identity
    from calcpack.record.verify import clock

    passphrase = _passphrase(passphrase_fd, confirm=True)(f"Passphrase for {out.name}")
    certificate = write_identity(
        out, name, passphrase, clock(), organisation=organisation, licence=licence, days=days
    )
    typer.echo(f"{out}: test identity of {name}, without legal force; its certificate is {certificate}")


@app.command()
def sign(
    files: Annotated[list[Path], typer.Argument(metavar="FILE...", help="pack.pdf, or sheets in HTML.")],
    role: Annotated[SigningRole, typer.Option(help="As what you sign.")],
    identity: Annotated[str, typer.Option(metavar="ID.p12", help="A PKCS#12 file, or a pkcs11: URI.")],
    reason: Annotated[str, typer.Option(help="Shown in place of the usual words.")] = "",
    despite: Annotated[
        str, typer.Option(metavar="REASON", help="Why you sign although a requirement is not satisfied.")
    ] = "",
    timestamp_url: Annotated[str, typer.Option(metavar="URL", help="A time-stamping authority.")] = "",
    long_term: Annotated[
        bool, typer.Option("--long-term", help="Add what a later validation needs.")
    ] = False,
    trust: TrustFiles = None,
    passphrase_fd: PassphraseFd = None,
) -> None:
    """Sign a pack in its place on the cover; a sheet in HTML gets a signature file beside it."""
    from calcpack.record.identity import load_identity
    from calcpack.record.roles import as_role
    from calcpack.record.sign import Signing, sign_file
    from calcpack.record.verify import clock

    signing = Signing(
        as_role(role), load_identity(identity, _passphrase(passphrase_fd)), clock(), reason, despite,
        timestamp_url, long_term, _trusted(trust),
    )  # fmt: skip
    for file in files:
        signed = sign_file(file, signing)
        typer.echo(f"{signed.file}: signed as {role} by {signing.identity.certificate.name}")
        for text in signed.despite:
            typer.echo(f"  despite: {text}")
        for text in signed.notes:
            typer.echo(f"  note: {text}", err=True)


@app.command()
def verify(
    files: Annotated[
        list[Path], typer.Argument(metavar="FILE...", help="Packs, sheets in HTML, .p7s files.")
    ],
    trust: TrustFiles = None,
    record: RecordFolder = None,
    online: Annotated[
        bool, typer.Option("--online", help="Ask the network whether certificates were revoked.")
    ] = False,
    as_json: Annotated[bool, typer.Option("--json", help="Print the report as JSON.")] = False,
) -> None:
    """Say what holds of a signed file: integrity, signers, trust, time, numbers, register."""
    from calcpack.record.signatures import Trust
    from calcpack.record.verify import clock, verify_file

    by = Trust(_trusted(trust), clock(), online)
    reports = [verify_file(file, by, record=record) for file in files]
    passes = all(report.passes for report in reports)
    if as_json:
        data = {"passes": passes, "files": [report.as_data() for report in reports]}
        typer.echo(json.dumps(data, ensure_ascii=False, indent=1))
    else:
        typer.echo("\n".join(report.as_text() for report in reports))
    if not passes:
        raise typer.Exit(1)


@app.command()
def issue(
    out: Annotated[Path, typer.Argument(metavar="OUT", help="The output folder with its signed pack.")],
    purpose: Annotated[str, typer.Option(help='What it is issued for: "for permit".')],
    record: RecordFolder = None,
) -> None:
    """Put a signed pack and all its files into the record, and enter it in the register."""
    from calcpack.record.issue import issue as put
    from calcpack.record.verify import clock

    issued = put(out, purpose, clock(), record)
    entry = issued.entry
    already = " already" if issued.again else ""
    typer.echo(
        f"{issued.register.file}: entry {entry.no}: job {entry.job}, revision {entry.revision}{already}"
    )
    for text in issued.notes:
        typer.echo(f"  note: {text}", err=True)


@app.command()
def compare(
    old: Annotated[str, typer.Argument(metavar="OLD", help="A folder, a pack, or a revision: A, or JOB:A.")],
    new: Annotated[str, typer.Argument(metavar="NEW", help="Likewise.")],
    record: RecordFolder = None,
    as_csv: Annotated[
        Path | None, typer.Option("--csv", metavar="FILE.csv", help="Write every changed line as a table.")
    ] = None,
) -> None:
    """Say what changed between two editions of a pack: beams, inputs, lines, requirements."""
    from calcpack.files import write_file
    from calcpack.record import changes
    from calcpack.record.compare import compare as compared
    from calcpack.record.editions import read_edition

    comparison = compared(read_edition(old, record), read_edition(new, record))
    if as_csv is not None:
        write_file(as_csv, changes.as_csv(comparison).encode())
    typer.echo(changes.as_text(comparison, lines=as_csv is None))


@app.command()
def register(
    record: RecordFolder = None,
    check: Annotated[bool, typer.Option("--check", help="Prove the chain and every stored file.")] = False,
    html: Annotated[Path | None, typer.Option(metavar="FILE.html", help="Write it as a page.")] = None,
) -> None:
    """List what was issued, or prove that the register is whole."""
    from calcpack.record import listing
    from calcpack.record.register import open_register

    book = open_register(record)
    if check:
        problems, notes = book.check()
        for text in problems:
            typer.echo(f"not whole: {text}")
        for text in notes:
            typer.echo(f"note: {text}")
        if problems:
            raise typer.Exit(1)
        entries = book.entries()
        typer.echo(f"{len(entries)} entries, every one and every stored file as it was entered")
        if entries:
            typer.echo(f"the last entry is {entries[-1].hash}")
        return
    entries = book.entries()
    if html is not None:
        from calcpack.files import write_file

        write_file(html, listing.page(entries).encode())
    else:
        listing.print_table(listing.HEADS, listing.rows(entries), _console())


@app.command()
def audit(
    target: Annotated[
        Path,
        typer.Argument(
            metavar="TARGET", help="An output folder, a record, a sheet's PDF or a pack.", show_default=False
        ),
    ],
    record: Annotated[
        Path | None, typer.Option(metavar="DIR", help="Folder with the records, for a PDF that carries none.")
    ] = None,
    job: Annotated[
        Path | None, typer.Option(metavar="JOB", help="The job file the sheets were made from.")
    ] = None,
    sheet: Annotated[str | None, typer.Option(metavar="MARK", help="Only this sheet.")] = None,
    everything: Annotated[bool, typer.Option("--all", help="Every line and figure.")] = False,
    as_json: Annotated[bool, typer.Option("--json", help="As JSON on the output.")] = False,
    report: Annotated[Path | None, typer.Option(metavar="FILE.pdf", help="Also as a document.")] = None,
    trace: Annotated[
        str | None, typer.Option(metavar="LINE", help="The chain behind a line, down to the job file.")
    ] = None,
    who_uses: Annotated[str | None, typer.Option(metavar="LINE", help="What rests on a line.")] = None,
    sensitivity: Annotated[
        str | None, typer.Option(metavar="MARK", help="Which given values move this sheet's result most.")
    ] = None,
    svg: Annotated[Path | None, typer.Option(metavar="FILE.svg", help="The sensitivity as a figure.")] = None,
) -> None:
    """Work out again, by other roads, all that finished sheets state; or follow one line's chain."""
    from calcpack.record.audit_command import Asked, run_audit

    asked = Asked(
        target=target,
        records=record,
        job=job,
        sheet=sheet,
        everything=everything,
        as_json=as_json,
        report=report,
        trace=trace,
        who_uses=who_uses,
        sensitivity=sensitivity,
        svg=svg,
    )
    if not run_audit(asked, _console(), Console(stderr=True)):
        raise typer.Exit(1)


@app.command()
def verification(
    out: Annotated[Path | None, typer.Option(metavar="MANUAL.pdf", help="Write the manual here.")] = None,
    as_json: Annotated[bool, typer.Option("--json", help="Print every comparison as JSON.")] = False,
    tables: Annotated[
        Path | None,
        typer.Option(metavar="DIR", help="Your own tables, in place of the shipped ones."),
    ] = None,
    paper: Annotated[Paper, typer.Option(help="Size of the manual's pages.")] = Paper.A4,
) -> None:
    """Compare the program with published values, and make the verification manual."""
    from calcpack.progress import progress
    from calcpack.verification.command import Asked, print_failing, run_verification

    with progress(Console(stderr=True)) as follow:
        found = run_verification(Asked(out, as_json, tables, paper.value), _console(), follow)
    if not found.holds:
        print_failing(found, Console(stderr=True, highlight=False, soft_wrap=True))
        raise typer.Exit(1)


def main() -> None:
    """Run the command line; every error a user can cause ends in plain words and status 2."""
    try:
        app(standalone_mode=True)
    except CalcpackError as error:
        for problem in error.problems:
            typer.echo(f"error: {problem}", err=True)
        sys.exit(2)


if __name__ == "__main__":
    main()
