"""Documents set in other processes: in order, the same as here, and nothing is left when one of them ends."""

from __future__ import annotations

import datetime
import os
import signal
import subprocess
import sys
import time

import pytest

from calcpack.export import Press
from calcpack.export.typesetting import Setting, typeset
from calcpack.job.errors import CalcpackError

DATE = datetime.date(2026, 12, 1)


def setting(number: int, **changes) -> Setting:
    data = {
        "title": f"Signature {number}", "date": [2026, 12, 1], "width": 140.0, "height": 40.0,
        "name": [["t", f"A. Lind {number}"]], "licence": [], "role": [["t", "prepared"]], "time": [], "notes": [],
    }  # fmt: skip
    return Setting("signature.typ", data | changes, DATE, queries=("fits",))


@pytest.fixture
def several(monkeypatch):
    """A machine of several processors."""
    monkeypatch.setattr(os, "sched_getaffinity", lambda _: {0, 1, 2})


@pytest.mark.parametrize("count", [1, 5, 14])
def test_in_order_and_as_set_here(several, monkeypatch, count):
    monkeypatch.setattr("calcpack.export.press.REMEMBERED", 2)
    settings = [setting(number) for number in range(count)]
    here = [typeset(each) for each in settings]
    done = []
    with Press(count) as press:
        assert press.set_all(iter(settings), done=lambda: done.append(1)) == here
        assert len(done) == count
        assert [each.pdf for each in press.set_all(settings, pdf=False)] == [b""] * count
        assert press.set_all(settings) == here


def test_what_cannot_be_set_is_said_as_here(several):
    settings = [setting(number) for number in range(5)]
    settings[3] = setting(3, width="wide")
    with (
        Press(5) as press,
        pytest.raises(CalcpackError, match=r"the page design 'signature\.typ' cannot be set"),
    ):
        press.set_all(settings)


def test_a_process_ended_from_outside_is_said(several):
    with Press(5) as press:
        press.set_all([setting(number) for number in range(5)])
        for process in press._processes:
            for worker in list(process._processes.values()):
                os.kill(worker.pid, signal.SIGKILL)
        with pytest.raises(CalcpackError, match="a process that sets pages was ended from outside; see that"):
            press.set_all([setting(number) for number in range(5)])


LEFT_ALONE = """
import os, signal, sys
sys.path.insert(0, {folder!r})
from test_export_press import setting
from calcpack.export import Press

if __name__ == "__main__":
    os.sched_getaffinity = lambda _: {{0, 1}}
    with Press(6) as press:
        press.set_all([setting(number) for number in range(6)])
        print(*(pid for each in press._processes for pid in each._processes), flush=True)
        os.kill(os.getpid(), signal.SIGKILL)
"""


@pytest.mark.skipif(sys.platform != "linux", reason="looks processes up in /proc")
def test_no_process_outlives_the_one_it_works_for(tmp_path):
    script = tmp_path / "left.py"
    script.write_text(LEFT_ALONE.format(folder=os.path.dirname(__file__)), encoding="utf-8")
    done = subprocess.run([sys.executable, script], capture_output=True, text=True, check=False)
    workers = done.stdout.split()
    assert done.returncode == -signal.SIGKILL, done.stderr
    assert len(workers) == 2
    deadline = time.monotonic() + 20
    while left := [pid for pid in workers if os.path.exists(f"/proc/{pid}")]:
        assert time.monotonic() < deadline, left
        time.sleep(0.1)
