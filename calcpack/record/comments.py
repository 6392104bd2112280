"""Answers to review comments: ``comments.csv`` beside the job as a section of the pack."""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from calcpack.export.pack import Section
from calcpack.job.errors import CalcpackError, Problem, nearest

FILE = "comments.csv"
COLUMNS = ("no", "sheet", "comment", "answer", "line")
LARGEST = 1_000_000  # bytes


def comments_section(folder: Path, lines: Mapping[str, frozenset[str]]) -> Section | None:
    """The answers to the comments of a review; None where no ``comments.csv`` stands beside the job.

    Parameters
    ----------
    folder : Path
        Of the job file.
    lines : mapping of mark to set of str
        The numbers of every sheet's lines.

    Returns
    -------
    Section or None
        A table: number, comment, answer, and where to find it.

    Raises
    ------
    CalcpackError
        A column is missing or unknown, or a comment names a sheet or line that is not there; all of them
        are named.
    """
    path = folder / FILE
    if not path.is_file():
        return None
    data = path.read_bytes()
    if len(data) > LARGEST:
        raise CalcpackError("it is larger than a list of comments can be", file=FILE)
    try:
        reader = csv.reader(io.StringIO(data.decode("utf-8-sig")), strict=True)
        rows = [(reader.line_num, row) for row in reader]
    except (UnicodeDecodeError, csv.Error) as error:
        raise CalcpackError(
            f"it cannot be read: {error}", file=FILE, remedy="save it as CSV in UTF-8"
        ) from None
    rows = [(number, row) for number, row in rows if any(cell.strip() for cell in row)]
    if not rows:
        return None
    heads = [head.strip().rstrip(".").casefold() for head in rows[0][1]]
    problems = [
        Problem(f"there is no column '{head}'", nearest(head, COLUMNS), file=FILE, line=rows[0][0])
        for head in heads
        if head not in COLUMNS
    ]
    problems += [
        Problem(f"the column '{need}' is missing", file=FILE, line=rows[0][0])
        for need in COLUMNS[:4]
        if need not in heads
    ]
    if problems:
        raise CalcpackError(*problems)
    shown: list[list[Any]] = []
    for number, cells in rows[1:]:
        given = dict(zip(heads, (cell.strip() for cell in cells), strict=False))
        place, wrong = _place(given, lines)
        problems += [problem.at(file=FILE, line=number) for problem in wrong]
        answer: Any = given.get("answer") or [{"strong": "not answered yet"}]
        shown.append([given.get("no", ""), given.get("comment", ""), answer, place])
    if problems:
        raise CalcpackError(*problems)
    table = {
        "type": "table",
        "columns": [{"head": head} for head in ("no.", "comment", "answer", "sheet and line")],
        "rows": shown,
    }
    return Section.of("Answers to review comments", [table])


def _place(given: Mapping[str, str], lines: Mapping[str, frozenset[str]]) -> tuple[list[Any], list[Problem]]:
    """Where an answer leads: to a line, to a sheet, or to the pack as a whole."""
    sheet, line = given.get("sheet", ""), given.get("line", "")
    if not sheet:
        return ["the pack"], [Problem(f"line {line} of which sheet?", "name the sheet")] if line else []
    if sheet not in lines:
        return [], [Problem(f"there is no sheet '{sheet}'", nearest(sheet, lines))]
    if not line:
        return [{"line": sheet}], []
    if line not in lines[sheet]:
        return [], [Problem(f"sheet {sheet} has no line {line}", nearest(line, sorted(lines[sheet])))]
    return [{"line": f"{sheet} {line}"}], []
