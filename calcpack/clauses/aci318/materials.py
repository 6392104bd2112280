"""Materials, section and cover of a beam to ACI 318-19, as lines."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.aci318 import strength
from calcpack.clauses.aci318.arrangement import COVERS, least_cover
from calcpack.clauses.aci318.limits import CODE, bound
from calcpack.clauses.aci318.strength import INCH, PSI
from calcpack.job.model import Material
from calcpack.job.units import factor
from calcpack.sheet import Expression, Line, Sheet, greatest, in_unit, least, number_in, quantity, sqrt

Checks = tuple[tuple[str, Line], ...]


def cite(clause: str) -> str:
    """A clause with its standard.

    Examples
    --------
    >>> cite("22.2.2.1")
    'ACI 318-19 22.2.2.1'
    """
    return f"{CODE} {clause}"


class Materials(NamedTuple):
    """Material values, each a line."""

    fc: Line
    lightweight: Line
    ec: Line
    beta: Line
    fy: Line
    fyt: Line
    es: Line
    yield_strain: Line


def state_materials(sheet: Sheet, material: Material) -> Materials:
    """Concrete and bars with what the standard derives from them.

    Parameters
    ----------
    sheet : Sheet
    material : Material
        Concrete with ``fc``, ``fy`` and ``Es`` [kPa].

    Source: ACI 318-19, 19.2.4.3, Table 22.2.2.4.3, 20.2.2, 21.2.2.1.

    Examples
    --------
    >>> sheet = Sheet("B1")
    >>> sheet.section("Materials")
    >>> values = {"fc": 34473.79, "fy": 413685.4, "Es": 199947962.0}
    >>> concrete = Material(key="c", kind="concrete", modulus=27.8e6, unit_weight=23.6, values=values)
    >>> found = state_materials(sheet, concrete)
    >>> round(found.beta.value, 3), found.fyt.shown
    (0.8, '413.7\\xa0MPa')
    """
    place = f"material {material.key}"
    values = {name: float(material.values[name]) / 1000 for name in ("fc", "fy", "Es")}
    fc = sheet.take(
        "f'_c", values["fc"], "MPa", "Specified concrete strength", f"{place} grade", us="psi"
    )  # fmt: skip
    lightweight = sheet.take(
        "lambda", 1.0, "1", "Normalweight concrete", f"{place} unit_weight", cite("19.2.4.3")
    )
    ec = sheet.take(
        "E_c", material.modulus / 1000, "MPa", "Modulus of the concrete", place, cite("19.2.2.1"), given=False
    )
    fy = sheet.take("f_y", values["fy"], "MPa", "Yield strength of the bars", f"{place} bars")
    es = sheet.take("E_s", values["Es"], "MPa", "Modulus of the bars", f"{place} bars", cite("20.2.2.2"))
    block: Expression = 0.85 - 0.05 * (number_in(fc, "psi") - 4000) / 1000
    if bare(fc) <= 4000 * PSI:
        block = least(block, 0.85)
    elif bare(fc) >= 8000 * PSI:
        block = greatest(block, 0.65)
    beta = sheet.hence(
        "beta_1",
        block,
        "1",
        "Depth of the stress block over that to the neutral axis (strength in psi)",
        cite("Table 22.2.2.4.3"),
    )
    fyt = sheet.hence(
        "f_yt",
        least(fy, quantity(round(bound("f_yt") / PSI), "psi")),
        "MPa",
        "Yield strength of the stirrups, of the same grade, that shear may count on",
        cite("Table 20.2.2.4(a)"),
    )
    strain = sheet.hence(
        "epsilon_ty", fy / es, "1", "Yield strain", cite("21.2.2.1"), word="yield strain of the bars"
    )
    return Materials(fc, lightweight, ec, beta, fy, fyt, es, strain)


def bare(line: Line) -> float:
    """A line's value in kN and m."""
    return line.value * factor(line.unit)


def root(fc: Line) -> Expression:
    """√f'c, f'c in psi, as shear, torsion and development take it: its bound is written where it counts.

    Source: ACI 318-19, 22.5.3.1, 22.7.2.1, 25.4.1.4.
    """
    plain, most = sqrt(number_in(fc, "psi")), bound("root f'_c")
    return plain if strength.root(bare(fc)) < most else least(plain, round(most / PSI))


def shared(length: Expression, parts: int) -> Expression:
    """A length divided by a count, which is not written where it is one."""
    return length if parts == 1 else length / parts


def psi(term: Expression) -> Expression:
    """A bare number as a stress in psi."""
    return in_unit(term, "psi")


class Size(NamedTuple):
    """The section's sizes, each a line; ``face`` and ``flange`` of a tee only."""

    web: Line
    height: Line
    cover: Line
    stirrup: Line
    face: Line | None = None
    flange: Line | None = None


def state_cover(sheet: Sheet, cover: Line, exposure: str, stirrup: float, main: float) -> Checks:
    """The cover over the stirrups is no less than the least one.

    Parameters
    ----------
    sheet : Sheet
    cover : Line [mm]
    exposure : str
        A key of ``COVERS``.
    stirrup, main : float [m]
        Diameters.

    Source: ACI 318-19, Table 20.5.1.3.1.

    Examples
    --------
    >>> sheet = Sheet("B1")
    >>> sheet.section("Cover")
    >>> cover = sheet.take("c_c", 30, "mm", "Cover", "beam B1 design.cover")
    >>> [(name, line.passes) for name, line in state_cover(sheet, cover, "inside", 0.01, 0.02)]
    [('cover', False)]
    """
    inches = round(least_cover(exposure, stirrup, main) / INCH, 4)
    line = sheet.require(
        cover >= quantity(inches, "in"),
        f"Cover over the stirrups, {COVERS[exposure]}",
        cite("Table 20.5.1.3.1"),
    )
    return (("cover", line),)


def state_not_deep(sheet: Sheet, size: Size, clear: Line) -> Checks:
    """The beam is no deep beam, to which these clauses do not apply: its clear span exceeds four depths.

    Source: ACI 318-19, 9.9.1.1.
    """
    line = sheet.require(clear > 4 * size.height, "The beam is not a deep one", cite("9.9.1.1"))
    return (("no deep beam", line),)
