"""The second copy: what the notebook holds and shows, against the record; what each shows of a formula."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from fractions import Fraction
from itertools import islice
from typing import Any

from calcpack.record.auditing.findings import Finding, Verdict, good, unchecked, wrong
from calcpack.record.auditing.formulas import Part
from calcpack.record.auditing.given import Notebook
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.printed import rounded_to, rounding_fault, rounds_to, twelve_digits
from calcpack.record.auditing.reading import Record, canonical, compact, written_alike
from calcpack.record.auditing.units import Unit, printed_unit, unit

MOST_DIFFERENCES = 200
_GROUP = "second copy"
_PLAIN = (str, float, int, bool, type(None))
_TERM = re.compile(
    r"(?P<whole>[0-9]+)(?:\.(?P<part>[0-9]+))?"
    r"(?:\s*(?:\\times|×)\s*10(?:\^\{(?P<power>-?[0-9]+)\}|(?P<raised>⁻?[⁰¹²³⁴⁵⁶⁷⁸⁹]+)))?"
    r"(?:\\,)?(?:\\text\{(?P<unit>[^}]{1,40})\})?"
)
_SIGNS = {"\\le": "≤", "\\ge": "≥", "<": "<", ">": ">", "=": "="}
_SIGNS_OF = {"le": "≤", "ge": "≥", "lt": "<", "gt": ">", "eq": "="}
_RELATION = re.compile(r"(\\le(?![a-z])|\\ge(?![a-z])|[<>=])")
_POWER = re.compile(r"\s*\\times\s*10\^\{(-?[0-9]{1,2})\}")
_SETTING = re.compile(r"\\text(?:bf)?\{([^{}]*)\}|\\,")
_RAISE = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")


def audit_copies(
    record: Record, notebook: Notebook | None, lines: Sequence[WorkedLine]
) -> tuple[Finding, ...]:
    """Hold a record against its notebook, and against itself as bytes.

    Parameters
    ----------
    record : Record
    notebook : Notebook or None
    lines : sequence of WorkedLine

    Returns
    -------
    tuple of Finding
        One for each place where they differ.
    """
    written = compact(record.data)
    findings = list(_canonical(record, written))
    if notebook is None:
        findings.append(
            unchecked(
                _GROUP,
                "texts of the record",
                "no notebook at hand to hold words, clauses, origins, names and the title block against",
            )
        )
        return tuple(findings)
    copy = notebook.record
    if copy is None:
        findings.append(wrong(_GROUP, notebook.name, "the notebook holds no record; it was not executed"))
    else:
        alike = compact(copy) == written
        differing = [] if alike else list(islice(differences(record.data, copy, ""), MOST_DIFFERENCES))
        for path, here, there in differing:
            place = _named(record, path)
            findings.append(
                wrong(_GROUP, place, "the notebook's record says otherwise", printed=here, other=there)
            )
        if not differing:
            findings.append(good(_GROUP, notebook.name, "its record equals the file"))
    findings += _metadata(record, notebook)
    findings += _shown_lines(notebook, lines)
    return tuple(findings)


def _canonical(record: Record, written: bytes) -> Iterator[Finding]:
    """Bytes that say the same as others would: a digit beyond the sixteen that a number has."""
    if written_alike(record.content, written):
        yield good(_GROUP, record.name, "written as records are")
        return
    right = canonical(record.data)
    ours, theirs = record.content.splitlines(), right.splitlines()
    rows = [number for number, (a, b) in enumerate(zip(ours, theirs, strict=False), start=1) if a != b]
    where = f"row {rows[0]}" if rows and len(ours) == len(theirs) else "its layout"
    yield wrong(
        _GROUP,
        record.name,
        f"{where} is not written as records are",
        printed=ours[rows[0] - 1].decode(errors="replace").strip()[:80] if rows else "",
        other=theirs[rows[0] - 1].decode().strip()[:80] if rows else "",
    )


def differences(one: object, other: object, path: str) -> Iterator[tuple[str, str, str]]:
    """Where two pieces of plain data differ: path, what the one says, what the other says.

    Examples
    --------
    >>> list(differences({"a": [1, 2]}, {"a": [1, 3]}, ""))
    [('a[1]', '2', '3')]
    """
    if type(one) is type(other) and type(one) in _PLAIN and one == other:
        return
    if isinstance(one, Mapping) and isinstance(other, Mapping):
        for key in dict.fromkeys((*one, *other)):
            inner = f"{path}.{key}" if path else str(key)
            if key not in one or key not in other:
                there = "nothing", "something"
                yield (inner, *(there if key not in one else there[::-1]))
            else:
                yield from differences(one[key], other[key], inner)
    elif isinstance(one, list) and isinstance(other, list):
        if len(one) != len(other):
            yield path, f"{len(one)} entries", f"{len(other)} entries"
        for place, (a, b) in enumerate(zip(one, other, strict=False)):
            yield from differences(a, b, f"{path}[{place}]")
    elif type(one) is not type(other) or one != other:
        yield path, f"{one!r:.60}", f"{other!r:.60}"


def _named(record: Record, path: str) -> str:
    """A path with the number of the line in place of its index."""
    match = re.match(r"lines\[(\d+)\]\.?(.*)", path)
    if not match or int(match[1]) >= len(record.lines):
        return path
    return f"line {record.lines[int(match[1])].no} {match[2]}".strip()


def _metadata(record: Record, notebook: Notebook) -> Iterator[Finding]:
    """Title block, mark and template of the notebook's two other places."""
    held = notebook.metadata
    template = record.data["template"]
    pairs: list[tuple[str, Any, Any]] = [
        ("mark", record.data["mark"], held.get("mark")),
        ("title block", record.data["job"], held.get("header")),
        ("revision", record.data["revision"], (held.get("header") or {}).get("revision")),
        ("template", template, held.get("template")),
    ]
    given = notebook.given
    if given is not None:
        named = given.data.get("template") or {}
        pairs += [
            ("mark in the parameters", record.data["mark"], given.mark),
            ("title block in the parameters", record.data["job"], given.data.get("header")),
            (
                "template in the parameters",
                template,
                {key: named.get(key) for key in ("name", "version", "sha256")},
            ),
            ("hash of the input", held.get("input"), given.data.get("input")),
            ("program", held.get("program"), given.data.get("program")),
        ]
    for says, one, other in pairs:
        if one == other:
            yield good(_GROUP, says, "record and notebook agree")
            continue
        first = next(iter(differences(one, other, "")), ("", "", ""))
        place = f"{says} {first[0]}".strip()
        yield wrong(_GROUP, place, "record and notebook differ", printed=first[1], other=first[2])


