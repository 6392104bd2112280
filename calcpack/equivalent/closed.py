"""The equivalent loads of the everyday shapes in closed form, as plain functions of numbers.

A trapezoid rises to its peak over the length a at each end of a span L. With m = 2a/L one family
holds all three shapes: m = 0 is the uniform load, m = 1 the triangle. Under the long side of a
panel with 45° dividing lines a is half the short side, so m is the panel's side ratio, short over long.
"""

from __future__ import annotations

from typing import Final

from calcpack.job.model import EquivalentKind

UNIFORM: Final[dict[EquivalentKind, float]] = {
    "shear": 1 / 2,  # of w L
    "moment": 1 / 8,  # of w L²
    "deflection": 5 / 384,  # of w L⁴, over EI
    "fixed-end moment": 1 / 12,  # of w L²
    "total": 1.0,  # of w L
}


def equivalent_factor(kind: EquivalentKind, side_ratio: float) -> float:
    """Equivalent uniform load over the peak of a symmetric trapezoid.

    Parameters
    ----------
    kind : str
        "shear", "moment", "deflection", "fixed-end moment" or "total".
    side_ratio : float
        m = 2a/L, from 0 (uniform) to 1 (triangle).

    Returns
    -------
    float
        To be multiplied by the peak, q S/2 under a panel.

    Raises
    ------
    ValueError
        The ratio lies outside 0 to 1.

    Source: statics; derived in :mod:`calcpack.equivalent.derive`.

    Examples
    --------
    A panel 4 m by 6 m, equal moment: 1 - (2/3)²/3.

    >>> round(equivalent_factor("moment", 4 / 6), 6)
    0.851852
    """
    m = side_ratio
    if not 0 <= m <= 1:
        raise ValueError(f"the side ratio is {m}, not between 0 and 1")
    if kind == "moment":
        return 1 - m**2 / 3
    if kind == "deflection":
        return (1 - m**2 / 5) ** 2
    if kind == "fixed-end moment":
        return 1 - m**2 / 2 + m**3 / 8
    return 1 - m / 2  # a symmetric load sends half of itself to each end: shear and total agree


def under_panel(
    kind: EquivalentKind, pressure: float, short: float, long: float, *, under_long: bool
) -> float:
    """Equivalent uniform load on the beam under a side of a two-way panel with 45° dividing lines.

    Parameters
    ----------
    kind : str
        As for :func:`equivalent_factor`.
    pressure : float [kPa]
    short, long : float [m]
        The panel's sides.
    under_long : bool
        The beam runs under the long side (a trapezoid), not the short one (a triangle).

    Returns
    -------
    float [kN/m]

    Raises
    ------
    ValueError
        A side is not positive or the short one exceeds the long one.

    Examples
    --------
    >>> round(under_panel("moment", 5.5, 4.5, 6.0, under_long=True), 3)
    10.055
    >>> under_panel("shear", 5.0, 4.0, 6.0, under_long=False)
    5.0
    """
    if not 0 < short <= long:
        raise ValueError(f"sides of {short} m and {long} m are not a short and a long one")
    return pressure * short / 2 * equivalent_factor(kind, short / long if under_long else 1.0)
