"""A sound job, and the file itself: encodings, line ends, sizes, what is kept for later stages."""

from __future__ import annotations

import datetime
import hashlib
import subprocess
import sys
import tomllib
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from jobs import SOUND, changed, refused, write
from pydantic import ValidationError

from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Place
from calcpack.job.source import FileBytes, parse_toml


def test_sound_job(tmp_path: Path) -> None:
    job = read_job(write(tmp_path))
    assert (job.file, job.job.number, job.job.date) == ("job.toml", "2417", datetime.date(2026, 12, 1))
    assert job.grid_x == {"A": 0.0, "B": 6.0, "C": 11.0}
    (panel,) = job.panels
    assert panel.corners == ((0.0, 0.0), (6.0, 0.0), (6.0, 4.5), (0.0, 4.5))
    assert panel.corner_names == ("A1", "B1", "B2", "A2")
    assert (panel.thickness, panel.unit_weight, panel.dead, panel.live, panel.snow) == (
        0.16,
        25.0,
        1.5,
        3.0,
        0.0,
    )
    (beam,) = job.beams
    assert beam.points == ((0.0, 0.0), (6.0, 0.0), (11.0, 0.0))
    assert beam.point_names == ("A1", "B1", "C1")
    assert (beam.equivalent, beam.design_loads, beam.template) == ("moment", "actual", "beam_loads")
    assert beam.design == {"cover": "40 mm"}
    assert [(load.case, load.line, load.point, load.at) for load in beam.loads] == [
        ("dead", 7.5, None, None),
        ("live", None, 12.0, 2.1),
    ]
    assert beam.section is not None
    assert beam.section.area == pytest.approx(0.3 * 0.55)
    assert beam.section.inertia == pytest.approx(0.3 * 0.55**3 / 12)
    assert beam.material is not None
    assert (beam.material.modulus, beam.material.values["fck"]) == (33e6, 30e3)
    assert job.columns[0].at == (0.0, 0.0)
    assert job.walls[0].line == ((0.0, 0.0), (0.0, 4.5))


def test_lines_are_kept_for_later_errors(tmp_path: Path) -> None:
    job = read_job(write(tmp_path))
    lines = SOUND.splitlines()
    for key, text in {
        "job number": 'number = "2417"',
        "basis actions": 'actions = "EN 1990"',
        "panel P1": "[[panel]]",
        "panel P1 corners": 'corners = ["A1", "B2"]',
        "beam B1": "[[beam]]",
        "beam B1 line": 'line = ["A1", "B1", "C1"]',
        "beam B1 section": 'section = "rb1"',
        "beam B1 design.cover": 'cover = "40 mm"',
        "column C1 at": 'at = "A1"',
        "material c30 grade": 'grade = "C30/37"',
        "section rb1": "[sections.rb1]",
    }.items():
        assert lines[job.lines[key] - 1] == text, key
    assert job.beams[0].loads[1].place == Place(file="job.toml", line=lines.index("[[beam.load]]", 33) + 1)


def test_nothing_of_it_can_be_changed(tmp_path: Path) -> None:
    job = read_job(write(tmp_path))
    with pytest.raises(ValidationError, match="frozen"):
        job.beams[0].mark = "B2"  # type: ignore[misc]


def test_digest_is_that_of_the_bytes(tmp_path: Path) -> None:
    job = read_job(write(tmp_path))
    assert job.digest == hashlib.sha256(SOUND.encode()).hexdigest() == job.files["job.toml"]
    assert read_job(write(tmp_path, SOUND + "\n")).digest != job.digest


@pytest.mark.parametrize("change", [lambda text: "\ufeff" + text, lambda text: text.replace("\n", "\r\n")])
def test_byte_order_mark_and_line_ends(tmp_path: Path, change) -> None:  # type: ignore[no-untyped-def]
    plain = read_job(write(tmp_path))
    other = read_job(write(tmp_path, change(SOUND)))
    kept = {"digest", "files"}
    assert other.model_dump(exclude=kept) == plain.model_dump(exclude=kept)


