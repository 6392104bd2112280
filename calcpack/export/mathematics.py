"""Formulas: LaTeX into MathML for the screen, into Typst for paper, into words for the ear.

One pandoc call turns all new formulas of a pack into Typst; each is known from then on. What neither
converter understands is shown as it is written, never left out.
"""

from __future__ import annotations

import html.entities
import json
import re
from collections.abc import Iterable
from dataclasses import dataclass
from xml.etree.ElementTree import Element, ParseError, fromstring, tostring

import pypandoc
from math_core import LatexError, LatexToMathML

from calcpack.export.text import clean
from calcpack.export.typesetting import settable_formulas


def _words(text: str) -> frozenset[str]:
    return frozenset(text.split())


_ELEMENTS = _words("""
    math mrow mi mn mo mtext mspace mfrac msqrt mroot msub msup msubsup munder mover munderover
    mmultiscripts mprescripts mtable mtr mtd b i mpadded mphantom
""")
_ATTRIBUTES = _words("""
    displaystyle scriptlevel mathvariant lspace rspace stretchy symmetric minsize maxsize largeop
    movablelimits form fence separator width height depth voffset linethickness accent accentunder
    columnspan rowspan
""")
_ENTITY = re.compile(r"&(?!(?:amp|lt|gt|quot|apos);)(\w+);")
_LEADING = re.compile(
    r"\s*(?:[+\-=<>]|\\(?:cdot|times|leq?|geq?|lt|gt|pm|mp|div|approx|neq?|to|Rightarrow)(?![a-z]))"
)
_THICK = re.compile(r"(?<!\\)((?:\\\\)*)\\([;!])")
_ROMAN = re.compile(r"\\mathrm\{([A-Za-z]{2,})\}")
_INVISIBLE = frozenset("\u2061\u2062\u2063\u2064")
_LATEX_UNSEEN = re.compile(r"[\x00-\x08\x0b-\x1f\x7f]")

# What pandoc may write: words, numbers, strings, escaped signs, operators, and just one piece of code.
_TYPST = re.compile(
    r'"(?:[^"\\]|\\.)*"'
    r"|\\."
    r"|#scale\(x: \d+%, y: \d+%\)\[\\?[^\]#]\]"
    r"|[A-Za-z]+(?:\.[a-z]+)*|\d+(?:\.\d+)*"
    r"|/(?![/*])|[^\s\"\\#$@`A-Za-z0-9/]|\s+",
    re.S,
)
# Bold words as words of the text's own face: mathematical bold letters could not be searched for.
_BOLD_WORDS = re.compile(r'\bbold\(("(?:[^"\\]|\\.)*")\)')
_FORBIDDEN = _words("std sys eval read plugin import include raw link label ref")


@dataclass(frozen=True)
class Formula:
    """A formula in all its forms; ``mathml`` or ``typst`` is empty where it could not be converted."""

    latex: str
    mathml: str
    typst: str
    spoken: str


class Mathematics:
    """All formulas met so far.

    Examples
    --------
    >>> mathematics = Mathematics()
    >>> mathematics.learn([r"\\frac{q S}{2}"])
    >>> formula = mathematics[r"\\frac{q S}{2}"]
    >>> formula.typst, formula.spoken
    ('frac(q S, 2)', 'q S over 2')
    """

    def __init__(self) -> None:
        self._known: dict[str, Formula] = {}
        self._converter = LatexToMathML()

    def learn(self, formulas: Iterable[str]) -> None:
        """Convert those formulas not known yet, all at once."""
        new = list(dict.fromkeys(latex for latex in formulas if latex not in self._known))
        for latex, typst in zip(new, _typst(new), strict=True):
            mathml, spoken = self._mathml(latex)
            self._known[latex] = Formula(latex, mathml, typst, spoken or clean(latex))

    def __getitem__(self, latex: str) -> Formula:
        if latex not in self._known:
            self.learn([latex])
        return self._known[latex]

    def _mathml(self, latex: str) -> tuple[str, str]:
        """The inside of a ``<math>`` element and what is said for it, or nothing."""
        if _LATEX_UNSEEN.search(latex):
            return "", ""
        # An empty group before a leading operator keeps the room on both its sides.
        source = "{}" + latex if _LEADING.match(latex) else latex
        try:
            text = self._converter.convert_with_local_state(source, displaystyle=True)
            root = fromstring(_ENTITY.sub(lambda match: html.entities.html5.get(match[1] + ";", ""), text))
        except (LatexError, ParseError, ValueError):
            return "", ""
        if not _tidy(root):
            return "", ""
        if source != latex and len(root) > 1 and root[1].tag == "mo":
            root[1].set("form", "infix")
        inner = "".join(tostring(child, encoding="unicode") for child in root)
        return inner, " ".join(_spoken(root).split())


