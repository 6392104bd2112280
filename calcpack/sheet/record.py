"""The record of a sheet: every line and the results as plain data, for audits and for other programs."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Annotated, Any, Literal

from pydantic import BaseModel, ConfigDict, Field, ValidationError

from calcpack.job.errors import CalcpackError, Problem
from calcpack.sheet.display import parse_shown
from calcpack.sheet.expression import COMPARISONS, Expression, Operation, references
from calcpack.sheet.line import SATISFIED, Line, line_record
from calcpack.sheet.symbols import read_symbol
from calcpack.sheet.trees import from_json
from calcpack.sheet.unit_text import exponents

FORMAT = 1
MOST_PROBLEMS = 50


@dataclass(frozen=True)
class Source:
    """Where something is stated: a document and its clause, and how surely.

    Examples
    --------
    >>> str(Source("ACI 318-19", "22.5.5.1")), str(Source("EN 1990", "6.10", note="from memory"))
    ('ACI 318-19 22.5.5.1', 'EN 1990 6.10 (from memory)')
    """

    document: str
    clause: str = ""
    note: str = ""

    def __str__(self) -> str:
        place = f"{self.document} {self.clause}".strip()
        return f"{place} ({self.note})" if self.note else place


Cite = str | Source | Sequence["str | Source"]


def cited(cite: Cite) -> str:
    """A source, or several, as printed beside a line."""
    return str(cite) if isinstance(cite, str | Source) else "; ".join(str(each) for each in cite)


def make_record(
    lines: Sequence[Line],
    mark: str,
    *,
    job: Mapping[str, Any] | BaseModel,
    template: Mapping[str, Any],
    results: Mapping[str, Any],
    revision: str | None = None,
) -> dict[str, Any]:
    """Put a sheet's record together; see :meth:`calcpack.sheet.Sheet.record`."""
    header = job.model_dump(mode="json") if isinstance(job, BaseModel) else dict(job)
    record = {
        "format": FORMAT,
        "job": header,
        "mark": mark,
        "revision": str(header.get("revision", "")) if revision is None else revision,
        "template": dict(template),
        "lines": [line_record(line) for line in lines],
        "results": dict(results),
    }
    plain: dict[str, Any] = _plain(record, "record")
    check_record(plain)
    return plain


def _plain(value: Any, where: str) -> Any:
    """Only what JSON has, numbers of numpy as numbers, no negative zero."""
    if value is None or isinstance(value, str | bool):
        return value
    if isinstance(value, Mapping):
        return {str(key): _plain(each, f"{where}.{key}") for key, each in value.items()}
    if hasattr(value, "tolist"):  # numpy scalars and arrays
        return _plain(value.tolist(), where)
    if isinstance(value, int):
        return value
    if isinstance(value, float):
        if not math.isfinite(value):
            raise CalcpackError(f"{where} is no finite number")
        return value + 0.0
    if isinstance(value, Sequence) and not isinstance(value, bytes | bytearray):
        return [_plain(each, f"{where}[{place}]") for place, each in enumerate(value)]
    raise CalcpackError(f"{where} is not plain data: {value!r:.60}")


def write_json(data: Mapping[str, Any]) -> str:
    """Data as canonical text: keys in their order, floats in their shortest form, one final newline.

    Examples
    --------
    >>> print(write_json({"b": 0.1, "a": "kN·m"}), end="")
    {
     "b": 0.1,
     "a": "kN·m"
    }
    """
    return json.dumps(data, ensure_ascii=False, allow_nan=False, indent=1) + "\n"


class _Shape(BaseModel):
    model_config = ConfigDict(extra="forbid", strict=True)


Finite = Annotated[float, Field(allow_inf_nan=False)]
Text = Annotated[str, Field(max_length=20_000)]


class _LineShape(_Shape):
    no: Annotated[str, Field(pattern=r"^[0-9]{1,3}\.[0-9]{2,3}$")]
    kind: Literal["take", "hence", "require"]
    symbol: Annotated[str, Field(max_length=40)]
    says: Text
    expression: dict[str, Any]
    inputs: dict[str, str]
    value: Finite
    unit: Annotated[str, Field(max_length=40)]
    shown: Annotated[str, Field(max_length=120)]
    cite: Text
    origin: Text | None = None
    passes: bool | None = None