def test_files_that_are_none(tmp_path: Path) -> None:
    assert refused(tmp_path / "job.toml") == f"{tmp_path / 'job.toml'}: there is no such file"
    assert refused(tmp_path) == f"{tmp_path}: this is a folder; name a file in it"
    latin = SOUND.replace("loft", "Dachgeschoß").encode("latin-1")
    assert refused(write(tmp_path, latin)) == "job.toml:4: the file is not UTF-8 text; save it as UTF-8"
    huge = write(tmp_path, "#" * 2_100_000)
    assert refused(huge) == f"{huge}: the file has 2.1 MB, at most 2 MB are read; split the job into several"
    assert refused(write(tmp_path, "a = " + "[" * 9999)) == "job.toml: arrays or tables are nested too deeply"
    assert (
        refused(write(tmp_path, "a = " + "9" * 9999))
        == "job.toml: this is not TOML: a number has thousands of digits"
    )
    deep = SOUND.replace('cover = "40 mm"', "cover = " + "[" * 30 + "]" * 30)
    assert (
        refused(write(tmp_path, deep)) == "job.toml:31: beam B1: design.cover: tables are nested too deeply"
    )


def test_empty_file(tmp_path: Path) -> None:
    assert refused(write(tmp_path, "")) == (
        "job.toml: format: the file does not say its format; write format = 1 as its first line\n"
        "job.toml: job: the table [job] is missing; it needs number, title and date"
    )


def test_all_problems_are_told_together_in_the_order_of_lines(tmp_path: Path) -> None:
    text = changed(('at = "A1"', 'at = "Z9"'), ('dead = "1.5 kPa"', "dead = 1.5"), ("title =", "titel ="))
    assert refused(write(tmp_path, text)).splitlines() == [
        'job.toml:2: job.title: this key is missing; write for example title = "Loft floor"',
        "job.toml:4: job.titel: there is no such key; did you mean 'title'?",
        'job.toml:23: panel P1: dead: a pressure needs its unit, for example "2.4 kPa"',
        "job.toml:41: column C1: at: there is no grid point 'Z9'; it can be 'A1', 'A2', 'B1', "
        "'B2', 'C1' or 'C2'",
    ]


def test_a_faulty_section_is_told_once_not_at_its_beams(tmp_path: Path) -> None:
    assert refused(write(tmp_path, changed(('width = "300 mm"', "width = 300")))) == (
        'job.toml:17: section rb1: width: a length needs its unit, for example "4.5 m"'
    )


def test_no_flood_of_problems(tmp_path: Path) -> None:
    text = SOUND + "".join(f'[[column]]\nmark = "K{number}"\nat = "Q9"\n' for number in range(900))
    with pytest.raises(CalcpackError) as caught:
        read_job(write(tmp_path, text))
    assert len(caught.value.problems) == 200


def test_messages_carry_no_control_characters(tmp_path: Path) -> None:
    assert "\x1b" not in refused(write(tmp_path, SOUND + '["\\u001b[31m"]\n'))


@pytest.mark.parametrize(
    ("actions", "material", "own", "expected"),
    [
        ("EN 1990", "", "", 25.0),
        ("job", "", "", 25.0),
        ("ASCE 7-22 strength", "", "", 150 * 0.45359237 * 9.80665e-3 / 0.3048**3),
        ("ASCE 7-22 strength", 'material = "c30"', "", 25.0),
        ("ASCE 7-22 strength", 'material = "c30"', 'unit_weight = "18 kN/m^3"', 18.0),
    ],
)
def test_unit_weight_of_a_slab(
    tmp_path: Path, actions: str, material: str, own: str, expected: float
) -> None:
    text = changed(("EN 1990", actions), ('dead = "1.5 kPa"', f"{material}\n{own}"))
    assert read_job(write(tmp_path, text)).panels[0].unit_weight == pytest.approx(expected, rel=1e-15)


def test_own_combinations_and_occupancy(tmp_path: Path) -> None:
    text = changed(
        ('actions = "EN 1990"', 'actions = "job"\noccupancy = "B"'),
        ("[[wall]]", '[[combination]]\nname = "ULS"\nlimit = "strength"\ndead = 1.4\nsnow = 0\n[[wall]]'),
    )
    job = read_job(write(tmp_path, text))
    assert (job.basis.actions, job.basis.occupancy) == ("job", "B")
    (own,) = job.combinations
    assert (own.name, own.limit, own.factors) == ("ULS", "strength", {"dead": 1.4, "snow": 0.0})


