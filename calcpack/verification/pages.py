"""The comparisons of a topic as blocks of the manual."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import groupby
from typing import Any

from calcpack.verification import shown
from calcpack.verification.comparison import Comparison
from calcpack.verification.findings import Findings
from calcpack.verification.methods import MethodResult
from calcpack.verification.reckon import notices
from calcpack.verification.tables import Row, Source, Table, Topic
from calcpack.verification.theory import Data, heading, table, text

MOST_SIDE_BY_SIDE, LEAST_ROWS = 3, 8


def cited(source: Source) -> str:
    """Title and edition."""
    return f"{source.title}, {source.edition}" if source.edition else source.title


def _sources(topic: Topic) -> Data:
    rows = [[key, cited(source), source.known] for key, source in topic.sources.items()]
    return table((("short for", "left"), ("source", "left"), ("how known", "left")), rows)


def _source_line(found: Table, rows: Sequence[Row]) -> list[Any]:
    """Where a table's values are from: once for all rows, or by what their labels say."""
    if found.source:
        parts = rows[0].sources
        words = "; ".join(
            ", ".join(part for part in (cited(source), place) if part) + f" ({source.known})"
            for source, place in parts
        )
    else:
        seen = dict.fromkeys((cited(source), source.known) for row in rows for source, _ in row.sources)
        words = "; ".join(f"{title} ({known})" for title, known in seen)
    return [{"strong": "Source. "}, words + "."]


def _tolerance_lines(found: Table, comparisons: Sequence[Comparison]) -> list[str]:
    """Why a tolerance is not the printed rounding."""
    reasons = dict.fromkeys(
        (quantity.because, quantity.shown)
        for quantity in found.compared
        if quantity.because and any(each.quantity == quantity for each in comparisons)
    )
    by_reason: dict[str, list[str]] = {}
    for because, name in reasons:
        by_reason.setdefault(because, []).append(name)
    return [f"{', '.join(names)}: {because}" for because, names in by_reason.items()]


def _notices(found: Table, comparisons: Sequence[Comparison]) -> str:
    """How many rows would notice the table's slip."""
    if found.noticed is None:
        return ""
    rows = [list(group) for _, group in groupby(comparisons, key=lambda each: id(each.row))]
    seen = sum(1 for group in rows if notices(group[0].row, group))
    return f"{found.noticed.says} would be noticed in {seen} of {len(rows)} rows"


def _head(found: Table) -> str:
    """What the rows of a table are."""
    return "case" if found.label else found.columns[0]


def _is_wide(found: Table) -> bool:
    """Whether a row has room for all its quantities, their tolerances being said once."""
    rules = {quantity.within for quantity in found.compared}
    few = 2 <= len(found.compared) <= MOST_SIDE_BY_SIDE and len(found.rows) >= LEAST_ROWS
    return few and not rules & {*found.columns, "same"}


def _comparison_table(found: Table, comparisons: Sequence[Comparison]) -> Data:
    """One line a comparison."""
    one = len(found.compared) == 1
    columns = [(_head(found), "left")]
    columns += [] if one else [("quantity", "left")]
    columns += [(_theirs(found), "right"), ("ours", "right"), ("difference", "right")]
    columns += [("allowed", "right"), ("verdict", "left")]
    rows: list[list[Any]] = []
    before = None
    for each in comparisons:
        label = "" if each.row is before else each.row.label
        before = each.row
        figures = [shown.published(each), shown.ours(each), shown.difference(each), shown.allowed(each)]
        rows.append([label, *([] if one else [each.quantity.shown]), *figures, shown.verdict(each.holds)])
    strong = [number for number, each in enumerate(comparisons) if not each.holds]
    unit = found.compared[0].unit if one else ""
    return {**table(columns, rows, f"Values in {unit}" if unit else ""), "strong_rows": strong}


def _theirs(found: Table) -> str:
    return "stated" if found.kind == "deviation" else "published"


