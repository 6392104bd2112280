"""Data files beside the job file that a beam's design keys name: read with the job, part of its input."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from pathlib import Path
from typing import Any

from calcpack.job.entries import Entry, Problems
from calcpack.job.errors import CalcpackError, Problem
from calcpack.job.model import Beam, DataFile
from calcpack.job.source import FileBytes, parse_toml, read_bytes
from calcpack.job.sweep import sweep
from calcpack.job.tables import inside

ENDING = ".toml"


def is_data_file(value: object) -> bool:
    """Whether a design key's value names a data file.

    Examples
    --------
    >>> is_data_file("our_annex.toml"), is_data_file("recommended"), is_data_file(1.0)
    (True, False, False)
    """
    return isinstance(value, str) and value.lower().endswith(ENDING)


def named_files(design: Mapping[str, Any], prefix: str = "design") -> Iterator[tuple[str, str]]:
    """The design keys that name a data file, dotted, with the file's name.

    Examples
    --------
    >>> list(named_files({"cover": "30 mm", "national": "our_annex.toml"}))
    [('design.national', 'our_annex.toml')]
    """
    for key, value in design.items():
        if isinstance(value, Mapping):
            yield from named_files(value, f"{prefix}.{key}")
        elif is_data_file(value):
            yield f"{prefix}.{key}", value


def read_data_file(folder: Path, name: str, problems: Problems) -> tuple[FileBytes, DataFile]:
    """Read a data file.

    Parameters
    ----------
    folder : Path
        Where the job file stands.
    name : str
        As a design key names it.
    problems : Problems
        What is wrong with its texts and numbers, whatever their keys.

    Raises
    ------
    CalcpackError
        It stands outside the job's folder, cannot be read or is no TOML.
    """
    if not inside(folder, name):
        raise CalcpackError(
            f"the file '{name}' is outside the job's folder", remedy="put it beside the job file"
        )
    file = read_bytes(folder / name, name)
    document = parse_toml(file)
    lines = {".".join(map(str, path)): line for path, line in document.lines.items()}
    sweep(Entry(None, document.data, name, 1, lines), problems)
    return file, DataFile(name=name, sha256=file.sha256, data=document.data, lines=lines)


def read_data_files(
    folder: Path, beams: Iterable[Beam], lines: Mapping[str, int], problems: Problems
) -> list[tuple[FileBytes, DataFile]]:
    """Every file that the beams' design keys name, once, in the order it is named first.

    Parameters
    ----------
    folder : Path
    beams : iterable of Beam
    lines : mapping
        "beam B1 design.national" -> line of the job file.
    problems : Problems
        What is wrong; a file that cannot be read is a fault of the key that names it.
    """
    found: dict[str, tuple[FileBytes, DataFile] | None] = {}
    named = ((beam, *each) for beam in beams for each in named_files(beam.design))
    for owner, key, name in named:
        if name in found:
            continue
        found[name] = None
        try:
            found[name] = read_data_file(folder, name, problems)
        except CalcpackError as error:
            line = lines.get(f"beam {owner.mark} {key}", owner.place.line)
            for each in error.problems:
                if each.line is None:
                    message = each.message if name in each.message else f"'{name}': {each.message}"
                    each = Problem(message, each.remedy, owner.place.file, line, f"beam {owner.mark}", key)
                problems.add(each)
    return [each for each in found.values() if each is not None]
