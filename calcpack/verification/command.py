"""What the command ``verification`` does, asked for as data."""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path
from typing import Literal

from rich.console import Console
from rich.text import Text

from calcpack.files import write_file
from calcpack.job.errors import CalcpackError
from calcpack.progress import Follow
from calcpack.record.listing import print_table
from calcpack.verification import shown
from calcpack.verification.findings import Findings, Summary, verify

HEADS = (
    "topic",
    "values",
    "from memory",
    "by hand, own",
    "largest, of what is allowed",
    "other methods",
    "verdict",
)


@dataclass(frozen=True)
class Asked:
    """What is asked of the command; every field as its option says."""

    out: Path | None = None
    as_json: bool = False
    tables: Path | None = None
    paper: Literal["A4", "Letter"] = "A4"


def run_verification(asked: Asked, console: Console, follow: Follow | None = None) -> Findings:
    """Compare everything, print the summary or all of it as JSON, and write the manual.

    Parameters
    ----------
    asked : Asked
    console : rich Console
        For what is found.
    follow : callable
        Hears how far it is.

    Returns
    -------
    Findings

    Raises
    ------
    CalcpackError
        A table is not as it should be, or the manual cannot be written; then nothing is.
    """
    _check(asked)
    found = verify(asked.tables, follow)
    if asked.out is not None:
        from calcpack.verification.manual import manual_pdf

        _tell(follow, "pages", 0)
        written = manual_pdf(found, asked.paper)
        _tell(follow, "pages", 1)
        write_file(asked.out, written)
    if asked.as_json:
        console.file.write(json.dumps(found.as_data(), ensure_ascii=False, indent=1, allow_nan=False) + "\n")
    else:
        print_table(HEADS, [summary_row(each) for each in (*found.summaries, found.whole)], console)
    return found


def print_failing(found: Findings, console: Console) -> None:
    """Name what does not hold."""
    for each in found.failing:
        console.print(Text(f"does not hold: {each}"))


def summary_row(summary: Summary) -> list[str]:
    """A topic as the terminal shows it."""
    numbers = (summary.comparisons, summary.from_memory, summary.by_hand)
    return [
        summary.name,
        *(str(number) if summary.comparisons else "–" for number in numbers),
        shown.of_allowed(summary.largest) if summary.comparisons else "–",
        str(summary.methods),
        "all hold" if not summary.failing else f"{summary.failing} do not hold",
    ]


def _tell(follow: Follow | None, stage: str, done: int) -> None:
    if follow:
        follow(stage, done, 1)


def _check(asked: Asked) -> None:
    """Refuse at once what can be refused before anything is worked out."""
    if asked.out is not None and asked.out.is_dir():
        raise CalcpackError(f"'{asked.out}' is a folder", remedy="name a file: manual.pdf")
    if asked.out is not None and not asked.out.absolute().parent.is_dir():
        raise CalcpackError(
            f"'{asked.out}' cannot be written: there is no folder '{asked.out.absolute().parent.name}'",
            remedy="name a folder that exists and is yours",
        )
    if asked.tables is not None and not asked.tables.is_dir():
        raise CalcpackError(
            f"'{asked.tables}' is no folder",
            remedy="name a folder with files like those of shared/verification",
        )
