"""One at a time: locks that are gone when whoever held them is."""

from __future__ import annotations

import os
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import BinaryIO

from calcpack.job.errors import CalcpackError

if sys.platform == "win32":  # pragma: no cover
    import msvcrt

    def _lock(file: BinaryIO) -> None:
        file.seek(0)
        msvcrt.locking(file.fileno(), msvcrt.LK_LOCK, 1)

else:
    import fcntl

    def _lock(file: BinaryIO) -> None:
        fcntl.flock(file.fileno(), fcntl.LOCK_EX)


@contextmanager
def locked(path: Path, mode: str = "ab") -> Iterator[None]:
    """Hold a file's lock; waits until it is free. The lock goes with the process that holds it.

    The file may be replaced by the one who holds the lock: whoever waited then takes the new file's lock.

    Parameters
    ----------
    path : Path
    mode : str
        "ab" makes the file if it is not there, "rb" does not.

    Raises
    ------
    CalcpackError
        It cannot be opened.
    """
    while True:
        try:
            file = open(path, mode)  # noqa: SIM115 - closed below, whatever happens
        except OSError as error:
            raise CalcpackError(f"'{path}' cannot be opened: {error.strerror}") from None
        try:
            _lock(file)  # type: ignore[arg-type, unused-ignore]
            if _still_there(file.fileno(), path):
                yield
                return
        finally:
            file.close()


def _still_there(descriptor: int, path: Path) -> bool:
    """Whether the name still leads to the file that was opened."""
    try:
        return os.path.samestat(os.fstat(descriptor), os.stat(path))
    except FileNotFoundError:
        return False


def sync_folder(path: Path) -> None:
    """Make a rename in a folder last through a loss of power."""
    if sys.platform == "win32":  # pragma: no cover
        return
    descriptor = os.open(path, os.O_RDONLY)
    try:
        os.fsync(descriptor)
    finally:
        os.close(descriptor)
