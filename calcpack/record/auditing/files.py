"""What there is to audit: a folder, a record, a sheet's PDF or a pack, with whatever lies beside it."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path, PurePosixPath
from typing import Any

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.confined import READING, Told, untold, whole_pdf
from calcpack.record.auditing.pages import sheet_pages
from calcpack.record.auditing.reading import read_json

LARGEST_FILE = 400_000_000
_JOB, _TABLES = ".toml", (".csv", ".xlsx")


@dataclass(frozen=True)
class SheetFiles:
    """One sheet's files.

    Parameters
    ----------
    record : bytes
    record_name : str
        For messages.
    notebook : Path, bytes or None
    pdf : Path or None
        The sheet's own PDF.
    pages : tuple of str or None
        Its pages' text, where they stand in a pack.
    screen : Path or None
        Its page for the screen.
    """

    record: bytes
    record_name: str
    notebook: Path | bytes | None = None
    notebook_name: str = ""
    pdf: Path | None = None
    pages: tuple[str, ...] | None = None
    screen: Path | None = None

    def notebook_bytes(self) -> bytes | None:
        """The notebook's content."""
        return read_file(self.notebook) if isinstance(self.notebook, Path) else self.notebook

    def screen_bytes(self) -> bytes | None:
        """The page for the screen, as its file holds it; None where there is none."""
        return None if self.screen is None else read_file(self.screen)

    def page_texts(self) -> tuple[str, ...] | None:
        """The visible text, page by page; None where there is no PDF."""
        if self.pages is not None or self.pdf is None:
            return self.pages
        return READING.texts(read_file(self.pdf), self.pdf.name)


@dataclass(frozen=True)
class Target:
    """All files of an audit.

    Parameters
    ----------
    name : str
    sheets : tuple of SheetFiles
    folder : Path or None
        An output folder.
    whole : bool
        Every sheet of the pack is here, so that sheets can be held against each other.
    job_json : mapping or None
    manifest : mapping of file name to SHA-256, or None
    pack : Path or None
    inputs : mapping of name to bytes
        The job file first, then its tables.
    """

    name: str
    sheets: tuple[SheetFiles, ...]
    folder: Path | None = None
    whole: bool = False
    job_json: Mapping[str, Any] | None = None
    manifest: Mapping[str, str] | None = None
    pack: Path | None = None
    inputs: Mapping[str, bytes] = field(default_factory=dict)
    job_folder: Path | None = None


def read_file(path: Path) -> bytes:
    """A file's content.

    Raises
    ------
    CalcpackError
        It cannot be read, is a folder or a device, or is larger than any pack.
    """
    try:
        if not path.is_file():
            raise CalcpackError("it is no file", file=str(path))
        if path.stat().st_size > LARGEST_FILE:
            raise CalcpackError("it is larger than any file of a pack", file=str(path))
        return path.read_bytes()
    except OSError as error:
        raise CalcpackError(f"it cannot be read: {error.strerror}", file=str(path)) from None


def stays_below(name: str) -> bool:
    """Whether a file's name taken from data is that of a file below the folder it is looked for in.

    Examples
    --------
    >>> [stays_below(name) for name in ("sheets/B1.json", "../B1.json", "/etc/hosts", "", "a\\0b")]
    [True, False, False, False, False]
    """
    parts = PurePosixPath(name).parts
    plain = bool(parts) and not re.search(r"[\\:\x00-\x1f]", name)
    return (
        plain and not name.startswith("/") and ".." not in parts and all(len(part) <= 200 for part in parts)
    )


def is_file(path: Path) -> bool:
    """Whether there is such a file; a name that no file can have is none."""
    try:
        return path.is_file()
    except (OSError, ValueError):
        return False


def leads_out(path: Path, folder: Path) -> bool:
    """Whether a file of a folder is a link to a place outside of it."""
    return not path.resolve().is_relative_to(folder.resolve())


def _own(path: Path, folder: Path) -> Path | None:
    """A file of a folder, None where there is none.

    Raises
    ------
    CalcpackError
        It is a link that leads out of the folder.
    """
    if not path.is_file():
        return None
    if leads_out(path, folder):
        raise CalcpackError("it is a link that leads out of the folder", file=path.name)
    return path


def find_target(
    path: Path,
    *,
    records: Path | None = None,
    job: Path | None = None,
    told: Told = untold,
) -> Target:
    """Find what is to be audited.

    Parameters
    ----------
    path : Path
        An output folder, a record, a sheet's PDF, a pack.
    records : Path
        Folder with the records, for a PDF that carries none.
    job : Path
        The job file, where it does not come with the target.
    told : callable
        Told now and then how many pages of a PDF are read, of how many.

    Raises
    ------
    CalcpackError
        There is nothing of the kind.
    """
    if path.is_dir():
        target = _folder(path)
    elif not path.is_file():
        raise CalcpackError(
            f"there is no '{path}'", remedy="name an output folder, a record, a sheet's PDF or a pack"
        )
    elif path.suffix.lower() == ".pdf":
        target = _pdf(path, records, told)
    elif path.suffix.lower() == ".json":
        target = _record(path)
    else:
        raise CalcpackError(
            "it is neither a record nor a PDF",
            file=str(path),
            remedy="name an output folder, a record (sheets/B1.json), a sheet's PDF or a pack",
        )
    if job is not None:
        inputs = _job_inputs(job)
        target = Target(**{**vars(target), "inputs": inputs, "job_folder": job.resolve().parent})
    return target