def _wide_table(found: Table, comparisons: Sequence[Comparison]) -> Data:
    """One line a row: of each quantity the published value, ours and the difference."""
    columns = [(_head(found), "left")]
    for quantity in found.compared:
        columns += [(quantity.shown, "right"), ("ours", "right"), ("difference", "right")]
    rows: list[list[Any]] = []
    strong = []
    for _, group in groupby(comparisons, key=lambda each: id(each.row)):
        by_column = {each.quantity.column: each for each in group}
        wrong = [each.quantity.column for each in by_column.values() if not each.holds]
        cells: list[Any] = [next(iter(by_column.values())).row.label]
        for quantity in found.compared:
            each = by_column.get(quantity.column)
            cells += [shown.published(each), shown.ours(each), shown.difference(each)] if each else ["–"] * 3
        if wrong:
            strong.append(len(rows))
        rows.append([*cells, f"{', '.join(wrong)} does not hold" if wrong else "holds"])
    rules = "; ".join(f"{quantity.shown} {shown.rule(quantity, comparisons)}" for quantity in found.compared)
    caption = f"Of each quantity the {_theirs(found)} value, ours and the difference. Allowed: {rules}"
    return {**table([*columns, ("verdict", "left")], rows, caption), "strong_rows": strong}


def table_blocks(found: Table, comparisons: Sequence[Comparison]) -> list[Data]:
    """A published table beside ours."""
    rows = [comparisons[0].row] if found.source else [each.row for each in comparisons]
    words: list[Any] = [f"{found.says} "] if found.says else []
    words += _source_line(found, rows)
    notes = [found.note] if found.note else []
    reasons = _tolerance_lines(found, comparisons)
    if reasons:
        notes.append("Allowed is not half a printed unit for " + "; ".join(reasons) + ".")
    if slip := _notices(found, comparisons):
        notes.append(slip[0].upper() + slip[1:] + ".")
    blocks = [heading(found.title), text(*words)]
    if notes:
        blocks.append(text(" ".join(notes), role="note"))
    shape = _wide_table if _is_wide(found) else _comparison_table
    return [*blocks, shape(found, comparisons)]


def method_blocks(methods: Sequence[MethodResult]) -> list[Data]:
    """Comparisons with other methods."""
    if not methods:
        return []
    rows = []
    for each in methods:
        method = each.method
        run = "run for this manual" if method.live else "run by the tests"
        share = shown.of_allowed(each.share) if method.live else "–"
        noticed = f" Noticed: {method.noticed}." if method.noticed else ""
        rows.append(
            [
                [
                    {"strong": method.title},
                    f", beside {method.by}. {method.says}; {method.measure}.{noticed}",
                ],
                str(method.cases),
                shown.short(method.within),
                share,
                f"{shown.verdict(each.holds)}, {run}" if method.live else run,
            ]
        )
    columns = (
        ("method", "left"), ("cases", "right"), ("allowed", "right"), ("largest, of it", "right"),
        ("verdict", "left"),
    )  # fmt: skip
    return [heading("Other methods"), table(columns, rows)]


def topic_blocks(found: Findings, topic: Topic) -> list[Data]:
    """A topic: its sources, its tables, its other methods; stated deviations have a section of their own."""
    comparisons, methods = found.of(topic)
    letters = ", ".join(f"{letter} = {formula}" for letter, formula in topic.letters.items())
    blocks = [text(topic.says + (f" Numbers: {letters}." if letters else ""))]
    if topic.sources:
        blocks.append(_sources(topic))
    for each in topic.table:
        if each.kind == "published":
            blocks += table_blocks(each, [one for one in comparisons if one.table is each])
    return [*blocks, *method_blocks(methods)]


def deviation_blocks(found: Findings) -> list[Data]:
    """Every table of deviations that the program states of itself."""
    return [
        block
        for topic in found.topics
        for each in topic.table
        if each.kind == "deviation"
        for block in table_blocks(each, [one for one in found.comparisons if one.table is each])
    ]
