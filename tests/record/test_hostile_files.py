"""Files made to do harm: each ends soon, in little memory, in words; nothing outside the folder is touched."""

from __future__ import annotations

import copy
import json
import os
import random
import subprocess
import sys
import zlib
from dataclasses import replace

import pypdf
import pytest

from calcpack.job.errors import CalcpackError
from calcpack.record.audit import audit_sheet, audit_target
from calcpack.record.auditing import confined
from calcpack.record.auditing.confined import PdfReading
from calcpack.record.auditing.files import find_target
from calcpack.record.auditing.reading import canonical

SECONDS, MEMORY = 2.0, 200  # of one processor; MB beyond what an audit of nothing takes
JUNK = [
    None, 0, -1, 1e300, -1e300, 1e-300, 5, 2**70, "", "x", "B1", "../x", "\ud800", [], {}, [1], [[]], [{}],
    {"a": 1}, True, "9" * 50, [None] * 3, {"op": "x"}, 1e15, 0.1,
]  # fmt: skip


def places(data, path=()):
    """Every place in plain data."""
    yield path
    entries = data.items() if isinstance(data, dict) else enumerate(data) if isinstance(data, list) else ()
    for key, each in entries:
        yield from places(each, (*path, key))


def spoilt(data, chance):
    """Plain data with one to three places changed for junk, or taken away."""
    data = copy.deepcopy(data)
    for _ in range(chance.choice([1, 1, 2, 3])):
        path = chance.choice([each for each in places(data) if each] or [()])
        if not path:
            break
        if chance.random() < 0.5:
            path = path[: chance.randrange(1, len(path) + 1)]
        holder = data
        for key in path[:-1]:
            holder = holder[key]
        if chance.random() < 0.15:
            del holder[path[-1]]
        else:
            holder[path[-1]] = copy.deepcopy(chance.choice(JUNK))
    return data


def cell_of(notebook):
    return next(each for each in notebook["cells"] if "parameters" in (each["metadata"].get("tags") or ()))


def with_parameters(notebook, change):
    """A notebook with its parameters changed."""
    notebook = copy.deepcopy(notebook)
    cell = cell_of(notebook)
    source = "".join(cell["source"])
    start, end = source.index("r'''") + 4, source.rindex("'''")
    cell["source"] = source[:start] + json.dumps(change(json.loads(source[start:end]))) + source[end:]
    return notebook


def as_bytes(data):
    return json.dumps(data, ensure_ascii=False).encode("utf-8", "surrogatepass")


def test_whatever_stands_in_a_sheets_files_ends_in_words(opened):
    sheets, digests, facts = opened
    read = {
        mark: (
            json.loads(files.record),
            json.loads(files.notebook),
            replace(files, pages=("B1 page 1 of 1",)),
        )
        for mark, files in sheets.items()
    }
    ends = {"audited": 0, "refused": 0}
    for number in range(150):
        chance = random.Random(number)
        record, notebook, files = read[chance.choice(sorted(read))]
        kind = chance.choice(["record", "parameters", "parameters", "notebook"])
        if kind == "record":
            files = replace(files, record=as_bytes(spoilt(record, chance)))
        elif kind == "parameters":
            changed = with_parameters(notebook, lambda data, chance=chance: spoilt(data, chance))
            files = replace(files, notebook=as_bytes(changed))
        else:
            files = replace(files, notebook=as_bytes(spoilt(notebook, chance)))
        try:
            audit_sheet(files, digests=digests, facts=facts)
            ends["audited"] += 1
        except CalcpackError:
            ends["refused"] += 1
    assert min(ends.values()) > 10


# ------------------------------------------------------------------ what it costs

