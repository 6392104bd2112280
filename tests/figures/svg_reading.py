"""Reads a drawing back: where its text really is, by the face's own outlines, and where its lines run."""

from __future__ import annotations

import functools
import itertools
import re
from dataclasses import dataclass
from xml.etree import ElementTree

import numpy as np
from matplotlib.font_manager import FontProperties
from matplotlib.textpath import TextPath
from matplotlib.transforms import Bbox

from calcpack.figures.figure import Figure
from calcpack.figures.lettering import FALLBACK, FAMILY, register

NAMESPACE = "{http://www.w3.org/2000/svg}"
register()


@dataclass(frozen=True)
class Ink:
    """The smallest (turned) rectangle about the ink of a line of text, in user units, y downwards."""

    text: str
    corners: np.ndarray


@dataclass(frozen=True)
class Stroke:
    """A drawn path."""

    weight: float
    tone: str
    dashed: bool
    lines: tuple[np.ndarray, ...]


def root(figure: Figure) -> ElementTree.Element:
    return ElementTree.fromstring(figure.svg)


def size(figure: Figure) -> tuple[float, float]:
    _, _, width, height = (float(part) for part in root(figure).attrib["viewBox"].split())
    return width, height


def words(figure: Figure) -> list[str]:
    return [element.text or "" for element in root(figure).iter(f"{NAMESPACE}text")]


def style(element: ElementTree.Element) -> dict[str, str]:
    parts = (part.split(":", 1) for part in element.attrib.get("style", "").split(";") if part.strip())
    return {name.strip(): value.strip() for name, value in parts}


def inks(figure: Figure) -> list[Ink]:
    """Every line of text as it stands."""
    return [ink(element) for element in root(figure).iter(f"{NAMESPACE}text") if (element.text or "").strip()]


@functools.lru_cache(maxsize=4096)
def extents(text: str, size: float, weight: int, slant: str) -> Bbox:
    """Bounds of the outlines of a line of text."""
    face = FontProperties(family=[FAMILY, FALLBACK], size=size, weight=weight, style=slant)
    return TextPath((0, 0), text, prop=face).get_extents()


def face_of(said: dict[str, str]) -> tuple[int, str]:
    return int(said.get("font-weight", 400)), said.get("font-style", "normal")


def ink(element: ElementTree.Element) -> Ink:
    said = style(element)
    text = element.text or ""
    box = extents(text, float(said["font-size"].removesuffix("px")), *face_of(said))
    x, y = float(element.attrib["x"]), float(element.attrib["y"])
    advance = box.width
    start = {"start": 0.0, "middle": -advance / 2, "end": -advance}[said.get("text-anchor", "start")]
    corners = np.array(
        [
            (start, -box.y0),
            (start + advance, -box.y0),
            (start + advance, -box.y1),
            (start, -box.y1),
        ]
    )
    turn = re.search(r"rotate\(([-\d.]+)", element.attrib.get("transform", ""))
    angle = np.radians(float(turn[1]) if turn else 0.0)
    matrix = np.array([[np.cos(angle), np.sin(angle)], [-np.sin(angle), np.cos(angle)]])
    return Ink(text, corners @ matrix + (x, y))


def strokes(figure: Figure) -> list[Stroke]:
    found = []
    for element in root(figure).iter(f"{NAMESPACE}path"):
        said = style(element)
        if "stroke" not in said or said["stroke"] == "none":
            continue
        lines = []
        for piece in re.findall(r"M[^M]*", element.attrib["d"]):
            numbers = [float(number) for number in re.findall(r"-?\d+\.?\d*(?:e-?\d+)?", piece)]
            lines.append(np.array(numbers).reshape(-1, 2))
        found.append(
            Stroke(
                float(said.get("stroke-width", 1)), said["stroke"], "stroke-dasharray" in said, tuple(lines)
            )
        )
    return found


def apart(one: np.ndarray, other: np.ndarray) -> bool:
    """Whether two convex outlines share no area: a line between them along a side of one."""
    if (one.max(axis=0) < other.min(axis=0)).any() or (other.max(axis=0) < one.min(axis=0)).any():
        return True
    for ring in (one, other):
        for a, b in zip(ring, np.roll(ring, -1, axis=0), strict=True):
            across = np.array([a[1] - b[1], b[0] - a[0]])
            here, there = one @ across, other @ across
            if here.max() <= there.min() + 1e-9 or there.max() <= here.min() + 1e-9:
                return True
    return False


def overlapping(figure: Figure) -> list[tuple[str, str]]:
    """Pairs of texts that lie on one another."""
    found = inks(figure)
    return [
        (one.text, other.text)
        for number, one in enumerate(found)
        for other in found[number + 1 :]
        if not apart(one.corners, other.corners)
    ]


def outside(figure: Figure) -> list[str]:
    """Texts that reach over the paper's edge."""
    width, height = size(figure)
    return [
        item.text
        for item in inks(figure)
        if item.corners.min() < 0 or item.corners[:, 0].max() > width or item.corners[:, 1].max() > height
    ]


def crossed(figure: Figure, weight: float) -> list[str]:
    """Texts that a line of a weight runs through."""
    lines = [line for stroke in strokes(figure) if stroke.weight == weight for line in stroke.lines]
    return [
        item.text
        for item in inks(figure)
        if any(
            not apart(item.corners, np.array([a, b])) for line in lines for a, b in itertools.pairwise(line)
        )
    ]