def _shown_lines(notebook: Notebook, lines: Sequence[WorkedLine]) -> Iterator[Finding]:
    """What the notebook shows of each line."""
    shown, by_number = notebook.lines, {line.line.no: line for line in lines}
    for line in lines:
        block = shown.get(line.line.no)
        if block is None:
            yield wrong(_GROUP, f"line {line.line.no}", "the notebook does not show this line")
            continue
        fault = _block_fault(line, block) or _likeness_fault(line, block, by_number, shown)
        yield Finding(
            _GROUP,
            f"line {line.line.no}",
            "as the notebook shows it",
            verdict=Verdict.WRONG if fault else Verdict.AGREES,
            remark=fault,
        )
    for extra in shown.keys() - {line.line.no for line in lines}:
        yield wrong(_GROUP, f"line {extra[:10]}", "the notebook shows a line that the record does not have")


def _block_fault(line: WorkedLine, block: Mapping[str, Any]) -> str:
    record = line.line
    if block.get("kind") != record.kind or block.get("passes") is not record.passes:
        return "its kind or its verdict is shown otherwise"
    if block.get("from") != list(dict.fromkeys(record.inputs.values())) and sorted(
        map(str, block.get("from") or ())
    ) != sorted(set(record.inputs.values())):
        return "it is shown as drawn from other lines"
    if block.get("cite") != record.cite or (block.get("origin") or "") != (record.origin or ""):
        return "its clause or its origin is shown otherwise"
    if isinstance(block.get("says"), str) and block["says"] != record.says:
        return "its words are shown otherwise"
    rows = block.get("rows")
    if not isinstance(rows, list) or not all(isinstance(row, list) for row in rows):
        return "its formula is not shown"
    texts = ["".join(map(str, row)) for row in rows]
    if record.kind != "require" and f"\\textbf{{{record.shown}}}" not in "".join(texts):
        return f"the notebook does not show it as {record.shown}"
    if record.kind == "require" and (fault := _sides_fault(line, compared(block))):
        return fault
    return _formula_fault(line, " ".join(texts)) if record.kind != "take" and not block.get("like") else ""


def compared(block: Mapping[str, Any]) -> tuple[str, str, str] | None:
    """What a requirement's last row sets against each other: left, sign, right; None where there is no such.

    Examples
    --------
    >>> compared({"rows": [["137.3\\\\,\\\\text{kN·m}", "\\\\le \\\\textbf{1.2 × 10³ kN·m}"]]})
    ('137.3 kN·m', '≤', '1.2 × 10³ kN·m')
    """
    rows = block.get("rows")
    if not isinstance(rows, list) or not rows or not isinstance(rows[-1], list):
        return None
    left, sign, right = ([*_RELATION.split("".join(map(str, rows[-1]))), "", ""])[:3]
    if not sign:
        return None
    return _printed(left), _SIGNS[sign], _printed(right)


