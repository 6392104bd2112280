"""Lines: strengths of materials, effective flange."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import NamedTuple

from calcpack.clauses.en1992.flange import FlangeSide
from calcpack.clauses.en1992.model import Strengths
from calcpack.clauses.en1992.national import RECOMMENDED, National
from calcpack.sheet import Expression, Line, Sheet, least, number, number_in, total


class StrengthLines(NamedTuple):
    """Lines with the strengths."""

    fck: Line
    fctm: Line
    fctk: Line
    ecm: Line
    fyk: Line
    es: Line
    gamma_c: Line
    fcd: Line
    fyd: Line
    fctd: Line
    lam: Line
    eta: Line
    strain: Line
    limit: Line  # of x/d


def write_strengths(
    sheet: Sheet,
    strength: Strengths,
    national: National,
    origin: str,
    changed: Mapping[str, str] = {},
) -> StrengthLines:
    """Characteristic values, partial factors, design values, factors of the stress block, limit of x/d.

    Parameters
    ----------
    sheet : Sheet
    strength : Strengths
    national : National
    origin : str
        Where the material stands: ``material c30``.
    changed : mapping of parameter to origin
        For those that the job gives itself.

    Returns
    -------
    StrengthLines
        Stresses in MPa.

    Source: EN 1992-1-1:2004, 3.1.6, 3.1.7, 3.2.7, 5.5(4), Table 3.1.

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> sheet = Sheet("B1")
    >>> sheet.section("Strengths")
    >>> lines = write_strengths(sheet, C30, national(), "material c30")
    >>> print(lines.fcd.shown, lines.fyd.shown, lines.limit.shown)
    20.0\u00a0MPa 434.8\u00a0MPa 0.448
    """

    def material(symbol: str, value: float, says: str, clause: str, word: str = "") -> Line:
        cite = clause
        return sheet.take(symbol, value / 1e3, "MPa", says, origin, cite, word=word)

    def parameter(key: str, symbol: str, says: str, word: str = "") -> Line:
        place = changed.get(key) or origin_of(national, key)
        return sheet.take(symbol, national[key], "1", says, place, national.values[key].clause, word=word)

    fck = material("f_ck", strength.fck, "Concrete, characteristic strength", "Table 3.1")
    fctm = material("f_ctm", strength.fctm, "Concrete, mean tensile strength", "Table 3.1")
    fctk = material(
        "f_ctk,0,05",
        strength.fctk,
        "Concrete, 5 % fractile of the tensile strength",
        "Table 3.1",
        "tensile strength of concrete, 5 % fractile",
    )
    ecm = material("E_cm", strength.ecm, "Concrete, secant modulus", "Table 3.1")
    strain = sheet.take(
        "epsilon_cu3",
        strength.eps_cu,
        "1",
        "Concrete, ultimate strain of the block",
        origin,
        "Table 3.1",
        word="ultimate strain of concrete",
    )
    fyk = material("f_yk", strength.fyk, "Bars, characteristic yield strength", "3.2.2")
    es = material("E_s", strength.es, "Bars, modulus of elasticity", "3.2.7(4)")
    gamma_c = parameter("gamma_C", "gamma_C", "Partial factor for concrete")
    gamma_s = parameter("gamma_S", "gamma_S", "Partial factor for reinforcement")
    alpha_cc = parameter("alpha_cc", "alpha_cc", "Long-term factor on the compressive strength")
    alpha_ct = parameter(
        "alpha_ct", "alpha_ct", "Long-term factor on the tensile strength", "long-term factor"
    )
    fcd = sheet.hence(
        "f_cd", alpha_cc * fck / gamma_c, "MPa", "Concrete, design strength", "3.1.6(1)P (3.15)"
    )
    fctd = sheet.hence(
        "f_ctd",
        alpha_ct * fctk / gamma_c,
        "MPa",
        "Concrete, design tensile strength",
        "3.1.6(2)P (3.16)",
        word="tensile strength of concrete, design",
    )
    fyd = sheet.hence("f_yd", fyk / gamma_s, "MPa", "Bars, design strength", "3.2.7(2)")
    lam, eta = _block(sheet, strength, fck)
    limit = _limit(sheet, strength, national, origin, changed)
    return StrengthLines(fck, fctm, fctk, ecm, fyk, es, gamma_c, fcd, fyd, fctd, lam, eta, strain, limit)


def origin_of(national: National, key: str) -> str:
    """Where a national parameter comes from, as a line says it.

    Source: EN 1992-1-1:2004, foreword, national annex.
    """
    if national.file and key in national.own:
        return f"{national.file} values.{key}"
    return RECOMMENDED if national.name.startswith(RECOMMENDED) or national.file else national.name


def _block(sheet: Sheet, strength: Strengths, fck: Line) -> tuple[Line, Line]:
    words = {
        "lambda": "depth of the stress block over x",
        "eta": "stress of the block over the design strength",
    }
    if strength.fck <= 50e3:
        return (
            sheet.take(
                "lambda",
                0.8,
                "1",
                "Depth of the stress block over that of the neutral axis",
                "up to C50/60",
                "3.1.7(3) (3.19)",
                word=words["lambda"],
            ),
            sheet.take(
                "eta",
                1.0,
                "1",
                "Stress of the block over the design strength",
                "up to C50/60",
                "3.1.7(3) (3.21)",
                word=words["eta"],
            ),
        )
    over = number_in(fck, "MPa") - 50
    lam = sheet.hence(
        "lambda",
        0.8 - over / 400,
        "1",
        "Depth of the stress block over that of the neutral axis (strengths in MPa)",
        "3.1.7(3) (3.20)",
        word=words["lambda"],
    )
    eta = sheet.hence(
        "eta",
        1 - over / 200,
        "1",
        "Stress of the block over the design strength (strengths in MPa)",
        "3.1.7(3) (3.22)",
        word=words["eta"],
    )
    return lam, eta


def _limit(
    sheet: Sheet, strength: Strengths, national: National, origin: str, changed: Mapping[str, str]
) -> Line:
    low = strength.fck <= 50e3
    first, second = ("delta_k1", "delta_k2") if low else ("delta_k3", "delta_k4")
    strain = sheet.take(
        "epsilon_cu2",
        strength.eps_cu2,
        "1",
        "Concrete, ultimate strain of the parabola and rectangle",
        origin,
        "Table 3.1",
        word="ultimate strain of concrete",
    )
    k = number(national[second]) * (0.6 + number(0.0014) / strain)
    return sheet.hence(
        "xi_lim",
        (1 - number(national[first])) / k,
        "1",
        "Largest x/d: linear analysis, moments not redistributed, δ = 1",
        f"5.5(4) ({'5.10a' if low else '5.10b'})",
        word="largest x/d",
    )


def write_flange(
    sheet: Sheet,
    symbol: str,
    words: str,
    web: Line,
    lengths: Sequence[tuple[float, Line]],
    sides: tuple[FlangeSide, FlangeSide],
    origin: str,
    known: dict[str, Line] | None = None,
) -> Line:
    """Effective width of a flange.

    Parameters
    ----------
    symbol : str
        Index of the lines' symbols: "sag", "hog".
    words : str
        Where: "span 1".
    web : Line
    lengths : sequence of (factor, span)
        l_0 is the sum of factor times span.
    sides : (FlangeSide, FlangeSide)
    origin : str
        Where b_i comes from.
    known : dict
        Lines of b_i that are written already; new ones are added.

    Returns
    -------
    Line
        b_eff in mm.

    Source: EN 1992-1-1:2004, 5.3.2.1.
    """
    cite = "5.3.2.1"
    parts = [number(share) * span if share != 1 else span.as_expression() for share, span in lengths]
    zero = sheet.hence(
        f"l_0,{symbol}",
        parts[0] if len(parts) == 1 else parts[0] + parts[1],
        "m",
        f"Between points of zero moment, {words}",
        f"{cite}(2)",
        word="length between zero moments",
    )
    effective: list[Expression] = []
    for name, side in zip(("l", "r"), sides, strict=True):
        if side.reach <= 0:
            continue
        key = f"{name} {side.reach:.9g}"
        if known is None or key not in known:
            reach = sheet.take(
                f"b_{name},{symbol}",
                side.reach * 1e3,
                "mm",
                f"Slab on the {'left' if name == 'l' else 'right'}: half the clear distance, or the overhang",
                origin,
                given=False,
                word="reach of the slab from the web",
            )
            if known is not None:
                known[key] = reach
        else:
            reach = known[key]
        effective.append(least(0.2 * reach + 0.1 * zero, 0.2 * zero, reach))
    return sheet.hence(
        f"b_eff,{symbol}",
        total(web, *effective) if effective else web.as_expression(),
        "mm",
        f"Effective flange, {words}",
        f"{cite}(3) (5.7)",
    )


def millimetres(value: float) -> float:
    """A length [m] in mm, without what binary fractions leave over.

    Parameters
    ----------
    value : float [m]

    Examples
    --------
    >>> millimetres(0.035), millimetres(0.0003)
    (35.0, 0.3)
    """
    return round(value * 1e3, 9)
