"""Effective flange width of a tee beam."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.aci318.materials import Checks, Size, cite
from calcpack.sheet import Expression, Line, Sheet, least, measured, total
from calcpack.sheet.evaluation import holds


class Wing(NamedTuple):
    """The slab at one side of a web.

    Parameters
    ----------
    clear : float [m]
        Clear distance to the adjacent web.
    words : str
        What is there: "beam B3".
    """

    clear: float
    words: str


def wing_width(slab: float, clear: float, clear_span: float, *, both: bool) -> float:
    """How far the slab at one side acts with the web [m].

    Parameters
    ----------
    slab : float [m]
        Its thickness.
    clear : float [m]
        Clear distance to the adjacent web.
    clear_span : float [m]
        Of the beam.
    both : bool
        Slab on both sides of the web.

    Source: ACI 318-19, Table 6.3.2.1.

    Examples
    --------
    >>> wing_width(0.15, 3.0, 7.2, both=True), round(wing_width(0.15, 3.0, 7.2, both=False), 3)
    (0.9, 0.6)
    """
    return min(8 * slab, clear / 2, clear_span / 8) if both else min(6 * slab, clear / 2, clear_span / 12)


def state_flange(
    sheet: Sheet, size: Size, wings: tuple[Wing, ...], clear_span: Line, slab: Line, symbol: str = "b_f"
) -> Line:
    """Effective flange width from the slab on each side.

    Parameters
    ----------
    sheet : Sheet
    size : Size
    wings : tuple of Wing
        One a side that has a slab; none gives the web alone.
    clear_span, slab : Line [m], [mm]
    symbol : str
        Of the result.

    Source: ACI 318-19, 6.3.2.1.
    """
    both = len(wings) == 2
    deep, part = (8, 8) if both else (6, 12)
    reach: list[Expression] = []
    for wing in wings:
        reach.append(least(deep * slab, measured(wing.clear, "m") / 2, clear_span / part))
    if both and holds("eq", wings[0].clear, wings[1].clear):
        reach = [2 * reach[0]]
    words = " and ".join(f"{wing.words}" for wing in wings)
    return sheet.hence(
        symbol,
        total(size.web, *reach) if reach else size.web.as_expression(),
        "mm",
        f"Effective flange width; slab on {'both sides' if both else 'one side'}, clear distance to {words}"
        if wings
        else "No slab meets this beam: the web alone",
        cite("Table 6.3.2.1"),
    )


def state_given_flange(sheet: Sheet, size: Size, most: Line | None) -> Checks:
    """A flange width of the job's own against what may be counted.

    Parameters
    ----------
    most : Line or None
        The effective width by 6.3.2.1; None for a beam without slabs (6.3.2.2).

    Source: ACI 318-19, 6.3.2.1 and 6.3.2.2.
    """
    assert size.face is not None
    assert size.flange is not None
    if most is not None:
        line = sheet.require(
            size.face <= most, "The given flange width is no more than what acts", cite("6.3.2.1")
        )
        return (("flange width", line),)
    thick = sheet.require(
        size.flange >= 0.5 * size.web, "Isolated tee: thickness of the flange", cite("6.3.2.2")
    )
    wide = sheet.require(size.face <= 4 * size.web, "Isolated tee: width of the flange", cite("6.3.2.2"))
    return (("flange thickness", thick), ("flange width", wide))
