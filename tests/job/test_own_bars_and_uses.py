"""The job's own concretes, reinforcement, bar sizes and occupancies go before the office's."""

from __future__ import annotations

import json
from io import StringIO
from math import pi
from types import SimpleNamespace

import pytest
from rich.console import Console

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.notebook import load_sheet, sections
from calcpack.notebook.parameters import beam_input, to_text
from calcpack.notebook.sections import concrete_aci318, concrete_en1992
from calcpack.notebook.templates import find_template
from calcpack.overview import print_loads
from calcpack.record.auditing.demands import reduction_factor
from calcpack.record.auditing.findings import Verdict
from calcpack.record.auditing.given import Given
from calcpack.record.auditing.inputs import audit_job, job_facts

JOB = """\
format = 1
{tables}
[job]
number = "7"
title = "Sail store"
date = 2026-12-01
[basis]
actions = "{actions}"
{basis}
[grid]
x = {{ A = "0 m", B = "6 m" }}
y = {{ 1 = "0 m", 2 = "5 m" }}
[materials.m]
grade = "{grade}"
bars = "{steel}"
[sections.s]
shape = "rectangle"
width = "300 mm"
depth = "550 mm"
[[panel]]
mark = "P1"
corners = ["A1", "B1", "B2", "A2"]
thickness = "160 mm"
{live}
[[panel]]
mark = "P2"
corners = ["A2", "B2", ["6 m", "8 m"], ["0 m", "8 m"]]
thickness = "160 mm"
{other}
[[wall]]
mark = "W1"
line = ["A1", ["0 m", "8 m"]]
[[wall]]
mark = "W2"
line = ["B1", ["6 m", "8 m"]]
[[beam]]
mark = "B1"
line = ["A1", "B1"]
section = "s"
material = "m"
template = "{template}"
design = {{ {design} }}
[[beam]]
mark = "B2"
line = ["A2", "B2"]
[[beam]]
mark = "B3"
line = [["0 m", "8 m"], ["6 m", "8 m"]]
"""
ALL = 'grades = "grades.csv"\nbars = "bars.csv"\noccupancies = "uses.csv"'
GRADES = """\
name,kind,fck,fc,modulus,unit_weight,fyk,Es,k,eps_uk,fy,source
C25/30,concrete,28 MPa,,30.5 GPa,24.5 kN/m^3,,,,,,Cores of May
own,concrete,,4200 psi,3700 ksi,148 pcf,,,,,,Cores of June
B500B,reinforcement,,,,,480 MPa,199 GPa,1.06,0.04,,Mill sheet 3
Grade 70,reinforcement,,,,,,29000 ksi,,,70 ksi,
"""
BARS = """\
name,diameter [mm],area [mm^2],source
D18,18,250,Yard list
20,20,300,Yard list
D9,9,,
No. 6,18.9,276,
"""
USES = """\
name,says,uniform [kPa],point [kN],category,psi0,psi1,psi2,reduced,source
archive,rolling shelves,6.5,7,E,1,0.95,0.85,no,Brief 4
C1,reading room,2.75,,C,,,,yes,Brief 5
hall,dance floor,4.5,,C,0.6,0.5,0.4,,Brief 6
lobby,,3,,,,,,"no, 4.7.5",
"""
EN = ("concrete_beam_en1992", "EN 1990", "C25/30", "B500B")
US = ("concrete_beam_aci318", "ASCE 7-22 strength", "own", "Grade 70")
BAD = Verdict.WRONG


def job(folder, kind=EN, grades=GRADES, bars=BARS, uses=USES, **changes):
    for name, text in (("grades", grades), ("bars", bars), ("uses", uses)):
        (folder / f"{name}.csv").write_text(text, encoding="utf-8")
    template, actions, grade, steel = kind
    given = {
        "tables": ALL, "grade": grade, "steel": steel, "live": 'live = "3 kPa"', "other": "", "basis": "",
        "template": template, "actions": actions, "design": "",
    }  # fmt: skip
    path = folder / "job.toml"
    path.write_text(JOB.format(**given | changes), encoding="utf-8")
    return read_job(path)


def parameters(found, mark="B1"):
    framed = frame(found)
    beam = framed.beams[mark].beam
    template = find_template(beam.template, found.folder)
    return to_text(beam_input(framed, mark, template.settle(beam.design, mark), template.stamp))


def texts(work):
    return " ".join(str(block) for block in work.sheet.blocks)


