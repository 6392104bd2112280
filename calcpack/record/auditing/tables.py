"""The tables of a sheet: what their cells show against the lines and results of the record."""

from __future__ import annotations

import re
from bisect import bisect_left
from collections.abc import Generator, Iterator, Mapping, Sequence
from typing import Any

from calcpack.record.auditing.findings import Finding, good, unchecked, wrong
from calcpack.record.auditing.given import Notebook
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.pages import bare
from calcpack.record.auditing.printed import Printed, read_printed
from calcpack.record.auditing.reading import Record
from calcpack.record.auditing.units import printed_unit

_GROUP = "second copy"
_HALF = 0.5 + 1e-6  # of the last printed digit
_CASES = {
    "dead load": "dead",
    "live load": "live",
    "roof live load": "roof_live",
    "snow load": "snow",
}
_CRITERIA = {
    "shear": "shear",
    "moment": "moment",
    "deflection": "deflection",
    "fixed-end moment": "fixed_end_moment",
    "total": "total",
}
_COMBINATIONS = ["combination", "limit state"]
_SPAN = re.compile(r"Span ([0-9]{1,3}), ([a-z ]{1,60}):")
_OVER = {"V": "shear", "M": "moment", "δ": "deflection", "end M": "fixed_end_moment"}
_LARGEST = {
    "moment, sagging": (("envelope", "moment_max", 1.0), ("envelope", "moment_max_at", 1.0)),
    "moment, hogging": (("envelope", "moment_min", 1.0), ("envelope", "moment_min_at", 1.0)),
    "shear": (("envelope", "shear_max", 1.0), None),
    "deflection, total": (("deflection", "total_mm", 1e-3), None),
    "deflection, live load": (("deflection", "live_mm", 1e-3), None),
}
Cells = dict[tuple[int, int], float]


def audit_tables(record: Record, notebook: Notebook | None, lines: Sequence[WorkedLine]) -> Iterator[Finding]:
    """Hold the cells of each table against what they repeat, rounded as they are shown.

    A cell of the tables of extremes, combinations, reactions and equivalents has one value in the results
    that it shows. Any other number is some line's or result's; where none has it, that is said.

    Parameters
    ----------
    record : Record
    notebook : Notebook or None
    lines : sequence of WorkedLine

    Yields
    ------
    Finding
        One a table that agrees, one a cell that is wrong, one of all cells that nothing holds.
    """
    pool, strange = _Pool(record, lines), 0
    for number, table in enumerate(notebook.tables if notebook is not None else (), start=1):
        heads = [_text(column.get("head")) for column in table["columns"] if isinstance(column, dict)]
        rows = [[_text(cell) for cell in row] for row in table["rows"] if isinstance(row, list)]
        caption = _text(table.get("caption"))
        place = f"table {number}, {caption[:40]}".rstrip(", ")
        expected = _expected(caption, heads, rows, record.results)
        if heads[:2] == _COMBINATIONS and not expected:
            yield wrong(_GROUP, place, "the results have other combinations")
        strange += yield from _audited(place, heads, rows, expected, pool)
    if strange:
        yield unchecked(_GROUP, "numbers in tables", "no line and no result has them")


def _audited(
    place: str, heads: Sequence[str], rows: Sequence[Sequence[str]], expected: Cells, pool: _Pool
) -> Generator[Finding, None, int]:
    """A table's findings; returns how many of its numbers nothing holds."""
    held = faults = strange = 0
    for i, row in enumerate(rows):
        for j, text in enumerate(row):
            shown = _read(text, heads[j] if j < len(heads) else "")
            value = expected.get((i, j))
            if value is not None and (shown is None or not _is(value, shown)):
                faults += 1
                where = f"{place}: {row[0][:40]}, {heads[j][:40]}"
                yield wrong(
                    _GROUP, where, "the results say otherwise", printed=text[:40], other=f"{value:.6g}"
                )
            elif value is not None or (shown is not None and pool.holds(shown)):
                held += 1
            elif shown is not None and shown.step != 1 and shown.number:
                strange += 1
    if held and not faults:
        yield good(_GROUP, place, f"{held} cells as lines and results have them")
    return strange


