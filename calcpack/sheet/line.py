"""A numbered line of calculation: a value brought in, a value worked out, or something that must hold."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, Literal

from calcpack.job.errors import CalcpackError
from calcpack.sheet.display import System, show
from calcpack.sheet.evaluation import Measured, evaluate, in_base
from calcpack.sheet.expression import (
    Arithmetic,
    Expression,
    Number,
    Operation,
    Quantity,
    Reference,
    references,
    walk,
)
from calcpack.sheet.latex import numbers_row, result, symbol_latex, symbols_row
from calcpack.sheet.runs import Run, plain_text
from calcpack.sheet.symbols import read_symbol
from calcpack.sheet.trees import to_json
from calcpack.sheet.unit_text import exponents
from calcpack.sheet.words import spoken, spoken_value

Kind = Literal["take", "hence", "require"]
SATISFIED = {True: "satisfied", False: "not satisfied"}
# The ratio of a demand to a resistance that is not there at all.
NO_RESISTANCE = 1.0e6


@dataclass(frozen=True, eq=False)
class Line(Arithmetic):
    """One line; formulas are written with it, and it stands in them for its value.

    Parameters
    ----------
    no : str
        "3.07".
    kind : "take", "hence" or "require"
    symbol : str
        Plain; empty for a requirement.
    says : runs
        What it is, in words.
    expression : Expression
        The formula; of a value brought in, the value itself.
    value : float [unit]
        Of a requirement 1 if it holds, else 0.
    unit : str
        The record's.
    shown : str
        As printed.
    cite, origin : str
        The clause; the place in the job file.
    passes : bool or None
        Requirements only.
    """

    no: str
    kind: Kind
    symbol: str
    says: str | list[Run]
    expression: Expression
    value: float
    unit: str
    shown: str
    cite: str = ""
    origin: str = ""
    passes: bool | None = None
    sides: tuple[float, float] = (0.0, 0.0)  # of a requirement [side_unit]
    side_unit: str = "1"

    def as_expression(self) -> Reference:
        """What a formula holds in its place."""
        if self.kind == "require":
            raise CalcpackError(f"line {self.no} states what must hold; it has no value to work with")
        return Reference(self.symbol, self.no)

    @property
    def inputs(self) -> dict[str, str]:
        """Symbol -> line of what it draws on."""
        return references(self.expression)

    @property
    def link(self) -> dict[str, str]:
        """A link to the line, to stand among words."""
        return {"line": self.no}

    @property
    def math(self) -> dict[str, str]:
        """The symbol, to stand among words."""
        return {"math": symbol_latex(self.symbol)}

    @property
    def latex(self) -> str:
        """The symbol in LaTeX; empty for a requirement."""
        return symbol_latex(self.symbol) if self.symbol else ""

    def check(self, name: str) -> dict[str, Any]:
        """A requirement as an entry of the record's checks.

        Returns
        -------
        dict
            ``name, demand, capacity, unit, ratio, passes, cite``; the ratio is at most 1 where it passes.
        """
        if not isinstance(self.expression, Operation) or self.kind != "require":
            raise CalcpackError(f"line {self.no} requires nothing")
        demand, capacity = self.sides if self.expression.name in ("le", "lt", "eq") else self.sides[::-1]
        if self.expression.name != "eq" and capacity > 0:
            ratio = max(demand, 0.0) / capacity
        else:
            ratio = 0.0 if self.passes else NO_RESISTANCE
        return {
            "name": name,
            "demand": demand,
            "capacity": capacity,
            "unit": self.side_unit,
            "ratio": ratio,
            "passes": bool(self.passes),
            "cite": self.cite,
        }

    def _ipython_display_(self) -> None:
        """Nothing more: the sheet has shown the line already."""


def side_unit(comparison: Operation, sizes: Mapping[str, Measured], known: Mapping[str, Line]) -> str:
    """The unit to give both sides of a comparison in: that of the first line or constant of its kind."""
    left, right = comparison.args
    wanted = evaluate(left, sizes).dimension
    if isinstance(left, Number):
        wanted = evaluate(right, sizes).dimension
    for node in (*walk(left), *walk(right)):
        unit = known[node.line].unit if isinstance(node, Reference) else getattr(node, "unit", "")
        if unit and exponents(unit) == wanted:
            return str(unit)
    force, length = wanted
    if (force, length) == (0, 0):
        return "1"
    powers = [
        f"{name}^{power}" if power != 1 else name for name, power in (("kN", force), ("m", length)) if power
    ]
    return "*".join(powers)


def in_unit_of(unit: str, size: Measured) -> float:
    """A value in a unit of its kind."""
    return size.value / in_base(1.0, unit).value


def line_block(line: Line, known: Mapping[str, Line], system: System, like: str = "") -> dict[str, Any]:
    """The line as it is shown; one worked out as another one (``like``) with its result alone.

    A requirement has no symbol: its rows are whole comparisons, with symbols, with numbers, and, where a
    side has to be worked out, with both sides' values.
    """
    inputs = list(dict.fromkeys(line.inputs.values()))
    drawn = {no: known[no] for no in inputs}
    if line.kind == "take":
        rows = [[result(line.shown)]]
    elif like:
        rows = [_sides_row(line, system) if line.kind == "require" else [result(line.shown)]]
    else:
        last = _sides_row(line, system) if line.kind == "require" else [result(line.shown)]
        rows = [symbols_row(line.expression, system), numbers_row(line.expression, drawn, system), last]
        bare = "".join(last).replace(r"\textbf", "")
        if line.kind == "require" and _is_plain(line.expression):
            rows.pop()
        elif _same(rows[1], bare):
            del rows[1]
        if rows[0] == rows[1]:
            del rows[1]
    return {
        "type": "line",
        "no": line.no,
        "kind": line.kind,
        "says": line.says,
        "symbol": line.latex,
        "rows": rows,
        "cite": line.cite,
        "origin": line.origin,
        "from": inputs,
        **({"like": like} if like else {}),
        "passes": line.passes,
        "alt": _alternative(line, system),
    }


def _same(numbers: list[str], shown: str) -> bool:
    """Whether the formula with its numbers is already the result."""
    keep = str.maketrans("", "", r"{}\, " + "\u00a0")
    said = "".join(numbers).replace(r"\text", "").replace("-", "\u2212")
    return said.translate(keep) == shown.translate(keep)


def _is_plain(comparison: Expression) -> bool:
    """Whether both sides are printed values already."""
    return all(isinstance(side, Reference | Number | Quantity) for side in comparison.args)


_RELATIONS = {"eq": "=", "le": r"\le", "lt": "<", "ge": r"\ge", "gt": ">"}


def _shown_sides(line: Line, system: System) -> list[str]:
    return [show(value, line.side_unit, system) for value in line.sides]


def _sides_row(line: Line, system: System) -> list[str]:
    assert isinstance(line.expression, Operation)
    left, right = map(result, _shown_sides(line, system))
    return [left, f"{_RELATIONS[line.expression.name]} {right}"]


def _alternative(line: Line, system: System) -> str:
    """The line as read aloud."""
    if line.kind == "require":
        left, right = map(spoken_value, _shown_sides(line, system))
        assert line.passes is not None
        return f"{spoken(line.expression, system)}: {left} against {right}, {SATISFIED[line.passes]}"
    name, value = read_symbol(line.symbol).spoken, spoken_value(line.shown)
    if line.kind == "take":
        return f"{name} equals {value}"
    return f"{name} equals {spoken(line.expression, system)}, which is {value}"


def line_record(line: Line) -> dict[str, Any]:
    """The line as the record keeps it."""
    record: dict[str, Any] = {
        "no": line.no,
        "kind": line.kind,
        "symbol": line.symbol,
        "says": plain_text(line.says),
        "expression": to_json(line.expression),
        "inputs": line.inputs,
        "value": line.value,
        "unit": line.unit,
        "shown": line.shown,
        "cite": line.cite,
    }
    if line.kind == "take":
        record["origin"] = line.origin
    if line.kind == "require":
        record["passes"] = line.passes
    return record
