"""Small packs to sign, people to sign them, and a way to die in the middle."""

from __future__ import annotations

import datetime
import functools
import json
import multiprocessing
import multiprocessing.process
import os
import random
import signal
import time
from collections.abc import Callable
from pathlib import Path

from calcpack.build import build_job
from calcpack.export.pack import Pack, Section
from calcpack.export.pack_pdf import BuiltPack, build_pack
from calcpack.files import OutputFolder
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Header, Person, Submission
from calcpack.record import sign as sign_module
from calcpack.record.fields import ready_to_sign
from calcpack.record.identity import Identity, load_identity, new_identity
from calcpack.record.numbers import NumbersResult
from calcpack.record.sign import Signing, sign_file
from calcpack.record.signatures import Trust
from calcpack.record.statement import statement_of

NOW = datetime.datetime(2026, 12, 1, 9, 5, tzinfo=datetime.UTC)
DAY = datetime.timedelta(days=1)
PASSPHRASE = "correct horse"
# How often each of signing, issuing and building is killed; CALCPACK_KILLS=50 for a long look.
KILLS = int(os.environ.get("CALCPACK_KILLS", "8"))
KIOSK = """\
format = 1
[job]
number = "7"
title = "Kiosk roof"
date = 2026-12-01
prepared = { name = "M. Ravn", licence = "SE 1184" }
checked = { name = "I. Okoro", licence = "SE 0972" }
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


@functools.lru_cache(maxsize=32)
def person(name: str, organisation: str = "", begins: int = -1, days: int = 365) -> Identity:
    """A test identity, valid from so many days after NOW."""
    stored, _ = new_identity(
        name, PASSPHRASE, NOW + begins * DAY, organisation=organisation, licence="SE 1184", days=days
    )
    path = Path(os.environ["PYTEST_TMP"]) / f"{abs(hash((name, organisation, begins, days)))}.p12"
    path.write_bytes(stored)
    return load_identity(str(path), lambda _what: PASSPHRASE)


def signing(role: str, identity: Identity, **more: object) -> Signing:
    return Signing(**{"role": role, "identity": identity, "now": NOW} | more)


def trust(*people: Identity, now: datetime.datetime = NOW) -> Trust:
    return Trust(tuple(each.signer.signing_cert for each in people), now)


@functools.lru_cache(maxsize=8)
def _built(header: Header, level: str, markup: bool) -> BuiltPack:
    note = Section.of("Basis", [{"type": "text", "runs": "Nothing but a place to sign."}])
    submission = Submission(check_level=level, allow_markup=markup, attachments=False)
    return build_pack(Pack(header, submission, "calcpack 0", "ab" * 32, sheets=(), basis=(note,)))


class Frozen(Header):
    """A title block that can be a key."""

    def __hash__(self) -> int:
        return hash(self.model_dump_json())


def out_folder(
    path: Path,
    *,
    number: str = "7",
    revision: str = "A",
    level: str = "second person",
    markup: bool = False,
    fails: bool = False,
    prepared: str = "",
    approved: str = "",
    more: str = "",
) -> Path:
    """An output folder as a build leaves it: pack, one sheet, job.json, manifest."""
    header = Frozen(
        number=number,
        title="Kiosk roof",
        revision=revision,
        date=datetime.date(2026, 12, 1),
        prepared=Person(name=prepared, licence="PE 77" if prepared else ""),
        approved=Person(name=approved),
    )
    built = _built(header, level, markup)
    line = {"no": "4.02", "kind": "require", "says": "Deflection", "passes": not fails}
    record = {"format": 1, "mark": "B1", "revision": revision, "lines": [line], "more": more}
    submission = Submission(check_level=level, allow_markup=markup, attachments=False)
    job = {
        "format": 1,
        "job": header.model_dump(mode="json"),
        "submission": submission.model_dump(mode="json"),
    }
    statement = statement_of(header, submission, [record])
    files = {
        "pack.pdf": ready_to_sign(built.pdf, built.signing, statement),
        "job.json": json.dumps(job).encode(),
        "sheets/B1.json": json.dumps(record).encode(),
        "sheets/B1.html": f"<!doctype html><title>B1</title><p>{revision} {more}</p>\n".encode(),
    }
    path.mkdir(parents=True, exist_ok=True)
    OutputFolder(path).write(files)
    return path


def killed_at_random(work: Callable[[], object], longest: float, chance: random.Random) -> bool:
    """Run work in a process of its own and kill it there after a random while; whether it was killed."""
    child = os.fork()
    if child == 0:  # pragma: no cover - the child's own life
        try:
            work()
        finally:
            os._exit(0)
    time.sleep(chance.random() * longest)
    os.kill(child, signal.SIGKILL)
    return os.WIFSIGNALED(os.waitpid(child, 0)[1])


# Signing sets type in threads, which a plain fork of a process that has used them would not survive.
FRESH = multiprocessing.get_context("forkserver")
FRESH.set_forkserver_preload(["calcpack.record.sign", "calcpack.build"])


def signed_by(pack: str, role: str, identity: str) -> None:
    """Sign in a process of its own, without the audit; exit status 3 where it is refused."""
    sign_module.audited = lambda _path: NumbersResult(True, "the audit passes")
    try:
        sign_file(Path(pack), signing(role, load_identity(identity, lambda _what: PASSPHRASE)))
    except CalcpackError:
        os._exit(3)


def build_pages(job: str, out: str) -> None:
    """Build the pages for the screen of a job."""
    build_job(Path(job), Path(out), formats=frozenset({"html", "notebook"}))


def signer(pack: Path, role: str, name: str) -> multiprocessing.process.BaseProcess:
    """A process that will sign."""
    path = pack.parent.parent / f"{name}.p12"
    if not path.exists():
        path.write_bytes(new_identity(name, PASSPHRASE, NOW - DAY)[0])
    return FRESH.Process(target=signed_by, args=(str(pack), role, str(path)))


def time_of(work: Callable[[], object]) -> float:
    begun = time.monotonic()
    work()
    return time.monotonic() - begun
