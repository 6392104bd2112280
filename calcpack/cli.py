"""The command line: one thin function a command."""

from __future__ import annotations

import sys
from enum import StrEnum
from pathlib import Path
from typing import Annotated

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
    from calcpack.overview import print_overview, write_plan

    framed = frame(read_job(job))
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
) -> None:
    """Make the calculation sheets of a job and bind them into a pack."""
    from calcpack.build import build_job
    from calcpack.overview import print_summary, print_unmet, progress

    with progress(Console(stderr=True)) as follow:
        built = build_job(
            job, out, only=tuple(only or ()), formats=frozenset(map(str, formats or Format)), follow=follow
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
def loads() -> None:
    """List the imposed loads of occupancies, standard by standard, with their sources."""
    from calcpack.overview import print_loads

    print_loads(_console())


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
