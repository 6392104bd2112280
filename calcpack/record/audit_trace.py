"""The chain behind a line, down to the keys of the job file, and the lines that rest on it."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from calcpack.job.errors import CalcpackError, nearest
from calcpack.record.auditing.formulas import read_formula
from calcpack.record.auditing.reading import Record, RecordLine
from calcpack.record.auditing.written import written

MOST = 2_000  # branches of a tree
LONGEST = 60  # letters of a formula in it


@dataclass
class Branch:
    """A line in a chain, with what it rests on or what rests on it.

    Parameters
    ----------
    head, body, tail : str
        Number and symbol with its value; words; clause or origin.
    branches : list of Branch
    """

    head: str
    body: str = ""
    tail: str = ""
    branches: list[Branch] = field(default_factory=list)


def _line_of(record: Record, asked: str) -> RecordLine:
    """A line by its number, or by its symbol."""
    for line in record.lines:
        if line.no == asked:
            return line
    named = [line for line in record.lines if line.symbol == asked and asked]
    if len(named) == 1:
        return named[0]
    if named:
        numbers = ", ".join(line.no for line in named)
        raise CalcpackError(f"'{asked}' is the symbol of lines {numbers}", remedy="name one by its number")
    known = [*(line.no for line in record.lines), *(line.symbol for line in record.lines if line.symbol)]
    raise CalcpackError(f"there is no line '{asked}' on sheet {record.mark}", remedy=nearest(asked, known))


def _branch(line: RecordLine) -> Branch:
    formula = "" if line.kind == "take" else _formula(line)
    if line.kind == "require":
        value = f"{formula}: {line.shown}"
    elif formula:
        value = f"{line.symbol} = {formula} = {line.shown}"
    else:
        value = f"{line.symbol} = {line.shown}"
    return Branch(f"{line.no}  {value}", line.says, line.origin or line.cite)


def _formula(line: RecordLine) -> str:
    """The stored formula as text; one too long for a row is left out."""
    text = written(read_formula(line.expression))
    return text if len(text) <= LONGEST else "…"


def trace(record: Record, asked: str, job: Mapping[str, Any] | None = None) -> Branch:
    """The whole chain behind a line.

    Parameters
    ----------
    record : Record
    asked : str
        Number or symbol of the line.
    job : mapping
        The job file as data, where it is at hand: the key behind each given value is shown with its text.

    Raises
    ------
    CalcpackError
        There is no such line.

    Examples
    --------
    A line that occurs twice is drawn out once.
    """
    by_number = {line.no: line for line in record.lines}
    drawn: set[str] = set()
    count = 0

    def grow(line: RecordLine, above: Sequence[str]) -> Branch:
        nonlocal count
        count += 1
        branch = _branch(line)
        if line.no in above or count > MOST:
            branch.tail = "…"
            return branch
        if line.kind == "take":
            if (found := job_text(line.origin or "", job)) is not None:
                branch.branches.append(Branch(found))
            return branch
        if line.no in drawn and line.inputs:
            branch.tail = "as drawn above"
            return branch
        drawn.add(line.no)
        for no in dict.fromkeys(line.inputs.values()):
            if no in by_number:
                branch.branches.append(grow(by_number[no], (*above, line.no)))
        return branch

    return grow(_line_of(record, asked), ())


def who_uses(record: Record, asked: str) -> Branch:
    """Every line that rests on a line, and what rests on those in turn.

    Raises
    ------
    CalcpackError
        There is no such line.
    """
    drawn: set[str] = set()

    def grow(line: RecordLine) -> Branch:
        branch = _branch(line)
        if line.no in drawn:
            branch.tail = "as drawn above"
            return branch
        drawn.add(line.no)
        users = [each for each in record.lines if line.no in each.inputs.values() and each.no != line.no]
        branch.branches = [grow(each) for each in users if each.rank > line.rank]
        return branch

    return grow(_line_of(record, asked))


_PLACE = re.compile(r"(?P<kind>panel|beam|section|material) (?P<rest>.+)")
_TABLES = {"section": "sections", "material": "materials"}


def job_text(origin: str, job: Mapping[str, Any] | None) -> str | None:
    """What the job file says at an origin, as it is written there; None where that is not at hand.

    Examples
    --------
    >>> job_text("panel P1 live", {"panel": [{"mark": "P1", "live": "3 kPa"}]})
    "job file: panel P1, live = '3 kPa'"
    >>> job_text("section edge depth", {"sections": {"edge": {"depth": "500 mm"}}})
    "job file: section edge, depth = '500 mm'"
    """
    match = _PLACE.match(origin)
    if job is None or not match:
        return None
    kind, rest = match["kind"], match["rest"]
    if kind in _TABLES:
        table = job.get(_TABLES[kind])
        entries: list[tuple[Any, Any]] = list(table.items()) if isinstance(table, dict) else []
    else:
        rows = job.get(kind)
        held = rows if isinstance(rows, list) else ()
        entries = [(row.get("mark"), row) for row in held if isinstance(row, dict)]
    for mark, entry in sorted(entries, key=lambda each: -len(str(each[0]))):
        if not rest.startswith(f"{mark} ") or not isinstance(entry, dict):
            continue
        path = rest[len(str(mark)) + 1 :]
        value: Any = entry
        if load := re.match(r"load ([0-9]+) ?(.*)", path):
            loads = entry.get("load")
            number = int(load[1]) - 1
            value = loads[number] if isinstance(loads, list) and number < len(loads) else None
            path = load[2]
            where = f"job file: {kind} {mark}, load {number + 1}"
        else:
            where = f"job file: {kind} {mark}"
        for key in path.split(".") if path else ():
            value = value.get(key) if isinstance(value, dict) else None
        if value is None:
            return None
        return f"{where}{', ' + path if path else ''} = {value!r:.80}"
    return None


def job_data(inputs: Mapping[str, bytes]) -> Mapping[str, Any] | None:
    """The job file as data, where it is among the inputs."""
    for name, content in inputs.items():
        if name.endswith(".toml"):
            try:
                return tomllib.loads(content.decode("utf-8"))
            except ValueError:
                return None
    return None
