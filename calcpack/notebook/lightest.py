"""The lightest section of a family that does, for each beam that asks for it.

Beams are taken in the order they are solved, so that a beam's own weight is known before it comes down on
another one. Every section lighter than the one chosen has been tried; the sheet names each with what fails.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from importlib import import_module
from pathlib import Path
from typing import Any, NamedTuple

from calcpack.framing import Frame, FramedBeam, frame
from calcpack.framing.carry import SELF_WEIGHT
from calcpack.job.errors import CalcpackError, Problem
from calcpack.job.model import Job, Section, Tried
from calcpack.notebook.parameters import beam_input
from calcpack.notebook.study import Study
from calcpack.notebook.templates import find_template
from calcpack.statics import LineLoad

# Template -> module with worst_of(study) -> (words, ratio, whole), as in Worst.
CHOOSERS = {
    "steel_beam_aisc360": "calcpack.notebook.sections.steel_aisc360",
    "steel_beam_en1993": "calcpack.notebook.sections.steel_en1993",
}


class Worst(NamedTuple):
    """The check of a beam that is used most, and its ratio of demand to resistance.

    Parameters
    ----------
    name : str
    ratio : float
    whole : bool
        Whether all checks were looked at; a section that fails the first of them need not be.
    """

    name: str
    ratio: float
    whole: bool = True

    @property
    def passes(self) -> bool:
        """Whether all checks hold."""
        return self.ratio <= 1 + 1e-9


Judge = Callable[[Frame, str], Worst]


def lightest(frame_: Frame, mark: str, candidates: Sequence[Section], judge: Judge) -> Section:
    """The first of the candidates with which a beam passes.

    Parameters
    ----------
    frame_ : Frame
        With the beam's section open.
    mark : str
    candidates : sequence of Section
        By weight, lightest first.
    judge : callable
        Frame, mark -> the check that is used most.

    Returns
    -------
    Section
        With the lighter ones in ``tried``. If none passes, the one that comes nearest, of those that were
        looked at whole if there are any; with all others.
    """
    found: list[tuple[Section, Worst]] = []
    for candidate in candidates:
        worst = judge(_tried(frame_, mark, candidate), mark)
        if worst.passes:
            return _chosen(frame_, mark, candidate, found)
        found.append((candidate, worst))
    nearest = min(found, key=lambda each: (not each[1].whole, round(each[1].ratio, 12)))
    others = [each for each in found if each is not nearest]
    return _chosen(frame_, mark, nearest[0], others).model_copy(update={"fits": False})


def _chosen(frame_: Frame, mark: str, section: Section, found: Sequence[tuple[Section, Worst]]) -> Section:
    asked = frame_.beams[mark].beam.section
    assert asked is not None
    tried = tuple(
        Tried(designation=each.designation, fails=worst.name, ratio=worst.ratio) for each, worst in found
    )
    return section.model_copy(update={"key": asked.key, "family": asked.family, "tried": tried})


def _tried(frame_: Frame, mark: str, section: Section) -> Frame:
    """The frame with another section for one beam, its own weight changed; reactions are left as they are."""
    framed = frame_.beams[mark]
    old = framed.beam.section
    assert old is not None
    part = section.area / old.area
    loads = {
        case: tuple(
            replace(load, first=load.first * part, last=load.last * part)
            if isinstance(load, LineLoad) and load.source == SELF_WEIGHT
            else load
            for load in row
        )
        for case, row in framed.loads.items()
    }
    beam = framed.beam.model_copy(update={"section": section})
    return replace(frame_, beams={**frame_.beams, mark: replace(framed, beam=beam, loads=loads)})


def choose_sections(framed: Frame, judge: Judge | None = None) -> Frame:
    """Settle every open section, beam by beam in the order they are solved.

    Parameters
    ----------
    framed : Frame
    judge : callable, optional
        For all beams; left out, each beam's template judges.

    Returns
    -------
    Frame
        Carried down again with the weights of the sections chosen; the same one where none was open.

    Raises
    ------
    CalcpackError
        A beam whose template cannot judge a section.
    """
    problems = [
        problem
        for mark, each in framed.beams.items()
        if judge is None and _is_open(each) and (problem := _refused(framed, mark)) is not None
    ]
    if problems:
        raise CalcpackError(*problems)
    for mark in framed.order:
        section = framed.beams[mark].beam.section
        if section is not None and section.open:
            chosen = lightest(framed, mark, framed.job.candidates[section.family], judge or _by_template)
            framed = frame(_with_section(framed.job, mark, chosen))
    return framed


def _is_open(framed: FramedBeam) -> bool:
    return framed.beam.section is not None and framed.beam.section.open


def _refused(framed: Frame, mark: str) -> Problem | None:
    beam = framed.beams[mark].beam
    if beam.template in CHOOSERS and beam.material is not None:
        return None
    said = "needs a material" if beam.template in CHOOSERS else f"'{beam.template}' does not judge it"
    return Problem(
        f"the lightest section cannot be chosen: the template {said}",
        f"name a section, or use one of {', '.join(CHOOSERS)}",
        beam.place.file,
        beam.place.line,
        f"beam {mark}",
        "section",
    )


def _with_section(job: Job, mark: str, section: Section) -> Job:
    beams = tuple(
        beam.model_copy(update={"section": section}) if beam.mark == mark else beam for beam in job.beams
    )
    return job.model_copy(update={"beams": beams})


def _by_template(framed: Frame, mark: str) -> Worst:
    """What the beam's own template says of it."""
    beam = framed.beams[mark].beam
    template = find_template(beam.template, Path(framed.job.folder))
    try:
        design = template.settle(beam.design, mark, framed.job.data_files)
        given = beam_input(framed, mark, design, template.stamp)
        module: Any = import_module(CHOOSERS[beam.template])
        return Worst(*module.worst_of(Study(given)))
    except CalcpackError as error:
        place = beam.place
        raise CalcpackError(
            *(each.at(file=place.file, line=place.line, mark=f"beam {mark}") for each in error.problems)
        ) from None
