"""The checks of a record: each against the requirement that it states, the governing one against all."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.book import Book
from calcpack.record.auditing.findings import Finding, Verdict
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.reading import Record
from calcpack.record.auditing.units import unit

# The ratio stated for a demand without any resistance.
NO_RESISTANCE = 1.0e6
MOST_CHECKS = 60


def audit_checks(book: Book, record: Record, lines: Sequence[WorkedLine]) -> None:
    """Hold each check against the requirement it states, and the governing one against all of them.

    Parameters
    ----------
    book : Book
        Where the findings go.
    record : Record
    lines : sequence of WorkedLine

    Raises
    ------
    CalcpackError
        There are more checks than any sheet has.
    """
    checks = record.results.get("checks")
    if not isinstance(checks, list):
        return
    if len(checks) > MOST_CHECKS:
        raise CalcpackError(f"more than {MOST_CHECKS} checks", file=record.name, key="results.checks")
    required = [line for line in lines if line.sides is not None]
    taken: set[str] = set()
    for number, check in enumerate(checks):
        if not isinstance(check, dict):
            book.wrong(f"results.checks[{number}]", "it is not written as a check")
            continue
        left = [line for line in required if line.line.no not in taken]
        try:
            size = unit(str(check.get("unit"))).near
            nearest, misfits = _nearest(check, left, size)
            faults = {"": "no line requires anything"}
            if nearest is not None:
                faults = {key: _in_words(key, again, check, nearest) for key, again in misfits.items()}
                if len(faults) < 3:
                    taken.add(nearest.line.no)
        except ValueError as error:
            nearest, faults = None, {"unit": str(error)}
        for key in ("name", "demand", "capacity", "unit", "ratio", "passes", "cite"):
            book.seen(f"results.checks[{number}].{key}")
        key = next(iter(faults), "")
        path = f"results.checks[{number}]"
        book.findings.append(
            Finding(
                "results",
                f"{path}.{key}" if key else path,
                str(check.get("name", "")),
                _check_said(check),
                f"line {nearest.line.no}" if nearest is not None else "",
                "",
                Verdict.WRONG if faults else Verdict.AGREES,
                "; ".join(faults.values()),
            )
        )
    _governing(book, record, checks)


def _check_said(check: Mapping[str, Any]) -> str:
    try:
        return f"{check['demand']:.5g} against {check['capacity']:.5g} {check['unit']}, {check['ratio']:.4g}"
    except (KeyError, TypeError, ValueError):
        return ""


def _nearest(
    check: Mapping[str, Any], lines: Sequence[WorkedLine], size: float
) -> tuple[WorkedLine | None, dict[str, object]]:
    """The first of the requirements that a check is most like, and what of it is not so."""
    nearest, least = None, {}
    for line in lines:
        misfits = _misfits(check, line, size)
        if nearest is None or len(misfits) < len(least):
            nearest, least = line, misfits
        if not least:
            break
    return nearest, least


def _misfits(check: Mapping[str, Any], line: WorkedLine, size: float) -> dict[str, object]:
    """What of a check is not what a requirement says, by its key: what it should be."""
    assert line.sides is not None
    sides = line.sides if line.formula.op in ("le", "lt", "eq") else line.sides[::-1]
    demand, capacity = sides[0].near / size, sides[1].near / size
    passes = bool(line.value.size) if line.value is not None else None
    if line.formula.op != "eq" and capacity > 0:
        ratio = max(demand, 0.0) / capacity
    else:
        ratio = 0.0 if passes else NO_RESISTANCE
    numbers = {"demand": demand, "capacity": capacity, "ratio": ratio}
    found: dict[str, object] = {
        key: again for key, again in numbers.items() if not _close(check.get(key), again)
    }
    if check.get("passes") is not passes:
        found["passes"] = passes
    if check.get("cite") != line.line.cite:
        found["cite"] = line.line.cite
    return found


def _in_words(key: str, again: object, check: Mapping[str, Any], line: WorkedLine) -> str:
    no = line.line.no
    if key == "passes":
        return f"line {no} is {'' if again else 'not '}satisfied"
    if key == "cite":
        return f"line {no} cites '{str(again)[:60]}'"
    gives = "the ratio is" if key == "ratio" else f"line {no} gives a {key} of"
    return f"{gives} {again:.12g}, stated is {check.get(key)!r:.40}"


def _close(stated: object, again: float) -> bool:
    if isinstance(stated, bool) or not isinstance(stated, int | float):
        return False
    return abs(stated - again) <= 1e-9 * max(abs(stated), abs(again)) + 1e-15


def _governing(book: Book, record: Record, checks: Sequence[Mapping[str, Any]]) -> None:
    """The check with the largest ratio."""
    stated = record.results.get("governing")
    ratios = [each.get("ratio") for each in checks if isinstance(each, dict)]
    numbers = [each for each in ratios if isinstance(each, int | float) and not isinstance(each, bool)]
    if not numbers:
        book.settle("results.governing", stated is None, "there are no checks", "governing check")
        return
    if not isinstance(stated, dict):
        book.wrong("results.governing", "the governing check is missing")
        return
    largest = max(numbers)
    named = [each for each in checks if isinstance(each, dict) and each.get("name") == stated.get("name")]
    book.compare("results.governing.ratio", largest, "", "largest ratio of all checks")
    book.settle(
        "results.governing.name",
        any(_close(each.get("ratio"), float(largest)) for each in named),
        "the check of this name is not the one with the largest ratio",
        "governing check",
    )
