"""Scope and theory of the program, in brief, as blocks of the manual."""

from __future__ import annotations

import tomllib
from collections.abc import Sequence
from typing import Any

from calcpack.equivalent import equivalent_factor
from calcpack.job.house import house_folder
from calcpack.notebook.templates import Template

Data = dict[str, Any]


def text(*runs: Any, role: str = "body") -> Data:
    """A paragraph."""
    return {"type": "text", "role": role, "runs": list(runs)}


def heading(words: str) -> Data:
    """A heading inside a section; it is numbered later."""
    return {"type": "heading", "level": 1, "text": words}


def formula(latex: str, alt: str) -> Data:
    """A formula on its own line, with what is said in its stead."""
    return {"type": "formula", "latex": latex, "alt": alt}


def listing(*items: Any) -> Data:
    """A list of short paragraphs."""
    return {"type": "list", "items": list(items)}


def table(columns: Sequence[tuple[str, str]], rows: Sequence[Sequence[Any]], caption: str = "") -> Data:
    """A table: heads with their sides, rows of running text."""
    heads = [{"head": head, "align": align} for head, align in columns]
    return {"type": "table", "caption": caption, "columns": heads, "rows": [list(row) for row in rows]}


def math(latex: str) -> Data:
    """A formula inside a paragraph."""
    return {"math": latex}


def scope(limits: Data) -> list[Data]:
    """What the program is for, and what it is not; ``limits`` leads to the limits of validity."""
    return [
        text(
            "The program works out floor beams of buildings: from a framing plan and its loads to one"
            " calculation sheet per beam. In scope: slabs as they load beams and walls, straight beams on two"
            " or more supports or cantilevering, in concrete and rolled steel, under permanent, imposed,"
            " roof and snow load."
        ),
        text(
            "Out of scope, whatever the template: wind, earthquake, fire, fatigue, dynamics, stability of"
            " the building, foundations, the slab itself, connections, torsion, axial force, supports that"
            " settle. What each template leaves out beyond that stands in ",
            limits,
            " and on every sheet.",
        ),
    ]


def load_transfer(deviations: Data) -> list[Data]:
    """How slabs load beams; ``deviations`` leads to the known deviations."""
    return [
        heading("Loads from slabs"),
        text(
            "Two-way panel: each point of it loads the supported edge that is nearest, so that dividing"
            " lines between edges held alike stand at 45°. The load on a beam at a point of its edge is"
        ),
        formula(r"w(x) = q \, d(x)", "w of x is q times d of x"),
        text(
            "with ", math("q"), " the pressure and ", math("d"), " the depth of what drains there, at right"
            " angles to the edge. Under the short side ", math("S"), " of a rectangle that is a triangle,"
            " under the long side ", math("L"), " a trapezoid, both of height ", math(r"q S / 2"),
            ". On request an edge that is continuous draws from ", math(r"\sqrt{3}"),
            " times as far (60° lines)."
        ),
        text(
            "One-way panel: strips along the span give half their load to either end, a cantilevering strip"
            " all of it to its support. What is applied arrives: load over area, summed over all supports,"
            " is checked on every job, case by case."
        ),
        text(
            "Limits: the rule shares load out by geometry. It is common practice, not the mechanics of"
            " plates, and knows nothing of the stiffness of the beams. How far it is from a code's"
            " coefficients and from the elastic plate stands, measured, in ", deviations, "."
        ),
    ]  # fmt: skip


def short_in_moment(side_ratio: float) -> float:
    """How far a trapezoid's load matched for shear falls short in moment, of short side over long."""
    return 1 - equivalent_factor("shear", side_ratio) / equivalent_factor("moment", side_ratio)