def _job_inputs(job: Path) -> dict[str, bytes]:
    """The job file, and the tables and data files beside it that a key may name."""
    found = {job.name: read_file(job)}
    # tables first: a table of beams may name data files too
    beside = sorted(job.resolve().parent.rglob("*"), key=lambda path: (path.suffix.lower() == ".toml", path))
    for path in beside:
        if path.suffix.lower() in (".csv", ".xlsx", ".toml") and path.is_file() and path != job.resolve():
            name = path.relative_to(job.resolve().parent).as_posix()
            if any(name.encode() in content for content in found.values()):
                found[name] = read_file(path)
    return found


def sheets_folder(path: Path) -> Path:
    """Where the sheets of a pack's folder stand; the folder itself where it has no such place."""
    return path / "sheets" if (path / "sheets").is_dir() else path


def records_in(path: Path) -> list[Path]:
    """The records of a pack's folder by name; none of what is no folder."""
    if not path.is_dir():
        return []
    sheets = sheets_folder(path)
    return sorted(each for each in sheets.glob("*.json") if sheets != path or each.name != "job.json")


def _folder(path: Path) -> Target:
    sheets, records = sheets_folder(path), records_in(path)
    if not records:
        raise CalcpackError(f"there is no record in '{sheets}'", remedy="name the folder of a pack")
    home = path if sheets != path else path.parent
    job_json = _job_json(home / "job.json")
    order = {str(mark): place for place, mark in enumerate((job_json or {}).get("beams") or ())}
    records.sort(key=lambda each: (order.get(each.stem, len(order)), each.stem))
    pack = _own(home / "pack.pdf", home)
    attached = READING.attached(read_file(pack), pack.name, (_JOB, *_TABLES)) if pack else {}
    return Target(
        name=str(path),
        sheets=tuple(_beside(each) for each in records),
        folder=home,
        whole=True,
        job_json=job_json,
        manifest=_manifest(home / "manifest.sha256"),
        pack=pack,
        inputs=_inputs(attached),
    )


def _record(path: Path) -> Target:
    home = path.resolve().parent.parent
    return Target(
        name=str(path),
        sheets=(_beside(path),),
        folder=home if (home / "manifest.sha256").is_file() else None,
        manifest=_manifest(home / "manifest.sha256"),
    )


def _beside(record: Path) -> SheetFiles:
    folder = record.parent
    notebook = record.with_suffix(".ipynb")
    return SheetFiles(
        record=read_file(_own(record, folder) or record),
        record_name=record.name,
        notebook=_own(notebook, folder),
        notebook_name=notebook.name,
        pdf=_own(record.with_suffix(".pdf"), folder),
        screen=_own(record.with_suffix(".html"), folder),
    )


def _job_json(path: Path) -> Mapping[str, Any] | None:
    if not path.is_file():
        return None
    data = read_json(read_file(path), path.name, 8_000_000)
    return data if isinstance(data, dict) else None


def _manifest(path: Path) -> dict[str, str] | None:
    if not path.is_file():
        return None
    try:
        lines = read_file(path).decode("utf-8").splitlines()
    except UnicodeDecodeError:
        raise CalcpackError("it is no text", file=path.name) from None
    pairs = (line.split("  ", 1) for line in lines if "  " in line)
    return {name: digest for digest, name in pairs}


def _pdf(path: Path, records: Path | None, told: Told) -> Target:
    content = read_file(path)
    attached, pages = whole_pdf(content, path.name, told)
    found = {name: data for name, data in attached.items() if name.endswith(".json")}
    if records is not None:
        if not records.is_dir():
            raise CalcpackError(f"'{records}' is no folder", remedy="name the folder that holds the records")
        held = sheets_folder(records).glob("*.json")
        found = {each.name: read_file(each) for each in held if each.name != "job.json"}
    if not found:
        raise CalcpackError(
            "it carries no record",
            file=str(path),
            remedy="name the folder that holds the records with --record",
        )
    by_mark = sheet_pages(pages)
    return Target(
        name=str(path),
        sheets=tuple(
            SheetFiles(
                record=data,
                record_name=name,
                notebook=attached.get(f"{PurePosixPath(name).stem}.ipynb"),
                notebook_name=f"{PurePosixPath(name).stem}.ipynb",
                pages=by_mark.get(PurePosixPath(name).stem, pages if len(found) == 1 else ()),
            )
            for name, data in sorted(found.items(), key=lambda each: _first_page(by_mark, each[0]))
        ),
        whole=len(found) > 1,
        pack=path,
        inputs=_inputs(attached),
    )


def _first_page(by_mark: Mapping[str, tuple[str, ...]], name: str) -> tuple[int, str]:
    marks = list(by_mark)
    stem = PurePosixPath(name).stem
    return (marks.index(stem) if stem in by_mark else len(marks), stem)


def _inputs(attached: Mapping[str, bytes]) -> dict[str, bytes]:
    """The job file and its tables among the files a pack carries."""
    names = [name for name in attached if name.lower().endswith(_JOB)]
    names.sort(key=lambda name: not _is_job(attached[name]))
    tables = [name for name in attached if name.lower().endswith(_TABLES)]
    return {name: attached[name] for name in (*names, *tables)}


def _is_job(content: bytes) -> bool:
    """Whether a TOML file is a job file, not a data file that one names."""
    return re.search(rb"(?m)^[ \t]*(?:\[[ \t]*job[ \t]*\]|job[ \t]*[.=])", content) is not None
