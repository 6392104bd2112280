"""The blocks of a sheet, checked: what a notebook shows, as frozen plain data.

A notebook's outputs may come from anybody's hands. Here they become typed blocks or a
``ValueError``; text loses its unseen characters, drawings whatever could act.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Annotated, Any, Literal, NamedTuple, Union

from pydantic import (
    AfterValidator,
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Field,
    TypeAdapter,
    model_validator,
)

from calcpack.export.svg import safe_svg
from calcpack.export.text import clean, clean_lines

RUN_KINDS = ("text", "math", "strong", "em", "code", "line")


class Run(NamedTuple):
    """A stretch of running text: plain, a formula (LaTeX), strong, stressed, code, or a line's number."""

    kind: str
    text: str


def read_runs(value: object) -> tuple[Run, ...]:
    """Running text from its data form: a string, or a list of strings and one-key objects.

    Raises
    ------
    ValueError
        It is something else.

    Examples
    --------
    >>> read_runs(["of ", {"strong": "B1"}])
    (Run(kind='text', text='of '), Run(kind='strong', text='B1'))
    """
    if isinstance(value, str):
        return (Run("text", clean(value)),) if value else ()
    if not isinstance(value, list | tuple):
        raise ValueError("running text is a string or a list")
    runs: list[Run] = []
    for item in value:
        if isinstance(item, Run):
            runs.append(item)
        elif isinstance(item, str):
            runs.append(Run("text", clean(item)))
        elif isinstance(item, dict) and len(item) == 1:
            ((kind, text),) = item.items()
            if kind not in RUN_KINDS or not isinstance(text, str):
                raise ValueError(f"running text has no part {str(kind)[:40]!r}")
            runs.append(Run(kind, text if kind == "math" else clean(text)))
        else:
            raise ValueError("a part of running text is a string or an object with one key")
    return tuple(runs)


def plain_text(runs: Sequence[Run]) -> str:
    """Running text without its formulas' form, for a bookmark or a spoken alternative."""
    return "".join(run.text for run in runs)


Words = Annotated[str, AfterValidator(clean)]
Runs = Annotated[tuple[Run, ...], BeforeValidator(read_runs)]
Drawing = Annotated[str, AfterValidator(safe_svg)]


class _Block(BaseModel):
    model_config = ConfigDict(frozen=True, extra="ignore", strict=False)


class Heading(_Block):
    """A numbered heading of a section."""

    type: Literal["heading"]
    level: Literal[1, 2] = 1
    number: Words = ""
    text: Runs


class Text(_Block):
    """A paragraph."""

    type: Literal["text"]
    runs: Runs
    role: Literal["body", "note", "caution", "unsafe"] = "body"


class Listing(_Block):
    """A list of short paragraphs."""

    type: Literal["list"]
    items: tuple[Runs, ...]


class Line(_Block):
    """A numbered line of calculation; ``rows`` are rows of LaTeX chunks a formula may be broken between."""

    type: Literal["line"]
    no: Words
    kind: Literal["take", "hence", "require"]
    says: Runs = ()
    symbol: str = ""
    rows: tuple[tuple[str, ...], ...] = ()
    cite: Words = ""
    origin: Words = ""
    from_: tuple[Words, ...] = Field(default=(), alias="from")
    like: Words = ""  # the line whose formula this one has, with other values
    passes: bool | None = None
    alt: Words = ""


class Step(_Block):
    """A step of a derivation: words, then complete equations."""

    says: Runs = ()
    rows: tuple[str, ...] = ()
    alt: Words = ""


class Derivation(_Block):
    """Steps that lead to a formula."""

    type: Literal["derivation"]
    steps: tuple[Step, ...]


class TableColumn(_Block):
    """Head and alignment of a table's column."""

    head: Runs
    align: Literal["left", "right", "center"] = "left"


class Table(_Block):
    """A table; ``strong_rows`` counts from 0."""

    type: Literal["table"]
    caption: Runs = ()
    columns: Annotated[tuple[TableColumn, ...], Field(min_length=1)]
    rows: tuple[tuple[Runs, ...], ...] = ()
    strong_rows: tuple[int, ...] = ()

    @model_validator(mode="after")
    def _even(self) -> Table:
        if any(len(row) != len(self.columns) for row in self.rows):
            raise ValueError("a table's row has as many cells as the table has columns")
        return self


class Ratio(_Block):
    """One line of a schedule with ratio bars."""

    says: Runs
    demand: Words
    resistance: Words
    ratio: Annotated[float, Field(ge=0, allow_inf_nan=False)]
    passes: bool


class Ratios(_Block):
    """A schedule of what is shown, with ratio bars."""

    type: Literal["ratios"]
    rows: tuple[Ratio, ...]


class Figure(_Block):
    """A drawing in SVG, its lettering at true size at ``width_mm``; paper leaves out one for a ``screen``."""

    type: Literal["figure"]
    svg: Drawing
    alt: Words
    caption: Runs = ()
    width_mm: Annotated[float, Field(gt=0, le=2000)] = 160.0
    screen: bool = False


