"""The bars that show which given values move a result."""

from __future__ import annotations

from collections.abc import Sequence

from calcpack.figures.drawing import HAIR, INK, PALE, SMALL, Drawing, Stroke
from calcpack.figures.figure import Figure

_ROW, _BAR, _HALF = 5.2, 3.0, 34.0  # [mm]
_WORDS, _LONGEST = 62.0, 46  # [mm], letters


def influence_figure(rows: Sequence[tuple[str, str, float]], says: str, width_mm: float = 165.0) -> Figure:
    """Bars of how many per cent a result changes for one per cent of each given value.

    Parameters
    ----------
    rows : sequence of (line's number, its words, change [%])
        The strongest first.
    says : str
        The result, in words.
    width_mm : float [mm]

    Returns
    -------
    Figure
    """
    most = max((abs(relative) for _, _, relative in rows), default=0.0) or 1.0
    drawing = Drawing()
    middle = _WORDS + _HALF + 4.0
    for number, (no, words, relative) in enumerate(rows):
        y = -_ROW * (number + 1)
        end = middle + _HALF * relative / most
        drawing.text(0.0, y, f"{no}  {_short(words)}", SMALL, anchor="left", level="middle")
        low, high = y - _BAR / 2, y + _BAR / 2
        corners = [(middle, low), (end, low), (end, high), (middle, high)]
        # What raises the result is filled, what lowers it hatched: told apart without colour.
        drawing.area(corners, PALE if relative > 0 else "#ffffff")
        if relative < 0:
            drawing.hatch(corners)
        drawing.outline(corners, Stroke(HAIR, INK))
        change = f"{relative:+.2f} %".replace("-", "\u2212")
        drawing.text(middle + _HALF + 3.0, y, change, SMALL, anchor="left")
    foot = -_ROW * (len(rows) + 0.6)
    drawing.line([(middle, -_ROW * 0.4), (middle, foot)], Stroke(HAIR, INK))
    drawing.text(
        middle, foot - 3.0, "change for 1 % more; filled raises, hatched lowers", SMALL, anchor="center"
    )
    said = "; ".join(f"{words}: {relative:+.2f} per cent" for _, words, relative in rows)
    return drawing.finish(width_mm, f"What moves the {says}, for one per cent of each value. {said}")


def _short(text: str) -> str:
    return text if len(text) <= _LONGEST else text[: _LONGEST - 1].rstrip() + "…"
