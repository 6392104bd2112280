"""The floor area whose live load a beam carries, panel by panel and beam by beam.

Of a panel it is the share that drains to the beam. Of a beam that comes down on it, it is that beam's own
area in proportion to its reaction here: reaction over all the live load on it. What may not be reduced
does not count: a panel that the rule exempts, loads given on a beam, a beam with such loads.
"""

from __future__ import annotations

import math
from typing import Literal

from calcpack.actions.reduction import Rule, exemption
from calcpack.framing.types import Frame
from calcpack.job.model import Frozen


class Tributary(Frozen):
    """One source of live load on a beam, with the area that counts."""

    source: str  # the panel's or the beam's mark
    kind: Literal["panel", "beam"]
    area: float  # [m2] that counts; 0 where the load is not reduced
    pressure: float = 0.0  # live load of a panel [kPa]
    whole: float = 0.0  # of a beam: its own tributary area [m2]
    reaction: float = 0.0  # of a beam: its live reaction here [kN], every span loaded
    total: float = 0.0  # of a beam: all live load on it [kN]
    exempt: str = ""  # why it is not reduced


def tributaries(frame: Frame, mark: str, rule: Rule) -> tuple[Tributary, ...]:
    """The sources of live load on a beam, panels first.

    Parameters
    ----------
    frame : Frame
    mark : str
        The beam's.
    rule : str
        Which live loads may be reduced follows from it.

    Returns
    -------
    tuple of Tributary
    """
    category = frame.job.basis.occupancy
    framed = frame.beams[mark]
    found: list[Tributary] = []
    for name in framed.panels:
        transfer = frame.panels[name]
        pressure = transfer.panel.live
        area = math.fsum(share.area for share in transfer.shares if share.carrier == mark)
        if not pressure or not area:
            continue
        exempt = transfer.panel.unreduced or exemption(rule, pressure, category)
        found.append(
            Tributary(
                source=name, kind="panel", area=0.0 if exempt else area, pressure=pressure, exempt=exempt
            )
        )
    arriving: dict[str, float] = {}
    for carried in framed.carried:
        arriving[carried.mark] = arriving.get(carried.mark, 0.0) + carried.reactions.get("live", 0.0)
    for other, reaction in arriving.items():
        total = math.fsum(load.total for load in frame.beams[other].loads.get("live", ()))
        if not total or not reaction:
            continue
        whole, exempt = _whole(frame, other, rule)
        # Uplift at one end of a continuous beam makes other reactions more than its load: no more than all.
        part = min(max(reaction / total, 0.0), 1.0)
        found.append(
            Tributary(
                source=other,
                kind="beam",
                area=whole * part,
                whole=whole,
                reaction=reaction,
                total=total,
                exempt=exempt,
            )
        )
    return tuple(found)


def _whole(frame: Frame, mark: str, rule: Rule) -> tuple[float, str]:
    """All of a carried beam's area, or why its load is not reduced."""
    parts = tributaries(frame, mark, rule)
    named = {part.source for part in parts}
    for part in parts:
        if part.exempt:
            return 0.0, f"{part.kind} {part.source}: {part.exempt}" if part.kind == "panel" else part.exempt
    if any(load.source not in named for load in frame.beams[mark].loads.get("live", ())):
        return 0.0, f"beam {mark} has live load of its own"
    return math.fsum(part.area for part in parts), ""
