"""An executed notebook as a sheet's content: checked, complete, ready for any page."""

from __future__ import annotations

import json
import re
import types
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Any

import nbformat
from pydantic import BaseModel, ConfigDict, ValidationError

from calcpack.export.blocks import Block, Line, every, levelled, plain_text, read_blocks
from calcpack.export.markdown import markdown_blocks
from calcpack.export.svg import size_mm
from calcpack.export.text import clean
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Header, Submission

BLOCKS_MIME = "application/vnd.calcpack.blocks+json"
RECORD_MIME = "application/vnd.calcpack.record+json"
CAUTION = (
    "Prepared with a program; to be reviewed and sealed by a licensed engineer;"
    " the local code and authority govern."
)
_DOLLARS = re.compile(r"^\$+\s*(?:\\displaystyle\b)?(.*?)\$+$", re.S)


class _Data(BaseModel):
    model_config = ConfigDict(frozen=True, extra="ignore")


class TemplateStamp(_Data):
    """Which template made the sheet."""

    name: str
    version: str
    sha256: str = ""


class SheetNumbers(_Data):
    """The sheet's place in the pack: its first page and the count of all."""

    first: int = 1
    of: int = 0


class _Metadata(_Data):
    mark: str
    title: str
    header: Header
    submission: Submission = Submission()
    template: TemplateStamp
    input: str = ""
    program: str
    sheets: SheetNumbers = SheetNumbers()
    changed: tuple[str, ...] = ()


@dataclass(frozen=True)
class SheetContent:
    """All that a sheet shows, and what it carries.

    Parameters
    ----------
    mark, title : str
        The beam's mark and what the sheet is.
    header, submission : Header, Submission
    template : TemplateStamp
    input_digest, program : str
        Hash of the job's input; program and version.
    numbers : SheetNumbers
        Its place in the pack.
    blocks : tuple of blocks
        In order, checked and harmless.
    record : mapping or None
        The sheet's record.
    notebook : bytes
        The executed notebook as its file holds it.
    changed : frozenset of str
        Numbers of the lines that differ from the revision before, to be marked.
    """

    mark: str
    title: str
    header: Header
    submission: Submission
    template: TemplateStamp
    input_digest: str
    program: str
    numbers: SheetNumbers
    blocks: tuple[Block, ...]
    record: Mapping[str, Any] | None = None
    notebook: bytes = field(default=b"", repr=False)
    changed: frozenset[str] = frozenset()

    def numbered(self, numbers: SheetNumbers) -> SheetContent:
        """The same content at its place in a pack (its notebook's bytes stay as they are)."""
        return replace(self, numbers=numbers)

    @property
    def line_numbers(self) -> frozenset[str]:
        """Numbers of all its lines."""
        return frozenset(block.no for block in every(self.blocks) if isinstance(block, Line))

    @property
    def record_bytes(self) -> bytes:
        """The record as its file holds it, or nothing."""
        return b"" if self.record is None else record_bytes(self.record)


def record_bytes(record: Mapping[str, Any]) -> bytes:
    """A record as the bytes of its file: the same for the same record.

    Examples
    --------
    >>> record_bytes({"format": 1, "mark": "B1"})
    b'{\\n "format": 1,\\n "mark": "B1"\\n}\\n'
    """
    text = json.dumps(dict(record), ensure_ascii=False, indent=1, allow_nan=False, sort_keys=True)
    return (text + "\n").encode()


def notebook_bytes(notebook: nbformat.NotebookNode) -> bytes:
    """A notebook as the bytes of its file."""
    text: str = nbformat.writes(notebook)  # type: ignore[no-untyped-call]
    return (text + "\n").encode()


def sheet_content(notebook: nbformat.NotebookNode) -> SheetContent:
    """What an executed notebook shows.

    Parameters
    ----------
    notebook : nbformat.NotebookNode
        Version 4, executed without an error, with calcpack's metadata.

    Returns
    -------
    SheetContent

    Raises
    ------
    CalcpackError
        It is no sheet of calcpack, was not executed to its end, stopped with an error, or shows
        something that is not as agreed; every such place is named.
    """
    metadata = _metadata(notebook)
    problems = list(_not_executed(notebook))
    if problems:
        raise CalcpackError(*problems, mark=metadata.mark, remedy="execute the notebook to its end first")
    blocks: list[Block] = []
    record: Mapping[str, Any] | None = None
    for number, cell in enumerate(notebook.cells, start=1):
        try:
            if cell.cell_type == "markdown":
                blocks += markdown_blocks(cell.source)
            elif cell.cell_type == "code":
                for output in cell.outputs:
                    record = output.get("data", {}).get(RECORD_MIME, record)
                    blocks += _shown(output, number)
        except ValueError as error:
            raise CalcpackError(
                f"cell {number} shows something that is not as agreed: {_said(error)}", mark=metadata.mark
            ) from None
    numbers = [block.no for block in every(blocks) if isinstance(block, Line)]
    if twice := sorted({number for number in numbers if numbers.count(number) > 1}):
        raise CalcpackError(f"line {twice[0]} occurs twice", mark=metadata.mark)
    if record is not None and not isinstance(record, dict):
        raise CalcpackError("the sheet's record is not an object", mark=metadata.mark)
    return SheetContent(
        mark=clean(metadata.mark),
        title=clean(metadata.title),
        header=metadata.header,
        submission=metadata.submission,
        template=metadata.template,
        input_digest=metadata.input,
        program=metadata.program,
        numbers=metadata.sheets,
        blocks=(*_unmet(blocks), *levelled(blocks)),
        record=None if record is None else types.MappingProxyType(_plain(record)),
        notebook=notebook_bytes(notebook),
        changed=frozenset(metadata.changed),
    )