def shown_rows(notebook: Notebook | None) -> list[str]:
    """The rows of its tables as one string of letters each, as far as no cell holds mathematics."""
    rows = []
    for table in notebook.tables if notebook is not None else ():
        for row in table["rows"]:
            if isinstance(row, list) and not _has_math(row):
                rows.append("|".join(bare(_text(cell)) for cell in row))
    return rows


def _has_math(runs: object) -> bool:
    return any(
        "math" in each if isinstance(each, dict) else isinstance(each, list) and _has_math(each)
        for each in (runs if isinstance(runs, list) else [runs])
    )


def _text(runs: object) -> str:
    """Runs as they are read, mathematics as it is written."""
    if isinstance(runs, str):
        return runs
    if isinstance(runs, dict):
        return str(next(iter(runs.values()), ""))
    return "".join(_text(each) for each in runs) if isinstance(runs, list) else ""


def _read(text: str, head: str) -> Printed | None:
    """A cell's value; a unit may stand in its column's head."""
    try:
        shown = read_printed(text)
    except ValueError:
        return None
    unit = head.rsplit(" ", 1)[-1]
    if shown.unit.dimension == (0, 0) and unit != head:
        try:
            return Printed(shown.number, shown.step, printed_unit(unit))
        except ValueError:
            return shown
    return shown


def _is(value: float, shown: Printed) -> bool:
    """Whether a value in kN and m is the one shown."""
    return abs(value - shown.near) <= _HALF * shown.near_step + 1e-12


class _Pool:
    """All values that lines and results hold, by dimension."""

    def __init__(self, record: Record, lines: Sequence[WorkedLine]) -> None:
        found: dict[tuple[Any, Any], list[float]] = {}
        for line in lines:
            for each in (line.value, *(line.sides or ())):
                if each is not None:
                    found.setdefault(each.dimension, []).append(each.near)
        for value, dimension in (*_stated(record.results), *_resultants(record.results)):
            found.setdefault(dimension, []).append(value)
        self._sorted = {dimension: sorted(values) for dimension, values in found.items()}

    def holds(self, shown: Printed) -> bool:
        """Whether one of them is shown, by size: a table may tell a direction in words."""
        values = self._sorted.get(shown.unit.dimension, [])
        slack = _HALF * shown.near_step + 1e-12
        for middle in (shown.near, -shown.near):
            place = bisect_left(values, middle - slack)
            if place < len(values) and values[place] <= middle + slack:
                return True
        return False


def _stated(results: Mapping[str, Any], key: str = "") -> Iterator[tuple[float, tuple[int, int]]]:
    """Numbers of the results in kN and m with their dimensions, which their keys tell."""
    for name, each in results.items() if isinstance(results, dict) else enumerate(results):
        inner = name if isinstance(name, str) else key
        if isinstance(each, dict | list):
            yield from _stated(each, inner)  # type: ignore[arg-type]
        elif isinstance(each, int | float) and not isinstance(each, bool):
            if inner.endswith("_mm"):
                yield each / 1000, (0, 1)
            elif inner.endswith("_at") or inner in ("at", "from", "to", "spans", "supports"):
                yield float(each), (0, 1)
            elif inner.startswith("moment"):
                yield float(each), (1, 1)
            elif inner == "ratio":
                yield float(each), (0, 0)
            else:
                yield from ((float(each), (1, 0)), (float(each), (1, -1)))


