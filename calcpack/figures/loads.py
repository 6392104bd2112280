"""What a beam carries: a strip for each load case, piled up source by source."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from calcpack.figures.beam_axis import BeamAxis, Bearing, beam_row, stacked
from calcpack.figures.figure import Figure
from calcpack.figures.load_stack import Layer, pile
from calcpack.figures.load_strip import PATTERNS, LoadStrip, spoken_loads
from calcpack.sheet.display import System, show
from calcpack.statics.loads import Load

HIGHEST = 13.0  # the largest pile on paper [mm]
LOWEST = 4.0  # a lower one is drawn to a scale of its own [mm]


def load_figure(
    length: float,
    bearings: Sequence[Bearing],
    loads_by_case: Mapping[str, Sequence[Load]],
    mark: str,
    system: System = "SI",
    *,
    fixed: tuple[bool, bool] = (False, False),
    equivalents: Mapping[str, Sequence[tuple[float, float, float]]] | None = None,
    width_mm: float = 120.0,
) -> Figure:
    """The loads on a beam, one strip for each case.

    Parameters
    ----------
    length : float [m]
    bearings : (at [m], kind, mark) in order
        Kind is "column", "wall" or "beam".
    loads_by_case : case -> loads [kN/m], [kN]
        Loads of one source are one share of the pile and look alike in every strip.
    mark : str
        The beam's mark, for the spoken alternative.
    system : "SI" or "US"
    fixed : (bool, bool)
        Whether start and end are held against rotation.
    equivalents : case -> [(from [m], to [m], load [kN/m])]
        Uniform loads to be drawn as dashed lines.
    width_mm : float [mm]

    Returns
    -------
    Figure

    Raises
    ------
    ValueError
        The length is not positive.

    Examples
    --------
    >>> from calcpack.statics.loads import LineLoad, PointLoad
    >>> loads = {"dead": [LineLoad(0.0, 6.0, 4.125, 4.125, "self weight"), PointLoad(2.1, 12.0, "B7")]}
    >>> print(load_figure(6.0, [(0.0, "column", "C1"), (6.0, "beam", "B9")], loads, "B1").alt)
    Loads on B1, dead: self weight 4.13 kN/m; B7 12.0 kN at 2.10 m.
    """
    axis = BeamAxis(length, tuple(bearings), fixed, width_mm)
    piles = {case: pile(length, loads) for case, loads in loads_by_case.items()}
    sources = dict.fromkeys(layer.source for layers in piles.values() for layer in layers)
    patterns = {source: PATTERNS[n % len(PATTERNS)] for n, source in enumerate(sources)}
    even = equivalents or {}
    heights = {case: _height(layers, even.get(case, ())) for case, layers in piles.items()}
    highest = max(heights.values(), default=0.0)
    strips = []
    for case, loads in loads_by_case.items():
        scale, own = _scale(heights[case], highest)
        strip = LoadStrip(axis, scale, patterns, system)
        strip.draw(piles[case], loads, even.get(case, ()))
        title = case.replace("_", " ")
        strips.append((title, _remark(loads, own, system) + strip.remark, strip.drawing))
    sheet = stacked(axis, strips, beam_row(axis, system))
    spoken = "; ".join(
        f"{case.replace('_', ' ')}: {spoken_loads(piles[case], loads, system)}"
        for case, loads in loads_by_case.items()
    )
    return sheet.finish(width_mm, f"Loads on {mark}, {spoken or 'none'}.")


def _height(layers: Sequence[Layer], even: Sequence[tuple[float, float, float]]) -> float:
    """The larger of what a pile and its equivalents reach, up and down together [kN/m]."""
    up = max((float(layer.top.max()) for layer in layers), default=0.0)
    down = min((float(layer.top.min()) for layer in layers), default=0.0)
    return max(up, *(value for *_, value in even), 0.0) - min(down, 0.0)


def _scale(height: float, highest: float) -> tuple[float, bool]:
    """The scale of a strip [mm per kN/m], and whether it is its own."""
    if height <= 0:
        return 1.0, False
    common = HIGHEST / highest
    return (common, False) if height * common >= LOWEST else (LOWEST * 1.5 / height, True)


def _remark(loads: Sequence[Load], own: bool, system: System) -> str:
    total = f"total {show(sum(load.total for load in loads), 'kN', system)}"
    return f"{total}; drawn to a larger scale" if own else total
