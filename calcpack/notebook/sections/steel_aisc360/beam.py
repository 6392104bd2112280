"""A beam's study turned into what the design to AISC 360-22 looks at, and what its checks are called."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any, NoReturn

from calcpack.clauses.aisc360.design import (
    BendingCheck,
    Concentrated,
    DeflectionCheck,
    Demands,
    ForceCheck,
    Options,
    SpanOf,
    SteelDesign,
)
from calcpack.clauses.aisc360.strength import Method, Steel
from calcpack.clauses.steel import i_section
from calcpack.job.errors import CalcpackError
from calcpack.notebook.study import CASE_WORDS, Study
from calcpack.notebook.work import Work
from calcpack.statics import PointLoad

METHODS: dict[str, Method] = {"ASCE 7-22 strength": "LRFD", "ASCE 7-22 allowable": "ASD"}
FROM_DIAGRAM = "from the diagram"
THICK = 0.040  # [m]; a grade's fy_thick counts beyond it
CLOSEST = 0.3  # [m]; braced points closer together are a continuous brace
BEARING = {"SI": 0.100, "US": 4 * 0.0254}  # [m], where the job says nothing


def steel_design(study: Study) -> SteelDesign:
    """The beam of a study, worked out to AISC 360-22.

    Parameters
    ----------
    study : Study
        Its section a rolled shape, its material a steel.

    Returns
    -------
    SteelDesign

    Raises
    ------
    CalcpackError
        Another section or material, or combinations that do not say by which method to design.
    """
    section, material = study.given.section, study.given.material
    if section is None or section.shape != "rolled":
        raise CalcpackError(
            "this template is for rolled I-shapes", remedy="name a rolled section", key="section"
        )
    if material is None or material.kind != "steel":
        raise CalcpackError("this template is for steel", remedy="name a steel", key="material")
    shape = i_section(section)
    values = material.values
    strength = values["fy_thick"] if shape.flange > THICK and "fy_thick" in values else values["fy"]
    return SteelDesign(shape, Steel(float(strength), material.modulus), options_of(study), demands_of(study))


def options_of(study: Study) -> Options:
    """What the job sets, with the template's own choices where it sets nothing."""
    design: dict[str, Any] = study.given.design
    limits: dict[str, float] = design["deflection_limits"]
    factor, every, bearing = design["Cb"], design["unbraced_length"], design["bearing_length"]
    if every is not None and every < CLOSEST:
        _refuse("unbraced_length", "braced points stand too close", 'write braced = "continuous"')
    if every is not None and design["braced"] != "by length":
        _refuse("unbraced_length", f"the beam is braced {design['braced']}", "leave one of the two out")
    if bearing is not None and bearing <= 0:
        _refuse("bearing_length", "a bearing has a length", "give more than zero")
    return Options(
        method=method_of(study),
        unbraced_length=every,
        braced=design["braced"],
        bottom_with_top=design["bottom_flange"] == "braced with the top",
        diagram_factor=None if factor == FROM_DIAGRAM else float(factor),
        bearing_length=bearing or BEARING[study.system],
        seated=design["forces"] == "on the flanges",
        live_limit=limits["live"],
        total_limit=limits["total"],
    )


def _refuse(key: str, message: str, remedy: str) -> NoReturn:
    raise CalcpackError(message, remedy=remedy, key=f"design.{key}")


def method_of(study: Study) -> Method:
    """LRFD or ASD: by the key, else by the set of combinations."""
    named: Method | None = study.given.design["method"]
    actions = study.given.actions.name
    if named is None and actions not in METHODS:
        raise CalcpackError(
            f"the combinations '{actions}' do not say whether to design by LRFD or by ASD",
            remedy='set method = "LRFD" or method = "ASD"',
            key="design.method",
        )
    return named or METHODS[actions]


def demands_of(study: Study) -> Demands:
    """Spans, moments and shears, and the forces that come in through a flange."""
    given = study.given
    spans = tuple(
        SpanOf(number, start, end, given.between_supports(number))
        for number, (start, end) in enumerate(given.spans)
    )
    return Demands(
        study.analysed, spans, (*_reactions(study), *_loads(study)), tuple(each.at for each in given.carried)
    )


