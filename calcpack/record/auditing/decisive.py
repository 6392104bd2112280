"""The line that decides on a sheet: the requirement behind the governing check, else the largest moment."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from calcpack.record.auditing.findings import Decisive
from calcpack.record.auditing.formulas import factor
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.reading import Record
from calcpack.record.auditing.units import unit

_DESIGN_MOMENT = "M_max"
_MOMENT = (1, 1)  # exponents of force and length


def decisive_line(record: Record, lines: Sequence[WorkedLine]) -> Decisive | None:
    """The line that decides on a sheet; None where it has neither checks, nor moments, nor a sum of loads.

    A sheet without strength is decided by its design moment. Where the moments of a continuous beam come from
    the analysis and no line works them out, it is the largest moment that a line does work out (of a span
    taken alone), and where there is none either, the largest load on the beam.

    Parameters
    ----------
    record : Record
    lines : sequence of WorkedLine
    """
    governing, checks = record.results.get("governing"), record.results.get("checks")
    if isinstance(governing, dict) and isinstance(checks, list):
        for check in checks:
            if isinstance(check, dict) and check.get("name") == governing.get("name"):
                for line in lines:
                    if line.sides is not None and _is_of(line, check):
                        ratio = float(check["ratio"])
                        return Decisive(record.mark, line.line.no, str(check["name"]), f"{ratio:.3f}", ratio)
    worked = [each.line for each in lines if each.line.kind == "hence" and each.value is not None]
    moments = [each for each in worked if each.symbol.startswith("M") and _dimension(each.unit) == _MOMENT]
    named = [each for each in moments if each.symbol == _DESIGN_MOMENT]
    loads = [each for each in worked if each.symbol.startswith("W_")]
    found = named or moments or loads
    if not found:
        return None
    most = max(found, key=lambda each: abs(each.value) * float(factor(each.unit)))
    says = most.says if most in named else f"{most.says} (the largest of the lines)"
    return Decisive(record.mark, most.no, says, most.shown)


def _dimension(of: str) -> tuple[int, int] | None:
    try:
        return unit(of).dimension
    except ValueError:
        return None


def _is_of(line: WorkedLine, check: Mapping[str, Any]) -> bool:
    """Whether a requirement is the one that a check states."""
    assert line.sides is not None
    try:
        size = float(factor(str(check["unit"])))
        stated = sorted((float(check["demand"]) * size, float(check["capacity"]) * size))
        float(check["ratio"])
    except (KeyError, TypeError, ValueError):
        return False
    sides = sorted(each.near for each in line.sides)
    close = all(abs(a - b) <= 1e-9 * max(abs(a), abs(b)) for a, b in zip(stated, sides, strict=True))
    return close and line.line.cite == check.get("cite")
