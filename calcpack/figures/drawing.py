"""A sheet of drawing paper in millimetres, kept as few matplotlib artists as possible.

Lines and areas of one kind become one path, hatching is worked out as lines (so it keeps its
spacing in every reader), text is measured with the page's own face. Nothing is laid out by matplotlib.
"""

from __future__ import annotations

import io
import math
import re
import warnings
from dataclasses import dataclass, replace
from typing import Literal
from xml.sax.saxutils import quoteattr

import matplotlib as mpl
import numpy as np
from matplotlib.backend_bases import RendererBase
from matplotlib.backends.backend_svg import FigureCanvasSVG
from matplotlib.figure import Figure as Canvas
from matplotlib.patches import PathPatch
from matplotlib.path import Path
from matplotlib.text import Text
from matplotlib.transforms import IdentityTransform

from calcpack.figures.figure import Figure
from calcpack.figures.labels import Box
from calcpack.figures.lettering import ASCENT, CAPITAL, DESCENT, FALLBACK, FAMILY, MM, face, plain, text_width
from calcpack.figures.shapes import Array, Points, circle, hatching

INK, GREY, PALE, WASH, WHITE = "#1b232d", "#5b6672", "#a9b2bb", "#e7ebee", "#ffffff"
HAIR, THIN, MEDIUM, THICK = 0.3, 0.5, 0.9, 2.6  # [pt]
FILLS, HATCHING, LINES, HEAVY, SIGNS, MASKS, TEXT = range(7)
BODY, SMALL = 8.0, 7.0  # [pt]


@dataclass(frozen=True)
class Stroke:
    """How a line is drawn: weight [pt], tone, dashes [pt], ends."""

    weight: float = THIN
    tone: str = INK
    dash: tuple[float, ...] = ()
    cap: Literal["butt", "round", "projecting"] = "butt"


@dataclass(frozen=True)
class Lettering:
    """A line of text at its place: the start, middle or end of its baseline [mm]."""

    text: str
    x: float
    y: float
    size: float
    anchor: Literal["left", "center", "right"]
    angle: float
    bold: bool
    italic: bool
    tone: str


