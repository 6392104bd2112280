"""The values brought in from the job, each a line with its place in the job file."""

from __future__ import annotations

from calcpack.framing.types import PanelTransfer
from calcpack.job.model import Case, Section
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import LETTER, SELF_WEIGHT, Source, Work
from calcpack.sheet import Line
from calcpack.statics import LineLoad, PointLoad


def state_given(work: Work) -> None:
    """Spans, section, panels, beams that come down and loads of the beam's own."""
    work.sheet.section("Given values")
    _spans(work)
    if SELF_WEIGHT in work.sources:
        _section(work)
    for transfer in work.given.panels:
        _panel(work, transfer)
    for source in work.sources.values():
        if source.kind == "beam":
            _carried(work, source)
        elif source.kind == "own":
            _own(work, source)


def _spans(work: Work) -> None:
    beam = f"beam {work.given.mark}"
    for number, (start, end) in enumerate(work.given.spans):
        several = len(work.given.spans) > 1
        symbol = f"ell_{number + 1}" if several else "ell"
        kind = "span" if work.given.between_supports(number) else "overhang"
        words = (
            f"{kind.capitalize()} {number + 1} of the beam" if several else f"{kind.capitalize()} of the beam"
        )
        work.lines["span", number] = work.sheet.take(
            symbol,
            end - start,
            "m",
            says=words,
            origin=f"{beam} line",
            given=_in_full(end - start),
        )


def _in_full(length: float) -> bool:
    """Whether a length is one that somebody wrote down, in metres or in feet, to be shown in full."""
    return any(abs(value - round(value, 3)) < 1e-9 for value in (length, length / 0.3048))


def _section(work: Work) -> None:
    section, material = work.given.section, work.given.material
    assert section is not None
    assert material is not None
    place = f"section {section.key}"
    if section.shape == "rolled":
        work.lines["area"] = work.sheet.take(
            "A",
            section.area * 1e6,
            "mm^2",
            says=f"Area of {section.designation}",
            origin=f"{place} designation",
        )
    else:
        for key, symbol, words in _dimensions(section):
            work.lines[key] = work.sheet.take(
                symbol, section.dimensions[key] * 1000, "mm", says=words, origin=f"{place} {key}"
            )
    work.lines["unit weight"] = work.sheet.take(
        "gamma_0",
        material.unit_weight,
        "kN/m^3",
        says="Unit weight of the beam",
        origin=f"material {material.key} unit_weight",
    )


def _dimensions(section: Section) -> list[tuple[str, str, str]]:
    found = [("width", "b", "Width of the beam"), ("depth", "h", "Depth of the beam")]
    if section.shape == "tee" and not section.effective_flange:
        found += [
            ("flange_width", "b_f", "Width of the flange"),
            ("flange_depth", "h_f", "Depth of the flange"),
        ]
    return found


def _panel(work: Work, transfer: PanelTransfer) -> None:
    panel, sheet = transfer.panel, work.sheet
    index, place = work.sources[panel.mark].index, f"panel {panel.mark}"

    def take(key: str, symbol: str, value: float, unit: str, words: str, origin: str, cite: str = "") -> None:
        work.lines[key, panel.mark] = sheet.take(
            f"{symbol}_{index}",
            value,
            unit,
            says=f"{words} of panel {panel.mark}",
            origin=f"{place} {origin}",
            cite=cite,
            given=unit != "m" or _in_full(value),
        )

    if transfer.rectangle:
        take("short", "S", transfer.sides[0], "m", "Short side", "corners")
        take("long", "L", transfer.sides[1], "m", "Long side", "corners")
    if panel.thickness:
        take("thickness", "t", panel.thickness * 1000, "mm", "Thickness", "thickness")
        take("unit weight", "gamma", panel.unit_weight, "kN/m^3", "Unit weight", "unit_weight")
    if panel.dead:
        take("superimposed", "Delta g", panel.dead, "kPa", "Superimposed dead load", "dead")
    for case in work.study.cases:
        if case != "dead" and panel.pressure(case):
            words = CASE_WORDS[case].capitalize()
            source = panel.use_source if case == "live" else ""
            take(f"pressure {case}", LETTER[case], panel.pressure(case), "kPa", words, case, source)


def _carried(work: Work, source: Source) -> None:
    carried = next(each for each in work.given.carried if each.mark == source.name)
    work.lines["place", source.name] = work.sheet.take(
        f"x_{source.index}",
        carried.at,
        "m",
        says=f"Where beam {source.name} comes down, from this beam's start",
        origin=f"beam {source.name} line",
    )
    for case in work.study.cases:
        force = carried.reactions.get(case, 0.0)
        if work.study.significant(force, "force"):
            work.lines["force", case, source.name] = work.sheet.take(
                f"F_{LETTER[case]}{source.index}",
                force,
                "kN",
                says=f"Reaction of beam {source.name}, {CASE_WORDS[case]}, every span loaded",
                origin=f"sheet {source.name}, reactions",
                given=False,
            )


def _own(work: Work, source: Source) -> None:
    """A load that the job file puts on the beam itself."""
    for case in work.study.cases:
        parts = [load for load in work.given.loads[case] if load.source == source.name]
        if not parts:
            continue
        words = f"{source.name.capitalize()} of the beam, {CASE_WORDS[case]}"
        origin = f"beam {work.given.mark} {source.name}"
        first, last = parts[0], parts[-1]
        if isinstance(first, PointLoad):
            _own_point(work, source, case, first, words, origin)
            continue
        assert isinstance(last, LineLoad)
        letter = f"w_{LETTER[case]}{source.index}"
        key = ("peak", case, source.name)
        if first.first == last.last:
            work.lines[key] = _line_load(work, letter, first.first, words, origin)
        else:
            _line_load(work, f"{letter},a", first.first, f"{words}, at its start", origin)
            _line_load(work, f"{letter},b", last.last, f"{words}, at its end", origin)
        if (first.start, last.end) != (0.0, work.given.length):
            for name, value, end in (("a", first.start, "begins"), ("b", last.end, "ends")):
                work.sheet.take(
                    f"x_{source.index}{name}", value, "m", says=f"Where {source.name} {end}", origin=origin
                )


def _own_point(work: Work, source: Source, case: Case, load: PointLoad, words: str, origin: str) -> None:
    work.lines["force", case, source.name] = work.sheet.take(
        f"F_{LETTER[case]}{source.index}",
        load.force,
        "kN",
        says=words,
        origin=f"{origin} point",
    )
    work.lines["place", source.name] = work.sheet.take(
        f"x_{source.index}", load.at, "m", says=f"Where {source.name} stands", origin=f"{origin} at"
    )


def _line_load(work: Work, symbol: str, value: float, words: str, origin: str) -> Line:
    return work.sheet.take(symbol, value, "kN/m", says=words, origin=f"{origin} line")