def test_beam_choices_over_the_basis(tmp_path: Path) -> None:
    text = changed(
        (
            'section = "rb1"',
            'equivalent = "shear"\ndesign_loads = "equivalent"\nfixed = ["start"]\nfree = ["end"]',
        )
    )
    beam = read_job(write(tmp_path, text)).beams[0]
    assert (beam.equivalent, beam.design_loads) == ("shear", "equivalent")
    assert (beam.fixed_start, beam.fixed_end, beam.free_start, beam.free_end) == (True, False, False, True)


def test_trapezoidal_load_and_rounding_at_the_end(tmp_path: Path) -> None:
    stretch = 'line = "7.5 kN/m"\nline_end = "0 kN/m"\nfrom = "1 m"\nto = "11000.0001 mm"'
    load = read_job(write(tmp_path, changed(('line = "7.5 kN/m"', stretch)))).beams[0].loads[0]
    assert (load.line, load.line_end, load.start, load.end) == (7.5, 0.0, 1.0, 11.0)


def test_points_in_feet_and_their_names(tmp_path: Path) -> None:
    text = changed(('at = "A1"', 'at = ["14\'-6\\"", "3 ft"]'))
    column = read_job(write(tmp_path, text)).columns[0]
    assert column.at == (4.4196, 0.9144)
    assert column.point_name == "(14'-6\", 3 ft)"


def test_reading_is_quick_and_needs_neither_pint_nor_openpyxl(
    tmp_path: Path, allowed: Callable[[float], float]
) -> None:
    code = (
        "import sys, time; begin = time.process_time(); from calcpack.job import read_job; "
        "read_job(sys.argv[1]);"
        "print(time.process_time() - begin, sorted({'pint', 'openpyxl'} & set(sys.modules)))"
    )
    command = [sys.executable, "-c", code, str(write(tmp_path))]
    seconds, _, loaded = subprocess.run(command, capture_output=True, text=True, check=True).stdout.partition(
        " "
    )
    assert loaded == "[]\n"
    assert float(seconds) < allowed(1.5)  # 0.3 s on an idle machine


KEYS = st.from_regex(r"[A-Za-z0-9_-]{1,4}", fullmatch=True) | st.text("ab .\"\\'é", min_size=1, max_size=4)


@st.composite
def toml_files(draw: st.DrawFn) -> str:
    """A TOML text of tables, arrays of tables, dotted and quoted keys, arrays over several lines."""
    lines: list[str] = []
    for number in range(draw(st.integers(0, 4))):
        lines.append(
            draw(st.sampled_from([f"[t{number}]", f"[[a]]\nn = {number}", f"[t{number}.u]", "# a comment"]))
        )
        for each, key in enumerate(draw(st.lists(KEYS, max_size=3, unique=True))):
            quoted = '"' + key.replace("\\", "\\\\").replace('"', '\\"') + '"'
            value = draw(
                st.sampled_from(["1", '"x"', "[1,\n 2]", '{ "p q" = 1, r.s = [ {t = 1} ] }', "'''\n\n'''"])
            )
            lines.append(f"k{number}{each}.{quoted} = {value}")
    return "\n".join(lines)


def paths(value: object, before: tuple[str | int, ...] = ()) -> list[tuple[str | int, ...]]:
    """Every place in TOML data."""
    items = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    return [path for key, inner in items for path in ((*before, key), *paths(inner, (*before, key)))]


@settings(max_examples=80, deadline=None)
@given(toml_files())
def test_every_key_has_its_line(text: str) -> None:
    document = parse_toml(FileBytes("a.toml", text.encode()))
    assert document.data == tomllib.loads(text)
    lines = text.split("\n")
    for path in paths(document.data):
        assert path in document.lines, path
        key = path[-1]
        if isinstance(key, str) and key.startswith(("k", "t")):
            assert key in lines[document.lines[path] - 1]
