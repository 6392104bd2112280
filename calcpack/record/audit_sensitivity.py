"""Which given values move a result most: derivatives carried through the same formulas, line by line."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.decisive import decisive_line
from calcpack.record.auditing.formulas import CONTEXT, Value, evaluate, factor, measured
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.reading import Record, RecordLine
from calcpack.record.auditing.units import unit

_STEP = CONTEXT.mpf(10) ** -12  # of the value; in thirty digits twelve are left
MOST_ROWS = 12


@dataclass(frozen=True)
class Influence:
    """How a given value moves the result.

    Parameters
    ----------
    line : RecordLine
        The value brought in.
    relative : float
        Per cent of the result for one per cent of the value.
    derivative : float
        Of the result by the value, in the units of both lines.
    """

    line: RecordLine
    relative: float
    derivative: float


@dataclass(frozen=True)
class Sensitivity:
    """What moves a result.

    Parameters
    ----------
    no : str
        Number of the result's line.
    says : str
        The result, in words.
    shown : str
        As it stands.
    unit : str
    influences : tuple of Influence
        Those that move it at all, the strongest first.
    """

    no: str
    says: str
    shown: str
    unit: str
    influences: tuple[Influence, ...]


def sensitivity(record: Record, lines: Sequence[WorkedLine]) -> Sensitivity:
    """Differentiate what decides on a sheet (the governing ratio, else the largest moment) by what is given.

    Parameters
    ----------
    record : Record
    lines : sequence of WorkedLine

    Returns
    -------
    Sensitivity

    Raises
    ------
    CalcpackError
        The sheet has nothing that decides, or a line at fault.
    """
    if faulty := [line.line.no for line in lines if line.faults]:
        raise CalcpackError(f"line {faulty[0]} is wrong: what rests on it says nothing", file=record.name)
    decisive = decisive_line(record, lines)
    if decisive is None:
        raise CalcpackError(
            f"sheet {record.mark} has no check, no moment and no load that anything could move"
        )
    target = next(line for line in lines if line.line.no == decisive.no)
    kind = "" if decisive.ratio is None else "ratio of the governing check, "
    says = f"{kind}{decisive.says}"
    of = "1" if target.line.kind == "require" else target.line.unit
    behind = _behind(lines, target.line.no)
    exact = _carried(behind, {})
    base = _result(target, exact)
    found = []
    for worked in behind:
        line = worked.line
        if line.kind != "take":
            continue
        size = exact[line.no].size
        step = _STEP * (abs(size) or CONTEXT.mpf(1))
        apart = [
            _result(target, _carried(behind, {line.no: _moved(exact[line.no], sign * step)}))
            for sign in (1, -1)
        ]
        rate = (apart[0] - apart[1]) / (2 * step)
        if not rate:
            continue
        relative = float(rate * size / base) if base else 0.0
        derivative = float(rate * factor(line.unit) / factor(of))
        found.append(Influence(line, relative, derivative))
    found.sort(key=lambda each: (-abs(each.relative), each.line.rank))
    return Sensitivity(decisive.no, says, decisive.shown, of, tuple(found))


def _moved(value: Value, step: Any) -> Value:
    return Value(value.size + step, value.slack, value.force, value.length)


def _behind(lines: Sequence[WorkedLine], no: str) -> list[WorkedLine]:
    """The line and everything it rests on, in order."""
    needed, found = {no}, []
    for worked in reversed(lines):
        if worked.line.no in needed:
            needed.update(worked.line.inputs.values())
            found.append(worked)
    return found[::-1]


def _carried(lines: Sequence[WorkedLine], moved: Mapping[str, Value]) -> dict[str, Value]:
    """Every line worked out from the takes upward in thirty digits, some takes moved."""
    values: dict[str, Value] = dict(moved)
    for worked in lines:
        line = worked.line
        if line.no in values or line.kind == "require":
            continue
        known = {symbol: values[source] for symbol, source in line.inputs.items()}
        value = evaluate(worked.formula, known)
        if line.kind == "take":
            value = measured(line.value, line.unit)
        values[line.no] = Value(value.size, value.slack, *unit(line.unit).dimension)
    return values


def _result(target: WorkedLine, values: Mapping[str, Value]) -> Any:
    """The value, or of a requirement demand over capacity."""
    if target.line.kind != "require":
        return values[target.line.no].size
    known = {symbol: values[no] for symbol, no in target.line.inputs.items()}
    left, right = (evaluate(side, known).size for side in target.formula.args)
    demand, capacity = (left, right) if target.formula.op in ("le", "lt", "eq") else (right, left)
    if not capacity:
        raise CalcpackError(f"line {target.line.no} has no capacity to compare with")
    return demand / capacity
