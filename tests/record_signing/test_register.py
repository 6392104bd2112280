"""The register: one chain whatever happens, nothing overwritten, nothing issued twice or backwards."""

from __future__ import annotations

import json
import os
import random
import signal
import time

import pytest
import signing_packs as packs

from calcpack.job.errors import CalcpackError
from calcpack.record import issue as issue_module
from calcpack.record import sign as sign_module
from calcpack.record import verify as verify_module
from calcpack.record.identity import load_identity
from calcpack.record.issue import issue
from calcpack.record.listing import page, rows
from calcpack.record.locking import locked
from calcpack.record.numbers import NumbersResult
from calcpack.record.register import FILES, Register, open_register
from calcpack.record.revisions import backwards
from calcpack.record.sign import sign_file
from calcpack.record.verify import verify_file


@pytest.fixture(autouse=True)
def _quick(monkeypatch, tmp_path_factory):
    monkeypatch.setenv("PYTEST_TMP", str(tmp_path_factory.getbasetemp()))
    for module in (sign_module, verify_module, issue_module):
        monkeypatch.setattr(module, "audited", lambda _path: NumbersResult(True, "the audit passes"))


@pytest.fixture
def who():
    return packs.person("Maria Ravn")


@pytest.fixture
def ready(tmp_path, who):
    """Make a signed output folder."""

    def make(name, **more):
        out = packs.out_folder(tmp_path / name, **{"level": "self"} | more)
        sign_file(out / "pack.pdf", packs.signing("prepared", who))
        return out

    return make


def refusal(work, *words, **more):
    with pytest.raises(CalcpackError) as caught:
        work(*words, **more)
    return str(caught.value)


def test_an_issue_keeps_everything_and_says_so(ready, tmp_path, who):
    out = ready("out", fails=False)
    sign_file(out / "sheets" / "B1.html", packs.signing("prepared", who))
    done = issue(out, "for permit", packs.NOW)
    assert done.register.folder == tmp_path / "record"
    assert (done.entry.no, done.entry.revision, done.entry.purpose) == (1, "A", "for permit")
    files = done.register.files_of(done.entry)
    assert set(files) == {
        "pack.pdf", "job.json", "sheets/B1.json", "sheets/B1.html", "sheets/B1.html.prepared.p7s",
    }  # fmt: skip
    for name, sha256 in files.items():
        kept = done.register.stored(name, sha256)
        assert kept.read_bytes() == (out / name).read_bytes()
        assert kept.stat().st_mode & 0o222 == 0
    assert done.register.check() == ((), ())
    report = verify_file(out / "pack.pdf", packs.trust(who))
    assert "entry 1: revision A, issued 2026-12-01 for permit; the one issued last" in report.as_text()
    stored = done.register.stored("pack.pdf", done.entry.pack)
    assert "the one issued last" in verify_file(stored, packs.trust(who)).as_text()


def test_the_same_issue_twice_is_one_entry(ready):
    out = ready("out")
    first, second = (issue(out, "for permit", packs.NOW) for _ in range(2))
    assert (first.again, second.again) == (False, True)
    assert len(first.register.entries()) == 1
    assert issue(out, "for construction", packs.NOW).entry.no == 2


def test_a_further_signature_may_follow(ready, who):
    out = ready("out")
    issue(out, "for permit", packs.NOW)
    sign_file(out / "pack.pdf", packs.signing("approved", packs.person("Ana Lind")))
    assert [each.role for each in issue(out, "for permit", packs.NOW).entry.signatures] == [
        "prepared",
        "approved",
    ]


def test_a_revision_is_not_used_again(ready):
    issue(ready("one"), "for permit", packs.NOW)
    said = refusal(issue, ready("two", more="other numbers", prepared="Maria Ravn"), "for permit", packs.NOW)
    assert "revision A of job 7 was issued on 2026-12-01 with other content" in said


def test_no_way_back(ready, who):
    for revision in "AB":
        issue(ready(revision, revision=revision), "for permit", packs.NOW)
    said = refusal(issue, ready("again", revision="A"), "for construction", packs.NOW)
    assert "revision A of job 7 cannot be issued any more: revision B was issued after it" in said
    issue(ready("other", number="8", revision="A"), "for permit", packs.NOW)
    old = verify_file(ready("look", revision="A") / "pack.pdf", packs.trust(who))
    assert "with other signatures" in old.as_text() or "SUPERSEDED by revision B" in old.as_text()


@pytest.mark.parametrize(
    ("revision", "issued", "fine"),
    [
        ("B", ["A"], True), ("A", ["B"], False), ("AA", ["Z"], True), ("10", ["9"], True),
        ("9", ["10"], False),
        ("P02", ["P1"], True), ("C1", ["P3"], True), ("P4", ["P3", "C1"], False), ("b", ["A"], True),
        ("second", ["first issue!"], True), ("B", ["A", "C"], False), ("A", ["3"], True),
    ],
)  # fmt: skip
def test_the_order_of_revisions(revision, issued, fine):
    assert (backwards(revision, issued) == "") is fine


