"""The basis of design of a whole job, as sections of the pack."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from pathlib import Path
from typing import Any

from calcpack.actions import CombinationSet
from calcpack.framing import Frame
from calcpack.job.model import Material, Section
from calcpack.notebook.study import CASE_WORDS
from calcpack.sheet import Sheet, show

PackSection = tuple[str, list[dict[str, Any]]]


def basis_sections(frame: Frame, actions: CombinationSet, notes: Iterable[str]) -> list[PackSection]:
    """Titles and blocks: codes, materials, loads, combinations, load path, and the input as read.

    Parameters
    ----------
    frame : Frame
    actions : CombinationSet
        For all load cases of the job.
    notes : iterable of str
        Assumptions and limits of the templates used.

    Returns
    -------
    list of (title, blocks)
    """
    parts: list[tuple[str, Callable[[Sheet], None]]] = [
        ("Codes and assumptions", lambda sheet: _codes(sheet, frame, actions, notes)),
        ("Materials and sections", lambda sheet: _members(sheet, frame)),
        ("Loads on the panels", lambda sheet: _loads(sheet, frame)),
        ("Combinations", lambda sheet: _combinations(sheet, actions)),
        ("Load path", lambda sheet: _load_path(sheet, frame)),
    ]
    found: list[PackSection] = []
    for title, write in parts:
        sheet = Sheet("basis", frame.job.job.units)
        write(sheet)
        if sheet.blocks:
            found.append((title, sheet.blocks))
    return found


def input_sections(frame: Frame) -> list[PackSection]:
    """The job file and its tables as they were read, line by line."""
    job = frame.job
    found: list[PackSection] = []
    for name in job.files:
        path = Path(job.folder) / name
        if path.suffix.lower() not in (".toml", ".csv"):
            continue
        text = path.read_text(encoding="utf-8-sig")
        found.append(
            (
                f"Input: {name}",
                [
                    {"type": "text", "runs": f"SHA-256 {job.files[name]}", "role": "note"},
                    {"type": "plain", "text": text, "numbered": True},
                ],
            )
        )
    return found


def _codes(sheet: Sheet, frame: Frame, actions: CombinationSet, notes: Iterable[str]) -> None:
    basis = frame.job.basis
    items = [
        f"Actions and their combinations: {actions.name}. {actions.source}.",
        *(
            f"{CASE_WORDS[case].capitalize()}: category {psi['category']} ({psi['use']}), "
            f"ψ0 = {psi['psi0']:g}, ψ1 = {psi['psi1']:g}, ψ2 = {psi['psi2']:g}. {actions.psi_source}."
            for case, psi in actions.psi.items()
        ),
        f"A panel held on all four sides works one way from a side ratio (long over short) of "
        f"{basis.one_way_ratio:g} on; dividing lines at {_lines(basis.dividing_lines)}.",
        f"Equivalent uniform load carried forward: equal {basis.equivalent}, unless a beam chooses its own; "
        f"design with the {'actual' if basis.design_loads == 'actual' else 'equivalent'} loads.",
        "Live and roof live load are placed span by span where they are worst; snow lies on all spans.",
        f"Live-load reduction: {basis.live_load_reduction}.",
        "Self weight of the beams: full section, no deduction for the slab."
        if basis.beam_self_weight
        else "Self weight of the beams: left out.",
        f"Checking: {frame.job.submission.check_level} (EN 1990, Annex B).",
        *notes,
    ]
    sheet.items(items)


def _lines(dividing_lines: str) -> str:
    return "45°" if dividing_lines == "45" else "45°, at 60° to a continuous edge where it meets another"


def _members(sheet: Sheet, frame: Frame) -> None:
    system = frame.job.job.units
    sections: dict[str, Section] = {}
    materials: dict[str, Material] = {}
    users: dict[str, list[str]] = {}
    for mark, framed in frame.beams.items():
        if framed.beam.section is not None:
            # the lightest of a family may be another one for each beam
            own = f"{framed.beam.section.key} {framed.beam.section.designation}"
            sections.setdefault(own, framed.beam.section)
            users.setdefault(own, []).append(mark)
        if framed.beam.material is not None:
            materials.setdefault(framed.beam.material.key, framed.beam.material)
    if sections:
        rows = [
            [
                section.key,
                _size(section, system),
                show(section.area * 1e6, "mm^2", system),
                show(section.inertia * 1e12, "mm^4", system),
                ", ".join(users[own]),
                section.source,
            ]
            for own, section in sections.items()
        ]
        sheet.table(
            ["section", "size", ("area", "right"), ("second moment", "right"), "beams", "source"], rows
        )
    if materials:
        rows = [
            [
                key,
                material.grade or "as given",
                show(material.modulus / 1000, "MPa", system),
                show(material.unit_weight, "kN/m^3", system),
                material.source,
            ]
            for key, material in materials.items()
        ]
        sheet.table(["material", "grade", ("modulus", "right"), ("unit weight", "right"), "source"], rows)


def _size(section: Section, system: Any) -> str:
    if section.designation:
        return section.designation
    return " × ".join(show(section.dimensions[key] * 1000, "mm", system, True) for key in ("width", "depth"))


def _loads(sheet: Sheet, frame: Frame) -> None:
    system = frame.job.job.units
    others = [case for case in frame.cases if case != "dead"]
    rows = [
        [
            mark,
            f"{show(transfer.sides[0], 'm', system)} × {show(transfer.sides[1], 'm', system)}",
            show(transfer.panel.thickness * 1000, "mm", system, True) if transfer.panel.thickness else "–",
            show(transfer.panel.thickness * transfer.panel.unit_weight, "kPa", system),
            show(transfer.panel.dead, "kPa", system, True),
            *(show(transfer.panel.pressure(case), "kPa", system, True) for case in others),
            transfer.reason,
        ]
        for mark, transfer in frame.panels.items()
    ]
    if rows:
        sheet.table(
            [
                "panel",
                ("short × long", "right"),
                ("thickness", "right"),
                ("slab", "right"),
                ("superimposed", "right"),
                *((CASE_WORDS[case], "right") for case in others),
                "transfer",
            ],
            rows,
        )


def _combinations(sheet: Sheet, actions: CombinationSet) -> None:
    rows = [
        [
            each.name,
            f"service, {each.situation}" if each.situation else each.limit,
            each.cite,
        ]
        for each in actions.combinations
    ]
    sheet.table(
        ["combination", "limit state", "clause"], rows, caption="Each beam is analysed under all of these."
    )


def _load_path(sheet: Sheet, frame: Frame) -> None:
    rows = []
    for mark in frame.order:
        framed = frame.beams[mark]
        above = [*framed.panels, *dict.fromkeys(carried.mark for carried in framed.carried)]
        below = [f"{bearing.kind} {bearing.mark} at {bearing.name}" for bearing in framed.bearings]
        rows.append([mark, ", ".join(above) or "own loads", "; ".join(below)])
    if rows:
        sheet.table(
            ["beam", "takes from", "hands to"],
            rows,
            caption="In the order solved: a beam comes after those that stand on it.",
        )
    for note in frame.notes:
        sheet.text(note, role="note")
