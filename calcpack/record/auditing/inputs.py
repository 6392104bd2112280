"""The job file read again, and whether a sheet's parameters are what it says."""

from __future__ import annotations

import contextlib
import functools
import tempfile
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.beam import Load
from calcpack.record.auditing.copies import differences
from calcpack.record.auditing.files import Target, stays_below
from calcpack.record.auditing.findings import Finding, good, unchecked, wrong
from calcpack.record.auditing.given import Given

if TYPE_CHECKING:
    from calcpack.job.model import Job

_GROUP = "origins"


@dataclass(frozen=True)
class JobFacts:
    """What the job file says.

    Parameters
    ----------
    data : mapping or None
        As plain data; None where it is not at hand or cannot be read.
    fault : str
        Why it cannot be read.
    """

    data: Mapping[str, Any] | None = None
    fault: str = ""


def job_facts(target: Target) -> JobFacts:
    """What the job file of a target says.

    Parameters
    ----------
    target : Target
        Its ``inputs`` are laid into an empty folder and read from there, as data.
    """
    if not target.inputs:
        return JobFacts()
    from calcpack.job import read_job

    names = list(target.inputs)
    if strange := [name for name in names if not stays_below(name)]:
        return JobFacts(fault=f"'{strange[0][:60]}' is no name of a file beside it")
    with tempfile.TemporaryDirectory(prefix="calcpack-") as folder:
        try:
            for name, data in target.inputs.items():
                path = Path(folder) / name
                path.parent.mkdir(parents=True, exist_ok=True)
                path.write_bytes(data)
            job = read_job(Path(folder) / names[0])
        except CalcpackError as error:
            return JobFacts(fault=str(error.problems[0]))
        except OSError as error:
            return JobFacts(fault=f"its files cannot be laid out: {error.strerror}")
    return JobFacts(
        {
            "header": job.job.model_dump(mode="json"),
            "basis": job.basis.model_dump(mode="json"),
            "submission": job.submission.model_dump(mode="json"),
            "panels": {each.mark: each.model_dump(mode="json", exclude={"place"}) for each in job.panels},
            "bars": [each.model_dump(mode="json") for each in job.bars],
            "live_psi": job.psi.model_dump(mode="json") if job.psi else None,
            "beams": {each.mark: each.model_dump(mode="json") for each in job.beams},
            "candidates": {
                family: [each.model_dump(mode="json") for each in job.candidates[family]]
                for beam in job.beams
                if beam.section is not None and beam.section.open and (family := beam.section.family)
            },
            "design": dict(_designs(job)),
        }
    )


def _designs(job: Job) -> Iterator[tuple[str, dict[str, Any]]]:
    """Beams' design keys as their templates take them, where the template is at hand."""
    from calcpack.notebook.templates import find_template

    find = functools.lru_cache(functools.partial(find_template, job_folder=Path(job.folder)))
    for beam in job.beams:
        with contextlib.suppress(CalcpackError):
            yield beam.mark, find(beam.template).settle(beam.design, beam.mark, job.data_files)


def left_at_earlier_revision(header: object, now: object) -> bool:
    """Whether a title block is that of a sheet left unchanged since an earlier revision of the job.

    Such a sheet keeps its letter, its date and the hash of the input it was made from; all else is as now.

    Examples
    --------
    >>> now = {"number": "7", "revision": "B", "date": "2026-12-10"}
    >>> left_at_earlier_revision(now | {"revision": "A", "date": "2026-12-01"}, now)
    True
    >>> left_at_earlier_revision(now | {"number": "8", "revision": "A", "date": "2026-12-01"}, now)
    False
    """
    if not isinstance(header, Mapping) or not isinstance(now, Mapping) or header == now:
        return False
    dated = {key: now.get(key) for key in ("revision", "date")}
    return (
        header.get("revision") != now.get("revision")
        and str(header.get("date")) <= str(now.get("date"))
        and {**header, **dated} == {**now}
    )


def _title_block(header: object, now: Mapping[str, Any]) -> Iterator[Finding]:
    if left_at_earlier_revision(header, now):
        says = f"left as it was at revision {str(dict(header)['revision'])[:20]}"  # type: ignore[call-overload]
        yield unchecked(_GROUP, "job file, title block", f"{says}: letter and date are that revision's")
    else:
        yield from _same("title block", header, now)


