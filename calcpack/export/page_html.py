"""A sheet for the screen: one file, no script, no address outside, its faces inside."""

from __future__ import annotations

import base64
import functools
import hashlib
import re
from collections.abc import Iterable, Mapping, Sequence
from types import MappingProxyType

import jinja2
from markupsafe import Markup, escape

from calcpack.export import blocks as kinds
from calcpack.export.blocks import Block, Run, every, formulas_of, plain_text
from calcpack.export.content import SheetContent
from calcpack.export.mathematics import Mathematics
from calcpack.export.paper import foot_of, line_alt, png_bytes
from calcpack.export.svg import with_prefix
from calcpack.export.text import shown_date
from calcpack.export.typesetting import page_folder
from calcpack.job.model import Header, Person

_FACES = (
    ("Libertinus Serif", "LibertinusSerif-Regular", 400, "normal"),
    ("Libertinus Serif", "LibertinusSerif-Bold", 700, "normal"),
    ("Libertinus Serif", "LibertinusSerif-Italic", 400, "italic"),
    ("Libertinus Math", "LibertinusMath-Regular", 400, "normal"),
)
_NOWHERE: Mapping[str, Markup] = MappingProxyType({})
_TAG = re.compile(r"<[^<>]*>")
_SHORT = 60  # characters a formula may have to stand on one line
_LARGER = 1.25  # a figure's lettering on the screen, whose text is larger than the paper's
_STEP, _LEASTS = 40, 25  # a figure is not made narrower than so many steps [px]
_WORDS = 28  # letters from which on a cell holds words
_SHARES = 24  # widths of columns in steps


@functools.lru_cache(maxsize=4)
def page_css(paper: str) -> str:
    """The style sheet with its faces inside.

    Examples
    --------
    >>> "size: A4" in page_css("A4") and "http" not in page_css("A4")
    True
    """
    folder = page_folder()
    faces = [
        f'@font-face{{font-family:"{family}";font-weight:{weight};font-style:{style};src:url(data:font/woff2;base64,'
        + base64.b64encode((folder / f"{file}.woff2").read_bytes()).decode()
        + ') format("woff2")}'
        for family, file, weight, style in _FACES
    ]
    size = {"A4": "A4", "Letter": "letter"}[paper]
    count = "@bottom-right{content:counter(page) ' / ' counter(pages)}"
    sheet = f"@page{{size: {size};margin:16mm 15mm 16mm 19mm;{count}}}"
    shares = [f".columns>.c{share}{{flex:{share} 1 0}}" for share in range(1, _SHARES + 1)]
    leasts = [f"svg.m{number}{{min-width:{number * _STEP}px}}" for number in range(1, _LEASTS + 1)]
    own = (folder / "page.css").read_text(encoding="utf-8")
    return "\n".join([*faces, sheet, *shares, *leasts, own])


def content_policy(css: str) -> str:
    """What a page may load: its own style sheet, and pictures and faces it carries."""
    digest = base64.b64encode(hashlib.sha256(css.encode()).digest()).decode()
    return (
        f"default-src 'none'; style-src 'sha256-{digest}'; img-src data:; font-src data:;"
        " base-uri 'none'; form-action 'none'"
    )


@functools.lru_cache(maxsize=1)
def _environment() -> jinja2.Environment:
    return jinja2.Environment(
        loader=jinja2.FileSystemLoader(str(page_folder())),
        autoescape=True,
        undefined=jinja2.StrictUndefined,
        keep_trailing_newline=True,
    )


