"""Values written close to the point of a diagram they belong to, or led to it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from calcpack.figures.drawing import GREY, HAIR, HATCHING, INK, SIGNS, SMALL, Drawing, Stroke
from calcpack.figures.labels import Box, Placer, lead_foot
from calcpack.figures.lettering import text_width
from calcpack.figures.parts import line_height
from calcpack.figures.shapes import Pair

ROWS = range(9)
CLEAR = 0.45  # above and below the words, so that a heavy line does not touch them [mm]


def call_out(
    drawing: Drawing,
    placer: Placer,
    point: Pair,
    words: Sequence[str],
    width: float,
    *,
    out: float = 1.0,
    bold: bool = False,
    dot: bool = True,
) -> Box:
    """Write words at the best place near a point: in one line or one under another, outside first.

    Parameters
    ----------
    drawing : Drawing
    placer : Placer
        Knows what is in the way; the place found is blocked.
    point : (x, y) [mm]
    words : sequence of str
        Parts a line may be broken between.
    width : float [mm]
        Of the paper.
    out : 1 or -1
        The side, up or down, on which there is room.
    bold, dot : bool
        Whether the words are bold, whether the point is marked.

    Returns
    -------
    Box
        Where the words stand.
    """
    options = list(_options(point, out, words, width, bold))
    number, box = placer.pick((box for box, _ in options), 0.02, point)
    lines = options[number][1]
    placer.block(box)
    if dot:
        drawing.disc(*point, 0.45, INK, SIGNS)
    foot, top = lead_foot(box, point), box.bounds()[3] - CLEAR
    if abs(foot[0] - point[0]) > 0.5 or abs(foot[1] - point[1]) > 1.6:
        drawing.line([foot, point], Stroke(HAIR, GREY), HATCHING)
        placer.block_line([foot, point])
    height = line_height(SMALL)
    for row, line in enumerate(lines):
        drawing.text(box.x, top - (row + 0.5) * height, line, SMALL, level="box", bold=bold, mask=True)
    return box


def _options(
    point: Pair, out: float, words: Sequence[str], width: float, bold: bool
) -> Iterator[tuple[Box, list[str]]]:
    """Places in the order they are liked: nearest, in one line, outside."""
    x, y = point
    layouts = [[" ".join(words)], list(words)] if len(words) > 1 else [list(words)]
    if len(words) > 2:
        layouts.insert(1, [words[0], " ".join(words[1:])])
    height = line_height(SMALL)
    for row in ROWS:
        for side in (out, -out) if row < 3 else (out,):
            for lines in layouts:
                wide = max(text_width(line, SMALL, bold) for line in lines)
                high = height * len(lines) + 2 * CLEAR
                low, far = 0.4 + wide / 2, width - 0.4 - wide / 2
                for shift in (0.0, 0.25, -0.25, 0.5, -0.5, 0.9, -0.9):
                    middle = min(max(x + shift * (wide + 1.2), low), far)
                    yield Box(middle, y + side * (0.5 + high / 2 + row * height), wide + 0.8, high), lines
