"""A comparison in words: for the terminal, as a table file, and as a section of the new pack."""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping, Sequence
from typing import Any

from calcpack.export.pack import Section
from calcpack.record.compare import Comparison, LineChange

DASH = "–"
_HEADS = ("beam", "what", "line before", "line now", "words", "symbol", "before", "now", "unit", "change [%]",
          "requirement")  # fmt: skip


def _percent(change: LineChange) -> str:
    return "" if change.percent is None else f"{change.percent:+.1f} %"


def _shown(change: LineChange) -> tuple[str, str]:
    return tuple(DASH if each is None else each.shown for each in (change.old, change.new))  # type: ignore[return-value]


def as_text(comparison: Comparison, *, lines: bool = True) -> str:
    """The comparison for the terminal.

    Parameters
    ----------
    comparison : Comparison
    lines : bool
        List the changed lines, too.
    """
    old, new = comparison.old.says, comparison.new.says
    said = [f"{old} -> {new}"]
    for words, marks in (
        ("new", comparison.added),
        ("left out", comparison.removed),
        ("changed", comparison.changed),
        ("unchanged", comparison.unchanged),
    ):
        if marks:
            said.append(f"{words}: {', '.join(marks)}")
    if comparison.inputs:
        said.append("inputs:")
        for each in comparison.inputs:
            said.append(f"  {each.origin}: {each.says}: {each.old} -> {each.new} ({', '.join(each.marks)})")
    if comparison.turned:
        said.append("requirements that changed side:")
        for change in comparison.turned:
            said.append(f"  {change.mark} line {change.line.no}: {change.line.says}: {change.turned}")
    if lines:
        for mark, changes in comparison.lines.items():
            said.append(f"{mark}:")
            for change in changes:
                before, after = _shown(change)
                said.append(
                    f"  {change.line.no} {change.line.says}: {before} -> {after} {_percent(change)}".rstrip()
                )
    return "\n".join(said)


def as_csv(comparison: Comparison) -> str:
    """Every changed line as CSV."""
    written = io.StringIO()
    writer = csv.writer(written, lineterminator="\n")
    writer.writerow(_HEADS)
    for words, marks in (("new", comparison.added), ("left out", comparison.removed)):
        for mark in marks:
            writer.writerow([_harmless(mark), f"beam {words}", *([""] * (len(_HEADS) - 2))])
    for change in comparison.all:
        old, new = change.old, change.new
        what = "input" if change.is_input else change.line.kind
        what += "" if old and new else ", new" if new else ", left out"
        cells = [
            change.mark, what, old.no if old else "", new.no if new else "", change.line.says,
            change.line.symbol, old.shown if old else "", new.shown if new else "", change.line.unit,
        ]  # fmt: skip
        percent = "" if change.percent is None else f"{change.percent:.3g}"
        writer.writerow([*map(_harmless, cells), percent, change.turned])
    return written.getvalue()


def _harmless(text: str) -> str:
    """A text no spreadsheet takes for a formula; a signed number stays one."""
    risky = text[:1] in ("=", "+", "@", "\t", "\r") or (text[:1] == "-" and text[1:2].isalpha())
    return f"'{text}" if risky else text


def changes_section(comparison: Comparison) -> Section:
    """The section "changes since" of the new pack; its lines lead to the sheets."""
    old, new = comparison.old.says, comparison.new.says
    blocks: list[dict[str, Any]] = [
        {
            "type": "text",
            "runs": f"Compared with {old}, line by line. A changed line is marked in the margin of its sheet."
            " An unchanged sheet keeps its revision letter where its number in the pack stays the same.",
        },
        {"type": "facts", "rows": _facts(comparison)},
    ]
    if comparison.inputs:
        rows = [
            [each.origin, each.says, each.old, each.new, _listed([[mark] for mark in each.marks])]
            for each in comparison.inputs
        ]
        blocks.append(_table("Inputs", ("input", "what it is", old, new, "beams"), rows))
    if comparison.turned:
        rows = [
            [_line(change), change.line.says, [{"strong": change.turned}]] for change in comparison.turned
        ]
        blocks.append(_table("Requirements that changed side", ("line", "requirement", new), rows))
    if comparison.lines:
        rows = [_beam(mark, changes, comparison) for mark, changes in comparison.lines.items()]
        blocks.append(
            _table("Changed beams", ("beam", f"governing, {old}", f"governing, {new}", "changed lines"), rows)
        )
    return Section.of(f"Changes since {old}", blocks)


def _facts(comparison: Comparison) -> list[list[Any]]:
    return [
        [label, _listed([[{"line": mark}] if linked else [mark] for mark in marks])]
        for label, marks, linked in (
            ("new beams", comparison.added, True),
            ("beams left out", comparison.removed, False),
            ("changed beams", comparison.changed, True),
            ("unchanged beams", comparison.unchanged, True),
        )
        if marks
    ] or [["beams", "none changed"]]


def _beam(mark: str, changes: Sequence[LineChange], comparison: Comparison) -> list[Any]:
    governing = [_governing(edition.sheets[mark].results) for edition in (comparison.old, comparison.new)]
    lines = [[{"line": f"{mark} {change.new.no}"}] for change in changes if change.new is not None]
    gone = sum(1 for change in changes if change.new is None)
    runs = _listed(lines) if lines else []
    if gone:
        runs = [*runs, f"{', ' if runs else ''}{gone} left out"]
    return [[{"line": mark}], *governing, runs]


def _governing(results: Mapping[str, Any]) -> str:
    found = results.get("governing") or {}
    ratio = found.get("ratio")
    if not isinstance(ratio, int | float):
        envelope = results.get("envelope") or {}
        moment = envelope.get("moment_max")
        return f"moment {moment:.4g} kN·m" if isinstance(moment, int | float) else DASH
    return f"{str(found.get('name', ''))[:80]} {ratio:.2f}"


def _line(change: LineChange) -> list[Any]:
    return [{"line": f"{change.mark} {change.line.no}"}]


def _listed(parts: Sequence[Sequence[Any]]) -> list[Any]:
    """Runs with commas between them."""
    runs: list[Any] = []
    for number, part in enumerate(parts):
        runs += [", "] if number else []
        runs += part
    return runs


def _table(caption: str, heads: Sequence[str], rows: Sequence[Sequence[Any]]) -> dict[str, Any]:
    return {
        "type": "table",
        "caption": caption,
        "columns": [{"head": head} for head in heads],
        "rows": [list(row) for row in rows],
    }
