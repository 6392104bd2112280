"""How a plan is fitted onto the paper: what is shown, at which scale, with which margins."""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np

from calcpack.figures.drawing import GREY, HAIR, HEAVY, LINES, SMALL, WHITE, Drawing, Stroke
from calcpack.figures.labels import Box, Placer, spread
from calcpack.figures.lettering import shorten, text_width
from calcpack.figures.parts import dimension_chain, length
from calcpack.figures.plan_data import BeamShape, PlanShape
from calcpack.figures.shapes import Array, Points, circle
from calcpack.sheet.display import System

Window = tuple[float, float, float, float]

BUBBLE = 2.1  # radius [mm]
GRID = Stroke(HAIR, "#8d98a3", (5.0, 1.6, 0.8, 1.6))
ROOM = (11.0, 8.5)  # what a panel that drains to the marked beam needs on paper [mm]
LEAST_SIDE = 18.0  # the shorter side of a whole plan on paper, if need be drawn out [mm]


@dataclass(frozen=True)
class View:
    """A window of the plan [m] on paper [mm]."""

    window: Window
    scale: tuple[float, float]  # [mm/m]
    left: float  # where the window's left side stands [mm]; its lower side stands at 0

    def at(self, points: Points) -> Array:
        """Plan points on paper."""
        placed: Array = (np.asarray(points, dtype=float) - self.window[:2]) * self.scale + (self.left, 0.0)
        return placed

    @property
    def size(self) -> tuple[float, float]:
        """Width and height on paper [mm]."""
        a, b, c, d = self.window
        return (c - a) * self.scale[0], (d - b) * self.scale[1]

    @property
    def drawn_out(self) -> str:
        """What must be said where the two directions differ in scale."""
        across, up = self.scale
        if abs(across - up) < 1e-9 * up:
            return ""
        ratio = max(across, up) / min(across, up)
        return f"{'height' if up > across else 'width'} drawn {ratio:.1f} times as large"


def window_about(plan: PlanShape, beam: BeamShape | None, width: float, height: float) -> Window:
    """The whole plan, or the bays about a beam where the whole would leave no room to read them."""
    whole = plan.extent()
    if beam is None:
        return whole
    draining = {mark for mark, _ in plan.regions}
    shapes = [panel.corners for panel in plan.panels if panel.mark in draining]
    near = np.vstack([beam.points, *shapes])
    scale = _fit(whole, width, height)
    sides = [np.ptp(shape, axis=0) for shape in shapes] or [np.array([0.5, 0.5]) * np.ptp(beam.points)]
    if all(side[0] * scale >= ROOM[0] and side[1] * scale >= ROOM[1] for side in sides):
        return whole
    margin = 0.3 * float(np.median([side.min() for side in sides]))
    low, high = near.min(axis=0) - margin, near.max(axis=0) + margin
    # What the paper has left beside it shows more of the neighbourhood.
    spare = np.array([width, height]) / min(np.array([width, height]) / (high - low)) - (high - low)
    low, high = low - spare / 2, high + spare / 2
    window = (
        max(whole[0], float(low[0])),
        max(whole[1], float(low[1])),
        min(whole[2], float(high[0])),
        min(whole[3], float(high[1])),
    )
    # Worth it only if it makes things markedly larger.
    return window if _fit(window, width, height) > 1.3 * scale else whole


def view_of(
    plan: PlanShape, window: Window, system: System, width: float, height: float, dimensions: bool
) -> View:
    """The window fitted between margins that hold grid bubbles and dimensions."""
    view = View(window, (1.0, 1.0), 0.0)
    left, right = 2.0, 2.0
    # The margins depend on the scale and the scale on the margins: three rounds settle it.
    for _ in range(3):
        a, b, c, d = window
        scale = _fit(window, width - left - right, height)
        across, up = _drawn_out((c - a) * scale, (d - b) * scale, width - left - right, height)
        spare = width - left - right - (c - a) * scale * across
        view = View(window, (scale * across, scale * up), left + spare / 2)
        scratch = Drawing()
        edges = draw_grid(scratch, plan, view, system, dimensions, width, Placer())
        left, right = max(edges[0], 2.0), max(edges[1], 2.0)
    return view