def test_what_is_not_issued(ready, tmp_path, who):
    assert "there is no folder" in refusal(issue, tmp_path / "none", "for permit", packs.NOW)
    unsigned = packs.out_folder(tmp_path / "unsigned")
    said = refusal(issue, unsigned, "for permit", packs.NOW)
    assert "nobody has signed the pack as prepared" in said
    assert "nobody has signed the pack as checked" in said
    named = packs.out_folder(tmp_path / "named", level="self", approved="Ana Lind")
    sign_file(named / "pack.pdf", packs.signing("prepared", who))
    assert "nobody has signed the pack as approved" in refusal(issue, named, "for permit", packs.NOW)
    out = ready("out")
    assert "needs a purpose" in refusal(issue, out, " ", packs.NOW)
    (out / "job.json").write_bytes(b"{}")
    (out / "sheets" / "B1.json").unlink()
    said = refusal(issue, out, "for permit", packs.NOW)
    assert "'job.json' is not what was built" in said
    assert "'sheets/B1.json' is missing" in said
    assert not (tmp_path / "record" / "register.jsonl").exists()


def test_numbers_that_do_not_pass_are_not_issued(ready, monkeypatch):
    monkeypatch.setattr(
        issue_module, "audited", lambda _path: NumbersResult(False, "the audit does not pass")
    )
    assert "is not issued: the audit does not pass" in refusal(issue, ready("out"), "for permit", packs.NOW)


def test_every_change_to_the_record_is_found(ready, tmp_path):
    for revision in "ABC":
        issue(ready(revision, revision=revision), "for permit", packs.NOW)
    register = Register(tmp_path / "record")
    good, chance = register.file.read_bytes(), random.Random(3)
    for _ in range(60):
        changed = bytearray(good)
        changed[chance.randrange(len(good))] ^= 1 << chance.randrange(8)
        register.file.write_bytes(changed)
        assert register.check()[0]
    lines = good.splitlines(keepends=True)
    for wrong in (lines[:1] + lines[2:], [lines[1], lines[0], lines[2]], [*lines, lines[2]], lines[1:]):
        register.file.write_bytes(b"".join(wrong))
        assert "does not follow the one before" in register.check()[0][0]
    register.file.write_bytes(good)
    for path in sorted((tmp_path / "record" / FILES).iterdir()):
        kept = path.read_bytes()
        os.chmod(path, 0o644)
        path.write_bytes(kept + b" ")
        assert register.check()[0], path
        path.unlink()
        assert register.check()[0], path
        path.write_bytes(kept)
    assert register.check() == ((), ())


def test_an_end_that_was_cut_off_is_missed(ready, tmp_path, who):
    for revision in "ABC":
        issue(ready(revision, revision=revision), "for permit", packs.NOW)
    register = Register(tmp_path / "record")
    good = register.file.read_bytes()
    lines = good.splitlines(keepends=True)
    for left in (2, 1, 0):
        register.file.write_bytes(b"".join(lines[:left]))
        problems, notes = register.check()
        assert problems == tuple(
            f"entry {no} was issued and is missing: the end of the register was cut off"
            for no in range(left + 1, 4)
        )
        assert "belong to no entry" in notes[0]
        said = refusal(issue, ready("again", revision="D"), "for permit", packs.NOW)
        assert "the end of the register was cut off" in said
        assert "was cut off" in verify_file(tmp_path / "A" / "pack.pdf", packs.trust(who)).as_text()
    register.file.write_bytes(good)
    slip = register.slip(2)
    assert slip.read_bytes() == lines[1]
    assert slip.stat().st_mode & 0o222 == 0
    slip.chmod(0o644)
    slip.write_bytes(lines[1].replace(b"permit", b"profit"))
    assert register.check()[0] == ("entry 2 is another than 'entries/0002.json' says",)
    slip.unlink()  # as after an issue that was interrupted, and in a register without slips
    assert register.check() == ((), ("not in 'entries' yet, the next issue puts them there: entry 2",))
    issue(ready("D", revision="D"), "for permit", packs.NOW)
    assert register.check() == ((), ())


def test_nothing_is_added_to_a_register_that_is_not_whole(ready, tmp_path):
    issue(ready("a"), "for permit", packs.NOW)
    file = tmp_path / "record" / "register.jsonl"
    file.write_bytes(file.read_bytes().replace(b"for permit", b"for profit"))
    said = refusal(issue, ready("b", revision="B"), "for permit", packs.NOW)
    assert "entry 1 was changed: its hash is another" in said


