"""Where the loads of a beam come from: panels divided again, self weight, beams above, placements."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from itertools import pairwise
from typing import Any

from calcpack.record.auditing.beam import Load
from calcpack.record.auditing.book import figure
from calcpack.record.auditing.demands import MOVABLE
from calcpack.record.auditing.findings import Finding, Verdict
from calcpack.record.auditing.given import CASES, Given
from calcpack.record.auditing.lines import relative
from calcpack.record.auditing.plane import area, nearest_areas, strip_areas
from calcpack.record.auditing.properties import section_properties

AGREEMENT = 1e-9
SELF_WEIGHT = "self weight"


def audit_sources(given: Given) -> tuple[Finding, ...]:
    """Hold a beam's loads against the panels, the section and the beams they come from.

    Parameters
    ----------
    given : Given

    Returns
    -------
    tuple of Finding
        A figure for each panel edge, each source of load, each placed case.
    """
    try:
        return (
            *_panels(given),
            *_section(given),
            *_panel_loads(given),
            *_own_weight(given),
            *_carried(given),
            *_placements(given),
        )
    except (KeyError, TypeError, ValueError, IndexError, ZeroDivisionError) as error:
        return (
            Finding(
                "panels",
                "notebook parameters",
                verdict=Verdict.WRONG,
                remark=f"panels, section or loads are not written as such ({type(error).__name__}: {error})",
            ),
        )


def _held(
    group: str, place: str, says: str, stated: float, again: float, unit: str, scale: float = 0.0
) -> Finding:
    agrees = abs(stated - again) <= AGREEMENT * max(abs(stated), abs(again)) + 1e-12 * scale
    return Finding(
        group,
        place,
        says,
        f"{figure(stated)} {unit}" if agrees else f"{stated!r} {unit}",
        f"{figure(again)} {unit}" if agrees else f"{again:.12g} {unit}",
        relative(stated, again),
        Verdict.AGREES if agrees else Verdict.WRONG,
        "" if agrees else "it is not what is worked out again",
    )


def pressure_of(panel: Mapping[str, Any], case: str) -> float:
    """Load on a panel in a case [kPa]; dead is its own weight and what lies on it."""
    own = float(panel["thickness"]) * float(panel["unit_weight"]) if case == "dead" else 0.0
    return float(panel[case]) + own


def _panels(given: Given) -> Iterator[Finding]:
    """Areas: of the panel, of each edge's part derived anew, of each share by three roads."""
    for transfer in given.panels:
        panel, mark = transfer["panel"], transfer["panel"]["mark"]
        corners = [(float(x), float(y)) for x, y in panel["corners"]]
        whole = area(corners)
        yield _held("panels", f"panel {mark} area", "outline", float(transfer["area"]), whole, "m²")
        if transfer["rectangle"]:
            sides = sorted(math.dist(a, b) for a, b in pairwise(corners[:3]))
            for number, name in enumerate(("short", "long")):
                stated = float(transfer["sides"][number])
                yield _held("panels", f"panel {mark} {name} side", f"{name} side", stated, sides[number], "m")
        if transfer["transfer"] == "one-way":
            again = strip_areas(corners, transfer["supported"], tuple(transfer["direction"]))
        else:
            far = math.sqrt(3) if given.basis["dividing_lines"].startswith("60") else 1.0
            again = nearest_areas(
                corners,
                {
                    number: far if transfer["continuous"][number] else 1.0
                    for number, held in enumerate(transfer["supported"])
                    if held
                },
            )
        stated_by_edge: dict[int, float] = {}
        for share in transfer["shares"]:
            edge = int(share["edge"])
            stated_by_edge[edge] = stated_by_edge.get(edge, 0.0) + float(share["area"])
            place = f"panel {mark} to {share['carrier_kind']} {share['carrier']}"
            region = area([(float(x), float(y)) for x, y in share["region"]]) if share["region"] else 0.0
            depth = _integral(share["depth"]) + math.fsum(float(size) for _, size in share["ends"])
            yield _held(
                "panels", place, "outline of what drains there", float(share["area"]), region, "m²", whole
            )
            yield _held("panels", place, "depth along the carrier", float(share["area"]), depth, "m²", whole)
        for edge in sorted(again.keys() | stated_by_edge.keys()):
            yield _held(
                "panels",
                f"panel {mark} edge {edge + 1}",
                "all that drains to the edge, divided anew",
                stated_by_edge.get(edge, 0.0),
                again.get(edge, 0.0),
                "m²",
                whole,
            )


def _integral(places: Sequence[Sequence[float]]) -> float:
    return math.fsum(
        (float(b[0]) - float(a[0])) * (float(a[1]) + float(b[1])) / 2 for a, b in pairwise(places)
    )


def _section(given: Given) -> Iterator[Finding]:
    """Area and second moment of area from the dimensions."""
    if given.section is None:
        return
    found = section_properties(given.section)
    for key, unit in (("area", "m²"), ("inertia", "m⁴")):
        if found is not None:
            stated = float(given.section[key])
            yield _held("loads", f"section {key}", "from its dimensions", stated, found[key], unit)


