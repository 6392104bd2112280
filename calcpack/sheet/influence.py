"""Which given values move a result most: derivatives by the formulas the lines keep."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcpack.job.errors import CalcpackError
from calcpack.sheet.evaluation import Measured, evaluate, in_base
from calcpack.sheet.line import Line

_STEP = 1e-5  # of a value; the error of a central difference goes with its square


@dataclass(frozen=True)
class Influence:
    """How a given value moves a result.

    Parameters
    ----------
    line : Line
        The value given.
    relative : float
        By how many per cent the result changes for one per cent of the value.
    """

    line: Line
    relative: float


def influences(lines: Mapping[str, Line], target: Line) -> list[Influence]:
    """What moves a line's value, or the ratio of the two sides of a requirement, the strongest first.

    Parameters
    ----------
    lines : mapping
        Number -> line, in the order of the sheet.
    target : Line

    Returns
    -------
    list of Influence
        Values that do not move it are left out; empty where the result is 0 or is none.

    Examples
    --------
    >>> from calcpack.sheet import Sheet
    >>> sheet = Sheet("B1")
    >>> sheet.section("Moment")
    >>> w = sheet.take("w", 10.0, "kN/m", "Load", "the job")
    >>> L = sheet.take("L", 6.0, "m", "Span", "the job")
    >>> M = sheet.hence("M", w * L**2 / 8, "kN*m", "Moment")
    >>> [(each.line.symbol, round(each.relative, 6)) for each in influences(sheet.lines, M)]
    [('L', 2.0), ('w', 1.0)]
    """
    behind = _behind(lines, target)
    values = _worked_out(behind, {})
    try:
        base = _result(target, values)
        found = []
        for line in behind:
            if line.kind == "take" and line.value:
                step = _STEP * values[line.no].value
                up, down = (_moved(behind, values, target, line, sign * step) for sign in (1, -1))
                found.append(Influence(line, (up - down) / (2 * _STEP * base)))
    except (CalcpackError, ZeroDivisionError):
        return []
    found = [each for each in found if abs(each.relative) > _STEP**2]
    return sorted(found, key=lambda each: -round(abs(each.relative), 9))


def _behind(lines: Mapping[str, Line], target: Line) -> list[Line]:
    """The lines a line rests on, and itself, in order."""
    needed, found = {target.no}, []
    for line in reversed(list(lines.values())):
        if line.no in needed:
            needed.update(line.inputs.values())
            found.append(line)
    return found[::-1]


def _worked_out(behind: list[Line], values: dict[str, Measured]) -> dict[str, Measured]:
    """Every line's value, those that are known already left as they are."""
    for line in behind:
        if line.no not in values and line.kind != "require":
            given = line.kind == "take"
            values[line.no] = in_base(line.value, line.unit) if given else evaluate(line.expression, values)
    return values


def _moved(
    behind: list[Line], values: Mapping[str, Measured], target: Line, given: Line, step: float
) -> float:
    """The result with one given value moved; only what rests on it is worked out again."""
    moved = dict(values)
    old = moved[given.no]
    moved[given.no] = Measured(old.value + step, *old.dimension)
    touched = {given.no}
    for line in behind:
        if not touched.isdisjoint(line.inputs.values()):
            touched.add(line.no)
            moved.pop(line.no, None)
    return _result(target, _worked_out(behind, moved))


def _result(target: Line, values: Mapping[str, Measured]) -> float:
    """The line's value, or demand over resistance."""
    if target.kind != "require":
        return values[target.no].value
    left, right = (evaluate(side, values).value for side in target.expression.args)
    return left / right if target.expression.name in ("le", "lt") else right / left  # type: ignore[attr-defined]
