"""Cover, bars side by side, layers."""

from __future__ import annotations

from calcpack.clauses.bars import Bar
from calcpack.clauses.en1992.model import Bars
from calcpack.clauses.en1992.national import National

LEAST_CLEAR = 0.020  # [m], 8.2(2)
LEAST_COVER = 0.010  # [m], 4.4.1.2(2)P


def clear_distance(diameter: float, aggregate: float, national: National) -> float:
    """Least clear distance between bars, across and between layers [m].

    Parameters
    ----------
    diameter : float [m]
    aggregate : float [m]
        Largest size of aggregate.

    Source: EN 1992-1-1:2004, 8.2(2).

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> clear_distance(0.016, 0.016, national()), clear_distance(0.025, 0.016, national())
    (0.021, 0.025)
    """
    return max(national["bar_k1"] * diameter, aggregate + national["bar_k2"], LEAST_CLEAR)


def nominal_cover(diameter: float, exposure: str, national: National) -> float:
    """Nominal cover that a bar asks for [m].

    Parameters
    ----------
    diameter : float [m]
        For bond, c_min,b.
    exposure : str
        "XC1" and so on.

    Source: EN 1992-1-1:2004, 4.4.1.1(2)P and 4.4.1.2, Tables 4.2 and 4.4N, structural class S4.

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> nominal_cover(0.008, "XC3", national())
    0.035
    """
    return max(diameter, national.cover[exposure], LEAST_COVER) + national["delta_c_dev"]


def fitting(bar: Bar, width: float, inset: float, clear: float) -> int:
    """How many bars lie side by side in a layer.

    Parameters
    ----------
    bar : Bar
    width : float [m]
        Of the web.
    inset : float [m]
        Cover and stirrup.
    clear : float [m]
        Least clear distance.

    Source: geometry, with the clear distance of EN 1992-1-1:2004, 8.2(2).

    Examples
    --------
    >>> from calcpack.clauses.bars import bar
    >>> fitting(bar("20 mm"), 0.3, 0.043, 0.021)
    5
    """
    return int(round((width - 2 * inset + clear) / (bar.diameter + clear), 6))


def arranged(bar: Bar, count: int, width: float, inset: float, clear: float) -> Bars:
    """Bars in one layer where they fit, else in two, the outer one full.

    Parameters
    ----------
    bar : Bar
    count : int
    width : float [m]
        Of the web.
    inset : float [m]
        Cover and stirrup.
    clear : float [m]
        Least clear distance.

    Returns
    -------
    Bars
        In two even layers where two cannot hold them either.

    Source: EN 1992-1-1:2004, 8.2(3): bars of two layers lie above each other.

    Examples
    --------
    >>> from calcpack.clauses.bars import bar
    >>> [arranged(bar("20 mm"), count, 0.3, 0.043, 0.021).layers for count in (6, 3)]
    [(4, 2), (3,)]
    """
    fit = fitting(bar, width, inset, clear)
    pitch = bar.diameter + clear
    if count <= fit:
        return Bars(bar, (count,), inset, pitch)
    second = max(count - fit, 2)
    if second > fit or count - second < second:
        second = count // 2
    return Bars(bar, (count - second, second), inset, pitch)


def clear_between(bars: Bars, width: float) -> float:
    """Clear distance across in the outermost layer [m].

    Parameters
    ----------
    bars : Bars
    width : float [m]
        Of the web.

    Source: geometry, for EN 1992-1-1:2004, 8.2(2).

    Examples
    --------
    >>> from calcpack.clauses.bars import bar
    >>> bars = arranged(bar("20 mm"), 3, 0.3, 0.043, 0.021)
    >>> round(clear_between(bars, 0.3) * 1e3, 6)  # [mm]
    77.0
    """
    number = bars.layers[0]
    if number == 1:
        return width - 2 * bars.inset - bars.bar.diameter
    return (width - 2 * bars.inset - number * bars.bar.diameter) / (number - 1)