def comparisons(notebook: Notebook | None) -> dict[str, str]:
    """What the notebook shows each requirement to compare, by its line's number: "25.0 mm ≤ 30.0 mm"."""
    if notebook is None:
        return {}
    found = {no: compared(block) for no, block in notebook.lines.items() if block.get("kind") == "require"}
    return {no: " ".join(sides) for no, sides in found.items() if sides is not None}


def _printed(latex: str) -> str:
    """A printed value without what sets it."""
    text = _POWER.sub(lambda power: " × 10" + power[1].translate(_RAISE), latex.strip())
    return _SETTING.sub(lambda part: part[1] or (" " if part[0] == "\\," else ""), text).strip()


def _sides_fault(line: WorkedLine, shown: tuple[str, str, str] | None) -> str:
    """What a requirement compares is what is shown, rounded as it is shown."""
    if line.sides is None:
        return ""
    if shown is None or shown[1] != _SIGNS_OF.get(line.formula.op):
        return "what it compares is not shown"
    for side, text in zip(line.sides, (shown[0], shown[2]), strict=True):
        base = Unit(Fraction(1), side.force, side.length)  # type: ignore[arg-type]
        if fault := rounding_fault(side.near, base, text):
            return fault
    return ""


def _likeness_fault(
    line: WorkedLine,
    block: Mapping[str, Any],
    by_number: Mapping[str, WorkedLine],
    shown: Mapping[str, Mapping[str, Any]],
) -> str:
    """A line shown in short names one shown in full whose formula is the same but for its symbols."""
    like = block.get("like")
    if not like:
        return ""
    other = by_number.get(like) if isinstance(like, str) else None
    if other is None or shown.get(like, {}).get("like") or other.line.kind != line.line.kind:
        return "it is said to be worked out as a line that is not shown in full"
    if _shape(line.formula, {}) != _shape(other.formula, {}):
        return f"it is said to be worked out as line {like}, whose formula is another"
    return ""


def _shape(part: Part, places: dict[str, int]) -> tuple[object, ...]:
    """A formula with places in place of its symbols."""
    text: object = places.setdefault(part.text, len(places)) if part.op == "symbol" else part.text
    return part.op, text, part.unit, tuple(_shape(each, places) for each in part.args)


def _formula_fault(line: WorkedLine, text: str) -> str:
    """Every number in the stored formula stands in the shown one, rounded as it is shown."""
    literals = [(part, bare) for part, bare in _literals(line.formula, "") if not _is_left_out(part)]
    terms = [_Term(match) for match in _TERM.finditer(text)] if literals else []
    for part, bare in literals:
        try:
            kept = any(term.stands_for(part, bare) for term in terms)
        except ValueError as error:
            return str(error)
        if not kept:
            return f"the formula holds {part.text} {part.unit}".rstrip() + ", and it is not shown so"
    return ""


def _is_left_out(part: Part) -> bool:
    """A bare 0 or 1 may stand for itself without being written."""
    return part.op == "number" and Fraction(part.text) in (0, 1)


def _literals(part: Part, bare: str) -> Iterator[tuple[Part, str]]:
    """Numbers of a formula that are sure to be shown, with the unit they are shown without."""
    if part.op in ("number", "quantity", "measured"):
        yield part, bare
    elif part.op != "choose":  # of two values the sheet shows the one taken
        for each in part.args:
            yield from _literals(each, part.unit if part.op == "number_in" else bare)


class _Term:
    """A number that a formula shows, with its unit's label; one of its last digit is its step."""

    def __init__(self, match: re.Match[str]) -> None:
        part = match["part"] or ""
        power = int(match["power"] or (match["raised"] or "0").translate(_RAISED))
        self.digits = int(match["whole"] + part)
        self.power = max(-40, min(power, 40)) - len(part)
        self.label = match["unit"] or ""

    def stands_for(self, part: Part, bare: str) -> bool:
        """Whether it is a literal of the formula, rounded.

        Raises
        ------
        ValueError
            The literal's unit is none.
        """
        of = part.unit or "1"
        if not self.label:  # a number shown without its unit, inside one that is worked on without
            shown = unit(bare) if bare else unit(of)
        else:
            try:
                shown = printed_unit(self.label)
            except ValueError:
                return False
            if shown.dimension != unit(of).dimension:
                return False
        step = 10.0**self.power
        sure = rounds_to(float(part.text) * unit(of).near / shown.near, self.digits * step, step)
        if sure is not None:
            return sure
        size = twelve_digits(float(part.text)) * unit(of).size / shown.size
        exact = Fraction(10) ** self.power
        return rounded_to(size, exact) == self.digits * exact
