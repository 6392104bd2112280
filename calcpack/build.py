"""A job built into its folder: sheets, schedules, pack, all or nothing."""

from __future__ import annotations

import itertools
import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from calcpack.actions import combination_set
from calcpack.export.blocks import Figure as FigureBlock
from calcpack.export.content import SheetContent, SheetNumbers, notebook_bytes, sheet_content
from calcpack.export.mathematics import Mathematics
from calcpack.export.pack import Pack, PackedFile, Section
from calcpack.export.pack_html import index_html
from calcpack.export.pack_pdf import build_pack, paginate, set_sheets
from calcpack.export.page_html import sheet_html
from calcpack.export.press import Press
from calcpack.export.tables import schedule_csv
from calcpack.export.typesetting import Attached
from calcpack.figures import Figure, key_plan
from calcpack.files import OutputFolder
from calcpack.framing import Frame, frame
from calcpack.job import read_job
from calcpack.job.errors import CalcpackError, Problem, nearest
from calcpack.job.model import Job
from calcpack.notebook.basis import basis_sections, input_sections
from calcpack.notebook.derivations import appendix_parameters
from calcpack.notebook.execute import execute
from calcpack.notebook.fill import FilledNotebook, fill, sheet_metadata
from calcpack.notebook.lightest import choose_sections
from calcpack.notebook.parameters import PROGRAM, BeamInput, beam_input, plan_of, to_text
from calcpack.notebook.templates import Template, find_template
from calcpack.progress import Follow
from calcpack.record.comments import comments_section
from calcpack.record.editions import Edition
from calcpack.record.fields import ready_to_sign
from calcpack.record.since import mark_changes
from calcpack.record.statement import statement_of

APPENDIX = "Appendix"
APPENDIX_TEMPLATE = "derivations"
ALL_FORMATS = frozenset({"pdf", "html", "notebook"})
XLSX = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"


@dataclass(frozen=True)
class BuiltJob:
    """What a build has left in its folder.

    Parameters
    ----------
    frame : Frame
    folder : Path
    records : tuple of mapping
        Of the sheets built, in order.
    files : mapping
        Mark -> the sheet's main file, seen from the folder.
    kept : tuple of str
        Files that somebody had changed, under their new names.
    """

    frame: Frame
    folder: Path
    records: tuple[Mapping[str, Any], ...]
    files: Mapping[str, str]
    kept: tuple[str, ...]


def build_job(
    job_file: Path,
    out: Path,
    *,
    only: Sequence[str] = (),
    formats: frozenset[str] = ALL_FORMATS,
    since: Edition | None = None,
    follow: Follow = lambda _stage, _done, _of: None,
) -> BuiltJob:
    """Make a job's sheets and bind its pack.

    Parameters
    ----------
    job_file, out : Path
    only : sequence of str
        Marks of the beams wanted; none for all.
    formats : set of "pdf", "html", "notebook"
        The record of a sheet is always written; the pack where "pdf" is wanted.
    since : Edition
        An earlier edition: what changed is listed and marked, unchanged sheets are kept where they can be.
    follow : callable
        Told of the progress.

    Returns
    -------
    BuiltJob

    Raises
    ------
    CalcpackError
        Something in the input is wrong, or cannot be written; the folder is as it was.
    """
    folder = OutputFolder(out)
    folder.check()
    framed = choose_sections(frame(read_job(job_file)))
    inputs = _inputs(framed, only)
    notebooks = [
        fill(template, given.mark, to_text(given), sheet_metadata(framed.job, given.mark, template, PROGRAM))
        for given, template in inputs
    ]
    notebooks.append(_appendix(framed, [given for given, _ in inputs]))
    try:
        contents = _executed(notebooks, follow)
    except CalcpackError as error:
        raise CalcpackError(*(_told_by_sheet(framed, each) for each in error.problems)) from None
    front: list[Section] = []
    kept_sheets: Mapping[str, tuple[SheetContent, Any]] = {}
    if since is not None:
        later = mark_changes(since, contents)
        contents, kept_sheets = list(later.contents), later.kept
        front.append(later.section)
    lines = {content.mark: content.line_numbers for content, _ in contents}
    if answers := comments_section(Path(framed.job.folder), lines):
        front.append(answers)
    pack = replace(_pack(framed, inputs, contents), front=tuple(front))
    nodes = {content.mark: node for content, node in contents}
    del contents, notebooks  # each node goes when its sheet has been written: they are most of the memory
    files = _files(framed, pack, nodes, formats, follow, kept_sheets)
    kept = folder.write(files, keep=bool(only))
    main = next((ending for name, ending in _ENDINGS if name in formats), "json")
    return BuiltJob(
        framed,
        out,
        tuple(content.record for content in pack.sheets if content.record is not None),
        {content.mark: f"sheets/{content.mark}.{main}" for content in pack.sheets},
        kept,
    )


