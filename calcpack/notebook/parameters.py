"""All that a notebook needs to know of its beam, as data that travels inside it."""

from __future__ import annotations

import json
from itertools import pairwise
from typing import Any, cast

from pydantic import ValidationError

import calcpack
from calcpack.actions import CombinationSet, combination_set
from calcpack.figures.plan_data import PlanData
from calcpack.framing.types import (
    Bearing,
    CarriedReaction,
    Frame,
    FramedBeam,
    PanelTransfer,
    Placement,
)
from calcpack.job.errors import CalcpackError
from calcpack.job.model import (
    BarSize,
    Basis,
    Case,
    EquivalentKind,
    Frozen,
    Header,
    Material,
    Psi,
    Section,
    Submission,
)
from calcpack.notebook.templates import TemplateStamp
from calcpack.notebook.tributary import Tributary, tributaries
from calcpack.statics import Load

PROGRAM = f"calcpack {calcpack.__version__}"


class BeamInput(Frozen):
    """One beam of a framed job, complete: the parameters of its notebook."""

    format: int = 1
    mark: str
    header: Header
    submission: Submission
    basis: Basis
    actions: CombinationSet
    length: float
    bearings: tuple[Bearing, ...]
    point_names: tuple[str, ...]
    points: tuple[tuple[float, float], ...]
    fixed: tuple[bool, bool]
    free: tuple[bool, bool]
    equivalent: EquivalentKind
    design_loads: str
    section: Section | None
    material: Material | None
    loads: dict[Case, tuple[Load, ...]]
    carried: tuple[CarriedReaction, ...]
    placements: tuple[Placement, ...]
    reactions: dict[Case, tuple[float, ...]]
    panels: tuple[PanelTransfer, ...]
    bars: tuple[BarSize, ...] = ()  # the job's own
    live_psi: Psi | None = None  # the job's own
    tributary: tuple[Tributary, ...] = ()  # where the job asks for a live-load reduction
    plan: dict[str, Any]
    design: dict[str, Any]
    template: TemplateStamp
    job_file: str
    input: str
    program: str

    @property
    def spans(self) -> tuple[tuple[float, float], ...]:
        """Where each span starts and ends [m], overhangs included."""
        ends = sorted({0.0, self.length, *(bearing.at for bearing in self.bearings)})
        return tuple(pairwise(ends))

    @property
    def drawn_plan(self) -> PlanData:
        """The plan as figures take it."""
        return cast(PlanData, self.plan)

    def between_supports(self, span: int) -> bool:
        """Whether a span has a support at both of its ends."""
        stands_at = {bearing.at for bearing in self.bearings}
        return all(end in stands_at for end in self.spans[span])


def beam_input(frame: Frame, mark: str, design: dict[str, Any], template: TemplateStamp) -> BeamInput:
    """Gather what the notebook of one beam needs.

    Parameters
    ----------
    frame : Frame
    mark : str
    design : dict
        The beam's design keys as its template settled them.
    template : TemplateStamp

    Returns
    -------
    BeamInput
    """
    job, framed = frame.job, frame.beams[mark]
    beam = framed.beam
    # a beam that carries nothing at all still has a dead load, of nothing
    cases: tuple[Case, ...] = tuple(case for case, loads in framed.loads.items() if loads) or ("dead",)
    return BeamInput(
        mark=mark,
        header=job.job,
        submission=job.submission,
        basis=job.basis,
        actions=combination_set(
            job.basis.actions, cases, occupancy=job.basis.occupancy, own=job.combinations, live_psi=job.psi
        ),
        length=framed.length,
        bearings=framed.bearings,
        point_names=beam.point_names,
        points=beam.points,
        fixed=(beam.fixed_start, beam.fixed_end),
        free=(beam.free_start, beam.free_end),
        equivalent=beam.equivalent,
        design_loads=beam.design_loads,
        section=beam.section,
        material=beam.material,
        loads={case: framed.loads.get(case, ()) for case in cases},
        carried=framed.carried,
        placements=framed.placements,
        reactions={case: framed.reactions.get(case, (0.0,) * len(framed.bearings)) for case in cases},
        panels=tuple(frame.panels[panel] for panel in framed.panels),
        bars=job.bars,
        live_psi=job.psi,
        tributary=()
        if job.basis.live_load_reduction == "none"
        else tributaries(frame, mark, job.basis.live_load_reduction),
        plan=dict(plan_of(frame, framed)),
        design=design,
        template=template,
        job_file=job.file,
        input=job.digest,
        program=PROGRAM,
    )


def plan_of(frame: Frame, framed: FramedBeam | None = None) -> PlanData:
    """The framing plan as plain data for drawing, with the regions that drain to one beam."""
    job = frame.job
    return {
        "grid": {"x": dict(job.grid_x), "y": dict(job.grid_y)},
        "panels": [
            {
                "mark": mark,
                "corners": [list(corner) for corner in transfer.panel.corners],
                "note": "",
                "transfer": transfer.transfer,
                "direction": list(transfer.direction) if transfer.direction else None,
            }
            for mark, transfer in frame.panels.items()
        ],
        "beams": [
            {
                "mark": mark,
                "points": [list(point) for point in other.beam.points],
                "free": [other.beam.free_start, other.beam.free_end],
            }
            for mark, other in frame.beams.items()
        ],
        "columns": [{"mark": column.mark, "at": list(column.at)} for column in job.columns],
        "walls": [{"mark": wall.mark, "line": [list(point) for point in wall.line]} for wall in job.walls],
        "regions": [
            {"panel": panel, "outline": [list(point) for point in share.region]}
            for panel in (framed.panels if framed else ())
            for share in frame.panels[panel].shares
            if framed and share.carrier == framed.beam.mark and len(share.region) > 2
        ],
    }


def to_text(parameters: BeamInput) -> str:
    """JSON text of a notebook's parameters, the same for the same input."""
    return json.dumps(parameters.model_dump(mode="json"), ensure_ascii=False, separators=(", ", ": "))


def from_text(text: str) -> BeamInput:
    """Read a notebook's parameters back.

    Raises
    ------
    CalcpackError
        The text is not such parameters; the first offending key is named.
    """
    try:
        return BeamInput.model_validate_json(text)
    except ValidationError as error:
        first = error.errors()[0]
        key = ".".join(str(part) for part in first["loc"])
        raise CalcpackError(
            f"the notebook's parameters cannot be read: {first['msg'].lower()}", key=key or None
        ) from None
