"""One table of the job file, or one row of a table file, with the place of everything in it.

Here pydantic's findings become problems in the words of the trade.
"""

from __future__ import annotations

import types
import typing
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Literal, TypeVar

from pydantic import BaseModel, ValidationError
from pydantic.fields import FieldInfo
from pydantic_core import ErrorDetails

from calcpack.job.errors import CalcpackError, Problem, nearest
from calcpack.job.fields import shown
from calcpack.job.model import Place

Model = TypeVar("Model", bound=BaseModel)
MOST = 200  # problems told at once

EXAMPLES = {
    "number": 'number = "2417"',
    "title": 'title = "Loft floor"',
    "date": "date = 2026-12-01",
    "mark": 'mark = "B1"',
    "corners": 'corners = ["A1", "B2"]',
    "line": 'line = ["A1", "B1"]',
    "at": 'at = "A1"',
    "case": 'case = "live"',
    "shape": 'shape = "rectangle"',
    "name": 'name = "ULS 1"',
    "limit": 'limit = "strength"',
    "beam": 'beam = "B1"',
}


class Problems:
    """What was found wrong so far; told together in the end.

    Examples
    --------
    >>> problems = Problems()
    >>> problems.add(Problem("the span is zero", file="a.toml", line=3))
    >>> problems.tell()
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: a.toml:3: the span is zero
    """

    def __init__(self) -> None:
        self.found: list[Problem] = []

    def add(self, problem: Problem) -> None:
        """Note a problem; where they become too many to read, tell them before the end."""
        self.found.append(problem)
        if len(self.found) >= MOST:
            self.tell()

    def tell(self) -> None:
        """Raise what was found, each problem once, file by file and line by line."""
        files = list(dict.fromkeys(problem.file for problem in self.found))
        order = {file: place for place, file in enumerate(files)}
        found = sorted(dict.fromkeys(self.found), key=lambda each: (order[each.file], each.line or 0))
        if found:
            raise CalcpackError(*found)


@dataclass(frozen=True)
class Entry:
    """A table or row with its place.

    Parameters
    ----------
    mark : str or None
        What it is, as the user would say it: "beam B1"; None for what there is only one of.
    data : dict
        Its keys and values as given.
    file, line : str, int
        Where it stands.
    lines : dict
        Dotted key -> line; array items by their number.
    prefix : str
        What stands before its keys in a message: "basis.", "load.".
    """

    mark: str | None
    data: dict[str, Any]
    file: str
    line: int | None
    lines: Mapping[str, int] = field(default_factory=dict)
    prefix: str = ""

    def line_of(self, key: str) -> int | None:
        """The line of a key, of what it stands in, or of the whole."""
        while key:
            if key in self.lines:
                return self.lines[key]
            key = key.rpartition(".")[0]
        return self.line

    def problem(self, message: str, remedy: str = "", key: str = "") -> Problem:
        """A problem at one of its keys, or with the whole."""
        name = f"{self.prefix}{self._spoken(key)}".rstrip(".") or None
        return Problem(message, remedy, self.file, self.line_of(key), self.mark, name)

    def _spoken(self, key: str) -> str:
        """A key without the numbers of list items: their line tells them apart."""
        parts: list[str] = []
        inner: Any = self.data
        for part in key.split("."):
            if isinstance(inner, list):
                inner = inner[int(part)] if part.isdigit() and int(part) < len(inner) else None
            else:
                parts.append(part)
                inner = inner.get(part) if isinstance(inner, dict) else None
        return ".".join(parts)

    def placed(self, error: CalcpackError, key: str = "") -> Problem:
        """What a function that knows no place found wrong with one of its keys."""
        return self.problem(error.problems[0].message, error.problems[0].remedy, key)

    @property
    def place(self) -> Place:
        """Where it stands, as the job keeps it."""
        return Place(file=self.file, line=self.line)


def validated(model: type[Model], entry: Entry, problems: Problems) -> Model | None:
    """An entry as a model of it, or None with its problems noted.

    Examples
    --------
    >>> from calcpack.job.raw import RawColumn
    >>> problems = Problems()
    >>> validated(RawColumn, Entry("column C1", {"mark": "C1", "att": "A1"}, "a.toml", 4), problems)
    >>> for problem in problems.found: print(problem)
    a.toml:4: column C1: at: this key is missing; write for example at = "A1"
    a.toml:4: column C1: att: there is no such key; did you mean 'at'?
    """
    try:
        return model.model_validate(entry.data, strict=True)
    except ValidationError as error:
        for detail in error.errors(include_url=False):
            message, remedy = _said(model, detail)
            problems.add(entry.problem(message, remedy, ".".join(map(str, detail["loc"]))))
        return None


def _said(model: type[BaseModel], detail: ErrorDetails) -> tuple[str, str]:
    """Message and remedy for one of pydantic's findings."""
    kind, value, context = detail["type"], detail["input"], detail.get("ctx", {})
    key = str(detail["loc"][-1])
    if kind == "calcpack":
        return context["message"], context["remedy"]
    if kind == "missing":
        return "this key is missing", f"write for example {EXAMPLES[key]}" if key in EXAMPLES else ""
    if kind == "extra_forbidden":
        return "there is no such key", nearest(key, _fields(_annotation(model, detail["loc"][:-1])))
    if kind == "literal_error":
        choices = _choices(_annotation(model, detail["loc"]))
        remedy = nearest(value, choices) if isinstance(value, str) else nearest("", choices)
        return f"{shown(value)} is none of the choices", remedy
    wanted = {
        "string_type": "a text in quotes",
        "bool_type": "true or false, without quotes",
        "float_type": "a plain number, without quotes",
        "list_type": 'a list, for example ["A1", "B1"]',
        "dict_type": "a table of keys and values",
        "model_type": "a table of keys and values",
        "date_type": "a date without quotes, for example 2026-12-01",
    }
    kind = "date_type" if kind.startswith("date") else kind
    return f"{shown(value)} does not fit here", f"give {wanted.get(kind, 'something else')}"


def _fields(model: type[BaseModel]) -> dict[str, FieldInfo]:
    return {info.alias or name: info for name, info in model.model_fields.items()}


def _annotation(model: type[BaseModel], loc: tuple[int | str, ...]) -> Any:
    """What a key is declared as; for an item of a list, the list's declaration."""
    inner: type[BaseModel] | None = model
    annotation: Any = model
    for part in loc:
        info = _fields(inner).get(str(part)) if inner else None
        if info is None:
            break
        annotation = info.annotation
        inner = annotation if isinstance(annotation, type) and issubclass(annotation, BaseModel) else None
    return annotation


def _choices(annotation: Any) -> list[str]:
    """The words a declaration allows."""
    if typing.get_origin(annotation) is Literal:
        return [str(choice) for choice in typing.get_args(annotation)]
    if typing.get_origin(annotation) in (typing.Union, types.UnionType, list, typing.Annotated):
        return [word for part in typing.get_args(annotation) for word in _choices(part)]
    return []
