"""Whether a value brought in is what its origin holds: the panel, the section, the material, the beam."""

from __future__ import annotations

import bisect
import re
from collections.abc import Iterator, Sequence
from itertools import pairwise

from calcpack.record.auditing.findings import Finding, Verdict, good, wrong
from calcpack.record.auditing.given import Given
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.reading import Record, RecordLine
from calcpack.record.auditing.units import unit

AGREEMENT = 1e-9
_GROUP = "origins"
_NAMED = re.compile(r"(panel|section|material|beam|sheet) (.+)")
_LOAD = re.compile(r"load [0-9]+")
_LETTERS = {"g": "dead", "q": "live", "r": "roof_live", "s": "snow"}
_TOTAL = re.compile(r"W_([gqrs])")
_EQUIVALENT = re.compile(r"w_eq,([gqrs])([0-9]*)")


def numbers(data: object) -> Iterator[float]:
    """Every number in nested plain data."""
    kind = type(data)
    if kind is dict:
        for each in data.values():  # type: ignore[attr-defined]
            yield from numbers(each)
    elif kind is list or kind is tuple:
        for each in data:  # type: ignore[attr-defined]
            yield from numbers(each)
    elif kind is float or kind is int:
        yield float(data)  # type: ignore[arg-type]


class _Pools:
    """The numbers that an origin may stand for, gathered once for all the lines that name it.

    Parameters
    ----------
    given : Given
    """

    def __init__(self, given: Given) -> None:
        self.given = given
        panels = sorted(given.panels, key=lambda each: -len(str(each["panel"]["mark"])))
        self.panels = {str(each["panel"]["mark"]): each for each in panels}
        self._whole: dict[str, list[float]] = {}

    def of(self, origin: str) -> tuple[list[float], bool]:
        """Numbers in kN and m, ascending, and whether the value must be one of them.

        A value that a clause or a table derives from a grade, a section or a design key need not be.
        """
        given = self.given
        if origin.startswith(("design.", f"beam {given.mark} design.")):
            return self._once("design", given.data.get("design") or {}), False
        own = [each for each in given.data.get("bars") or () if each["source"] == origin]
        if own:
            return sorted(numbers(own)), True
        match = _NAMED.match(origin)
        if not match:
            return [], False
        kind, rest = match[1], match[2]
        if kind == "panel":
            return self._panel(rest), True
        if kind == "sheet":
            return sorted(_carried(rest.split(",")[0], given)), True
        if kind == "beam":
            values, sure = _beam(rest, given)
            return sorted(values), sure
        held = given.section if kind == "section" else given.material
        if held is None or not _begins(rest, str(held["key"])):
            return [], True
        return self._once(kind, held), bool(rest[len(str(held["key"])) :].strip())

    def _once(self, name: str, data: object) -> list[float]:
        if name not in self._whole:
            self._whole[name] = sorted(numbers(data))
        return self._whole[name]

    def _panel(self, rest: str) -> list[float]:
        for mark, transfer in self.panels.items():
            if not _begins(rest, mark):
                continue
            panel = transfer["panel"]
            value = panel.get(rest[len(mark) :].strip(" ,"))
            if isinstance(value, int | float):
                return [float(value)]
            return self._once(f"panel {mark}", [transfer, list(_legs(panel["corners"]))])
        return []


def _begins(rest: str, name: str) -> bool:
    """Whether what follows "panel" or the like is of that name."""
    return rest.startswith(name) and rest[len(name) : len(name) + 1] in ("", " ", ",")


def _nearest(pool: Sequence[float], size: float) -> float | None:
    """The number of an ascending pool nearest to a size."""
    place = bisect.bisect_left(pool, size)
    return min(pool[max(0, place - 1) : place + 1], key=lambda each: abs(each - size), default=None)


def audit_origins(record: Record, given: Given | None, lines: Sequence[WorkedLine]) -> tuple[Finding, ...]:
    """Hold each value brought in against what its origin names.

    Parameters
    ----------
    record : Record
    given : Given or None
    lines : sequence of WorkedLine

    Returns
    -------
    tuple of Finding
        One a line; those whose origin lies outside the job are named together.
    """
    taken = [line for line in lines if line.line.kind == "take"]
    if given is None:
        return (
            Finding(
                _GROUP,
                "values brought in",
                f"{len(taken)} lines",
                verdict=Verdict.OPEN,
                remark="no notebook at hand that holds the job's values",
            ),
        )
    findings, outside = [], []
    pools, results = _Pools(given), sorted(map(abs, numbers(record.results)))
    for line in taken:
        origin = line.line.origin or ""
        if origin.startswith("analysis") and _from_results(line.line, results):
            findings.append(good(_GROUP, f"line {line.line.no}", "equals a figure of the results"))
            continue
        pool, sure = pools.of(origin)
        found = _held(line, pool)
        # A plain number is a factor that a clause gives for what the origin holds, not a value of it.
        if found.verdict is Verdict.AGREES or (sure and line.line.unit != "1"):
            findings.append(found)
        else:
            outside.append(line.line)
    if outside:
        origins = dict.fromkeys(each.origin or "nothing" for each in outside)
        findings.append(
            Finding(
                _GROUP,
                "lines " + ", ".join(each.no for each in outside),
                "brought in from: " + ", ".join(origins),
                verdict=Verdict.OPEN,
                remark="a clause recommends them or the template chose them: no file says what they "
                "should be; each stands on the sheet with where it comes from, for its reader to judge",
            )
        )
    findings += _handed_on(record, given, lines)
    try:
        findings += _shared(record, given, lines)
    except (ValueError, AttributeError, TypeError) as error:
        findings.append(wrong(_GROUP, "results", f"they are not written as results ({error})"))
    return tuple(findings)