class _TemplateShape(_Shape):
    name: Text
    version: Text
    sha256: Text


class _RecordShape(_Shape):
    format: Literal[1]
    job: dict[str, Any]
    mark: Annotated[str, Field(min_length=1, max_length=200)]
    revision: Text
    template: _TemplateShape
    lines: Annotated[list[_LineShape], Field(max_length=10_000)]
    results: dict[str, Any]


def check_record(record: object) -> None:
    """Whether a record is built as a record is; what its numbers are worth is for the audit to say.

    Parameters
    ----------
    record : plain data
        As read from JSON, from wherever.

    Raises
    ------
    CalcpackError
        One problem for each thing that is wrong, the line's number as its key.

    Examples
    --------
    >>> check_record({"format": 2})
    Traceback (most recent call last):
        ...
    calcpack.job.errors.CalcpackError: format: Input should be 1
    job: Field required
    mark: Field required
    revision: Field required
    template: Field required
    lines: Field required
    results: Field required
    """
    try:
        shape = _RecordShape.model_validate(record)
    except ValidationError as error:
        found = error.errors(include_url=False, include_input=False)[:MOST_PROBLEMS]
        raise CalcpackError(
            *(Problem(each["msg"], key=".".join(str(part) for part in each["loc"])) for each in found)
        ) from None
    problems: list[Problem] = []
    earlier: dict[str, _LineShape] = {}
    for line in shape.lines:
        try:
            _check_line(line, earlier)
        except (CalcpackError, ValueError) as error:
            problems.append(Problem(str(error), key=f"line {line.no}"))
        earlier.setdefault(line.no, line)
        if len(problems) >= MOST_PROBLEMS:
            break
    if problems:
        raise CalcpackError(*problems)


def _check_line(line: _LineShape, earlier: Mapping[str, _LineShape]) -> None:
    if line.no in earlier:
        raise CalcpackError("its number is given twice")
    for symbol, no in line.inputs.items():
        if no not in earlier:
            raise CalcpackError(f"'{symbol}' is taken from line {no}, which does not come before it")
        if earlier[no].symbol != symbol or earlier[no].kind == "require":
            raise CalcpackError(f"'{symbol}' is not what line {no} gives")
    formula = from_json(line.expression, line.inputs)
    if references(formula) != line.inputs:
        raise CalcpackError("its inputs are not what its formula draws on")
    if (line.origin is not None) != (line.kind == "take") or (line.passes is not None) != (
        line.kind == "require"
    ):
        raise CalcpackError("it has an origin that only a 'take' has, or a verdict that only a 'require' has")
    dimension = exponents(line.unit)
    if line.kind == "require":
        _check_requirement(line, formula)
        return
    if read_symbol(line.symbol).name != line.symbol:
        raise CalcpackError(f"its symbol '{line.symbol}' is not written plainly")
    if isinstance(formula, Operation) and formula.name in COMPARISONS:
        raise CalcpackError("a comparison gives no value")
    if line.kind == "take" and line.inputs:
        raise CalcpackError("a value brought in draws on no other line")
    if exponents(parse_shown(line.shown)[1]) != dimension:
        raise CalcpackError(f"'{line.shown}' is not shown in a unit like {line.unit}")


def _check_requirement(line: _LineShape, formula: Expression) -> None:
    if not isinstance(formula, Operation) or formula.name not in COMPARISONS:
        raise CalcpackError("what must hold is a comparison")
    assert line.passes is not None
    if line.value != float(line.passes) or line.shown != SATISFIED[line.passes] or line.unit != "1":
        raise CalcpackError("its value, what is printed and its verdict do not say the same")
    if line.symbol:
        raise CalcpackError("a requirement has no symbol")


def read_record(text: str) -> dict[str, Any]:
    """A record from JSON text, checked as :func:`check_record` does.

    Raises
    ------
    CalcpackError
        The text is no JSON, gives a key twice, or is no record.
    """

    def once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
        if len({key for key, _ in pairs}) != len(pairs):
            raise CalcpackError("the record gives a key twice")
        return dict(pairs)

    try:
        record = json.loads(text, object_pairs_hook=once)
    except (ValueError, RecursionError):
        raise CalcpackError("the record is no JSON") from None
    check_record(record)
    return dict(record)
