"""The register of what was issued: one line an entry, each carrying the hash of the one before.

``record/register.jsonl`` is read and written as a whole through a file renamed into place, so that no reader
ever finds half an entry; ``record/files`` holds every issued file under its own SHA-256, and
``record/entries`` each entry once more in a read-only file of its own, so that entries cut off at the end of
the list are missed.
"""

from __future__ import annotations

import json
import os
import re
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path

from pydantic import BaseModel, ConfigDict, ValidationError

from calcpack.files import digest, write_file
from calcpack.job.errors import CalcpackError
from calcpack.record.locking import locked, sync_folder
from calcpack.record.revisions import backwards

REGISTER = "register.jsonl"
FILES = "files"
SLIPS = "entries"
_SLIP = re.compile(r"([0-9]{4,})\.json")
_LOCK = ".lock"
_START = "0" * 64


class _Line(BaseModel):
    model_config = ConfigDict(frozen=True, extra="forbid")


class EntrySignature(_Line):
    """Who signed, as the register keeps it."""

    role: str
    name: str
    certificate: str
    time: str
    test: bool
    despite: str


class Entry(_Line):
    """One issue.

    Parameters
    ----------
    no : int
        Counted from 1.
    time : str
        When it was entered, UTC.
    job, title, revision, purpose : str
    pack, built, manifest : str
        SHA-256 of the signed pack, of the pack as it was built, and of the list of all files.
    unmet : tuple of str
        Requirements not satisfied.
    signatures : tuple of EntrySignature
    before : str
        The hash of the entry before; zeros for the first.
    """

    no: int
    time: str
    job: str
    title: str
    revision: str
    purpose: str
    pack: str
    built: str
    manifest: str
    unmet: tuple[str, ...]
    signatures: tuple[EntrySignature, ...]
    before: str

    @property
    def _body(self) -> str:
        return json.dumps(self.model_dump(mode="json"), ensure_ascii=False)

    @property
    def hash(self) -> str:
        """SHA-256 of all its fields, the hash of the entry before among them."""
        return digest(self._body.encode())

    @property
    def line(self) -> bytes:
        """The entry as the register holds it."""
        return f'{self._body[:-1]}, "hash": "{self.hash}"}}\n'.encode()


