"""Whatever single digit, link, hash or order is changed, the audit finds it and names it."""

from __future__ import annotations

import json
import random
import re
import shutil
from dataclasses import replace

import pytest

from calcpack.job.errors import CalcpackError
from calcpack.record.audit import audit_sheet, audit_target
from calcpack.record.auditing.copies import differences
from calcpack.record.auditing.given import RECORD
from calcpack.record.auditing.reading import canonical

EDITS = 300
FORGED = 60
RELINKED = 20


def other_digit(text: str, place: int, chance: random.Random) -> str:
    digit = chance.choice([each for each in "0123456789" if each != text[place]])
    return text[:place] + digit + text[place + 1 :]


def audited(files, opened):
    """Places and remarks of all that is wrong; an error counts as a finding in its own words."""
    _, digests, facts = opened
    try:
        audit, _ = audit_sheet(files, digests=digests, facts=facts)
    except CalcpackError as error:
        return [str(error)]
    return [f"{each.place} {each.remark}" for each in audit.wrong]


def place_of(before: bytes, after: bytes) -> str:
    """What an audit should name: the line or the path that differs, or the file."""
    one, other = json.loads(before), json.loads(after)
    found = next(iter(differences(one, other, "")), None)
    if found is None:
        return ".json"
    match = re.match(r"lines\[(\d+)\]", found[0])
    if match:
        return f"line {one['lines'][int(match[1])]['no']}"
    return found[0]


def test_untouched_sheets_are_not_blamed(opened):
    for files in opened[0].values():
        assert audited(files, opened) == []


@pytest.mark.slow
def test_any_single_digit_of_a_record_is_found_and_named(opened):
    chance = random.Random(20261201)
    sheets = opened[0]
    lost = []
    for _ in range(EDITS):
        mark = chance.choice(sorted(sheets))
        text = sheets[mark].record.decode()
        place = chance.choice([at for at, letter in enumerate(text) if letter in "0123456789"])
        edited = other_digit(text, place, chance).encode()
        found = audited(replace(sheets[mark], record=edited), opened)
        try:
            named = place_of(text.encode(), edited)
        except ValueError:  # two keys alike or a number with a leading zero: it is no record any more
            named = ".json"
        if not any(named in each for each in found):
            lost.append((mark, text[place - 40 : place + 10], named, found[:3]))
    assert lost == []


def numeric_places(data, path=()):
    """Every number of a record, and every line number and printed text: what can be worked out again."""
    if isinstance(data, dict):
        for key, each in data.items():
            yield from numeric_places(each, (*path, key))
    elif isinstance(data, list):
        for place, each in enumerate(data):
            yield from numeric_places(each, (*path, place))
    elif isinstance(data, float) and abs(data) > 1e-9 and path[0] in ("lines", "results"):
        yield path
    elif isinstance(data, str) and path[0] == "lines" and re.search("[0-9]", data):
        recomputed = path[-1] in ("shown", "no", "number", "quantity", "measured") or "inputs" in path
        yield from [path] if recomputed else []


def forged(data, path, chance):
    """The record with one digit of one number changed, within the first nine that count."""
    data = json.loads(json.dumps(data))
    holder = data
    for key in path[:-1]:
        holder = holder[key]
    old = holder[path[-1]]
    text = repr(old) if isinstance(old, float) else old
    digits = [at for at, letter in enumerate(text) if letter in "0123456789"]
    if "e" in text:
        digits = [at for at in digits if at < text.index("e")]
    first = next((at for at in digits if text[at] != "0"), digits[0])
    new = other_digit(text, chance.choice([at for at in digits if first <= at][:8]), chance)
    holder[path[-1]] = float(new) if isinstance(old, float) else new
    return data


def with_copy(notebook: bytes, record) -> bytes:
    """A notebook that holds this record: a forger changes both."""
    data = json.loads(notebook)
    for cell in data["cells"]:
        for output in cell.get("outputs", ()):
            if RECORD in output.get("data", {}):
                output["data"][RECORD] = record
    return json.dumps(data, ensure_ascii=False).encode()


def test_a_digit_changed_in_record_and_notebook_alike_is_found_by_recomputing(opened):
    chance = random.Random(7)
    sheets = opened[0]
    places = {mark: list(numeric_places(json.loads(sheets[mark].record))) for mark in sheets}
    lost = []
    for _ in range(FORGED):
        mark = chance.choice(sorted(sheets))
        path = chance.choice(places[mark])
        before = json.loads(sheets[mark].record)
        after = forged(before, path, chance)
        if after == before:
            continue
        files = replace(
            sheets[mark], record=canonical(after), notebook=with_copy(sheets[mark].notebook, after)
        )
        if not audited(files, opened) and not named_as_open(files, opened, after, path):
            lost.append((mark, path))
    assert lost == []


