"""A pack's records wherever they are kept: an output folder, a pack's PDF, or the register."""

from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from pydantic import BaseModel, ConfigDict, Field, ValidationError

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.confined import READING
from calcpack.record.register import Entry, open_register


class _Data(BaseModel):
    model_config = ConfigDict(frozen=True, extra="ignore")


class RecordLine(_Data):
    """A line of a record, as far as comparing needs it."""

    no: str
    kind: str
    symbol: str = ""
    says: str = ""
    expression: Any = None
    value: Any = None
    unit: str = ""
    shown: str = ""
    cite: str = ""
    origin: str = ""
    passes: bool | None = None


class SheetRecord(_Data):
    """A sheet's record, as far as comparing needs it."""

    mark: str
    revision: str = ""
    job: dict[str, Any] = Field(default_factory=dict)
    template: dict[str, Any] = Field(default_factory=dict)
    lines: tuple[RecordLine, ...] = ()
    results: dict[str, Any] = Field(default_factory=dict)


@dataclass(frozen=True)
class Edition:
    """A pack at one revision.

    Parameters
    ----------
    says : str
        What it is, in words: "revision A".
    sheets : mapping of mark to SheetRecord
    notebooks : mapping of mark to bytes
        The executed notebooks, where they are there.
    """

    says: str
    sheets: Mapping[str, SheetRecord]
    notebooks: Mapping[str, bytes] = field(default_factory=dict, repr=False)


def read_edition(source: str, record: Path | None = None) -> Edition:
    """The edition somebody names.

    Parameters
    ----------
    source : str
        An output folder, a pack's PDF, or a revision in the register: "A", or "2417:A" where it holds several
        jobs.
    record : Path or None
        The register's folder; ``record`` here by default.

    Raises
    ------
    CalcpackError
        There is nothing of that name, or it holds no records.
    """
    path = Path(source)
    if path.is_dir():
        sheets = path / "sheets"
        files = {each.name: _read(each) for each in sorted(sheets.glob("*")) if each.is_file()}
        return _edition(source, files)
    if path.is_file():
        return _edition(source, READING.attached(_read(path), path.name))
    register = open_register(record)
    entry = _entry(source, register.entries())
    kept = {
        name.removeprefix("sheets/"): _read(register.stored(name, sha256))
        for name, sha256 in register.files_of(entry).items()
        if name.startswith("sheets/")
    }
    return _edition(source, kept)


def _read(path: Path) -> bytes:
    try:
        return path.read_bytes()
    except OSError as error:
        raise CalcpackError(f"'{path}' cannot be read: {error.strerror}") from None


def _entry(source: str, entries: tuple[Entry, ...]) -> Entry:
    job, _, revision = source.rpartition(":")
    found = [each for each in entries if each.revision == revision and job in ("", each.job)]
    if not found:
        raise CalcpackError(
            f"'{source}' is no folder, no file and no revision in the register",
            remedy="name an output folder, a pack, or a revision that 'calcpack register' lists",
        )
    if len({each.job for each in found}) > 1:
        raise CalcpackError(
            f"several jobs have a revision {revision}",
            remedy=f"write JOB:{revision}: {found[0].job}:{revision}",
        )
    return found[-1]


def _edition(source: str, files: Mapping[str, bytes]) -> Edition:
    sheets: dict[str, SheetRecord] = {}
    for name, data in files.items():
        if not name.endswith(".json"):
            continue
        try:
            sheet = SheetRecord.model_validate(json.loads(data))
        except (ValueError, ValidationError):
            raise CalcpackError(f"'{name}' of '{source}' is no sheet's record") from None
        sheets[sheet.mark] = sheet
    if not sheets:
        raise CalcpackError(
            f"'{source}' holds no records", remedy="name an output folder, or a pack that carries them"
        )
    notebooks = {name.removesuffix(".ipynb"): data for name, data in files.items() if name.endswith(".ipynb")}
    return Edition(edition_says(sheets), sheets, notebooks)


def edition_says(sheets: Mapping[str, SheetRecord]) -> str:
    """An edition in words: the newest revision of its sheets, as sheets left alone keep their letter."""
    newest = max(sheets.values(), key=lambda sheet: str(sheet.job.get("date", "")))
    return f"revision {newest.revision or newest.job.get('revision', '')}"
