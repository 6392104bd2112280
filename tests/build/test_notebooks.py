"""The notebooks outside of a build: exported by Jupyter's own command, run again, opened as they stand."""

from __future__ import annotations

import json
import shutil
import subprocess
import sys

import nbformat
import pytest

from calcpack.notebook.templates import find_template, template_names


def command(*words, cwd):
    done = subprocess.run(
        [sys.executable, "-m", *map(str, words)], cwd=cwd, capture_output=True, text=True, timeout=300
    )
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout


@pytest.mark.parametrize(("exporter", "ending"), [("calcpack_html", "html"), ("calcpack_pdf", "pdf")])
def test_nbconvert_gives_the_same_sheet(exporter, ending, built, tmp_path):
    sheets = built("rope_walk") / "sheets"
    shutil.copy(sheets / "B7.ipynb", tmp_path)
    command("nbconvert", "--to", exporter, "B7.ipynb", cwd=tmp_path)
    assert (tmp_path / f"B7.{ending}").read_bytes() == (sheets / f"B7.{ending}").read_bytes()


def test_a_sheet_s_notebook_runs_again_with_the_same_outputs(built, tmp_path):
    shutil.copy(built("rope_walk") / "sheets" / "B7.ipynb", tmp_path)
    said = command("pytest", "-q", "-p", "no:cacheprovider", "--nbval", "B7.ipynb", cwd=tmp_path)
    assert "14 passed" in said


def test_an_altered_output_would_be_noticed(built, tmp_path):
    notebook = nbformat.read(built("rope_walk") / "sheets" / "B7.ipynb", as_version=4)
    for cell in notebook.cells:
        for output in cell.get("outputs", []):
            if "text/html" in output.get("data", {}):
                output["data"]["text/html"] = output["data"]["text/html"].replace("13.16", "13.17")
    nbformat.write(notebook, tmp_path / "B7.ipynb")
    done = subprocess.run(
        [sys.executable, "-m", "pytest", "-q", "-p", "no:cacheprovider", "--nbval", "B7.ipynb"],
        cwd=tmp_path, capture_output=True, text=True, timeout=300,
    )  # fmt: skip
    assert done.returncode == 1
    assert "13.17" in done.stdout


@pytest.mark.parametrize("name", template_names())
def test_a_shipped_template_runs_as_it_stands(name, tmp_path):
    template = find_template(name, tmp_path)
    (tmp_path / "template.ipynb").write_text(template.notebook, encoding="utf-8")
    said = command("pytest", "-q", "-p", "no:cacheprovider", "--nbval-lax", "template.ipynb", cwd=tmp_path)
    assert "passed" in said


def test_parameters_stand_in_the_notebook_as_data(built):
    notebook = nbformat.read(built("rope_walk") / "sheets" / "B7.ipynb", as_version=4)
    (cell,) = [cell for cell in notebook.cells if "parameters" in cell.metadata.get("tags", ())]
    assert cell.source.startswith("PARAMETERS = r'''{")
    assert cell.source.endswith("}'''")
    assert json.loads(cell.source[len("PARAMETERS = r'''") : -3])["mark"] == "B7"
    assert cell.source.count("'") == 6