_ENDINGS = (("pdf", "pdf"), ("html", "html"), ("notebook", "ipynb"))


def _inputs(framed: Frame, only: Sequence[str]) -> list[tuple[BeamInput, Template]]:
    """Each wanted beam's input with its template; all that is wrong with them is said at once."""
    job, problems = framed.job, []
    for mark in only:
        if mark not in framed.beams:
            problems.append(Problem(f"no beam '{mark}' to build", nearest(mark, framed.beams), file=job.file))
    found = []
    for mark, beam in framed.beams.items():
        if only and mark not in only:
            continue
        try:
            template = find_template(beam.beam.template, Path(job.folder))
            _check_needs(template, framed, mark)
            design = template.settle(beam.beam.design, mark, job.data_files)
            found.append((beam_input(framed, mark, design, template.stamp), template))
        except CalcpackError as error:
            problems += [_placed(job, mark, problem) for problem in error.problems]
    if problems:
        raise CalcpackError(*dict.fromkeys(problems))
    return found


def _check_needs(template: Template, framed: Frame, mark: str) -> None:
    beam = framed.beams[mark].beam
    for need in template.settings.needs:
        if getattr(beam, need) is None:
            raise CalcpackError(
                f"the template '{template.settings.name}' needs a {need}",
                remedy=f"give the beam a {need}",
                key=need,
            )


def _told_by_sheet(framed: Frame, problem: Problem) -> Problem:
    """What a sheet's notebook found wrong with its beam, with its place in the job's files."""
    mark = (problem.mark or "").removeprefix("beam ")
    return _placed(framed.job, mark, problem) if mark in framed.beams and problem.key else problem


def _placed(job: Job, mark: str, problem: Problem) -> Problem:
    """The problem with its place in the job's files, as near as it is known."""
    key = problem.key or ""
    if key.startswith("basis."):
        line = job.lines.get(key.replace(".", " "))
        return problem.at(file=job.file, line=line)
    place = job_place(job, mark)
    line = job.lines.get(f"beam {mark} {key}", place[1])
    return problem.at(file=place[0], line=line, mark=f"beam {mark}")


def job_place(job: Job, mark: str) -> tuple[str, int | None]:
    """File and line where a beam stands."""
    beam = next(beam for beam in job.beams if beam.mark == mark)
    return beam.place.file, beam.place.line


def _appendix(framed: Frame, inputs: Sequence[BeamInput]) -> FilledNotebook:
    template = find_template(APPENDIX_TEMPLATE, Path(framed.job.folder))
    return fill(
        template,
        APPENDIX,
        appendix_parameters(framed, inputs),
        sheet_metadata(framed.job, APPENDIX, template, PROGRAM),
    )


def _executed(notebooks: Sequence[FilledNotebook], follow: Follow) -> list[tuple[SheetContent, Any]]:
    done = 0

    def step(_mark: str) -> None:
        nonlocal done
        done += 1
        follow("working out the sheets", done, len(notebooks))

    follow("working out the sheets", 0, len(notebooks))
    return [(sheet_content(each.node), each.node) for each in execute(notebooks, done=step)]


def _pack(
    framed: Frame,
    inputs: Sequence[tuple[BeamInput, Template]],
    contents: Sequence[tuple[SheetContent, Any]],
) -> Pack:
    job = framed.job
    actions = combination_set(
        job.basis.actions,
        framed.cases or ("dead",),
        occupancy=job.basis.occupancy,
        own=job.combinations,
        live_psi=job.psi,
    )
    notes = dict.fromkeys(
        note
        for _, template in inputs
        for note in (
            *template.settings.assumptions,
            f"{template.settings.title}, not covered: {', '.join(template.settings.not_covered)}.",
        )
    )
    plan = key_plan(plan_of(framed), None, job.job.units, width_mm=165)
    return Pack(
        header=job.job,
        submission=job.submission,
        program=PROGRAM,
        input_digest=job.digest,
        sheets=tuple(content for content, _ in contents[:-1]),
        supports={
            mark: {str(case): value for case, value in forces.items()}
            for mark, forces in framed.supports.items()
        },
        key_plan=_figure(plan, "Framing plan with all beams."),
        basis=tuple(Section.of(*section) for section in basis_sections(framed, actions, notes)),
        appendices=(contents[-1][0],),
        annex=tuple(Section.of(*section) for section in input_sections(framed)),
        attached=_inputs_attached(job),
    )


