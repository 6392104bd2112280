"""What people would rather see than read: how much of the tolerances is used, the rule beside the plate."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from calcpack.equivalent import under_panel
from calcpack.figures.drawing import BODY, GREY, HAIR, INK, MEDIUM, PALE, SMALL, THIN, Drawing, Stroke
from calcpack.figures.figure import Figure
from calcpack.verification.comparison import Comparison
from calcpack.verification.plate import plate
from calcpack.verification.tables import Topic

WIDTH = 170.0  # [mm]
_NAMES, _BINS, _ROW, _HIGH = 58.0, 20, 9.0, 6.5  # [mm], but for the bins
DASHED = Stroke(THIN, GREY, (2.4, 1.6))


def tolerance_figure(topics: Sequence[Topic], comparisons: Sequence[Comparison]) -> Figure:
    """For each topic how the comparisons spread over their tolerance.

    Parameters
    ----------
    topics : sequence of Topic
        Those with tables.
    comparisons : sequence of Comparison
        Of all of them; deviations that are stated by the program itself are left out.
    """
    drawing = Drawing()
    room = WIDTH - _NAMES - 12.0
    said = []
    for number, topic in enumerate(topics):
        foot = -_ROW * (number + 1)
        shares = [
            min(each.share, 1.06)
            for each in comparisons
            if each.topic == topic and each.table.kind == "published" and not each.in_words
        ]
        if not shares:
            continue
        counts, _ = np.histogram(shares, bins=[*(k / _BINS for k in range(_BINS)), 1.0 + 1e-9, 1.1])
        most = max(counts.max(), 1)
        drawing.text(0.0, foot + 1.6, topic.name, BODY, anchor="left", level="base")
        drawing.line([(_NAMES, foot), (_NAMES + room, foot)], Stroke(HAIR, INK))
        for place, count in enumerate(counts):
            if not count:
                continue
            left = _NAMES + room * place / _BINS
            high = max(_HIGH * count / most, 0.5)
            corners = [
                (left + 0.2, foot),
                (left + room / _BINS - 0.2, foot),
                (left + room / _BINS - 0.2, foot + high),
                (left + 0.2, foot + high),
            ]
            drawing.area(corners, PALE if place < _BINS else INK)
            drawing.outline(corners, Stroke(HAIR, INK))
        within = sum(1 for share in shares if share <= 0.5)
        over = sum(1 for share in shares if share > 1)
        said.append(
            f"{topic.name}: {len(shares)} comparisons, {within} within half of what is allowed"
            + (f", {over} beyond it" if over else ", none beyond it")
        )
    foot = -_ROW * len(topics)
    for share in (0.0, 0.25, 0.5, 0.75, 1.0):
        x = _NAMES + room * share
        drawing.line([(x, foot), (x, 0.0)], Stroke(HAIR, PALE), layer=0)
        drawing.text(x, foot - 3.0, f"{share:g}", SMALL)
    drawing.line([(_NAMES + room, foot), (_NAMES + room, 0.0)], Stroke(MEDIUM, INK))
    drawing.text(_NAMES + room, 2.2, "all that is allowed", SMALL, anchor="right")
    drawing.text(_NAMES + room / 2, foot - 7.0, "difference, as a part of what is allowed", SMALL)
    return drawing.finish(WIDTH, "Differences as parts of what is allowed. " + "; ".join(said))


class _Axes:
    """A frame with scales, in millimetres."""

    def __init__(
        self,
        drawing: Drawing,
        left: float,
        x: tuple[float, float],
        y: tuple[float, float],
        size: tuple[float, float] = (66.0, 46.0),
    ) -> None:
        self.drawing, self.left, self.x, self.y, self.size = drawing, left, x, y, size

    def at(self, x: float, y: float) -> tuple[float, float]:
        """Where a value stands."""
        along = (x - self.x[0]) / (self.x[1] - self.x[0]) * self.size[0]
        up = (y - self.y[0]) / (self.y[1] - self.y[0]) * self.size[1]
        return self.left + along, up

    def scales(self, xs: Sequence[float], ys: Sequence[float], says_x: str, says_y: str) -> None:
        """Frame, marks and words."""
        self.drawing.outline(
            [self.at(self.x[a], self.y[b]) for a, b in ((0, 0), (1, 0), (1, 1), (0, 1))], Stroke(HAIR, INK)
        )
        for x in xs:
            self.drawing.line([self.at(x, self.y[0]), self.at(x, self.y[1])], Stroke(HAIR, PALE), layer=0)
            self.drawing.text(self.at(x, 0)[0], -3.0, f"{x:g}", SMALL)
        for y in ys:
            self.drawing.line([self.at(self.x[0], y), self.at(self.x[1], y)], Stroke(HAIR, PALE), layer=0)
            self.drawing.text(self.left - 1.5, self.at(0, y)[1], f"{y:g}", SMALL, anchor="right")
        self.drawing.text(self.left + self.size[0] / 2, -7.4, says_x, SMALL)
        self.drawing.text(self.left, self.size[1] + 2.6, says_y, SMALL, anchor="left")

    def curve(self, xs: Sequence[float], ys: Sequence[float], stroke: Stroke) -> None:
        """A polyline of values."""
        self.drawing.line([self.at(x, y) for x, y in zip(xs, ys, strict=True)], stroke)

    def word(self, x: float, y: float, text: str) -> None:
        """A word on the plot."""
        self.drawing.text(*self.at(x, y), text, SMALL, anchor="left", mask=True)


def plate_figure() -> Figure:
    """The 45° rule beside the elastic plate: along a long side, and in the beams' moments."""
    drawing = Drawing()
    left = _Axes(drawing, 8.0, (0.0, 2.0), (0.0, 0.6))
    left.scales(
        (0.0, 0.5, 1.0, 1.5, 2.0),
        (0.0, 0.2, 0.4, 0.6),
        "along the long side, panel 1 by 2",
        "load on it / q a",
    )
    places = [0.02 * number for number in range(1, 100)]
    left.curve([0.0, 0.5, 1.5, 2.0], [0.0, 0.5, 0.5, 0.0], Stroke(MEDIUM, INK))
    left.curve(places, [plate(2.0).on_long(place - 1.0) for place in places], DASHED)
    left.word(0.62, 0.55, "45° rule")
    left.word(0.62, 0.33, "dashed: elastic plate")
    right = _Axes(drawing, 98.0, (1.0, 3.0), (0.7, 1.05))
    right.scales(
        (1.0, 1.5, 2.0, 2.5, 3.0), (0.7, 0.8, 0.9, 1.0), "side ratio", "moment of a beam, rule / plate"
    )
    ratios = (1.0, 1.1, 1.2, 1.5, 2.0, 3.0)
    long, short = [], []
    for ratio in ratios:
        by_plate = plate(ratio).beam_moments
        long.append(under_panel("moment", 1.0, 1.0, ratio, under_long=True) * ratio**2 / 8 / by_plate[0])
        short.append(under_panel("moment", 1.0, 1.0, ratio, under_long=False) / 8 / by_plate[1])
    right.curve([1.0, 3.0], [1.0, 1.0], Stroke(HAIR, INK))
    right.curve(ratios, long, Stroke(MEDIUM, INK))
    right.curve(ratios, short, Stroke(MEDIUM, INK, (4.0, 2.0)))
    right.word(1.9, 0.945, "under a long side")
    right.word(1.9, 0.80, "under a short side")
    alt = (
        "Along the long side of a panel 1 by 2 the elastic plate presses with "
        f"{plate(2.0).on_long(0.0):.3f} q a in the middle and {plate(2.0).on_long(-0.75):.3f} a quarter of"
        " the short side from the corner, where the 45 degree rule has 0.5 and 0.25. Moment of a beam, rule"
        " over plate: "
        + "; ".join(
            f"side ratio {ratio:g}, long side {a:.2f}, short side {b:.2f}"
            for ratio, a, b in zip(ratios, long, short, strict=True)
        )
    )
    return drawing.finish(WIDTH, alt)