class SignoffRow(_Block):
    """Somebody who answers for the sheet."""

    role: Words
    name: Words = ""
    licence: Words = ""
    date: Words = ""


class Signoff(_Block):
    """Places to sign."""

    type: Literal["signoff"]
    rows: tuple[SignoffRow, ...]


class Facts(_Block):
    """Labels and their values."""

    type: Literal["facts"]
    rows: tuple[tuple[Runs, Runs], ...]


class NotationRow(NamedTuple):
    """A symbol (LaTeX), what it means, its unit."""

    symbol: str
    meaning: Runs
    unit: Words


class Notation(_Block):
    """The symbols of a sheet."""

    type: Literal["notation"]
    rows: tuple[NotationRow, ...]


class Columns(_Block):
    """Blocks side by side."""

    type: Literal["columns"]
    widths: tuple[Annotated[float, Field(gt=0)], ...] = ()
    columns: tuple[tuple[Block, ...], ...]

    @model_validator(mode="after")
    def _fitting(self) -> Columns:
        if self.widths and len(self.widths) != len(self.columns):
            raise ValueError("columns have one width each, or none")
        return self


class Plain(_Block):
    """What a cell printed, letter by letter; ``numbered`` counts the lines, as of a file."""

    type: Literal["plain"]
    text: Annotated[str, AfterValidator(clean_lines)]
    numbered: bool = False


class Formula(_Block):
    """A formula on a line of its own (LaTeX)."""

    type: Literal["formula"]
    latex: str
    alt: Words = ""


class Picture(_Block):
    """A raster image (PNG, base64)."""

    type: Literal["picture"]
    png: str
    alt: Words


Block = Annotated[
    Union[  # noqa: UP007 - a forward reference in Columns needs the spelt form
        Heading, Text, Listing, Line, Derivation, Table, Ratios, Figure, Columns, Signoff, Facts, Notation,
        Plain, Formula, Picture,
    ],
    Field(discriminator="type"),
]  # fmt: skip
Columns.model_rebuild()
_ADAPTER: TypeAdapter[tuple[Block, ...]] = TypeAdapter(tuple[Block, ...])


def read_blocks(value: Any) -> tuple[Block, ...]:
    """Blocks from their data form.

    Raises
    ------
    ValueError
        Something in them is not as agreed; the message names the block and the key.

    Examples
    --------
    >>> read_blocks([{"type": "text", "runs": "Live load governs."}])[0].role
    'body'
    """
    return _ADAPTER.validate_python(value)


def every(blocks: Sequence[Block]) -> Iterator[Block]:
    """All blocks in reading order, those inside columns too."""
    for block in blocks:
        yield block
        if isinstance(block, Columns):
            for column in block.columns:
                yield from every(column)


def levelled(blocks: Sequence[Block]) -> tuple[Block, ...]:
    """Blocks whose headings skip no level: one of level 2 before any of level 1 becomes one of level 1.

    Examples
    --------
    >>> part = read_blocks([{"type": "heading", "level": level, "text": "a"} for level in (2, 1, 2)])
    >>> [heading.level for heading in levelled(part)]
    [1, 1, 2]
    """
    seen = False

    def raised(block: Block) -> Block:
        nonlocal seen
        if isinstance(block, Columns):
            columns = tuple(tuple(raised(part) for part in column) for column in block.columns)
            return block.model_copy(update={"columns": columns})
        if isinstance(block, Heading):
            if not seen and block.level == 2:
                return block.model_copy(update={"level": 1})
            seen = True
        return block

    return tuple(raised(block) for block in blocks)


def runs_of(block: Block) -> Iterator[Run]:
    """All running text of one block, columns excepted."""
    match block:
        case Heading(text=runs) | Text(runs=runs):
            yield from runs
        case Listing(items=items):
            for item in items:
                yield from item
        case Line(says=runs) | Figure(caption=runs):
            yield from runs
        case Derivation(steps=steps):
            for step in steps:
                yield from step.says
        case Table():
            yield from block.caption
            for column in block.columns:
                yield from column.head
            for row in block.rows:
                for cell in row:
                    yield from cell
        case Ratios(rows=ratios):
            for ratio in ratios:
                yield from ratio.says
        case Facts(rows=facts):
            for label, value in facts:
                yield from label
                yield from value
        case Notation(rows=symbols):
            for symbol in symbols:
                yield from symbol.meaning


def formulas_of(blocks: Sequence[Block]) -> Iterator[str]:
    """Every LaTeX formula of the blocks, in reading order."""
    for block in every(blocks):
        yield from (run.text for run in runs_of(block) if run.kind == "math")
        match block:
            case Line():
                if block.symbol:
                    yield block.symbol
                for row in block.rows:
                    yield from row
            case Derivation(steps=steps):
                for step in steps:
                    yield from step.rows
            case Formula(latex=latex):
                yield latex
            case Notation(rows=symbols):
                yield from (row.symbol for row in symbols)
