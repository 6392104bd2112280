"""How each panel loads the beam, and what each source amounts to."""

from __future__ import annotations

import math

from calcpack.figures import panel_drainage
from calcpack.figures.panel import DividedPanelData, ShareData
from calcpack.framing.types import EdgeShare, PanelTransfer
from calcpack.job.model import Case
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import LETTER, SELF_WEIGHT, Work, summed
from calcpack.sheet import Expression, Line, measured
from calcpack.sheet.runs import Runs
from calcpack.statics import LineLoad

CLOSE = 1e-9
PRACTICE = "common practice"


def state_transfer(work: Work) -> None:
    """Load transfer, panel by panel, then the beam's own weight."""
    work.sheet.section("Load transfer")
    if not work.given.panels and SELF_WEIGHT not in work.sources:
        work.sheet.text("No panel drains to this beam and it has no weight of its own in this calculation.")
    for transfer in work.given.panels:
        _panel(work, transfer)
    if SELF_WEIGHT in work.sources:
        _self_weight(work)


def _panel(work: Work, transfer: PanelTransfer) -> None:
    sheet, panel, share = work.sheet, transfer.panel, work.share(transfer)
    index = work.sources[panel.mark].index
    with sheet.columns([17, 7]) as column:
        sheet.text([{"strong": f"Panel {panel.mark}"}, f": {transfer.reason}."])
        if transfer.rectangle and transfer.transfer == "two-way":
            work.lines["ratio", panel.mark] = sheet.hence(
                f"m_{index}",
                work.lines["short", panel.mark] / work.lines["long", panel.mark],
                "1",
                says=f"Side ratio of panel {panel.mark}, short over long",
            )
        _pressure(work, transfer)
        depth = _depth(work, transfer, share)
        if depth is not None:
            _peaks(work, transfer, share, depth)
        column()
        figure = panel_drainage(_drawn(transfer), work.study.system, width_mm=54)
        sheet.figure(figure, f"How panel {panel.mark} drains.")
    if depth is None:
        _general(work, transfer, share)


def _peaks(work: Work, transfer: PanelTransfer, share: EdgeShare, depth: Line) -> None:
    """Pressure times depth, case by case."""
    panel, index = transfer.panel, work.sources[transfer.panel.mark].index
    for case in _cases(work, transfer):
        work.lines["peak", case, panel.mark] = work.sheet.hence(
            f"w_{LETTER[case]}{index}",
            work.lines[f"pressure {case}", panel.mark] * depth,
            "kN/m",
            says=f"{CASE_WORDS[case].capitalize()} from panel {panel.mark} on the beam, {_where(share)}",
        )


def _drawn(transfer: PanelTransfer) -> DividedPanelData:
    """The panel as its figure wants it."""
    shares: list[ShareData] = [
        {
            "edge": share.edge,
            "carrier": share.carrier,
            "carrier_kind": share.carrier_kind,
            "region": share.region,
            "area": share.area,
            "continuous": share.continuous,
        }
        for share in transfer.shares
    ]
    return {
        "mark": transfer.panel.mark,
        "corners": transfer.panel.corners,
        "shares": shares,
        "transfer": transfer.transfer,
        "direction": transfer.direction,
    }


def _cases(work: Work, transfer: PanelTransfer) -> list[Case]:
    return [case for case in work.study.cases if transfer.panel.pressure(case)]


def _pressure(work: Work, transfer: PanelTransfer) -> None:
    """The dead load of the slab: its own weight and what lies on it."""
    panel = transfer.panel
    terms: list[Expression | Line] = []
    if ("thickness", panel.mark) in work.lines:
        terms.append(work.lines["thickness", panel.mark] * work.lines["unit weight", panel.mark])
    if ("superimposed", panel.mark) in work.lines:
        terms.append(work.lines["superimposed", panel.mark])
    if terms:
        work.lines["pressure dead", panel.mark] = work.sheet.hence(
            f"g_{work.sources[panel.mark].index}",
            summed(terms),
            "kPa",
            says=f"Dead load on panel {panel.mark}",
        )


def _depth(work: Work, transfer: PanelTransfer, share: EdgeShare) -> Line | None:
    """The largest depth that drains here, where a plain formula gives it; else None."""
    deepest = max(depth for _, depth in share.depth)
    panel, sheet = transfer.panel, work.sheet
    if not transfer.rectangle or _shape_words(share) is None or share.ends:
        return None
    index = work.sources[panel.mark].index
    short, long = transfer.sides
    span = short if transfer.transfer == "two-way" else _strip(transfer)
    key = "short" if math.isclose(span, short, rel_tol=CLOSE) else "long"
    assert math.isclose(span, long if key == "long" else short, rel_tol=CLOSE)
    if math.isclose(deepest, span / 2, rel_tol=CLOSE):
        words = (
            "Depth that drains to the beam at the crown, where dividing lines at 45° meet"
            if transfer.transfer == "two-way"
            else "Depth that drains to the beam: half the span of the slab"
        )
        expression: Expression = work.lines[key, panel.mark] / 2
    elif math.isclose(deepest, span, rel_tol=CLOSE):
        words, expression = (
            "Depth that drains to the beam: all of the slab",
            work.lines[key, panel.mark].as_expression(),
        )
    else:
        return None
    work.lines["depth", panel.mark] = sheet.hence(f"a_{index}", expression, "m", says=words, cite=PRACTICE)
    return work.lines["depth", panel.mark]


