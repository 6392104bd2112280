"""Beams of a small job, worked out section by section without a notebook."""

from __future__ import annotations

import tempfile
from functools import cache
from pathlib import Path

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.notebook import load_sheet, sections
from calcpack.notebook.parameters import beam_input, to_text
from calcpack.notebook.sections import concrete_en1992 as concrete
from calcpack.notebook.templates import find_template

HEAD = """
format = 1
[job]
number = "1"
title = "Trial"
date = 2026-12-01
units = "{units}"
[basis]
actions = "EN 1990"
occupancy = "B"
[grid]
x = {{ A = "0 m", B = "7.5 m", C = "12.5 m", D = "14.5 m" }}
y = {{ 1 = "0 m", 2 = "5 m", 3 = "10 m" }}
[materials.c30]
grade = "C30/37"
bars = "B500B"
[materials.c70]
grade = "C70/85"
bars = "B500B"
[sections.r]
shape = "rectangle"
width = "300 mm"
depth = "550 mm"
[sections.t]
shape = "tee"
width = "300 mm"
depth = "550 mm"
flange_width = "effective"
flange_depth = "150 mm"
[sections.low]
shape = "rectangle"
width = "300 mm"
depth = "350 mm"
[sections.thin]
shape = "tee"
width = "250 mm"
depth = "600 mm"
flange_width = "700 mm"
flange_depth = "60 mm"
"""
PANEL = """
[[panel]]
mark = "{mark}"
corners = ["{first}", "{last}"]
thickness = "150 mm"
dead = "1.5 kPa"
live = "3 kPa"
transfer = "one-way y"
"""
COLUMN = '\n[[column]]\nmark = "{mark}"\nat = "{mark}"\n'
BEAM = """
[[beam]]
mark = "{mark}"
line = {line}
{keys}
section = "{section}"
material = "{material}"
template = "concrete_beam_en1992"
[beam.design]
{design}
[[beam.load]]
case = "dead"
line = "{dead} kN/m"
[[beam.load]]
case = "live"
line = "{live} kN/m"
"""
# mark: line, further keys, section, material, design, dead, live
BEAMS = {
    "simple": ('["A1", "B1"]', "", "r", "c30", "", 20, 12),
    "slab": (
        '["A2", "B2", "C2"]', "", "t", "c30",
        'support_width = "400 mm"\ntop = { count = 8, size = "20" }', 4, 3,
    ),
    "tip": (
        '["A3", "B3", "C3", "D3"]', 'free = ["end"]', "r", "c70",
        "deflection_limits = { live = 500, total = 250 }", 30, 25,
    ),
}  # fmt: skip
TRIALS = {
    "heavy": ("low", "c30", "", 30, 30),
    "thin": ("thin", "c30", 'cot_theta = 1.75\nexposure = "XC3"', 28, 20),
    "full": ("thin", "c30", 'cover = "35 mm"', 35, 26),
    "given": (
        "low", "c30",
        'bottom = { count = 6, size = "25 mm" }\ntop = { count = 4, size = "20 mm" }\nalpha_cc = 0.85\n'
        'stirrups = { legs = 2, size = "10 mm", spacing = "150 mm" }\nsupport_width = "400 mm"\n'
        'cover = "30 mm"',
        22, 12,
    ),
    "strong": ("r", "c70", "national_values = { gamma_C = 1.4 }", 40, 25),
}  # fmt: skip


def _job(units: str) -> str:
    text = HEAD.format(units=units)
    lines = [line.strip("[]").replace('"', "").split(", ") for line, *_ in BEAMS.values()]
    marks = {mark for line in lines for mark in line}
    for mark in sorted(marks - {"D3"}):
        text += COLUMN.format(mark=mark)
    for mark, first, last in (("P1", "A1", "B2"), ("P2", "A2", "B3"), ("P3", "B2", "C3")):
        text += PANEL.format(mark=mark, first=first, last=last)
    for mark, (line, keys, section, material, design, dead, live) in BEAMS.items():
        text += BEAM.format(
            mark=mark, line=line, keys=keys, section=section, material=material, design=design, dead=dead,
            live=live,
        )  # fmt: skip
    return text


def _trial(name: str, units: str) -> str:
    section, material, design, dead, live = TRIALS[name]
    text = HEAD.format(units=units) + "".join(COLUMN.format(mark=mark) for mark in ("A1", "B1"))
    return text + BEAM.format(
        mark=name, line='["A1", "B1"]', keys="", section=section, material=material, design=design, dead=dead,
        live=live,
    )  # fmt: skip


def worked(text: str, mark: str):
    """Work and beam of a job's text, every section written."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "job.toml"
        path.write_text(text, encoding="utf-8")
        framed = frame(read_job(path))
        template = find_template("concrete_beam_en1992", Path(folder))
    design = template.settle(framed.beams[mark].beam.design, mark)
    work = load_sheet(to_text(beam_input(framed, mark, design, template.stamp)))
    for name in ("given", "transfer", "loads", "combinations"):
        getattr(sections, f"state_{name}")(work)
    beam = concrete.begin(work)
    concrete.state_shown(beam)
    concrete.state_bending(beam)
    concrete.state_shear(beam)
    concrete.state_service(beam)
    return work, beam


@cache
def written(mark: str, units: str = "SI"):
    """A beam of the small job, or a trial of its own."""
    return worked(_trial(mark, units) if mark in TRIALS else _job(units), mark)


ALL = (*BEAMS, *TRIALS)