def test_own_concrete_and_reinforcement(tmp_path):
    material = job(tmp_path).beams[0].material
    assert (material.kind, material.modulus, material.unit_weight) == ("concrete", 30.5e6, 24.5)
    assert material.values == {
        "bars": "B500B",
        "fck": 28e3,
        "fyk": 480e3,
        "Es": 199e6,
        "k": 1.06,
        "eps_uk": 0.04,
    }
    assert "Cores of May" in material.source
    assert "Mill sheet 3" in material.source
    case = concrete_en1992.begin(load_sheet(parameters(job(tmp_path)))).design.case
    assert (case.strength.fck, case.strength.fyk, case.strength.es) == (28e3, 480e3, 199e6)
    american = job(tmp_path, US).beams[0].material
    assert american.values["fc"] == pytest.approx(4200 * 6.894757293168)
    assert american.values["fy"] == pytest.approx(70e3 * 6.894757293168)
    office = job(tmp_path, grade="C30/37", steel="B500C").beams[0].material
    assert (office.values["fck"], office.values["fyk"]) == (30e3, 500e3)


GIVEN = 'bottom = { count = 5, size = "d18" }, stirrups = { legs = 2, size = "D9", spacing = "150 mm" }'


@pytest.mark.parametrize(("kind", "module"), [(EN, concrete_en1992), (US, concrete_aci318)])
def test_given_bars_are_checked_with_the_job_s_own_values(tmp_path, kind, module):
    work = load_sheet(parameters(job(tmp_path, kind, design=GIVEN)))
    sections.state_given(work)
    sections.state_transfer(work)
    sections.state_equivalents(work)
    sections.state_loads(work)
    sections.state_combinations(work)
    sections.state_effects(work)
    begun = module.begin(work)
    if module is concrete_en1992:
        module.state_shown(begun)
        module.state_bending(begun)
        module.state_shear(begun)
        area, legs = "A_s,sag", "A_sw"
    else:
        written = module.state_shown(begun)
        module.state_bending_strength(written)
        module.state_shear(written)
        area, legs = "A_s", "A_v"
    lines = {line.symbol: line for line in work.sheet.lines.values()}
    assert lines[area].value == pytest.approx(5 * 250)
    assert lines[legs].value == pytest.approx(2 * pi * 81 / 4)
    assert "bars.csv, the job's own table: Yard list" in texts(work)


def names(work, module):
    design = module.begin(work).design
    if module is concrete_en1992:
        return design.bottom.bars.bar, design.shear.stirrups.bar
    return design.bottom.group.bar, design.stirrup


@pytest.mark.parametrize(("kind", "module"), [(EN, concrete_en1992), (US, concrete_aci318)])
def test_own_bars_are_among_those_to_choose_from(tmp_path, kind, module):
    usual = names(load_sheet(parameters(job(tmp_path, kind, tables='grades = "grades.csv"'))), module)
    assert not any(each.own for each in usual)
    # as thick as the usual choice, with a little more area: the same clauses, one bar the better
    own = f"name,diameter [mm],area [mm^2]\n{usual[0].name},{usual[0].diameter * 1e3},{usual[0].area * 1.01e6}\n"
    own += f"thin,{usual[1].diameter * 1e3},{usual[1].area * 1.1e6}\n"
    found = names(load_sheet(parameters(job(tmp_path, kind, bars=own))), module)
    assert found[0].own
    assert found[0].name == usual[0].name
    assert found[0].area == pytest.approx(1.01 * usual[0].area)


def test_own_sizes_between_the_usual_ones_are_tried(tmp_path):
    stock = load_sheet(parameters(job(tmp_path))).stock
    assert stock.groups((("12 mm", "16 mm", "20 mm", "25 mm"), ("32 mm",))) == (
        ("12 mm", "16 mm", "D18", "#6", "20 mm", "25 mm"), ("32 mm",),
    )  # fmt: skip
    assert stock.among(("8 mm", "10 mm", "12 mm")) == ("8 mm", "D9", "10 mm", "12 mm")
    assert stock.bar("Ø20").area == pytest.approx(300e-6)
    assert stock.bar("#6").area == pytest.approx(276e-6)
    assert stock.bar("25").area == pytest.approx(pi * 0.025**2 / 4)
    with pytest.raises(CalcpackError, match=r"there is no bar '19'; the nearest is '20 mm'"):
        stock.bar("19")
    with pytest.raises(CalcpackError, match="one of your own: did you mean 'D18'"):
        stock.bar("D17")


def test_the_tables_are_part_of_the_input(tmp_path):
    one = job(tmp_path)
    assert list(one.files) == ["job.toml", "grades.csv", "bars.csv", "uses.csv"]
    for changed in ({"bars": BARS.replace("250", "251")}, {"uses": USES.replace("2.75", "2.8")}):
        assert job(tmp_path, **changed).digest != one.digest


