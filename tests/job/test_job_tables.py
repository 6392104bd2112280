"""Tables beside the job file: the same job as in TOML, and what is wrong with tables."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import openpyxl
import pytest
from jobs import SOUND, changed, refused, write

from calcpack.job import read_job

HEAD = SOUND[: SOUND.index("[[panel]]")]
TABLES = 'panels = "panels.csv"\nbeams = "beams.csv"\ncolumns = "columns.csv"\nwalls = "walls.csv"\n'
TABLES += 'beam_loads = "loads.csv"\n'
IN_TABLES = HEAD.replace("format = 1\n", "format = 1\n" + TABLES)
PANELS = "mark,corners,thickness [mm],dead [kPa],live\nP1,A1 B2,160,1.5,3.0 kPa\n"
BEAMS = 'mark,line,section,material,design.cover\n\nB1,"A1, B1, C1",rb1,c30,40 mm\n'
LOADS = "beam,case,line [kN/m],point,at [m]\nB1,dead,7.5,,\nB1,live,,12 kN,2.1\n"
COLUMNS = "mark,at\nC1,A1\n"
WALLS = "mark;line\nW1;A1 A2\n"
WHOLE = {"panels": PANELS, "beams": BEAMS, "loads": LOADS, "columns": COLUMNS, "walls": WALLS}


def without_places(value: Any) -> Any:
    """The job's data without what says where it stood."""
    if isinstance(value, dict):
        dropped = ("place", "lines", "digest", "files")
        return {key: without_places(inner) for key, inner in value.items() if key not in dropped}
    return [without_places(inner) for inner in value] if isinstance(value, list | tuple) else value


def test_tables_equal_toml(tmp_path: Path) -> None:
    plain = read_job(write(tmp_path))
    tables = read_job(write(tmp_path, IN_TABLES, **WHOLE))
    assert without_places(tables.model_dump()) == without_places(plain.model_dump())
    assert list(tables.files) == [
        "job.toml",
        "panels.csv",
        "beams.csv",
        "columns.csv",
        "walls.csv",
        "loads.csv",
    ]


def test_places_in_tables(tmp_path: Path) -> None:
    job = read_job(write(tmp_path, IN_TABLES, **WHOLE))
    assert (job.beams[0].place.file, job.beams[0].place.line) == ("beams.csv", 3)
    assert (job.beams[0].loads[1].place.file, job.beams[0].loads[1].place.line) == ("loads.csv", 3)
    assert job.lines["beam B1 design.cover"] == 3


def test_digest_covers_the_tables(tmp_path: Path) -> None:
    first = read_job(write(tmp_path, IN_TABLES, **WHOLE))
    other = read_job(write(tmp_path, IN_TABLES, **WHOLE | {"panels": PANELS + "\n"}))
    assert first.digest != other.digest
    assert first.files["job.toml"] == other.files["job.toml"]


def workbook(path: Path, *rows: list[Any], sheets: int = 1) -> None:
    book = openpyxl.Workbook()
    for _ in range(sheets - 1):
        book.create_sheet()
    for row in rows:
        book.worksheets[0].append(row)
    book.save(path)


def test_workbook_equals_csv(tmp_path: Path) -> None:
    workbook(
        tmp_path / "panels.xlsx",
        ["mark", "corners", "thickness [mm]", "dead [kPa]", "live"],
        [],
        ["P1", "A1 B2", 160, 1.5, "3.0 kPa"],
    )
    text = IN_TABLES.replace("panels.csv", "panels.xlsx")
    job = read_job(write(tmp_path, text, **WHOLE))
    plain = read_job(write(tmp_path))
    assert without_places(job.model_dump()) == without_places(plain.model_dump())
    assert (job.panels[0].place.file, job.panels[0].place.line) == ("panels.xlsx", 3)


def test_numbers_as_marks_in_a_workbook(tmp_path: Path) -> None:
    workbook(tmp_path / "columns.xlsx", ["mark", "at"], [1, "A1"], [2.0, "(1.5 m, 14'-6\")"])
    job = read_job(write(tmp_path, IN_TABLES.replace("columns.csv", "columns.xlsx"), **WHOLE))
    assert [(column.mark, column.at) for column in job.columns] == [("1", (0.0, 0.0)), ("2", (1.5, 4.4196))]