def _reactions(study: Study) -> tuple[Concentrated, ...]:
    """The largest upward reaction of each support the beam sits on; one that holds its end is no seat."""
    given, strength = study.given, study.analysed.of_limit("strength")
    held = {at for at, fixed in zip((0.0, given.length), given.fixed, strict=True) if fixed}
    return tuple(
        Concentrated(f"{bearing.kind} {bearing.mark}", bearing.at, force, True)
        for number, bearing in enumerate(given.bearings)
        if bearing.at not in held and (force := max(each.reactions_max[number] for each in strength)) > 0
    )


def _loads(study: Study) -> tuple[Concentrated, ...]:
    """The largest downward force at each place where point loads stand, over the strength combinations.

    A load over a support goes straight into it and is left to the check of the reaction.
    """
    given, analysed = study.given, study.analysed
    slack = 1e-6 * given.length
    places: dict[float, dict[str, None]] = {}
    for each in study.actual:
        for load in each.loads:
            if not isinstance(load, PointLoad) or any(abs(load.at - b.at) <= slack for b in given.bearings):
                continue
            place = next((at for at in places if abs(at - load.at) <= slack), load.at)
            places.setdefault(place, {})[load.source] = None
    found = []
    for at, sources in sorted(places.items()):
        force = max(
            sum(
                max(part, 0.0) if each.case in ("live", "roof_live") else part
                for each in study.actual
                for part in (
                    combination.factors.get(each.case, 0.0)
                    * sum(
                        load.force
                        for load in each.loads
                        if isinstance(load, PointLoad) and abs(load.at - at) <= slack
                    ),
                )
            )
            for combination in (each.combination for each in analysed.of_limit("strength"))
        )
        if force > 0:
            found.append(Concentrated(" and ".join(sources), at, force, False))
    return tuple(found)


@dataclass
class SteelBeam:
    """A steel beam on its way onto a sheet: the design in figures, and the lines that later ones draw on."""

    design: SteelDesign
    basis: dict[str, Any] = field(default_factory=dict)

    @property
    def bending(self) -> tuple[BendingCheck, ...]:
        """The worst segment of each span and sense, along the beam."""
        worst: dict[tuple[int, bool], BendingCheck] = {}
        for check in self.design.bending:
            key = (check.segment.span.number, check.sagging)
            if key not in worst or round(check.ratio, 12) > round(worst[key].ratio, 12):
                worst[key] = check
        return tuple(worst.values())

    @property
    def governing(self) -> BendingCheck:
        """The segment whose bending strength is used most."""
        return max(self.bending, key=lambda each: round(each.ratio, 12))

    @property
    def web(self) -> tuple[ForceCheck, ...]:
        """The worst force for local yielding of the web, and the worst for crippling."""
        worst: dict[str, ForceCheck] = {}
        for check in self.design.web:
            if check.limit not in worst or round(check.ratio, 12) > round(worst[check.limit].ratio, 12):
                worst[check.limit] = check
        return tuple(worst.values())

    @property
    def deflection(self) -> tuple[DeflectionCheck, ...]:
        """The worst span under variable loads alone, and the worst under the service combinations."""
        worst: dict[str, DeflectionCheck] = {}
        for check in self.design.deflection:
            if check.kind not in worst or round(check.ratio, 12) > round(worst[check.kind].ratio, 12):
                worst[check.kind] = check
        return tuple(worst.values())


def bending_name(work: Work, check: BendingCheck) -> str:
    """What a bending check is called."""
    return f"bending, {span_words(work, check.segment.span.number)}" + (
        "" if check.segment.flange == "both" else ", sagging" if check.sagging else ", hogging"
    )


def span_words(work: Work, span: int) -> str:
    """A span as a check names it."""
    kind = "span" if work.given.between_supports(span) else "overhang"
    return f"{kind} {span + 1}" if len(work.given.spans) > 1 else kind


def force_name(work: Work, check: ForceCheck) -> str:
    """What brings a force: the support's or the load's name."""
    name = check.force.name
    return work.sources[name].words if not check.force.support and name in work.sources else name


def deflection_name(work: Work, check: DeflectionCheck) -> str:
    """What a deflection check is called."""
    under = CASE_WORDS[check.under] if check.kind == "live" else "total"  # type: ignore[index]
    return f"deflection, {under}, {span_words(work, check.span.number)}"
