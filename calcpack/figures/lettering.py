"""The page's face: registered once, measured in millimetres."""

from __future__ import annotations

import functools
import unicodedata
from importlib import resources

from matplotlib.font_manager import FontProperties, fontManager, get_font
from matplotlib.textpath import TextToPath

FAMILY = "Libertinus Serif"
FALLBACK = "DejaVu Serif"  # comes with matplotlib; used for measuring what the page's face lacks
MM = 25.4 / 72  # one point in millimetres

# Heights as parts of the size, measured on the face: capitals and figures, ascenders, descenders.
CAPITAL, ASCENT, DESCENT = 0.65, 0.72, 0.23

_ruler = TextToPath()


@functools.cache
def register() -> None:
    """Make the shipped faces known to matplotlib."""
    folder = resources.files("calcpack.figures") / "fonts"
    if not folder.is_dir():
        return
    for entry in sorted(folder.iterdir(), key=lambda item: item.name):
        if entry.name.endswith(".ttf"):
            with resources.as_file(entry) as path:
                fontManager.addfont(path)


@functools.cache
def face(size: float, bold: bool = False, italic: bool = False) -> FontProperties:
    """The page's face at a size [pt]."""
    register()
    known = {entry.name for entry in fontManager.ttflist}
    return FontProperties(
        family=[FAMILY, FALLBACK] if FAMILY in known else [FALLBACK],
        size=size,
        weight="bold" if bold else "normal",
        style="italic" if italic else "normal",
    )


def plain(text: str) -> str:
    """Text as one line that can be drawn: control characters become spaces.

    Examples
    --------
    >>> plain("B1\\nB2")
    'B1 B2'
    """
    breaks = ("Cc", "Cs", "Zl", "Zp")
    return "".join(" " if unicodedata.category(letter) in breaks else letter for letter in text)


@functools.lru_cache(maxsize=8192)
def text_width(text: str, size: float, bold: bool = False, italic: bool = False) -> float:
    """Width of a line of text [mm] at a size [pt].

    Examples
    --------
    >>> 0 < text_width("i", 8.0) < text_width("MM", 8.0)
    True
    """
    if not text:
        return 0.0
    style = face(100.0, bold, italic)
    font = get_font(fontManager.findfont(style))
    # What the face lacks is drawn by the reader's own fonts: counted as one em each.
    known = "".join(letter for letter in text if font.get_char_index(ord(letter)))
    width, _, _ = _ruler.get_text_width_height_descent(known, style, False) if known else (0.0, 0.0, 0.0)
    return (float(width) + 100.0 * (len(text) - len(known))) / 100.0 * size * MM


def shorten(text: str, room: float, size: float, bold: bool = False, italic: bool = False) -> str:
    """The text, or as much of its beginning as fits into the room [mm], with an ellipsis.

    Examples
    --------
    >>> shorten("B1", 20.0, 8.0)
    'B1'
    >>> shorten("a mark nobody should give a beam", 12.0, 8.0).endswith("…")
    True
    """
    text = plain(text)
    if text_width(text, size, bold, italic) <= room:
        return text
    while len(text) > 1 and text_width(text + "…", size, bold, italic) > room:
        text = text[:-1]
    return text.rstrip() + "…"