def draw_grid(
    drawing: Drawing,
    plan: PlanShape,
    view: View,
    system: System,
    dimensions: bool,
    width: float,
    placer: Placer,
) -> tuple[float, float]:
    """Grid lines with their bubbles at top and left, dimensions at bottom and right.

    The placer learns what labels must keep clear of.

    Returns
    -------
    (float, float)
        The margins they need at left and at right of the window [mm].
    """
    a, b, c, d = view.window
    lines_x = [(name, at) for name, at in plan.grid_x if a - 1e-9 <= at <= c + 1e-9]
    lines_y = [(name, at) for name, at in plan.grid_y if b - 1e-9 <= at <= d + 1e-9]
    across, up = view.size
    xs = [float(view.at([(at, b)])[0, 0]) for _, at in lines_x]
    ys = [float(view.at([(a, at)])[0, 1]) for _, at in lines_y]
    left = 0.0
    if lines_x:
        names = [name for name, _ in lines_x]
        _bubbles(drawing, placer, names, xs, up, upright=True, bounds=(1.0, width - 1.0))
    if lines_y:
        left = _bubbles(drawing, placer, [name for name, _ in lines_y], ys, view.left, upright=False)
    under, beside, right = -4.4, view.left + across + 4.4, 0.0
    measured_x, measured_y = dimensions and len(xs) > 1, dimensions and len(ys) > 1
    for x in xs:
        drawing.line([(x, up + 1.2), (x, under if measured_x else -1.2)], GRID)
    for y in ys:
        drawing.line([(view.left - 1.2, y), (beside if measured_y else beside - 3.2, y)], GRID)
    if measured_x:
        labels = _lengths([at for _, at in lines_x], system)
        dimension_chain(drawing, xs, labels, (0.0, under), bounds=(0.5, width - 0.5))
        placer.block_line([(xs[0] - 0.8, under), (xs[-1] + 0.8, under)])
    if measured_y:
        labels = _lengths([at for _, at in lines_y], system)
        right = 4.4 + dimension_chain(drawing, ys, labels, (beside, 0.0), 90.0)
        placer.block_line([(beside, ys[0] - 0.8), (beside, ys[-1] + 0.8)])
    return left, right + 0.6


def _bubbles(
    drawing: Drawing,
    placer: Placer,
    names: list[str],
    places: list[float],
    edge: float,
    *,
    upright: bool,
    bounds: tuple[float, float] = (-1e9, 1e9),
) -> float:
    """A row of bubbles above (``upright``) or left of the plan; lines close together are led aside."""
    texts = [shorten(name, 9.0, SMALL) for name in names]
    widths = [max(2 * BUBBLE, text_width(text, SMALL) + 1.8) for text in texts]
    sizes = widths if upright else [2 * BUBBLE] * len(names)
    rows = 1
    room = bounds[1] - bounds[0]
    while rows < 3 and sum(sizes) / rows + 0.6 * len(sizes) > room:
        rows += 1
    gaps = [(one + two) / 2 / rows + 0.6 for one, two in itertools.pairwise(sizes)]
    moved = spread(places, gaps, bounds[0] + sizes[0] / 2, bounds[1] - sizes[-1] / 2)
    reach = 0.0
    for number, (text, place, aside, width) in enumerate(zip(texts, places, moved, widths, strict=True)):
        off = 3.4 + (number % rows) * (2 * BUBBLE + 0.8 if upright else max(widths) + 0.8)
        if upright:
            x, y = aside, edge + off + BUBBLE
            lead = [(place, edge + 1.2), (aside, edge + off)]
        else:
            x, y = edge - off - width / 2, aside
            lead = [(edge - 1.2, place), (edge - off, aside)]
        drawing.line(lead, Stroke(HAIR, GRID.tone))
        ring = _pill(x, y, width)
        drawing.area(ring, WHITE, LINES)
        drawing.outline(ring, Stroke(0.4, GREY), HEAVY)
        drawing.text(x, y, text, SMALL)
        placer.block(Box(x, y, width, 2 * BUBBLE))
        reach = max(reach, off + width)
    return reach + 0.4


def _pill(x: float, y: float, width: float) -> Array:
    """A circle, or a wider shape with round ends where a name is long."""
    half = width / 2 - BUBBLE
    right = circle(x + half, y, BUBBLE, -90.0, 90.0)
    left = circle(x - half, y, BUBBLE, 90.0, 270.0)
    return np.vstack([right, left])


def _lengths(places: list[float], system: System) -> list[str]:
    return [length(b - a, system) for a, b in itertools.pairwise(places)]


def _fit(window: Window, width: float, height: float) -> float:
    a, b, c, d = window
    return min(width / max(c - a, 1e-6), height / max(d - b, 1e-6), 40.0)


def _drawn_out(across: float, up: float, width: float, height: float) -> tuple[float, float]:
    """Factors that bring a very long plan's short side up to where it can be read."""
    least = min(LEAST_SIDE, 0.4 * width)
    if 0 < across < least and up > across:
        return min(least / across, width / across, 4.0), 1.0
    if 0 < up < least and across > up:
        return 1.0, min(least / up, height / up, 4.0)
    return 1.0, 1.0
