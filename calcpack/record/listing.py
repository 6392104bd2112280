"""The register as a table for people: in the terminal and as a page."""

from __future__ import annotations

from collections.abc import Sequence

from markupsafe import escape
from rich.console import Console
from rich.table import Table
from rich.text import Text

from calcpack.export.text import clean
from calcpack.record.register import Entry

HEADS = (
    "no.",
    "issued",
    "job",
    "title",
    "revision",
    "purpose",
    "signed by",
    "not satisfied",
    "pack (SHA-256)",
)


def rows(entries: Sequence[Entry]) -> list[tuple[str, ...]]:
    """One row an entry, as text."""
    return [
        (
            str(entry.no),
            entry.time.replace("T", " ").removesuffix("Z") + " UTC",
            entry.job,
            entry.title,
            entry.revision,
            entry.purpose,
            ", ".join(_signer(each.role, each.name, each.test) for each in entry.signatures),
            _unmet(entry),
            entry.pack[:16],
        )
        for entry in entries
    ]


def _signer(role: str, name: str, test: bool) -> str:
    return f"{role} {name}" + (" (test identity)" if test else "")


def _unmet(entry: Entry) -> str:
    if not entry.unmet:
        return "–"
    despite = next((each.despite for each in entry.signatures if each.despite), "")
    return f"{len(entry.unmet)}: {despite}" if despite else str(len(entry.unmet))


def print_table(heads: Sequence[str], rows: Sequence[Sequence[str]], console: Console) -> None:
    """Print rows under their heads; text is shown as it is."""
    table = Table(box=None, pad_edge=False)
    for head in heads:
        table.add_column(Text(head, style="bold"), overflow="fold")
    for row in rows:
        table.add_row(*(Text(clean(cell)) for cell in row))
    console.print(table)


_PAGE = """<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>Register of issued packs</title>
<style>
body {{ font: 15px/1.5 Georgia, serif; color: #1b232d; margin: 2rem; }}
table {{ border-collapse: collapse; }}
th, td {{ text-align: left; vertical-align: top; padding: .3rem .8rem .3rem 0; }}
th, td {{ border-bottom: 1px solid #a9b2bb; }}
th {{ border-bottom-color: #1b232d; }}
td:last-child {{ font-family: monospace; }}
</style>
</head>
<body>
<h1>Register of issued packs</h1>
<table>
<thead><tr>{heads}</tr></thead>
<tbody>
{body}
</tbody>
</table>
<p>Each entry carries the hash of the one before; the last one is {last}.</p>
</body>
</html>
"""


def page(entries: Sequence[Entry]) -> str:
    """The register as one page without script."""
    body = "\n".join(
        f"<tr>{''.join(f'<td>{escape(cell)}</td>' for cell in row)}</tr>" for row in rows(entries)
    )
    return _PAGE.format(
        heads="".join(f'<th scope="col">{escape(head)}</th>' for head in HEADS),
        body=body,
        last=f"<code>{entries[-1].hash}</code>" if entries else "none yet",
    )
