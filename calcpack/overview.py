"""What the command line prints: the job as understood, progress, and the closing summary."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from rich.console import Console
from rich.table import Table
from rich.text import Text

from calcpack.actions import Occupancy, occupancy_tables
from calcpack.figures import key_plan
from calcpack.files import write_file
from calcpack.framing import Frame, FramedBeam, PanelTransfer
from calcpack.job.model import Case
from calcpack.notebook.parameters import plan_of
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.templates import Parameter, find_template, template_names
from calcpack.sheet import display_unit, show, shown_number

if TYPE_CHECKING:
    from calcpack.build import BuiltJob


def _table(title: str, columns: Sequence[tuple[str, str]], rows: Sequence[Sequence[str]]) -> Table:
    """A plain table; every cell is shown as it is, never read as markup."""
    table = Table(title=Text(title, style="bold"), title_justify="left", box=None, pad_edge=False)
    for head, align in columns:
        table.add_column(Text(head), justify=align, overflow="fold")  # type: ignore[arg-type]
    for row in rows:
        table.add_row(*(Text(cell) for cell in row))
    return table


def print_overview(frame: Frame, console: Console) -> None:
    """Print panels, beams, the solving order and what reaches the supports."""
    header, system = frame.job.job, frame.job.job.units
    console.print(Text(f"Job {header.number}: {header.title}, revision {header.revision}"))
    tables = [
        _panels(frame),
        _beams(frame),
        _supports(frame),
    ]
    for table in tables:
        console.print()
        console.print(table)
        if table is tables[0]:
            for mark, transfer in frame.panels.items():
                console.print(Text(f"{mark}: {transfer.reason}."))
    console.print()
    console.print(Text(f"Solved in the order {', '.join(frame.order)}."))
    applied = ", ".join(
        f"{CASE_WORDS[case]} {show(frame.applied[case], 'kN', system)}" for case in frame.cases
    )
    console.print(Text(f"Applied in all: {applied}; the supports carry the same."))
    for note in frame.notes:
        console.print(Text(f"Note: {note}"))


def _panels(frame: Frame) -> Table:
    system, cases = frame.job.job.units, frame.cases
    length, pressure = display_unit("m", system)[0], display_unit("kPa", system)[0]
    rows = [
        [
            mark,
            " × ".join(shown_number(side, "m", system) for side in transfer.sides),
            f"{transfer.sides[1] / transfer.sides[0]:.3g}",
            _way(transfer),
            *(shown_number(transfer.panel.pressure(case), "kPa", system) for case in cases),
            ", ".join(dict.fromkeys(share.carrier for share in transfer.shares)),
        ]
        for mark, transfer in frame.panels.items()
    ]
    columns = [
        ("panel", "left"),
        (f"short × long [{length}]", "right"),
        ("ratio", "right"),
        ("transfer", "left"),
        *((f"{case.replace('_', ' ')} [{pressure}]", "right") for case in cases),
        ("drains to", "left"),
    ]
    return _table("Panels", columns, rows)


def _way(transfer: PanelTransfer) -> str:
    if transfer.direction is None:
        return transfer.transfer
    x, y = (abs(part) for part in transfer.direction)
    along = "along x" if y < 1e-9 else "along y" if x < 1e-9 else "askew"
    return f"{transfer.transfer}, {along}"


def _beams(frame: Frame) -> Table:
    system = frame.job.job.units
    length, force = display_unit("m", system)[0], display_unit("kN", system)[0]
    rows = [
        [
            mark,
            " + ".join(shown_number(span, "m", system) for span in beam.spans),
            ", ".join(f"{bearing.kind} {bearing.mark}" for bearing in beam.bearings),
            ", ".join([*beam.panels, *dict.fromkeys(carried.mark for carried in beam.carried)]) or "–",
            *(shown_number(_total(beam, case), "kN", system) for case in frame.cases),
            beam.beam.template,
        ]
        for mark, beam in frame.beams.items()
    ]
    columns = [
        ("beam", "left"),
        (f"spans [{length}]", "right"),
        ("stands on", "left"),
        ("takes from", "left"),
        *((f"{case.replace('_', ' ')} [{force}]", "right") for case in frame.cases),
        ("template", "left"),
    ]
    return _table("Beams, with all their load", columns, rows)


def _total(beam: FramedBeam, case: Case) -> float:
    return sum(load.total for load in beam.loads.get(case, ()))


def _supports(frame: Frame) -> Table:
    system = frame.job.job.units
    force = display_unit("kN", system)[0]
    rows = [
        [mark, *(shown_number(forces.get(case, 0.0), "kN", system) for case in frame.cases)]
        for mark, forces in frame.supports.items()
    ]
    columns = [
        ("mark", "left"),
        *((f"{case.replace('_', ' ')} [{force}]", "right") for case in frame.cases),
    ]
    return _table("Columns and walls, unfactored", columns, rows)


def write_plan(frame: Frame, path: Path) -> None:
    """Draw the whole plan with every beam labelled into an SVG file."""
    figure = key_plan(plan_of(frame), None, frame.job.job.units, width_mm=180)
    write_file(path, figure.svg.encode("utf-8"))


def print_summary(built: BuiltJob, console: Console) -> None:
    """Print a line a beam, and where the pack is."""
    system = built.frame.job.job.units
    rows = []
    for record in built.records:
        results = record["results"]
        envelope, deflection = results["envelope"], results["deflection"]
        moment = max(envelope["moment_max"], envelope["moment_min"], key=abs)
        rows.append(
            [
                record["mark"],
                show(moment, "kN*m", system),
                show(envelope["shear_max"], "kN", system),
                show(deflection["total_mm"], "mm", system) if deflection else "–",
                built.files.get(record["mark"], ""),
            ]
        )
    columns = [
        ("beam", "left"),
        ("governing moment", "right"),
        ("shear", "right"),
        ("deflection", "right"),
        ("file", "left"),
    ]
    console.print(_table(f"{len(rows)} sheets in {built.folder}", columns, rows))
    for name in built.kept:
        console.print(Text(f"Kept aside, since it was changed by hand: {name}"))
    for note in built.frame.notes:
        console.print(Text(f"Note: {note}"))


def print_unmet(built: BuiltJob, console: Console) -> bool:
    """Print a plain list of requirements that are not satisfied; say whether there are any."""
    system = built.frame.job.job.units
    unmet = [
        (record["mark"], check)
        for record in built.records
        for check in record["results"]["checks"]
        if not check["passes"]
    ]
    for mark, check in unmet:
        demand, capacity = (show(check[side], check["unit"], system) for side in ("demand", "capacity"))
        console.print(Text(f"not satisfied: beam {mark}: {check['name']}: {demand} against {capacity}"))
    return bool(unmet)


def print_templates(console: Console) -> None:
    """Print the shipped templates with the keys a job may set."""
    for name in template_names():
        settings = find_template(name, Path()).settings
        console.print(Text(f"{name} {settings.version}: {settings.says}"))
        for key, parameter in settings.parameters.items():
            for path, leaf in _leaves(f"design.{key}", parameter):
                default = "" if leaf.default is None else f" (default {leaf.default})"
                console.print(Text(f"    {path}: {leaf.says}{default}"))


def print_loads(console: Console, own: Sequence[Occupancy] = ()) -> None:
    """Print the imposed loads by occupancy, one table a standard, each value as the standard writes it.

    Parameters
    ----------
    console : Console
    own : sequence of Occupancy
        A job's own, which come first and stand in for ours of the same name.
    """
    if own:
        console.print(_uses("the job's own", own, "source"))
        console.print(Text("They go before the following ones.\n"))
    for table in occupancy_tables():
        console.print(_uses(table.name, table.beside(own), "clause"))
        console.print(Text(f"{table.source}. Reduced for area: {table.reduction}.\n"))


def _uses(title: str, uses: Sequence[Occupancy], cited: str) -> Table:
    rows = [
        [use.key, use.says, use.written[0], use.written[1] or "–", use.reduced or "yes", use.cite]
        for use in uses
    ]
    heads = [(head, "left") for head in ("use", "says", "uniform", "point", "reduced for area", cited)]
    return _table(title, heads, rows)


def _leaves(path: str, parameter: Parameter) -> Iterator[tuple[str, Parameter]]:
    if parameter.type != "table":
        yield path, parameter
        return
    for key, inner in parameter.keys.items():
        yield from _leaves(f"{path}.{key}", inner)