def audited(folder, text):
    inputs = {
        name: (folder / name).read_bytes() for name in ("job.toml", "grades.csv", "bars.csv", "uses.csv")
    }
    facts = job_facts(SimpleNamespace(inputs=inputs))
    assert not facts.fault
    return [
        each.place
        for each in audit_job(Given(json.loads(text), "B1.ipynb"), facts.data)
        if each.verdict is BAD
    ]


def test_the_audit_holds_bars_uses_and_factors_against_the_job(tmp_path):
    text = parameters(job(tmp_path, live='use = "archive"', basis='occupancy = "archive"'))
    assert audited(tmp_path, text) == []
    for old, new, where in (
        ('"area": 0.00025,', '"area": 0.00026,', "bars"),
        ('"psi1": 0.95, "psi2": 0.85, "use": "rolling shelves", "source"', '"psi1": 0.95, "psi2": 0.8, "use": "rolling shelves", "source"', "live_psi"),
        ('"live": 6.5', '"live": 6.0', "panel P1"),
        ("the job's own table: Brief 4, rolling", "the job's own table: Brief 5, rolling", "panel P1"),
    ):  # fmt: skip
        assert old in text
        wrong = audited(tmp_path, text.replace(old, new))
        assert wrong, where
        assert all(where in each for each in wrong)


def test_a_use_gives_its_live_load_with_its_source(tmp_path):
    found = job(tmp_path, live='use = "c1"', other='use = "A balconies"', basis='occupancy = "C"')
    own, office = found.panels
    assert (own.live, own.use, own.unreduced) == (2.75, "C1", "")
    assert own.use_source == "uses.csv, the job's own table: Brief 5, reading room"
    assert (office.live, office.use_source) == (
        2.5,
        "EN 1991-1-1 Table 6.2, dwellings, hotels, wards: balconies",
    )
    without = job(tmp_path, tables="", grade="C30/37", live='use = "C1"', basis='occupancy = "C"')
    assert without.panels[0].live == 3.0
    work = load_sheet(parameters(found))
    sections.state_given(work)
    assert "uses.csv, the job's own table: Brief 5, reading room" in texts(work)


def test_the_category_follows_from_the_uses(tmp_path):
    found = job(tmp_path, live='use = "C1"', other='use = "C3"')
    assert (found.basis.occupancy, found.psi) == ("C", None)
    own = job(tmp_path, live='use = "archive"')
    assert (own.basis.occupancy, own.psi.psi1) == ("E", 0.95)
    with pytest.raises(CalcpackError, match="the panels' uses have different factors"):
        job(tmp_path, live='use = "C1"', other='use = "hall"')
    settled = job(tmp_path, live='use = "C1"', other='use = "hall"', basis='occupancy = "hall"')
    assert (settled.basis.occupancy, settled.psi.psi2) == ("C", 0.4)
    plain = job(tmp_path, US, live='use = "lobby"', other='use = "dining"')
    assert (plain.basis.occupancy, plain.psi) == ("", None)
    renamed = job(tmp_path, uses=USES.replace("hall,dance floor,4.5,,C", "B,dance floor,4.5,,B"))
    assert (renamed.basis.occupancy, renamed.psi.psi0) == ("", 0.6)


def test_own_factors_are_those_of_the_combinations_and_the_reduction(tmp_path):
    own = 'occupancy = "hall"\nlive_load_reduction = "EN 1991-1-1 6.3.1.2"'
    live = 'use = "hall"\ntransfer = "one-way y"'
    text = parameters(job(tmp_path, live=live, other=live, basis=own), "B2")
    given = json.loads(text)
    factors = [each["factors"]["live"] for each in given["actions"]["combinations"] if each["situation"]]
    assert factors == [1.0, 0.5, 0.4]
    assert "uses.csv, the job's own table: Brief 6" in given["actions"]["psi_source"]
    area = sum(part["area"] for part in given["tributary"])
    work = load_sheet(text)
    assert work.study.reduction.factor == pytest.approx(5 / 7 * 0.6 + 10 / area)
    assert work.study.reduction.factor < 0.9
    assert reduction_factor(Given(given, "B1.ipynb"))[0] == pytest.approx(work.study.reduction.factor)
    sections.state_basis(work)
    assert "dance floor" in texts(work)
    assert "ψ0 = 0.6, ψ1 = 0.5, ψ2 = 0.4" in texts(work)


