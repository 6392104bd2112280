"""Forces on the flange, AISC 360-22 J10, on a sheet: local yielding and crippling of the web."""

from __future__ import annotations

from calcpack.clauses.aisc360.shape_lines import AISC, ShapeLines, SteelLines
from calcpack.clauses.steel import ISection
from calcpack.sheet import Expression, Line, Sheet, number, sqrt


def state_web_yielding(
    sheet: Sheet,
    shape: ISection,
    from_end: float,
    steel: SteelLines,
    lines: ShapeLines,
    bearing: Line,
) -> Line:
    """Nominal strength against web local yielding, R_n.

    Parameters
    ----------
    shape : ISection
        Tells with `from_end` [m] which equation holds.
    bearing : Line
        The length of bearing.

    Source: AISC 360-22 (J10-2), (J10-3).
    """
    inside = from_end > shape.depth
    spread = (5 if inside else number("2.5")) * lines.fillet
    return sheet.hence(
        "R_n",
        steel.fy * lines.web * (spread + bearing),
        "kN",
        f"Web local yielding, {'farther from the end than' if inside else 'within'} the depth"
        + ("" if inside else " of the end"),
        f"{AISC} (J10-{2 if inside else 3})",
        word="nominal strength under a force on the flange",
    )


def state_web_crippling(
    sheet: Sheet,
    shape: ISection,
    bearing_length: float,
    from_end: float,
    steel: SteelLines,
    lines: ShapeLines,
    bearing: Line,
) -> Line:
    """Nominal strength against web local crippling, R_n, with Q_f = 1.

    Parameters
    ----------
    shape : ISection
        Tells with `bearing_length` and `from_end` [m] which equation holds.
    bearing : Line
        The length of bearing.

    Source: AISC 360-22 (J10-4), (J10-5a), (J10-5b).
    """
    inside, short = from_end >= shape.depth / 2, bearing_length / shape.depth <= 0.2
    along = bearing / lines.depth
    # (J10-4) and (J10-5a) have three times the ratio, (J10-5b) another line through it
    spread: Expression = 3 * along if inside or short else 4 * along - 0.2
    thickness = (lines.web / lines.flange) ** number("1.5")
    strip = (number("0.80") if inside else number("0.40")) * lines.web**2
    return sheet.hence(
        "R_n",
        strip * (1 + spread * thickness) * sqrt(steel.modulus * steel.fy * lines.flange / lines.web),
        "kN",
        "Web local crippling, "
        + ("half the depth from the end or farther" if inside else "within half the depth of the end")
        + ("" if inside else f", bearing {'at most' if short else 'more than'} 0.2 of the depth"),
        f"{AISC} (J10-{4 if inside else '5a' if short else '5b'})",
        word="nominal strength under a force on the flange",
    )
