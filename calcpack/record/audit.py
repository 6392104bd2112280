"""The audit of a target: every sheet by itself, many of them in several processes, then all together."""

from __future__ import annotations

import functools
import gc
import pickle
import tempfile
from collections.abc import Iterator, Mapping, Sequence
from concurrent.futures import ProcessPoolExecutor, ThreadPoolExecutor
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any, Self

import calcpack
from calcpack.job.errors import CalcpackError
from calcpack.processes import process_pool, processors, work_for_another
from calcpack.record.auditing.copies import audit_copies, comparisons
from calcpack.record.auditing.decisive import decisive_line
from calcpack.record.auditing.files import SheetFiles, Target, find_target, records_in
from calcpack.record.auditing.findings import Audit, Finding, SheetAudit, unchecked
from calcpack.record.auditing.given import Given, Notebook, read_notebook
from calcpack.record.auditing.inputs import JobFacts, audit_job, job_facts, left_at_earlier_revision
from calcpack.record.auditing.lines import WorkedLine, work_lines
from calcpack.record.auditing.origins import audit_origins
from calcpack.record.auditing.pages import audit_pages
from calcpack.record.auditing.provenance import audit_manifest, audit_provenance, input_digests
from calcpack.record.auditing.reading import Record, read_record
from calcpack.record.auditing.results import audit_results
from calcpack.record.auditing.screens import audit_screen
from calcpack.record.auditing.sources import audit_sources
from calcpack.record.auditing.tables import audit_tables, shown_rows
from calcpack.record.auditing.together import Digest, audit_together, digest_of

if TYPE_CHECKING:
    from calcpack.progress import Follow

_UNLIKE_A_SHEET = (
    ArithmeticError,
    AttributeError,
    LookupError,
    RuntimeError,  # a recursion without end among them
    TypeError,
    ValueError,
)
FEW = 12  # sheets that one process does as fast as several
_MOST_PROCESSES = 64


@dataclass(frozen=True)
class OpenedSheet:
    """A sheet read and its lines worked out again, for whoever asks after a line."""

    record: Record
    notebook: Notebook | None
    lines: tuple[WorkedLine, ...]

    @property
    def given(self) -> Given | None:
        """The notebook's parameters."""
        return self.notebook.given if self.notebook is not None else None


@dataclass(frozen=True)
class _Common:
    """What all sheets of a target share."""

    digests: frozenset[str]
    facts: Mapping[str, Any] | None
    job_folder: Path | None


def open_sheet(files: SheetFiles) -> OpenedSheet:
    """Read a sheet and work its lines out again.

    Raises
    ------
    CalcpackError
        Record or notebook cannot be read, or is beyond all bounds.
    """
    record = read_record(files.record, files.record_name)
    content = files.notebook_bytes()
    notebook = None if content is None else read_notebook(content, files.notebook_name)
    return OpenedSheet(record, notebook, work_lines(record))


def choose_sheet(target: Target, mark: str | None) -> SheetFiles:
    """The one sheet of a target that is asked after.

    Raises
    ------
    CalcpackError
        There are several and none is named, or none of that mark.
    """
    marks = [read_record(each.record, each.record_name).mark for each in target.sheets]
    if mark is None and len(marks) == 1:
        return target.sheets[0]
    if mark is None:
        raise CalcpackError(f"'{target.name}' has {len(marks)} sheets", remedy="name one with --sheet")
    if mark not in marks:
        from calcpack.job.errors import nearest

        raise CalcpackError(f"there is no sheet '{mark}'", remedy=nearest(mark, marks))
    return target.sheets[marks.index(mark)]


def audit_sheet(
    files: SheetFiles,
    *,
    digests: frozenset[str] = frozenset(),
    facts: Mapping[str, Any] | None = None,
    job_folder: Path | None = None,
) -> tuple[SheetAudit, Digest]:
    """Audit one sheet.

    Parameters
    ----------
    files : SheetFiles
    digests : set of str
        Hashes that the job's input may have.
    facts : mapping
        What the job file says: the data of ``job_facts``.
    job_folder : Path
        Where the job's own templates may lie.

    Returns
    -------
    SheetAudit, Digest
        What was found, and what the other sheets need to know.

    Raises
    ------
    CalcpackError
        Something cannot be read, or is beyond all bounds.
    """
    opened = open_sheet(files)
    try:
        return _audited_sheet(opened, files.page_texts(), files.screen_bytes(), digests, facts, job_folder)
    except _UNLIKE_A_SHEET as error:
        # Whoever made the files decides what is in them: where they are like no sheet's, that is their fault.
        raise CalcpackError(
            f"it is not written as a sheet's files are, and the audit ends here ({type(error).__name__})",
            file=files.record_name,
        ) from error


