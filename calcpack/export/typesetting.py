"""Pages set by Typst: its faces, one compilation, errors in a reader's words.

Only the faces that calcpack ships (and DejaVu from matplotlib for other scripts) are known to the
typesetter, so that every machine sets the same page. A letter none of them has is named by its number.
"""

from __future__ import annotations

import datetime
import functools
import json
import shutil
import tempfile
from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Literal

import matplotlib
import typst
from fontTools.ttLib import TTFont  # type: ignore[import-untyped]

from calcpack.export.text import by_number
from calcpack.job.errors import CalcpackError
from calcpack.job.house import house_folder

STANDARDS: tuple[Literal["a-3a", "ua-1"], ...] = ("a-3a", "ua-1")
_FACE = "LibertinusSerif-{}.ttf"
_OTHER_SCRIPTS = ("DejaVuSans.ttf", "DejaVuSans-Bold.ttf", "DejaVuSansMono.ttf")


def page_folder() -> Path:
    """Where the page designs and their faces stand."""
    return house_folder("report_templates") / "page"


def _face_folder() -> Path:
    return Path(__file__).resolve().parent.parent / "figures" / "fonts"


def _dejavu_folder() -> Path:
    return Path(matplotlib.get_data_path()) / "fonts" / "ttf"


@functools.lru_cache(maxsize=1)
def _fonts() -> typst.Fonts:
    """One set of faces for all compilations of a process."""
    with tempfile.TemporaryDirectory(prefix="calcpack-") as name:
        # matplotlib's folder holds faces a page must not fall back to; only these are let in.
        for file in _OTHER_SCRIPTS:
            shutil.copy(_dejavu_folder() / file, name)
        fonts = typst.Fonts(
            include_system_fonts=False,
            include_embedded_fonts=False,
            font_paths=[str(_face_folder()), str(page_folder()), name],
        )
        # Faces are mapped when first used: use each before its file goes.
        text = b'#set text(font: "DejaVu Sans"); a *a* #text(font: "DejaVu Sans Mono")[a]'
        typst.Compiler(text, font_paths=fonts).compile(format="pdf")
        return fonts


def _faces_beside() -> list[Path]:
    """Faces an office laid beside the page designs, for scripts the page's own lack."""
    return sorted(page_folder().glob("*.ttf"))


@functools.lru_cache(maxsize=1)
def _families_beside() -> str:
    """Their names, as the page designs read them."""
    names = []
    for path in _faces_beside():
        with TTFont(path, lazy=True) as font:
            names.append(font["name"].getBestFamilyName())
    return json.dumps(list(dict.fromkeys(names)))


def _letters(path: Path) -> frozenset[int]:
    with TTFont(path, lazy=True) as font:
        return frozenset(font.getBestCmap())


@functools.lru_cache(maxsize=1)
def settable() -> frozenset[int]:
    """Code points every style of the page's text can show."""
    own = frozenset.intersection(
        *(_letters(_face_folder() / _FACE.format(style)) for style in ("Regular", "Bold", "Italic"))
    )
    other = frozenset.intersection(*(_letters(_dejavu_folder() / file) for file in _OTHER_SCRIPTS[:2]))
    return own.union(other, *(_letters(path) for path in _faces_beside()))


def with_known_letters(text: str) -> str:
    """Text with letters no face has named by their numbers.

    Examples
    --------
    >>> with_known_letters("梁 B1, 54.0 kN·m, балка")
    '⟨U+6881⟩ B1, 54.0 kN·m, балка'
    """
    known = settable()
    if all(ord(letter) in known for letter in text):
        return text
    return "".join(letter if ord(letter) in known else by_number(letter) for letter in text)


@dataclass(frozen=True)
class Attached:
    """A file carried inside a PDF."""

    name: str
    data: bytes
    mime: str
    says: str