def _resultants(results: Mapping[str, Any]) -> Iterator[tuple[float, tuple[int, int]]]:
    """Each source's load and all loads, and their moments about the beam's start, case by case."""
    try:
        for case, rows in results["loads"].items():
            forces: dict[str, float] = {}
            moment = 0.0
            for row in rows:
                if "force" in row:
                    force, about = float(row["force"]), float(row["at"])
                else:
                    length, a, b = row["to"] - row["from"], row["start"], row["end"]
                    force = length * (a + b) / 2
                    about = row["from"] + (length * (a + 2 * b) / (3 * (a + b)) if a + b else 0.0)
                forces[row["source"]] = forces.get(row["source"], 0.0) + force
                moment += force * about
            yield from ((force, (1, 0)) for force in forces.values())
            yield from ((sum(forces.values()), (1, 0)), (moment, (1, 1)))
            yield sum(results["reactions"][case]), (1, 0)
    except (AttributeError, KeyError, TypeError):
        return


def _expected(
    caption: str, heads: Sequence[str], rows: Sequence[Sequence[str]], results: Mapping[str, Any]
) -> Cells:
    """What the cells of a table show that the results hold, as far as it is a table known."""
    try:
        if heads[:2] == ["largest", "value"]:
            return _largest(rows, results)
        if heads[:2] == _COMBINATIONS:
            return _combinations(heads, rows, results)
        if "passed on to" in heads:
            return _reactions(heads, rows, results)
        if heads[:1] == ["equal"]:
            return _equivalents(caption, heads, rows, results)
    except (AttributeError, IndexError, KeyError, TypeError, ValueError, ZeroDivisionError):
        return {}  # results without such numbers: their own audit says what is wrong with them
    return {}


def _largest(rows: Sequence[Sequence[str]], results: Mapping[str, Any]) -> Cells:
    found: Cells = {}
    for i, row in enumerate(rows):
        for j, key in enumerate(_LARGEST.get(row[0], ()), start=1):
            if key is not None:
                found[i, j] = float(results[key[0]][key[1]]) * key[2]
    return found


def _combinations(heads: Sequence[str], rows: Sequence[Sequence[str]], results: Mapping[str, Any]) -> Cells:
    stated, found = results["combinations"], {}
    if [row[0] for row in rows] != [each["name"] for each in stated]:
        return {}
    keys = {"max M": "moment_max", "min M": "moment_min", "max V": "shear_max"}
    for i, each in enumerate(stated):
        for j, head in enumerate(heads):
            if head in keys:
                found[i, j] = float(each[keys[head]])
            elif head.startswith("max R"):
                found[i, j] = float(each["reactions_max"][int(head[5:]) - 1])
    return found


def _reactions(heads: Sequence[str], rows: Sequence[Sequence[str]], results: Mapping[str, Any]) -> Cells:
    strength = [each for each in results["combinations"] if each["limit"] == "strength"]
    found: Cells = {}
    for i, row in enumerate(rows):
        at = int(row[0].removeprefix("R")) - 1
        for j, head in enumerate(heads):
            if head in _CASES:
                found[i, j] = float(results["reactions"][_CASES[head]][at])
            elif head in ("largest, strength", "largest, own design"):
                found[i, j] = max(float(each["reactions_max"][at]) for each in strength)
            elif head in ("smallest, strength", "smallest, own design"):
                found[i, j] = min(float(each["reactions_min"][at]) for each in strength)
    return found


def _equivalents(
    caption: str, heads: Sequence[str], rows: Sequence[Sequence[str]], results: Mapping[str, Any]
) -> Cells:
    """A span's equivalents, and each over the one that is right for what the column names."""
    found: Cells = {}
    match = _SPAN.match(caption)
    if match is None:
        return found
    span = results["equivalent"][int(match[1]) - 1]
    starts = [j for j, head in enumerate(heads) if head.startswith("w_")]
    for case, start in zip(match[2].split(" and "), starts, strict=True):
        own = span[_CASES[case]]
        for i, row in enumerate(rows):
            value = float(own[_CRITERIA[row[0]]])
            found[i, start] = value
            for j, head in enumerate(heads[start + 1 : start + 5], start=start + 1):
                if head in _OVER and row[j] not in ("–", ""):
                    found[i, j] = value / float(own[_OVER[head]])
    return found