def _figure(drawing: Figure, caption: str) -> FigureBlock:
    return FigureBlock.model_validate(
        {
            "type": "figure",
            "svg": drawing.svg,
            "alt": drawing.alt,
            "caption": caption,
            "width_mm": drawing.width_mm,
        }
    )


def _inputs_attached(job: Job) -> tuple[Attached, ...]:
    """The job file and its tables, for the pack to carry inside."""
    kinds = {".toml": "application/toml", ".csv": "text/csv", ".xlsx": XLSX}
    return tuple(
        Attached(
            name, (Path(job.folder) / name).read_bytes(), kinds[Path(name).suffix.lower()], "Input of the job"
        )
        for name in job.files
    )


def _files(
    framed: Frame,
    pack: Pack,
    nodes: dict[str, Any],
    formats: frozenset[str],
    follow: Follow,
    kept: Mapping[str, tuple[SheetContent, Any]],
) -> dict[str, bytes]:
    """Every file of the folder by name; sheets are numbered before they are written.

    A sheet of ``kept`` stays as it was issued where its number in the pack is the same.
    """
    mathematics = Mathematics()
    names = [
        f"sheets/{content.mark}.{ending}"
        for content in pack.bound
        for form, ending in (*((form, ending) for form, ending in _ENDINGS if form in formats), ("", "json"))
        if form or content.record is not None
    ]
    listed = ["job.json", "schedule.csv", *names]
    pack = replace(pack, files=tuple(PackedFile(name, "") for name in listed))
    with Press(len(pack.bound)) as press:
        steps = itertools.count(1)
        most = len(pack.bound) * (2 if "pdf" in formats else 1)

        def step() -> None:
            follow("setting the pages", next(steps), most)

        follow("setting the pages", 0, most)
        numbers = paginate(pack, mathematics, press, done=step)
        pack = _numbered(pack, nodes, numbers, kept)
        pdfs = set_sheets(pack, mathematics, press, done=step) if "pdf" in formats else {}
    files: dict[str, bytes] = {}
    for content in pack.bound:
        stem = f"sheets/{content.mark}"
        if "notebook" in formats:
            files[f"{stem}.ipynb"] = content.notebook
        if "html" in formats:
            files[f"{stem}.html"] = sheet_html(content, mathematics).encode()
        if "pdf" in formats:
            files[f"{stem}.pdf"] = pdfs[content.mark].pdf
        if content.record is not None:
            files[f"{stem}.json"] = content.record_bytes
    first_pages = {mark: each.first for mark, each in numbers.items()}
    files["schedule.csv"] = schedule_csv(pack.sheets, first_pages).encode()
    files["job.json"] = _job_json(framed)
    pack = replace(
        pack,
        files=tuple(PackedFile.of(name, files[name]) for name in listed),
    )
    if "html" in formats:
        files["index.html"] = index_html(pack, mathematics).encode()
    if "pdf" in formats:
        built = build_pack(pack, mathematics, pdfs)
        statement = statement_of(pack.header, pack.submission, [content.record for content in pack.sheets])
        files["pack.pdf"] = ready_to_sign(built.pdf, built.signing, statement)
    return files


def _numbered(
    pack: Pack,
    nodes: dict[str, Any],
    numbers: Mapping[str, SheetNumbers],
    kept: Mapping[str, tuple[SheetContent, Any]],
) -> Pack:
    """The pack with its sheets numbered, in their notebooks too; ``nodes`` are used up."""

    def with_number(content: SheetContent) -> SheetContent:
        node, number = nodes.pop(content.mark), numbers[content.mark]
        if content.mark in kept and kept[content.mark][0].numbers == number:
            content, node = kept[content.mark]
        node.metadata["calcpack"]["sheets"] = number.model_dump()
        return replace(content.numbered(number), notebook=notebook_bytes(node))

    return replace(
        pack,
        sheets=tuple(with_number(content) for content in pack.sheets),
        appendices=tuple(with_number(content) for content in pack.appendices),
    )


def _job_json(framed: Frame) -> bytes:
    data = {
        "format": 1,
        "job": framed.job.job.model_dump(mode="json"),
        "submission": framed.job.submission.model_dump(mode="json"),
        "supports": framed.supports,
        "applied": framed.applied,
        "beams": list(framed.beams),
        "order": list(framed.order),
    }
    return (json.dumps(data, ensure_ascii=False, indent=1) + "\n").encode()