@dataclass(frozen=True)
class Setting:
    """A document to be set.

    Parameters
    ----------
    design : str
        The page design's file among the page designs: "sheet.typ".
    data : mapping
        What the design reads as ``data.json``: plain data, never markup.
    date : date
        The document's date; no clock is asked.
    attached : sequence of Attached
        Files to carry inside.
    files : mapping
        Name -> content of pictures the data name.
    queries : sequence of str
        Labels whose metadata to bring back.
    first, of : int
        Number of its first page and of the last one of all it is bound with; ``of`` may be 0 for its own.
        They stand in a file of their own: other numbers leave all but the running heads as laid out before.
    """

    design: str
    data: Mapping[str, Any]
    date: datetime.date
    attached: Sequence[Attached] = ()
    files: Mapping[str, bytes] = field(default_factory=dict)
    queries: Sequence[str] = ()
    first: int = 1
    of: int = 0


@contextmanager
def _root(setting: Setting) -> Iterator[Path]:
    """A folder with the page designs, the data and the files to carry, for one document."""
    with tempfile.TemporaryDirectory(prefix="calcpack-") as name:
        root = Path(name)
        for design in sorted(page_folder().glob("*.typ")):
            shutil.copy(design, root)
        for file_name, content in setting.files.items():
            (root / file_name).write_bytes(content)
        files = []
        for number, file in enumerate(setting.attached):
            (root / f"attached{number}").write_bytes(file.data)
            files.append(
                {"file": f"attached{number}", "name": file.name, "mime": file.mime, "says": file.says}
            )
        for file_name, data in (
            ("data.json", setting.data),
            ("numbers.json", {"first": setting.first, "of": setting.of}),
            ("attached.json", files),
        ):
            (root / file_name).write_text(json.dumps(data, ensure_ascii=False), encoding="utf-8")
        yield root


def _midnight(date: datetime.date) -> int:
    return int(datetime.datetime(date.year, date.month, date.day, tzinfo=datetime.UTC).timestamp())


@dataclass(frozen=True)
class Typeset:
    """A set document: the file, and what its design says of its own places (label -> values)."""

    pdf: bytes
    places: dict[str, list[Any]]


def typeset(setting: Setting, *, pdf: bool = True) -> Typeset:
    """Set a document.

    Parameters
    ----------
    setting : Setting
    pdf : bool
        False only lays out and answers the queries.

    Raises
    ------
    CalcpackError
        The design cannot be set with this data.
    """
    with _root(setting) as root:
        compiler = typst.Compiler(
            str(root / setting.design),
            root=str(root),
            font_paths=_fonts(),
            sys_inputs={"faces": _families_beside()},
        )
        try:
            written = (
                compiler.compile(format="pdf", pdf_standards=[*STANDARDS], timestamp=_midnight(setting.date))
                if pdf
                else b""
            )
            places = {
                label: json.loads(compiler.query(f"<{label}>", field="value", format="json"))
                for label in setting.queries
            }
        except typst.TypstError as error:
            raise CalcpackError(
                f"the page design '{setting.design}' cannot be set: {str(error.message)[:400]}",
                remedy="if the design is calcpack's own, please report this",
            ) from error
    assert isinstance(written, bytes)
    return Typeset(written, places)


_PROOF = """
#set document(title: "proof", date: datetime(year: 1970, month: 1, day: 1))
#let serif = ("Libertinus Serif", "DejaVu Sans") + json(bytes(sys.inputs.faces))
#set text(font: serif, fallback: false)
#show math.equation: set text(font: ("Libertinus Math",) + serif)
#for source in json(bytes(sys.inputs.formulas)) {
  math.equation(block: true, alt: "a", eval(source, mode: "math", scope: (strongwords: strong)))
}
"""


def settable_formulas(formulas: Sequence[str]) -> list[bool]:
    """Which of these Typst formulas can be set with the page's faces.

    Examples
    --------
    >>> settable_formulas(["frac(a, 2)", "nosuchname(a)"])
    [True, False]
    """
    if not formulas:
        return []
    inputs = {"formulas": json.dumps(list(formulas)), "faces": _families_beside()}
    compiler = typst.Compiler(_PROOF.encode(), font_paths=_fonts(), sys_inputs=inputs)
    try:
        compiler.compile(format="pdf", pdf_standards=[*STANDARDS], timestamp=0)
    except typst.TypstError:
        if len(formulas) == 1:
            return [False]
        half = len(formulas) // 2
        return settable_formulas(formulas[:half]) + settable_formulas(formulas[half:])
    return [True] * len(formulas)
