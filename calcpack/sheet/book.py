"""A calculation sheet in the making: its lines, its words and figures, in the order they are written."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from typing import Any

from pydantic import BaseModel

from calcpack.job.errors import CalcpackError
from calcpack.sheet import blocks as make
from calcpack.sheet.blocks import Block, Column, Drawing, Role, finite
from calcpack.sheet.display import System, display_unit, show
from calcpack.sheet.evaluation import Measured, evaluate, evaluate_in, in_base
from calcpack.sheet.expression import (
    COMPARISONS,
    Operation,
    Term,
    check_unit,
    expression,
    references,
)
from calcpack.sheet.glossary import look_up
from calcpack.sheet.latex import symbol_latex
from calcpack.sheet.line import SATISFIED, Line, in_unit_of, line_block, side_unit
from calcpack.sheet.operations import measured
from calcpack.sheet.record import Cite, cited, make_record
from calcpack.sheet.runs import Runs, check_runs, plain_text
from calcpack.sheet.screen import blocks_bundle, put, record_bundle
from calcpack.sheet.symbols import read_symbol
from calcpack.sheet.trees import shape_of


class Sheet:
    """A sheet, written from top to bottom.

    Parameters
    ----------
    mark : str
        What it is about: a beam's mark.
    system : "SI" or "US"
        How values are shown; they are kept in the units the author gives.

    Examples
    --------
    >>> sheet = Sheet("B1")
    >>> sheet.section("Load")
    >>> q = sheet.take("q", 5.5, "kPa", "Pressure", "panel P1 live")
    >>> S = sheet.take("S", 4.5, "m", "Short side", "panel P1 corners")
    >>> w = sheet.hence("w", q * S / 2, "kN/m", "Peak of the line load", cite="statics")
    >>> print(w.no, w.value, w.shown)
    1.03 12.375 12.38\u00a0kN/m
    >>> sheet.blocks[-1]["rows"][1]
    ['\\\\frac{5.50\\\\,\\\\text{kPa} \\\\cdot 4.50\\\\,\\\\text{m}}{2}']
    >>> sheet.require(w <= 15, "within what the formwork carries")
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: line 1.04: in 'w <= 15': w is a line load and 15 is a plain number
    """

    def __init__(self, mark: str, system: System = "SI") -> None:
        if system not in ("SI", "US"):
            raise CalcpackError(f"units are 'SI' or 'US', not {system!r:.40}")
        self.mark = mark
        self.system: System = system
        self.blocks: list[Block] = []
        self.lines: dict[str, Line] = {}
        self._sections = 0
        self._count = 0  # lines in this section
        self._words: dict[str, str] = {}
        self._sink: list[Block] = self.blocks
        self._repeating = False
        self._shapes: dict[tuple[str, ...], str] = {}  # of the lines shown in full, the first of each
        self._unseen = 0  # blocks from here on have not been shown

    # Words

    def section(self, title: Runs) -> None:
        """Begin the next section; lines are numbered within it."""
        self._sections += 1
        self._count = 0
        self._add(make.heading(1, str(self._sections), title))

    def subsection(self, title: Runs) -> None:
        """A heading within a section, without a number."""
        self._add(make.heading(2, "", title))

    def text(self, runs: Runs, role: Role = "body") -> None:
        """A paragraph: body, a note, a caution, or what is unsafe."""
        self._add(make.paragraph(runs, role))

    def items(self, items: Iterable[Runs]) -> None:
        """A list of short paragraphs."""
        self._add(make.listing(items))

    def facts(self, rows: Mapping[str, Runs] | Iterable[tuple[Runs, Runs]]) -> None:
        """Labels, each with its value."""
        self._add(make.facts(rows))

    # Lines

    def take(
        self,
        symbol: str,
        value: float,
        unit: str,
        says: Runs,
        origin: str,
        cite: Cite = "",
        *,
        word: str = "",
        given: bool = True,
        us: str = "",
    ) -> Line:
        """Bring in a value from the job, or from an analysis.

        Parameters
        ----------
        symbol : str
            Plain: "w_eq", "f'_c".
        value : float [unit]
        unit : str
            The record's.
        says : runs
            What it is.
        origin : str
            Where it comes from: its place in the job file, the analysis it is a result of.
        cite : str or Source
        word : str
            What the symbol stands for, for the notation; else the glossary says.
        given : bool
            Shown in full; False for a computed value, which is shown rounded.
        us : str
            Unit to show it in on a sheet in US units, in place of the usual one.
        """
        no = self._next()
        with _at(no):
            value = finite(value)
            shown = self._shown(value, unit, us, given)
            symbol = self._symbol(symbol, word)
            line = Line(
                no, "take", symbol, check_runs(says), measured(value, unit, rounded=not given),
                value, unit, shown,
                cite=cited(cite), origin=origin,
            )  # fmt: skip
        return self._keep(line)

    def hence(
        self, symbol: str, term: Term, unit: str, says: Runs, cite: Cite = "", *, word: str = "", us: str = ""
    ) -> Line:
        """Work a value out from lines before it.

        Parameters
        ----------
        symbol : str
        term : formula
            Written with lines: ``q * S / 2``; its order is kept.
        unit : str
            The result's; it has to fit.
        says : runs
            What is worked out, and why so.
        cite : str or Source
            Clause or law.
        word, us : str
            As in :meth:`take`.
        """
        no = self._next()
        with _at(no):
            formula = expression(term)
            drawn = references(formula)
            check_unit(unit)
            value = evaluate_in(formula, unit, self._sizes(drawn))
            shown = self._shown(value, unit, us, False)
            symbol = self._symbol(symbol, word)
            line = Line(no, "hence", symbol, check_runs(says), formula, value, unit, shown, cite=cited(cite))
        return self._keep(line)

    def require(self, comparison: Term, says: Runs, cite: Cite = "") -> Line:
        """State what must hold, ``M_u <= phi * M_n``; the line says whether it does."""
        no = self._next()
        with _at(no):
            formula = expression(comparison)
            if not isinstance(formula, Operation) or formula.name not in COMPARISONS:
                raise CalcpackError(
                    "what must hold is a comparison", remedy="write it with <=, <, >=, > or equal()"
                )
            sizes = self._sizes(references(formula))
            passes = evaluate(formula, sizes).value == 1.0
            unit = side_unit(formula, sizes, self.lines)
            left, right = (in_unit_of(unit, evaluate(side, sizes)) for side in formula.args)
            line = Line(
                no, "require", "", check_runs(says), formula, float(passes), "1", SATISFIED[passes],
                cite=cited(cite), passes=passes, sides=(left, right), side_unit=unit,
            )  # fmt: skip
        return self._keep(line)

    @contextmanager
    def repeating(self) -> Iterator[None]:
        """Lines whose formula stands on the sheet already, with other values, are shown in short.

        Such a line has its number, its words, its result and the line it is worked out as; the record
        keeps it like any other.

        Examples
        --------
        >>> from calcpack.sheet import PI
        >>> sheet = Sheet("B1")
        >>> sheet.section("Bars")
        >>> for face in ("sag", "hog"):
        ...     with sheet.repeating():
        ...         phi = sheet.take(f"phi_{face}", 20, "mm", "Bars", "chosen", word="bar")
        ...         area = sheet.hence(f"A_s,{face}", PI * phi**2 / 4, "mm^2", "Area")
        >>> sheet.blocks[-1]["like"], sheet.blocks[-1]["rows"]
        ('1.02', [['\\\\textbf{314\\xa0mm²}']])
        """
        before, self._repeating = self._repeating, True
        try:
            yield
        finally:
            self._repeating = before

    @property
    def failed(self) -> list[Line]:
        """The requirements that do not hold."""
        return [line for line in self.lines.values() if line.passes is False]

    # Tables and figures

    def table(
        self,
        columns: Sequence[Column],
        rows: Iterable[Sequence[Runs]],
        caption: Runs = "",
        strong_rows: Iterable[int] = (),
    ) -> None:
        """A table; a column is its head, or its head and how it is aligned.

        Examples
        --------
        >>> sheet = Sheet("B1")
        >>> sheet.table(["case", ("force", "right")], [["dead", "12.0 kN"]])
        >>> sheet.blocks[0]["columns"][1]
        {'head': 'force', 'align': 'right'}
        """
        self._add(make.table(columns, rows, caption, strong_rows))

    def ratios(self, rows: Iterable[Mapping[str, Any]]) -> None:
        """A schedule of checks with bars: ``says, demand, resistance, ratio, passes`` of each."""
        self._add(make.ratios(rows))

    def figure(self, drawing: Drawing, caption: Runs = "", *, screen: bool = False) -> None:
        """A drawing, with what it shows in words; one for the screen is left out on paper."""
        self._add(make.figure(drawing, caption, screen))

    def derivation(self, steps: Iterable[Any]) -> None:
        """Steps that lead to a formula, each with ``says``, ``rows`` of LaTeX, and ``alt``, spoken."""
        self._add(make.derivation(steps))

    @contextmanager
    def columns(self, widths: Sequence[float]) -> Iterator[Callable[[], None]]:
        """Blocks side by side; what is given moves on to the next column.

        Examples
        --------
        >>> sheet = Sheet("B1")
        >>> with sheet.columns([1, 2]) as next_column:
        ...     sheet.text("left")
        ...     next_column()
        ...     sheet.text("right")
        >>> [len(column) for column in sheet.blocks[0]["columns"]]
        [1, 1]
        """
        if self._sink is not self.blocks:
            raise CalcpackError("columns cannot stand inside columns")
        if not widths or any(finite(width) <= 0 for width in widths):
            raise CalcpackError("each column has a width above 0")
        filled: list[list[Block]] = [[] for _ in widths]
        place = 0

        def move_on() -> None:
            nonlocal place
            place += 1
            if place >= len(filled):
                raise CalcpackError(f"there are only {len(filled)} columns")
            self._sink = filled[place]

        self._sink = filled[0]
        try:
            yield move_on
        finally:
            self._sink = self.blocks
        self._add({"type": "columns", "widths": list(widths), "columns": filled})

    # The end of a sheet

    def notation(self) -> None:
        """Every symbol used so far with its meaning and unit; Latin letters first.

        Symbols that mean the same in several places (``x_II,sag``, ``x_II,hog``) stand there once, without
        the index that says where.
        """
        rows: dict[str, list[Any]] = {}
        alike: dict[tuple[str, str, str], set[str]] = {}
        for line in self.lines.values():
            if not line.symbol:
                continue
            found = None if line.symbol in self._words else look_up(line.symbol)
            symbol = found[0] if found else line.symbol
            meaning = found[1].text if found else self._words.get(line.symbol) or line.says
            unit = display_unit(line.unit, self.system)[0] or "–"
            rows.setdefault(symbol, [symbol_latex(symbol), meaning, unit])
            alike.setdefault((_stem(symbol), plain_text(meaning), unit), set()).add(symbol)
        for (stem, meaning, unit), symbols in alike.items():
            if len(symbols) > 1 and (stem not in rows or stem in symbols):
                for symbol in symbols:
                    del rows[symbol]
                rows[stem] = [symbol_latex(stem), meaning, unit]
        ranked = sorted(
            rows, key=lambda symbol: (symbol_latex(symbol).startswith("\\"), symbol.lower(), symbol)
        )
        self._add({"type": "notation", "rows": [rows[symbol] for symbol in ranked]})

    def signoff(self, rows: Iterable[Mapping[str, Any]]) -> None:
        """Places to sign: ``role, name, licence, date`` of each."""
        self._add(make.signoff(rows))

    def record(
        self,
        *,
        job: Mapping[str, Any] | BaseModel,
        template: Mapping[str, Any],
        results: Mapping[str, Any],
        revision: str | None = None,
    ) -> dict[str, Any]:
        """The sheet as plain data, checked to be whole.

        Parameters
        ----------
        job : mapping or Header
            The title block.
        template : mapping
            ``name, version, sha256``.
        results : mapping
            What other sheets and programs read.
        revision : str
            The job's own if left out.

        Returns
        -------
        dict
            ``format, job, mark, revision, template, lines, results``.
        """
        return make_record(
            list(self.lines.values()),
            self.mark,
            job=job,
            template=template,
            results=results,
            revision=revision,
        )

    def emit_record(
        self,
        *,
        job: Mapping[str, Any] | BaseModel,
        template: Mapping[str, Any],
        results: Mapping[str, Any],
        revision: str | None = None,
    ) -> None:
        """Put the record into the notebook: the last thing a sheet does."""
        self.show()
        put(record_bundle(self.record(job=job, template=template, results=results, revision=revision)))

    def show(self) -> None:
        """Show what has not been shown yet, in a notebook; elsewhere nothing happens."""
        fresh = self.blocks[self._unseen :]
        if fresh and put(blocks_bundle(fresh)):
            self._unseen = len(self.blocks)

    # Inside

    def _add(self, block: Block) -> None:
        self._sink.append(block)
        if self._sink is self.blocks:
            self.show()

    def _next(self) -> str:
        if not self._sections:
            raise CalcpackError("a line stands in a section", remedy="begin one with section('...')")
        return f"{self._sections}.{self._count + 1:02d}"

    def _keep(self, line: Line) -> Line:
        self._count += 1
        self.lines[line.no] = line
        self._add(line_block(line, self.lines, self.system, self._alike(line)))
        return line

    def _alike(self, line: Line) -> str:
        """The line shown in full that this one repeats with values of its own, if it may be shown so."""
        if line.kind == "take":
            return ""
        shape = line.kind, line.unit, line.cite, shape_of(line.expression)
        first = self._shapes.setdefault(shape, line.no)
        return first if self._repeating and first != line.no else ""

    def _symbol(self, symbol: str, word: str) -> str:
        name = read_symbol(symbol).name
        if word:
            self._words[name] = word
        return name

    def _shown(self, value: float, unit: str, us: str, exact: bool) -> str:
        check_unit(unit)
        try:
            return show(value, unit, self.system, exact, shown_in=us if us and self.system == "US" else None)
        except ValueError as error:
            raise CalcpackError(str(error)) from None

    def _sizes(self, drawn: Mapping[str, str]) -> dict[str, Measured]:
        """The values that a formula draws on; a line of another sheet is not one of them."""
        sizes = {}
        for symbol, no in drawn.items():
            line = self.lines.get(no)
            if line is None or line.symbol != symbol:
                raise CalcpackError(f"'{symbol}' of line {no} is not on this sheet")
            sizes[no] = in_base(line.value, line.unit)
        return sizes


def _stem(symbol: str) -> str:
    """A symbol without its last index, which says where: "x_II" of "x_II,sag", "x" of "x_hog"."""
    head, comma, _ = symbol.rpartition(",")
    return head if comma else symbol.partition("_")[0]


@contextmanager
def _at(no: str) -> Iterator[None]:
    """Say in which line something went wrong."""
    try:
        yield
    except CalcpackError as error:
        raise CalcpackError(*(problem.at(mark=f"line {no}") for problem in error.problems)) from None
