"""Records read as data, within bounds: nothing in them is run, and nothing in them is believed."""

from __future__ import annotations

import json
import math
import re
from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from calcpack.job.errors import CalcpackError

LARGEST_RECORD = 2_000_000  # bytes; the largest sheets have a tenth of it
LARGEST_NOTEBOOK = 8_000_000
MOST_ENTRIES = 300_000  # commas and opening brackets: it is they that cost memory
MOST_LINES = 3_000
MOST_INPUTS = 200  # of a line
_NUMBER = re.compile(r"[0-9]{1,3}\.[0-9]{2,3}")


@dataclass(frozen=True, slots=True)
class RecordLine:
    """A line as the record states it."""

    no: str
    kind: str
    symbol: str
    says: str
    expression: Mapping[str, Any]
    inputs: Mapping[str, str]
    value: float
    unit: str
    shown: str
    cite: str
    origin: str | None
    passes: bool | None

    @property
    def rank(self) -> tuple[int, int]:
        """Section and number within it."""
        section, number = self.no.split(".")
        return int(section), int(number)


@dataclass(frozen=True)
class Record:
    """A record as read: the data, the lines, and the very bytes."""

    data: Mapping[str, Any]
    content: bytes
    name: str
    lines: tuple[RecordLine, ...]

    @property
    def mark(self) -> str:
        """Of the beam."""
        return str(self.data["mark"])

    @property
    def results(self) -> Mapping[str, Any]:
        """As stated."""
        found: Mapping[str, Any] = self.data["results"]
        return found


def read_json(content: bytes, name: str, largest: int = LARGEST_RECORD) -> Any:
    """JSON of bounded size with finite numbers, no key twice.

    Raises
    ------
    CalcpackError
        It is none.

    Examples
    --------
    >>> read_json(b'{"a": [1, 2.5]}', "a.json")
    {'a': [1, 2.5]}
    >>> read_json(b'{"a": 1, "a": 2}', "a.json")
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: a.json: the key 'a' stands twice
    """

    def once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
        found = dict(pairs)
        if len(found) != len(pairs):
            keys = Counter(key for key, _ in pairs)
            twice = next(key for key, count in keys.items() if count > 1)
            raise CalcpackError(f"the key '{twice[:40]}' stands twice", file=name)
        return found

    def finite(text: str) -> float:
        value = float(text)
        if not math.isfinite(value):
            raise CalcpackError(f"{text[:40]} is no finite number", file=name)
        return value

    if len(content) > largest:
        raise CalcpackError(
            f"it has {len(content):,} bytes, more than the {largest:,} that are read", file=name
        )
    if content.count(b",") + content.count(b"[") + content.count(b"{") > MOST_ENTRIES:
        raise CalcpackError(f"it has more than the {MOST_ENTRIES:,} entries that are read", file=name)
    try:
        text = content.decode("utf-8")
        data = json.loads(text, object_pairs_hook=once, parse_float=finite, parse_constant=finite)
        if "\\ud" in text or "\\uD" in text:  # half of a letter is no text that a file can hold
            json.dumps(data, ensure_ascii=False).encode("utf-8")
        return data
    except (ValueError, RecursionError):
        raise CalcpackError("it is no JSON", file=name) from None


def read_record(content: bytes, name: str) -> Record:
    """A record, its shape checked; whether its numbers are right is for the audit to find.

    Parameters
    ----------
    content : bytes
    name : str
        The file's, for messages.

    Raises
    ------
    CalcpackError
        It is no record.

    Examples
    --------
    >>> read_record(b'{"format": 2}', "B1.json")
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: B1.json: format: it is 2; records of format 1 can be audited
    """
    data = read_json(content, name)
    if not isinstance(data, dict):
        raise CalcpackError("it is no record of a sheet", file=name)
    if data.get("format") != 1 or isinstance(data.get("format"), bool):
        raise CalcpackError(
            f"it is {data.get('format')!r:.40}",
            file=name,
            key="format",
            remedy="records of format 1 can be audited",
        )
    kinds = {
        "job": dict,
        "mark": str,
        "revision": str,
        "template": dict,
        "lines": list,
        "results": dict,
    }
    for key, kind in kinds.items():
        if not isinstance(data.get(key), kind):
            raise CalcpackError("it is missing, or of another kind", file=name, key=key)
    if extra := sorted(data.keys() - kinds.keys() - {"format"}):
        raise CalcpackError("a record has no such key", file=name, key=extra[0][:40])
    if not 0 < len(data["mark"]) <= 200:
        raise CalcpackError("a mark has at most 200 letters", file=name, key="mark")
    if len(data["lines"]) > MOST_LINES:
        raise CalcpackError(f"more than {MOST_LINES} lines", file=name, key="lines")
    lines = tuple(_line(each, name, place) for place, each in enumerate(data["lines"]))
    return Record(data, content, name, lines)


