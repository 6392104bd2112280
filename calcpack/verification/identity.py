"""Which program it is: name, version, and the hash of every file it is made of."""

from __future__ import annotations

import hashlib
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import calcpack
from calcpack.job.house import house_folder
from calcpack.notebook.templates import Template, find_template, template_names

PROGRAM = "calcpack"
RECIPE = "find . -type f ! -path './_house/*' ! -name '*.pyc' | LC_ALL=C sort | xargs sha256sum | sha256sum"
"""What gives a part's hash again, run inside the part's folder."""


@dataclass(frozen=True)
class Part:
    """A part of the program with one hash over its files.

    Parameters
    ----------
    name : str
        Folder, as an installed package has it.
    says : str
    files : int
    sha256 : str
        As :data:`RECIPE` gives it.
    """

    name: str
    says: str
    files: int
    sha256: str


def version() -> str:
    """Name and version of the program."""
    return f"{PROGRAM} {calcpack.__version__}"


def part_of(folder: Path, name: str, says: str) -> Part:
    """A folder with the hash over the list of its files' hashes."""
    lines = []
    for path in sorted(folder.rglob("*"), key=lambda path: path.relative_to(folder).as_posix().encode()):
        inside = path.relative_to(folder)
        if path.is_file() and inside.parts[0] != "_house" and path.suffix != ".pyc":
            lines.append(f"{hashlib.sha256(path.read_bytes()).hexdigest()}  ./{inside.as_posix()}\n")
    return Part(name, says, len(lines), hashlib.sha256("".join(lines).encode()).hexdigest())


_SAYS = {
    "bars": "sizes of reinforcing bars",
    "combinations": "combinations of actions",
    "live_loads": "imposed loads of occupancies",
    "materials": "grades of concrete, steel and bars",
    "national": "nationally determined parameters",
    "sections": "rolled sections",
    "verification": "the published values of this manual",
}


def parts() -> tuple[Part, ...]:
    """The program, each folder of shared data, the page designs."""
    found = [part_of(Path(calcpack.__file__).parent, "calcpack", "the program itself")]
    shared = house_folder("shared")
    found += [
        part_of(folder, f"shared/{folder.name}", _SAYS.get(folder.name, ""))
        for folder in sorted(shared.iterdir())
        if folder.is_dir()
    ]
    pages = house_folder("report_templates") / "page"
    return (*found, part_of(pages, "report_templates/page", "page designs"))


def shipped_templates() -> Sequence[Template]:
    """Every sheet template that comes with the program."""
    return [find_template(name, Path()) for name in template_names()]
