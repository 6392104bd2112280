"""Signing, verifying, issuing and comparing as a user types it."""

from __future__ import annotations

import json
import os
import sys

import pytest
import signing_packs as packs

from calcpack import cli


@pytest.fixture
def run(monkeypatch, capsys):
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
def people(run, tmp_path, monkeypatch):
    monkeypatch.setenv("CALCPACK_PASSPHRASE", "pw")
    for name, file in (("Maria Ravn", "a"), ("Ivo Okoro", "b")):
        status, out, err = run("identity", "new", "--name", name, "--out", tmp_path / f"{file}.p12")
        assert status == 0, err
        assert "without legal force" in out
    return tmp_path


def test_from_signing_to_the_register(run, people):
    """The whole way, with the audit as it is."""
    out, job = people / "out", people / "job.toml"
    job.write_text(packs.KIOSK, encoding="utf-8")
    status, _, err = run("build", job, "--out", out)
    assert status == 0, err
    a, b, pack = people / "a.p12", people / "b.p12", out / "pack.pdf"
    status, _, err = run("sign", pack, "--role", "checked", "--identity", b)
    assert (status, "nobody has signed this as prepared yet" in err) == (2, True)
    status, said, err = run("sign", pack, out / "sheets" / "B1.html", "--role", "prepared", "--identity", a)
    assert status == 0, err
    assert "B1.html.prepared.p7s: signed as prepared by Maria Ravn" in said
    status, _, err = run("sign", pack, "--role", "checked", "--identity", b)
    assert status == 0, err
    trust = ("--trust", people / "a.pem", "--trust", people / "b.pem")
    status, said, _ = run("verify", pack, out / "sheets" / "B1.html", *trust)
    assert status == 0, said
    assert "the audit of 1 sheets passes" in said
    status, said, err = run("issue", out, "--purpose", "for permit")
    assert (status, "entry 1: job 7, revision A" in said) == (0, True), err
    status, said, _ = run("verify", pack, *trust, "--json")
    report = json.loads(said)
    assert (status, report["passes"]) == (0, True)
    assert report["files"][0]["findings"][-1]["says"].endswith("the one issued last")
    status, said, _ = run("verify", pack)
    assert (status, "no trusted certificate was given" in said) == (1, True)
    record = ("--record", people / "record")
    status, said, _ = run("register", *record)
    assert (status, "Kiosk roof" in said, "for permit" in said) == (0, True, True)
    status, said, _ = run("register", *record, "--check")
    assert (status, "1 entries, every one and every stored file as it was entered" in said) == (0, True)
    status, _, _ = run("register", *record, "--html", people / "list.html")
    assert (status, (people / "list.html").read_bytes()[:15]) == (0, b"<!doctype html>")
    status, said, err = run("compare", "A", out, *record, "--csv", people / "changes.csv")
    assert (status, "unchanged: B1" in said) == (0, True), err
    register = people / "record" / "register.jsonl"
    register.write_bytes(register.read_bytes().replace(b"for permit", b"for profit"))
    status, said, _ = run("register", *record, "--check")
    assert (status, "not whole: entry 1 was changed" in said) == (1, True)


def test_where_the_passphrase_comes_from(run, people, tmp_path, monkeypatch):
    pack = packs.out_folder(tmp_path / "out", level="self") / "pack.pdf"
    words = ("sign", pack, "--role", "prepared", "--identity", people / "a.p12")
    monkeypatch.setenv("CALCPACK_PASSPHRASE", "wrong")
    status, _, err = run(*words)
    assert (status, "the passphrase does not open" in err) == (2, True)
    reading, writing = os.pipe()
    os.write(writing, b"pw\n")
    os.close(writing)
    status, _, err = run(*words, "--passphrase-fd", reading)
    os.close(reading)
    assert status == 0, err
    status, _, err = run(*words, "--passphrase-fd", "77")
    assert (status, "file descriptor 77 cannot be read" in err) == (2, True)
    monkeypatch.delenv("CALCPACK_PASSPHRASE")
    monkeypatch.setattr("sys.stdin", open(os.devnull, encoding="utf-8"))  # noqa: SIM115
    status, _, err = run(*words)
    sys.stdin.close()
    assert (status, "no passphrase was given" in err) == (2, True), err


def test_what_cannot_be_done_is_said_in_words(run, people, tmp_path):
    for words, said in (
        (("verify", tmp_path / "none.pdf"), "cannot be read"),
        (("verify", people / "a.pem"), "is nothing that calcpack signs"),
        (("verify", people / "a.p12", "--trust", people / "a.p12"), "holds no certificate"),
        (("issue", tmp_path / "none", "--purpose", "x"), "there is no folder"),
        (("register", "--record", tmp_path / "none"), "holds no register"),
        (("compare", tmp_path / "x", tmp_path / "y", "--record", tmp_path), "holds no register"),
        (("identity", "new", "--name", "A", "--out", people / "a.p12"), "is there already"),
    ):
        status, _, err = run(*words)
        assert (status, said in err, "Traceback" in err) == (2, True, False), err