class Drawing:
    """Lines, areas and text in millimetres, y upwards, on paper without edges until it is finished."""

    def __init__(self) -> None:
        self._paths: dict[tuple[int, Stroke | str], list[Array]] = {}
        self.letterings: list[Lettering] = []
        self.boxes: list[Box] = []

    def line(self, points: Points, stroke: Stroke = Stroke(), layer: int = LINES) -> None:
        """An open polyline."""
        self._paths.setdefault((layer, stroke), []).append(np.asarray(points, dtype=float))

    def outline(self, points: Points, stroke: Stroke = Stroke(), layer: int = LINES) -> None:
        """A closed polyline."""
        ring = np.asarray(points, dtype=float)
        self.line(np.vstack([ring, ring[:1]]), stroke, layer)

    def area(self, points: Points, tone: str = WASH, layer: int = FILLS) -> None:
        """A filled area without outline."""
        ring = np.asarray(points, dtype=float)
        x, y = ring[:, 0], ring[:, 1]
        # All turn the same way round: areas of one tone share a path, and overlaps must not cancel.
        turn = float(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y))
        self._paths.setdefault((layer, tone), []).append(ring if turn >= 0 else ring[::-1])

    def hatch(
        self,
        points: Points,
        angle: float = 45.0,
        spacing: float = 1.2,
        stroke: Stroke = Stroke(HAIR, GREY),
        layer: int = HATCHING,
    ) -> None:
        """Parallel lines inside an outline, at an angle [degrees] and a spacing [mm]."""
        for piece in hatching(points, angle, spacing):
            self.line(piece, stroke, layer)

    def disc(self, x: float, y: float, radius: float, tone: str = INK, layer: int = HEAVY) -> None:
        """A filled circle."""
        self.area(circle(x, y, radius), tone, layer)

    def text(
        self,
        x: float,
        y: float,
        text: str,
        size: float = BODY,
        *,
        anchor: Literal["left", "center", "right"] = "center",
        level: Literal["middle", "box", "base", "under"] = "middle",
        angle: float = 0.0,
        bold: bool = False,
        italic: bool = False,
        tone: str = INK,
        mask: bool = False,
    ) -> Box:
        """A line of text at a point: its capitals' middle, its box's middle, its foot or its head there.

        Returns the box it takes up; ``mask`` clears that box of lines.
        """
        text = plain(text)
        em = size * MM
        parts = {"middle": CAPITAL / 2, "box": (ASCENT - DESCENT) / 2, "base": 0.0, "under": ASCENT}
        drop = parts[level] * em
        cos, sin = math.cos(math.radians(angle)), math.sin(math.radians(angle))
        x, y = x + drop * sin, y - drop * cos
        width = text_width(text, size, bold, italic)
        along = {"left": width / 2, "center": 0.0, "right": -width / 2}[anchor]
        rise = (ASCENT - DESCENT) / 2 * em
        box = Box(
            x + along * cos - rise * sin,
            y + along * sin + rise * cos,
            width,
            (ASCENT + DESCENT) * em,
            angle,
        )
        if text.strip():
            self.letterings.append(Lettering(text, x, y, size, anchor, angle, bold, italic, tone))
            self.boxes.append(box)
            if mask:
                self.area(box.grown(0.25).corners(), WHITE, MASKS)
        return box

    def paste(self, other: Drawing, across: float = 0.0, up: float = 0.0) -> None:
        """Everything of another drawing, moved."""
        shift = np.array([across, up])
        for key, paths in other._paths.items():
            self._paths.setdefault(key, []).extend(path + shift for path in paths)
        for item in other.letterings:
            self.letterings.append(replace(item, x=item.x + across, y=item.y + up))
        self.boxes += [box.moved(across, up) for box in other.boxes]

    def extent(self) -> tuple[float, float, float, float]:
        """Left, bottom, right and top of all that is drawn."""
        edges = [box.bounds() for box in self.boxes]
        for paths in self._paths.values():
            points = np.vstack(paths)
            (left, bottom), (right, top) = points.min(axis=0).tolist(), points.max(axis=0).tolist()
            edges.append((left, bottom, right, top))
        if not edges:
            return 0.0, 0.0, 0.0, 0.0
        lefts, bottoms, rights, tops = zip(*edges, strict=True)
        return min(lefts), min(bottoms), max(rights), max(tops)

    def finish(
        self, width: float, alt: str, *, top: float | None = None, bottom: float | None = None
    ) -> Figure:
        """Cut the paper from x = 0 to ``width`` [mm] and around what is drawn, and make the figure."""
        _, lowest, _, highest = self.extent()
        top = highest + 0.6 if top is None else top
        bottom = lowest - 0.6 if bottom is None else bottom
        alt = plain(alt).replace("\u00a0", " ")
        return Figure(svg=self._svg(width, bottom, top - bottom, alt), alt=alt, width_mm=width)

    def _svg(self, width: float, bottom: float, height: float, alt: str) -> str:
        across, up = round(width / MM, 2), round(height / MM, 2)
        canvas = Canvas(figsize=(across / 72, up / 72), dpi=72, facecolor=WHITE, edgecolor="none")
        here = IdentityTransform()  # at 72 dots an inch one unit of the canvas is one point
        for (layer, style), paths in self._paths.items():
            closed = isinstance(style, str)
            path = _compound([np.round((item - (0.0, bottom)) / MM, 2) for item in paths], closed)
            patch = PathPatch(path, transform=here, zorder=layer, snap=False, clip_on=False)
            if isinstance(style, str):
                patch.set(facecolor=style, edgecolor="none", linewidth=0)
            else:
                patch.set(fill=False, edgecolor=style.tone, linewidth=style.weight)
                patch.set(capstyle=style.cap, joinstyle="round")
                if style.dash:
                    # matplotlib scales dashes by the line's weight; ours are said in points.
                    patch.set_linestyle((0, tuple(length / style.weight for length in style.dash)))
            canvas.add_artist(patch)
        for item in self.letterings:
            canvas.add_artist(_artist(item, bottom))
        stream = io.StringIO()
        # A letter the face lacks comes from the reader's own fonts: matplotlib's warning says nothing here.
        with (
            mpl.rc_context({"svg.fonttype": "none", "svg.hashsalt": "calcpack", "path.simplify": False}),
            warnings.catch_warnings(),
        ):
            warnings.simplefilter("ignore")
            nothing = dict.fromkeys(("Date", "Creator", "Format", "Type"))
            FigureCanvasSVG(canvas).print_svg(stream, metadata=nothing)  # type: ignore[no-untyped-call]
        return _tidy(stream.getvalue(), width, up * MM, alt)