def _audited_sheet(
    opened: OpenedSheet,
    pages: Sequence[str] | None,
    screen: bytes | None,
    digests: frozenset[str],
    facts: Mapping[str, Any] | None,
    job_folder: Path | None,
) -> tuple[SheetAudit, Digest]:
    record, notebook, given, lines = opened.record, opened.notebook, opened.given, opened.lines
    results, _ = audit_results(record, given, lines)
    findings: list[Finding] = [line.finding for line in lines]
    findings += audit_origins(record, given, lines)
    findings += results
    if given is not None:
        findings += audit_sources(given)
    findings += audit_job(given, facts)
    findings += audit_copies(record, notebook, lines)
    findings += audit_tables(record, notebook, lines)
    compared, rows = comparisons(notebook), shown_rows(notebook)
    findings += audit_pages(record, pages, compared, rows)
    findings += audit_screen(record, screen, f"{record.name.removesuffix('.json')}.html", compared, rows)
    earlier = facts is not None and left_at_earlier_revision(record.data["job"], facts["header"])
    findings += audit_provenance(record, notebook, digests, job_folder, earlier)
    stated = str(notebook.metadata.get("input", "")) if notebook is not None else ""
    try:
        digest = digest_of(record, given, stated)
    except (KeyError, TypeError, ValueError):
        digest = Digest(record.mark, record.data["job"], stated)
    decisive = decisive_line(record, lines)
    return SheetAudit(record.mark, tuple(findings), record.data["job"], decisive), digest


def audit_target(
    path: Path,
    *,
    records: Path | None = None,
    job: Path | None = None,
    only: str | None = None,
    follow: Follow = lambda _stage, _done, _of: None,
    processes: int | None = None,
) -> Audit:
    """Audit an output folder, a record, a sheet's PDF or a pack.

    Parameters
    ----------
    path : Path
    records : Path
        Folder with the records, for a PDF that carries none.
    job : Path
        The job file, where it does not come with the target.
    only : str
        Mark of the one sheet wanted.
    follow : callable
        Told of the progress.
    processes : int
        How many sheets at a time; as many as the machine has cores if left out.

    Returns
    -------
    Audit

    Raises
    ------
    CalcpackError
        Something cannot be read.
    """
    follow("reading the files", 0, 1)
    with ThreadPoolExecutor(1) as aside, _Crew(processes if only is None else 1) as crew:
        crew.expect(len(records_in(path)))
        target = find_target(
            path, records=records, job=job, told=functools.partial(follow, "reading the pages")
        )
        if only is not None:
            target = replace(target, sheets=(choose_sheet(target, only),), whole=False)
        manifest = aside.submit(lambda: tuple(audit_manifest(target)))
        count = len(target.sheets)
        crew.expect(count)
        job_file = job_facts(target)
        common = _Common(input_digests(target.inputs), job_file.data, target.job_folder)
        follow("reading the files", 1, 1)
        audits, digests = [], []
        follow("auditing the sheets", 0, count)
        for audit, digest in crew.audit(target, common):
            audits.append(audit)
            digests.append(digest)
            follow("auditing the sheets", len(audits), count)
        together = (*_unread(job_file), *audit_together(target, digests), *manifest.result())
    return Audit(
        target=target.name,
        sheets=tuple(audits),
        together=SheetAudit("", together),
        program=f"calcpack {calcpack.__version__}",
    )


def _unread(job_file: JobFacts) -> Iterator[Finding]:
    """A job file that is at hand and cannot be read is said, not passed over."""
    if job_file.fault:
        remark = f"it cannot be read, so that no sheet is held against it ({job_file.fault})"
        yield unchecked("pack", "job file", remark)


class _Crew:
    """Processes for a target of many sheets, which load what they need while files are still read.

    Parameters
    ----------
    processes : int or None
        How many; as many as there are processors if left out.
    """

    def __init__(self, processes: int | None) -> None:
        self._workers = processes or processors(_MOST_PROCESSES)
        self._pool: ProcessPoolExecutor | None = None

    def __enter__(self) -> Self:
        return self

    def __exit__(self, *_: object) -> None:
        if self._pool is not None:
            self._pool.shutdown(cancel_futures=True)

    def expect(self, sheets: int) -> None:
        """So many sheets are to be audited, as far as is known by now."""
        if self._pool is None and self._workers > 1 and sheets > FEW:
            self._pool = process_pool(self._workers, _begin)
            for _ in range(self._workers):
                self._pool.submit(_load)

    def audit(self, target: Target, common: _Common) -> Iterator[tuple[SheetAudit, Digest]]:
        """Every sheet of a target, in its order."""
        if self._pool is None:
            yield from (_audited(files, common) for files in target.sheets)
            return
        with tempfile.TemporaryDirectory(prefix="calcpack-") as folder:
            shared = Path(folder) / "common"
            shared.write_bytes(pickle.dumps(common))
            audited = functools.partial(_audited_by_crew, str(shared))
            yield from self._pool.map(audited, target.sheets, chunksize=4)


def _begin() -> None:
    """A worker's beginning: what it has loaded stays, and what a sheet leaves is looked through seldom."""
    work_for_another()
    gc.freeze()
    gc.set_threshold(100_000, 50, 100)


def _load() -> None:
    """Nothing: a worker that has done it has loaded this module."""


@functools.lru_cache(maxsize=1)
def _common(shared: str) -> _Common:
    found = pickle.loads(Path(shared).read_bytes())  # written by the process this one works for
    assert isinstance(found, _Common)
    return found


def _audited_by_crew(shared: str, files: SheetFiles) -> tuple[SheetAudit, Digest]:
    return _audited(files, _common(shared))


def _audited(files: SheetFiles, common: _Common) -> tuple[SheetAudit, Digest]:
    return audit_sheet(files, digests=common.digests, facts=common.facts, job_folder=common.job_folder)
