"""A finished figure."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Figure:
    """A drawing with what is said in its stead.

    Parameters
    ----------
    svg : str
        One ``<svg>`` element without prolog, fit to stand in a page or in a file of its own;
        text stays text, nothing in it refers outside.
    alt : str
        Spoken alternative, made from the drawing's own numbers.
    width_mm : float [mm]
        Width at which its lettering has its true size.
    """

    svg: str
    alt: str
    width_mm: float

    def _repr_svg_(self) -> str:
        return self.svg
