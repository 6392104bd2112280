"""Tables beside the job file: CSV, or a workbook of one sheet."""

from __future__ import annotations

import csv
import io
import re
import warnings
import zipfile
from collections.abc import Iterator
from pathlib import Path, PurePosixPath
from typing import Any, NamedTuple

from calcpack.job.entries import Entry, Problems
from calcpack.job.errors import CalcpackError, Problem, nearest
from calcpack.job.raw import RawValues
from calcpack.job.source import FileBytes, read_bytes
from calcpack.job.units import KINDS, dimension, kind_of

MOST_ROWS = 20_000
MOST_COLUMNS = 100
LARGEST_UNPACKED = 100_000_000  # bytes of a workbook's parts

# What a cell holds: "text", "points" or one "point" of the plan, "words", a plain "number", or a quantity of
# a kind of ``units.KINDS``. Beams take any "design." key besides.
COLUMNS: dict[str, dict[str, str]] = {
    "panel": {
        "mark": "text",
        "corners": "points",
        "thickness": "length",
        "unit_weight": "unit weight",
        "material": "text",
        "dead": "pressure",
        "live": "pressure",
        "use": "text",
        "roof_live": "pressure",
        "snow": "pressure",
        "transfer": "text",
    },
    "beam": {
        "mark": "text",
        "line": "points",
        "fixed": "words",
        "free": "words",
        "equivalent": "text",
        "design_loads": "text",
        "section": "text",
        "material": "text",
        "template": "text",
    },
    "column": {"mark": "text", "at": "point"},
    "wall": {"mark": "text", "line": "points"},
    "beam load": {
        "beam": "text",
        "case": "text",
        "line": "line load",
        "line_end": "line load",
        "from": "length",
        "to": "length",
        "point": "force",
        "at": "length",
    },
    "rolled section": {
        "designation": "text",
        "family": "text",
        "depth": "length",
        "width": "length",
        "web": "length",
        "flange": "length",
        "root_radius": "length",
        "source": "text",
    },
    "grade": {
        "name": "text",
        "kind": "text",
        "modulus": "stress",
        "unit_weight": "unit weight",
        **{
            name: "number" if name.startswith("eps_") or name in ("n", "k") else "stress"
            for name in RawValues.model_fields
            if name not in ("bars", "modulus", "unit_weight")
        },
        "source": "text",
    },
    "bar": {"name": "text", "diameter": "length", "area": "area", "source": "text"},
    "occupancy": {
        "name": "text",
        "says": "text",
        "uniform": "pressure",
        "point": "force",
        "category": "text",
        **dict.fromkeys(("psi0", "psi1", "psi2"), "number"),
        "reduced": "text",
        "source": "text",
    },
}
# The column that says what a row is about.
SAYS = {"beam load": "beam", "rolled section": "designation"} | dict.fromkeys(
    ("grade", "bar", "occupancy"), "name"
)

Row = tuple[int, list[Any]]  # line (or row of the sheet), cells

_HEAD = re.compile(r"\s*(?P<key>[^\s\[\]]+)\s*(?:\[(?P<unit>[^\]]*)\])?\s*")
_BARE = re.compile(r"\s*[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?\s*")
_ITEM = re.compile(r"\((?P<pair>[^()]*)\)|(?P<word>[^\s,;()]+)|(?P<gap>[\s,;]+)|(?P<stray>.)")


def inside(folder: Path, name: str) -> bool:
    """Whether a name leads to a place in the job's folder or below it, and nowhere else."""
    pure = PurePosixPath(name)
    outside = pure.is_absolute() or ".." in pure.parts or "\\" in name or ":" in name or "\0" in name
    return not outside and (folder / name).resolve().is_relative_to(folder.resolve())


def table_path(folder: Path, name: str) -> Path:
    """Where a table stands: beside the job file or in a folder below it, nowhere else.

    Raises
    ------
    CalcpackError
        The name leads out of the job's folder, or is no CSV or XLSX.
    """
    path = folder / name
    pure = PurePosixPath(name)
    if not inside(folder, name):
        raise CalcpackError(
            f"the table '{name}' is outside the job's folder", remedy="put it beside the job file"
        )
    if pure.suffix.lower() not in (".csv", ".xlsx"):
        raise CalcpackError(f"'{name}' is no table", remedy="name a .csv or .xlsx file")
    return path