def _held(line: WorkedLine, pool: Sequence[float]) -> Finding:
    try:
        size = line.line.value * unit(line.line.unit).near
    except ValueError:
        size = line.line.value
    near = _nearest(pool, size)
    agrees = near is not None and abs(near - size) <= AGREEMENT * max(abs(near), abs(size)) + 1e-15
    return Finding(
        _GROUP,
        f"line {line.line.no}",
        line.line.says,
        line.line.shown,
        line.line.origin or "",
        "",
        Verdict.AGREES if agrees else Verdict.WRONG,
        "" if agrees else f"'{(line.line.origin or '')[:60]}' holds no such value",
    )


def _legs(corners: Sequence[Sequence[float]]) -> Iterator[float]:
    for a, b in pairwise([*corners, corners[0]]):
        yield abs(float(a[0]) - float(b[0]))
        yield abs(float(a[1]) - float(b[1]))


def _carried(mark: str, given: Given) -> list[float]:
    return [value for each in given.carried if each["mark"] == mark for value in numbers(each["reactions"])]


def _beam(rest: str, given: Given) -> tuple[list[float], bool]:
    loads = [load for rows in given.loads.values() for load in rows]
    if (named := _LOAD.search(rest)) is not None:
        own = [load for load in loads if load.source == named[0]]
        return [value for load in own for value in (load.start, load.end, load.first, load.last)], True
    places = [float(each["at"]) for each in given.carried if rest.startswith(f"{each['mark']} ")]
    if places:
        return places, True
    if rest.startswith(f"{given.mark} line"):
        ends = [each for span in given.spans for each in span]
        return [given.length, *ends, *(end - start for start, end in given.spans)], True
    return [], False


def _handed_on(record: Record, given: Given, lines: Sequence[WorkedLine]) -> Iterator[Finding]:
    """Figures of the analysis that stand inside formulas: those that results and loads do not have."""
    held = {key: each for key, each in given.data.items() if key != "plan"}
    known = sorted({abs(each) for each in (*numbers(record.results), *numbers(held))})
    loose = []
    for worked in lines:
        if worked.line.kind == "take":
            continue
        for part in worked.formula.walk():
            if part.op == "measured" and not _is_known(float(part.text) * unit(part.unit).near, known):
                loose.append(worked.line.no)
                break
    if loose:
        yield Finding(
            _GROUP,
            "lines " + ", ".join(loose),
            "figures of the analysis inside their formulas",
            verdict=Verdict.OPEN,
            remark="no result has them: they are held against the notebook, to the digits it shows",
        )


def _is_known(size: float, known: Sequence[float]) -> bool:
    slack = AGREEMENT * abs(size) + 1e-15
    place = bisect.bisect_left(known, abs(size) - slack)
    return place < len(known) and known[place] <= abs(size) + slack


def _from_results(line: RecordLine, results: Sequence[float]) -> bool:
    """Whether a value brought in from the analysis is one of the figures of the results, in size."""
    try:
        size = abs(line.value) * unit(line.unit).near
    except ValueError:
        return False
    return _is_known(size, results) or _is_known(1000 * size, results)  # deflections stand in mm


def _shared(record: Record, given: Given | None, lines: Sequence[WorkedLine]) -> Iterator[Finding]:
    """Lines that say what a figure of the results says."""
    results = record.results
    for worked in lines:
        line = worked.line
        if line.kind != "hence":
            continue
        if (match := _TOTAL.fullmatch(line.symbol)) is not None:
            case = _LETTERS[match[1]]
            stated = (results.get("total") or {}).get(case)
            yield _equal(line, stated, f"results.total.{case}")
        elif (match := _EQUIVALENT.fullmatch(line.symbol)) is not None and given is not None:
            case = _LETTERS[match[1]]
            field = given.equivalent.replace("-", " ").replace(" ", "_")
            rows = results.get("equivalent")
            rows = rows if isinstance(rows, list) else []
            between = [number for number, row in enumerate(rows) if isinstance(row, dict)]
            number = int(match[2]) - 1 if match[2] else between[0] if between else 0
            row = rows[number] if number < len(rows) and isinstance(rows[number], dict) else {}
            path = f"results.equivalent[{number}].{case}.{field}"
            yield _equal(line, (row.get(case) or {}).get(field), path)


def _equal(line: RecordLine, stated: object, path: str) -> Finding:
    size = line.value * unit(line.unit).near
    agrees = (
        isinstance(stated, int | float)
        and not isinstance(stated, bool)
        and abs(stated - size) <= AGREEMENT * max(abs(stated), abs(size)) + 1e-12
    )
    return Finding(
        _GROUP,
        f"line {line.no}",
        f"equals {path}",
        line.shown,
        f"{stated!r:.40}",
        "",
        Verdict.AGREES if agrees else Verdict.WRONG,
        "" if agrees else f"{path} is another value",
    )