def _alike(ours: Sequence[Load], theirs: Sequence[Load], length: float) -> bool:
    """Whether two lists of loads are the same but for rounding."""

    def ranked(loads: Sequence[Load]) -> list[tuple[float, ...]]:
        rows = [(load.point, load.start, load.end, load.first, load.last) for load in loads]
        return sorted((float(p), round(a, 6), round(b, 6), a, b, c, d) for p, a, b, c, d in rows)

    one, other = ranked(ours), ranked(theirs)
    most = max((abs(each) for row in (*one, *other) for each in row[5:]), default=0.0)
    return len(one) == len(other) and all(
        all(abs(a - b) <= 1e-9 * length for a, b in zip(left[3:5], right[3:5], strict=True))
        and all(abs(a - b) <= 1e-9 * most for a, b in zip(left[5:], right[5:], strict=True))
        for left, right in zip(one, other, strict=True)
    )


def _of_source(given: Given, case: str, source: str) -> list[Load]:
    return [load for load in given.loads.get(case, ()) if load.source == source]


def _against(given: Given, case: str, source: str, again: Sequence[Load], says: str) -> Finding:
    stated = _of_source(given, case, source)
    total, other = (math.fsum(load.total for load in loads) for loads in (stated, again))
    agrees = _alike(stated, again, given.length)
    return Finding(
        "loads",
        f"loads {case} {source}",
        says,
        f"{figure(total)} kN",
        f"{figure(other)} kN",
        relative(total, other),
        Verdict.AGREES if agrees else Verdict.WRONG,
        "" if agrees else "the load on the beam is not what comes from there",
    )


def _panel_loads(given: Given) -> Iterator[Finding]:
    """Pressure times drained depth, case by case."""
    for transfer in given.panels:
        panel = transfer["panel"]
        own = [share for share in transfer["shares"] if share["carrier"] == given.mark]
        for case in CASES:
            pressure = pressure_of(panel, case)
            again = []
            for share in own:
                for a, b in pairwise(share["depth"]):
                    if pressure and float(b[0]) > float(a[0]) and (a[1] or b[1]):
                        again.append(
                            Load(float(a[0]), float(b[0]), pressure * float(a[1]), pressure * float(b[1]))
                        )
                for at, size in share["ends"] if pressure else ():
                    force = pressure * float(size)
                    again.append(Load(float(at), float(at), force, force, point=True))
            if again or _of_source(given, case, panel["mark"]):
                yield _against(
                    given, case, panel["mark"], again, f"panel {panel['mark']}, pressure times depth"
                )


def _own_weight(given: Given) -> Iterator[Finding]:
    weight = 0.0
    if given.basis.get("beam_self_weight") and given.section is not None and given.material is not None:
        weight = float(given.section["area"]) * float(given.material["unit_weight"])
    again = [Load(0.0, given.length, weight, weight)] if weight else []
    if again or _of_source(given, "dead", SELF_WEIGHT):
        yield _against(given, "dead", SELF_WEIGHT, again, "section times unit weight")


def _carried(given: Given) -> Iterator[Finding]:
    """What comes down from the beams above."""
    by_mark: dict[str, list[Mapping[str, Any]]] = {}
    for each in given.carried:
        by_mark.setdefault(str(each["mark"]), []).append(each)
    for mark, rows in by_mark.items():
        for case in CASES:
            forces = [(float(each["at"]), float(each["reactions"].get(case, 0.0))) for each in rows]
            again = [Load(at, at, force, force, point=True) for at, force in forces if force]
            if again or _of_source(given, case, mark):
                yield _against(given, case, mark, again, f"reaction of beam {mark}")


def _placements(given: Given) -> Iterator[Finding]:
    """The placements of a movable case add up to it, in force and in moment about the start."""
    for case in MOVABLE:
        loads = given.loads.get(case, ())
        placed = [load for each in given.placements if each.case == case for load in each.loads]
        if not loads and not placed:
            continue
        for says, power, unit in (("force", 0, "kN"), ("moment", 1, "kNm")):
            one, other = (math.fsum(_moment(load, power) for load in rows) for rows in (loads, placed))
            scale = math.fsum(abs(load.total) for load in loads) * given.length**power
            yield _held(
                "loads", f"placements {case}", f"{says} of all placements together", other, one, unit, scale
            )
        for each in given.placements:
            if each.case == case and each.beam == given.mark:
                yield _in_its_span(given, each.span, each.loads, case)


def _moment(load: Load, power: int) -> float:
    if not power:
        return load.total
    if load.point:
        return load.first * load.start
    length = load.end - load.start
    return load.total * load.start + length**2 * (load.first + 2 * load.last) / 6


def _in_its_span(given: Given, span: int, loads: Sequence[Load], case: str) -> Finding:
    start, end = given.spans[span]
    slack = 1e-9 * given.length
    fits = all(start - slack <= load.start and load.end <= end + slack for load in loads)
    return Finding(
        "loads",
        f"placements {case} span {span + 1}",
        "it lies in its span",
        verdict=Verdict.AGREES if fits else Verdict.WRONG,
        remark="" if fits else "a load of this placement lies outside the span",
    )