def read_table(file: FileBytes, kind: str, problems: Problems) -> list[Entry]:
    """The rows of a table as entries, with the keys of the job file.

    Parameters
    ----------
    file : FileBytes
    kind : str
        What a row is, one of ``COLUMNS``.
    problems : Problems
        Faults of the header and of single rows go here.

    Raises
    ------
    CalcpackError
        The file is no table at all.
    """
    rows = _sheet_rows(file) if file.name.lower().endswith(".xlsx") else _csv_rows(file)
    line, titles = next(rows, (1, []))
    if not any(_filled(title) for title in titles):
        raise CalcpackError(
            "the table is empty", remedy="its first row names the keys", file=file.name, line=line
        )
    if len(titles) > MOST_COLUMNS:
        raise CalcpackError(f"there are more than {MOST_COLUMNS} columns", file=file.name, line=line)
    columns = _columns(titles, kind, Entry(None, {}, file.name, line), problems)
    entries: list[Entry] = []
    for line, cells in rows:
        if not any(_filled(cell) for cell in cells):
            continue
        if len(entries) == MOST_ROWS:
            raise CalcpackError(f"there are more than {MOST_ROWS} rows", file=file.name, line=line)
        if any(_filled(cell) for cell in cells[len(titles) :]):
            message = f"the row has {len(cells)} cells, the header {len(titles)}"
            remedy = 'put a list in one cell: A1 B1 C1, or in quotes "A1, B1, C1"'
            problems.add(Problem(message, remedy, file.name, line))
            continue
        data: dict[str, Any] = {}
        for column, cell in zip(columns, cells, strict=False):
            if column and _filled(cell):
                _put(data, column.key, _value(cell, column))
        entries.append(Entry(_spoken(kind, data), data, file.name, line))
    return entries


def _spoken(kind: str, data: dict[str, Any]) -> str | None:
    """What a row is about: "beam B1"."""
    mark = data.get(SAYS.get(kind, "mark"))
    return f"{kind.removesuffix(' load')} {mark}" if mark else None


class Column(NamedTuple):
    """A column: its key, what its cells hold, the unit in its header."""

    key: str
    holds: str
    unit: str


def _columns(titles: list[Any], kind: str, header: Entry, problems: Problems) -> list[Column | None]:
    """What each column holds; None for one that is empty or wrong."""
    known = COLUMNS[kind]
    columns: list[Column | None] = []
    for title in titles:
        columns.append(None)
        if not _filled(title):
            continue
        text = str(title).strip()
        match = _HEAD.fullmatch(text) if len(text) < 200 else None
        key, unit = (match["key"], match["unit"] or "") if match else (text[:40], "")
        free = kind == "beam" and key.startswith("design.") and all(key.split("."))
        holds = known.get(key, "anything")
        if key not in known and not free:
            names = [*known, "design.cover"] if key.startswith("design") and kind == "beam" else known
            problems.add(header.problem("there is no such key", nearest(key, names), key))
        elif clash := [each.key for each in columns if each and _overlap(each.key, key)]:
            problems.add(
                header.problem(f"the column '{clash[0]}' has this key already", "leave one out", key)
            )
        elif not unit or _unit_fits(unit, holds, key, header, problems):
            columns[-1] = Column(key, holds, unit)
    return columns


def _overlap(one: str, other: str) -> bool:
    """Whether two keys are the same, or one holds the other."""
    return one == other or one.startswith(f"{other}.") or other.startswith(f"{one}.")


def _unit_fits(unit: str, holds: str, key: str, header: Entry, problems: Problems) -> bool:
    """Whether a header's unit fits its key; says so if not."""
    try:
        found = dimension(unit)
    except CalcpackError as error:
        problems.add(header.placed(error, key))
        return False
    if holds in ("text", "number"):
        problems.add(
            header.problem(f"this key has no unit, the header says '{unit}'", "leave the unit out", key)
        )
        return False
    expected = KINDS.get("length" if holds in ("points", "point") else holds)
    if expected is None or found == (
        expected.force,
        expected.length,
    ):  # of a design key its template knows it
        return True
    problems.add(
        header.problem(f"'{unit}' is the unit of {kind_of(*found)}, not of {expected.name}", "", key)
    )
    return False


def _filled(cell: Any) -> bool:
    return cell is not None and not (isinstance(cell, str) and not cell.strip())