# Every target in a process of its own, forked from one that has loaded what an audit needs.
_MEASURE = """
import json, os, resource, sys, tempfile, time
from calcpack import cli
import calcpack.record.audit, calcpack.record.audit_command, calcpack.job, scipy.sparse.linalg
from calcpack.record.auditing.confined import READING

def audited(target):
    out = tempfile.TemporaryFile("w+")
    child = os.fork()
    if not child:
        resource.setrlimit(resource.RLIMIT_CPU, (60, 60))
        os.dup2(out.fileno(), 1), os.dup2(out.fileno(), 2)
        sys.argv, status = ["calcpack", "audit", target], 0
        try:
            cli.main()
        except SystemExit as stop:
            status = int(stop.code or 0)
        except BaseException as error:
            print("Traceback", repr(error))
        READING.close()
        sys.stdout.flush()
        os._exit(status)
    _, status, used = os.wait4(child, 0)
    out.seek(0)
    return os.waitstatus_to_exitcode(status), used.ru_utime + used.ru_stime, used.ru_maxrss / 1024, out.read()

def pace():
    begun = time.process_time()
    sum(each * each % 7 for each in range(300_000))
    return max(1.0, (time.process_time() - begun) / 0.023)  # as in conftest

nothing = audited(sys.argv[1])
for target in sys.argv[2:]:
    status, spent, most, said = audited(target)
    print(json.dumps([target, status, spent / pace(), most - nothing[2], said]))
"""


@pytest.fixture(scope="module")
def costs(loft, tmp_path_factory):
    """What each audit costs: exit status, seconds of processor, MB beyond an audit of nothing; its words."""
    home = tmp_path_factory.mktemp("hostile")
    record = (loft / "sheets" / "B1.json").read_bytes()
    notebook = json.loads((loft / "sheets" / "B1.ipynb").read_bytes())
    page = (loft / "sheets" / "B1.html").read_bytes()
    targets = {}
    for kind, make in {**RECORDS, **HEAVY, **NOTEBOOKS, **PDFS, **SCREENS}.items():
        folder = home / str(len(targets))
        folder.mkdir()
        if kind in PDFS:
            targets[kind] = folder / "x.pdf"
            targets[kind].write_bytes(make())
            continue
        targets[kind] = folder / "B1.json"
        if kind in SCREENS:
            targets[kind].write_bytes(record)
            targets[kind].with_suffix(".html").write_bytes(make(page))
            continue
        made = make(notebook if kind in NOTEBOOKS else json.loads(record))
        content = (
            made if isinstance(made, bytes) else as_bytes(made) if kind in NOTEBOOKS else canonical(made)
        )
        targets[kind].write_bytes(record if kind in NOTEBOOKS else content)
        if kind in NOTEBOOKS:
            targets[kind].with_suffix(".ipynb").write_bytes(content)
    (home / "nothing.json").write_bytes(b"{}")
    done = subprocess.run(
        [sys.executable, "-c", _MEASURE, home / "nothing.json", *targets.values()],
        capture_output=True, text=True, check=True, cwd=home,
    )  # fmt: skip
    found = {target: rest for target, *rest in map(json.loads, done.stdout.splitlines())}
    assert not list(home.rglob("HARM"))
    return {kind: found[str(target)] for kind, target in targets.items()}


def bounded(costs, kind, status=2):
    found, spent, grown, said = costs[kind]
    assert found == status, said
    assert "Traceback" not in said
    assert spent < SECONDS + 1.0, spent  # what a busy machine adds
    assert grown < MEMORY, grown
    return said


def spread(count):
    return {f"{number:x}": 1 for number in range(count)}


def line(no, tree, **more):
    made = {
        "no": no, "kind": "hence", "symbol": "x", "says": "", "expression": tree, "inputs": {},
        "value": 1.0, "unit": "1", "shown": "1.000", "cite": "",
    }  # fmt: skip
    return made | more


def many(count, tree, **more):
    return [line(f"{i // 900 + 1}.{i % 900 + 1:02d}", tree, **more) for i in range(count)]


ONE = {"number": "1"}
LESS = {"op": "le", "args": [{"quantity": "1", "unit": "kN"}] * 2}
CHECK = {"name": "a", "demand": 2, "capacity": 1, "unit": "kN", "ratio": 1, "passes": True, "cite": "z"}
RECORDS = {
    "a key twice among many": lambda _: json.dumps(spread(150_000)).encode()[:-1] + b', "ff": 1}',
    "symbols without end": lambda data: data | {
        "lines": [line("1.01", {"op": "sum", "args": [ONE] * 190}, inputs=dict.fromkeys(spread(40_000), "1.01"))]
    },
    "towers of functions": lambda data: data | {
        "lines": many(180, {"op": "sum", "args": [{"op": "tan", "args": [{"op": "exp", "args": [ONE]}]}] * 60})
    },
    "a long text": lambda data: data | {"lines": many(90, ONE, shown=" " * 19_000)},
    "a digit of half a letter": lambda data: json.dumps(data | {"mark": "\ud800"}).encode(),
    "a span like no other": lambda data: data | {
        "results": data["results"] | {"supports": [0.0, 1e-300, 9.0], "spans": [1e-300, 9.0]}
    },
    "many empty tables": lambda _: b"[" + b"{}," * 600_000 + b"{}]",
}  # fmt: skip
HEAVY = {
    "requirements and checks": lambda data: data | {
        "lines": many(2_400, LESS, kind="require", symbol="", passes=True, shown="satisfied"),
        "results": data["results"] | {"checks": [CHECK] * 60},
    },
    "values from the analysis": lambda data: data | {
        "lines": many(2_400, {"quantity": "1", "unit": "m"}, kind="take", unit="m", origin="analysis"),
        "results": data["results"] | {"more": [0.5] * 100_000},
    },
}  # fmt: skip


