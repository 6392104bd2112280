"""The lines of a record worked out again, one by one, each from what the lines before it state."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.findings import Finding, Verdict
from calcpack.record.auditing.formulas import (
    COMPARISONS,
    CONTEXT,
    Budget,
    Part,
    Value,
    evaluate,
    factor,
    measured,
    read_formula,
)
from calcpack.record.auditing.printed import read_printed, rounding_fault
from calcpack.record.auditing.reading import Record, RecordLine
from calcpack.record.auditing.units import dimension_words, unit

AGREEMENT = 1e-9  # of the value
_WORDS = {True: "satisfied", False: "not satisfied"}
_SIGNS = {"eq": "=", "le": "≤", "lt": "<", "ge": "≥", "gt": ">"}


@dataclass(frozen=True)
class WorkedLine:
    """A line with what the audit makes of it.

    Parameters
    ----------
    line : RecordLine
    formula : Part
    value : Value or None
        Worked out again; None where that is not possible.
    sides : (Value, Value) or None
        Of a requirement.
    faults : tuple of str
        What is wrong with it.
    """

    line: RecordLine
    formula: Part
    value: Value | None
    sides: tuple[Value, Value] | None
    faults: tuple[str, ...]

    @property
    def finding(self) -> Finding:
        """The line as an entry of the audit."""
        line = self.line
        return Finding(
            "lines",
            f"line {line.no}",
            line.says,
            line.shown,
            self._recomputed(),
            self._difference(),
            Verdict.WRONG if self.faults else Verdict.AGREES,
            "; ".join(self.faults),
        )

    def _recomputed(self) -> str:
        if self.sides is not None:
            left, right = (CONTEXT.nstr(side.size, 6) for side in self.sides)
            kept = _WORDS[bool(self.value.size)] if self.value is not None else ""
            return f"{left} {_SIGNS[self.formula.op]} {right}: {kept}"
        if self.value is None:
            return ""
        try:
            of = read_printed(self.line.shown).unit
            if of.dimension == self.value.dimension:
                size = self.value.size / CONTEXT.mpf(of.size.numerator) * of.size.denominator
                return str(CONTEXT.nstr(size, 10))
        except ValueError:
            pass
        return str(CONTEXT.nstr(self.value.size, 10)) + " (in kN, m)"

    def _difference(self) -> str:
        if self.line.kind == "require" or self.value is None:
            return ""
        try:
            stated = measured(self.line.value, self.line.unit)
        except ValueError:
            return ""
        return relative(stated.near, self.value.near, float(stated.size - self.value.size))


def relative(stated: float, other: float, apart: float | None = None) -> str:
    """A difference as a part of the larger of two values.

    Examples
    --------
    >>> relative(1.0, 1.0), relative(1.0, 1.1)
    ('0', '9.1e-02')
    """
    apart = stated - other if apart is None else apart
    most = max(abs(stated), abs(other))
    return "0" if not apart or not most else f"{abs(apart) / most:.1e}"


def work_lines(record: Record) -> tuple[WorkedLine, ...]:
    """Work every line out again.

    Parameters
    ----------
    record : Record

    Returns
    -------
    tuple of WorkedLine
        In the record's order. What follows from a line at fault is held against both that line's
        value and its formula, so that a fault is blamed where it was made.

    Raises
    ------
    CalcpackError
        A formula is none, or is beyond all bounds.
    """
    budget = Budget()
    order = _order_faults(record.lines)
    values: dict[str, Value] = {}
    doubted: dict[str, Value] = {}
    earlier: dict[str, RecordLine] = {}
    worked = []
    for place, line in enumerate(record.lines):
        try:
            formula = read_formula(line.expression, budget)
            done = _worked(line, formula, earlier, values, order.get(place, ()))
            if done.faults and not doubted.keys().isdisjoint(line.inputs.values()):
                # What rests on a line at fault is right if it follows from either of that line's readings.
                other = _worked(line, formula, earlier, {**values, **doubted}, order.get(place, ()))
                done = done if other.faults else other
        except CalcpackError as error:
            raise CalcpackError(
                *(each.at(file=record.name, mark=f"line {line.no}") for each in error.problems)
            ) from None
        worked.append(done)
        earlier.setdefault(line.no, line)
        stated = _stated(line)
        for value, into in ((stated, values), (done.value, doubted)) if done.faults else ((stated, values),):
            if value is not None:
                into.setdefault(line.no, value)
    return tuple(worked)


def _stated(line: RecordLine) -> Value | None:
    try:
        return measured(line.value, line.unit)
    except ValueError:
        return None


def _order_faults(lines: Sequence[RecordLine]) -> dict[int, tuple[str, ...]]:
    """Lines that stand out of their order, twice, or behind a gap, by their place."""
    found: dict[int, list[str]] = {}
    numbers = {line.rank for line in lines}
    seen: set[tuple[int, int]] = set()
    highest, last = (0, 0), ""
    for place, line in enumerate(lines):
        rank = line.rank
        if rank in seen:
            found.setdefault(place, []).append("its number stands twice")
        elif rank < highest:
            found.setdefault(place, []).append(f"it stands behind line {last}")
        if rank[1] > 1 and (rank[0], rank[1] - 1) not in numbers:
            found.setdefault(place, []).append(f"line {rank[0]}.{rank[1] - 1:02d} is missing before it")
        seen.add(rank)
        if rank > highest:
            highest, last = rank, line.no
    return {place: tuple(faults) for place, faults in found.items()}


def _worked(
    line: RecordLine,
    formula: Part,
    earlier: Mapping[str, RecordLine],
    values: Mapping[str, Value],
    order: Sequence[str],
) -> WorkedLine:
    symbols = formula.symbols
    faults = [*order, *_link_faults(line, symbols, earlier), *_kind_faults(line, formula)]
    known = {symbol: values[no] for symbol, no in line.inputs.items() if no in values}
    if missing := [symbol for symbol in symbols if symbol not in known]:
        if not faults:
            faults.append(f"'{missing[0][:40]}' has no value")
        return WorkedLine(line, formula, None, None, tuple(faults))
    try:
        value = evaluate(formula, known)
    except ValueError as error:
        return WorkedLine(line, formula, None, None, (*faults, str(error)))
    if line.kind == "require":
        sides = (
            (evaluate(formula.args[0], known), evaluate(formula.args[1], known))
            if formula.op in COMPARISONS
            else None
        )
        faults += _verdict_faults(line, value)
        return WorkedLine(line, formula, value, sides, tuple(faults))
    faults += _value_faults(line, formula, value)
    return WorkedLine(line, formula, value, None, tuple(faults))


def _link_faults(
    line: RecordLine, symbols: Mapping[str, None], earlier: Mapping[str, RecordLine]
) -> list[str]:
    """What is wrong with where its inputs come from."""
    faults = []
    for symbol, no in line.inputs.items():
        source = earlier.get(no)
        if source is None:
            faults.append(f"'{symbol[:40]}' is taken from line {no[:10]}, which does not come before it")
        elif source.kind == "require":
            faults.append(f"'{symbol[:40]}' is taken from line {no}, which gives no value")
        elif source.symbol != symbol:
            faults.append(f"'{symbol[:40]}' is taken from line {no}, which gives '{source.symbol[:40]}'")
    if drawn := [symbol for symbol in symbols if symbol not in line.inputs]:
        faults.append(f"the formula's '{drawn[0][:40]}' comes from no line")
    if idle := [symbol for symbol in line.inputs if symbol not in symbols]:
        faults.append(f"the formula does not use '{idle[0][:40]}'")
    return faults


def _kind_faults(line: RecordLine, formula: Part) -> list[str]:
    faults = []
    if (formula.op in COMPARISONS) != (line.kind == "require"):
        faults.append("what must hold is a comparison, and a comparison gives no value")
    if (line.origin is not None) != (line.kind == "take"):
        faults.append("a value brought in, and no other, has an origin")
    if (line.passes is not None) != (line.kind == "require"):
        faults.append("a requirement, and nothing else, has a verdict")
    if bool(line.symbol) == (line.kind == "require"):
        faults.append("a value has a symbol, a requirement has none")
    if line.kind == "take":
        inner = formula.args[0] if formula.op == "neg" else formula
        if inner.op not in ("quantity", "measured"):
            faults.append("a value brought in is a number with its unit")
    return faults


def _verdict_faults(line: RecordLine, value: Value) -> list[str]:
    faults, kept = [], bool(value.size)
    if line.passes is not kept:
        faults.append(f"it is {_WORDS[kept]}, and the record says otherwise")
    if line.shown != _WORDS[kept]:
        faults.append(f"it is {_WORDS[kept]}, printed is '{line.shown[:40]}'")
    if line.value != float(kept) or line.unit != "1":
        faults.append(f"its value is not {int(kept)}")
    return faults


def _value_faults(line: RecordLine, formula: Part, value: Value) -> list[str]:
    try:
        of = unit(line.unit)
    except ValueError as error:
        return [str(error)]
    faults = []
    if value.dimension != of.dimension:
        return [
            f"the formula gives {dimension_words(*value.dimension)}, "
            f"its unit is that of {dimension_words(*of.dimension)}"
        ]
    apart = abs(float(measured(line.value, line.unit).size - value.size))
    if apart > AGREEMENT * abs(value.near) + 8 * value.slack:
        right = CONTEXT.nstr(value.size / factor(line.unit), 12)
        faults.append(f"the value is {right} {line.unit}, stated is {line.value!r}")
    elif line.kind == "take" and not _literally(line, formula):
        faults.append("the value is not the number that was brought in")
    if fault := rounding_fault(line.value, of, line.shown):
        faults.append(fault)
    return faults


def _literally(line: RecordLine, formula: Part) -> bool:
    """Whether a value brought in is the written number, to the last digit."""
    inner, sign = (formula.args[0], -1) if formula.op == "neg" else (formula, 1)
    if inner.unit != line.unit:
        return False
    exact: Fraction = sign * Fraction(inner.text)
    return float(exact) == line.value
