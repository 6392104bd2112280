"""The bars at the two faces of a concrete beam to ACI 318-19: the job's, or chosen ones."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from calcpack.clauses.aci318.arrangement import Cage, Group, arranged
from calcpack.clauses.aci318.choice import MAIN, MOST_BARS, Chosen, Strengths, Task, choose_bars
from calcpack.clauses.aci318.detailing import End, available, is_small
from calcpack.clauses.aci318.strength import INCH, Bending, Block, development_length
from calcpack.clauses.bars import Bar
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Section
from calcpack.notebook.sections.concrete_aci318.actions import Actions
from calcpack.notebook.work import Work
from calcpack.statics import Extreme

HANGERS = {"US": "#4", "SI": "12 mm"}
FRESH = 12 * INCH  # concrete below top bars from which on these are "top bars", Table 25.4.2.5


class Face(NamedTuple):
    """The bars at one face with what bends them.

    Parameters
    ----------
    group : Group
    task : Task or None
        None where no moment puts this face in tension: the bars are hangers.
    extreme : Extreme or None
        The moment, as an amount, and its place.
    state : Bending or None
        At nominal strength.
    pressed : Group or None
        The bars at the other face, where they are counted.
    """

    group: Group
    task: Task | None
    extreme: Extreme | None
    state: Bending | None
    pressed: Group | None


def is_high(group: Group) -> bool:
    """Whether bars at the top have more than 12 in of fresh concrete below them."""
    return group.outermost - group.bar.diameter / 2 > FRESH


def read_bar(work: Work, size: str, key: str) -> Bar:
    """The bar of a size that the job names, or an error that says where."""
    try:
        return work.stock.bar(size)
    except CalcpackError as error:
        raise CalcpackError(
            *(problem.at(mark=f"beam {work.given.mark}", key=key) for problem in error.problems)
        ) from None


def settle_faces(
    work: Work,
    actions: Actions,
    section: Section,
    strengths: Strengths,
    cage: Cage,
    flange: float | None,
    how: list[str],
) -> tuple[Face, Face, bool]:
    """Bars at the bottom and at the top; whether the top ones run through."""
    width = cage.width
    sagging, hogging = actions.sagging, actions.hogging
    face_width = flange if flange is not None else width
    depth = section.dimensions.get("flange_depth", 0.0)
    ends = actions.ends(cage.cover)

    def developed(group: Group, state: Bending) -> bool:
        length = _development(group, strengths, top=False)
        return all(length <= available(end, state.nominal, group.depth, group.bar.diameter) for end in ends)

    overhangs = [each.length for each in actions.stretches if each.overhang]

    def fits_overhang(group: Group, state: Bending) -> bool:
        length = _development(group, strengths, top=is_high(group))
        return all(length <= overhang - cage.cover for overhang in overhangs)

    determinate = len(work.given.bearings) + sum(work.given.fixed) == 2
    wide = min(face_width, 2 * width) if determinate else width
    below = sagging and Task(
        sagging.value, Block(face_width, width, depth), width, cage, strengths, developed
    )
    above = hogging and Task(hogging.value, Block(width, width), wide, cage, strengths, fits_overhang)
    first = _settled(work, "bottom", below, cage, how)
    second = _settled(work, "top", above, cage, how)
    keys = work.given.design
    bottom, top = first.group, second.group
    free = {name: not (keys[name]["count"] or keys[name]["size"]) for name in ("bottom", "top")}
    if second.pressed is not None and free["bottom"] and second.pressed.area > bottom.area:
        bottom = second.pressed
        how.append(f"bottom bars: {bottom.words}, as the support section needs them in compression")
    if first.pressed is not None and free["top"] and first.pressed.area > top.area:
        top = first.pressed
        how.append(f"top bars: {top.words}, as the span section needs them in compression")
    lower, upper = _face(below, bottom, top, sagging), _face(above, top, bottom, hogging)
    spans = [each for each in actions.stretches if not each.overhang]
    through = lower.pressed is not None
    if upper.task is not None and not through:
        through = top.count <= 2 or any(
            actions.hogging_reach(each, True) + actions.hogging_reach(each, False) >= 0.7 * each.length
            for each in spans
        )
    return lower, upper, through


def _development(group: Group, strengths: Strengths, *, top: bool) -> float:
    """Development length of a group's bars [m]."""
    edge = group.heights[0]
    side = group.spacing / 2 if group.layers[0] > 1 else edge
    return development_length(
        group.bar.diameter,
        strengths.fc,
        strengths.fy,
        min(edge, side) / group.bar.diameter,
        top=top,
        small=is_small(group),
    )


def _face(task: Task | None, group: Group, other: Group, extreme: Extreme | None) -> Face:
    """A face settled: the other face's bars are counted where the section is not strong enough alone."""
    if task is None:
        return Face(group, None, None, None, None)
    alone = task.state(group)
    if task.strong(alone):
        return Face(group, task, extreme, alone, None)
    both = task.state(group, other)
    if both.stress_c > 0 and (task.strong(both) or both.design > alone.design):
        return Face(group, task, extreme, both, other)
    return Face(group, task, extreme, alone, None)


def _settled(work: Work, name: str, task: Task | None, cage: Cage, how: list[str]) -> Chosen:
    """The bars of one face: the job's, or chosen ones."""
    keys, system = work.given.design[name], work.study.system
    count, size = keys["count"], keys["size"]
    sizes = work.stock.among(MAIN[system])
    if size:
        sizes = (read_bar(work, size, f"design.{name}.size").name,)
    if count and size:
        return Chosen(arranged(count, work.stock.bar(sizes[0]), cage), None, True)
    if task is None:
        words = "hangers for the stirrups, no moment puts this face in tension"
        group = arranged(count or 2, work.stock.bar(sizes[0] if size else HANGERS[system]), cage)
        how.append(f"{name} bars: {group.words}, {words} (common practice)")
        return Chosen(group, None, True)
    try:
        chosen = choose_bars(task, sizes, count or 2, count or MOST_BARS, work.stock)
    except ValueError:
        raise CalcpackError(
            "no bars fit into the web with the clear distances of 25.2.1",
            remedy="make the section wider",
            mark=f"beam {work.given.mark}",
            key=f"design.{name}",
        ) from None
    words = (
        "the fewest bars that satisfy strength, strain, least steel, clear distances, crack control"
        + (" and development" if name == "bottom" else "")
        + ", one layer before two"
        if chosen.satisfied
        else "nothing satisfies every clause; the strongest ductile bars stand here"
    )
    how.append(f"{name} bars: {chosen.group.words}; {words}")
    return chosen


def worst_end(ends: Sequence[End], nominal: float, group: Group, *, inflection: bool) -> End | None:
    """The end with the least development length at hand, of one kind."""

    def at_hand(end: End) -> float:
        return available(end, nominal, group.depth, group.bar.diameter)

    fitting = [end for end in ends if (end.kind == "inflection") == inflection and end.shear > 0]
    return min(fitting, key=at_hand, default=None)
