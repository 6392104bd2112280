"""The results of a record worked out again: sums, a second method for the beam, combinations, checks."""

from __future__ import annotations

import functools
import math
from collections.abc import Mapping, Sequence
from itertools import pairwise

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.beam import Load, Solution, solve
from calcpack.record.auditing.book import Book, figure
from calcpack.record.auditing.checks import audit_checks
from calcpack.record.auditing.deflections import STATED_BY, stated_deflections
from calcpack.record.auditing.demands import Demand, design_demand
from calcpack.record.auditing.envelopes import Extreme, Worst
from calcpack.record.auditing.findings import Finding, Verdict
from calcpack.record.auditing.given import LONGEST, MOST_LOADS, Given, recorded_loads
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.reading import Record
from calcpack.record.auditing.shapes import Maybe, misfit
from calcpack.record.auditing.spans import FIELDS, span_equivalents

MOST_COMBINATIONS = 200
MOST_SPANS = 60
_NEEDS_NOTEBOOK = "only the sheet's notebook says how live load is placed on this beam and those above"
_NO_GEOMETRY = "neither record nor notebook says where the beam stands"
_PLACE = 1e-7  # of the length
_STANDS = {"spans": [float], "supports": Maybe([float]), "fixed": Maybe((bool, bool))}


class Beam:
    """Where a beam stands and what lies on it, from the notebook where there is one, else from the record.

    Parameters
    ----------
    record : Record
    given : Given or None
    """

    def __init__(self, record: Record, given: Given | None) -> None:
        results = record.results
        self.given = given
        if given is not None:
            self.length, self.fixed = given.length, given.fixed
            self.supports: tuple[float, ...] | None = given.supports
            self.loads: Mapping[str, tuple[Load, ...]] = given.loads
        else:
            try:
                if fault := misfit(results, _STANDS):
                    raise ValueError(fault)
                self.length = math.fsum(map(float, results["spans"]))
                places = results.get("supports")
                self.supports = None if places is None else tuple(map(float, places))
                ends = results.get("fixed") or (False, False)
                self.fixed = (ends[0], ends[1])
                self.loads = recorded_loads(results.get("loads"))
                if not 0.0 < self.length <= LONGEST:
                    raise ValueError(f"no beam is {self.length:g} m long")
            except ValueError as error:
                raise CalcpackError(
                    f"spans, supports or loads are not written as such: {error}",
                    file=record.name,
                    key="results",
                ) from None
        self.cases = tuple(self.loads)
        if len(self.spans) > MOST_SPANS or sum(map(len, self.loads.values())) > MOST_LOADS:
            raise CalcpackError("more spans or loads than a beam has", file=record.name, key="results")

    @property
    def spans(self) -> tuple[tuple[float, float], ...]:
        """Start and end of every span [m]."""
        return tuple(pairwise(sorted({0.0, self.length, *(self.supports or ())})))

    def solved(self, sets: Sequence[Sequence[Load]]) -> Solution | None:
        """The second method; None where it is not known where the beam stands."""
        return None if self.supports is None else solve(self.length, self.supports, self.fixed, sets)

    @functools.cached_property
    def weight(self) -> float:
        """All load by size [kN]: what rounding is measured against."""
        return sum(abs(load.total) for loads in self.loads.values() for load in loads)


def audit_results(
    record: Record, given: Given | None, lines: Sequence[WorkedLine]
) -> tuple[tuple[Finding, ...], Beam]:
    """Work a record's results out again.

    Parameters
    ----------
    record : Record
    given : Given or None
        The notebook's parameters, where there is a notebook.
    lines : sequence of WorkedLine

    Returns
    -------
    findings, beam
        Every figure of the results stands in one of the findings.

    Raises
    ------
    CalcpackError
        The results are not written as results, or are beyond all bounds.
    """
    book = Book(record.results)
    beam = Beam(record, given)
    try:
        _geometry(book, beam)
        _loads(book, beam, record)
        _totals(book, beam)
        _reactions(book, beam)
        _equivalents(book, beam)
        _combinations(book, beam, record)
    except ValueError as error:
        book.wrong("results", str(error))
    stated_deflections(book, record, lines)
    _envelope_of_combinations(book, record)
    audit_checks(book, record, lines)
    book.leave_open("results.combinations", _NEEDS_NOTEBOOK)
    book.leave_open("results.deflection", _NEEDS_NOTEBOOK)
    return book.close(), beam


def _geometry(book: Book, beam: Beam) -> None:
    """Spans against the supports; where only the record says them, they are what everything rests on."""
    for number, (start, end) in enumerate(beam.spans):
        if beam.supports is not None:
            book.compare(
                f"results.spans[{number}]", end - start, "m", f"span {number + 1}", scale=beam.length
            )
    if beam.given is None:
        return
    for number, at in enumerate(beam.given.supports):
        if f"results.supports[{number}]" in book.stated:
            book.compare(
                f"results.supports[{number}]", at, "m", f"place of support {number + 1}", scale=beam.length
            )
    for number, fixed in enumerate(beam.given.fixed):
        path = f"results.fixed[{number}]"
        if path in book.stated:
            book.settle(
                path, book.stated[path] is fixed, "the notebook says otherwise", "end held", str(fixed)
            )


