"""What the README shows is so."""

from __future__ import annotations

import re
from pathlib import Path

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.notebook.templates import find_template

ROOT = Path(__file__).parent.parent.parent
README = (ROOT / "README.md").read_text(encoding="utf-8")


def test_the_small_job_is_a_job(tmp_path):
    text, _ = re.findall(r"```toml\n(.*?)```", README, flags=re.S)
    (tmp_path / "job.toml").write_text(text, encoding="utf-8")
    framed = frame(read_job(tmp_path / "job.toml"))
    assert list(framed.beams) == ["B1"]
    assert framed.applied["live"] == 36.0


def test_the_national_file_is_one(tmp_path):
    text, annex = re.findall(r"```toml\n(.*?)```", README, flags=re.S)
    (tmp_path / "our_annex.toml").write_text(annex, encoding="utf-8")
    beam = 'mark = "B1"\n'
    named = text.replace(
        beam, f'{beam}template = "concrete_beam_en1992"\ndesign = {{ national = "our_annex.toml" }}\n'
    )
    (tmp_path / "job.toml").write_text(named, encoding="utf-8")
    job = read_job(tmp_path / "job.toml")
    template = find_template("concrete_beam_en1992", tmp_path)
    (given,) = (template.settle(each.design, each.mark, job.data_files)["national"] for each in job.beams)
    assert (given["values"]["gamma_C"], given["values"]["delta_c_dev"]) == (1.4, 0.005)
    assert given["cover"]["XC1"] == 0.02


def test_the_two_commands_name_what_is_there():
    commands = re.findall(r"<!-- (\w+) -->\n```sh\n(.*?)\n```", README, flags=re.S)
    assert [name for name, _ in commands] == ["build", "tests"]
    for _, command in commands:
        assert "\n" not in command
        assert "constraints.txt" in command
    assert (ROOT / "examples" / "rope_walk" / "job.toml").is_file()


def test_pinned_versions_are_pinned():
    lines = (ROOT / "constraints.txt").read_text(encoding="utf-8").splitlines()
    assert all(re.fullmatch(r"#.*|[A-Za-z0-9_.-]+==[^ ]+", line) for line in lines)