def _tidy(element: Element) -> bool:
    """Keep only MathML's own attributes, in place; false where something else is in it."""
    if element.tag not in _ELEMENTS:
        return False
    style = element.attrib.get("style", "")
    for key in [key for key in element.attrib if key not in _ATTRIBUTES]:
        del element.attrib[key]
    if element.tag == "mtd" and "text-align: left" in style:
        element.set("class", "l")
    if element.text and element.text not in _INVISIBLE:
        element.text = clean(element.text)
    return all(_tidy(child) for child in element)


_SAID = {
    "=": "=", "≤": "≤", "≥": "≥", "⋅": "·", "\u2061": "", "\u2062": "", "\u2063": "", "−": "−", "∑": "sum",
}  # fmt: skip


def _spoken(element: Element) -> str:
    """A formula in words and signs, as a reader aloud takes it."""
    parts = [_spoken(child) for child in element]
    match element.tag:
        case "mi" | "mn" | "mtext" | "b" | "i":
            return (element.text or "").translate(_UPRIGHT) + "".join(parts)
        case "mo":
            text = element.text or ""
            return f" {_SAID.get(text, text)} "
        case "mspace":
            return " " if element.get("width") else ""
        case "mfrac":
            return f" {_grouped(parts[0])} over {_grouped(parts[1])} "
        case "msqrt":
            return f" square root of {_grouped(''.join(parts))} "
        case "mroot":
            return f" root of order {parts[1]} of {_grouped(parts[0])} "
        case "msub" | "munder":
            return f" {parts[0]} {parts[1]} "
        case "msup":
            power = {"2": "squared", "3": "cubed", "′": "prime"}.get(parts[1].strip())
            return f" {parts[0]} {power or 'to the power ' + _grouped(parts[1])} "
        case "msubsup":
            return f" {parts[0]} {parts[1]} to the power {_grouped(parts[2])} "
        case "mtable":
            return "; ".join(parts)
        case "mtd":
            return " ".join([*parts, " "])
        case "mrow":
            return "".join(f"{part} " if len(part) > 1 or part.isalpha() else part for part in parts)
    return " ".join(parts)


def _grouped(text: str) -> str:
    return f"({text.strip()})" if re.search(r"\s[+−±·/]\s", text.strip()) else text.strip()


# Bold and italic mathematical digits and letters read as the plain ones.
_UPRIGHT = {
    first + step: ord(plain) + step
    for first, plain, count in (
        (0x1D7CE, "0", 10), (0x1D400, "A", 26), (0x1D41A, "a", 26), (0x1D434, "A", 26), (0x1D44E, "a", 26),
        (0x1D468, "A", 26), (0x1D482, "a", 26),
    )
    for step in range(count)
}  # fmt: skip


def _typst(formulas: list[str]) -> list[str]:
    """Typst mathematics for each formula, by one call of pandoc; empty where it gives none."""
    if not formulas:
        return []
    # One formula a line block, each announced by its number, so that no formula can pass for another's.
    blocks = [
        {"t": "Para", "c": [{"t": "Math", "c": [{"t": "DisplayMath"}, _for_pandoc(latex)]}]}
        if part
        else {"t": "Para", "c": [{"t": "Str", "c": f"formula{number}formula"}]}
        for number, latex in enumerate(formulas)
        for part in (False, True)
    ]
    document = {"pandoc-api-version": [1, 23], "meta": {}, "blocks": blocks}
    written = pypandoc.convert_text(
        json.dumps(document), "typst", format="json", extra_args=["--wrap=none", "--quiet"]
    )
    found = re.split(r"^formula(\d+)formula$", written, flags=re.M)
    by_number = {int(number): text.strip() for number, text in zip(found[1::2], found[2::2], strict=True)}
    checked = [_checked(by_number.get(number, "")) for number in range(len(formulas))]
    proven = settable_formulas(checked)
    return [text if good else "" for text, good in zip(checked, proven, strict=True)]


def _for_pandoc(latex: str) -> str:
    """On one line; without the spaces pandoc would round to none, and words it would set letter by letter."""
    latex = " ".join(_LATEX_UNSEEN.sub("", latex).split())
    latex = _THICK.sub(lambda match: match[1] + {";": r"\:", "!": ""}[match[2]], latex)
    return _ROMAN.sub(r"\\text{\1}", latex)


def _checked(text: str) -> str:
    """The formula without its dollar signs, if it is nothing but mathematics."""
    if not (text.startswith("$ ") and text.endswith(" $") and len(text) > 3):
        return ""
    inner = text[2:-2].strip()
    at = 0
    while at < len(inner):
        match = _TYPST.match(inner, at)
        if not match or match[0].split(".")[0] in _FORBIDDEN:
            return ""
        at = match.end()
    return _BOLD_WORDS.sub(r"strongwords(\1)", inner)