def _strip(transfer: PanelTransfer) -> float:
    """Length of the strips of a one-way rectangle along their span."""
    (ax, ay), (bx, by), *_ = transfer.panel.corners
    side = math.hypot(bx - ax, by - ay)
    assert transfer.direction is not None
    along = abs((bx - ax) * transfer.direction[0] + (by - ay) * transfer.direction[1]) / side
    other = transfer.area / side
    return side if along > 0.5 else other


def _shape_words(share: EdgeShare) -> str | None:
    """uniform, a triangle or a trapezoid, symmetric over the share; else None."""
    points = share.depth
    start, end = points[0][0], points[-1][0]
    deepest = max(depth for _, depth in points)
    profile = [((at - start) / (end - start), depth / deepest) for at, depth in points]
    mirrored = [(1 - at, depth) for at, depth in reversed(profile)]
    if len(profile) > 4 or any(
        abs(p - q) > CLOSE
        for one, other in zip(profile, mirrored, strict=True)
        for p, q in zip(one, other, strict=True)
    ):
        return None
    match [round(depth, 9) for _, depth in profile]:
        case [1.0, 1.0]:
            return "uniform"
        case [0.0, 1.0, 0.0]:
            return "the peak of a triangle"
        case [0.0, 1.0, 1.0, 0.0]:
            return "the flat of a trapezoid"
    return None


def _where(share: EdgeShare) -> str:
    return _shape_words(share) or "as tabulated"


def _general(work: Work, transfer: PanelTransfer, share: EdgeShare) -> None:
    """A profile that no plain formula gives: its breakpoints, its area, the place of its resultant."""
    sheet, panel = work.sheet, transfer.panel
    index, cases = work.sources[panel.mark].index, _cases(work, transfer)
    rows: list[list[Runs]] = [
        [
            work.show(at, "m"),
            work.show(depth, "m"),
            *(work.show(panel.pressure(case) * depth, "kN/m") for case in cases),
        ]
        for at, depth in share.depth
    ]
    rows += [
        [
            work.show(at, "m"),
            [work.show(area, "m^2"), " from beyond the edge's end"],
            *(work.show(panel.pressure(case) * area, "kN") for case in cases),
        ]
        for at, area in share.ends
    ]
    sheet.table(
        [
            ("from the beam's start", "right"),
            ("depth that drains", "right"),
            *((CASE_WORDS[c], "right") for c in cases),
        ],
        rows,
        caption=f"Panel {panel.mark} on the beam, straight from row to row; depths at right angles to the "
        "edge, from the dividing lines in the figure.",
    )
    pieces = [
        (at, after, first, last)
        for (at, first), (after, last) in zip(share.depth, share.depth[1:], strict=False)
        if after > at and (first or last)
    ]
    parts: list[Expression | Line] = [
        _half_sum(first, last) * measured(after - at, "m") for at, after, first, last in pieces
    ]
    parts += [measured(area, "m^2") for _, area in share.ends]
    work.lines["area", panel.mark] = sheet.hence(
        f"A_{index}",
        summed(parts),
        "m^2",
        says=f"Area of panel {panel.mark} that drains to the beam, piece by piece between the rows",
    )
    for case in cases:
        work.lines["resultant", case, panel.mark] = sheet.hence(
            f"W_{LETTER[case]}{index}",
            work.lines[f"pressure {case}", panel.mark] * work.lines["area", panel.mark],
            "kN",
            says=f"Resultant of the {CASE_WORDS[case]} from panel {panel.mark}",
        )


def _half_sum(first: float, last: float) -> Expression:
    if first == last:
        return measured(first, "m")
    return (measured(first, "m") + measured(last, "m")) / 2


def _self_weight(work: Work) -> None:
    """Full section times unit weight, no deduction for the slab."""
    if "area" in work.lines:
        area: Expression | Line = work.lines["area"]
    else:
        area = work.lines["width"] * work.lines["depth"]
        if "flange_width" in work.lines:
            flange = (work.lines["flange_width"] - work.lines["width"]) * work.lines["flange_depth"]
            area = area + flange
    work.lines["peak", "dead", SELF_WEIGHT] = work.sheet.hence(
        "w_g0",
        area * work.lines["unit weight"],
        "kN/m",
        says="Self weight of the beam, no deduction for the slab",
    )


def profile_of(work: Work, case: Case, name: str) -> list[LineLoad]:
    """The line loads of one source in a case, from the beam's start."""
    return [load for load in work.given.loads[case] if isinstance(load, LineLoad) and load.source == name]
