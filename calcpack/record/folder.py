"""An output folder as signing and issuing see it: its manifest and what is in it."""

from __future__ import annotations

from pathlib import Path

from calcpack.files import OutputFolder, digest
from calcpack.job.errors import CalcpackError

PACK = "pack.pdf"
MANIFEST = "manifest.sha256"


def output_folder(file: Path) -> Path | None:
    """The output folder a file stands in: the nearest folder above it with a manifest, at most two up."""
    for folder in list(file.absolute().parents)[:2]:
        if (folder / MANIFEST).is_file():
            return folder
    return None


def as_built(file: Path, data: bytes) -> None:
    """See that a file is what the build left.

    Parameters
    ----------
    file : Path
    data : bytes
        What was built of it, without anything appended since.

    Raises
    ------
    CalcpackError
        It is not, or no manifest stands beside it.
    """
    folder = output_folder(file)
    if folder is None:
        raise CalcpackError(
            f"no {MANIFEST} stands beside '{file}', so nothing says that this is what was built",
            remedy="sign it in its output folder",
        )
    built = OutputFolder(folder).written_before()
    named = file.absolute().relative_to(folder).as_posix()
    if digest(data) not in ({built[named]} if named in built else set(built.values())):
        raise CalcpackError(
            f"'{file}' is not what was built: {MANIFEST} names another hash", remedy="build the job again"
        )