def audit_job(given: Given | None, facts: Mapping[str, Any] | None) -> tuple[Finding, ...]:
    """Hold a notebook's parameters against the job file.

    Parameters
    ----------
    given : Given or None
    facts : mapping or None
        The data of :func:`job_facts`.
    """
    if given is None or facts is None:
        return ()
    beam = facts["beams"].get(given.mark)
    if beam is None:
        return (wrong(_GROUP, f"job file, beam {given.mark[:60]}", "the job file has no such beam"),)
    return (
        *_title_block(given.data.get("header"), facts["header"]),
        *_same("basis", given.data.get("basis"), facts["basis"]),
        *_panels(given, facts),
        *_section(given.data.get("section"), beam["section"], facts["candidates"]),
        *_same("material", given.data.get("material"), beam["material"]),
        *_same("bars", given.data.get("bars"), facts["bars"]),
        *_same("live_psi", given.data.get("live_psi"), facts["live_psi"]),
        *_same("line", given.data.get("points"), beam["points"]),
        *_same("fixed", given.data.get("fixed"), [beam["fixed_start"], beam["fixed_end"]]),
        *_same("free", given.data.get("free"), [beam["free_start"], beam["free_end"]]),
        *(
            _same("design", given.data.get("design"), facts["design"][given.mark])
            if given.mark in facts["design"]
            else ()
        ),
        *_same("equivalent", given.equivalent, beam["equivalent"]),
        *_same("design_loads", given.design_loads, beam["design_loads"]),
        *_own_loads(given, beam["loads"]),
    )


def _same(says: str, ours: object, theirs: object) -> Iterator[Finding]:
    # What only one of the two knows is a matter of the program's version, not of the job.
    both = (each for each in differences(ours, theirs, "") if "nothing" not in each[1:])
    first = next(both, None)
    if first is None:
        yield good(_GROUP, f"job file, {says}", "the parameters are what the job file says")
        return
    place = f"job file, {says} {first[0]}".strip()
    yield wrong(
        _GROUP, place, "the parameters are not what the job file says", printed=first[1], other=first[2]
    )


def _section(
    ours: object, asked: Mapping[str, Any] | None, candidates: Mapping[str, list[Mapping[str, Any]]]
) -> Iterator[Finding]:
    """The section against the one the job names, or against the family the lightest of which it asks for."""
    family = asked["family"] if asked else ""
    if not family or not isinstance(ours, Mapping):
        yield from _same("section", ours, asked)
        return
    names = [each["designation"] for each in candidates[family]]
    place, name = f"job file, section lightest in {family}", str(ours.get("designation"))
    if name not in names:
        yield wrong(_GROUP, place, "the section is none of the family", printed=name[:60], other=family)
        return
    number = names.index(name)
    chosen = {**candidates[family][number], "key": asked and asked["key"], "family": family}
    left_to_the_choice = {key: ours.get(key) for key in ("tried", "fits")}
    yield from _same("section", ours, chosen | left_to_the_choice)
    rows = ours.get("tried") if isinstance(ours.get("tried"), list | tuple) else ()
    tried = [each.get("designation") for each in rows or () if isinstance(each, Mapping)]
    passed_over = names[:number] if ours.get("fits", True) else names[:number] + names[number + 1 :]
    if tried == passed_over:
        yield good(_GROUP, place, "every section passed over was tried")
    else:
        missing = next((each for each in passed_over if each not in tried), "nothing more")
        yield wrong(_GROUP, place, "the sections tried are not those passed over", other=missing)


def _panels(given: Given, facts: Mapping[str, Any]) -> Iterator[Finding]:
    for transfer in given.panels:
        panel = {key: each for key, each in transfer["panel"].items() if key != "place"}
        yield from _same(f"panel {panel['mark']}", panel, facts["panels"].get(panel["mark"]))


def _own_loads(given: Given, stated: list[Mapping[str, Any]]) -> Iterator[Finding]:
    """Loads given on the beam itself."""
    for number, each in enumerate(stated, start=1):
        source = f"load {number}"
        found = [load for load in given.loads.get(each["case"], ()) if load.source == source]
        if each["point"] is not None:
            at = min(each["at"] or 0.0, given.length)
            again = Load(at, at, each["point"], each["point"], source, point=True)
        else:
            first = each["line"] or 0.0
            last = first if each["line_end"] is None else each["line_end"]
            end = given.length if each["end"] is None else min(each["end"], given.length)
            again = Load(each["start"], end, first, last, source)
        place = f"job file, {source}"
        if found == [again]:
            yield good(_GROUP, place, "the load is what the job file says")
        else:
            yield wrong(_GROUP, place, "the load on the beam is not what the job file says")
