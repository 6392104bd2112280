"""A small job with all that an audit looks at, built once: a continuous beam and a joist that it carries."""

from __future__ import annotations

from pathlib import Path

import pytest

JOB = """\
format = 1
[job]
number = "58"
title = "Net loft"
date = 2026-12-01
prepared = { name = "A. Lind", licence = "11" }
checked = { name = "B. Moe", licence = "12" }
[basis]
actions = "EN 1990"
[grid]
x = { A = "0 m", B = "5 m", C = "9 m" }
y = { 1 = "0 m", 2 = "4 m" }
[materials.c30]
grade = "C30/37"
bars = "B500B"
[materials.s]
grade = "S275"
[sections.r]
shape = "rectangle"
width = "300 mm"
depth = "500 mm"
[sections.i]
shape = "rolled"
designation = "IPE 330"
[[panel]]
mark = "P1"
corners = ["A1", ["2.5 m", "0 m"], ["2.5 m", "4 m"], "A2"]
thickness = "160 mm"
dead = "1.2 kPa"
live = "3 kPa"
[[panel]]
mark = "P2"
corners = [["2.5 m", "0 m"], "B1", "B2", ["2.5 m", "4 m"]]
thickness = "160 mm"
dead = "1.2 kPa"
live = "3 kPa"
[[panel]]
mark = "P3"
corners = ["B1", "C2"]
thickness = "160 mm"
dead = "1.2 kPa"
live = "2.5 kPa"
snow = "0.8 kPa"
[[beam]]
mark = "B1"
line = ["A1", "B1", "C1"]
section = "r"
material = "c30"
[[beam.load]]
case = "dead"
line = "4.1 kN/m"
from = "5 m"
[[beam]]
mark = "B2"
line = ["A2", "B2", "C2"]
section = "r"
material = "c30"
equivalent = "shear"
[[beam]]
mark = "J1"
line = [["2.5 m", "0 m"], ["2.5 m", "4 m"]]
section = "i"
material = "s"
template = "steel_beam_en1993"
[[wall]]
mark = "W1"
line = ["A1", "A2"]
[[wall]]
mark = "W2"
line = ["B1", "B2"]
[[wall]]
mark = "W3"
line = ["C1", "C2"]
"""


@pytest.fixture(scope="session")
def loft(tmp_path_factory) -> Path:
    """The folder of the job's pack; nobody writes into it."""
    from calcpack.build import build_job

    home = tmp_path_factory.mktemp("loft")
    (home / "job.toml").write_text(JOB, encoding="utf-8")
    build_job(home / "job.toml", home / "out", formats=frozenset({"html", "notebook", "pdf"}))
    return home / "out"


@pytest.fixture(scope="session")
def opened(loft):
    """What single sheets are audited with: their files with the pages' text, hashes of the input, the job."""
    from dataclasses import replace

    from calcpack.record.auditing.files import find_target
    from calcpack.record.auditing.inputs import job_facts
    from calcpack.record.auditing.provenance import input_digests

    target = find_target(loft)
    sheets = {
        sheet.record_name.removesuffix(".json"): replace(
            sheet, pages=sheet.page_texts(), notebook=sheet.notebook_bytes()
        )
        for sheet in target.sheets
    }
    return sheets, input_digests(target.inputs), job_facts(target).data
