"""The bounds of ACI 318-19 within which these clauses hold, as data.

One table feeds the guard (:func:`guard`), the sheet (:func:`limit_words`) and the caps inside formulas
(:func:`bound`).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from calcpack.job.errors import CalcpackError, Problem
from calcpack.job.units import factor
from calcpack.sheet.display import System, show

CODE = "ACI 318-19"


@dataclass(frozen=True)
class Limit:
    """A bound on a value.

    Parameters
    ----------
    key : str
        What it is a bound of.
    says : str
        In words.
    side : "least" or "most"
    value : float [unit]
    unit : str
    cite : str
        Clause of ACI 318-19.
    does : "refuse" or "cap"
        Whether a value outside is an error, or goes into the formulas as the bound.
    """

    key: str
    says: str
    side: Literal["least", "most"]
    value: float
    unit: str
    cite: str
    does: Literal["refuse", "cap"]

    @property
    def base(self) -> float:
        """The bound in kN and m."""
        return self.value * factor(self.unit)


LIMITS: tuple[Limit, ...] = (
    Limit("f'_c", "specified concrete strength", "least", 2500, "psi", "Table 19.2.1.1", "refuse"),
    Limit("f_y", "yield strength of the bars", "most", 100_000, "psi", "Table 20.2.2.4(a)", "refuse"),
    Limit("f_y", "yield strength of the bars", "least", 40_000, "psi", "20.2.1.3, ASTM A615", "refuse"),
    Limit("root f'_c", "√f′c in shear and torsion", "most", 100, "psi", "22.5.3.1, 22.7.2.1", "cap"),
    Limit("root f'_c", "√f′c in development", "most", 100, "psi", "25.4.1.4", "cap"),
    Limit("f_yt", "yield strength of stirrups in shear", "most", 60_000, "psi", "Table 20.2.2.4(a)", "cap"),
    Limit(
        "f_y least steel",
        "yield strength in the least bending steel",
        "most",
        80_000,
        "psi",
        "9.6.1.2",
        "cap",
    ),
)


def bound(key: str) -> float:
    """The bound that a formula caps a value at [kN, m].

    Raises
    ------
    KeyError
        There is no such cap.

    Examples
    --------
    >>> round(bound("f_yt") / 1000, 1)  # [MPa]
    413.7
    """
    for limit in LIMITS:
        if limit.key == key and limit.does == "cap":
            return limit.base
    raise KeyError(key)


def guard(values: Mapping[str, float], system: System, mark: str = "") -> None:
    """Refuse values for which the clauses do not hold.

    Parameters
    ----------
    values : mapping of key to float [kPa]
        Strengths by the keys of the table: ``f'_c``, ``f_y``.
    system : "SI" or "US"
    mark : str
        Whose values they are.

    Raises
    ------
    CalcpackError
        Every value outside, with the bound and its clause.

    Examples
    --------
    >>> guard({"f'_c": 27579.0, "f_y": 413685.0}, "SI")
    >>> guard({"f'_c": 12000.0}, "SI", "beam B1")
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: beam B1: specified concrete strength 12.0 MPa is below 17.2 MPa; ACI \
318-19 Table 19.2.1.1
    """
    problems = []
    for limit in LIMITS:
        value = values.get(limit.key)
        if value is None or limit.does != "refuse":
            continue
        least = limit.side == "least"
        if value < limit.base * (1 - 1e-6) if least else value > limit.base * (1 + 1e-6):
            found, allowed = (
                show(each / 1000, "MPa", system, shown_in=_psi(system)).replace("\u00a0", " ")
                for each in (value, limit.base)
            )
            problems.append(
                Problem(
                    f"{limit.says} {found} is {'below' if least else 'above'} {allowed}",
                    f"{CODE} {limit.cite}",
                    mark=mark or None,
                )
            )
    if problems:
        raise CalcpackError(*problems)


def _psi(system: System) -> str | None:
    return "psi" if system == "US" else None


def limit_words(system: System) -> str:
    """The table as a sheet says it: what, bound, clause, what happens outside.

    Examples
    --------
    >>> limit_words("US").split("; ")[0]
    'specified concrete strength at least 2500\\xa0psi (Table 19.2.1.1)'
    """
    words: dict[str, list[str]] = {"refuse": [], "cap": []}
    for limit in LIMITS:
        value = show(limit.base / 1000, "MPa", system, exact=system == "US", shown_in=_psi(system))
        words[limit.does].append(f"{limit.says} at {limit.side} {value} ({limit.cite})")
    return f"{'; '.join(words['refuse'])}. Taken as the bound where it is more: {'; '.join(words['cap'])}."