def test_design_cells(tmp_path: Path) -> None:
    beams = "mark,line [m],free,design.bottom.count,design.bottom.size [mm],"
    beams += "design.cot_theta,design.top.size,design.camber\n"
    beams += 'B1,"(0, 0) (6, 0); (11, 0)",end,4,20,2.5,#8,true\n'
    job = read_job(write(tmp_path, IN_TABLES, **WHOLE | {"beams": beams}))
    assert job.beams[0].design == {
        "bottom": {"count": 4, "size": "20 mm"},
        "cot_theta": 2.5,
        "top": {"size": "#8"},
        "camber": True,
    }
    assert job.beams[0].points == ((0.0, 0.0), (6.0, 0.0), (11.0, 0.0))
    assert job.beams[0].free_end


def test_loads_of_a_table_add_to_those_of_the_file(tmp_path: Path) -> None:
    text = SOUND.replace("format = 1\n", 'format = 1\nbeam_loads = "loads.csv"\n')
    loads = read_job(write(tmp_path, text, loads=LOADS)).beams[0].loads
    assert [load.place.file for load in loads] == ["job.toml", "job.toml", "loads.csv", "loads.csv"]


FAULTY = {
    "unknown column": (
        "panels",
        "mark,corner\nP1,A1 B2\n",
        "panels.csv:1: corner: there is no such key; did you mean 'corners'?\n"
        "panels.csv:2: panel P1: corners: this key is missing; write for example corners = "
        '["A1", "B2"]',
    ),
    "column twice": (
        "columns",
        "mark,at,at\nC1,A1,A1\n",
        "columns.csv:1: at: the column 'at' has this key already; leave one out",
    ),
    "key within a key": (
        "beams",
        "mark,line,design.top,design.top.count\nB1,A1 B1,8,4\n",
        "beams.csv:1: design.top.count: the column 'design.top' has this key already; leave one out",
    ),
    "unit of another kind": (
        "panels",
        "mark,corners,live [kN/m]\nP1,A1 B2,3\n",
        "panels.csv:1: live: 'kN/m' is the unit of a line load, not of a pressure",
    ),
    "unknown unit in the header": (
        "panels",
        "mark,corners,live [kpa]\nP1,A1 B2,3\n",
        "panels.csv:1: live: there is no unit 'kpa'; did you mean 'kPa'?",
    ),
    "unit on a text": (
        "columns",
        "mark [m],at\nC1,A1\n",
        "columns.csv:1: mark: this key has no unit, the header says 'm'; leave the unit out\n"
        'columns.csv:2: mark: this key is missing; write for example mark = "B1"',
    ),
    "bare number": (
        "panels",
        "mark,corners,live\nP1,A1 B2,3\n",
        'panels.csv:2: panel P1: live: a pressure needs its unit, for example "2.4 kPa"',
    ),
    "list not quoted": (
        "beams",
        "mark,line\nB1,A1,B1,C1\n",
        "beams.csv:2: the row has 4 cells, the header 2; put a list in one cell: A1 B1 C1, or in "
        'quotes "A1, B1, C1"',
    ),
    "two points for a column": (
        "columns",
        "mark,at\nC1,A1 B1\n",
        "columns.csv:2: column C1: at: there is no grid point 'A1 B1'; did you mean 'A1'?",
    ),
    "unknown point in a cell": (
        "walls",
        "mark,line\nW1,A1 A3\n",
        "walls.csv:2: wall W1: line: there is no grid point 'A3'; it can be 'A1' or 'A2'",
    ),
    "unknown beam": (
        "loads",
        "beam,case,line\nB7,dead,7.5 kN/m\n",
        "loads.csv:2: beam B7: beam: there is no beam 'B7'; it can only be 'B1'",
    ),
    "no beam": (
        "loads",
        "case,line\ndead,7.5 kN/m\n",
        "loads.csv:2: beam: this key is missing; name the beam the load is on",
    ),
    "load beyond": (
        "loads",
        "beam,case,point,at\nB1,dead,7 kN,12 m\n",
        "loads.csv:2: beam B1: at: '12 m' is beyond the beam's end; the beam is 11 m long",
    ),
    "mark twice": (
        "columns",
        "mark,at\nC1,A1\nc1,A2\n",
        "columns.csv:3: column c1: mark: the mark is taken by column C1 (columns.csv:2); give "
        "each panel, beam, column and wall its own",
    ),
    "control character": (
        "panels",
        "mark,corners,transfer\nP1,A1 B2,auto\x07\n",
        "panels.csv:2: panel P1: transfer: the text has a line break or a control character; "
        "write it on one line\n"
        "panels.csv:2: panel P1: transfer: 'auto\N{REPLACEMENT CHARACTER}' is none of the "
        "choices; did you mean 'auto'?",
    ),
    "empty": ("columns", "", "columns.csv:1: the table is empty; its first row names the keys"),
    "unclosed quote": (
        "columns",
        'mark,at\nC1,"A1\n',
        "columns.csv:2: this is not CSV: unexpected end of data",
    ),
}