def _compound(paths: list[Array], closed: bool) -> Path:
    vertices, codes = [], []
    for path in paths:
        code = np.full(len(path) + closed, Path.LINETO, dtype=np.uint8)
        code[0] = Path.MOVETO
        if closed:
            code[-1] = Path.CLOSEPOLY
            path = np.vstack([path, path[:1]])
        vertices.append(path)
        codes.append(code)
    return Path(np.vstack(vertices), np.concatenate(codes))


class _Line(Text):
    """A line of text that stands where it is put: matplotlib has nothing to lay out."""

    def draw(self, renderer: RendererBase) -> None:
        x, y = self.get_position()
        context = renderer.new_gc()
        context.set_foreground(self.get_color())
        _, height = renderer.get_canvas_width_height()
        face, angle = self.get_fontproperties(), self.get_rotation()
        renderer.draw_text(context, x, height - y, self.get_text(), face, angle, ismath=False, mtext=self)
        context.restore()


def _artist(item: Lettering, bottom: float) -> Text:
    return _Line(
        round(item.x / MM, 2),
        round((item.y - bottom) / MM, 2),
        item.text,
        fontproperties=face(item.size, item.bold, item.italic),
        color=item.tone,
        horizontalalignment=item.anchor,
        verticalalignment="baseline",
        rotation=item.angle,
        rotation_mode="anchor",
        parse_math=False,  # a mark may hold a dollar sign
        transform=IdentityTransform(),
        zorder=TEXT,
    )


def _tidy(svg: str, width: float, height: float, alt: str) -> str:
    """One bare element: no prolog, no identifiers or style sheet that would meet others' in one page."""
    view = re.search(r'viewBox="[^"]*"', svg)
    if view is None:  # pragma: no cover - matplotlib always writes one
        raise ValueError("no viewBox in the drawing")
    body = svg[svg.index("</defs>") + len("</defs>") : svg.rindex("</svg>")]
    body = re.sub(r"<[^<>]*>", _bare, body)  # tags only: the text between them is the user's
    body = re.sub(r"\n\s*", "\n", body)
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" width="{width:.6g}mm" height="{height:.6g}mm" {view[0]} '
        f'role="img" aria-label={quoteattr(alt)} '
        f"style=\"font-family: '{FAMILY}', '{FALLBACK}', serif; "
        f'stroke-linejoin: round; stroke-linecap: butt">{body}</svg>\n'
    )


def _bare(tag: re.Match[str]) -> str:
    """A tag without what the root says already; groups of one and comments go."""
    text = tag[0]
    if text in ("</g>", "<g>") or text.startswith(("<!--", "<g ")):
        return ""
    text = re.sub(r"\s*\n\s*", "", text)
    text = re.sub(r' id="[^"]*"| transform="rotate\(-0 [^"]*\)"', "", text)
    return re.sub(r"; font-family: [^;\"]*", "", text)
