"""Figures of a calculation sheet: plain SVG with a spoken alternative, the same bytes every time."""

from calcpack.figures.bar_layout import Bars, Zone, bar_layout
from calcpack.figures.capacity import Capacity, Governing, capacity_figure
from calcpack.figures.deflected import Deflection, deflected_shape
from calcpack.figures.figure import Figure
from calcpack.figures.free_body import equivalents_figure, free_body
from calcpack.figures.influence import influence_figure
from calcpack.figures.loads import load_figure
from calcpack.figures.panel import panel_drainage
from calcpack.figures.plan import key_plan
from calcpack.figures.response import response_figure
from calcpack.figures.section import section_figure

__all__ = [
    "Bars",
    "Capacity",
    "Deflection",
    "Figure",
    "Governing",
    "Zone",
    "bar_layout",
    "capacity_figure",
    "deflected_shape",
    "equivalents_figure",
    "free_body",
    "influence_figure",
    "key_plan",
    "load_figure",
    "panel_drainage",
    "response_figure",
    "section_figure",
]
