"""Area and second moment of area of a section from its dimensions, derived for the audit alone."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any


def section_properties(section: Mapping[str, Any]) -> dict[str, float] | None:
    """Gross properties [m2], [m4]; None for a shape that is not known.

    Parameters
    ----------
    section : mapping
        ``shape`` and ``dimensions`` [m].

    Source: integration over horizontal strips of the half above the centre (rolled), Steiner's theorem.

    Examples
    --------
    >>> found = section_properties({"shape": "rectangle", "dimensions": {"width": 0.3, "depth": 0.5}})
    >>> round(found["area"], 9), round(found["inertia"], 9)
    (0.15, 0.003125)
    """
    sizes = {key: float(each) for key, each in section["dimensions"].items()}
    if section["shape"] in ("rectangle", "tee"):
        wide = sizes.get("flange_width", sizes["width"])
        thick = sizes.get("flange_depth", 0.0) if "flange_width" in sizes else 0.0
        parts = [
            (wide, thick, thick / 2),
            (sizes["width"], sizes["depth"] - thick, (sizes["depth"] + thick) / 2),
        ]
        whole = sum(b * h for b, h, _ in parts)
        middle = sum(b * h * y for b, h, y in parts) / whole
        inertia = sum(b * h**3 / 12 + b * h * (y - middle) ** 2 for b, h, y in parts)
        return {"area": whole, "inertia": inertia}
    if section["shape"] != "rolled":
        return None
    # Upper half: flange, web, and beside the web the two fillets, each a square less a quarter circle.
    r, web = sizes["root_radius"], sizes["web"]
    inner, outer = sizes["depth"] / 2 - sizes["flange"], sizes["depth"] / 2
    # The quarter circle is centred a radius below the flange: moments about that height, then about the axis.
    centre = inner - r
    corner, quarter = r * r, math.pi * r * r / 4
    moved = corner - quarter
    first = r**3 / 2 - r**3 / 3
    second = r**4 / 3 - math.pi * r**4 / 16
    fillet = second + 2 * centre * first + centre**2 * moved
    half = (outer - inner) * sizes["width"] + web * inner + 2 * moved
    inertia = sizes["width"] * (outer**3 - inner**3) / 3 + web * inner**3 / 3 + 2 * fillet
    return {"area": 2 * half, "inertia": 2 * inertia}