def _loads(book: Book, beam: Beam, record: Record) -> None:
    """The loads as the record has them, against those the notebook was given."""
    if beam.given is None:
        for path in list(book.stated):
            if path.startswith("results.loads"):
                book.seen(path)
        book.findings.append(
            Finding(
                "loads",
                "results.loads",
                "loads on the beam",
                verdict=Verdict.OPEN,
                remark="no notebook to hold them against; what follows is worked out from them",
            )
        )
        return
    stated = recorded_loads(record.results.get("loads"))
    for case in dict.fromkeys((*stated, *beam.loads)):
        ours, theirs = beam.loads.get(case, ()), stated.get(case, ())
        base = f"results.loads.{case}"
        if len(ours) != len(theirs):
            book.wrong(base, f"the notebook has {len(ours)} loads, the record {len(theirs)}")
        for number, (one, other) in enumerate(zip(ours, theirs, strict=False)):
            _one_load(book, f"{base}[{number}]", one, other)


def _one_load(book: Book, path: str, ours: Load, theirs: Load) -> None:
    names = (
        {"at": "start", "force": "first"}
        if theirs.point
        else {"from": "start", "to": "end", "start": "first", "end": "last"}
    )
    differ = [key for key, name in names.items() if getattr(ours, name) != getattr(theirs, name)]
    differ += ["source"] if ours.source != theirs.source or ours.point != theirs.point else []
    for key in (*names, "source"):
        book.seen(f"{path}.{key}")
    book.findings.append(
        Finding(
            "loads",
            f"{path}.{differ[0]}" if differ else path,
            f"load from {ours.source}",
            _said(theirs),
            _said(ours),
            "",
            Verdict.WRONG if differ else Verdict.AGREES,
            "the notebook's load is another" if differ else "",
        )
    )


def _said(load: Load) -> str:
    if load.point:
        return f"{figure(load.first)} kN at {figure(load.start)} m"
    return f"{figure(load.first)} to {figure(load.last)} kN/m, {figure(load.start)} to {figure(load.end)} m"


def _totals(book: Book, beam: Beam) -> None:
    for case, loads in beam.loads.items():
        book.compare(
            f"results.total.{case}",
            math.fsum(load.total for load in loads),
            "kN",
            f"sum of segments and points, {_words(case)}",
            scale=beam.weight,
        )


def _words(case: str) -> str:
    return case.replace("_", " ") if case == "snow" else f"{case.replace('_', ' ')} load"


def _reactions(book: Book, beam: Beam) -> None:
    solution = beam.solved([beam.loads[case] for case in beam.cases])
    if solution is None:
        book.leave_open("results.reactions", _NO_GEOMETRY)
        return
    for row, case in enumerate(beam.cases):
        forces = solution.reactions[row].tolist()
        stated = [book.stated.get(f"results.reactions.{case}[{place}]") for place in range(len(forces))]
        agrees = [
            book.compare(
                f"results.reactions.{case}[{place}]",
                force,
                "kN",
                f"reaction {place + 1}, {_words(case)}, by finite elements",
                scale=beam.weight,
            )
            for place, force in enumerate(forces)
        ]
        total = math.fsum(load.total for load in beam.loads[case])
        if all(agrees):
            added = math.fsum(each for each in stated if each is not None)
            book.findings.append(
                Finding(
                    "results",
                    f"results.reactions.{case}",
                    f"reactions add up to the load, {_words(case)}",
                    f"{figure(added)} kN",
                    f"{figure(total)} kN",
                    "",
                    Verdict.AGREES if abs(added - total) <= 1e-9 * beam.weight else Verdict.WRONG,
                )
            )


def _equivalents(book: Book, beam: Beam) -> None:
    if beam.supports is None:
        book.leave_open("results.equivalent", _NO_GEOMETRY)
        return
    for number, (start, end) in enumerate(beam.spans):
        base = f"results.equivalent[{number}]"
        if start not in beam.supports or end not in beam.supports:
            book.settle(base, book.stated.get(base, 0) is None, "an overhang has no equivalent", "overhang")
            continue
        found = span_equivalents(start, end, [beam.loads[case] for case in beam.cases])
        for case, values in zip(beam.cases, found, strict=True):
            for field in FIELDS:
                book.compare(
                    f"{base}.{case}.{field}",
                    values[field],
                    "kN/m",
                    f"span {number + 1}, {_words(case)}, equal {field.replace('_', ' ')}",
                    scale=beam.weight / (end - start),
                )