AUDITED = ("a long text", "a span like no other")  # wrong through and through, but a record


@pytest.mark.parametrize("kind", RECORDS)
def test_a_record_made_to_cost(costs, kind):
    bounded(costs, kind, status=1 if kind in AUDITED else 2)


@pytest.mark.parametrize("kind", HEAVY)
def test_a_record_as_full_as_may_be(costs, kind):
    assert "more; --all" in bounded(costs, kind, status=1)


def outline(corners):
    from math import cos, pi, sin

    return [[10 + 9 * cos(2 * pi * k / corners), 10 + 9 * sin(2 * pi * k / corners)] for k in range(corners)]


def many_corners(data):
    one = data["panels"][0]
    one["panel"]["corners"], one["sides"] = outline(60), [1.0] * 60
    one["supported"], one["continuous"] = [True] * 60, [False] * 60
    return data | {"panels": [one] * 200}


NOTEBOOKS = {
    "no JSON": lambda _: b"\x80\x04cos\nsystem\n",
    "deep": lambda _: b'{"cells":' + b"[" * 5_000 + b"]" * 5_000 + b"}",
    "many": lambda _: b'{"cells":[' + b"[]," * 2_000_000 + b"[]]}",
    "large": lambda _: b'{"cells":["' + b"x" * 9_000_000 + b'"]}',
    "corners": lambda notebook: with_parameters(notebook, many_corners),
    "no beam": lambda notebook: with_parameters(notebook, lambda data: data | {"bearings": [{"at": "x"}]}),
    "a cell that would do harm": lambda notebook: notebook | {
        "cells": [
            {"cell_type": "code", "metadata": {"tags": ["parameters"]},
             "source": "P = r'''{}'''\nimport os; os.system('touch HARM')", "outputs": []}
        ]
    },
}  # fmt: skip


@pytest.mark.parametrize("kind", NOTEBOOKS)
def test_a_notebook_made_to_cost(costs, kind):
    assert "B1.ipynb" in bounded(costs, kind)


# ------------------------------------------------------------------ pages for the screen


