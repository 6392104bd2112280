"""The job file and its tables, read and understood as a whole; everything that is wrong told at once."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator, Mapping
from dataclasses import replace
from pathlib import Path
from typing import Any, TypeVar

from pydantic import BaseModel

from calcpack.job.data_files import read_data_files
from calcpack.job.entries import EXAMPLES, Entry, Problems, validated
from calcpack.job.errors import CalcpackError, Problem, nearest
from calcpack.job.fields import shown
from calcpack.job.library import read_material, read_section
from calcpack.job.members import (
    Surroundings,
    read_beam,
    read_column,
    read_combination,
    read_panel,
    read_wall,
)
from calcpack.job.model import (
    Basis,
    Beam,
    Column,
    DataFile,
    Header,
    Job,
    OwnCombination,
    Panel,
    Psi,
    Submission,
)
from calcpack.job.own_tables import bar_sizes, catalogue, occupancies
from calcpack.job.plan import CLOSE, Grid, distance
from calcpack.job.raw import RawGrid
from calcpack.job.source import Document, FileBytes, KeyPath, parse_toml, read_bytes
from calcpack.job.sweep import sweep
from calcpack.job.tables import load, read_table
from calcpack.job.uses import Fault, Uses

MEMBERS = ("panel", "beam", "column", "wall")
SINGLE = ("job", "submission", "basis", "grid")
NAMED = {"materials": "material", "sections": "section"}
OWN = {"rolled_sections": "rolled section", "grades": "grade", "bars": "bar", "occupancies": "occupancy"}
TABLES = {f"{kind}s": kind for kind in MEMBERS} | {"beam_loads": "beam load"} | OWN
TOP = ("format", *SINGLE, *NAMED, *MEMBERS, "combination", *TABLES)

Model = TypeVar("Model", bound=BaseModel)


def read_job(path: str | Path) -> Job:
    """Read a job file with the tables it names.

    Parameters
    ----------
    path : str or Path
        The job file; its tables stand beside it.

    Returns
    -------
    Job
        Complete, frozen, in SI.

    Raises
    ------
    CalcpackError
        Everything that is wrong with it, each problem with file, line, mark and key.
    """
    path = Path(path)
    file = replace(read_bytes(path, str(path)), name=path.name)
    return _Reader(path.parent, file, parse_toml(file)).job()


class _Reader:
    """One reading of one job file."""

    def __init__(self, folder: Path, file: FileBytes, document: Document) -> None:
        self.folder = folder
        self.files = [file]
        self.document = document
        self.data = document.data
        self.problems = Problems()
        self.lines: dict[str, int] = {}
        self.places = _grouped(document.lines)

    def job(self) -> Job:
        """The whole job."""
        self._check_top()
        header = self._one("job", Header)
        submission = self._one("submission", Submission) or Submission()
        basis = self._one("basis", Basis) or Basis()
        self._check_settings(header, basis)
        entries = {kind: list(self._members(kind)) for kind in MEMBERS}
        loads = self._loads(entries["beam"])
        self._check_marks(entries)
        grid = self._grid()
        own = {key: list(self._table(key)) if key in self.data else [] for key in OWN}
        known = catalogue(own["rolled_sections"], own["grades"], self.problems)
        own_bars = bar_sizes(own["bars"], self.problems)
        own_uses = occupancies(own["occupancies"], self.problems)
        sections = {
            key: read_section(key, each, self.problems, known) for key, each in self._named("sections")
        }
        around = Surroundings(
            grid=grid,
            basis=basis,
            units=header.units if header else "SI",
            materials={
                key: read_material(key, each, self.problems, known) for key, each in self._named("materials")
            },
            sections=sections,
            problems=self.problems,
            uses=Uses(basis.actions, own_uses),
        )
        panels = [read_panel(each, around) for each in entries["panel"]]
        beams = [read_beam(each, loads[place], around) for place, each in enumerate(entries["beam"])]
        basis, psi = self._use(basis, _sound(panels), around.uses)
        columns = [read_column(each, around) for each in entries["column"]]
        walls = [read_wall(each, around) for each in entries["wall"]]
        combinations = self._combinations()
        data_files = self._data_files(_sound(beams))
        self._check_columns(columns, entries["column"])
        self.problems.tell()
        assert header
        assert grid
        return Job(
            file=self.files[0].name,
            folder=str(self.folder.resolve()),
            digest=hashlib.sha256(b"".join(each.content for each in self.files)).hexdigest(),
            files={each.name: each.sha256 for each in self.files},
            job=header,
            submission=submission,
            basis=basis,
            grid_x=grid.x,
            grid_y=grid.y,
            panels=_sound(panels),
            beams=_sound(beams),
            columns=_sound(columns),
            walls=_sound(walls),
            combinations=combinations,
            candidates={
                each.family: known.families[each.family]
                for each in sections.values()
                if each is not None and each.open
            },
            bars=own_bars,
            psi=psi,
            occupancies=own_uses,
            data_files=data_files,
            lines=self.lines,
        )

    # what the file holds, table by table

    def _problem(self, message: str, remedy: str, *path: str | int) -> None:
        key = ".".join(str(part) for part in path) or None
        line = self.document.line(path)
        self.problems.add(Problem(message, remedy, self.document.file, line, None, key))

    def _check_top(self) -> None:
        """The format, and keys at the top that are none."""
        if "format" not in self.data:
            self._problem("the file does not say its format", "write format = 1 as its first line", "format")
        elif type(self.data["format"]) is not int or self.data["format"] != 1:
            self._problem(
                f"format {shown(self.data['format'])} is not known", "this program reads format = 1", "format"
            )
            self.problems.tell()
        for key in self.data:
            if key not in TOP:
                self._problem("there is no such key", nearest(key, TOP), key)

    def _entry(self, path: KeyPath, data: Any, mark: str | None, prefix: str = "") -> Entry | None:
        """A table of the file with its lines; None, with the problem noted, if it is no table."""
        if not isinstance(data, dict):
            self._problem(
                "this is no table of keys and values",
                f"write it as [{'.'.join(part for part in path if isinstance(part, str))}]",
                *path,
            )
            return None
        entry = Entry(
            mark, data, self.document.file, self.document.line(path), self.places.get(path, {}), prefix
        )
        sweep(
            replace(entry, data={key: value for key, value in data.items() if key != "load"}), self.problems
        )
        return entry

    def _keep_lines(self, name: str, entry: Entry) -> None:
        """Keep the lines of an entry's keys for errors found in later stages."""
        if entry.line is not None:
            self.lines.setdefault(name, entry.line)
        keys = entry.lines or dict.fromkeys(_dotted(entry.data, ""), entry.line)
        for key, line in keys.items():
            if line is not None and key and not any(part.isdigit() for part in key.split(".")):
                self.lines.setdefault(f"{name} {key}", line)

    def _one(self, key: str, model: type[Model]) -> Model | None:
        """A table there is only one of."""
        if key not in self.data:
            if key == "job":
                self._problem("the table [job] is missing", "it needs number, title and date", "job")
            return None
        entry = self._entry((key,), self.data[key], None, f"{key}.")
        if entry is None:
            return None
        self._keep_lines(key, entry)
        return validated(model, entry, self.problems)

    def _check_settings(self, header: Header | None, basis: Basis) -> None:
        for key in ("number", "title") if header else ():
            if not getattr(header, key).strip():
                self._problem("this text is empty", f"write for example {EXAMPLES[key]}", "job", key)
        if basis.one_way_ratio < 1.0:
            self._problem("the ratio is long side to short side", "give 1 or more", "basis", "one_way_ratio")

    def _use(self, basis: Basis, panels: tuple[Panel, ...], uses: Uses) -> tuple[Basis, Psi | None]:
        """The basis with the category of its use, and the job's own combination factors."""
        found = uses.settled(basis, panels)
        if isinstance(found, Fault):
            self._problem(found.message, found.remedy, "basis", "occupancy")
            return basis, None
        return found

    def _named(self, table: str) -> Iterator[tuple[str, Entry]]:
        """The materials or the sections."""
        found = self.data.get(table, {})
        if not isinstance(found, dict):
            self._problem("this is no table", f"write [{table}.NAME]", table)
            return
        for key, data in found.items():
            name = f"{NAMED[table]} {key}"
            if entry := self._entry((table, key), data, name):
                self._keep_lines(name, entry)
                yield key, entry

    def _grid(self) -> Grid | None:
        """The grid; an empty one if there is none, None if it is faulty."""
        entry = self._entry(("grid",), self.data.get("grid", {}), None, "grid.")
        raw = validated(RawGrid, entry, self.problems) if entry else None
        if entry is None or raw is None:
            return None
        self._keep_lines("grid", entry)
        grid = Grid(raw.x, raw.y)
        faults = grid.faults()
        for key, message, remedy in faults:
            self.problems.add(entry.problem(message, remedy, key))
        return None if faults else grid

    def _members(self, kind: str) -> Iterator[Entry]:
        """The panels, beams, columns or walls, from the file itself or from a table."""
        tables = f"{kind}s"
        if kind in self.data and tables in self.data:
            message = f"there are both [[{kind}]] and {tables}"
            self._problem(message, f"list the {tables} here or in the table", tables)
        if kind in self.data:
            for number, data in enumerate(self._array(kind)):
                mark = data.get("mark") if isinstance(data, dict) else None
                name = f"{kind} {mark}" if isinstance(mark, str) else f"{kind} no. {number + 1}"
                if entry := self._entry((kind, number), data, name):
                    self._keep_lines(name, entry)
                    yield entry
        elif tables in self.data:
            yield from self._table(tables)

    def _array(self, kind: str) -> list[Any]:
        found = self.data.get(kind, [])
        if isinstance(found, list):
            return found
        self._problem("this is no list of tables", f"write it as [[{kind}]], one by one", kind)
        return []

    def _table(self, key: str) -> Iterator[Entry]:
        """The rows of a table file named in the job file."""
        kind, name = TABLES[key], self.data[key]
        if not isinstance(name, str):
            example = f'{key} = "{key}.csv"'
            singly = f", or write each {kind} as [[{kind}]]" if kind in MEMBERS else ""
            self._problem("this key names a table file", f"write for example {example}{singly}", key)
            return
        try:
            file = load(self.folder, name)
            entries = read_table(file, kind, self.problems)
        except CalcpackError as error:
            found = error.problems[0]
            if found.line is None:  # not in the table but with it: a fault of the line that names it
                message = found.message if name in found.message else f"'{name}': {found.message}"
                self._problem(message, found.remedy, key)
            else:
                self.problems.add(found)
            return
        if name not in [each.name for each in self.files]:
            self.files.append(file)
        for entry in entries:
            sweep(entry, self.problems)
            if entry.mark and kind in MEMBERS:
                self._keep_lines(entry.mark, entry)
            yield entry

    def _data_files(self, beams: tuple[Beam, ...]) -> dict[str, DataFile]:
        """The files that design keys name, now part of the input."""
        found = read_data_files(self.folder, beams, self.lines, self.problems)
        known = {each.name for each in self.files}
        self.files += [file for file, _ in found if file.name not in known]
        return {data.name: data for _, data in found}

    def _loads(self, beams: list[Entry]) -> list[list[Entry]]:
        """The loads of each beam, those in its own table first."""
        loads: list[list[Entry]] = [[] for _ in beams]
        for place, beam in enumerate(beams):
            given = beam.data.pop("load", [])
            if not isinstance(given, list):
                self.problems.add(
                    beam.problem("this is no list of loads", "write it as [[beam.load]]", "load")
                )
                continue
            for number, data in enumerate(given):
                if entry := self._entry(("beam", place, "load", number), data, beam.mark, "load."):
                    loads[place].append(entry)
        marks = {str(beam.data.get("mark")): place for place, beam in enumerate(beams)}
        unread = {self.data.get("beams"), "beams"} & {
            part for each in self.problems.found for part in (each.file, each.key)
        }
        for row in self._table("beam_loads") if "beam_loads" in self.data else ():
            name = str(row.data.get("beam", ""))
            if name in marks:
                loads[marks[name]].append(row)
            elif name and not unread:  # else the beam may be in a row that could not be read
                self.problems.add(row.problem(f"there is no beam '{name}'", nearest(name, marks), "beam"))
            elif not name:
                self.problems.add(row.problem("this key is missing", "name the beam the load is on", "beam"))
        return loads

    def _check_marks(self, entries: Mapping[str, list[Entry]]) -> None:
        """Every mark once, capitals or not: they name files."""
        taken: dict[str, Entry] = {}
        for entry in (each for kind in MEMBERS for each in entries[kind]):
            mark = entry.data.get("mark")
            if not isinstance(mark, str):
                continue
            other = taken.setdefault(mark.casefold(), entry)
            if other is not entry:
                message = f"the mark is taken by {other.mark} ({other.file}:{other.line})"
                self.problems.add(
                    entry.problem(message, "give each panel, beam, column and wall its own", "mark")
                )

    def _check_columns(self, columns: list[Column | None], entries: list[Entry]) -> None:
        """No two columns at one place."""
        seen: dict[tuple[int, int], Column] = {}
        for column, entry in zip(columns, entries, strict=True):
            if column is None:
                continue
            key = (round(column.at[0] / (10 * CLOSE)), round(column.at[1] / (10 * CLOSE)))
            other = seen.setdefault(key, column)
            if other is not column and distance(other.at, column.at) <= CLOSE:
                message = f"column {other.mark} stands here already"
                self.problems.add(entry.problem(message, "leave one out", "at"))

    def _combinations(self) -> tuple[OwnCombination, ...]:
        found: dict[str, OwnCombination] = {}
        for number, data in enumerate(self._array("combination")):
            name = data.get("name") if isinstance(data, dict) else None
            mark = (
                f"combination {name}" if isinstance(name, str) and name else f"combination no. {number + 1}"
            )
            entry = self._entry(("combination", number), data, mark)
            own = read_combination(entry, self.problems) if entry else None
            if entry is None or own is None:
                continue
            self._keep_lines(mark, entry)
            if own.name in found:
                self.problems.add(entry.problem("the name is taken", "give each combination its own", "name"))
            found.setdefault(own.name, own)
        return tuple(found.values())


def _sound(found: list[Model | None]) -> tuple[Model, ...]:
    return tuple(each for each in found if each is not None)


def _dotted(data: dict[str, Any], before: str) -> Iterator[str]:
    """Every key of a table and of the tables in it, dotted."""
    for key, value in data.items():
        yield before + key
        if isinstance(value, dict):
            yield from _dotted(value, f"{before}{key}.")


def _grouped(lines: Mapping[KeyPath, int]) -> dict[KeyPath, dict[str, int]]:
    """The lines by the table they stand in, keys dotted from there."""
    groups: dict[KeyPath, dict[str, int]] = {}
    for path, line in lines.items():
        depths = (1,) if path[0] in SINGLE else (2, 4) if path[0] == "beam" else (2,)
        for depth in depths:
            if len(path) >= depth and (depth < 4 or path[2] == "load"):
                groups.setdefault(path[:depth], {})[".".join(map(str, path[depth:]))] = line
    return groups
