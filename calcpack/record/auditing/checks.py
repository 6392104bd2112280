"""The checks of a record: each against the requirement that it states, the governing one against all."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.book import Book
from calcpack.record.auditing.findings import Finding, Verdict
from calcpack.record.auditing.formulas import factor
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.reading import Record

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
        ranked = sorted(
            (line for line in required if line.line.no not in taken),
            key=lambda line: len(_check_faults(check, line)),
        )
        faults = _check_faults(check, ranked[0]) if ranked else {"": "no line requires anything"}
        if ranked and len(faults) < 3:
            taken.add(ranked[0].line.no)
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
                f"line {ranked[0].line.no}" if ranked else "",
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


def _check_faults(check: Mapping[str, Any], line: WorkedLine) -> dict[str, str]:
    """What of a check is not what a requirement says, by its key."""
    assert line.sides is not None
    no, faults = line.line.no, {}
    sides = line.sides if line.formula.op in ("le", "lt", "eq") else line.sides[::-1]
    try:
        size = float(factor(str(check.get("unit"))))
        demand, capacity = (float(side.size) / size for side in sides)
    except ValueError as error:
        return {"unit": str(error), "demand": "", "capacity": ""}
    for key, again in (("demand", demand), ("capacity", capacity)):
        stated = check.get(key)
        if not _close(stated, again):
            faults[key] = f"line {no} gives a {key} of {again:.12g}, stated is {stated!r:.40}"
    passes = bool(line.value.size) if line.value is not None else None
    if line.formula.op != "eq" and capacity > 0:
        ratio = max(demand, 0.0) / capacity
    else:
        ratio = 0.0 if passes else NO_RESISTANCE
    if not _close(check.get("ratio"), ratio):
        faults["ratio"] = f"the ratio is {ratio:.12g}, stated is {check.get('ratio')!r:.40}"
    if check.get("passes") is not passes:
        faults["passes"] = f"line {no} is {'' if passes else 'not '}satisfied"
    if check.get("cite") != line.line.cite:
        faults["cite"] = f"line {no} cites '{line.line.cite[:60]}'"
    return faults


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
