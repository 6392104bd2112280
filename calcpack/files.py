"""Files written whole or not at all."""

from __future__ import annotations

import hashlib
import os
import tempfile
from collections.abc import Mapping
from pathlib import Path

from calcpack.job.errors import CalcpackError


def digest(data: bytes) -> str:
    """SHA-256 of some bytes, in hexadecimal."""
    return hashlib.sha256(data).hexdigest()


def write_file(path: Path, data: bytes) -> None:
    """Write a file through a temporary one beside it, synced and then renamed.

    Raises
    ------
    CalcpackError
        The file cannot be written; what stood there before is as it was.
    """
    try:
        handle, name = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.", suffix=".part")
    except OSError as error:
        raise CalcpackError(
            f"'{path}' cannot be written: {error.strerror}", remedy="name a folder that exists and is yours"
        ) from None
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        os.chmod(name, 0o644)
        os.replace(name, path)
    except OSError as error:
        Path(name).unlink(missing_ok=True)
        raise CalcpackError(f"'{path}' cannot be written: {error.strerror}") from None


class OutputFolder:
    """A folder of results that remembers what it wrote, so that nobody's own work is overwritten.

    A file that stands where one is to be written, and is not as the last build left it, is renamed
    before the new one takes its place.

    Parameters
    ----------
    path : Path
        Made if it is not there.
    memory : str
        Name of the file that holds the SHA-256 of what was written.
    """

    def __init__(self, path: Path, memory: str = "manifest.sha256") -> None:
        self.path = path
        self.memory = memory

    def check(self) -> None:
        """Refuse what cannot be a folder of results.

        Raises
        ------
        CalcpackError
            The path is a file, or its parent does not exist.
        """
        if self.path.exists() and not self.path.is_dir():
            raise CalcpackError(f"'{self.path}' is a file", remedy="name a folder for the pack")

    def written_before(self) -> dict[str, str]:
        """Name -> SHA-256 of what the last build left."""
        try:
            lines = (self.path / self.memory).read_text(encoding="utf-8").splitlines()
        except (OSError, UnicodeDecodeError):
            return {}
        pairs = (line.split("  ", 1) for line in lines if "  " in line)
        return {name: value for value, name in pairs}

    def write(self, files: Mapping[str, bytes], *, keep: bool = False) -> tuple[str, ...]:
        """Write files and drop what the last build left beside them.

        Parameters
        ----------
        files : mapping of relative name to bytes
        keep : bool
            Leave the last build's other files standing (a build of a part).

        Returns
        -------
        tuple of str
            New names of files that somebody had changed and that were kept aside.

        Raises
        ------
        CalcpackError
            A file cannot be written.
        """
        before = self.written_before()
        kept = []
        for name in files:
            (self.path / name).parent.mkdir(parents=True, exist_ok=True)
        for name, data in files.items():
            if aside := self._aside(name, before.get(name), digest(data)):
                kept.append(aside)
            write_file(self.path / name, data)
        now = {name: digest(data) for name, data in files.items()}
        if keep:
            now = before | now
        else:
            for name in before.keys() - files.keys():
                path = self.path / name
                if path.is_file() and digest(path.read_bytes()) == before[name]:
                    path.unlink()
        text = "".join(f"{value}  {name}\n" for name, value in sorted(now.items()))
        write_file(self.path / self.memory, text.encode("utf-8"))
        return tuple(kept)

    def _aside(self, name: str, before: str | None, new: str) -> str | None:
        """Rename a file that is neither what the last build wrote nor what is to be written now."""
        path = self.path / name
        if not path.is_file():
            return None
        current = digest(path.read_bytes())
        if current in (before, new):
            return None
        number = 1
        while (other := path.with_name(f"{path.stem}.kept-{number}{path.suffix}")).exists():
            number += 1
        path.rename(other)
        return other.relative_to(self.path).as_posix()