def test_the_list_is_read_by_people(ready):
    done = issue(ready("out", more="<b>", fails=False), "for <permit>", packs.NOW)
    (row,) = rows(done.register.entries())
    assert row[:7] == (
        "1", "2026-12-01 09:05:00 UTC", "7", "Kiosk roof", "A", "for <permit>",
        "prepared Maria Ravn (test identity)",
    )  # fmt: skip
    shown = page(done.register.entries())
    assert "for &lt;permit&gt;" in shown
    assert "<script" not in shown
    assert json.loads(done.register.file.read_text(encoding="utf-8"))["purpose"] == "for <permit>"
    assert "holds no register" in refusal(open_register, done.register.folder / "none")


# ------------------------------------------------------------------ many at once, and the end at any moment


def together(works):
    """Run works in processes of their own, all at once; their exit codes."""
    children = []
    for work in works:
        child = os.fork()
        if child == 0:  # pragma: no cover - the child's own life
            code = 1
            try:
                work()
                code = 0
            except CalcpackError:
                code = 3
            finally:
                os._exit(code)
        children.append(child)
    return [os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]) for child in children]


def test_eight_issue_at_once(ready, tmp_path):
    outs = [ready(f"out{number}", number=str(number)) for number in range(8)]
    assert together([lambda out=out: issue(out, "for permit", packs.NOW) for out in outs]) == [0] * 8
    register = Register(tmp_path / "record")
    assert sorted(entry.job for entry in register.entries()) == [str(number) for number in range(8)]
    assert register.check() == ((), ())


def test_of_two_that_issue_one_revision_one_is_told_why(ready, tmp_path):
    outs = [ready("one"), ready("two", prepared="Maria Ravn")]
    codes = together([lambda out=out: issue(out, "for permit", packs.NOW) for out in outs])
    assert sorted(codes) == [0, 3]
    assert len(Register(tmp_path / "record").entries()) == 1


def trusted(pack, *names):
    """Whom the signers of a pack are to be known by."""
    people = [
        load_identity(str(pack.parent.parent / f"{name}.p12"), lambda _what: packs.PASSPHRASE)
        for name in names
    ]
    return packs.trust(*people)


def test_two_sign_at_once(tmp_path):
    pack = packs.out_folder(tmp_path / "out") / "pack.pdf"
    first = packs.signer(pack, "prepared", "Maria Ravn")
    first.start()
    first.join()
    two = [packs.signer(pack, "checked", name) for name in ("Ivo Okoro", "Ana Lind")]
    for each in two:
        each.start()
    for each in two:
        each.join()
    assert sorted(each.exitcode for each in two) == [0, 3]
    report = verify_file(pack, trusted(pack, "Maria Ravn", "Ivo Okoro", "Ana Lind"))
    assert report.passes
    assert len(report.signatures) == 2


def test_a_lock_goes_with_the_one_who_holds_it(tmp_path):
    path = tmp_path / "lock"

    def hold():
        with locked(path):
            time.sleep(60)

    packs.killed_at_random(hold, 0.3, random.Random(1))
    with locked(path):
        path.unlink()  # replaced by its holder: whoever waits takes the new one
    with locked(path):
        assert path.exists()


def test_killed_while_signing(tmp_path):
    chance = random.Random(7)
    pack = packs.out_folder(tmp_path / "out", level="self") / "pack.pdf"
    built = pack.read_bytes()

    def whole():
        each = packs.signer(pack, "prepared", "Maria Ravn")
        each.start()
        each.join()

    whole()
    pack.write_bytes(built)
    longest, killed = packs.time_of(whole), 0
    for _ in range(packs.KILLS):
        pack.write_bytes(built)
        each = packs.signer(pack, "prepared", "Maria Ravn")
        each.start()
        time.sleep(chance.random() * longest)
        each.kill()
        each.join()
        killed += each.exitcode == -signal.SIGKILL
        assert pack.read_bytes() == built or verify_file(pack, trusted(pack, "Maria Ravn")).passes
    assert killed
    pack.write_bytes(built)
    whole()
    assert verify_file(pack, trusted(pack, "Maria Ravn")).passes


def test_killed_while_issuing(ready, tmp_path):
    chance = random.Random(11)
    register = Register(tmp_path / "record")
    longest = packs.time_of(lambda: issue(ready("first", number="0"), "for permit", packs.NOW))
    killed = 0
    for number in range(1, packs.KILLS + 1):
        out = ready(f"out{number}", number=str(number))
        was = packs.killed_at_random(lambda out=out: issue(out, "for permit", packs.NOW), longest, chance)
        killed, longest = killed + was, longest if was else 0.6 * longest  # the first issue takes longest
        assert register.check()[0] == ()
        issue(out, "for permit", packs.NOW)
    assert killed
    assert [entry.job for entry in register.entries()] == [str(number) for number in range(packs.KILLS + 1)]
    assert register.check()[0] == ()
