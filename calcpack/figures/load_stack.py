"""Line loads of several sources piled on one another."""

from __future__ import annotations

import itertools
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from calcpack.figures.shapes import Array, Pair
from calcpack.statics.loads import LineLoad, Load, PointLoad


@dataclass(frozen=True)
class Layer:
    """What one source adds to the pile, linear from break to break.

    Parameters
    ----------
    source : str
    breaks : (n + 1,) [m]
    base, top : (n, 2) [kN/m]
        At the start and the end of each stretch; ``top - base`` is the source's own load.
    """

    source: str
    breaks: Array
    base: Array
    top: Array

    @property
    def own(self) -> Array:
        """The source's load at start and end of each stretch [kN/m]."""
        return self.top - self.base

    def peak(self) -> tuple[float, float]:
        """Where the load is largest (the middle of a plateau) and how large it is, with its sign."""
        return _peak(self.breaks, self.own)

    def ends(self) -> Pair | None:
        """Both end values where the load is one straight line that is nowhere zero."""
        rows = np.flatnonzero(np.abs(self.own).max(axis=1) > 1e-9)
        first, last = int(rows[0]), int(rows[-1])
        one, two = float(self.own[first, 0]), float(self.own[last, 1])
        x = (self.breaks - self.breaks[first]) / (self.breaks[last + 1] - self.breaks[first])
        straight = one + (two - one) * np.column_stack([x[:-1], x[1:]])
        same = np.allclose(straight[first : last + 1], self.own[first : last + 1], atol=1e-9)
        return (one, two) if same and abs(one) > 1e-9 and abs(two) > 1e-9 else None

    def pieces(self) -> Iterable[list[Pair]]:
        """Outlines [m, kN/m] of the stretches in a row that carry something."""
        loaded = (np.abs(self.own).max(axis=1) > 1e-9).tolist()
        for carries, group in itertools.groupby(range(len(loaded)), key=loaded.__getitem__):
            if not carries:
                continue
            lower: list[Pair] = []
            upper: list[Pair] = []
            for number in group:
                for side in (0, 1):
                    x = float(self.breaks[number + side])
                    lower.append((x, float(self.base[number, side])))
                    upper.append((x, float(self.top[number, side])))
            yield lower + upper[::-1]


def pile(length: float, loads: Sequence[Load]) -> list[Layer]:
    """The layers of the line loads: even ones over the whole beam first, then as their sources come.

    Upward loads hang below the beam.

    Examples
    --------
    >>> loads = [LineLoad(0.0, 4.0, 2.0, 2.0, "P1"), LineLoad(0.0, 2.0, 0.0, 3.0, "P2")]
    >>> [(layer.source, layer.peak()) for layer in pile(4.0, loads)]
    [('P1', (2.0, 2.0)), ('P2', (2.0, 3.0))]
    """
    lines = [load for load in loads if isinstance(load, LineLoad) and (load.first or load.last)]
    places = sorted({0.0, length, *(at for load in lines for at in (load.start, load.end))})
    breaks = np.array([places[0], *(b for a, b in itertools.pairwise(places) if b - a > 1e-9)])
    shares = []
    for source in dict.fromkeys(load.source for load in lines):
        own = np.zeros((len(breaks) - 1, 2))
        for load in lines:
            if load.source == source:
                own += _values(load, breaks)
        if np.abs(own).max(initial=0.0) > 1e-9:
            shares.append((source, own))
    shares.sort(key=lambda share: bool(np.ptp(share[1]) > 1e-9))
    rises, falls = np.zeros((len(breaks) - 1, 2)), np.zeros((len(breaks) - 1, 2))
    layers = []
    for source, own in shares:
        down = own.sum(axis=1, keepdims=True) >= 0
        base = np.where(down, rises, falls)
        layers.append(Layer(source, breaks, base, base + own))
        rises = np.where(down, rises + own, rises)
        falls = np.where(down, falls, falls + own)
    return layers


def together(layers: Sequence[Layer]) -> tuple[float, float]:
    """Where all layers together are largest, and how large."""
    return _peak(layers[0].breaks, np.sum([layer.own for layer in layers], axis=0))


def point_loads(loads: Sequence[Load]) -> list[tuple[float, list[PointLoad]]]:
    """Point loads place by place [m], along the beam."""
    points = sorted(
        (load for load in loads if isinstance(load, PointLoad) and load.force), key=lambda p: p.at
    )
    groups: list[tuple[float, list[PointLoad]]] = []
    for load in points:
        if groups and load.at - groups[-1][0] < 1e-6:
            groups[-1][1].append(load)
        else:
            groups.append((load.at, [load]))
    return groups


def _values(load: LineLoad, breaks: Array) -> Array:
    """A load's values at the start and end of each stretch it covers."""
    middle = (breaks[:-1] + breaks[1:]) / 2
    covered = (middle > load.start) & (middle < load.end)
    slope = (load.last - load.first) / (load.end - load.start)
    values: Array = np.column_stack([breaks[:-1], breaks[1:]])
    values = load.first + slope * (values - load.start)
    return np.where(covered[:, None], values, 0.0)


def _peak(breaks: Array, values: Array) -> tuple[float, float]:
    size = np.abs(values)
    largest = float(size.max())
    row, side = (int(index) for index in np.unravel_index(int(size.argmax()), size.shape))
    level = size.min(axis=1) > largest * (1 - 1e-9)  # stretches on the plateau
    if level.any():
        first = int(np.flatnonzero(level)[0])
        last = first
        while last + 1 < len(level) and level[last + 1]:
            last += 1
        return float(breaks[first] + breaks[last + 1]) / 2, float(values[first, 0])
    return float(breaks[row + side]), float(values[row, side])