def named_as_open(files, opened, record, path):
    """A figure of the analysis beyond its printed digits: the audit says that nothing checks it."""
    audit, _ = audit_sheet(files, digests=opened[1], facts=opened[2])
    no = record["lines"][path[1]]["no"]
    places = [each.place for each in audit.open if "inside their formulas" in each.says]
    return path[-1] == "measured" and any(no in place for place in places)


def test_a_digit_on_the_printed_page_is_found(opened):
    chance = random.Random(3)
    for mark, files in opened[0].items():
        text = "\f".join(files.pages).replace("\u00a0", " ")
        lines = json.loads(files.record)["lines"]
        starts = [text.find(f"{line['no']} {line['says'][:8]}") for line in lines] + [len(text)]
        hence = [place for place, line in enumerate(lines) if line["kind"] == "hence"]
        for place in chance.sample(hence, 6):
            shown = "= " + lines[place]["shown"].replace("\u00a0", " ")
            part = text[starts[place] : starts[place + 1]]
            digit = next(at for at, letter in enumerate(shown) if letter.isdigit())
            changed = part.replace(shown, other_digit(shown, digit, chance))
            assert changed != part
            pages = (text[: starts[place]] + changed + text[starts[place + 1] :]).split("\f")
            found = audited(replace(files, pages=tuple(pages)), opened)
            no = lines[place]["no"]
            assert any(f"line {no} the pages" in each for each in found), (mark, no)


def rewritten(files, change):
    """The sheet with its record changed by a function."""
    data = json.loads(files.record)
    change(data)
    return replace(files, record=canonical(data))


def test_two_lines_in_the_other_order_are_found(opened):
    for files in opened[0].values():
        for place in (0, 3, 9):

            def swap(data, place=place):
                lines = data["lines"]
                lines[place], lines[place + 1] = lines[place + 1], lines[place]

            no = json.loads(files.record)["lines"][place]["no"]
            assert any(
                f"line {no} it stands behind" in each for each in audited(rewritten(files, swap), opened)
            )


def test_an_input_taken_from_another_line_is_found_also_where_the_value_is_the_same(opened):
    files = opened[0]["B1"]
    lines = json.loads(files.record)["lines"]
    done = 0
    for place, line in enumerate(lines):
        for symbol, no in line["inputs"].items():
            value = next(each["value"] for each in lines if each["no"] == no)
            for other in lines[:place]:
                fits = other["value"] == value and other["no"] != no and other["kind"] != "require"
                if fits and done < RELINKED:

                    def relink(data, place=place, symbol=symbol, other=other):
                        data["lines"][place]["inputs"][symbol] = other["no"]

                    found = audited(rewritten(files, relink), opened)
                    assert any(each.startswith(f"line {line['no']} '{symbol}' is taken") for each in found)
                    done += 1
    assert done == RELINKED


@pytest.mark.parametrize("where", ["template", "input", "manifest", "job.json", "notebook"])
def test_a_hash_or_a_file_of_the_pack_is_named_and_no_other(loft, tmp_path, where):
    folder = tmp_path / "out"
    shutil.copytree(loft, folder)
    home = {
        "template": folder / "sheets" / "B2.json",
        "input": folder / "sheets" / "B2.ipynb",
        "manifest": folder / "manifest.sha256",
        "job.json": folder / "job.json",
        "notebook": folder / "sheets" / "B2.ipynb",
    }[where]
    text = home.read_text(encoding="utf-8")
    at = {
        "template": lambda: text.index('"sha256": "') + 12,
        "input": lambda: text.index('"input": "') + 12,
        "manifest": lambda: text.index("  sheets/B2.json") - 5,
        "job.json": lambda: text.index('"W1"') + 24,
        "notebook": lambda: text.index('\\"force\\": ') + 12,
    }[where]()
    at = next(i for i in range(at, len(text)) if text[i].isdigit())
    home.write_text(other_digit(text, at, random.Random(1)), encoding="utf-8")
    audit = audit_target(folder, processes=1)
    wrong = {sheet.mark: [each.place for each in sheet.wrong] for sheet in audit.all if sheet.wrong}
    named = " ".join(place for places in wrong.values() for place in places)
    expected = {
        "template": "template",
        "input": "input",
        "manifest": "sheets/B2.json",
        "job.json": "job.json W1",
        "notebook": "sheets/B2.ipynb",
    }[where]
    assert expected in named
    assert set(wrong) <= {"B2", ""}
    assert not re.search(r"B1|J1\b", " ".join(wrong.get("", ())).replace("J1 on B2", ""))
