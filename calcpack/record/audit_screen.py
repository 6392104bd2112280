"""The audit as the terminal shows it: a row a sheet, everything that is wrong, and all of it on request."""

from __future__ import annotations

import shlex
from collections.abc import Iterator, Mapping, Sequence

from rich.console import Console
from rich.table import Table
from rich.text import Text
from rich.tree import Tree

from calcpack.record.audit_trace import Branch
from calcpack.record.auditing.findings import Audit, Finding, SheetAudit, Verdict, groups_of
from calcpack.record.auditing.reading import RecordLine

COLUMNS = ("line", "says", "printed", "recomputed", "difference", "verdict")
ELSEWHERE = "files together"
MOST_DECISIVE = 12
MOST_WRONG = 60  # rows shown unless all are asked for


def _table(title: str, columns: Sequence[str], right: Sequence[str] = ()) -> Table:
    table = Table(title=Text(title, style="bold"), title_justify="left", box=None, pad_edge=False)
    for head in columns:
        table.add_column(Text(head), justify="right" if head in right else "left", overflow="fold")
    return table


def _row(table: Table, cells: Sequence[str], style: str = "") -> None:
    """Cells are shown as they are, never read as markup."""
    table.add_row(*(Text(cell) for cell in cells), style=style)


def print_audit(audit: Audit, console: Console, *, every: bool = False) -> None:
    """Print an audit.

    Parameters
    ----------
    audit : Audit
    console : rich Console
    every : bool
        Every line and figure, not only what is wrong.
    """
    if every:
        for sheet in audit.all:
            _print_all(sheet, console)
    _print_summary(audit, console)
    _print_decisive(audit, console)
    _print_wrong(audit, console, None if every else MOST_WRONG)
    _print_open(audit, console)
    wrong = sum(len(sheet.wrong) for sheet in audit.all)
    checked = sum(len(sheet.findings) - len(sheet.open) for sheet in audit.all)
    console.print()
    if wrong:
        console.print(Text(f"{wrong} of {checked} figures looked at are wrong.", style="bold"))
    else:
        console.print(Text(f"{checked} figures looked at, none is wrong.", style="bold"))
    _print_next(audit, console)


def decisive_rows(audit: Audit) -> list[list[str]]:
    """What decides on each sheet, the highest ratio first: sheet, line, words, value."""
    found = [sheet.decisive for sheet in audit.sheets if sheet.decisive is not None]
    found.sort(key=lambda each: -1.0 if each.ratio is None else each.ratio, reverse=True)
    return [[each.mark, each.no, each.says, each.shown] for each in found]


def _print_decisive(audit: Audit, console: Console) -> None:
    rows = decisive_rows(audit)
    if not rows:
        return
    console.print()
    table = _table(
        "What decides", ["sheet", "line", "the governing check, else the largest moment", "is"], ["is"]
    )
    for row in rows[:MOST_DECISIVE]:
        _row(table, row)
    console.print(table)
    if len(rows) > MOST_DECISIVE:
        console.print(Text(f"... and {len(rows) - MOST_DECISIVE} more sheets with less."))


def _print_next(audit: Audit, console: Console) -> None:
    """The commands that lead on from here, made out for the sheet that is nearest to its limit."""
    rows = decisive_rows(audit)
    if not rows:
        return
    mark, no, *_ = rows[0]
    begin = f"calcpack audit {shlex.quote(audit.target)}"
    asked = f" --sheet {shlex.quote(mark)}" if len(audit.sheets) > 1 else ""
    ways = {
        f"{begin}{asked} --trace {no}": f"where line {no} of sheet {mark} comes from, down to the job file",
        f"{begin} --sensitivity {shlex.quote(mark)}": "which given values move it most",
        f"{begin}{asked} --who-uses LINE": "what rests on one of them",
    }
    console.print()
    table = _table("To go on", ["command", "shows"])
    for command, shows in ways.items():
        _row(table, [command, shows])
    console.print(table)


def summary_rows(audit: Audit) -> tuple[list[str], list[list[str]]]:
    """The heads and rows of the summary: for each sheet how many of each group agree."""
    groups = [group for group in groups_of(audit.sheets) if group != "pack"]
    rows = []
    for sheet in audit.sheets:
        counts = [sheet.count(group) for group in groups]
        cells = ["–" if not of else str(of) if right == of else f"{right} of {of}" for right, of in counts]
        verdict = f"{len(sheet.wrong)} wrong" if sheet.wrong else "agrees"
        rows.append([sheet.mark, *cells, f"{sheet.farthest:.0e}", verdict])
    return ["sheet", *groups, "largest difference", "verdict"], rows