def _value(cell: Any, column: Column) -> Any:
    """A cell as the job file would hold it."""
    cell = cell.strip() if isinstance(cell, str) else cell
    number = isinstance(cell, int | float) and not isinstance(cell, bool)
    if column.holds in ("points", "point", "words"):
        items = _items(str(cell), column.unit)
        if column.holds == "point":
            return items[0] if len(items) == 1 else str(cell)
        return items
    if column.holds == "text" and number:  # a mark 7 in a workbook is the text "7"
        return f"{cell:g}" if float(cell).is_integer() else str(cell)
    if column.unit and (number or (isinstance(cell, str) and _BARE.fullmatch(cell))):
        return f"{cell} {column.unit}"
    return _plain(cell) if column.holds in ("anything", "number") and isinstance(cell, str) else cell


def _plain(text: str) -> Any:
    """A design cell of a CSV: true, false, a number, else the text."""
    if text.lower() in ("true", "false"):
        return text.lower() == "true"
    if not _BARE.fullmatch(text):
        return text
    return int(text) if re.fullmatch(r"[+-]?[0-9]{1,15}", text) else float(text)


def _items(text: str, unit: str) -> list[Any]:
    """A list in a cell: words and pairs in brackets, between them spaces, commas or semicolons.

    Examples
    --------
    >>> _items("A1, (3.2 m, 1.0 m) C1", "")
    ['A1', ['3.2 m', '1.0 m'], 'C1']
    """
    items: list[Any] = []
    for match in _ITEM.finditer(text):
        if match["pair"] is not None:
            parts = [part.strip() for part in re.split("[,;]", match["pair"])]
            items.append([f"{part} {unit}" if unit and _BARE.fullmatch(part) else part for part in parts])
        elif match["word"] or match["stray"]:
            items.append(match["word"] or match["stray"])
    return items


def _put(data: dict[str, Any], key: str, value: Any) -> None:
    """Set a dotted key."""
    *outer, last = key.split(".")
    for part in outer:
        data = data.setdefault(part, {})
    data[last] = value


def _csv_rows(file: FileBytes) -> Iterator[Row]:
    text = file.text()
    first = text.partition("\n")[0]
    delimiter = ";" if first.count(";") > first.count(",") else ","
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter, strict=True)
    line = 1
    try:
        for cells in reader:
            yield line, cells
            line = reader.line_num + 1
    except csv.Error as error:
        raise CalcpackError(f"this is not CSV: {error}", file=file.name, line=line) from None


def _sheet_rows(file: FileBytes) -> Iterator[Row]:
    """The rows of a workbook's one sheet, formulas as their last values."""
    values, formulas = _sheet(file, True), _sheet(file, False)
    for line, (cells, sources) in enumerate(zip(values, formulas, strict=True), 1):
        for cell, source in zip(cells, sources, strict=False):
            if cell is None and source is not None:
                message = "a formula has no stored value"
                raise CalcpackError(message, remedy="open and save the workbook", file=file.name, line=line)
            if (
                isinstance(cell, str)
                and isinstance(source, str)
                and source.startswith("=")
                and cell.startswith("#")
            ):
                raise CalcpackError(f"a formula gives {cell}", file=file.name, line=line)
        yield line, list(cells)


def _sheet(file: FileBytes, stored: bool) -> list[tuple[Any, ...]]:
    """All cells of the one sheet, formulas as stored values or as written."""
    import openpyxl

    content = io.BytesIO(file.content)
    try:
        if sum(part.file_size for part in zipfile.ZipFile(content).infolist()) > LARGEST_UNPACKED:
            raise CalcpackError("the workbook is too large", file=file.name)
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # about styles and extensions, not about cells
            book = openpyxl.load_workbook(content, read_only=True, data_only=stored)
            sheets = book.worksheets
            if len(sheets) != 1:
                message = f"the workbook has {len(sheets)} sheets, a table is one"
                raise CalcpackError(message, remedy="keep only the sheet with the table", file=file.name)
            sheets[0].reset_dimensions()  # what the file says of its own size may be wrong
            return [tuple(row) for row in sheets[0].iter_rows(values_only=True)]
    except CalcpackError:
        raise
    except Exception:  # whatever the unpacking of a damaged workbook may raise
        raise CalcpackError("this is not an XLSX workbook", remedy="save it anew", file=file.name) from None


def load(folder: Path, name: str) -> FileBytes:
    """The bytes of a table named in the job file."""
    return read_bytes(table_path(folder, name), name)