class Screen:
    """What the page designs call to show the blocks of one page.

    Parameters
    ----------
    mathematics : Mathematics
    lines : frozenset of str
        Lines that can be linked to.
    addresses : mapping
        Sheets and lines of other pages by what the text calls them: "B7", "B7 3.05".
    """

    def __init__(
        self,
        mathematics: Mathematics,
        blocks: Sequence[Block],
        lines: frozenset[str],
        addresses: Mapping[str, Markup] = _NOWHERE,
    ) -> None:
        self._mathematics = mathematics
        self._lines = lines
        self._addresses = addresses
        self._drawings = 0
        self._sections = {
            id(block): f"section-{number}"
            for number, block in enumerate(
                (b for b in every(blocks) if isinstance(b, kinds.Heading)), start=1
            )
        }
        mathematics.learn(formulas_of(blocks))

    def names(self) -> dict[str, object]:
        """The functions by the names the designs know them."""
        return {
            "runs": self.runs,
            "math": self.math,
            "spoken": lambda latex: self._mathematics[latex].spoken,
            "alt": lambda line: line.alt or line_alt(line, self._mathematics),
            "step_alt": self.step_alt,
            "short": self.short,
            "link": self.link,
            "drawing": self.drawing,
            "png": lambda picture: base64.b64encode(png_bytes(picture)).decode(),
            "share": share,
            "wide": lambda table: is_wide(table),
            "governing": lambda ratios: max((row.ratio for row in ratios.rows), default=0.0),
            "section_id": lambda heading: self._sections[id(heading)],
        }

    def runs(self, runs: Iterable[Run]) -> Markup:
        """Running text as markup, all words escaped."""
        parts: list[Markup] = []
        for kind, text in runs:
            if kind == "math":
                parts.append(self.math(text, inline=True))
            elif kind == "line":
                parts.append(self.link(text))
            elif kind == "text":
                parts.append(escape(text))
            else:
                parts.append(Markup("<{0}>{1}</{0}>").format(Markup(kind), text))
        return Markup("").join(parts)

    def math(self, latex: str, inline: bool = False) -> Markup:
        """A formula in MathML, or as it is written where it could not be converted."""
        mathml = self._mathematics[latex].mathml
        if not mathml:
            return Markup("<code>{}</code>").format(latex)
        style = Markup("") if inline else Markup(' displaystyle="true"')
        return Markup("<math{}>{}</math>").format(style, Markup(mathml))

    def link(self, number: str) -> Markup:
        """A line's number, leading to the line if there is one."""
        if number in self._addresses:
            return Markup('<a href="{}">{}</a>').format(self._addresses[number], number)
        if number not in self._lines:
            return escape(number)
        return Markup('<a href="#line-{0}">{0}</a>').format(number)

    def short(self, line: kinds.Line) -> bool:
        """Whether a formula is short enough to stand on one line."""
        chunks = [line.symbol, *(chunk for row in line.rows for chunk in row)]
        shown = (_TAG.sub("", self._mathematics[chunk].mathml) or chunk for chunk in chunks if chunk.strip())
        return sum(len(text) + 1 for text in shown) <= _SHORT

    def step_alt(self, step: kinds.Step) -> str:
        """What is said for the equations of a step."""
        return step.alt or "; ".join(self._mathematics[row].spoken for row in step.rows)

    def drawing(self, figure: kinds.Figure) -> Markup:
        """A drawing inside the page, with its spoken alternative."""
        self._drawings += 1
        svg = with_prefix(figure.svg, f"f{self._drawings}-")
        natural = figure.width_mm * 96 / 25.4
        head = Markup('<svg role="img" aria-label="{}" class="m{}" width="{}"').format(
            figure.alt, min(_LEASTS, int(natural / _STEP)), f"{_LARGER * natural:.0f}"
        )
        # The drawing's own size gives way to the width its lettering needs.
        start, _, rest = svg.removeprefix("<svg").partition(">")
        keep = " ".join(
            part for part in _split_attributes(start) if not part.startswith(("width=", "height="))
        )
        return head + Markup(f" {keep}>{rest}")


def _split_attributes(text: str) -> list[str]:
    """Attributes of a tag that safe_svg wrote."""
    parts = text.strip().split('" ')
    return [part if part.endswith(('"', "/")) else f'{part}"' for part in parts if part]


def share(columns: kinds.Columns, number: int) -> int:
    """A column's part of the width, in steps."""
    widths = columns.widths or (1.0,) * len(columns.columns)
    return max(1, round(_SHARES * widths[number] / sum(widths)))


def is_wide(table: kinds.Table) -> bool:
    """Whether a table has a column of words rather than of numbers, which the page's width serves."""
    return any(
        column.align == "left" and any(len(plain_text(row[number])) > _WORDS for row in table.rows)
        for number, column in enumerate(table.columns)
    )


def header_fields(header: Header) -> list[tuple[str, str]]:
    """Fields of the title block that say something beside what the running head says."""
    fields = {
        "client": header.client,
        "authority": header.authority,
        "permit": header.permit,
        "contact": header.contact,
        "prepared by": _with_licence(header.prepared),
        "checked by": _with_licence(header.checked),
        "approved by": _with_licence(header.approved),
    }
    return [(label, value) for label, value in fields.items() if value]


def _with_licence(who: Person) -> str:
    return ", ".join(part for part in (who.name, who.licence) if part)


def render(design: str, paper: str, **names: object) -> str:
    """Fill a page design.

    Parameters
    ----------
    design : str
        Its file among the page designs: "sheet.html.j2".
    paper : "A4" or "Letter"
        For printing.
    names : what the design speaks of
    """
    css = page_css(paper)
    template = _environment().get_template(design)
    return template.render(css=Markup(css), policy=Markup(escape(content_policy(css))), **names)


def sheet_html(content: SheetContent, mathematics: Mathematics | None = None) -> str:
    """A calculation sheet for the screen, in one file.

    Parameters
    ----------
    content : SheetContent
    mathematics : Mathematics
        Formulas known already, shared between the sheets of a pack.

    Returns
    -------
    str
        The page; the same for the same content.
    """
    screen = Screen(mathematics or Mathematics(), content.blocks, content.line_numbers)
    sections = [block for block in content.blocks if isinstance(block, kinds.Heading) and block.level == 1]
    return render(
        "sheet.html.j2",
        content.submission.paper,
        content=content,
        head=content.header,
        changed=content.changed,
        below=1,
        date=shown_date(content.header.date),
        of=content.numbers.of if content.numbers.of > 1 else 0,
        fields=header_fields(content.header),
        sections=[section for section in sections if plain_text(section.text)],
        foot=foot_of(content),
        **screen.names(),
    )
