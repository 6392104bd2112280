"""A frame as plain rows, for showing on a terminal or storing."""

from __future__ import annotations

from typing import Any

from calcpack.framing.types import EdgeShare, Frame, FramedBeam, PanelTransfer


def describe(frame: Frame) -> dict[str, Any]:
    """A frame in plain data: what drains where, what stands on what.

    Parameters
    ----------
    frame : Frame

    Returns
    -------
    dict
        ``panels`` (mark, sides [m], ratio long/short, rectangle, area [m2], transfer, direction, reason,
        pressures [kPa], shares), ``beams`` (mark, length [m], spans [m], bearings, carries, panels, totals
        and reactions [kN]), ``order``, ``supports`` and ``applied`` [kN], ``cases``, ``notes``. Lists,
        dicts, strings and numbers only, in a fixed order.
    """
    return {
        "panels": [_panel(frame, transfer) for transfer in frame.panels.values()],
        "beams": [_beam(frame, beam) for beam in frame.beams.values()],
        "order": list(frame.order),
        "supports": {mark: dict(forces) for mark, forces in frame.supports.items()},
        "applied": dict(frame.applied),
        "cases": list(frame.cases),
        "notes": list(frame.notes),
    }


def _panel(frame: Frame, transfer: PanelTransfer) -> dict[str, Any]:
    panel = transfer.panel
    return {
        "mark": panel.mark,
        "sides": list(transfer.sides),
        "ratio": transfer.sides[1] / transfer.sides[0],
        "rectangle": transfer.rectangle,
        "area": transfer.area,
        "transfer": transfer.transfer,
        "direction": None if transfer.direction is None else list(transfer.direction),
        "reason": transfer.reason,
        "pressures": {case: panel.pressure(case) for case in frame.cases},
        "shares": [_share(panel.corner_names, share) for share in transfer.shares],
    }


def _share(names: tuple[str, ...], share: EdgeShare) -> dict[str, Any]:
    return {
        "edge": f"{names[share.edge]}–{names[(share.edge + 1) % len(names)]}",
        "carrier": share.carrier,
        "kind": share.carrier_kind,
        "area": share.area,
        "continuous": share.continuous,
    }


def _beam(frame: Frame, framed: FramedBeam) -> dict[str, Any]:
    return {
        "mark": framed.beam.mark,
        "length": framed.length,
        "spans": list(framed.spans),
        "bearings": [
            {"at": bearing.at, "point": bearing.name, "kind": bearing.kind, "mark": bearing.mark}
            for bearing in framed.bearings
        ],
        "carries": list(dict.fromkeys(carried.mark for carried in framed.carried)),
        "panels": list(framed.panels),
        "totals": {case: sum(load.total for load in framed.loads[case]) for case in frame.cases},
        "reactions": {case: list(framed.reactions[case]) for case in frame.cases},
    }
