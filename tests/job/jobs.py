"""A sound job file for the tests to read and to break."""

from __future__ import annotations

from pathlib import Path

from calcpack.job import read_job
from calcpack.job.errors import CalcpackError

SOUND = """\
format = 1
[job]
number = "2417"
title = "Boat workshop, loft floor"
date = 2026-12-01
[basis]
actions = "EN 1990"
equivalent = "moment"
[grid]
x = { A = "0 m", B = "6 m", C = "11 m" }
y = { 1 = "0 m", 2 = "4.5 m" }
[materials.c30]
grade = "C30/37"
bars = "B500B"
[sections.rb1]
shape = "rectangle"
width = "300 mm"
depth = "550 mm"
[[panel]]
mark = "P1"
corners = ["A1", "B2"]
thickness = "160 mm"
dead = "1.5 kPa"
live = "3.0 kPa"
[[beam]]
mark = "B1"
line = ["A1", "B1", "C1"]
section = "rb1"
material = "c30"
[beam.design]
cover = "40 mm"
[[beam.load]]
case = "dead"
line = "7.5 kN/m"
[[beam.load]]
case = "live"
point = "12 kN"
at = "2.1 m"
[[column]]
mark = "C1"
at = "A1"
[[wall]]
mark = "W1"
line = ["A1", "A2"]
"""


def changed(*changes: tuple[str, str]) -> str:
    """The sound job with each old text, which must stand in it, replaced by a new one."""
    text = SOUND
    for old, new in changes:
        assert old in text, f"nothing to change: {old!r}"
        text = text.replace(old, new, 1)
    return text


def write(folder: Path, text: str | bytes = SOUND, **tables: str) -> Path:
    """Write a job file and CSV tables beside it; ``beams=...`` is beams.csv."""
    for name, table in tables.items():
        folder.joinpath(f"{name}.csv").write_text(table, encoding="utf-8")
    path = folder / "job.toml"
    path.write_bytes(text.encode() if isinstance(text, str) else text)
    return path


def refused(path: Path) -> str:
    """What reading a job says is wrong with it."""
    try:
        read_job(path)
    except CalcpackError as error:
        return str(error)
    raise AssertionError("the job was read without complaint")