def equivalents() -> list[Data]:
    """Equivalent uniform loads."""
    least, most = (round(100 * short_in_moment(ratio)) for ratio in (0.5, 1.0))
    return [
        heading("Equivalent uniform loads"),
        text(
            "Of each span between two supports, taken alone and simply supported (for the fixed-end moment:"
            " fixed), the uniform load that gives the same largest"
        ),
        formula(
            r"w_{V} = \frac{2 V_{\max}}{L}, \quad w_{M} = \frac{8 M_{\max}}{L^{2}}, \quad"
            r" w_{\delta} = \frac{384 E I \delta_{\max}}{5 L^{4}}, \quad w_{F} = \frac{12 M_{F}}{L^{2}},"
            r" \quad w_{T} = \frac{W}{L}",
            "w shear is 2 V max over L; w moment is 8 M max over L squared; w deflection is 384 E I delta max"
            " over 5 L to the fourth; w fixed-end moment is 12 M over L squared; w total is W over L",
        ),
        text(
            "They are sound for the quantity they are named after, on the span they are made of. For another"
            f" quantity they may fall short: a load matched for shear is {least} to {most} % short in the"
            " moment, for side ratios from 2 to 1. Each sheet therefore compares all five with the actual"
            " load and marks the unsafe ones. Design follows the actual load unless the job says otherwise;"
            " what a beam hands on always does."
        ),
    ]


def statics() -> list[Data]:
    """The analysis of a beam."""
    return [
        heading("Statics"),
        text("The beam is straight and of constant stiffness, plane sections, small deflections:"),
        formula(
            r"E I \, v^{(4)} = w, \quad M = -E I \, v^{(2)}, \quad \frac{d M}{d x} = V,"
            r" \quad \frac{d V}{d x} = -w",
            "E I times the fourth derivative of v is w; M is minus E I times the second; d M over d x is V;"
            " d V over d x is minus w",
        ),
        text(
            "Loads are piecewise linear, so that deflections are polynomials of the fifth degree between the"
            " places where loads or supports begin. Their coefficients follow from statics and from"
            " the conditions at supports; there is no mesh. Extremes are looked for at the roots of"
            " the derivatives, not at sampled places. Shear deformation is neglected."
        ),
        text(
            "Live load lies on each span of each beam or not: by superposition each figure at each place adds"
            " the spans that make it worse. A placement on a beam above comes down as point loads of its"
            " own. Snow lies on all spans at once."
        ),
    ]


def actions() -> list[Data]:
    """Combinations and live loads, with the sources their data names."""
    rows: list[list[Any]] = []
    for kind, folder in (("combinations", "combinations"), ("live loads", "live_loads")):
        for path in sorted((house_folder("shared") / folder).glob("*.toml")):
            data = tomllib.loads(path.read_text(encoding="utf-8"))
            rows.append([kind, str(data.get("name", "factors ψ")), str(data["source"])])
    return [
        heading("Actions and combinations"),
        text(
            "Combinations, factors and imposed loads are data with their sources; a job names the set it"
            " uses, and every sheet lists all combinations and marks the governing one. Permanent load"
            " counts with its larger and, in EN sets, also with its smaller factor, on all of it at once."
        ),
        table((("data", "left"), ("set", "left"), ("source", "left")), rows),
    ]


def clauses(templates: Sequence[Template]) -> list[Data]:
    """Which codes the templates follow."""
    rows = [
        [[{"code": each.settings.name}], each.settings.title, ", ".join(each.settings.codes)]
        for each in templates
        if each.settings.codes
    ]
    return [
        heading("Clauses"),
        text(
            "Strength and serviceability follow the standards below, clause by clause; each line of a sheet"
            " names its clause. Numbers, choice of bars or section, and the lines that are printed are kept"
            " apart and compared with each other by the tests. The equations were recalled from memory: a"
            " reader who answers for a calculation checks them against the code in force."
        ),
        table((("template", "left"), ("for", "left"), ("codes", "left")), rows),
    ]


def theory(templates: Sequence[Template], deviations: Data) -> list[Data]:
    """All of it."""
    return [*load_transfer(deviations), *equivalents(), *statics(), *actions(), *clauses(templates)]


def validity(templates: Sequence[Template]) -> list[Data]:
    """Assumptions and what is not covered, as each template's own data say."""
    found: list[Data] = [
        text(
            "A value outside what a clause covers is refused or marked on the sheet, with the bound and its"
            " source. What the templates assume and leave out is printed here from the data that the sheets"
            " print it from."
        )
    ]
    for each in templates:
        settings = each.settings
        if not settings.assumptions and not settings.not_covered:
            continue
        found += [
            heading(f"{settings.title} ({settings.name})"),
            text({"strong": "Assumed. "}),
            listing(*settings.assumptions),
            text({"strong": "Not covered. "}, "; ".join(settings.not_covered) + "."),
        ]
    return found
