"""What the command ``audit`` does, asked for as data."""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path

from rich.console import Console

from calcpack.files import write_file
from calcpack.job.errors import CalcpackError
from calcpack.progress import progress
from calcpack.record.audit import audit_target, choose_sheet, open_sheet
from calcpack.record.audit_screen import print_audit, print_branch, print_influence
from calcpack.record.audit_sensitivity import MOST_ROWS, sensitivity
from calcpack.record.audit_trace import job_data, trace, who_uses
from calcpack.record.auditing.files import find_target


@dataclass(frozen=True)
class Asked:
    """What is asked of the command; every field as its option says."""

    target: Path
    records: Path | None = None
    job: Path | None = None
    sheet: str | None = None
    everything: bool = False
    as_json: bool = False
    report: Path | None = None
    trace: str | None = None
    who_uses: str | None = None
    sensitivity: str | None = None
    svg: Path | None = None


def run_audit(asked: Asked, console: Console, aside: Console) -> bool:
    """Do what is asked and say whether nothing is wrong.

    Parameters
    ----------
    asked : Asked
    console, aside : rich Console
        For what is found, and for how far it is.

    Raises
    ------
    CalcpackError
        Something cannot be read, or there is no such line or sheet.
    """
    if asked.svg is not None and asked.sensitivity is None:
        raise CalcpackError("--svg draws a sensitivity", remedy="name a sheet with --sensitivity")
    if asked.trace is not None or asked.who_uses is not None:
        _follow_line(asked, console)
        return True
    if asked.sensitivity is not None:
        _influences(asked, asked.sensitivity, console)
        return True
    with progress(aside, plain=True) as follow:
        audit = audit_target(
            asked.target, records=asked.records, job=asked.job, only=asked.sheet, follow=follow
        )
    if asked.as_json:
        console.file.write(json.dumps(audit.data(), ensure_ascii=False, indent=1) + "\n")
    else:
        print_audit(audit, console, every=asked.everything)
    if asked.report is not None:
        from calcpack.record.audit_report import audit_report

        write_file(asked.report, audit_report(audit, every=asked.everything))
    return audit.passes


def _follow_line(asked: Asked, console: Console) -> None:
    target = find_target(asked.target, records=asked.records, job=asked.job)
    opened = open_sheet(choose_sheet(target, asked.sheet))
    if asked.trace is not None:
        print_branch(trace(opened.record, asked.trace, job_data(target.inputs)), console)
    if asked.who_uses is not None:
        print_branch(who_uses(opened.record, asked.who_uses), console)


def _influences(asked: Asked, mark: str, console: Console) -> None:
    target = find_target(asked.target, records=asked.records, job=asked.job)
    opened = open_sheet(choose_sheet(target, mark))
    found = sensitivity(opened.record, opened.lines)
    rows = [(each.line, each.relative, each.derivative) for each in found.influences[:MOST_ROWS]]
    units = {each.line.no: _per(found.unit, each.line.unit) for each in found.influences}
    title = f"What moves line {found.no} of sheet {opened.record.mark}: {found.says}, {found.shown}"
    print_influence(title, rows, console, units)
    if asked.svg is not None:
        from calcpack.figures import influence_figure

        bars = [(each.line.no, each.line.says, each.relative) for each in found.influences[:MOST_ROWS]]
        write_file(asked.svg, influence_figure(bars, found.says).svg.encode("utf-8"))


def _per(of: str, by: str) -> str:
    """A derivative's unit in words; a plain number is not named."""
    return ("" if of == "1" else of) + ("" if by == "1" else f" per {by}")