@pytest.mark.parametrize("name", FAULTY)
def test_faulty_table(name: str, tmp_path: Path) -> None:
    table, text, message = FAULTY[name]
    assert refused(write(tmp_path, IN_TABLES, **WHOLE | {table: text})) == message


FAULTY_NAMES = {
    "../panels.csv": "the table '../panels.csv' is outside the job's folder; put it beside the job file",
    "/etc/panels.csv": "the table '/etc/panels.csv' is outside the job's folder; put it beside the job file",
    "C:/panels.csv": "the table 'C:/panels.csv' is outside the job's folder; put it beside the job file",
    "a/../../panels.csv": (
        "the table 'a/../../panels.csv' is outside the job's folder; put it beside the job file"
    ),
    "panels.ods": "'panels.ods' is no table; name a .csv or .xlsx file",
    "nothing.csv": "'nothing.csv': there is no such file",
}


@pytest.mark.parametrize("name", FAULTY_NAMES)
def test_faulty_name(name: str, tmp_path: Path) -> None:
    text = IN_TABLES.replace("panels.csv", name)
    assert refused(write(tmp_path, text, **WHOLE)) == f"job.toml:2: panels: {FAULTY_NAMES[name]}"


def test_link_out_of_the_folder(tmp_path: Path) -> None:
    folder = tmp_path / "job"
    folder.mkdir()
    tmp_path.joinpath("panels.csv").write_text(PANELS)
    folder.joinpath("panels.csv").symlink_to(tmp_path / "panels.csv")
    rest = {name: table for name, table in WHOLE.items() if name != "panels"}
    assert refused(write(folder, IN_TABLES, **rest)) == (
        "job.toml:2: panels: the table 'panels.csv' is outside the job's folder; put it beside the job file"
    )


def test_both_array_and_table(tmp_path: Path) -> None:
    text = SOUND.replace("format = 1\n", 'format = 1\nwalls = "walls.csv"\n')
    assert refused(write(tmp_path, text, walls=WALLS)) == (
        "job.toml:2: walls: there are both [[wall]] and walls; list the walls here or in the table"
    )


def test_table_that_is_not_utf8(tmp_path: Path) -> None:
    path = write(tmp_path, IN_TABLES, **WHOLE)
    tmp_path.joinpath("columns.csv").write_bytes("mark,at\nC1,\xdf1\n".encode("latin-1"))
    assert refused(path) == "columns.csv:2: the file is not UTF-8 text; save it as UTF-8"


def test_byte_order_mark_and_line_ends(tmp_path: Path) -> None:
    path = write(tmp_path, IN_TABLES, **WHOLE)
    tmp_path.joinpath("columns.csv").write_bytes(b"\xef\xbb\xbfmark,at\r\nC1,A1\r\n")
    assert read_job(path).columns[0].place.line == 2


def test_faulty_workbooks(tmp_path: Path) -> None:
    path = write(tmp_path, IN_TABLES.replace("columns.csv", "columns.xlsx"), **WHOLE)
    workbook(tmp_path / "columns.xlsx", ["mark", "at"], ["C1", "A1"], sheets=2)
    assert refused(path) == (
        "job.toml:4: columns: 'columns.xlsx': the workbook has 2 sheets, a table is one; "
        "keep only the sheet with the table"
    )
    workbook(tmp_path / "columns.xlsx", ["mark", "at"], ["C1", "=A1"])
    assert refused(path) == "columns.xlsx:2: a formula has no stored value; open and save the workbook"
    tmp_path.joinpath("columns.xlsx").write_bytes(b"PK\x03\x04 nothing more")
    assert refused(path) == "job.toml:4: columns: 'columns.xlsx': this is not an XLSX workbook; save it anew"


def test_a_list_of_tables_under_a_plural(tmp_path: Path) -> None:
    assert refused(write(tmp_path, changed(("[[wall]]", "[[walls]]")))).startswith("job.toml:42: walls:")
