"""Sheets held against each other: what comes down from one beam stands on the next, and on the supports."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from calcpack.record.auditing.beam import Load, solve
from calcpack.record.auditing.book import figure
from calcpack.record.auditing.files import Target
from calcpack.record.auditing.findings import Finding, Verdict, unchecked, wrong
from calcpack.record.auditing.given import Given
from calcpack.record.auditing.inputs import left_at_earlier_revision
from calcpack.record.auditing.reading import Record
from calcpack.record.auditing.sources import SELF_WEIGHT, pressure_of

AGREEMENT = 1e-9
_GROUP = "pack"


@dataclass(frozen=True)
class Digest:
    """What the other sheets need to know of one: worked out again, not as stated.

    Parameters
    ----------
    mark : str
    header : mapping
        Its title block.
    input : str
        Hash of the input as the sheet states it.
    bearings : tuple of (at, kind, mark)
    reactions : mapping of case to a force at each bearing [kN]
    placed : mapping of (case, beam, span) to a force at each bearing [kN]
        Of each placement alone.
    carried : tuple of (mark, at, case, force)
        What the notebook says comes down from beams above, every span loaded.
    carried_placed : mapping of (case, beam, span, from beam) to forces
    panels : mapping of mark to its areas on walls, pressures and its whole area
    own : mapping of case to what is put on the beam itself [kN]
    """

    mark: str
    header: Mapping[str, Any]
    input: str = ""
    bearings: tuple[tuple[float, str, str], ...] = ()
    reactions: Mapping[str, tuple[float, ...]] = field(default_factory=dict)
    placed: Mapping[tuple[str, str, int], tuple[float, ...]] = field(default_factory=dict)
    carried: tuple[tuple[str, float, str, float], ...] = ()
    carried_placed: Mapping[tuple[str, str, int, str], tuple[float, ...]] = field(default_factory=dict)
    panels: Mapping[str, Mapping[str, Any]] = field(default_factory=dict)
    own: Mapping[str, float] = field(default_factory=dict)
    complete: bool = False


def digest_of(record: Record, given: Given | None, input_hash: str) -> Digest:
    """Gather what the other sheets need; the reactions by the second method."""
    if given is None:
        return Digest(record.mark, record.data["job"], input_hash)
    cases = list(given.loads)
    sets: list[Sequence[Load]] = [given.loads[case] for case in cases]
    sets += [each.loads for each in given.placements]
    forces = solve(given.length, given.supports, given.fixed, sets).reactions.tolist()
    keys = [(each.case, each.beam, each.span) for each in given.placements]
    carried_placed: dict[tuple[str, str, int, str], list[float]] = {}
    above = {str(each["mark"]) for each in given.carried}
    for each in given.placements:
        for load in each.loads:
            if load.point and load.source in above:
                carried_placed.setdefault((each.case, each.beam, each.span, load.source), []).append(
                    load.first
                )
    panels = {
        str(transfer["panel"]["mark"]): {
            "walls": [
                (str(share["carrier"]), float(share["area"]))
                for share in transfer["shares"]
                if share["carrier_kind"] == "wall"
            ],
            "pressure": {
                case: pressure_of(transfer["panel"], case) for case in ("dead", "live", "roof_live", "snow")
            },
            "area": float(transfer["area"]),
        }
        for transfer in given.panels
    }
    own = {
        case: math.fsum(
            load.total for load in loads if load.source == SELF_WEIGHT or load.source.startswith("load ")
        )
        for case, loads in given.loads.items()
    }
    return Digest(
        mark=record.mark,
        header=record.data["job"],
        input=input_hash,
        bearings=tuple((each.at, each.kind, each.mark) for each in given.bearings),
        reactions={case: tuple(row) for case, row in zip(cases, forces, strict=False)},
        placed={key: tuple(row) for key, row in zip(keys, forces[len(cases) :], strict=True)},
        carried=tuple(
            (str(each["mark"]), float(each["at"]), str(case), float(force))
            for each in given.carried
            for case, force in each["reactions"].items()
        ),
        carried_placed={key: tuple(values) for key, values in carried_placed.items()},
        panels=panels,
        own=own,
        complete=True,
    )


def audit_together(target: Target, digests: Sequence[Digest]) -> tuple[Finding, ...]:
    """Hold the sheets of a pack against each other and against job.json.

    Parameters
    ----------
    target : Target
    digests : sequence of Digest
        One a sheet.
    """
    if not target.whole:
        return ()
    findings = [*_one_job(target, digests), *_carried(digests)]
    if target.job_json is not None:
        findings += _supports(target.job_json, digests)
    elif target.folder is not None:
        findings.append(unchecked(_GROUP, "job.json", "it is not there"))
    return tuple(findings)


def _one_job(target: Target, digests: Sequence[Digest]) -> Iterator[Finding]:
    """One job, one revision, one input, every beam once."""
    marks = [each.mark for each in digests]
    for mark in sorted({mark for mark in marks if marks.count(mark) > 1}):
        yield wrong(_GROUP, f"beam {mark}", "two sheets have this mark")
    for sheet, each in zip(target.sheets, digests, strict=True):
        if sheet.record_name != f"{each.mark}.json":
            yield wrong(_GROUP, sheet.record_name, f"it is the record of beam {each.mark[:60]}")
    headers = [each.header for each in digests]
    usual = max(headers, key=lambda header: (str(header.get("date", "")), headers.count(header)))
    left = {each.mark for each in digests if left_at_earlier_revision(each.header, usual)}
    for each in digests:
        if each.header != usual and each.mark not in left:
            yield wrong(_GROUP, f"beam {each.mark}", "its title block is not that of the other sheets")
    inputs = [each.input for each in digests if each.input and each.mark not in left]
    for each in digests:
        if each.mark not in left and each.input and each.input != max(inputs, key=inputs.count):
            yield wrong(_GROUP, f"beam {each.mark}", "it was made from another input than the other sheets")
    if target.job_json is None:
        return
    if target.job_json.get("job") != usual:
        yield wrong(_GROUP, "job.json job", "its title block is not that of the sheets")
    listed = [str(mark) for mark in target.job_json.get("beams") or ()]
    for mark in listed:
        if mark not in marks:
            yield unchecked(_GROUP, f"beam {mark}", "the pack has no sheet of it")
    for mark in marks:
        if mark not in listed:
            yield wrong(_GROUP, f"beam {mark}", "job.json does not list it")
    if sorted(map(str, target.job_json.get("order") or ())) != sorted(listed):
        yield wrong(_GROUP, "job.json order", "it does not name every beam once")


def _close(one: float, other: float, scale: float) -> bool:
    return abs(one - other) <= AGREEMENT * max(abs(one), abs(other)) + 1e-11 * scale


def _carried(digests: Sequence[Digest]) -> Iterator[Finding]:
    """A beam's reaction is the load on the beam under it, all at once and placement by placement."""
    by_mark = {each.mark: each for each in digests if each.complete}
    for below in digests:
        sources = dict.fromkeys(mark for mark, _, _, _ in below.carried)
        for source in sources:
            above = by_mark.get(source)
            if above is None:
                yield unchecked(
                    _GROUP, f"beam {source} on {below.mark}", f"no notebook of beam {source} at hand"
                )
                continue
            on = [
                number for number, bearing in enumerate(above.bearings) if bearing[1:] == ("beam", below.mark)
            ]
            pairs: list[tuple[str, list[float], list[float]]] = []
            cases = dict.fromkeys(case for mark, _, case, _ in below.carried if mark == source)
            for case in cases:
                ours = [above.reactions.get(case, (0.0,) * len(above.bearings))[number] for number in on]
                theirs = [force for mark, _, one, force in below.carried if (mark, one) == (source, case)]
                pairs.append((case.replace("_", " "), ours, theirs))
            for key, row in above.placed.items():
                ours = [row[number] for number in on if row[number]]
                theirs = list(below.carried_placed.get((*key, source), ()))
                pairs.append((f"{key[0].replace('_', ' ')} on span {key[2] + 1} of {key[1]}", ours, theirs))
            for says, ours, theirs in pairs:
                yield _passed_on(source, below.mark, says, ours, theirs)


