"""Nothing the user had is lost: files changed by hand are kept aside, a failed build writes nothing."""

from __future__ import annotations

import pytest

from calcpack.files import OutputFolder, write_file
from calcpack.job.errors import CalcpackError


def tree(folder):
    files = (path for path in folder.rglob("*") if path.is_file())
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in files}


def test_written_files_are_replaced_and_dropped(tmp_path):
    folder = OutputFolder(tmp_path / "out")
    assert folder.write({"a.txt": b"1", "sheets/b.txt": b"2"}) == ()
    assert folder.write({"a.txt": b"3"}) == ()
    assert set(tree(tmp_path / "out")) == {"a.txt", "manifest.sha256"}


def test_a_part_leaves_the_rest(tmp_path):
    folder = OutputFolder(tmp_path / "out")
    folder.write({"a.txt": b"1", "sheets/b.txt": b"2"})
    folder.write({"a.txt": b"3"}, keep=True)
    assert set(folder.written_before()) == {"a.txt", "sheets/b.txt"}
    assert (tmp_path / "out" / "sheets" / "b.txt").read_bytes() == b"2"


def test_what_somebody_changed_is_kept_aside(tmp_path):
    folder = OutputFolder(tmp_path / "out")
    folder.write({"sheets/b.html": b"ours"})
    path = tmp_path / "out" / "sheets" / "b.html"
    path.write_bytes(b"with a remark")
    assert folder.write({"sheets/b.html": b"new"}) == ("sheets/b.kept-1.html",)
    assert path.read_bytes() == b"new"
    assert path.with_name("b.kept-1.html").read_bytes() == b"with a remark"
    path.write_bytes(b"another")
    assert folder.write({"sheets/b.html": b"newer"}) == ("sheets/b.kept-2.html",)


def test_what_somebody_changed_is_not_dropped(tmp_path):
    folder = OutputFolder(tmp_path / "out")
    folder.write({"a.txt": b"1", "b.txt": b"2"})
    (tmp_path / "out" / "b.txt").write_bytes(b"mine")
    folder.write({"a.txt": b"1"})
    assert (tmp_path / "out" / "b.txt").read_bytes() == b"mine"


def test_files_of_others_are_not_touched(tmp_path):
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "pack.pdf").write_bytes(b"somebody's own")
    kept = OutputFolder(tmp_path / "out").write({"pack.pdf": b"ours"})
    assert kept == ("pack.kept-1.pdf",)


def test_a_file_in_the_folder_s_place(tmp_path):
    (tmp_path / "out").write_bytes(b"")
    with pytest.raises(CalcpackError, match="is a file; name a folder for the pack"):
        OutputFolder(tmp_path / "out").check()


def test_a_write_that_fails_leaves_no_part(tmp_path):
    with pytest.raises(CalcpackError, match="cannot be written"):
        write_file(tmp_path / "missing" / "a.txt", b"")
    (tmp_path / "b").mkdir()
    with pytest.raises(CalcpackError, match="cannot be written"):
        write_file(tmp_path / "b", b"")
    assert [path.name for path in tmp_path.iterdir()] == ["b"]
