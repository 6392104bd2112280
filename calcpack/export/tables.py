"""What a pack tabulates from its sheets' records: the schedule of beams, the reactions."""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping, Sequence
from typing import Any

from calcpack.export.blocks import Block, read_blocks
from calcpack.export.content import SheetContent
from calcpack.job.errors import CalcpackError
from calcpack.job.model import CASES
from calcpack.sheet.display import System, display_unit, shown_column, shown_number

DASH = "–"
_NAMES = {"dead": "dead", "live": "live", "roof_live": "roof live", "snow": "snow"}
_CSV_HEADS = (
    "mark", "sheet", "template", "version", "spans [m]",
    "dead [kN]", "live [kN]", "roof live [kN]", "snow [kN]",
    "moment max [kNm]", "moment min [kNm]", "shear max [kN]", "deflection total [mm]", "deflection live [mm]",
    "governing", "ratio", "satisfied",
)  # fmt: skip


def results_of(content: SheetContent) -> Mapping[str, Any]:
    """A sheet's results.

    Raises
    ------
    CalcpackError
        The sheet has no record, or it holds no results.
    """
    results = (content.record or {}).get("results")
    if not isinstance(results, Mapping):
        raise CalcpackError(
            "the sheet has no record of results",
            mark=content.mark,
            remedy="end its notebook with the cell that closes the sheet",
        )
    return results


def satisfied(results: Mapping[str, Any]) -> bool | None:
    """Whether all requirements of a sheet hold; None where it makes none.

    Examples
    --------
    >>> satisfied({"checks": [{"passes": True}, {"passes": False}]}), satisfied({"checks": []})
    (False, None)
    """
    checks = results.get("checks") or ()
    return all(check["passes"] for check in checks) if checks else None


def _number(value: object) -> float | None:
    return float(value) if isinstance(value, int | float) and not isinstance(value, bool) else None


def _shown(value: object, unit: str, system: System) -> str:
    number = _number(value)
    return DASH if number is None else shown_number(number, unit, system)


def _spans(results: Mapping[str, Any], system: System) -> str:
    return " + ".join(shown_number(span, "m", system) for span in results.get("spans", ()))


def schedule_blocks(sheets: Sequence[SheetContent], system: System) -> tuple[Block, ...]:
    """The schedule of beams, as a table.

    Parameters
    ----------
    sheets : sequence of SheetContent
    system : "SI" or "US"
    """
    length, force, moment = (display_unit(unit, system)[0] for unit in ("m", "kN", "kN*m"))
    short = display_unit("mm", system)[0]
    heads = [
        ("beam", "left"), ("sheet", "left"), (f"spans [{length}]", "left"), (f"M max [{moment}]", "right"),
        (f"M min [{moment}]", "right"), (f"V max [{force}]", "right"), (f"deflection [{short}]", "right"),
        ("governing", "left"), ("ratio", "right"),
    ]  # fmt: skip
    rows = []
    for content in sheets:
        results = results_of(content)
        envelope = results.get("envelope") or {}
        governing = results.get("governing") or {}
        ratio = _number(governing.get("ratio"))
        verdict: Any = DASH if ratio is None else f"{ratio:.2f}"
        failing = satisfied(results) is False
        rows.append(
            [
                [{"strong": content.mark}],
                content.title,
                _spans(results, system) or DASH,
                _shown(envelope.get("moment_max"), "kN*m", system),
                _shown(envelope.get("moment_min"), "kN*m", system),
                _shown(envelope.get("shear_max"), "kN", system),
                _shown((results.get("deflection") or {}).get("total_mm"), "mm", system),
                [
                    str(governing.get("name") or DASH),
                    *([": ", {"strong": "not satisfied"}] if failing else []),
                ],
                verdict,
            ]
        )
    columns = [{"head": head, "align": align} for head, align in heads]
    return read_blocks([{"type": "table", "columns": columns, "rows": rows}])


def reaction_blocks(supports: Mapping[str, Mapping[str, float]], system: System) -> tuple[Block, ...]:
    """Unfactored loads on columns and walls, case by case, with their sums.

    Parameters
    ----------
    supports : mapping
        Mark -> case -> load [kN], every span loaded.
    system : "SI" or "US"
    """
    cases = [case for case in CASES if any(case in loads for loads in supports.values())]
    unit = display_unit("kN", system)[0]
    values = {
        case: [*(loads.get(case, 0.0) for loads in supports.values()),
               sum(loads.get(case, 0.0) for loads in supports.values())]
        for case in cases
    }  # fmt: skip
    shown = {case: shown_column(numbers, "kN", system) for case, numbers in values.items()}
    marks = [*supports, "sum"]
    rows = [[mark, *(shown[case][number] for case in cases)] for number, mark in enumerate(marks)]
    columns = [{"head": "support", "align": "left"}]
    columns += [{"head": f"{_NAMES[case]} [{unit}]", "align": "right"} for case in cases]
    caption = "Unfactored, every span loaded; downward on the support"
    table = {"type": "table", "caption": caption, "columns": columns, "rows": rows}
    return read_blocks([table | {"strong_rows": [len(supports)]}])


def _harmless(text: str) -> str:
    """A text no spreadsheet takes for a formula."""
    return f"'{text}" if text[:1] in ("=", "+", "-", "@", "\t", "\r") else text


def schedule_csv(sheets: Sequence[SheetContent], first_pages: Mapping[str, int]) -> str:
    """The schedule of beams as CSV, in kN, m, kNm and mm whatever units are shown.

    Parameters
    ----------
    sheets : sequence of SheetContent
    first_pages : mapping
        Mark -> number of its first sheet in the pack.
    """
    written = io.StringIO()
    writer = csv.writer(written, lineterminator="\n")
    writer.writerow(_CSV_HEADS)
    for content in sheets:
        results = results_of(content)
        envelope = results.get("envelope") or {}
        deflection = results.get("deflection") or {}
        governing = results.get("governing") or {}
        total = results.get("total") or {}
        holds = satisfied(results)
        numbers = [
            *(total.get(case) for case in CASES),
            envelope.get("moment_max"), envelope.get("moment_min"), envelope.get("shear_max"),
            deflection.get("total_mm"), deflection.get("live_mm"),
        ]  # fmt: skip
        ratio = _number(governing.get("ratio"))
        writer.writerow(
            [
                _harmless(content.mark),
                first_pages.get(content.mark, ""),
                _harmless(content.template.name),
                _harmless(content.template.version),
                " + ".join(f"{span:g}" for span in results.get("spans", ())),
                *("" if _number(value) is None else f"{_number(value):.6g}" for value in numbers),
                _harmless(str(governing.get("name") or "")),
                "" if ratio is None else f"{ratio:.4g}",
                {True: "yes", False: "no", None: ""}[holds],
            ]
        )
    return written.getvalue()