def _combinations(book: Book, beam: Beam, record: Record) -> None:
    """Every combination again: factors and placements from the notebook, the beam by finite elements."""
    given = beam.given
    if given is None:
        return
    stated = record.results.get("combinations")
    if len(given.combinations) > MOST_COMBINATIONS:
        raise CalcpackError("more combinations than an audit takes on", file=record.name)
    if not isinstance(stated, list) or len(stated) != len(given.combinations):
        book.wrong("results.combinations", f"the notebook has {len(given.combinations)} combinations")
    demand = design_demand(given)
    solution = beam.solved(demand.sets)
    assert solution is not None
    worst = Worst(solution)
    always, placed = demand.factors(given.combinations)
    moments = worst.extremes("moment", always, placed)
    shears = worst.extremes("shear", always, placed)
    force, turning = _scales(beam, given)
    for number, combination in enumerate(given.combinations):
        base, name = f"results.combinations[{number}]", str(combination["name"])
        for key in ("name", "limit"):
            book.settle(
                f"{base}.{key}",
                book.stated.get(f"{base}.{key}") == combination[key],
                "the notebook's combination is another",
                f"{key} of the combination",
                str(combination[key]),
            )
        high, low = moments[number]
        book.compare(f"{base}.moment_max", high.value, "kNm", f"{name}: largest moment", scale=turning)
        book.compare(f"{base}.moment_min", low.value, "kNm", f"{name}: smallest moment", scale=turning)
        shear = max(abs(each.value) for each in shears[number])
        book.compare(f"{base}.shear_max", shear, "kN", f"{name}: largest shear", scale=force)
        for side, forces in zip(("max", "min"), worst.reactions(always[number], placed[number]), strict=True):
            for place, each in enumerate(forces.tolist()):
                path = f"{base}.reactions_{side}[{place}]"
                if side == "max" or path in book.stated:
                    book.compare(path, each, "kN", f"{name}: reaction {place + 1}, {side}", scale=force)
    strength = [i for i, each in enumerate(given.combinations) if each["limit"] == "strength"]
    if strength:
        _envelope(book, beam, [moments[i] for i in strength], [shears[i] for i in strength], force, turning)
    if STATED_BY not in record.results:
        _deflections(book, given, demand, worst)


def _scales(beam: Beam, given: Given) -> tuple[float, float]:
    """What rounding is measured against: all load at its largest factor [kN], and that times the length."""
    most = max((abs(float(f)) for each in given.combinations for f in each["factors"].values()), default=1.0)
    force = max(most, 1.0) * beam.weight
    return force, force * beam.length


def _envelope(
    book: Book,
    beam: Beam,
    moments: Sequence[tuple[Extreme, Extreme]],
    shears: Sequence[tuple[Extreme, Extreme]],
    force: float,
    turning: float,
) -> None:
    for key, side, pick in (("moment_max", 0, max), ("moment_min", 1, min)):
        rows = [each[side] for each in moments]
        value = pick(each.value for each in rows)
        path = f"results.envelope.{key}"
        agrees = book.compare(path, value, "kNm", f"{key.replace('_', ' ')}, all placements", scale=turning)
        at = book.stated.get(f"{path}_at")
        close = [each for each in rows if abs(each.value - value) <= 1e-9 * abs(value) + 1e-12 * turning]
        slack = _PLACE * beam.length
        fits = isinstance(at, int | float) and any(each.reached_at(float(at), slack) for each in close)
        where = sorted({round(place, 9) for each in close for place in each.places})
        said = " or ".join(figure(place) for place in where[:4])
        book.settle(
            f"{path}_at",
            fits or (not agrees and at is not None),
            f"it is reached at {said} m",
            "its place [m]",
            said,
        )
    shear = max(abs(each.value) for row in shears for each in row)
    book.compare("results.envelope.shear_max", shear, "kN", "largest shear, all placements", scale=force)


def _deflections(book: Book, given: Given, demand: Demand, worst: Worst) -> None:
    stiffness = given.stiffness
    if stiffness is None:
        book.settle(
            "results.deflection",
            book.stated.get("results.deflection", 0) is None,
            "no stiffness is known",
            "deflection",
        )
        return
    service = [each for each in given.combinations if each["limit"] == "service"]
    found = {"live_mm": worst.extremes("deflection", *demand.only("live"))}
    if service:
        found["total_mm"] = worst.extremes("deflection", *demand.factors(service))
    for key, extremes in found.items():
        largest = max(abs(each.value) for row in extremes for each in row) / stiffness * 1000
        says = "live load alone" if key == "live_mm" else "service combinations"
        book.compare(f"results.deflection.{key}", largest, "mm", f"largest deflection, {says}", scale=1.0)


def _envelope_of_combinations(book: Book, record: Record) -> None:
    """Where combinations could not be worked out again: whether the envelope is their extremes."""
    stated = record.results.get("combinations")
    if "results.envelope.moment_max" not in book.stated or not isinstance(stated, list):
        return
    strength = [each for each in stated if isinstance(each, dict) and each.get("limit") == "strength"]
    for key, pick in (("moment_max", max), ("moment_min", min), ("shear_max", max)):
        values = [each[key] for each in strength if isinstance(each.get(key), int | float)]
        path = f"results.envelope.{key}"
        if values and not any(finding.place == path for finding in book.findings):
            book.compare(path, pick(values), "kN, m", f"{key.replace('_', ' ')} of the strength combinations")
    book.leave_open("results.envelope", _NEEDS_NOTEBOOK)