def _unmet(blocks: Sequence[Block]) -> tuple[Block, ...]:
    """What a sheet says first where a requirement does not hold."""
    lines = [block for block in every(blocks) if isinstance(block, Line) and block.passes is False]
    if not lines:
        return ()
    runs: list[Any] = ["Not satisfied: "]
    for number, line in enumerate(lines):
        runs += ["; " if number else "", f"{plain_text(line.says)} (line ", {"line": line.no}, ")"]
    return read_blocks([{"type": "text", "role": "unsafe", "runs": [*filter(None, runs), "."]}])


def _metadata(notebook: nbformat.NotebookNode) -> _Metadata:
    found = notebook.get("metadata", {}).get("calcpack")
    if found is None:
        raise CalcpackError(
            "this notebook is not a sheet of calcpack: its metadata has no 'calcpack'",
            remedy="build it with 'calcpack', or fill a template of its own",
        )
    try:
        return _Metadata.model_validate(_plain(found))
    except ValidationError as error:
        raise CalcpackError(f"the notebook's 'calcpack' metadata is not as agreed: {_said(error)}") from None


def _not_executed(notebook: nbformat.NotebookNode) -> Iterator[str]:
    for number, cell in enumerate(notebook.cells, start=1):
        if cell.cell_type != "code":
            continue
        for output in cell.get("outputs", ()):
            if output.output_type == "error":
                said = f"{output.get('ename', '')}: {output.get('evalue', '')}"
                yield f"cell {number} stopped with an error: {said}"
        if cell.source.strip() and cell.get("execution_count") is None:
            yield f"cell {number} has not been executed"


def _shown(output: Mapping[str, Any], number: int) -> tuple[Block, ...]:
    """Blocks of one output: calcpack's own, else the richest plain form there is.

    What a cell writes to its error stream is left out: it tells of the machine, not of the beam.
    """
    if output["output_type"] == "stream":
        text = output["text"].rstrip()
        return read_blocks([{"type": "plain", "text": text}]) if output["name"] == "stdout" and text else ()
    data: Mapping[str, Any] = output.get("data", {})
    said = str(data.get("text/plain", "")).strip()
    if BLOCKS_MIME in data:
        return read_blocks(data[BLOCKS_MIME]["blocks"] if isinstance(data[BLOCKS_MIME], dict) else None)
    if RECORD_MIME in data:
        return ()
    alt = said if said and not said.startswith("<") else f"picture shown by cell {number}"
    if svg := data.get("image/svg+xml"):
        width = size_mm(svg)[0] or 120.0
        return read_blocks([{"type": "figure", "svg": svg, "alt": alt, "width_mm": min(width, 400.0)}])
    if png := data.get("image/png"):
        return read_blocks([{"type": "picture", "png": png, "alt": alt}])
    if "text/markdown" in data:
        return markdown_blocks(data["text/markdown"])
    if (latex := data.get("text/latex")) and (match := _DOLLARS.match(latex.strip())):
        return read_blocks([{"type": "formula", "latex": match[1].strip(), "alt": said}])
    return read_blocks([{"type": "plain", "text": said}]) if said else ()


def _plain(value: Any) -> Any:
    """Notebook nodes as plain dictionaries."""
    if isinstance(value, Mapping):
        return {str(key): _plain(item) for key, item in value.items()}
    if isinstance(value, list | tuple):
        return [_plain(item) for item in value]
    return value


def _said(error: ValueError) -> str:
    """A validation error in one line, with the place in the data."""
    if not isinstance(error, ValidationError):
        return str(error)
    first = error.errors(include_url=False, include_context=False, include_input=False)[0]
    place = ".".join(str(part) for part in first["loc"])
    return f"{place}: {first['msg'].removeprefix('Value error, ')}" if place else first["msg"]
