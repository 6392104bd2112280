"""Moments or shears in what the beam carries, drawn alike on the sheets of all strength templates."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

from calcpack.figures import Capacity, Figure, Governing, capacity_figure
from calcpack.notebook.work import Work

SAMPLES = 120


def strength_figure(
    work: Work,
    quantity: Literal["moment", "shear"],
    capacity: Sequence[Capacity | tuple[float, ...]],
    *,
    width_mm: float = 170.0,
    samples: int = SAMPLES,
    governing: Sequence[Governing | tuple[float, float, float]] | None = None,
    compared: Sequence[tuple[float, float]] = (),
) -> Figure:
    """The envelope of all strength combinations with the resistance over it.

    Parameters
    ----------
    work : Work
    quantity : "moment" or "shear"
    capacity, governing, compared
        As :func:`calcpack.figures.capacity_figure` takes them.
    width_mm : float [mm]
    samples : int
        Places at which the envelope is drawn.
    """
    given, band = work.given, work.study.analysed.band(quantity)
    return capacity_figure(
        given.length,
        work.bearings,
        quantity,
        (band.upper.sample(samples), band.lower.sample(samples)),
        capacity,
        work.study.system,
        governing=governing,
        compared=compared,
        fixed=given.fixed,
        mark=given.mark,
        width_mm=width_mm,
    )