def _passed_on(above: str, below: str, says: str, ours: list[float], theirs: list[float]) -> Finding:
    scale = max(map(abs, (*ours, *theirs)), default=0.0)
    ours, theirs = ([each for each in rows if abs(each) > 1e-11 * max(scale, 1.0)] for rows in (ours, theirs))
    agrees = len(ours) == len(theirs) and all(
        _close(a, b, scale) for a, b in zip(sorted(ours), sorted(theirs), strict=True)
    )
    return Finding(
        _GROUP,
        f"beam {above} on {below}",
        f"reaction handed on, {says}",
        ", ".join(map(figure, theirs)) + " kN",
        ", ".join(map(figure, ours)) + " kN",
        "",
        Verdict.AGREES if agrees else Verdict.WRONG,
        "" if agrees else f"what {below} carries is not what {above} hands on",
    )


def _supports(job_json: Mapping[str, Any], digests: Sequence[Digest]) -> Iterator[Finding]:
    """Columns and walls: the sum of what comes down on each, and all of them against what is applied."""
    try:
        stated = {
            str(mark): {str(case): float(force) for case, force in row.items()}
            for mark, row in job_json["supports"].items()
        }
        applied = {str(case): float(force) for case, force in job_json["applied"].items()}
    except (KeyError, TypeError, ValueError, AttributeError):
        yield wrong(_GROUP, "job.json", "supports and applied loads are not written as such")
        return
    for case, force in applied.items():
        added = math.fsum(row.get(case, 0.0) for row in stated.values())
        agrees = _close(added, force, abs(force))
        yield Finding(
            _GROUP,
            f"job.json applied {case}",
            "sum of all supports",
            f"{figure(force)} kN",
            f"{figure(added)} kN",
            "",
            Verdict.AGREES if agrees else Verdict.WRONG,
            "" if agrees else "the supports do not add up to what is applied",
        )
    listed = {str(mark) for mark in job_json.get("beams") or ()}
    if listed - {each.mark for each in digests if each.complete}:
        yield unchecked(_GROUP, "job.json supports", "not every beam's notebook is at hand")
        return
    yield from _each_support(stated, applied, digests)


