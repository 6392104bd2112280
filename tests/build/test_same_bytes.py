"""The same job gives the same bytes, in another folder, in another order of work."""

from __future__ import annotations

import shutil

from calcpack.build import build_job


def contents(folder):
    files = (path for path in folder.rglob("*") if path.is_file())
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in files}


def test_built_again_elsewhere(built, example_job, tmp_path):
    first = contents(built("rope_walk"))
    elsewhere = tmp_path / "a folder with a longer name"
    shutil.copytree(example_job("rope_walk").parent, elsewhere)
    build_job(elsewhere / "job.toml", tmp_path / "out")
    second = contents(tmp_path / "out")
    assert first.keys() == second.keys()
    assert [name for name in first if first[name] != second[name]] == []


def test_no_trace_of_the_machine(built):
    traces = [b"/tmp/", b"/home/", b"/root/", b"kernel-", b"127.0.0.1"]
    for name, data in contents(built("rope_walk")).items():
        if not name.endswith(".pdf"):  # compressed; their text comes from the same data
            assert [trace for trace in traces if trace in data] == [], name