def swamped(piece):
    """A page with four million letters more."""
    return lambda page: page.replace(b"</body>", piece * (4_000_000 // len(piece)) + b"</body>")


SCREENS = {
    "no text": lambda page: b"\xff" + page,
    "a very large page": lambda page: page + b" " * 21_000_000,
    **{
        f"page full of {piece.decode()!r}": swamped(piece)
        for piece in (
            b"<", b"<div ", b'<div class="line take" id="line-1.01">\n', b" on", b" onclick=", b'"', b"<b",
            b"&#x10ffff;", b"</div>\n", b"<!", b"\n", b'<div class="main">',
        )
    },
}  # fmt: skip


@pytest.mark.parametrize("kind", SCREENS)
def test_a_page_for_the_screen_made_to_cost(costs, kind):
    if kind in ("no text", "a very large page"):
        assert "B1.html" in bounded(costs, kind)
    else:  # what stands beside the lines need not be wrong
        found = costs[kind][0]
        assert found in (0, 1)
        assert ("B1.html" in bounded(costs, kind, status=found)) == bool(found)


# ------------------------------------------------------------------ PDFs


def pdf(
    *,
    attached=None,
    contents=None,
    name=b"(B1.json)",
    names=b"<</Names[%s 4 0 R]>>",
    kids=b"[3 0 R]",
    more=(),
):
    """A PDF of one page that carries one file, written by hand."""
    objects = [
        b"<</Type/Catalog/Pages 2 0 R/Names<</EmbeddedFiles %s>>>>" % (names.replace(b"%s", name)),
        b"<</Type/Pages/Kids %s/Count 1>>" % kids,
        b"<</Type/Page/Parent 2 0 R/MediaBox[0 0 100 100]/Contents 6 0 R"
        b"/Resources<</Font<</F<</Type/Font/Subtype/Type1/BaseFont/Helvetica>>>>>>>>",
        b"<</Type/Filespec/F%s/UF%s/EF<</F 5 0 R>>>>" % (name, name),
        attached or stream(zlib.compress(b"{}")),
        contents or stream(zlib.compress(b"BT /F 10 Tf 10 10 Td (B1 page 1 of 1) Tj ET")),
        *more,
    ]
    out, at = b"%PDF-1.7\n", []
    for number, each in enumerate(objects, start=1):
        at.append(len(out))
        out += b"%d 0 obj\n" % number + each + b"\nendobj\n"
    table = b"xref\n0 %d\n0000000000 65535 f \n" % (len(at) + 1) + b"".join(
        b"%010d 00000 n \n" % x for x in at
    )
    trailer = b"trailer <</Size %d/Root 1 0 R>>\nstartxref\n%d\n%%%%EOF\n" % (len(at) + 1, len(out))
    return out + table + trailer


def stream(data, filters=b"/FlateDecode"):
    return b"<</Filter%s/Length %d>>stream\n" % (filters, len(data)) + data + b"\nendstream"


def swollen(megabytes, what=b" "):
    """A stream that grows to so much."""
    packer = zlib.compressobj(9)
    return b"".join(packer.compress(what * 1_000_000) for _ in range(megabytes)) + packer.flush()


def packed(data):
    return stream(zlib.compress(data, 9))


TEXT = b"BT /F 10 Tf " + b"(aaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaa) Tj " * 1_000_000 + b"ET"
PDFS = {
    "an attached file of 400 MB": lambda: pdf(attached=stream(swollen(400))),
    "twice packed": lambda: pdf(attached=stream(zlib.compress(swollen(400), 9), b"[/FlateDecode/FlateDecode]")),
    "many large files": lambda: pdf(
        attached=stream(swollen(70)), names=b"<</Names[" + b"(B1.json) 4 0 R " * 300 + b"]>>"
    ),
    "many files": lambda: pdf(
        names=b"<</Names[" + b"".join(b"(B%d.json) 4 0 R " % n for n in range(20_000)) + b"]>>"
    ),
    "a page of 400 MB": lambda: pdf(contents=stream(swollen(400))),
    "a page of many words": lambda: pdf(contents=packed(TEXT)),
    "a page of nothing but depth": lambda: pdf(contents=packed(b"q " * 20_000_000)),
    "a page many times": lambda: pdf(
        contents=packed(TEXT[:200_000]), kids=b"[" + b"3 0 R " * 19_000 + b"]"
    ).replace(b"/Count 1", b"/Count 19000"),
    "names that lead to themselves": lambda: pdf(
        names=b"<</Kids[7 0 R]>>", more=(b"<</Kids[7 0 R 7 0 R 7 0 R]>>",)
    ),
    "names ever more": lambda: pdf(
        names=b"<</Kids[7 0 R]>>",
        more=(*(b"<</Kids[" + b"%d 0 R " % (8 + n) * 40 + b"]>>" for n in range(7)), b"<</Names[]>>"),
    ),
    "pages that lead to themselves": lambda: pdf(kids=b"[2 0 R 3 0 R]"),
    "an attached file that is none": lambda: pdf(attached=b"(text)"),
    "an attached file that is itself": lambda: pdf(attached=b"5 0 R"),
    "lists in lists": lambda: pdf(names=b"[" * 200_000 + b"]" * 200_000),
    "a table that leads to itself": lambda: (
        b"%PDF-1.7\nxref\n0 1\n0000000000 65535 f \ntrailer<</Size 1/Prev 9/Root 1 0 R>>\nstartxref\n9\n%%EOF"
    ),
    "objects without end": lambda: b"%PDF-1.7\n" + b"1 0 obj\n" * 1_000_000,
    "no PDF": lambda: b"%PDF-1.7\n" + bytes(range(256)) * 10_000,
}  # fmt: skip


@pytest.mark.parametrize("kind", PDFS)
def test_a_pdf_made_to_cost(costs, kind):
    assert "error: " in bounded(costs, kind)


def test_a_pdf_cut_off_anywhere_or_encrypted(loft, tmp_path):
    reading = PdfReading()
    whole = (loft / "pack.pdf").read_bytes()
    try:
        for part in (0.1, 0.5, 0.9, 0.999):
            with pytest.raises(
                CalcpackError, match=r"x\.pdf: it is no readable PDF: it is cut off or damaged"
            ):
                reading.attached(whole[: int(part * len(whole))], "x.pdf")
        writer = pypdf.PdfWriter(clone_from=str(loft / "sheets" / "J1.pdf"))
        writer.encrypt("x")
        writer.write(tmp_path / "e.pdf")
        with pytest.raises(CalcpackError, match="it is encrypted"):
            reading.attached((tmp_path / "e.pdf").read_bytes(), "x.pdf")
        # the end of the child is not the end of reading
        with pytest.raises(CalcpackError, match="more time or memory"):
            reading.texts(PDFS["a page of nothing but depth"](), "x.pdf")
        assert "B1" in "".join(reading.texts(whole, "x.pdf"))
        assert "B1.json" in reading.attached(whole, "x.pdf")
    finally:
        reading.close()


def test_names_inside_a_pdf_lead_nowhere(loft, tmp_path):
    writer = pypdf.PdfWriter(clone_from=str(loft / "sheets" / "J1.pdf"))
    for name in ("../../evil.toml", "/tmp/evil.csv", "a\\b.csv"):
        writer.add_attachment(name, b"format = 1\n")
    writer.write(tmp_path / "x.pdf")
    before = sorted(tmp_path.rglob("*"))
    audit = audit_target(tmp_path / "x.pdf", processes=1)
    assert "is no name of a file beside it" in " ".join(each.remark for each in audit.together.open)
    assert sorted(tmp_path.rglob("*")) == before


# ------------------------------------------------------------------ folders


def test_a_folder_leads_nowhere_either(loft, tmp_path):
    secret = tmp_path / "secret.json"
    secret.write_text('{"secret": 1}')
    folder = tmp_path / "out"
    (folder / "sheets").mkdir(parents=True)
    (folder / "sheets" / "B1.json").write_bytes((loft / "sheets" / "B1.json").read_bytes())
    names = ("../secret.json", str(secret), "sheets/B1.json\0", "x" * 5000, "sheets/link.ipynb")
    (folder / "sheets" / "link.ipynb").symlink_to(secret)
    (folder / "manifest.sha256").write_text("".join(f"{'0' * 64}  {name}\n" for name in names))
    audit = audit_target(folder, processes=1)
    remarks = {each.place: each.remark for each in audit.together.wrong}
    for name in names:
        assert remarks[name[:120]] == "the manifest names it, and it is not there", name
    (folder / "sheets" / "B2.json").symlink_to(secret)
    with pytest.raises(CalcpackError, match=r"B2\.json: it is a link that leads out of the folder"):
        find_target(folder)


def test_devices_and_pipes_are_no_files(tmp_path):
    os.mkfifo(tmp_path / "B1.json")
    with pytest.raises(CalcpackError, match="there is no"):
        find_target(tmp_path / "B1.json")
    with pytest.raises(CalcpackError, match="it is no file"):
        find_target(tmp_path)


def test_many_pages_are_read_in_parts(loft, monkeypatch):
    content = (loft / "pack.pdf").read_bytes()
    whole = confined.READING.texts(content, "pack.pdf")
    monkeypatch.setattr(confined, "_LARGE", 0)
    for count in (1, 2, 5):
        monkeypatch.setattr(os, "sched_getaffinity", lambda _, count=count: set(range(count)))
        told = []
        _, texts = confined.whole_pdf(
            content, "pack.pdf", lambda done, of, told=told: told.append((done, of))
        )
        assert texts == whole
        assert [done for done, _ in told] == sorted(done for done, _ in told)
        assert told[-1] == (len(whole), len(whole))
    with pytest.raises(CalcpackError, match=r"x\.pdf: it is no readable PDF"):
        confined.whole_pdf(b"%PDF-1.7 nothing", "x.pdf")
