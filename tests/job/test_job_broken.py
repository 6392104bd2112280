"""Broken job files and what is said about them, whole messages."""

from __future__ import annotations

from pathlib import Path

import pytest
from jobs import changed, refused, write

# name: (the sound job's text, what stands there instead), the message
BROKEN: dict[str, tuple[tuple[str, str], str]] = {
    "no format": (
        ("format = 1\n", "\n"),
        "job.toml: format: the file does not say its format; write format = 1 as its first line",
    ),
    "format 2": (
        ("format = 1\n", "format = 2\n"),
        "job.toml:1: format: format 2 is not known; this program reads format = 1",
    ),
    "format true": (
        ("format = 1\n", "format = true\n"),
        "job.toml:1: format: format true is not known; this program reads format = 1",
    ),
    "not toml": (
        ("[basis]", "[basis"),
        "job.toml:6: this is not TOML: expected ']' at the end of a table declaration, at column 7",
    ),
    "key twice": (
        ('number = "2417"', 'number = "2417"\nnumber = "2418"'),
        "job.toml:4: this is not TOML: a key is given a second time, at column 16",
    ),
    "table twice": (
        ("[basis]", "[job]\n[basis]"),
        "job.toml:6: this is not TOML: the table [job] is given a second time, at column 5",
    ),
    "unknown table": (
        ("[basis]", "[baiss]"),
        "job.toml:6: baiss: there is no such key; did you mean 'basis'?",
    ),
    "unknown key": (
        ('live = "3.0 kPa"', 'livee = "3.0 kPa"'),
        "job.toml:24: panel P1: livee: there is no such key; did you mean 'live'?",
    ),
    "unknown key in a nested table": (
        ('number = "2417"', 'number = "2417"\nprepared = { nmae = "N" }'),
        "job.toml:4: job.prepared.nmae: there is no such key; did you mean 'name'?",
    ),
    "plural array": (
        ("[[wall]]", "[[walls]]"),
        "job.toml:42: walls: this key names a table file; write for example walls = "
        '"walls.csv", or write each wall as [[wall]]',
    ),
    "single table": (
        ("[[wall]]", "[wall]"),
        "job.toml:42: wall: this is no list of tables; write it as [[wall]], one by one",
    ),
    "no number": (
        ('number = "2417"\n', ""),
        'job.toml:2: job.number: this key is missing; write for example number = "2417"',
    ),
    "empty title": (
        ('title = "Boat workshop, loft floor"', 'title = " "'),
        'job.toml:4: job.title: this text is empty; write for example title = "Loft floor"',
    ),
    "number not text": (
        ('number = "2417"', "number = 2417"),
        "job.toml:3: job.number: 2417 does not fit here; give a text in quotes",
    ),
    "date as text": (
        ("date = 2026-12-01", 'date = "2026-12-01"'),
        "job.toml:5: job.date: '2026-12-01' does not fit here; give a date without quotes, "
        "for example 2026-12-01",
    ),
    "date with time": (
        ("date = 2026-12-01", "date = 2026-12-01T10:00:00"),
        "job.toml:5: job.date: 2026-12-01 10:00:00 does not fit here; give a date without "
        "quotes, for example 2026-12-01",
    ),
    "line break in a text": (
        ('title = "Boat workshop, loft floor"', 'title = "Boat\\nworkshop"'),
        "job.toml:4: job.title: the text has a line break or a control character; write it on one line",
    ),
    "wrong choice": (
        ('equivalent = "moment"', 'equivalent = "momnet"'),
        "job.toml:8: basis.equivalent: 'momnet' is none of the choices; did you mean 'moment'?",
    ),
    "choice of another type": (
        ('equivalent = "moment"', "dividing_lines = 45"),
        "job.toml:8: basis.dividing_lines: 45 is none of the choices; it can be '45' or '60 "
        "at continuous edges'",
    ),
    "number with quotes": (
        ('equivalent = "moment"', 'one_way_ratio = "2"'),
        "job.toml:8: basis.one_way_ratio: '2' does not fit here; give a plain number, without quotes",
    ),
    "number out of bounds": (
        ('equivalent = "moment"', "one_way_ratio = 0.5"),
        "job.toml:8: basis.one_way_ratio: the ratio is long side to short side; give 1 or more",
    ),
    "no number at all": (
        ('equivalent = "moment"', "one_way_ratio = nan"),
        "job.toml:8: basis.one_way_ratio: nan is no number; give a finite number",
    ),
    "unknown occupancy": (
        ('equivalent = "moment"', 'occupancy = "K"'),
        "job.toml:8: basis.occupancy: there is no category 'K'; it can be 'A', 'B', 'C', "
        "'D', 'E', 'F', 'G' or 'H'",
    ),
    "bare number": (
        ('dead = "1.5 kPa"', "dead = 1.5"),
        'job.toml:23: panel P1: dead: a pressure needs its unit, for example "2.4 kPa"',
    ),
    "bare number in quotes": (
        ('thickness = "160 mm"', 'thickness = "160"'),
        'job.toml:22: panel P1: thickness: a length needs its unit, for example "4.5 m"',
    ),
    "wrong dimension": (
        ('dead = "1.5 kPa"', 'dead = "1.5 kN/m"'),
        "job.toml:23: panel P1: dead: '1.5 kN/m' is a line load, not a pressure; give it like \"2.4 kPa\"",
    ),
    "unknown unit": (
        ('dead = "1.5 kPa"', 'dead = "1.5 KPA"'),
        "job.toml:23: panel P1: dead: there is no unit 'KPA'; did you mean 'kPa'?",
    ),
    "mass": (
        ('dead = "1.5 kPa"', 'dead = "150 kg/m^2"'),
        "job.toml:23: panel P1: dead: 'kg' is a mass; give the weight, for example in kN or lb",
    ),
    "decimal comma": (
        ('dead = "1.5 kPa"', 'dead = "1,5 kPa"'),
        "job.toml:23: panel P1: dead: '1,5 kPa' is no quantity; the decimal sign is a point, "
        'for example "2.4 kPa"',
    ),
    "negative load": (
        ('live = "3.0 kPa"', 'live = "-3.0 kPa"'),
        "job.toml:24: panel P1: live: '-3.0 kPa' is negative; give zero or more",
    ),
    "infinite load": (
        ('live = "3.0 kPa"', 'live = "1e999 kPa"'),
        "job.toml:24: panel P1: live: '1e999 kPa' is no finite number; give a pressure, for "
        'example "2.4 kPa"',
    ),
    "monstrous load": (
        ('live = "3.0 kPa"', 'live = "1e99 kPa"'),
        "job.toml:24: panel P1: live: '1e99 kPa' is beyond anything built",
    ),
    "no thickness": (
        ('thickness = "160 mm"', 'thickness = "0 mm"'),
        "job.toml:22: panel P1: thickness: '0 mm' is not more than zero; give a length greater than zero",
    ),
    "grid in numbers": (
        ('B = "6 m"', "B = 6"),
        'job.toml:10: grid.x.B: a length needs its unit, for example "4.5 m"',
    ),
    "grid label with a space": (
        ('B = "6 m"', '"B 2" = "6 m"'),
        "job.toml:10: grid.x.B 2: 'B 2' cannot be a grid label; up to 12 signs, no space , ; ( ) [ ]",
    ),
    "ambiguous grid": (
        (
            'x = { A = "0 m", B = "6 m", C = "11 m" }\ny = { 1 = "0 m", 2',
            'x = { A = "0 m", A1 = "6 m" }\ny = { 1 = "0 m", 11',
        ),
        "job.toml:9: grid: 'A11' would be a grid point twice: A with 11, A1 with 1; give the "
        "grid lines other labels",
    ),
    "unknown grid point": (
        ('at = "A1"', 'at = "A3"'),
        "job.toml:41: column C1: at: there is no grid point 'A3'; it can be 'A1' or 'A2'",
    ),
    "grid point turned round": (
        ('at = "A1"', 'at = "1a"'),
        "job.toml:41: column C1: at: there is no grid point '1a'; did you mean 'A1'?",
    ),
    "unknown grid point in a list": (
        ('line = ["A1", "B1", "C1"]', 'line = [\n  "A1",\n  "D1"]'),
        "job.toml:29: beam B1: line: there is no grid point 'D1'; it can be 'A1', 'B1' or 'C1'",
    ),
    "no grid": (
        ('[grid]\nx = { A = "0 m", B = "6 m", C = "11 m" }\ny = { 1 = "0 m", 2 = "4.5 m" }\n', ""),
        "job.toml:18: panel P1: corners: there is no grid point 'A1'; give [grid] with x and "
        "y first\n"
        "job.toml:18: panel P1: corners: there is no grid point 'B2'; give [grid] with x and "
        "y first\n"
        "job.toml:24: beam B1: line: there is no grid point 'A1'; give [grid] with x and y "
        "first\n"
        "job.toml:24: beam B1: line: there is no grid point 'B1'; give [grid] with x and y "
        "first\n"
        "job.toml:24: beam B1: line: there is no grid point 'C1'; give [grid] with x and y "
        "first\n"
        "job.toml:38: column C1: at: there is no grid point 'A1'; give [grid] with x and y "
        "first\n"
        "job.toml:41: wall W1: line: there is no grid point 'A1'; give [grid] with x and y "
        "first\n"
        "job.toml:41: wall W1: line: there is no grid point 'A2'; give [grid] with x and y "
        "first",
    ),
    "half a pair": (
        ('at = "A1"', 'at = ["3 m"]'),
        "job.toml:41: column C1: at: ['3 m'] is no point; a point is a grid point \"A1\" or a "
        'pair ["3.2 m", "1.0 m"]',
    ),
    "pair of numbers": (
        ('at = "A1"', "at = [3, 4]"),
        'job.toml:41: column C1: at: a length needs its unit, for example "4.5 m"',
    ),
    "unknown grade": (
        ('grade = "C30/37"', 'grade = "C30/38"'),
        "job.toml:13: material c30: grade: there is no grade 'C30/38'; did you mean 'C30/37'?",
    ),
    "unknown bars": (
        ('bars = "B500B"', 'bars = "B500D"'),
        "job.toml:14: material c30: bars: there is no grade 'B500D'; did you mean 'B500C'?",
    ),
    "bars as grade": (
        ('grade = "C30/37"', 'grade = "B500B"'),
        "job.toml:13: material c30: grade: there is no grade 'B500B'; it can be '2500 psi', "
        "'3000 psi', '3500 psi', '4000 psi', '4500 psi', '5000 psi', '5500 psi', '6000 psi', "
        "'7000 psi', '8000 psi', '9000 psi', '10000 psi' and so on",
    ),
    "no grade, no values": (
        ('grade = "C30/37"\nbars = "B500B"', 'kind = "concrete"'),
        "job.toml:12: material c30: modulus: a material without a grade needs this key; add "
        "it, or name a grade\n"
        "job.toml:12: material c30: unit_weight: a material without a grade needs this key; "
        "add it, or name a grade",
    ),
    "value of another kind": (
        ('bars = "B500B"', 'fu = "360 MPa"'),
        "job.toml:14: material c30: fu: a concrete has no such value; it can be 'fck', "
        "'fcm', 'fctm', 'fctk_005', 'fctk_095', 'eps_c1', 'eps_cu1', 'eps_c2', 'eps_cu2', "
        "'n', 'eps_c3', 'eps_cu3' and so on",
    ),
    "kind against grade": (
        ('bars = "B500B"', 'kind = "steel"'),
        "job.toml:14: material c30: kind: grade 'C30/37' is a concrete; leave out the kind",
    ),
    "unknown material": (
        ('material = "c30"', 'material = "c35"'),
        "job.toml:29: beam B1: material: there is no material 'c35'; did you mean 'c30'?",
    ),
    "unknown section": (
        ('section = "rb1"', 'section = "rb2"'),
        "job.toml:28: beam B1: section: there is no section 'rb2'; did you mean 'rb1'?",
    ),
    "unknown shape": (
        ('shape = "rectangle"', 'shape = "rectangel"'),
        "job.toml:16: section rb1: shape: 'rectangel' is none of the choices; did you mean 'rectangle'?",
    ),
    "key of another shape": (
        ('depth = "550 mm"', 'depth = "550 mm"\ndesignation = "IPE 300"'),
        "job.toml:19: section rb1: designation: a rectangle section has no such key; it can "
        "be 'width' or 'depth'",
    ),
    "missing depth": (
        ('depth = "550 mm"\n', ""),
        "job.toml:15: section rb1: depth: a rectangle section needs this key",
    ),
    "unknown designation": (
        (
            'shape = "rectangle"\nwidth = "300 mm"\ndepth = "550 mm"',
            'shape = "rolled"\ndesignation = "W18x51"',
        ),
        "job.toml:17: section rb1: designation: there is no section 'W18x51'; did you mean 'W18X55'?",
    ),
    "deep flange": (
        ('shape = "rectangle"\n', 'shape = "tee"\nflange_width = "effective"\nflange_depth = "600 mm"\n'),
        "job.toml:18: section rb1: flange_depth: the flange is as deep as the section; give less than depth",
    ),
    "mark missing": (
        ('mark = "W1"\n', ""),
        'job.toml:42: wall no. 1: mark: this key is missing; write for example mark = "B1"',
    ),
    "mark as a path": (
        ('mark = "W1"', 'mark = "../W1"'),
        "job.toml:43: wall ../W1: mark: '../W1' cannot be a mark; a mark names a file: "
        "letters A to Z, digits, and inside it spaces . _ -, at most 40 characters",
    ),
    "mark with a dot at the end": (
        ('mark = "W1"', 'mark = "W1."'),
        "job.toml:43: wall W1.: mark: 'W1.' cannot be a mark; a mark names a file: letters A "
        "to Z, digits, and inside it spaces . _ -, at most 40 characters",
    ),
    "mark a system keeps": (
        ('mark = "W1"', 'mark = "Con"'),
        "job.toml:43: wall Con: mark: 'Con' cannot be a mark; some systems or the pack "
        "itself keep this file name",
    ),
    "mark the pack keeps": (
        ('mark = "W1"', 'mark = "index"'),
        "job.toml:43: wall index: mark: 'index' cannot be a mark; some systems or the pack "
        "itself keep this file name",
    ),
    "mark twice": (
        ('mark = "W1"', 'mark = "b1"'),
        "job.toml:43: wall b1: mark: the mark is taken by beam B1 (job.toml:25); give each "
        "panel, beam, column and wall its own",
    ),
    "one corner": (
        ('corners = ["A1", "B2"]', 'corners = ["A1"]'),
        "job.toml:21: panel P1: corners: the outline has 1 point; give 2 opposite corners, or 3 to 200",
    ),
    "level corners": (
        ('corners = ["A1", "B2"]', 'corners = ["A1", "B1"]'),
        "job.toml:21: panel P1: corners: A1 and B1 span no rectangle; two corners stand "
        "opposite each other, neither level nor upright",
    ),
    "corners on a line": (
        ('corners = ["A1", "B2"]', 'corners = ["A1", "B1", "C1"]'),
        "job.toml:21: panel P1: corners: all corners stand on one line; give corners that enclose an area",
    ),
    "corner twice": (
        ('corners = ["A1", "B2"]', 'corners = ["A1", "B1", "B2", "A1"]'),
        "job.toml:21: panel P1: corners: A1 is named twice; give each corner once; the "
        "outline closes by itself",
    ),
    "crossing outline": (
        ('corners = ["A1", "B2"]', 'corners = ["A1", "B2", "B1", "A2"]'),
        "job.toml:21: panel P1: corners: the outline crosses itself; list the corners in turn",
    ),
    "inward outline": (
        ('corners = ["A1", "B2"]', 'corners = ["A1", "C1", ["2 m", "1 m"], "A2"]'),
        "job.toml:21: panel P1: corners: the outline turns inward at (2 m, 1 m); a panel is "
        "convex; divide it into several",
    ),
    "outline that runs back": (
        ('corners = ["A1", "B2"]', 'corners = ["A1", "C1", "B1", "B2"]'),
        "job.toml:21: panel P1: corners: the outline runs back on itself at C1; list the corners in turn",
    ),
    "beam of one point": (
        ('line = ["A1", "B1", "C1"]', 'line = ["A1"]'),
        "job.toml:27: beam B1: line: the line has 1 point; give 2 to 200: start, supports in order, end",
    ),
    "point twice": (
        ('line = ["A1", "B1", "C1"]', 'line = ["A1", "B1", "B1"]'),
        "job.toml:27: beam B1: line: B1 is named twice; give each point once",
    ),
    "bent beam": (
        ('line = ["A1", "B1", "C1"]', 'line = ["A1", "B2", "C1"]'),
        "job.toml:27: beam B1: line: B2 stands 4.500 m off the line from A1 to C1; a beam is "
        "straight; make it two, or move the point",
    ),
    "points out of order": (
        ('line = ["A1", "B1", "C1"]', 'line = ["A1", "C1", "B1"]'),
        "job.toml:27: beam B1: line: B1 comes before C1 on the line; list the points in "
        "order from start to end",
    ),
    "line as text": (
        ('line = ["A1", "B1", "C1"]', 'line = "A1 B1"'),
        'job.toml:27: beam B1: line: \'A1 B1\' does not fit here; give a list, for example ["A1", "B1"]',
    ),
    "unknown end": (
        ('section = "rb1"', 'fixed = ["strat"]'),
        "job.toml:28: beam B1: fixed: 'strat' is none of the choices; did you mean 'start'?",
    ),
    "fixed and free": (
        ('section = "rb1"', 'fixed = ["start"]\nfree = ["start"]'),
        "job.toml:29: beam B1: free: the start is both fixed and free; name it under one of them",
    ),
    "unknown case": (
        ('case = "live"', 'case = "lvie"'),
        "job.toml:36: beam B1: load.case: 'lvie' is none of the choices; did you mean 'live'?",
    ),
    "load without kind": (
        ('line = "7.5 kN/m"\n', ""),
        "job.toml:32: beam B1: load: a load has either line or point, this one has neither; "
        'write for example line = "7.5 kN/m"',
    ),
    "load of both kinds": (
        ('point = "12 kN"', 'point = "12 kN"\nline = "1 kN/m"'),
        "job.toml:35: beam B1: load: a load has either line or point, this one has both; "
        'write for example line = "7.5 kN/m"',
    ),
    "point load nowhere": (
        ('at = "2.1 m"\n', ""),
        'job.toml:35: beam B1: load.at: a point load needs its place; write for example at = "2.1 m"',
    ),
    "point load beyond": (
        ('at = "2.1 m"', 'at = "11.1 m"'),
        "job.toml:38: beam B1: load.at: '11.1 m' is beyond the beam's end; the beam is 11 m long",
    ),
    "point load before": (
        ('at = "2.1 m"', 'at = "-1 m"'),
        "job.toml:38: beam B1: load.at: '-1 m' is before the beam's start; the beam is 11 m long",
    ),
    "point load with a stretch": (
        ('at = "2.1 m"', 'at = "2.1 m"\nto = "3 m"'),
        "job.toml:39: beam B1: load.to: this key belongs to a line load; a point load has at",
    ),
    "line load with a place": (
        ('line = "7.5 kN/m"', 'line = "7.5 kN/m"\nat = "3 m"'),
        "job.toml:35: beam B1: load.at: this key belongs to a point load; a line load has from and to",
    ),
    "stretch turned round": (
        ('line = "7.5 kN/m"', 'line = "7.5 kN/m"\nfrom = "4 m"\nto = "3 m"'),
        "job.toml:36: beam B1: load.to: the load ends where it starts or before; give from less than to",
    ),
    "stretch beyond": (
        ('line = "7.5 kN/m"', 'line = "7.5 kN/m"\nfrom = "12 m"'),
        "job.toml:35: beam B1: load.from: '12 m' is beyond the beam's end; the beam is 11 m long",
    ),
    "loads in one table": (
        ('[[beam.load]]\ncase = "dead"\nline = "7.5 kN/m"\n[[beam.load]]', "[beam.load]"),
        "job.toml:32: beam B1: load: this is no list of loads; write it as [[beam.load]]",
    ),
    "wall of three points": (
        ('line = ["A1", "A2"]', 'line = ["A1", "B1", "C1"]'),
        "job.toml:44: wall W1: line: the wall has 3 points; give its two ends",
    ),
    "columns in one place": (
        ("[[wall]]", '[[column]]\nmark = "C2"\nat = ["0 m", "0 m"]\n[[wall]]'),
        "job.toml:44: column C2: at: column C1 stands here already; leave one out",
    ),
    "combination of nothing": (
        ("[[wall]]", '[[combination]]\nname = "ULS"\nlimit = "strength"\n[[wall]]'),
        "job.toml:42: combination ULS: no load is in this combination; give a factor, for "
        "example dead = 1.35",
    ),
    "combination twice": (
        (
            "[[wall]]",
            '[[combination]]\nname = "ULS"\nlimit = "strength"\ndead = 1.4\n'
            '[[combination]]\nname = "ULS"\nlimit = "service"\ndead = 1\n[[wall]]',
        ),
        "job.toml:47: combination ULS: name: the name is taken; give each combination its own",
    ),
    "negative factor": (
        ("[[wall]]", '[[combination]]\nname = "ULS"\nlimit = "strength"\ndead = -1.4\n[[wall]]'),
        "job.toml:45: combination ULS: dead: -1.4 is out of bounds; it can be 0 to 100",
    ),
    "nan in the design": (
        ('cover = "40 mm"', "cover = nan"),
        "job.toml:31: beam B1: design.cover: nan is no number; give a finite number",
    ),
}


@pytest.mark.parametrize("name", BROKEN)
def test_broken_job(name: str, tmp_path: Path) -> None:
    change, message = BROKEN[name]
    assert refused(write(tmp_path, changed(change))) == message