def _each_support(
    stated: Mapping[str, Mapping[str, float]], applied: Mapping[str, float], digests: Sequence[Digest]
) -> Iterator[Finding]:
    pressing: dict[tuple[str, str], list[float]] = {}
    panels: dict[str, Mapping[str, Any]] = {}
    for each in digests:
        panels.update({mark: panel for mark, panel in each.panels.items() if mark not in panels})
        for case, forces in each.reactions.items():
            for (_, kind, mark), force in zip(each.bearings, forces, strict=True):
                if kind != "beam":
                    pressing.setdefault((mark, case), []).append(force)
    for panel in panels.values():
        for wall, area in panel["walls"]:
            for case, pressure in panel["pressure"].items():
                pressing.setdefault((wall, case), []).append(area * pressure)
    # A panel with walls along all its edges loads no beam: no notebook tells of it.
    known = {
        case: math.fsum(panel["area"] * panel["pressure"][case] for panel in panels.values())
        + math.fsum(each.own.get(case, 0.0) for each in digests)
        for case in applied
    }
    hidden = {case for case, force in applied.items() if not _close(force, known[case], abs(force))}
    columns = {mark for each in digests for _, kind, mark in each.bearings if kind == "column"}
    for mark, row in stated.items():
        for case, force in row.items():
            again = math.fsum(pressing.get((mark, case), ()))
            place, says = f"job.json {mark} {case}", "all that comes down on it"
            if _close(force, again, max(map(abs, row.values()), default=0.0)):
                yield Finding(_GROUP, place, says, f"{figure(force)} kN", f"{figure(again)} kN")
            elif case in hidden and mark not in columns and force > again:
                yield unchecked(_GROUP, place, "it carries panels that load no beam at hand", says)
            else:
                yield wrong(
                    _GROUP,
                    place,
                    "the beams and panels at hand do not add up to it",
                    says=says,
                    printed=f"{force!r} kN",
                    other=f"{again:.12g} kN",
                )
