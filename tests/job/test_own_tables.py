"""The job's own tables of rolled sections and steel grades go before the office's."""

from __future__ import annotations

import pytest

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.job.library import families, rolled_area_and_inertia, rolled_sections
from calcpack.notebook import load_sheet
from calcpack.notebook.lightest import choose_sections
from calcpack.notebook.parameters import beam_input, to_text
from calcpack.notebook.sections import steel_aisc360, steel_en1993
from calcpack.notebook.sections.steel_en1993.results import shown_of
from calcpack.notebook.templates import find_template

JOB = """\
format = 1
{tables}
[job]
number = "7"
title = "Sail store"
date = 2026-12-01
[basis]
actions = "{actions}"
[grid]
x = {{ A = "0 m", B = "6 m" }}
y = {{ 1 = "0 m" }}
[materials.m]
grade = "{grade}"
[sections.s]
shape = "rolled"
designation = "{designation}"
[[column]]
mark = "C1"
at = "A1"
[[column]]
mark = "C2"
at = "B1"
[[beam]]
mark = "B1"
line = ["A1", "B1"]
section = "s"
material = "m"
template = "{template}"
design = {{ {design} }}
[[beam.load]]
case = "dead"
line = "8 kN/m"
[[beam.load]]
case = "live"
line = "{live}"
"""
BOTH = 'rolled_sections = "stock.csv"\ngrades = "steels.csv"'
STOCK = """\
designation,family,depth [mm],width [mm],web [mm],flange [mm],root_radius [mm],source
IPE 300,,300,150,8.5,14,15,Mill sheet 12
Y 240,yard,240,120,6.2,9.8,15,
Y 330,yard,330,160,7.5,11.5,18,
"""
STEELS = """\
name,fy,fu,modulus,unit_weight,source
S275,225 MPa,400 MPa,205 GPa,78 kN/m^3,Tested 1962
old,190 MPa,330 MPa,205 GPa,78 kN/m^3,
"""
TEMPLATES = {
    "steel_beam_en1993": ("EN 1990", 'braced = "continuous"'),
    "steel_beam_aisc360": ("ASCE 7-22 strength", 'braced = "continuous"'),
}
both = pytest.mark.parametrize("template", TEMPLATES)


def job(folder, template="steel_beam_en1993", stock=STOCK, steels=STEELS, **changes):
    (folder / "stock.csv").write_text(stock, encoding="utf-8")
    (folder / "steels.csv").write_text(steels, encoding="utf-8")
    actions, design = TEMPLATES[template]
    given = {
        "tables": BOTH, "grade": "S275", "designation": "IPE 300", "live": "10 kN/m",
        "template": template, "actions": actions, "design": design,
    }  # fmt: skip
    path = folder / "job.toml"
    path.write_text(JOB.format(**given | changes), encoding="utf-8")
    return read_job(path)


def sheet(framed, template):
    found = find_template(template, framed.job.folder)
    beam = framed.beams["B1"].beam
    return load_sheet(to_text(beam_input(framed, "B1", found.settle(beam.design, "B1"), found.stamp)))


@both
def test_the_job_s_own_values_are_those_the_sheet_designs_with(tmp_path, template):
    framed = frame(job(tmp_path, template))
    beam = framed.beams["B1"].beam
    assert beam.section.area == pytest.approx(rolled_area_and_inertia(0.3, 0.15, 0.0085, 0.014, 0.015)[0])
    assert beam.section.area > rolled_sections()["ipe300"].area
    assert beam.material.values["fy"] == 225e3
    assert beam.section.source == "stock.csv, the job's own table: Mill sheet 12"
    assert beam.material.source == "steels.csv, the job's own table: Tested 1962"
    weight = next(load.first for load in framed.beams["B1"].loads["dead"] if load.source == "self weight")
    assert weight == pytest.approx(beam.section.area * 78)
    work = sheet(framed, template)
    module = steel_en1993 if "en1993" in template else steel_aisc360
    if module is steel_en1993:
        profile = steel_en1993.design_of(work).profile
        assert (profile.strength, profile.shape.web, profile.modulus) == (225e3, 0.0085, 205e6)
        steel_en1993.state_steel_section(work, steel_en1993.design_of(work))
    else:
        design = steel_aisc360.design_beam(work).design
        assert (design.steel.yield_strength, design.shape.web, design.steel.modulus) == (225e3, 0.0085, 205e6)
        steel_aisc360.state_section(work, steel_aisc360.design_beam(work))
    said = " ".join(str(block) for block in work.sheet.blocks)
    assert "Mill sheet 12" in said


