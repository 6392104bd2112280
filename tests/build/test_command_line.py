"""The commands as a user types them: what is said, the exit status, and what is left behind."""

from __future__ import annotations

import sys

import pytest

from calcpack import cli

SMALL = """\
format = 1
[job]
number = "7"
title = "Kiosk roof"
date = 2026-12-01
[grid]
x = { A = "0 m", B = "4 m" }
y = { 1 = "0 m", 2 = "4 m" }
[sections.s]
shape = "rectangle"
width = "200 mm"
depth = "400 mm"
[materials.m]
grade = "C25/30"
[[panel]]
mark = "P1"
corners = ["A1", "B2"]
thickness = "150 mm"
live = "2 kPa"
[[beam]]
mark = "B1"
line = ["A1", "B1"]
section = "s"
material = "m"
[[wall]]
mark = "W1"
line = ["A1", "A2"]
[[wall]]
mark = "W2"
line = ["B1", "B2"]
[[wall]]
mark = "W3"
line = ["A2", "B2"]
"""

# what is changed in the small job -> what is said
REFUSED = {
    "nothing under a point": (
        ('line = ["A1", "B1"]', 'line = ["A1", "B1", ["6 m", "0 m"]]'),
        "job.toml:22: beam B1: line: nothing stands under (6 m, 0 m): no column, no wall and no beam",
    ),
    "panel edge held in part": (
        ('line = ["A2", "B2"]', 'line = ["A2", ["2 m", "4 m"]]'),
        "panel P1",
    ),
    "no such set of combinations": (
        ("[grid]", '[basis]\nactions = "EN 1991"\n[grid]'),
        "job.toml:7: basis.actions: no set of combinations 'EN 1991'; did you mean 'EN 1990'?",
    ),
    "no such template": (
        ('material = "m"\n', 'material = "m"\ntemplate = "beam_load"\n'),
        "job.toml:25: beam B1: template: no template 'beam_load'; did you mean 'beam_loads'?",
    ),
    "unknown design key": (
        ('material = "m"\n', 'material = "m"\n[beam.design]\ndeflection_limit = { live = 360 }\n'),
        "job.toml:26: beam B1: design.deflection_limit: there is no such key; "
        "did you mean 'deflection_limits'?",
    ),
    "design value of the wrong kind": (
        ('material = "m"\n', 'material = "m"\n[beam.design]\ndeflection_limits = { live = "360" }\n'),
        "job.toml:26: beam B1: design.deflection_limits.live: a plain number is expected, not '360'",
    ),
    "category of use": (
        ("[grid]", '[basis]\noccupancy = "X"\n[grid]'),
        "occupancy",
    ),
}


@pytest.fixture
def run(monkeypatch, capsys):
    """Run the command line; give its exit status and what it said to both streams."""

    def call(*words):
        monkeypatch.setattr(sys, "argv", ["calcpack", *map(str, words)])
        try:
            cli.main()
            status = 0
        except SystemExit as stop:
            status = stop.code or 0
        said = capsys.readouterr()
        return status, said.out, said.err

    return call


@pytest.fixture
def job(tmp_path):
    path = tmp_path / "job.toml"
    path.write_text(SMALL, encoding="utf-8")
    return path


def test_validate_says_what_was_understood(run, job, tmp_path):
    status, out, err = run("validate", job, "--plan", tmp_path / "plan.svg")
    assert (status, err) == (0, "")
    assert "P1: rectangle supported on four sides, long/short = 1 < 2: spans two ways." in out
    assert "wall W1, wall W2" in out
    assert "Solved in the order B1." in out
    assert (tmp_path / "plan.svg").read_text(encoding="utf-8").startswith("<svg")


def test_build_in_parts(run, job, tmp_path):
    out = tmp_path / "out"
    status, said, err = run("build", job, "--out", out, "--format", "html")
    assert status == 0, err
    assert "B1" in said
    assert {path.name for path in (out / "sheets").iterdir()} == {
        "B1.html", "B1.json", "Appendix.html",
    }  # fmt: skip
    assert not (out / "pack.pdf").exists()
    status, said, err = run("build", job, "--out", out, "--only", "B1", "--format", "pdf")
    assert status == 0, err
    assert {"B1.pdf", "B1.html"} <= {path.name for path in (out / "sheets").iterdir()}


@pytest.mark.parametrize("name", REFUSED)
def test_a_broken_job_is_refused_in_words(name, run, job, tmp_path):
    (old, new), message = REFUSED[name]
    assert old in SMALL
    job.write_text(SMALL.replace(old, new, 1), encoding="utf-8")
    out = tmp_path / "out"
    out.mkdir()
    (out / "note.txt").write_bytes(b"mine")
    status, said, err = run("build", job, "--out", out)
    assert status == 2
    assert said == ""
    assert message in err
    assert "Traceback" not in err
    assert [path.name for path in out.iterdir()] == ["note.txt"]


def test_all_that_is_wrong_is_said_at_once(run, job, tmp_path):
    job.write_text(SMALL.replace('"2 kPa"', '"2 kPaa"').replace('"150 mm"', '"150"'), encoding="utf-8")
    status, _, err = run("build", job, "--out", tmp_path / "out")
    assert status == 2
    assert err.count("error: job.toml:") == 2
    assert not (tmp_path / "out").exists()


def test_unknown_mark(run, job, tmp_path):
    status, _, err = run("build", job, "--out", tmp_path / "out", "--only", "B2")
    assert status == 2
    assert err == "error: job.toml: no beam 'B2' to build; it can only be 'B1'\n"


def test_a_missing_job_and_a_file_for_a_folder(run, job, tmp_path):
    status, _, err = run("build", tmp_path / "none.toml", "--out", tmp_path / "out")
    assert status == 2
    assert "none.toml" in err
    status, _, err = run("build", job, "--out", job)
    assert status == 2
    assert "is a file; name a folder for the pack" in err


def test_templates_are_listed(run):
    status, out, _ = run("templates")
    assert status == 0
    assert "beam_loads 1.0" in out
    assert "design.deflection_limits.live" in out


def test_a_deflection_limit_that_is_not_kept(run, job, tmp_path):
    import json

    text = SMALL.replace(
        'material = "m"\n', 'material = "m"\n[beam.design]\ndeflection_limits = { total = 1e6 }\n'
    )
    job.write_text(text, encoding="utf-8")
    status, _, err = run("build", job, "--out", tmp_path / "out", "--format", "notebook")
    record = json.loads((tmp_path / "out" / "sheets" / "B1.json").read_text(encoding="utf-8"))
    (check,) = record["results"]["checks"]
    assert not check["passes"]
    assert check["ratio"] > 1
    assert status == 1
    assert "B1" in err


def test_a_beam_that_carries_nothing_has_its_sheet(run, job, tmp_path):
    bare = """
[[beam]]
mark = "B2"
line = [["0 m", "8 m"], ["4 m", "8 m"]]
[[column]]
mark = "C1"
at = ["0 m", "8 m"]
[[column]]
mark = "C2"
at = ["4 m", "8 m"]
"""
    job.write_text(SMALL + bare, encoding="utf-8")
    status, _, err = run("build", job, "--out", tmp_path / "out", "--only", "B2", "--format", "html")
    assert (status, err) == (0, "")
    assert "Nothing stands on this beam" in (tmp_path / "out" / "sheets" / "B2.html").read_text(
        encoding="utf-8"
    )
