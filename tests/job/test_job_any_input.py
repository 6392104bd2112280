"""Whatever a file holds, it is read or refused with a CalcpackError; nothing else comes out."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from jobs import SOUND, write

from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.job.units import parse_quantity

ODD = [
    "0",
    "-1.5",
    "nan",
    "true",
    '""',
    '"x y"',
    "[]",
    "[[]]",
    '["A1", 3]',
    "{}",
    '{ a = "1 m" }',
    "2026-12-01",
    "07:30:00",
]
KEY = re.compile(r"^(\S+ = )(.*)$", re.MULTILINE)


def read_or_refused(path: Path) -> bool:
    """Whether the job was read; what refuses it has to say why."""
    try:
        read_job(path)
    except CalcpackError as error:
        problems = error.problems
    else:
        return True
    assert problems
    assert all(problem.message for problem in problems)
    return False


@pytest.mark.parametrize("value", ODD)
def test_an_odd_value_at_every_key(value: str, tmp_path: Path) -> None:
    refusals = 0
    for match in KEY.finditer(SOUND):
        text = SOUND[: match.start()] + match[1] + value + SOUND[match.end() :]
        refusals += not read_or_refused(write(tmp_path, text))
    assert refusals > 20


@settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    st.integers(0, len(SOUND)),
    st.integers(0, 60),
    st.text(max_size=8) | st.sampled_from(['"', "[", "]]", "\n", "#"]),
)
def test_a_piece_put_in_place_of_another(tmp_path: Path, start: int, length: int, piece: str) -> None:
    text = SOUND[:start] + piece + SOUND[start + length :]
    read_or_refused(write(tmp_path, text.encode("utf-8", "surrogatepass")))


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(st.binary(max_size=200))
def test_any_bytes(tmp_path: Path, content: bytes) -> None:
    assert not read_or_refused(write(tmp_path, content))


@settings(max_examples=100, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(st.text(max_size=120))
def test_any_table(tmp_path: Path, text: str) -> None:
    start = SOUND.index("[[panel]]"), SOUND.index("[[beam]]")
    job = 'panels = "panels.csv"\n' + SOUND[: start[0]] + SOUND[start[1] :]
    path = write(tmp_path, job)
    tmp_path.joinpath("panels.csv").write_bytes(text.encode("utf-8", "replace"))
    read_or_refused(path)
    tmp_path.joinpath("panels.csv").write_bytes(b"mark,corners,live\n" + text.encode("utf-8", "replace"))
    read_or_refused(path)


@settings(deadline=None)  # the first unit that is not of every day loads pint
@given(st.text("0123456789 .-+eE'\"/ftinmkNPa*^²·,", max_size=30))
def test_text_that_looks_like_a_quantity(text: str) -> None:
    for kind in ("length", "pressure"):
        try:
            value = parse_quantity(text, kind)
        except CalcpackError:
            continue
        assert value == value  # no nan
        assert abs(value) != float("inf")