@both
def test_what_the_tables_do_not_name_is_the_office_s(tmp_path, template):
    found = job(tmp_path, template, designation="IPE 330", grade="S355")
    assert found.beams[0].section.area == rolled_sections()["ipe330"].area
    assert found.beams[0].material.values["fy"] == 355e3
    without = job(tmp_path, template, tables="")
    assert without.beams[0].section.area == rolled_sections()["ipe300"].area
    assert without.beams[0].material.values["fy"] == 275e3
    assert list(without.files) == ["job.toml"]


@both
def test_the_lightest_of_a_family_of_the_job_s_own(tmp_path, template):
    framed = choose_sections(frame(job(tmp_path, template, designation="lightest in yard")))
    chosen = framed.beams["B1"].beam.section
    assert (chosen.designation, [each.designation for each in chosen.tried]) == ("Y 330", ["Y 240"])
    light = choose_sections(frame(job(tmp_path, template, designation="lightest in yard", live="1 kN/m")))
    assert light.beams["B1"].beam.section.designation == "Y 240"


@both
def test_own_sections_take_their_place_among_the_office_s(tmp_path, template):
    """The job's own IPE 300 is stouter than the office's: heavier than IPE 330, and with its own values."""
    family = job(tmp_path, template, designation="lightest in IPE").candidates["IPE"]
    names = [each.designation for each in family]
    assert sorted(names) == sorted(each.designation for each in families()["IPE"])
    assert names.index("IPE 300") > names.index("IPE 330") - 2
    assert [each.area for each in family] == sorted(each.area for each in family)
    assert next(each for each in family if each.designation == "IPE 300").dimensions["web"] == 0.0085


def test_the_tables_are_part_of_the_input(tmp_path):
    one = job(tmp_path)
    assert list(one.files) == ["job.toml", "stock.csv", "steels.csv"]
    assert job(tmp_path, stock=STOCK.replace("8.5", "8.6")).digest != one.digest


def test_the_ratio_follows_the_table(tmp_path):
    ratios = []
    for web in ("8.5", "17"):
        work = sheet(frame(job(tmp_path, stock=STOCK.replace("8.5", web))), "steel_beam_en1993")
        rows = shown_of(work, steel_en1993.design_of(work))
        ratios.append(next(row.ratio for row in rows if row.says.startswith("shear")))
    assert ratios[1] < 0.6 * ratios[0]


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"stock": STOCK.replace("8.5", "150")}, "stock.csv:2: rolled section IPE 300: web: the web is as thick"),
        ({"stock": STOCK.replace(",14,", ",150,")}, "flange: the two flanges take up the whole depth"),
        ({"stock": STOCK.replace(",15,Mill", ",90,Mill")}, "root_radius: the fillets do not fit"),
        ({"stock": STOCK.replace("Y 330", "Y240")}, "stock.csv:4: rolled section Y240: designation: the name is taken"),
        ({"stock": STOCK.replace("web [mm]", "web [kN]")}, "'kN' is the unit of a force, not of a length"),
        ({"stock": STOCK.replace("web [mm]", "wab [mm]")}, "wab: there is no such key; did you mean 'web'?"),
        ({"stock": STOCK.replace("8.5", "")}, "stock.csv:2: rolled section IPE 300: web: this key is missing"),
        ({"stock": STOCK.replace("Y 240", "Y" * 41)}, "this name has 41 letters; at most 40"),
        ({"steels": STEELS.replace("225 MPa", "225 mm")}, "steels.csv:2: grade S275: fy"),
        ({"steels": STEELS.replace("old", "s 275")}, "steels.csv:3: grade s 275: name: the name is taken"),
        ({"designation": "Y 241"}, "there is no section 'Y 241'; did you mean 'Y 240'"),
        ({"designation": "lightest in yerd"}, "there is no family 'yerd'; did you mean 'yard'"),
        ({"grade": "olt"}, "there is no grade 'olt'; did you mean 'old'"),
        ({"tables": 'rolled_sections = "gone.csv"'}, "gone.csv"),
        ({"tables": "grades = 3"}, "this key names a table file"),
    ],
)  # fmt: skip
def test_faults_are_told_with_their_place(tmp_path, change, message):
    with pytest.raises(CalcpackError) as caught:
        job(tmp_path, **change)
    assert message in str(caught.value)