@pytest.mark.parametrize(
    ("kind", "rule", "use", "why"),
    [
        (EN, "EN 1991-1-1 6.3.1.2", "archive", "use archive is not reduced"),
        (US, "ASCE 7-22 4.7", "lobby", "use lobby is not reduced (4.7.5)"),
        (US, "ASCE 7-22 4.7", "dining", "use dining is not reduced (4.7.5)"),
    ],
)
def test_a_use_that_is_not_reduced(tmp_path, kind, rule, use, why):
    basis = f'live_load_reduction = "{rule}"' + ('\noccupancy = "B"' if kind is EN else "")
    given = json.loads(parameters(job(tmp_path, kind, live=f'use = "{use}"', basis=basis)))
    assert [(part["area"], part["exempt"]) for part in given["tributary"]] == [(0.0, why)]
    free = json.loads(parameters(job(tmp_path, kind, live='use = "C1"', basis=basis)))
    assert free["tributary"][0]["area"] > 0


def test_the_list_of_loads_begins_with_the_job_s_own(tmp_path):
    out = StringIO()
    print_loads(Console(file=out, width=200), job(tmp_path).occupancies)
    said = out.getvalue()
    assert said.index("rolling shelves") < said.index("ASCE 7-22")
    assert "reading room" in said
    assert "people gather, tables" not in said  # what C1 was
    assert "people gather, fixed seats" in said


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"grades": GRADES.replace("30.5 GPa", "")}, "grades.csv:2: grade C25/30: modulus: a concrete needs this key"),
        ({"grades": GRADES.replace("28 MPa", "")}, "fck: a concrete needs this key; give fck (EN) or fc (US)"),
        ({"grades": GRADES.replace("480 MPa", "")}, "grades.csv:4: grade B500B: fyk: a reinforcement needs this key"),
        ({"grades": GRADES.replace("199 GPa", "")}, "Es: a reinforcement needs this key"),
        ({"grades": GRADES.replace("500B,reinforcement,", "500B,reinforcement,30 MPa")}, "fck: a reinforcement has no such"),
        ({"grades": GRADES.replace("500B,reinf", "500B,rainf")}, "did you mean 'reinforcement'?"),
        ({"grades": GRADES.replace("1.06", "1.06 mm")}, "grades.csv:4: grade B500B: k: '1.06 mm' is no number"),
        ({"grades": GRADES.replace(",k,", ",k [mm],")}, "k: this key has no unit, the header says 'mm'"),
        ({"bars": BARS.replace("250", "350")}, "bars.csv:2: bar D18: area: the area of this diameter's circle is 254.5 mm²"),
        ({"bars": BARS.replace("18,250", "180,250")}, "bars.csv:2: bar D18: diameter: no bar is as thick"),
        ({"bars": BARS.replace("D9", "20 mm")}, "bars.csv:4: bar 20 mm: name: the name is taken by the row in line 3"),
        ({"bars": BARS.replace("diameter [mm]", "diameter [kN]")}, "'kN' is the unit of a force"),
        ({"bars": BARS.replace("name", "nome")}, "nome: there is no such key; did you mean 'name'?"),
        ({"uses": USES.replace("0.95,", ",")}, "uses.csv:2: occupancy archive: psi1: this key is missing; give all"),
        ({"uses": USES.replace("7,E", "7,")}, "category: factors are of a category; name the one"),
        ({"uses": USES.replace("0.95", "0.8")}, "psi1: ψ0, ψ1, ψ2 do not descend"),
        ({"uses": USES.replace("7,E", "7,K")}, "category: 'K' is none of the choices"),
        ({"uses": USES.replace("2.75", "")}, "uses.csv:3: occupancy C1: uniform: this key is missing"),
        ({"live": 'use = "archiv"'}, "panel P1: use: there is no use 'archiv'; did you mean 'archive'?"),
        ({"live": 'use = "dining"'}, "there is no use 'dining'"),
        ({"live": 'use = "hall"\nlive = "3 kPa"'}, "live: the use 'hall' has a live load of its own, 4.5 kPa"),
        ({"basis": 'occupancy = "haal"'}, "job.toml:11: basis.occupancy: there is no category 'haal'; did you mean 'hall'?"),
        ({"basis": 'occupancy = "lobby"'}, "the use 'lobby' has no category; give it one in its table"),
        ({"tables": 'bars = "gone.csv"'}, "gone.csv"),
        ({"tables": "occupancies = 3"}, "this key names a table file"),
    ],
)  # fmt: skip
def test_faults_are_told_with_their_place(tmp_path, change, message):
    with pytest.raises(CalcpackError) as caught:
        job(tmp_path, **change)
    assert message in str(caught.value)
