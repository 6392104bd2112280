"""The audit as a document for the file."""

from __future__ import annotations

import datetime
from collections.abc import Mapping
from typing import Any

from calcpack.export.text import shown_date
from calcpack.export.typesetting import Setting, typeset, with_known_letters
from calcpack.record.audit_screen import COLUMNS, open_rows, summary_rows, wrong_rows
from calcpack.record.auditing.findings import Audit, Verdict

ROADS = (
    "Lines: each stored formula read within bounds and worked out in thirty digits, with an evaluator, a "
    "unit table and a reading of printed texts that are the audit's own; value to 1e-9, dimension, links, "
    "order; the printed text as the value (twelve significant digits, halves away from zero) rounded "
    "at its last digit; every requirement decided again.",
    "Results: the beam solved again by finite elements from its loads; spans taken alone; combinations with "
    "live load placed where it is worst; reactions handed on from beam to beam; supports against what is "
    "applied.",
    "Loads: panels divided again among their edges; pressure times depth; sections from their dimensions; "
    "the job file read again where it is at hand.",
    "Papers: the notebook's copy of the record and what it shows of each line; the visible text of the PDF; "
    "hashes of template, input and files.",
)


def audit_report(audit: Audit, *, every: bool = False, paper: str = "a4") -> bytes:
    """Set the audit as a PDF.

    Parameters
    ----------
    audit : Audit
    every : bool
        With every line of every sheet.
    paper : str
        As Typst names it.

    Returns
    -------
    bytes
        Equal for equal audits; the date is the job's.
    """
    header: Mapping[str, Any] = audit.sheets[0].header if audit.sheets else {}
    date = _date(header)
    heads, rows = summary_rows(audit)
    right, of = audit.together.count("pack")
    data = {
        "paper": paper,
        "title": f"Audit of job {header.get('number', '')}",
        "job": " · ".join(str(header[key]) for key in ("number", "title", "site") if header.get(key)),
        "facts": [
            ["job", " · ".join(str(header[key]) for key in ("number", "title") if header.get(key))],
            ["revision", f"{header.get('revision', '')}, {shown_date(date)}"],
            ["audited", audit.target.rsplit("/", 1)[-1]],
            ["by", f"{audit.program}, audit; independent of the program's own arithmetic"],
            ["result", "nothing is wrong" if audit.passes else "something is wrong, see below"],
            ["files together", f"{right} of {of} agree" if of else "not at hand"],
        ],
        "date": [date.year, date.month, date.day],
        "roads": list(ROADS),
        "summary": {"heads": heads, "rows": rows},
        "wrong": [list(row) for row in wrong_rows(audit)],
        "open": [list(row) for row in open_rows(audit)],
        "sheets": [
            {
                "name": f"Sheet {sheet.mark}" if sheet.mark else "Files together",
                "heads": list(COLUMNS),
                "rows": [
                    [
                        each.place.removeprefix("line "),
                        each.says,
                        each.printed,
                        each.recomputed,
                        each.difference,
                        str(each.verdict) + (f": {each.remark}" if each.remark else ""),
                    ]
                    for each in sheet.findings
                    if each.group in ("lines", "results", "pack") or each.verdict is not Verdict.AGREES
                ],
            }
            for sheet in (audit.all if every else ())
            if sheet.findings
        ],
    }
    return typeset(Setting("audit.typ", _settable(data), date)).pdf


def _date(header: Mapping[str, Any]) -> datetime.date:
    try:
        return datetime.date.fromisoformat(str(header.get("date", "")))
    except ValueError:
        return datetime.date(2000, 1, 1)


def _settable(data: Any) -> Any:
    """All texts with letters that the page's faces have."""
    if isinstance(data, str):
        return with_known_letters(data)
    if isinstance(data, dict):
        return {key: _settable(each) for key, each in data.items()}
    return [_settable(each) for each in data] if isinstance(data, list) else data