_TEXTS = ("no", "kind", "symbol", "says", "unit", "shown", "cite")
_PARTS = frozenset({*_TEXTS, "value", "inputs", "expression", "origin", "passes"})


def _line(data: object, name: str, place: int) -> RecordLine:
    if not isinstance(data, dict):
        raise CalcpackError("a line is a table of its parts", file=name, key=f"lines[{place}]")
    at = f"line {data['no']}" if isinstance(data.get("no"), str) else f"lines[{place}]"
    for key in _TEXTS:
        if not isinstance(data.get(key), str) or len(data[key]) > 20_000:
            raise CalcpackError("a text is expected", file=name, mark=at[:40], key=key)
    if not _NUMBER.fullmatch(data["no"]):
        raise CalcpackError("a line's number is written like 3.07", file=name, mark=at[:40], key="no")
    if data["kind"] not in ("take", "hence", "require"):
        raise CalcpackError("it is take, hence or require", file=name, mark=at, key="kind")
    value = data.get("value")
    if isinstance(value, bool) or not isinstance(value, int | float) or abs(value) > 1e300:
        raise CalcpackError("a number is expected", file=name, mark=at, key="value")
    inputs = data.get("inputs")
    if not isinstance(inputs, dict) or any(not isinstance(no, str) for no in inputs.values()):
        raise CalcpackError("symbols with line numbers are expected", file=name, mark=at, key="inputs")
    if len(inputs) > MOST_INPUTS:
        raise CalcpackError(f"more than {MOST_INPUTS} symbols", file=name, mark=at, key="inputs")
    if not isinstance(data.get("expression"), dict):
        raise CalcpackError("a formula is expected", file=name, mark=at, key="expression")
    origin, passes = data.get("origin"), data.get("passes")
    if not isinstance(origin, str | None):
        raise CalcpackError("a text is expected", file=name, mark=at, key="origin")
    if not isinstance(passes, bool | None):
        raise CalcpackError("true or false is expected", file=name, mark=at, key="passes")
    if extra := sorted(data.keys() - _PARTS):
        raise CalcpackError("a line has no such part", file=name, mark=at, key=extra[0][:40])
    return RecordLine(
        no=data["no"],
        kind=data["kind"],
        symbol=data["symbol"],
        says=data["says"],
        expression=data["expression"],
        inputs=inputs,
        value=float(value),
        unit=data["unit"],
        shown=data["shown"],
        cite=data["cite"],
        origin=origin,
        passes=passes,
    )


def canonical(data: Mapping[str, Any]) -> bytes:
    """A record as its file should hold it, byte for byte."""
    text = json.dumps(dict(data), ensure_ascii=False, indent=1, allow_nan=False, sort_keys=True)
    return (text + "\n").encode()


def compact(data: object) -> bytes:
    """Plain data as text without layout, keys sorted: equal where two pieces are, to the last digit."""
    return json.dumps(
        data, ensure_ascii=False, allow_nan=False, sort_keys=True, separators=(",", ":")
    ).encode()


def written_alike(one: bytes, other: bytes) -> bool:
    """Whether two ways to write the same data differ in spaces and ends of rows at most.

    Examples
    --------
    >>> written_alike(b'{"a": [\\n 1, 2]}', compact({"a": [1, 2]})), written_alike(b"[1.0]", compact([1]))
    (True, False)
    """
    return one.translate(None, b" \n") == other.translate(None, b" \n")