class Register:
    """A folder of issued packs.

    Parameters
    ----------
    folder : Path
        ``record``, beside the output folder by default.
    """

    def __init__(self, folder: Path) -> None:
        self.folder = folder

    @property
    def file(self) -> Path:
        """The list of entries."""
        return self.folder / REGISTER

    def entries(self) -> tuple[Entry, ...]:
        """All entries, their chain proved.

        Raises
        ------
        CalcpackError
            The register cannot be read, or is not as it was written.
        """
        found, problems = self.read()
        problems = problems or self._slip_problems(found)
        if problems:
            raise CalcpackError(problems[0], file=str(self.file), remedy="see 'calcpack register --check'")
        return found

    def read(self) -> tuple[tuple[Entry, ...], tuple[str, ...]]:
        """The entries up to the first that is not as it was written, and what is wrong there."""
        try:
            data = self.file.read_bytes()
        except FileNotFoundError:
            return (), ()
        except OSError as error:
            raise CalcpackError(f"'{self.file}' cannot be read: {error.strerror}") from None
        found: list[Entry] = []
        before = _START
        for number, line in enumerate(data.splitlines(keepends=True), start=1):
            try:
                fields = json.loads(line)
                fields.pop("hash")
                entry = Entry.model_validate(fields)
            except (ValueError, ValidationError, KeyError, AttributeError):
                return tuple(found), (f"entry {number} cannot be read",)
            if entry.line != line:
                return tuple(found), (f"entry {number} was changed: its hash is another",)
            if entry.before != before or entry.no != number:
                return tuple(found), (f"entry {number} does not follow the one before: the chain is broken",)
            found.append(entry)
            before = entry.hash
        return tuple(found), ()

    def slip(self, no: int) -> Path:
        """Where an entry stands once more by itself."""
        return self.folder / SLIPS / f"{no:04}.json"

    def _slip_problems(self, entries: Sequence[Entry]) -> tuple[str, ...]:
        """Entries that stand by themselves and are missing from the list, or are others there."""
        folder = self.folder / SLIPS
        numbers = sorted(
            int(match[1])
            for path in folder.glob("*.json")
            if (match := _SLIP.fullmatch(path.name)) is not None
        )
        problems = []
        for no in numbers:
            try:
                kept = self.slip(no).read_bytes()
            except OSError as error:
                problems.append(f"'{self.slip(no)}' cannot be read: {error.strerror}")
                continue
            if no > len(entries):
                problems.append(f"entry {no} was issued and is missing: the end of the register was cut off")
            elif no < 1 or kept != entries[no - 1].line:
                problems.append(f"entry {no} is another than '{SLIPS}/{self.slip(no).name}' says")
        return tuple(problems)

    def _write_slips(self, entries: Sequence[Entry]) -> None:
        """Put every entry by itself; those of an issue that was interrupted as well."""
        missing = [entry for entry in entries if not self.slip(entry.no).exists()]
        (self.folder / SLIPS).mkdir(exist_ok=True)
        for entry in missing:
            write_file(self.slip(entry.no), entry.line)
            os.chmod(self.slip(entry.no), 0o444)
        if missing:
            sync_folder(self.folder / SLIPS)

    @contextmanager
    def held(self) -> Iterator[None]:
        """The register for oneself alone; waits until nobody else holds it.

        Raises
        ------
        CalcpackError
            The folder cannot be made or used.
        """
        try:
            (self.folder / FILES).mkdir(parents=True, exist_ok=True)
        except OSError as error:
            raise CalcpackError(f"'{self.folder}' cannot be made: {error.strerror}") from None
        with locked(self.folder / _LOCK):
            yield

    def stored(self, name: str, sha256: str) -> Path:
        """Where a file of that name and hash is kept."""
        return self.folder / FILES / f"{sha256}{Path(name).suffix.lower()}"

    def store(self, name: str, data: bytes) -> str:
        """Keep a file under its hash; one that is there already is left as it is.

        Raises
        ------
        CalcpackError
            What is kept under that hash is something else.
        """
        sha256 = digest(data)
        path = self.stored(name, sha256)
        if path.exists():
            if digest(path.read_bytes()) != sha256:
                raise CalcpackError(f"'{path}' is damaged: it is not what its name says")
            return sha256
        write_file(path, data)
        os.chmod(path, 0o444)
        return sha256

    def append(self, entries: Sequence[Entry], entry: Entry) -> None:
        """Add an entry to those there are; to be called while the register is held.

        The list comes first: an interruption leaves an entry without its slip, which the next issue writes,
        never a slip without its entry.
        """
        sync_folder(self.folder / FILES)
        data = self.file.read_bytes() if self.file.exists() else b""
        write_file(self.file, data + entry.line)
        sync_folder(self.folder)
        self._write_slips([*entries, entry])

    def files_of(self, entry: Entry) -> dict[str, str]:
        """Name -> SHA-256 of the files of an entry.

        Raises
        ------
        CalcpackError
            The list is not there, or not as it was.
        """
        path = self.stored("manifest.sha256", entry.manifest)
        try:
            data = path.read_bytes()
        except OSError:
            raise CalcpackError(f"entry {entry.no}: the list of its files is missing") from None
        if digest(data) != entry.manifest:
            raise CalcpackError(f"entry {entry.no}: the list of its files was changed")
        pairs = (line.split("  ", 1) for line in data.decode("utf-8").splitlines())
        return {name: value for value, name in pairs}

    def check(self) -> tuple[tuple[str, ...], tuple[str, ...]]:
        """Prove the chain and every stored file.

        Returns
        -------
        tuple of str, tuple of str
            What is wrong; what is to be noted.
        """
        entries, wrong = self.read()
        problems = [*wrong, *(self._slip_problems(entries) if not wrong else ())]
        named: set[str] = set()
        issued: dict[str, list[str]] = {}
        for entry in entries:
            before = issued.setdefault(entry.job, [])
            if (not before or before[-1] != entry.revision) and (why := backwards(entry.revision, before)):
                problems.append(f"entry {entry.no}: revision {entry.revision} goes backwards: {why}")
            before.append(entry.revision)
            named.add(self.stored("manifest.sha256", entry.manifest).name)
            try:
                files = self.files_of(entry)
            except CalcpackError as error:
                problems.append(str(error))
                continue
            if files.get("pack.pdf") != entry.pack:
                problems.append(f"entry {entry.no}: its list of files names another pack")
            for name, sha256 in files.items():
                path = self.stored(name, sha256)
                if path.name in named:
                    continue
                named.add(path.name)
                if not path.is_file():
                    problems.append(f"entry {entry.no}: '{name}' is missing")
                elif digest(path.read_bytes()) != sha256:
                    problems.append(f"entry {entry.no}: '{name}' was changed")
        return tuple(problems), (*self._without_slip(entries), *self._left_over(named))

    def _without_slip(self, entries: Sequence[Entry]) -> tuple[str, ...]:
        without = [str(entry.no) for entry in entries if not self.slip(entry.no).exists()]
        if not without:
            return ()
        return (f"not in '{SLIPS}' yet, the next issue puts them there: entry {', '.join(without)}",)

    def _left_over(self, named: set[str]) -> tuple[str, ...]:
        folder = self.folder / FILES
        there = sorted(path.name for path in folder.iterdir()) if folder.is_dir() else []
        loose = [name for name in there if name not in named]
        if not loose:
            return ()
        return (
            f"{len(loose)} stored files belong to no entry: an issue was interrupted, or entries are missing",
        )


def last_of(entries: Sequence[Entry], job: str) -> Entry | None:
    """The entry issued last for a job, None where there is none."""
    return next((entry for entry in reversed(entries) if entry.job == job), None)


def open_register(folder: Path | None) -> Register:
    """The register of a folder, ``record`` here by default.

    Raises
    ------
    CalcpackError
        There is none.
    """
    register = Register(folder or Path("record"))
    if not register.file.is_file() and not register.slip(1).is_file():
        raise CalcpackError(
            f"'{register.folder}' holds no register", remedy="name its folder with --record, or issue a pack"
        )
    return register
