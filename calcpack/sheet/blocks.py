"""What stands on a sheet beside its lines, as plain data: checked when it is made."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from typing import Any, Literal, Protocol

from calcpack.job.errors import CalcpackError
from calcpack.sheet.runs import Runs, check_math, check_runs

Block = dict[str, Any]
Role = Literal["body", "note", "caution", "unsafe"]
Column = str | tuple[Runs, str] | Mapping[str, Any]
_ROLES = ("body", "note", "caution", "unsafe")
_ALIGNMENTS = ("left", "right", "center")


class Drawing(Protocol):
    """What a figure has to bring."""

    @property
    def svg(self) -> str:
        """The drawing."""

    @property
    def alt(self) -> str:
        """What it shows, in words."""

    @property
    def width_mm(self) -> float:
        """Its width [mm]."""


def finite(value: Any) -> float:
    """A number that is one."""
    try:
        number = float(value) + 0.0  # no negative zero
    except (TypeError, ValueError):
        raise CalcpackError(f"{value!r:.60} is not a number") from None
    if not math.isfinite(number):
        raise CalcpackError(f"{number} is not a finite number")
    return number


def heading(level: int, number: str, title: Runs) -> Block:
    """A heading; number is empty where it has none."""
    return {"type": "heading", "level": level, "number": number, "text": check_runs(title)}


def paragraph(runs: Runs, role: Role) -> Block:
    """A paragraph in its role."""
    if role not in _ROLES:
        raise CalcpackError(
            f"a text's role cannot be {role!r:.40}", remedy=f"it is one of {', '.join(_ROLES)}"
        )
    return {"type": "text", "runs": check_runs(runs), "role": role}


def listing(items: Iterable[Runs]) -> Block:
    """Short paragraphs under one another."""
    return {"type": "list", "items": [check_runs(item) for item in items]}


def facts(rows: Mapping[str, Runs] | Iterable[tuple[Runs, Runs]]) -> Block:
    """Labels with their values."""
    pairs: Iterable[tuple[Runs, Runs]] = rows.items() if isinstance(rows, Mapping) else rows
    return {"type": "facts", "rows": [[check_runs(label), check_runs(value)] for label, value in pairs]}


def table(
    columns: Sequence[Column], rows: Iterable[Sequence[Runs]], caption: Runs, strong_rows: Iterable[int]
) -> Block:
    """A table whose rows are all as long as it is wide."""
    heads = [_column(column) for column in columns]
    cells = [[check_runs(cell) for cell in row] for row in rows]
    for place, row in enumerate(cells):
        if len(row) != len(heads):
            raise CalcpackError(f"row {place + 1} of the table has {len(row)} cells for {len(heads)} columns")
    strong = sorted(set(strong_rows))
    if strong and not 0 <= strong[0] <= strong[-1] < len(cells):
        raise CalcpackError("a row to set in bold is not in the table")
    return {
        "type": "table",
        "caption": check_runs(caption),
        "columns": heads,
        "rows": cells,
        "strong_rows": strong,
    }


def _column(column: Column) -> Block:
    head: Any
    if isinstance(column, str):
        head, align = column, "left"
    elif isinstance(column, Mapping):
        head, align = column["head"], column.get("align", "left")
    else:
        head, align = column
    if align not in _ALIGNMENTS:
        raise CalcpackError(f"a column cannot be aligned {align!r:.40}", remedy="left, right or center")
    return {"head": check_runs(head), "align": align}


def ratios(rows: Iterable[Mapping[str, Any]]) -> Block:
    """Checks with their ratios."""
    return {
        "type": "ratios",
        "rows": [
            {
                "says": check_runs(row["says"]),
                "demand": str(row["demand"]),
                "resistance": str(row["resistance"]),
                "ratio": finite(row["ratio"]),
                "passes": bool(row["passes"]),
            }
            for row in rows
        ],
    }


def figure(drawing: Drawing, caption: Runs, screen: bool = False) -> Block:
    """A drawing, with what it shows in words; one for the screen is left out on paper."""
    if not drawing.svg.lstrip().startswith("<svg") or not drawing.alt.strip():
        raise CalcpackError("a figure is one <svg> element, and words that say what it shows")
    return {
        "type": "figure",
        "svg": drawing.svg,
        "alt": drawing.alt,
        "caption": check_runs(caption),
        "width_mm": finite(drawing.width_mm),
        **({"screen": True} if screen else {}),
    }


def derivation(steps: Iterable[Any]) -> Block:
    """Steps that lead to a formula."""
    return {"type": "derivation", "steps": [_step(step) for step in steps]}


def _step(step: Any) -> Block:
    keys = ("says", "rows", "alt")
    says, rows, alt = (step[key] if isinstance(step, Mapping) else getattr(step, key) for key in keys)
    return {"says": check_runs(says), "rows": [check_math(row) for row in rows], "alt": str(alt)}


def signoff(rows: Iterable[Mapping[str, Any]]) -> Block:
    """Places to sign."""
    keys = ("role", "name", "licence", "date")
    return {"type": "signoff", "rows": [{key: str(row.get(key, "")) for key in keys} for row in rows]}