def _print_summary(audit: Audit, console: Console) -> None:
    heads, rows = summary_rows(audit)
    table = _table(f"Audit of {audit.target}", heads, heads[1:-1])
    for row in rows:
        _row(table, row, "bold" if row[-1] != "agrees" else "")
    console.print(table)
    right, of = audit.together.count("pack")
    if of:
        console.print(Text(f"Files together: {right} of {of} agree."))


def wrong_rows(audit: Audit) -> Iterator[list[str]]:
    """Everything that is wrong: sheet, place, words, stated, recomputed, what is wrong."""
    for sheet in audit.all:
        for each in sheet.wrong:
            yield [
                sheet.mark or ELSEWHERE,
                f"{each.place}" + (" (pages)" if each.group == "pages" else ""),
                each.says,
                each.printed,
                each.recomputed,
                each.remark,
            ]


def _print_wrong(audit: Audit, console: Console, most: int | None) -> None:
    found = list(wrong_rows(audit))
    if not found:
        return
    console.print()
    rows = found[:most]
    table = _table("What is wrong", ["sheet", "where", "says", "stated", "recomputed", "what is wrong"])
    for row in rows:
        _row(table, row)
    console.print(table)
    if len(found) > len(rows):
        console.print(
            Text(f"... and {len(found) - len(rows)} more; --all, --json and --report have them all.")
        )


def open_rows(audit: Audit) -> list[tuple[str, str]]:
    """What could not be checked, by reason, with the sheets it concerns."""
    by_reason: dict[str, dict[str, None]] = {}
    for sheet in audit.all:
        for each in sheet.open:
            by_reason.setdefault(f"{_what(each)}: {each.remark}", {})[sheet.mark or ELSEWHERE] = None
    return [(reason, _listed(list(sheets))) for reason, sheets in by_reason.items()]


def _what(finding: Finding) -> str:
    if not finding.place.startswith("lines "):
        return finding.place
    return (
        "values that neither job nor results hold (--all lists them)"
        if finding.says.startswith("brought")
        else finding.says
    )


def _listed(marks: Sequence[str]) -> str:
    if len(marks) > 12:
        return f"{', '.join(marks[:10])} and {len(marks) - 10} more"
    return ", ".join(marks)


def _print_open(audit: Audit, console: Console) -> None:
    rows = open_rows(audit)
    if not rows:
        return
    console.print()
    table = _table("Not checkable from these files", ["what and why", "sheets"])
    for row in rows:
        _row(table, row)
    console.print(table)


def _print_all(sheet: SheetAudit, console: Console) -> None:
    """Every finding of a sheet, as a table a reader follows."""
    if not sheet.findings:
        return
    table = _table(f"Sheet {sheet.mark}" if sheet.mark else "Files together", COLUMNS, COLUMNS[2:5])
    for each in sheet.findings:
        verdict = str(each.verdict) + (f": {each.remark}" if each.remark else "")
        place = each.place.removeprefix("line ")
        where = place if each.group in ("lines", "results", "pack") else f"{place} ({each.group})"
        style = "bold" if each.verdict is Verdict.WRONG else ""
        _row(table, [where, each.says, each.printed, each.recomputed, each.difference, verdict], style)
    console.print(table)
    console.print()


def print_branch(root: Branch, console: Console) -> None:
    """Print a chain of lines as a tree."""

    def label(branch: Branch) -> Text:
        text = Text(branch.head)
        for part, style in ((branch.body, ""), (branch.tail, "dim")):
            if part:
                text.append("  ")
                text.append(part, style=style)
        return text

    def grow(tree: Tree, branch: Branch) -> None:
        for each in branch.branches:
            grow(tree.add(label(each)), each)

    tree = Tree(label(root))
    grow(tree, root)
    console.print(tree)


def print_influence(
    title: str, rows: Sequence[tuple[RecordLine, float, float]], console: Console, values: Mapping[str, str]
) -> None:
    """Print which given values move a result most.

    Parameters
    ----------
    rows : sequence of (line, influence, derivative)
        Influence is the change of the result in per cent for one per cent of the value.
    values : mapping
        Line number -> unit of the derivative.
    """
    table = _table(
        title,
        ["line", "given value", "is", "1 % more gives", "derivative"],
        ["is", "1 % more gives", "derivative"],
    )
    for line, influence, derivative in rows:
        _row(
            table,
            [
                line.no,
                line.says,
                f"{line.symbol} = {line.shown}",
                f"{influence:+.3f} %",
                f"{derivative:.4g} {values.get(line.no, '').strip()}".strip(),
            ],
        )
    console.print(table)
