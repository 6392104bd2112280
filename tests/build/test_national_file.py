"""A set of national parameters in a file beside the job: checked, part of the input, said on the sheet."""

from __future__ import annotations

import json
import shutil

import pytest

from calcpack.build import build_job
from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.record.audit import audit_target

JOB = """format = 1
[job]
number = "7"
title = "Loom hall"
date = 2026-12-01
[basis]
actions = "EN 1990"
[grid]
x = { A = "0 m", B = "5 m" }
y = { 1 = "0 m", 2 = "4 m" }
[materials.c]
grade = "C30/37"
bars = "B500B"
[sections.r]
shape = "rectangle"
width = "300 mm"
depth = "500 mm"
[[beam]]
mark = "B1"
line = ["A1", "B1"]
section = "r"
material = "c"
template = "concrete_beam_en1992"
[beam.design]
national = "annex.toml"
[[beam.load]]
case = "dead"
line = "15 kN/m"
[[beam.load]]
case = "live"
line = "12 kN/m"
[[column]]
mark = "C1"
at = "A1"
[[column]]
mark = "C2"
at = "B1"
"""
ANNEX = """name = "Annex of the mill valley"
source = "Valley building rules, table 2 (invented)"
[values]
gamma_C = 1.4
alpha_cc = 0.85
delta_c_dev = "5 mm"
gamma_S = 1.15
[cover]
XC1 = "20 mm"
"""


@pytest.fixture
def job(tmp_path):
    path = tmp_path / "job" / "job.toml"
    path.parent.mkdir()
    path.write_text(JOB, encoding="utf-8")
    (path.parent / "annex.toml").write_text(ANNEX, encoding="utf-8")
    return path


def contents(folder):
    files = (path for path in folder.rglob("*") if path.is_file())
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in files}


def test_the_file_rules_the_sheet_and_the_audit_follows(job, tmp_path):
    out = tmp_path / "out"
    build_job(job, out)
    record = json.loads((out / "sheets/B1.json").read_text(encoding="utf-8"))
    lines = {line["symbol"]: line for line in record["lines"] if line["symbol"]}
    assert lines["f_cd"]["value"] == pytest.approx(0.85 * 30 / 1.4)
    assert lines["gamma_C"]["origin"] == "annex.toml values.gamma_C"
    assert lines["alpha_ct"]["origin"] == "recommended"
    assert lines["c_min,dur"]["value"] == 20
    page = (out / "sheets/B1.html").read_text(encoding="utf-8")
    assert "Annex of the mill valley (annex.toml, beside the job file); Valley building rules" in page
    assert (
        "Not as recommended: γ_C = 1.4 (recommended 1.5); α_cc = 0.85 (recommended 1); Δc_dev = 5 mm "
        "(recommended 10 mm); c_min,dur of XC1 = 20 mm (recommended 15 mm)." in page
    )
    for target in (out, out / "pack.pdf"):
        audit = audit_target(target, processes=1)
        assert [each.wrong for each in audit.all if each.wrong] == []
        (sheet,) = audit.sheets
        agreed = [each for each in sheet.findings if each.place == "job file, design"]
        assert [each.verdict.name for each in agreed] == ["AGREES"]


def test_the_file_is_part_of_the_input(job, tmp_path):
    assert list(read_job(job).files) == ["job.toml", "annex.toml"]
    before = read_job(job).digest
    annex = job.parent / "annex.toml"
    build_job(job, tmp_path / "one")
    shutil.copytree(job.parent, tmp_path / "elsewhere")
    build_job(tmp_path / "elsewhere/job.toml", tmp_path / "two")
    assert contents(tmp_path / "one") == contents(tmp_path / "two")
    annex.write_text(ANNEX + "# looked through\n", encoding="utf-8")
    assert read_job(job).digest != before


BAD = {
    'gamma_C = "high"': "annex.toml:4: values.gamma_C: a plain number is expected, not 'high'; it is the "
    "partial factor for concrete",
    "gama_C = 1.4": "annex.toml:4: values.gama_C: there is no such key; did you mean 'gamma_C'?",
    "gamma_C = 0.5": "annex.toml:4: values.gamma_C: 0.5 is below the least value 1; it is the partial factor "
    "for concrete",
    "gamma_C = nan": "annex.toml:4: values.gamma_C: nan is no number; give a finite number",
    "gamma_C = [": "annex.toml:5: this is not TOML: invalid value, at column 1",
}


@pytest.mark.parametrize("written", BAD)
def test_what_is_wrong_in_the_file_is_said_with_its_place(written, job, tmp_path):
    text = ANNEX.replace("gamma_C = 1.4", written)
    (job.parent / "annex.toml").write_text(text, encoding="utf-8")
    with pytest.raises(CalcpackError) as caught:
        build_job(job, tmp_path / "out")
    assert str(caught.value).splitlines()[0] == BAD[written]
    assert not (tmp_path / "out").exists()


NAMES = {
    "nowhere.toml": "'nowhere.toml': there is no such file",
    "../annex.toml": "the file '../annex.toml' is outside the job's folder; put it beside the job file",
    "recomended": "there is no set 'recomended' of national parameters; did you mean 'recommended'?, or a file "
    "beside the job, 'recomended.toml'",
}


@pytest.mark.parametrize("name", NAMES)
def test_a_name_that_leads_nowhere(name, job, tmp_path):
    job.write_text(JOB.replace("annex.toml", name), encoding="utf-8")
    with pytest.raises(CalcpackError) as caught:
        build_job(job, tmp_path / "out")
    assert str(caught.value) == f"job.toml:25: beam B1: design.national: {NAMES[name]}"


def test_the_name_and_the_source_of_a_set_are_asked_for(job, tmp_path):
    (job.parent / "annex.toml").write_text("[values]\ngamma_C = 1.4\n", encoding="utf-8")
    with pytest.raises(CalcpackError) as caught:
        build_job(job, tmp_path / "out")
    assert str(caught.value).splitlines() == [
        "annex.toml:1: name: this key is missing; it says what the set is called",
        "annex.toml:1: source: this key is missing; it says what its values were taken from",
    ]


def test_limits_that_cross_are_refused(job, tmp_path):
    text = ANNEX.replace("[cover]", "cot_theta_min = 2.0\ncot_theta_max = 1.5\n[cover]")
    (job.parent / "annex.toml").write_text(text, encoding="utf-8")
    with pytest.raises(
        CalcpackError, match=r"^job.toml:25: beam B1: design.national: the least cot θ, 2, is "
    ):
        build_job(job, tmp_path / "out")
